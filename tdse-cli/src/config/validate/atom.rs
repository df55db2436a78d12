//! `atom`.

use std::sync::Arc;

use serde_json::json;
use tdse_core::cubic::Cubic;
use tdse_core::elements::Element;
use tdse_core::potential::Potential;
use tdse_core::problem::{InitialState, PlaneLabel, Term};

use super::Check;
use super::symmetry::{self, Written};
use crate::config::complaint::Fix;
use crate::config::raw;
use crate::config::request::{AtomPotential, AtomRequest, Softening};
use crate::config::tables;

const SOFTENING: &str = "/atom/potential/softening";
const TUNERS: [&str; 2] = ["ionization_energy", "element"];

/// `None` where a complaint says why.
pub(super) fn atom(check: &mut Check, atom: &raw::Atom) -> Option<AtomRequest> {
    let (initial, labels) = match atom.dimensions {
        1 => (on_the_line(check, &atom.state), Vec::new()),
        _ => on_the_plane(check, &atom.state),
    };
    let potential = potential(check, atom)?;
    Some(AtomRequest { dimensions: atom.dimensions as usize, potential, initial, labels })
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
            let table = check.table("/atom/potential", file, sha256.as_ref(), tables::POTENTIAL)?;
            Potential::Sampled(if atom.dimensions == 1 { table } else { along_the_radius(check, &table)? })
        }
    };
    Some(AtomPotential::Fixed(fixed))
}

/// A table for two dimensions: of the distance from the centre.
fn along_the_radius(check: &mut Check, table: &Cubic) -> Option<Arc<Cubic>> {
    let (first, _) = table.domain();
    if first == 0.0 {
        let (radii, values) = table.points();
        return Some(Arc::new(Cubic::even(radii.to_vec(), values.to_vec())));
    }
    let fix = if first < 0.0 {
        Fix::Elsewhere { place: "/atom/dimensions".into(), value: json!(1) }
    } else {
        Fix::Words("begin the table with a row at 0 bohr".into())
    };
    let reason =
        format!("begins at {first} bohr; in two dimensions its positions are distances from the centre");
    check.complain("/atom/potential/file", reason, "a table from 0 bohr on", fix);
    None
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

const STATE: &str = "/atom/state";

fn on_the_line(check: &mut Check, state: &raw::State) -> InitialState {
    match state {
        raw::State::Single { number, .. } => {
            symmetry::on_the_line(check, STATE);
            InitialState::Single(*number as usize)
        }
        raw::State::Superposition { terms, .. } => {
            for i in 0..terms.len() {
                symmetry::on_the_line(check, &format!("{STATE}/terms/{i}"));
            }
            distinct(check, terms, &terms.iter().map(|term| term.number).collect::<Vec<_>>());
            weighted(check, terms);
            let numbered = terms.iter().map(|term| member(term, term.number as usize));
            InitialState::Superposition(numbered.collect())
        }
    }
}

/// The state, which counts the labels beside it.
fn on_the_plane(check: &mut Check, state: &raw::State) -> (InitialState, Vec<PlaneLabel>) {
    match state {
        raw::State::Single { number, angular_momentum, parity_x, parity_y, .. } => {
            let (number, angular_momentum) = (*number, *angular_momentum);
            let written = Written { number, angular_momentum, parity: [*parity_x, *parity_y] };
            (InitialState::Single(0), vec![symmetry::on_the_plane(check, STATE, written)])
        }
        raw::State::Superposition { terms, .. } => {
            let label = |(i, term): (usize, &raw::Term)| {
                let raw::Term { number, angular_momentum, parity_x, parity_y, .. } = *term;
                let written = Written { number, angular_momentum, parity: [parity_x, parity_y] };
                symmetry::on_the_plane(check, &format!("{STATE}/terms/{i}"), written)
            };
            let labels: Vec<PlaneLabel> = terms.iter().enumerate().map(label).collect();
            distinct(check, terms, &labels);
            weighted(check, terms);
            let counted = terms.iter().enumerate().map(|(i, term)| member(term, i));
            (InitialState::Superposition(counted.collect()), labels)
        }
    }
}

fn member(term: &raw::Term, number: usize) -> Term {
    Term { number, weight: term.weight, phase: term.phase.value() }
}

fn weighted(check: &mut Check, terms: &[raw::Term]) {
    if terms.iter().all(|term| term.weight == 0.0) {
        let place = "/atom/state/terms/0/weight";
        check.complain(
            place,
            "is 0, and so is every other",
            "at least one weight above 0",
            Fix::Value(json!(1)),
        );
    }
}

/// Complains about terms that name the same state.
fn distinct<S: PartialEq>(check: &mut Check, terms: &[raw::Term], states: &[S]) {
    for (i, state) in states.iter().enumerate() {
        if states[..i].contains(state) {
            let free =
                (0..=u32::MAX).find(|number| terms.iter().all(|term| term.number != *number)).unwrap_or(0);
            let place = format!("{STATE}/terms/{i}/number");
            check.complain(&place, "is repeated", "every state at most once", Fix::Value(json!(free)));
        }
    }
}
