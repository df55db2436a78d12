//! What physics objects to in a configuration, in the same words as every other complaint.

use serde_json::{Value, json};
use tdse_core::choose::{Finding, Knob, Verdict};
use tdse_core::problem::InitialState;
use tdse_core::stationary::{NoContinuum, StationaryError};
use tdse_core::units::HARTREE_EV;

use crate::config::complaint::{Complaint, Fix};
use crate::config::quantity::digits;
use crate::config::request::{Inadequate, Request};

/// JSON Pointer of a choice.
fn place(knob: Option<Knob>) -> &'static str {
    match knob {
        Some(Knob::Spacing) => "/numerics/spacing",
        Some(Knob::Extent) => "/numerics/extent",
        Some(Knob::Absorber) => "/numerics/absorber/width",
        Some(Knob::TimeStep) => "/numerics/time_step",
        Some(Knob::Scheme) => "/numerics/scheme",
        Some(Knob::Gauge) => "/numerics/gauge",
        Some(Knob::TrailingTime) => "/numerics/trailing_time",
        Some(Knob::ElectronMethod) => "/numerics/electron_method",
        None => "/field",
    }
}

fn unit(knob: Option<Knob>) -> &'static str {
    match knob {
        Some(Knob::TimeStep | Knob::TrailingTime) => "au",
        _ => "bohr",
    }
}

/// Findings of a point, parted into complaints that refuse it and doubts that go with its result.
pub fn sort(request: &Request, tree: &Value, findings: &[Finding]) -> (Vec<Complaint>, Vec<String>) {
    let (mut complaints, mut doubts) = (Vec::new(), Vec::new());
    for finding in findings {
        let refused = match finding.verdict {
            Verdict::Doubtful => false,
            Verdict::Inadequate => request.inadequate == Inadequate::Refused,
            Verdict::Impossible => true,
        };
        let complaint = complaint(tree, finding);
        if refused {
            complaints.push(complaint);
        } else {
            doubts.push(complaint.to_string());
        }
    }
    (complaints, doubts)
}

fn complaint(tree: &Value, finding: &Finding) -> Complaint {
    let place = place(finding.knob);
    let fix = if finding.passes > 0.0 {
        Fix::Value(json!(format!("{} {}", digits(finding.passes), unit(finding.knob))))
    } else {
        Fix::Words("change the table".into())
    };
    let written = if finding.knob.is_some() { tree.pointer(place) } else { None };
    Complaint::new(place, written, &finding.reason).allowed(&finding.allowed).fix(fix)
}

/// A state that is not bound, or a softening that does not exist.
pub fn stationary(request: &Request, tree: &Value, error: &StationaryError) -> Complaint {
    match error {
        StationaryError::NoSuchState { number, bound } => {
            let place = match &request.atom.initial {
                InitialState::Single(_) => "/atom/state/number".to_owned(),
                InitialState::Superposition(terms) => {
                    let labels = &request.atom.labels;
                    let of = |own: usize| labels.get(own).map_or(own, |label| label.number);
                    let index = terms.iter().position(|term| of(term.number) == *number).unwrap_or(0);
                    format!("/atom/state/terms/{index}/number")
                }
            };
            let such = if request.atom.dimensions == 2 { " of this symmetry" } else { "" };
            let reason = format!("does not exist: this potential binds {bound} state(s){such}");
            let complaint = Complaint::new(&place, tree.pointer(&place), reason);
            match bound {
                0 => complaint.allowed("a bound state").fix(Fix::Words("deepen the potential".into())),
                _ => complaint.allowed(format!("0 to {}", bound - 1)).fix(Fix::Value(json!(bound - 1))),
            }
        }
        StationaryError::OutOfReach { number, lowest, highest, .. } => {
            let keys = ["/atom/ionization_energy", "/atom/element"];
            let place = keys.into_iter().find(|key| tree.pointer(key).is_some()).unwrap_or("/atom");
            let [least, most] = [highest, lowest].map(|energy| -energy * HARTREE_EV);
            let reason = format!("is out of reach of state {number}: no softening gives it that energy");
            let complaint = Complaint::new(place, tree.pointer(place), reason);
            let complaint =
                complaint.allowed(format!("{least:.4} to {most:.4} eV, or another state or potential"));
            let middle = json!(format!("{:.3} eV", 0.5 * (least + most)));
            match place {
                "/atom/ionization_energy" => complaint.fix(Fix::Value(middle)),
                _ => complaint.fix(Fix::Words("choose another state or potential".into())),
            }
        }
        StationaryError::NoMirror { .. } => Complaint::new("/atom", None, error.to_string())
            .allowed("a potential that is even in x and in y")
            .fix(Fix::Words("make it even".into())),
        StationaryError::NotConverged { .. } => Complaint::new("/atom", None, error.to_string())
            .allowed("a potential that is smooth on the scale of a thousandth of its width")
            .fix(Fix::Words("smooth the table".into())),
    }
}

/// More populations than there are states.
pub fn populations(tree: &Value, bound: usize) -> Complaint {
    let place = "/outputs/populations/states";
    let reason = format!("asks for states that do not exist: this potential binds {bound} in its box");
    let complaint = Complaint::new(place, tree.pointer(place), reason);
    complaint.allowed(format!("1 to {bound}")).fix(Fix::Value(json!(bound)))
}

/// Electrons of a potential whose table does not reach to where they are free.
pub fn no_continuum(tree: &Value, error: &NoContinuum) -> Complaint {
    let place = "/outputs/photoelectrons";
    let complaint = Complaint::new(place, tree.pointer(place), format!("cannot be had: {error}"));
    complaint
        .allowed(
            "a table that reaches beyond the box, and has fallen to zero or to a Coulomb tail by its ends",
        )
        .fix(Fix::Words("lengthen the table, or leave outputs.photoelectrons out".into()))
}
