//! The resolved configuration: nothing left to choose, and what the user wrote in the user's own words.

use serde_json::Value;
use tdse_core::problem::{Absorber, ElectronMethod, Gauge, Numerics, Scheme};
use tdse_core::units::Quantity;

use super::quantity::digits;
use super::raw::{self, Energy, Length, Time};
use super::request::{Outputs, Request};
use super::schema::tidy;

/// What was found and chosen for a request.
#[derive(Clone, Copy, Debug)]
pub struct Chosen<'a> {
    /// The tuned softening, bohr; `None` where none was tuned.
    pub softening: Option<f64>,
    /// Every choice of numerics.
    pub numerics: &'a Numerics,
    /// Way to the electron spectrum, where one is asked for.
    pub electron_method: Option<ElectronMethod>,
    /// The outputs of the request with their defaults filled in.
    pub outputs: &'a Outputs,
}

/// The configuration that says it all; read again and resolved again it gives itself.
pub fn resolved(request: &Request, chosen: &Chosen) -> Value {
    let mut written = request.written.clone();
    written.scan = None;
    // What a scan as a whole is asked is not asked of a point.
    if let Some(orbits) = written.models.as_mut().and_then(|models| models.quantum_orbits.as_mut()) {
        orbits.branches = None;
    }
    atom(&mut written.atom, chosen.softening);
    inputs(&mut written, request);
    numerics(&mut written.numerics, chosen.numerics);
    written.numerics.electron_method = chosen.electron_method.map(|method| match method {
        ElectronMethod::ScatteringStates => raw::ElectronMethod::ScatteringStates,
        ElectronMethod::OutgoingAmplitude => raw::ElectronMethod::OutgoingAmplitude,
    });
    outputs(&mut written.outputs, chosen.outputs);
    let mut tree = serde_json::to_value(written).unwrap_or_default();
    tidy(&mut tree);
    tree
}

/// Text of a resolved configuration.
pub fn text(resolved: &Value) -> String {
    format!("{resolved:#}\n")
}

fn atom(atom: &mut raw::Atom, tuned: Option<f64>) {
    if atom.dimensions == 2 {
        name_symmetries(&mut atom.state);
    }
    atom.element = None;
    atom.ionization_energy = None;
    if let raw::Potential::SoftCoulomb { softening, .. } | raw::Potential::Screened { softening, .. } =
        &mut atom.potential
        && softening.is_none()
    {
        *softening = tuned.map(|a| Length(spelled(a, Quantity::Length, "au")));
    }
}

/// States without a symmetry have no angular momentum.
fn name_symmetries(state: &mut raw::State) {
    let name = |angular_momentum: &mut Option<i32>, parity: Option<raw::Parity>| {
        if parity.is_none() {
            angular_momentum.get_or_insert(0);
        }
    };
    match state {
        raw::State::Single { angular_momentum, parity_x, .. } => name(angular_momentum, *parity_x),
        raw::State::Superposition { terms, .. } => {
            for term in terms {
                name(&mut term.angular_momentum, term.parity_x);
            }
        }
    }
}

fn inputs(written: &mut raw::Configuration, request: &Request) {
    for input in &request.inputs {
        if let Some(curve) = written.models.as_mut().and_then(|models| models.curve.as_mut())
            && input.user == "/models/curve"
        {
            (curve.file, curve.sha256) = (input.reference(), Some(input.sha256.clone()));
            // What is kept of an HDF5 file is a table.
            (curve.dataset, curve.axis) = (None, None);
        }
        match (&mut written.atom.potential, &mut written.field.sampled) {
            (raw::Potential::Sampled { file, sha256, .. }, _) if input.user == "/atom/potential" => {
                (*file, *sha256) = (input.reference(), Some(input.sha256.clone()));
            }
            (_, Some(sampled)) if input.user == "/field/sampled" => {
                (sampled.file, sampled.sha256) = (input.reference(), Some(input.sha256.clone()));
            }
            _ => {}
        }
    }
}

