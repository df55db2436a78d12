//! Perturbation theory for weak or extreme-ultraviolet fields: ionization by one photon, and two resonant levels.

mod plane;

pub use plane::PlaneOnePhoton;

use std::f64::consts::PI;

use num_complex::Complex;

use super::strong_field::Ground;
use crate::field::Field;
use crate::potential::Potential;
use crate::quadrature::gauss_6;
use crate::simulate::Schedule;
use crate::spectrum::ContinuumAmplitude;
use crate::stationary::{ScatteringStates, StationaryError, radial_level, transition_dipole};

/// Samples per period of the highest transition frequency.
const SAMPLES: f64 = 24.0;

/// Amplitudes of ionization in first order, -i ⟨ψ_±k|x|n⟩ ∫E(t) e^{i(k²/2 + Ip)t} dt at `momenta` > 0, in one dimension
/// (Dirac, Proc. R. Soc. A 114, 243 (1927)): exact scattering states and the actual field with its whole bandwidth; exact where
/// the field is weak. Phases in the picture of the stationary states at t = 0.
///
/// # Panics
/// If the state does not have the length of the axis that `states` were made for, or a momentum is not positive.
pub fn one_photon(
    states: &ScatteringStates,
    ground: &Ground,
    field: &Field,
    momenta: Vec<f64>,
) -> ContinuumAmplitude {
    let fastest = momenta.iter().fold(0.0, |m: f64, &k| m.max(k));
    let highest = 0.5 * fastest * fastest + ground.ionization_energy;
    let step = steps(highest).min(sampling(field));
    let schedule = Schedule::new(field, step, 0.0);
    let samples: Vec<f64> = schedule.times().into_iter().map(|t| field.electric_field(t)[0]).collect();
    let amplitudes = momenta.iter().map(|&k| {
        let omega = 0.5 * k * k + ground.ionization_energy;
        let factor = Complex::new(0.0, -1.0) * transform(&samples, &schedule, omega);
        let [left, right] = transition_dipole(states, ground.axis, ground.state, k).ionization;
        (left * factor, right * factor)
    });
    let (left, right) = amplitudes.unzip();
    ContinuumAmplitude { momenta, left, right }
}

/// A time step that resolves a transition.
fn steps(highest: f64) -> f64 {
    2.0 * PI / SAMPLES / highest
}

/// ∫E(t) e^{iωt} dt by the trapezoidal rule: E is smooth and zero at both ends.
fn transform(samples: &[f64], schedule: &Schedule, omega: f64) -> Complex<f64> {
    let turn = Complex::cis(omega * schedule.time_step);
    let mut phase = Complex::cis(omega * schedule.start);
    let mut sum = Complex::default();
    for e in samples {
        sum += phase * e;
        phase *= turn;
    }
    sum * schedule.time_step
}

/// A time step that resolves the field itself.
fn sampling(field: &Field) -> f64 {
    let (start, end) = field.interval();
    (end - start) / crate::quantities::samples(field, end - start) as f64
}

/// Population of the upper of two levels after time `t` of a field of constant amplitude, Ω²/(Ω²+Δ²) sin²(√(Ω²+Δ²) t/2), in
/// rotating-wave approximation (Rabi, Phys. Rev. 51, 652 (1937)), with Ω = |⟨0|x|1⟩| E0 and detuning Δ.
pub fn rabi(coupling: f64, detuning: f64, t: f64) -> f64 {
    let square = coupling * coupling + detuning * detuning;
    if square == 0.0 { 0.0 } else { coupling * coupling / square * (0.5 * square.sqrt() * t).sin().powi(2) }
}

/// Two levels of the atom that the field couples, and nothing else.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TwoLevels {
    /// Energy of the upper above the lower one, hartree.
    pub transition: f64,
    /// ⟨0|x|1⟩, bohr, real.
    pub dipole: f64,
    /// ⟨1|x|1⟩ - ⟨0|x|0⟩, bohr; zero where the atom is symmetric.
    pub asymmetry: f64,
}

