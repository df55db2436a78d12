//! Time–frequency map of the acceleration with a Gaussian window (Gabor).

use std::f64::consts::LN_2;

use num_complex::Complex;

use super::chirp::FourierSum;
use super::harmonics::{EnergyAxis, Window};
use crate::simulate::Schedule;

/// What map is wanted.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TimeFrequency {
    /// Full width at half maximum of the squared window g², a.u. of time.
    pub window_length: f64,
    /// Distance of the map's times, a.u.
    pub time_step: f64,
    /// Energies of the map.
    pub axis: EnergyAxis,
}

/// |∫ a(t) g(t - t₀) e^{iωt} dt|², g = exp(-(t - t₀)²/(2σ²)), FWHM of g² = 2σ√(ln 2).
#[derive(Clone, Debug, PartialEq)]
pub struct GaborMap {
    /// Times t₀, a.u.
    pub times: Vec<f64>,
    /// Energies.
    pub axis: EnergyAxis,
    /// Map, shape `[times, energies]`, flat, (bohr per a.u. of time)².
    pub intensity: Vec<f64>,
}

/// Flanks of the taper that brings the series to zero at both ends, in window lengths.
pub const TAPER: f64 = 2.0;

/// Gabor map (Gabor, J. IEE 93, 429 (1946)) of a recorded acceleration over the whole run.
///
/// The series is first brought to zero at both ends over [`TAPER`] window lengths, and the map keeps to what lies between:
/// an acceleration that has not died down by the end would fake a burst there.
///
/// # Panics
/// If `acceleration` does not belong to `schedule`, or a length of `wanted` is not positive.
pub fn gabor(acceleration: &[f64], schedule: &Schedule, wanted: &TimeFrequency) -> GaborMap {
    assert_eq!(acceleration.len(), schedule.steps + 1, "one sample per time");
    assert!(wanted.window_length > 0.0 && wanted.time_step > 0.0, "positive lengths");
    let (tau, last) = (schedule.time_step, schedule.steps);
    let length = tau * last as f64;
    let sigma = wanted.window_length / (2.0 * LN_2.sqrt());
    // Beyond 6.5 σ the window is below 1e-9.
    let reach = ((6.5 * sigma / tau).ceil() as usize).clamp(1, last);
    let samples = (2 * reach + 1).min(last + 1);
    let flank = TAPER * wanted.window_length;
    let count = ((length - 2.0 * flank) / wanted.time_step + 1e-9).floor().max(0.0) as usize + 1;
    let taper = Window::Taper { length: flank };
    let tapered: Vec<f64> = acceleration
        .iter()
        .enumerate()
        .map(|(n, a)| a * taper.weight(n as f64 * tau, length) * tau)
        .collect();
    let sum = FourierSum::new(samples, 0.0, tau, wanted.axis.points, wanted.axis.step);
    let mut map = GaborMap { times: Vec::with_capacity(count), axis: wanted.axis, intensity: Vec::new() };
    for i in 0..count {
        let centre = flank.min(0.5 * length) + i as f64 * wanted.time_step;
        let first = ((centre / tau).round() as usize).saturating_sub(reach).min(last + 1 - samples);
        let part: Vec<f64> = (first..first + samples)
            .map(|n| {
                let u = (n as f64 * tau - centre) / sigma;
                tapered[n] * (-0.5 * u * u).exp()
            })
            .collect();
        map.times.push(schedule.start + centre);
        map.intensity.extend(sum.evaluate(&part).iter().map(Complex::norm_sqr));
    }
    map
}
