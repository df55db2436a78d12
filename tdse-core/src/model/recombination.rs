//! Returning wave packet times the atom's own recombination dipole: the strong-field approximation describes the packet, the exact
//! scattering states what it does at the nucleus (Morishita, Le, Chen, Lin, Phys. Rev. Lett. 100, 013903 (2008)).

use std::f64::consts::PI;

use num_complex::Complex;

use super::strong_field::Ground;
use crate::spectrum::Harmonics;
use crate::stationary::{RoundTransitions, ScatteringStates, transition_dipole};

/// ⟨n|x|ψ⁺_k⟩/⟨n|x|k⟩, exact over plane wave, of electrons that come in with momentum k > 0, mean over both directions; they are the same for a
/// symmetric atom.
///
/// # Panics
/// If the state does not have the length of the axis that `states` were made for, or k is not positive.
pub fn recombination_ratio(states: &ScatteringStates, ground: &Ground, k: f64) -> Complex<f64> {
    let exact = transition_dipole(states, ground.axis, ground.state, k).recombination().map(|d| -d);
    let scale = ground.axis.spacing / (2.0 * PI).sqrt();
    // ⟨n|x|k⟩ by the sum over the grid; for -k its conjugate.
    let plane: Complex<f64> =
        ground.axis.positions().zip(ground.state).map(|(x, n)| Complex::cis(k * x) * (x * n * scale)).sum();
    0.5 * (exact[0] / plane.conj() + exact[1] / plane)
}

/// Amplitudes of the strong-field approximation with each photon energy's plane wave dipole replaced by the atom's own at
/// k = √(2(ω - Ip)); zero up to the ionization energy, and meaningless close above it, where the plane wave's dipole vanishes.
///
/// # Panics
/// If the state does not have the length of the axis that `states` were made for.
pub fn recombined(harmonics: &Harmonics, states: &ScatteringStates, ground: &Ground) -> Harmonics {
    scaled(harmonics, ground.ionization_energy, |k| recombination_ratio(states, ground, k))
}

/// The same of either component in two dimensions, for a level without angular momentum: its dipole is along the returning momentum.
///
/// # Panics
/// As [`RoundTransitions::recombination_ratio`].
pub fn recombined_on_plane(harmonics: &Harmonics, transitions: &RoundTransitions) -> Harmonics {
    scaled(harmonics, -transitions.energy(), |k| transitions.recombination_ratio(k))
}

fn scaled(harmonics: &Harmonics, ionization_energy: f64, ratio: impl Fn(f64) -> Complex<f64>) -> Harmonics {
    let energies = harmonics.axis.values();
    let amplitude = harmonics.amplitude.iter().zip(energies).map(|(a, energy)| {
        let kinetic = energy - ionization_energy;
        if kinetic > 0.0 { a * ratio((2.0 * kinetic).sqrt()) } else { Complex::default() }
    });
    Harmonics { axis: harmonics.axis, amplitude: amplitude.collect() }
}