fn numerics(written: &mut raw::Numerics, chosen: &Numerics) {
    length(&mut written.spacing, chosen.grid.x.spacing);
    length(&mut written.extent, chosen.grid.x.extent());
    time(&mut written.time_step, chosen.time_step);
    time(&mut written.trailing_time, chosen.trailing_time);
    written.scheme = Some(match chosen.scheme {
        Scheme::FourthOrder => raw::Scheme::FourthOrder,
        Scheme::Strang => raw::Scheme::Strang,
    });
    written.gauge = Some(match chosen.gauge {
        Gauge::Length => raw::Gauge::Length,
        Gauge::Velocity => raw::Gauge::Velocity,
    });
    let mut edges = absorber(written.absorber.take(), chosen.absorber);
    if let (raw::Absorber::Smooth { shape, .. }, 2) = (&mut edges, chosen.grid.dimensions()) {
        *shape = Some(match chosen.absorber {
            Absorber::Round { .. } => raw::Shape::Round,
            Absorber::Smooth { .. } | Absorber::None => raw::Shape::Sides,
        });
    }
    written.absorber = Some(edges);
    written.common = false;
}

fn absorber(written: Option<raw::Absorber>, chosen: Absorber) -> raw::Absorber {
    let (note, mut width) = match written {
        Some(raw::Absorber::Smooth { note, width, .. }) => (note, width),
        Some(raw::Absorber::None { note }) => (note, None),
        None => (None, None),
    };
    match chosen {
        Absorber::None => raw::Absorber::None { note },
        Absorber::Smooth { width: value } | Absorber::Round { width: value } => {
            length(&mut width, value);
            raw::Absorber::Smooth { note, width, shape: None }
        }
    }
}

fn outputs(written: &mut raw::Outputs, filled: &Outputs) {
    if let (Some(written), Some(filled)) = (&mut written.harmonics, &filled.harmonics) {
        fill_energy(&mut written.max_energy, filled.max_energy);
        fill_energy(&mut written.energy_step, filled.energy_step);
        written.max_order = written.max_order.or(filled.max_order);
    }
    if let (Some(written), Some(filled)) = (&mut written.photoelectrons, &filled.photoelectrons) {
        fill_energy(&mut written.max_energy, filled.max_energy);
        fill_energy(&mut written.energy_step, filled.energy_step);
    }
    if let (Some(written), Some(filled)) = (&mut written.time_frequency, &filled.time_frequency) {
        fill_time(&mut written.window_length, filled.window_length);
        fill_energy(&mut written.max_energy, filled.max_energy);
        fill_energy(&mut written.energy_step, filled.energy_step);
        fill_time(&mut written.time_step, filled.time_step);
    }
}

fn length(written: &mut Option<Length>, value: f64) {
    if written.as_ref().map(Length::value) != Some(value) {
        *written = Some(Length(spelled(value, Quantity::Length, "au")));
    }
}

fn time(written: &mut Option<Time>, value: f64) {
    if written.as_ref().map(Time::value) != Some(value) {
        *written = Some(Time(spelled(value, Quantity::Time, "au")));
    }
}

fn fill_energy(written: &mut Option<Energy>, value: Option<f64>) {
    if let (None, Some(value)) = (&written, value) {
        *written = Some(Energy(spelled(value, Quantity::Energy, "eV")));
    }
}

fn fill_time(written: &mut Option<Time>, value: Option<f64>) {
    if let (None, Some(value)) = (&written, value) {
        *written = Some(Time(spelled(value, Quantity::Time, "fs")));
    }
}

/// A value in atomic units with the unit asked for if it reads back bit by bit, else with `au`, which always does.
fn spelled(value: f64, quantity: Quantity, symbol: &str) -> String {
    let number = quantity.unit(symbol).map(|unit| (value / unit.factor, unit.factor));
    let rounded = number.and_then(|(number, factor)| Some((format!("{number:.11e}").parse().ok()?, factor)));
    match rounded.filter(|(number, factor): &(f64, f64)| number * factor == value).or(number) {
        Some((number, factor)) if number * factor == value => format!("{} {symbol}", digits(number)),
        _ => format!("{} au", digits(value)),
    }
}
