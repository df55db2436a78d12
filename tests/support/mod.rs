//! Short constructors shared by the physics tests.
#![allow(dead_code, reason = "each test target uses its own part")]

use std::f64::consts::PI;
use std::sync::Arc;

use num_complex::Complex;
use tdse_core::choose::{AtomFacts, Pins, Wish};
use tdse_core::field::{Envelope, Field, Pulse};
use tdse_core::grid::Grid;
use tdse_core::potential::{Potential, PotentialOnGrid};
use tdse_core::problem::{Absorber, Gauge, InitialState, Numerics, Problem, Record, Scheme};
use tdse_core::simulate::{Atom, Plan, State, run};
use tdse_core::stationary::BoundStates;
use tdse_core::units;

pub const SQRT_2_ATOM: Potential =
    Potential::SoftCoulomb { charge: 1.0, softening: std::f64::consts::SQRT_2 };

/// Linearly polarized pulse, φ = 0, centred at t = 0, sin² envelope of `cycles` cycles in total.
pub fn sin2_pulse(frequency: f64, peak_field: f64, cycles: f64) -> Pulse {
    pulse(frequency, peak_field, Envelope::Sin2 { duration: cycles * 2.0 * PI / frequency })
}

pub fn pulse(frequency: f64, peak_field: f64, envelope: Envelope) -> Pulse {
    Pulse {
        frequency,
        peak_field,
        envelope,
        phase: 0.0,
        centre: 0.0,
        chirp: 0.0,
        ellipticity: 0.0,
        angle: 0.0,
    }
}

/// The same of `nanometres` and W/cm².
pub fn light(nanometres: f64, intensity: f64, cycles: f64) -> Pulse {
    let frequency = units::angular_frequency(nanometres * units::Quantity::Length.unit("nm").unwrap().factor);
    sin2_pulse(frequency, units::peak_field(intensity), cycles)
}

pub fn field(pulse: Pulse) -> Field {
    Field { pulses: vec![pulse], sampled: None }
}

/// The run DESIGN calls typical: 800 nm, 1e14 W/cm², 4 cycles.
pub fn near_infrared() -> Pulse {
    light(800.0, 1e14, 4.0)
}

pub fn numerics(points: usize, spacing: f64, time_step: f64) -> Numerics {
    Numerics {
        grid: Grid::line(points, spacing),
        time_step,
        scheme: Scheme::FourthOrder,
        gauge: Gauge::Length,
        absorber: Absorber::None,
        trailing_time: 0.0,
    }
}

/// In two dimensions; a width of zero is no absorber.
pub fn plane_numerics(points: usize, spacing: f64, time_step: f64, width: f64) -> Numerics {
    Numerics {
        grid: Grid::square(points, spacing),
        absorber: if width > 0.0 { Absorber::Round { width } } else { Absorber::None },
        ..numerics(points, spacing, time_step)
    }
}

/// What an accuracy asks for when neither populations nor a photon energy is asked for.
pub fn wish<'a>(problem: &'a Problem, facts: &'a AtomFacts, pins: &'a Pins, accuracy: f64) -> Wish<'a> {
    Wish { problem, facts, pins, accuracy, populations: 0, max_photon: None }
}

pub fn ground(potential: Potential, field: Field) -> Problem {
    Problem { potential, initial: InitialState::Single(0), field }
}

pub fn atom(potential: &Potential, numerics: &Numerics, states: usize) -> Arc<Atom> {
    Arc::new(Atom::new(potential, &numerics.grid, states).unwrap())
}

/// Runs a problem from its ground state; the plan is returned for times and projections.
pub fn solve(problem: &Problem, numerics: &Numerics) -> (Plan, State) {
    let atom = atom(&problem.potential, numerics, 1);
    let plan = Plan::new(problem, atom, numerics, Record::default()).unwrap();
    let state = run(&plan);
    (plan, state)
}

/// d²d/dt² = ⟨∇V⟩ + E N(0) at every sample.
pub fn acceleration(plan: &Plan, state: &State) -> Vec<f64> {
    let norm = state.series.norm[0];
    state.series.gradient.iter().zip(plan.electric_field()).map(|(g, e)| g[0] + e[0] * norm).collect()
}

/// An atom of any potential, without bound states.
pub fn bare_atom(values: Vec<f64>, gradient: Vec<f64>) -> Arc<Atom> {
    Arc::new(Atom {
        potential: PotentialOnGrid { values, gradient: [gradient, Vec::new()] },
        bound: BoundStates { energies: Vec::new(), states: Vec::new() },
        plane: Vec::new(),
    })
}

/// Plan from any wave function.
pub fn plan_from(psi: Vec<Complex<f64>>, atom: Arc<Atom>, field: &Field, numerics: &Numerics) -> Plan {
    Plan::from_wave_function(psi, atom, field, numerics, Record::default()).unwrap()
}

/// ψ at the end of a run.
pub fn final_wave(plan: &Plan, state: &State) -> Vec<Complex<f64>> {
    let mut psi = vec![Complex::default(); state.psi.len()];
    plan.wave_function(state, &mut psi);
    psi
}

pub fn positions(numerics: &Numerics) -> Vec<f64> {
    numerics.grid.x.positions().collect()
}

/// ∫|ψ|² f(x) dx.
pub fn mean(psi: &[Complex<f64>], numerics: &Numerics, f: impl Fn(f64) -> f64) -> f64 {
    psi.iter().zip(numerics.grid.x.positions()).map(|(p, x)| p.norm_sqr() * f(x)).sum::<f64>()
        * numerics.grid.cell()
}

/// Largest |a - b| over the largest |b|.
pub fn deviation(a: &[f64], b: &[f64]) -> f64 {
    assert_eq!(a.len(), b.len());
    let largest = b.iter().fold(0.0, |m: f64, v| m.max(v.abs()));
    a.iter().zip(b).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max) / largest
}

/// Every `stride`-th sample.
pub fn thinned(values: &[f64], stride: usize) -> Vec<f64> {
    values.iter().copied().step_by(stride).collect()
}
