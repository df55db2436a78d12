//! The way to the electron spectrum: what it needs of the atom and the edges.

use serde_json::json;
use tdse_core::problem::ElectronMethod;

use super::Check;
use crate::config::complaint::Fix;
use crate::config::raw;

const METHOD: &str = "/numerics/electron_method";

/// The method that the user fixed, by name or by the edges of the box.
pub(super) fn method(check: &mut Check, written: &raw::Configuration) -> Option<ElectronMethod> {
    let pinned = written.numerics.electron_method.map(ElectronMethod::from);
    if written.outputs.photoelectrons.is_none() {
        if pinned.is_some() {
            let fix = check.without("/numerics", "electron_method");
            check.complain(METHOD, "has no use without outputs.photoelectrons", "the key left out", fix);
        }
        return None;
    }
    if matches!(written.atom.potential, raw::Potential::Harmonic { .. }) {
        let fix = check.without("/outputs", "photoelectrons");
        let reason = "asks for electrons of an atom that lets none go: a harmonic potential has no continuum";
        check.complain("/outputs/photoelectrons", reason, "the key left out", fix);
    }
    if written.atom.dimensions == 2 {
        on_the_plane(check, written, pinned);
        return Some(ElectronMethod::OutgoingAmplitude);
    }
    let of_edges = written.numerics.absorber.as_ref().map(|absorber| match absorber {
        raw::Absorber::None { .. } => ElectronMethod::ScatteringStates,
        raw::Absorber::Smooth { .. } => ElectronMethod::OutgoingAmplitude,
    });
    match (pinned, of_edges) {
        (Some(ElectronMethod::ScatteringStates), Some(ElectronMethod::OutgoingAmplitude)) => {
            let reason = "needs a box that nothing leaves, and /numerics/absorber is smooth";
            let fix = Fix::Value(json!("outgoing_amplitude"));
            check.complain(METHOD, reason, "outgoing_amplitude beside an absorber", fix);
        }
        (Some(ElectronMethod::OutgoingAmplitude), Some(ElectronMethod::ScatteringStates)) => {
            let reason = "collects what an absorber takes, and /numerics/absorber is none";
            let fix = Fix::Value(json!("scattering_states"));
            check.complain(METHOD, reason, "scattering_states without an absorber", fix);
        }
        _ => {}
    }
    pinned.or(of_edges)
}

/// In two dimensions there is one way.
fn on_the_plane(check: &mut Check, written: &raw::Configuration, pinned: Option<ElectronMethod>) {
    let allowed = "outgoing_amplitude, with an absorber, in two dimensions";
    if pinned == Some(ElectronMethod::ScatteringStates) {
        let fix = Fix::Value(json!("outgoing_amplitude"));
        check.complain(METHOD, "needs one dimension", allowed, fix);
    }
    if let Some(raw::Absorber::None { .. }) = written.numerics.absorber {
        let fix = check.without("/numerics", "absorber");
        let reason = "takes nothing, and the electrons of two dimensions are what an absorber takes";
        check.complain("/numerics/absorber", reason, allowed, fix);
    }
}

impl From<raw::ElectronMethod> for ElectronMethod {
    fn from(method: raw::ElectronMethod) -> Self {
        match method {
            raw::ElectronMethod::ScatteringStates => Self::ScatteringStates,
            raw::ElectronMethod::OutgoingAmplitude => Self::OutgoingAmplitude,
        }
    }
}
