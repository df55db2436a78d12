//! `atom`.

use serde_json::json;
use tdse_core::elements::Element;
use tdse_core::potential::Potential;
use tdse_core::problem::{InitialState, Term};

use super::Check;
use crate::config::complaint::Fix;
use crate::config::raw;
use crate::config::request::{AtomPotential, AtomRequest, Softening};
use crate::config::tables;

const SOFTENING: &str = "/atom/potential/softening";
const TUNERS: [&str; 2] = ["ionization_energy", "element"];

/// `None` where a complaint says why.
pub(super) fn atom(check: &mut Check, atom: &raw::Atom) -> Option<AtomRequest> {
    if atom.dimensions != 1 {
        let fix = Fix::Value(json!(1));
        check.complain("/atom/dimensions", "is not available in this version", "1", fix);
    }
    let initial = initial(check, &atom.state);
    let potential = potential(check, atom)?;
    Some(AtomRequest { dimensions: atom.dimensions as usize, potential, initial })
}

fn potential(check: &mut Check, atom: &raw::Atom) -> Option<AtomPotential> {
    if !matches!(atom.potential, raw::Potential::SoftCoulomb { .. } | raw::Potential::Screened { .. }) {
        nothing_to_tune(check);
    }
    let fixed = match &atom.potential {
        raw::Potential::SoftCoulomb { charge, softening, .. } => {
            let softening = softening_of(check, atom, softening.as_ref())?;
            return Some(AtomPotential::Softened { charge: *charge, screening_length: None, softening });
        }
        raw::Potential::Screened { charge, softening, screening_length, .. } => {
            let softening = softening_of(check, atom, softening.as_ref())?;
            let screening_length = Some(screening_length.value());
            return Some(AtomPotential::Softened { charge: *charge, screening_length, softening });
        }
        raw::Potential::PoschlTeller { lambda, width, .. } => {
            Potential::PoschlTeller { lambda: *lambda, width: width.value() }
        }
        raw::Potential::GaussianWell { depth, width, .. } => {
            Potential::GaussianWell { depth: depth.value(), width: width.value() }
        }
        raw::Potential::Harmonic { frequency, .. } => Potential::Harmonic { frequency: frequency.value() },
        raw::Potential::Sampled { file, sha256, .. } => {
            Potential::Sampled(check.table("/atom/potential", file, sha256.as_ref(), tables::POTENTIAL)?)
        }
    };
    Some(AtomPotential::Fixed(fixed))
}

/// The softening, or what tunes it: exactly one of the three may be given.
fn softening_of(check: &mut Check, atom: &raw::Atom, given: Option<&raw::Length>) -> Option<Softening> {
    check.at_most_one("/atom", TUNERS);
    if let Some(length) = given {
        for key in TUNERS {
            let place = format!("/atom/{key}");
            if check.tree.pointer(&place).is_some() {
                let reason = format!("stands beside {SOFTENING} {:?}", length.0);
                let fix = check.without("/atom/potential", "softening");
                check.complain(&place, reason, "one of softening, ionization_energy and element", fix);
            }
        }
        return Some(Softening::Given(length.value()));
    }
    if let Some(energy) = &atom.ionization_energy {
        return Some(Softening::ForEnergy(energy.value()));
    }
    if let Some(element) = atom.element.as_ref().and_then(|symbol| Element::with_symbol(&symbol.0)) {
        return Some(Softening::ForElement(element));
    }
    let allowed = "one of softening, /atom/ionization_energy and /atom/element";
    check.complain(SOFTENING, "is missing, and nothing tunes it", allowed, Fix::Value(json!("1.414 bohr")));
    None
}

fn nothing_to_tune(check: &mut Check) {
    for key in TUNERS {
        let place = format!("/atom/{key}");
        if check.tree.pointer(&place).is_some() {
            let fix = check.without("/atom", key);
            let reason = "stands beside a potential without softening";
            check.complain(&place, reason, "the key only with soft_coulomb and screened", fix);
        }
    }
}

fn initial(check: &mut Check, state: &raw::State) -> InitialState {
    match state {
        raw::State::Single { number, .. } => InitialState::Single(*number as usize),
        raw::State::Superposition { terms, .. } => {
            distinct(check, terms);
            if terms.iter().all(|term| term.weight == 0.0) {
                let allowed = "at least one weight above 0";
                check.complain(
                    "/atom/state/terms/0/weight",
                    "is 0, and so is every other",
                    allowed,
                    Fix::Value(json!(1)),
                );
            }
            let term = |term: &raw::Term| Term {
                number: term.number as usize,
                weight: term.weight,
                phase: term.phase.value(),
            };
            InitialState::Superposition(terms.iter().map(term).collect())
        }
    }
}

fn distinct(check: &mut Check, terms: &[raw::Term]) {
    for (i, term) in terms.iter().enumerate() {
        if terms[..i].iter().any(|before| before.number == term.number) {
            let free =
                (0..=u32::MAX).find(|number| terms.iter().all(|term| term.number != *number)).unwrap_or(0);
            let place = format!("/atom/state/terms/{i}/number");
            check.complain(&place, "is repeated", "every state at most once", Fix::Value(json!(free)));
        }
    }
}
