//! How smooth an atom is: the distance that says how fast its wave functions fall in momentum.

use crate::potential::Potential;

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
