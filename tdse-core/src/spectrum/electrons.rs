//! Photoelectron spectra: what a detector far away sees of ψ, momentum by momentum and direction by direction.

use num_complex::Complex;

use super::EnergyAxis;
use crate::grid::Axis;
use crate::outgoing::{Collector, Outgoing};
use crate::stationary::ScatteringStates;

/// Where the energy axis starts, as a part of its step: at E = 0 itself there is no momentum to project on, and
/// dP/dE is the limit from above.
const THRESHOLD: f64 = 1e-3;

/// Largest probability outside of a bound state that fits into a box.
const FITS: f64 = 1e-10;

/// Amplitudes of free electrons, ∫ (|left|² + |right|²) dk = probability to be free.
#[derive(Clone, Debug, PartialEq)]
pub struct ContinuumAmplitude {
    /// Momenta k > 0, rising, 1/bohr.
    pub momenta: Vec<f64>,
    /// Amplitude of momentum -k, bohr^{1/2}.
    pub left: Vec<Complex<f64>>,
    /// Amplitude of momentum +k, bohr^{1/2}.
    pub right: Vec<Complex<f64>>,
}

impl ContinuumAmplitude {
    /// Projects ψ (length gauge, field off, bound part removed) on the scattering states at `momenta`.
    ///
    /// # Panics
    /// If `psi` does not have the length of the axis of `states`, or a momentum is not positive.
    pub fn of(psi: &[Complex<f64>], states: &ScatteringStates, momenta: Vec<f64>) -> Self {
        let (left, right) = momenta.iter().map(|&k| states.project(psi, k).into()).unzip();
        Self { momenta, left, right }
    }

    /// These amplitudes, of what was left in the box, together with what was collected before, coherently.
    ///
    /// # Panics
    /// If the momenta are not those of the collector.
    #[must_use]
    pub fn with_collected(mut self, collector: &Collector, outgoing: &Outgoing) -> Self {
        assert_eq!(self.momenta, collector.momenta(), "the momenta of the collector");
        for (n, &k) in self.momenta.iter().enumerate() {
            let phase = collector.final_phase(k);
            self.left[n] = phase * self.left[n] + outgoing.left[n];
            self.right[n] = phase * self.right[n] + outgoing.right[n];
        }
        self
    }

    /// ∫|a|² dk from threshold to the last momentum, by direction: `[left, right]` (trapezoids between the momenta, however
    /// they are spaced; below the first one the density is taken as constant).
    pub fn probability(&self) -> [f64; 2] {
        [&self.left, &self.right].map(|side| {
            let first = self.momenta.first().zip(side.first()).map_or(0.0, |(k, a)| k * a.norm_sqr());
            let pairs = self.momenta.windows(2).zip(side.windows(2));
            first + pairs.map(|(k, a)| 0.5 * (k[1] - k[0]) * (a[0].norm_sqr() + a[1].norm_sqr())).sum::<f64>()
        })
    }

    /// Momenta of both directions, rising from -k_max to k_max, and |a(k)|² there, bohr.
    pub fn momentum_density(&self) -> (Vec<f64>, Vec<f64>) {
        let backward = self.momenta.iter().zip(&self.left).rev().map(|(k, a)| (-k, a.norm_sqr()));
        let forward = self.momenta.iter().zip(&self.right).map(|(k, a)| (*k, a.norm_sqr()));
        backward.chain(forward).unzip()
    }
}

/// Momenta √(2E) at the energies of `axis`, the first one just above threshold, 1/bohr.
pub fn momenta_of(axis: EnergyAxis) -> Vec<f64> {
    let energy = |n: usize| if n == 0 { THRESHOLD * axis.step } else { n as f64 * axis.step };
    (0..axis.points).map(|n| (2.0 * energy(n)).sqrt()).collect()
}

/// The momenta (n + ½) `spacing` below `largest`, so that both directions together are uniform, 1/bohr.
pub fn uniform_momenta(largest: f64, spacing: f64) -> Vec<f64> {
    let count = (largest / spacing).floor() as usize;
    (0..count).map(|n| (n as f64 + 0.5) * spacing).collect()
}

/// Energy spectrum by direction.
#[derive(Clone, Debug, PartialEq)]
pub struct Electrons {
    /// Where it is evaluated.
    pub axis: EnergyAxis,
    /// dP/dE of electrons that leave to the left, |a(-k)|²/k, 1/hartree.
    pub left: Vec<f64>,
    /// dP/dE of electrons that leave to the right, |a(k)|²/k, 1/hartree.
    pub right: Vec<f64>,
}

impl Electrons {
    /// Spectrum from amplitudes at [`momenta_of`] the axis.
    ///
    /// # Panics
    /// If the amplitudes do not belong to that axis.
    pub fn new(axis: EnergyAxis, amplitude: &ContinuumAmplitude) -> Self {
        assert_eq!(amplitude.momenta, momenta_of(axis), "amplitudes at the momenta of the energy axis");
        let per_energy = |side: &[Complex<f64>]| {
            side.iter().zip(&amplitude.momenta).map(|(a, k)| a.norm_sqr() / k).collect()
        };
        Self { axis, left: per_energy(&amplitude.left), right: per_energy(&amplitude.right) }
    }

    /// dP/dE of both directions, 1/hartree.
    pub fn total(&self) -> Vec<f64> {
        self.left.iter().zip(&self.right).map(|(l, r)| l + r).collect()
    }

    /// ∫ dP/dE over the part of the axis from `lowest` to `highest` hartree, by direction: `[left, right]`.
    pub fn yields(&self, lowest: f64, highest: f64) -> [f64; 2] {
        let step = self.axis.step;
        let first = ((lowest / step - 1e-9).ceil().max(0.0) as usize).min(self.axis.points);
        let end = ((highest / step + 1e-9).floor() as usize + 1).clamp(first, self.axis.points);
        [&self.left, &self.right].map(|side| trapezoid(&side[first..end], step))
    }
}

/// (right - left)/(right + left); `None` where neither is.
pub fn asymmetry([left, right]: [f64; 2]) -> Option<f64> {
    let sum = right + left;
    (sum > 0.0).then(|| (right - left) / sum)
}

/// ψ without its part in those of the bound `states` that fit into |x| < `inner`, bohr.
///
/// The others are left alone: a state that the box or its absorber squeezes is not orthogonal to the continuum, while the
/// true one is, and drops out of a projection by itself. So are states that are not converged: what they hold of the continuum
/// would be taken from it.
///
/// # Panics
/// If the lengths differ.
pub fn without_bound(psi: &[Complex<f64>], states: &[Vec<f64>], axis: Axis, inner: f64) -> Vec<Complex<f64>> {
    let mut rest = psi.to_vec();
    for state in states.iter().filter(|state| outside(state, axis, inner) < FITS) {
        assert_eq!(state.len(), psi.len(), "wave function and bound state have the same length");
        let overlap: Complex<f64> = state.iter().zip(psi).map(|(s, p)| p * s).sum();
        for (r, s) in rest.iter_mut().zip(state) {
            *r -= overlap * axis.spacing * s;
        }
    }
    rest
}

/// Probability of a bound state beyond `inner`.
fn outside(state: &[f64], axis: Axis, inner: f64) -> f64 {
    axis.positions().zip(state).filter(|(x, _)| x.abs() > inner).map(|(_, s)| s * s).sum::<f64>()
        * axis.spacing
}

fn trapezoid(values: &[f64], step: f64) -> f64 {
    match values {
        [] | [_] => 0.0,
        [first, .., last] => step * (values.iter().sum::<f64>() - 0.5 * (first + last)),
    }
}