impl TwoLevels {
    /// Of two bound states on an axis, each with its energy.
    ///
    /// # Panics
    /// If a state does not have the length of the axis.
    pub fn of(axis: crate::grid::Axis, [lower, upper]: [(&[f64], f64); 2]) -> Self {
        let element = |a: &[f64], b: &[f64]| {
            assert_eq!(
                (a.len(), b.len()),
                (axis.points, axis.points),
                "states and axis have the same length"
            );
            axis.positions().zip(a).zip(b).map(|((x, a), b)| x * a * b).sum::<f64>() * axis.spacing
        };
        Self {
            transition: upper.1 - lower.1,
            dipole: element(lower.0, upper.0),
            asymmetry: element(upper.0, upper.0) - element(lower.0, lower.0),
        }
    }

    /// Of a plane atom's level without angular momentum, with `lower` radial nodes, and the level of |m| = 1 with `upper` ones that linear
    /// light reaches from it, ±1 in equal parts: along the light the dipole is D/√2, D = ∫R₁ R₀ r² dr.
    ///
    /// # Errors
    /// As [`radial_level`].
    pub fn on_plane(potential: &Potential, [lower, upper]: [usize; 2]) -> Result<Self, StationaryError> {
        let levels = [radial_level(potential, 0, lower)?, radial_level(potential, 1, upper)?];
        let radial = [levels[0].radial_function(potential, 0), levels[1].radial_function(potential, 1)];
        let panel = 0.1 * potential.smallest_length();
        let count = (levels[0].reach.min(levels[1].reach) / panel).ceil() as usize;
        let points =
            (0..count).flat_map(|i| gauss_6().map(move |(at, w)| ((i as f64 + at) * panel, w * panel)));
        let element: f64 = points.map(|(r, w)| w * r * r * radial[0].value(r) * radial[1].value(r)).sum();
        let transition = levels[1].energy - levels[0].energy;
        Ok(Self { transition, dipole: element * std::f64::consts::FRAC_1_SQRT_2, asymmetry: 0.0 })
    }

    /// Population of the upper level at `times` (rising, from a time before the field on) in the actual field: the two-level
    /// Schrödinger equation without rotating-wave approximation, light along x, by midpoint exponentials of steps short beside its frequencies.
    pub fn populations(&self, field: &Field, times: &[f64]) -> Vec<f64> {
        let Some(&first) = times.first() else { return Vec::new() };
        let step = (2.0 * PI / 100.0 / self.transition).min(0.25 * sampling(field));
        let mut t = first.min(field.interval().0);
        let mut amplitudes = [Complex::new(1.0, 0.0), Complex::default()];
        let mut out = Vec::with_capacity(times.len());
        for &until in times {
            let count = ((until - t) / step).ceil().max(0.0) as usize;
            let h = if count == 0 { 0.0 } else { (until - t) / count as f64 };
            for i in 0..count {
                let e = field.electric_field(t + (i as f64 + 0.5) * h)[0];
                amplitudes = self.turned(amplitudes, e, h);
            }
            t = t.max(until);
            out.push(amplitudes[1].norm_sqr());
        }
        out
    }

    /// e^{-iHh} with H = [[-δ, v], [v, δ]] up to a common phase, 2δ the distance of the levels in the field.
    fn turned(&self, [a, b]: [Complex<f64>; 2], e: f64, h: f64) -> [Complex<f64>; 2] {
        let (delta, v) = (0.5 * (self.transition + e * self.asymmetry), e * self.dipole);
        let rate = delta.hypot(v);
        let (sin, cos) = (rate * h).sin_cos();
        let s = Complex::new(0.0, -sin / rate);
        [a * cos + s * (b * v - a * delta), b * cos + s * (a * v + b * delta)]
    }
}
