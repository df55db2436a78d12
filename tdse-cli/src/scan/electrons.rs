//! The way to the electron spectra of a request: one for all points that leave it open, chosen by cost.

use tdse_core::choose::{
    Choice, Electrons, Energies, Knob, Reason, Verdict, Wish, choose_for_electrons, electron_work,
};
use tdse_core::problem::ElectronMethod;
use tdse_core::spectrum::EnergyAxis;

/// How many times the work the projection may cost, which is exact where an absorber reflects the slowest electrons.
const WORTH: f64 = 2.0;

const METHODS: [ElectronMethod; 2] = [ElectronMethod::ScatteringStates, ElectronMethod::OutgoingAmplitude];

/// What one point asks for.
#[derive(Clone, Copy, Debug)]
pub struct Asked<'a> {
    /// What is asked of the numerics.
    pub wish: Wish<'a>,
    /// What is asked of the electrons.
    pub electrons: Electrons,
    /// The method, where the user fixed it.
    pub pinned: Option<ElectronMethod>,
}

/// A method with the numerics it is used with.
#[derive(Clone, Debug)]
struct Way {
    choice: Choice,
    method: ElectronMethod,
    /// Estimated; infinite where it cannot be done.
    work: f64,
}

/// The energies of an axis.
pub fn energies(axis: EnergyAxis) -> Energies {
    Energies { count: axis.points, largest: axis.step * axis.points.saturating_sub(1).max(1) as f64 }
}

/// Method and numerics of every point.
pub fn choose_all(asked: &[Asked]) -> Vec<(ElectronMethod, Choice)> {
    let ways: Vec<Vec<Way>> = asked
        .iter()
        .map(|one| match (one.pinned, one.wish.facts.dimensions) {
            (Some(method), _) => vec![way(one, method)],
            (None, 2) => vec![way(one, ElectronMethod::OutgoingAmplitude)],
            (None, _) => METHODS.map(|method| way(one, method)).to_vec(),
        })
        .collect();
    let work = |i: usize| ways.iter().filter(|ways| ways.len() > 1).map(|ways| ways[i].work).sum::<f64>();
    let better = usize::from(WORTH * work(1) < work(0));
    let why = reason(METHODS[better], work(better), work(1 - better));
    let chosen = ways.into_iter().zip(asked).map(|(mut ways, asked)| {
        let (index, why) = match (ways.len(), asked.wish.facts.dimensions) {
            (_, 2) => (0, "in two dimensions: a map of what the absorber takes"),
            (1, _) => (0, "pinned by the configuration"),
            _ => (better, why.as_str()),
        };
        let mut way = ways.swap_remove(index);
        way.choice.reasons.push(Reason { knob: Knob::ElectronMethod, why: why.into() });
        (way.method, way.choice)
    });
    chosen.collect()
}

fn way(asked: &Asked, method: ElectronMethod) -> Way {
    let choice = choose_for_electrons(&asked.wish, &asked.electrons, method);
    let impossible = choice.findings.iter().any(|finding| finding.verdict == Verdict::Impossible);
    let work = electron_work(asked.wish.problem, &choice.numerics, asked.electrons.energies, method);
    Way { choice, method, work: if impossible { f64::INFINITY } else { work.iter().sum() } }
}

fn reason(method: ElectronMethod, own: f64, other: f64) -> String {
    let words = ["a box that nothing leaves and a projection", "an absorber and collecting what it takes"];
    let [here, there] = match method {
        ElectronMethod::ScatteringStates => words,
        ElectronMethod::OutgoingAmplitude => [words[1], words[0]],
    };
    if other.is_finite() {
        format!(
            "{here}: {:.2} times the work of {there}, by estimate; the projection is exact, and may cost up to \
             {WORTH} times as much",
            own / other
        )
    } else {
        format!("{here}; {there} would need more than there is")
    }
}
