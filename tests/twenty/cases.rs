//! Twenty configurations, fixed before any rule was tuned on them.
//!
//! The rule: point i = 1 … 20 of the additive recurrence u_j = frac(½ + i g^{-j}), j = 1 … 6, where g is the positive
//! root of g⁷ = g + 1: a Kronecker sequence (H. Weyl, Math. Ann. 77, 313 (1916)) with the generalised golden ratio as
//! its generator, a common choice for low discrepancy in several dimensions (from memory, no source at hand).
//!
//! - u₁: wavelength, 200 nm to 3 µm, uniform in its logarithm;
//! - u₂: E0, from that of 1e12 W/cm² uniformly to that of 1e15 W/cm² or (2 Ip)^{3/2}/16, whichever is less: there the
//!   tunnelling exponent 2(2 Ip)^{3/2}/(3 E0) is 10.7 or more and a bound electron survives (invented by us; for a
//!   hydrogen-like atom it is the barrier-suppression field 1/16);
//! - u₃: 2 to 8 cycles of a sin² envelope, zero to zero;
//! - u₄: ionization energy, 0.4 to 1 hartree (the frequency of the harmonic potential);
//! - u₅: the potential, one of six;
//! - u₆: its second parameter, and the phase, 2π u₆.

use std::f64::consts::PI;
use std::sync::Arc;

use tdse_core::cubic::Cubic;
use tdse_core::field::{Envelope, Field, Pulse};
use tdse_core::potential::Potential;
use tdse_core::problem::{InitialState, Problem};
use tdse_core::stationary::{Softenable, level, tune_softening};
use tdse_core::units::{self, Quantity};

/// Root of g⁷ = g + 1.
const GENERATOR: f64 = 1.112_775_684_278_705_5;

/// One configuration.
pub struct Case {
    pub number: u32,
    pub name: String,
    pub problem: Problem,
    /// Ionization energy, hartree.
    pub binding: f64,
}

pub fn all() -> Vec<Case> {
    (1..=20).map(case).collect()
}

/// Coordinate j = 1 … 6 of point `number`, in [0, 1).
fn coordinate(number: u32, j: i32) -> f64 {
    (0.5 + f64::from(number) * GENERATOR.powi(-j)).fract()
}

pub fn case(number: u32) -> Case {
    let u = |j| coordinate(number, j);
    let wavelength = 200.0 * 15f64.powf(u(1));
    let binding = 0.4 + 0.6 * u(4);
    let (weakest, strongest) = (units::peak_field(1e12), units::peak_field(1e15));
    let survives = (2.0 * binding).powf(1.5) / 16.0;
    let peak_field = weakest + u(2) * (strongest.min(survives) - weakest);
    let cycles = 2.0 + 6.0 * u(3);
    let frequency = units::angular_frequency(wavelength * Quantity::Length.unit("nm").unwrap().factor);
    let pulse = Pulse {
        frequency,
        peak_field,
        envelope: Envelope::Sin2 { duration: cycles * 2.0 * PI / frequency },
        phase: 2.0 * PI * u(6),
        centre: 0.0,
        chirp: 0.0,
        ellipticity: 0.0,
        angle: 0.0,
    };
    let (kind, potential) = potential((6.0 * u(5)) as usize, binding, u(6));
    let intensity = (peak_field / strongest).powi(2) * 1e15;
    Case {
        number,
        name: format!(
            "{kind:<8} {wavelength:4.0} nm {intensity:.1e} W/cm2 {cycles:.1} cycles Ip {binding:.2}"
        ),
        problem: Problem {
            potential,
            initial: InitialState::Single(0),
            field: Field { pulses: vec![pulse], sampled: None },
        },
        binding,
    }
}

fn potential(kind: usize, binding: f64, second: f64) -> (&'static str, Potential) {
    let soften = |family: Softenable| family.with_softening(tune_softening(&family, 0, -binding).unwrap());
    match kind {
        0 => ("soft", soften(Softenable::SoftCoulomb { charge: 1.0 })),
        1 => {
            let screening_length = 4.0 + 12.0 * second;
            ("screened", soften(Softenable::Screened { charge: 1.0, screening_length }))
        }
        2 => {
            let lambda = 1.0 + second;
            ("poeschl", Potential::PoschlTeller { lambda, width: lambda / (2.0 * binding).sqrt() })
        }
        3 => {
            let width = 0.8 + 1.2 * second;
            ("gaussian", deepened(binding, |depth| Potential::GaussianWell { depth, width }))
        }
        4 => ("harmonic", Potential::Harmonic { frequency: binding }),
        _ => {
            let distance = 1.0 + second;
            ("sampled", deepened(binding, |depth| table(depth, distance)))
        }
    }
}

/// Potential whose ground state has the energy -`binding`, by bisection in its depth.
fn deepened(binding: f64, of: impl Fn(f64) -> Potential) -> Potential {
    let (mut low, mut high) = (0.5 * binding, 8.0 * binding);
    for _ in 0..45 {
        let middle = 0.5 * (low + high);
        let energy = level(&of(middle), 0).map_or(0.0, |found| found.energy);
        if -energy < binding { low = middle } else { high = middle }
    }
    of(0.5 * (low + high))
}

/// Two unequal wells in a table, points 0.1 bohr apart near the atom and ever further out.
fn table(depth: f64, distance: f64) -> Potential {
    let mut positions: Vec<f64> = (0..=120).map(|i| 0.1 * f64::from(i)).collect();
    while positions[positions.len() - 1] < 4e4 {
        positions.push(positions[positions.len() - 1] * 1.1);
    }
    let mirrored: Vec<f64> =
        positions[1..].iter().rev().map(|x| -x).chain(positions.iter().copied()).collect();
    let well = |x: f64| 1.0 / x.cosh().powi(2);
    let value = |x: f64| -depth * (well(x) + 0.6 * well(x - distance));
    let values = mirrored.iter().map(|&x| value(x)).collect();
    Potential::Sampled(Arc::new(Cubic::new(mirrored, values)))
}
