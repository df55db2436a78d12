//! `models`: what each needs of atom, field and outputs.

use tdse_core::field::Field;
use tdse_core::model::metrics::Tolerance;
use tdse_core::model::quantum_orbits::QuantumOrbits;

use super::Check;
use super::curve::curve;
use crate::config::models::{Model, Models, Survival};
use crate::config::pointer::join;
use crate::config::raw;

/// The models asked for; `None` without the key.
pub(super) fn models(check: &mut Check, written: &raw::Configuration, field: &Field) -> Option<Models> {
    let raw = written.models.as_ref()?;
    let mut asked = Vec::new();
    asked.extend(raw.three_step.as_ref().map(|_| Model::ThreeStep));
    asked.extend(
        raw.strong_field.as_ref().map(|model| {
            Model::StrongField(if model.depletion { Survival::Depleted } else { Survival::Whole })
        }),
    );
    asked.extend(raw.quantum_orbits.as_ref().map(|_| Model::QuantumOrbits));
    asked.extend(
        raw.tunnelling.as_ref().map(|model| Model::Tunnelling { angular_momentum: model.angular_momentum }),
    );
    asked.extend(raw.perturbation.as_ref().map(|_| Model::Perturbation));
    asked.extend(raw.recombination.as_ref().map(|_| Model::Recombination));
    asked.extend(raw.curve.as_ref().and_then(|table| curve(check, table, field)));
    for model in &asked {
        if let Some((reason, allowed)) = unfit(model, written, field) {
            let fix = check.without("/models", model.name());
            check.complain(&join("/models", model.name()), reason, allowed, fix);
        }
    }
    let raw::Tolerance { orders, decades, slope, ratio, phase, .. } = raw.tolerance;
    Some(Models { tolerance: Tolerance { orders, decades, slope, ratio, phase }, asked })
}

/// Why a model cannot be had here, and where it can.
fn unfit(model: &Model, written: &raw::Configuration, field: &Field) -> Option<(String, &'static str)> {
    let reason = |text: &str| text.to_owned();
    if matches!(model, Model::Curve { .. }) {
        return None;
    }
    let of_quanta = !matches!(model, Model::ThreeStep);
    if let Some(unfit) = unfit_on_plane(model, &written.atom.state) {
        return Some(unfit);
    }
    if of_quanta && matches!(written.atom.state, raw::State::Superposition { .. }) {
        let allowed = "three_step and curve beside a superposition; every model beside a single state";
        return Some((reason("starts from one bound state, and /atom/state is a superposition"), allowed));
    }
    if matches!(written.atom.potential, raw::Potential::Harmonic { .. }) {
        return Some((
            reason("asks for electrons of an atom that lets none go: a harmonic potential has no continuum"),
            "an atom that can be ionized",
        ));
    }
    let harmonics = written.outputs.harmonics.is_some();
    match model {
        Model::StrongField(_) if !harmonics && written.outputs.photoelectrons.is_none() => Some((
            reason("has no use without outputs.harmonics or outputs.photoelectrons"),
            "one of these outputs, or the key left out",
        )),
        Model::Recombination | Model::QuantumOrbits if !harmonics => {
            Some((reason("has no use without outputs.harmonics"), "that output, or the key left out"))
        }
        Model::QuantumOrbits => QuantumOrbits::fit(field).err().map(|error| {
            (
                format!("cannot be had: {error}"),
                "pulses alone: sin2, gaussian, or flat_top with a plateau of more than a cycle, not one beginning within another",
            )
        }),
        _ => None,
    }
}

/// What a model asks of a state in two dimensions.
fn unfit_on_plane(model: &Model, state: &raw::State) -> Option<(String, &'static str)> {
    let raw::State::Single { number, angular_momentum, parity_x, parity_y, .. } = state else { return None };
    let momentum = match (parity_x, parity_y) {
        (None, _) => Some(angular_momentum.unwrap_or(0)),
        // The lowest state that is even both ways is the ground state, which is round.
        (Some(raw::Parity::Even), Some(raw::Parity::Even)) if *number == 0 => Some(0),
        _ => None,
    };
    match (model, momentum) {
        (Model::ThreeStep | Model::QuantumOrbits | Model::Curve { .. }, _) => None,
        (_, None) => Some((
            "starts from one angular momentum, and /atom/state is named by its parity".to_owned(),
            "three_step, quantum_orbits and curve beside this state; every model beside one of angular momentum 0",
        )),
        (Model::Recombination, Some(m)) if m != 0 => Some((
            format!(
                "needs a state that is the same in all directions, and /atom/state has angular momentum {m}"
            ),
            "the key beside a state of angular momentum 0; every other model beside this one",
        )),
        _ => None,
    }
}
