//! Harmonic spectra from the dipole acceleration.

use std::f64::consts::PI;

use num_complex::Complex;

use super::chirp::FourierSum;
use crate::simulate::Schedule;
use crate::units::SPEED_OF_LIGHT_AU;

/// Weight w(t) on the series before it is transformed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Window {
    /// w = 1.
    None,
    /// sin²(πu), u from 0 to 1 over the run.
    Hann,
    /// 0.42 - 0.5 cos 2πu + 0.08 cos 4πu.
    Blackman,
    /// 1, falling as sin² to 0 over this time at both ends, a.u.
    Taper {
        /// Length of each flank, a.u. of time.
        length: f64,
    },
}

impl Window {
    /// Name of the window as files state it.
    pub fn name(&self) -> &'static str {
        match self {
            Self::None => "none",
            Self::Hann => "hann",
            Self::Blackman => "blackman",
            Self::Taper { .. } => "taper",
        }
    }

    /// w at `time` of a run from 0 to `length`, a.u.; what lies behind counts as its end.
    pub fn weight(&self, time: f64, length: f64) -> f64 {
        let u = (time / length).min(1.0);
        match self {
            Self::None => 1.0,
            Self::Hann => (PI * u).sin().powi(2),
            Self::Blackman => 0.42 - 0.5 * (2.0 * PI * u).cos() + 0.08 * (4.0 * PI * u).cos(),
            Self::Taper { length: flank } => {
                let edge = time.min(length - time).max(0.0);
                if edge >= *flank { 1.0 } else { (0.5 * PI * edge / flank).sin().powi(2) }
            }
        }
    }
}

/// Uniform energy axis 0, step, 2 step, …, hartree.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct EnergyAxis {
    /// Step, hartree.
    pub step: f64,
    /// Number of energies.
    pub points: usize,
}

impl EnergyAxis {
    /// Axis from 0 to the last multiple of `step` that is not beyond `max` (within rounding).
    pub fn up_to(max: f64, step: f64) -> Self {
        Self { step, points: (max / step + 1e-9).floor() as usize + 1 }
    }

    /// All energies, hartree.
    pub fn values(&self) -> Vec<f64> {
        (0..self.points).map(|k| k as f64 * self.step).collect()
    }
}

/// Spectrum of one component of the acceleration.
#[derive(Clone, Debug, PartialEq)]
pub struct Harmonics {
    /// Where it is evaluated.
    pub axis: EnergyAxis,
    /// a(ω) = ∫ a(t) w(t) e^{iωt} dt, bohr per a.u. of time.
    pub amplitude: Vec<Complex<f64>>,
}

impl Harmonics {
    /// |a(ω)|².
    pub fn spectrum(&self) -> Vec<f64> {
        self.amplitude.iter().map(Complex::norm_sqr).collect()
    }

    /// arg a(ω), rad, with t = 0 as in the crate's conventions.
    pub fn phase(&self) -> Vec<f64> {
        self.amplitude.iter().map(|a| a.arg()).collect()
    }
}

/// a(ω) of a recorded acceleration, evaluated right on `axis` (trapezoidal rule in time, which converges fast
/// for a series that a window brings to zero smoothly).
///
/// # Panics
/// If `acceleration` does not belong to `schedule`.
pub fn harmonics(acceleration: &[f64], schedule: &Schedule, window: Window, axis: EnergyAxis) -> Harmonics {
    assert_eq!(acceleration.len(), schedule.steps + 1, "one sample per time");
    let weighted = windowed(acceleration, schedule, window);
    let sum = FourierSum::new(weighted.len(), schedule.start, schedule.time_step, axis.points, axis.step);
    Harmonics { axis, amplitude: sum.evaluate(&weighted) }
}

/// a(t) w(t) τ, the ends halved.
pub(super) fn windowed(acceleration: &[f64], schedule: &Schedule, window: Window) -> Vec<f64> {
    let (tau, last) = (schedule.time_step, schedule.steps);
    let length = schedule.end - schedule.start;
    let weight =
        |n: usize| window.weight(n as f64 * tau, length) * if n == 0 || n == last { 0.5 } else { 1.0 };
    acceleration.iter().enumerate().map(|(n, a)| a * weight(n) * tau).collect()
}

/// Energy radiated per unit photon energy, 2|a(ω)|²/(3πc³) (Larmor; Jackson, Classical Electrodynamics, eq. 14.22,
/// integrated over ω > 0), dimensionless (hartree per hartree).
pub fn radiated_energy(spectrum: f64) -> f64 {
    2.0 * spectrum / (3.0 * PI * SPEED_OF_LIGHT_AU.powi(3))
}

/// Energy radiated within half a photon of every order 1 … `orders` of `photon`, hartree.
///
/// The spectrum is sampled finely enough for the length of the run, whatever axis is drawn.
pub fn order_yields(
    acceleration: &[f64],
    schedule: &Schedule,
    window: Window,
    photon: f64,
    orders: usize,
) -> Vec<f64> {
    let axis = sampled_by_order(schedule, photon, orders);
    let spectrum = harmonics(acceleration, schedule, window, axis).spectrum();
    sums_by_order(&spectrum, axis, orders)
}

/// Axis to half a photon beyond the last order: four samples per resolvable width 2π/length, an even number per half photon. Order q
/// stands at its index q (points - 1)/(orders + ½).
pub fn sampled_by_order(schedule: &Schedule, photon: f64, orders: usize) -> EnergyAxis {
    // Of the time asked for, as the windows: runs that differ in their step alone have one axis. Whole cycles within rounding are whole.
    let cycles = photon * (schedule.end - schedule.start) / (2.0 * PI);
    let per_half = 2 * (cycles - 1e-9).ceil().max(4.0) as usize;
    EnergyAxis { step: 0.5 * photon / per_half as f64, points: (2 * orders + 1) * per_half + 1 }
}

/// Radiated energy within half a photon of every order of a spectrum on [`sampled_by_order`], hartree.
///
/// # Panics
/// If the spectrum is shorter than the axis.
pub fn sums_by_order(spectrum: &[f64], axis: EnergyAxis, orders: usize) -> Vec<f64> {
    let per_half = (axis.points - 1) / (2 * orders + 1);
    (1..=orders)
        .map(|order| {
            let from = (2 * order - 1) * per_half;
            let part = &spectrum[from..=from + 2 * per_half];
            let inner: f64 = part[1..2 * per_half].iter().sum();
            radiated_energy(inner + 0.5 * (part[0] + part[2 * per_half])) * axis.step
        })
        .collect()
}
