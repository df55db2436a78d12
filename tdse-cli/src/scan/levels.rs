//! The states that a run in two dimensions records: the lowest ones, and those it starts from.

use tdse_core::problem::{InitialState, Parity, PlaneLabel, Symmetry, Term};
use tdse_core::stationary::Level;

/// Words for a state.
pub fn state_name(label: PlaneLabel) -> String {
    let number = label.number;
    let parity = |p: Parity| if p == Parity::Even { "even" } else { "odd" };
    match label.symmetry {
        Symmetry::Angular(m) => format!("m = {m}, number {number}"),
        Symmetry::Mirror([x, y]) => format!("{} in x, {} in y, number {number}", parity(x), parity(y)),
    }
}

/// Levels that are looked at after the field; where an atom has fewer, NaN stands for them.
pub const LEVELS: usize = 10;

/// States of an atom in the order of its list, and the initial state counted in that list.
#[derive(Clone, Debug, PartialEq)]
pub struct Listed {
    /// The states: those of lowest energy first.
    pub labels: Vec<PlaneLabel>,
    /// How many of them are the lowest.
    pub lowest: usize,
    /// The initial state.
    pub initial: InitialState,
}

/// Lists those of `levels` that fit into `half` a box, bohr, to e⁻¹⁰ at its edge, and the states that `initial` counts in `named`.
pub fn listed(
    levels: &[(PlaneLabel, Level)],
    half: f64,
    named: &[PlaneLabel],
    initial: &InitialState,
) -> Listed {
    let fitting = levels.iter().take_while(|(_, level)| level.reach < 2.0 * half);
    let mut labels: Vec<PlaneLabel> = fitting.map(|(label, _)| *label).collect();
    let lowest = labels.len();
    let missing: Vec<PlaneLabel> = named.iter().copied().filter(|label| !labels.contains(label)).collect();
    labels.extend(missing);
    let place = |number: usize| labels.iter().position(|label| *label == named[number]).expect("listed");
    let initial = match initial {
        InitialState::Single(number) => InitialState::Single(place(*number)),
        InitialState::Superposition(terms) => InitialState::Superposition(
            terms.iter().map(|term| Term { number: place(term.number), ..*term }).collect(),
        ),
    };
    Listed { labels, lowest, initial }
}
