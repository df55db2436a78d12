//! How smooth an atom is: the distance that says how fast its wave functions fall in momentum.

use num_complex::Complex;
use rustfft::FftPlanner;

use crate::cubic::Cubic;
use crate::potential::Potential;
use crate::stationary::{Level, StationaryError, radial_level};

/// Fall of a wave function in momentum by which a table's length is found, in e-folds: well above the errors of the level.
const FALL: f64 = 16.0;
/// Most points of the wave function that is looked at.
const MOST: usize = 1 << 16;

/// Distance ℓ of the potential's nearest singularity from the real axis, bohr: wave functions fall as e^{-kℓ} with it in
/// momentum. A Gaussian well and a harmonic potential have none; a width serves in its place.
///
/// A table has the length of its points, however smooth what it holds: its spline ripples from point to point, and a grid
/// that is coarser takes the ripple for a constant force (tried: points 0.1 bohr apart on a grid of 0.3 bohr, acceleration
/// off by 1.4e-3).
pub(super) fn analytic_length(potential: &Potential) -> f64 {
    match potential {
        Potential::SoftCoulomb { softening, .. } | Potential::Screened { softening, .. } => *softening,
        Potential::PoschlTeller { width, .. } => std::f64::consts::FRAC_PI_2 * width,
        Potential::GaussianWell { width, .. } => 1.5 * width,
        Potential::Harmonic { frequency } => 1.5 / frequency.sqrt(),
        Potential::Sampled(table) => 2.0 * table.spacing(),
    }
}

/// The same along a line, where a grid takes of a table what it can hold: there the table's length is that of the fall of
/// its `level` in momentum, beyond the largest one of a classical electron in it.
pub(super) fn along_a_line(potential: &Potential, level: &Level) -> f64 {
    let length = analytic_length(potential);
    let Potential::Sampled(table) = potential else { return length };
    let (first, last) = table.domain();
    let ends = [(-level.reach).max(first), level.reach.min(last)];
    length.max(of_table(table, ends, |positions| level.wave_function(potential, positions)))
}

/// The same in a plane, by the lowest level of a table along a diameter. Points of a square grid lie at all distances from the centre, so
/// the ripple that they sample as it is makes no constant force (measured in `tests/plane_table.rs`: points 0.1 bohr apart on
/// grids of 0.3 and 0.4 bohr, forces off by 1.5e-5 at most).
///
/// # Errors
/// [`StationaryError::NoSuchState`] where nothing is bound.
pub(super) fn in_a_plane(potential: &Potential) -> Result<f64, StationaryError> {
    let length = analytic_length(potential);
    let Potential::Sampled(table) = potential else { return Ok(length) };
    let level = radial_level(potential, 0, 0)?;
    let radial = level.radial_function(potential, 0);
    let along = |positions: &[f64]| positions.iter().map(|x| radial.value(x.abs())).collect();
    Ok(length.max(of_table(table, [-level.reach, level.reach], along)))
}

/// The length of a table by the fall of a wave function between `ends` in momentum.
fn of_table(table: &Cubic, [first, last]: [f64; 2], wave: impl Fn(&[f64]) -> Vec<f64>) -> f64 {
    let count = (((last - first) / (0.5 * table.spacing())) as usize).clamp(64, MOST);
    let step = (last - first) / (count - 1) as f64;
    let positions: Vec<f64> = (0..count).map(|i| first + i as f64 * step).collect();
    let mut momenta: Vec<Complex<f64>> = wave(&positions).into_iter().map(Complex::from).collect();
    FftPlanner::new().plan_fft_forward(count).process(&mut momenta);
    let heights: Vec<f64> = momenta[..count / 2].iter().map(|amplitude| amplitude.norm()).collect();
    let floor = heights.iter().copied().fold(0.0, f64::max) * (-FALL).exp();
    let highest = heights.iter().rposition(|height| *height > floor).unwrap_or(0);
    let momentum = std::f64::consts::TAU * highest as f64 / (count as f64 * step);
    let fastest = (-2.0 * table.lowest().min(0.0)).sqrt();
    FALL / (momentum - fastest).max(1.0)
}
