//! One photon between a bound state and the continuum: dipoles, ionization rate, cross-section, recombination.

use std::f64::consts::PI;

use num_complex::Complex;

use super::ScatteringStates;
use crate::grid::Axis;
use crate::units::SPEED_OF_LIGHT_AU;

/// Dipole matrix elements between a bound state and the scattering states at one momentum.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TransitionDipole {
    /// Momentum k > 0 of the free electron, 1/bohr.
    pub momentum: f64,
    /// ⟨ψ_-k|x|n⟩ and ⟨ψ_k|x|n⟩ for electrons that leave to the left and to the right, bohr^{3/2}.
    pub ionization: [Complex<f64>; 2],
}

/// ⟨ψ_±k|x|n⟩ of a bound state `bound`, ∫n² = 1, on the points of the axis that `states` were made for.
///
/// # Panics
/// If the lengths differ, or k is not positive.
pub fn transition_dipole(states: &ScatteringStates, axis: Axis, bound: &[f64], k: f64) -> TransitionDipole {
    let moved: Vec<_> = axis.positions().zip(bound).map(|(x, n)| Complex::new(x * n, 0.0)).collect();
    TransitionDipole { momentum: k, ionization: states.project(&moved, k) }
}

impl TransitionDipole {
    /// Ionization rate over E0² in a weak field E0 cos ωt whose photon leads to this momentum, 1/a.u. of time per a.u.
    /// of field squared: 2π (1/2)² Σ± |⟨ψ_±k|x|n⟩|²/k (Fermi's golden rule; 1/k is the density of states).
    pub fn golden_rule_rate(&self) -> f64 {
        0.5 * PI * self.strength() / self.momentum
    }

    /// Photoionization cross-section 4π² ω/c Σ± |⟨ψ_±k|x|n⟩|²/k at photon energy `photon` = k²/2 - E_n, bohr².
    ///
    /// Of a model atom in one dimension, with light polarized along its axis.
    pub fn cross_section(&self, photon: f64) -> f64 {
        4.0 * PI * PI * photon / SPEED_OF_LIGHT_AU * self.strength() / self.momentum
    }

    /// ⟨n|-x|ψ⁺⟩ for electrons that come in with momentum -k and k, bohr^{3/2}: by ψ⁺_k = (ψ⁻_-k)* the same integrals.
    pub fn recombination(&self) -> [Complex<f64>; 2] {
        let [left, right] = self.ionization;
        [-right, -left]
    }

    fn strength(&self) -> f64 {
        self.ionization.iter().map(Complex::norm_sqr).sum()
    }
}
