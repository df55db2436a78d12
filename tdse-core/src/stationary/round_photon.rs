//! One photon between a round bound state and the continuum of two dimensions: from m to m ± 1.

use std::f64::consts::PI;

use num_complex::Complex;

use super::{NoContinuum, RadialFunction, RoundContinuum, RoundWave, StationaryError, radial_level};
use crate::potential::Potential;
use crate::quadrature::gauss_6;
use crate::units::SPEED_OF_LIGHT_AU;

/// Length over which six points integrate a product of a bound state and a wave, bohr and in units of 1/k.
const PANEL: (f64, f64) = (0.25, 1.0);

/// Why there are no transitions.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum NoTransition {
    /// The level.
    #[error(transparent)]
    Level(#[from] StationaryError),
    /// The continuum.
    #[error(transparent)]
    Continuum(#[from] NoContinuum),
}

/// Transitions of a level R e^{imφ}/√2π to the continuum.
#[derive(Clone, Debug)]
pub struct RoundTransitions {
    m: i32,
    energy: f64,
    /// (r, weight r² R) of a quadrature up to where the level ends.
    moved: Vec<(f64, f64)>,
    /// Of angular momenta m - 1 and m + 1.
    channels: [RoundContinuum; 2],
}

/// Matrix elements at one momentum, for angular momenta m - 1 and m + 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RoundDipole {
    /// Momentum k > 0 of the free electron, 1/bohr.
    pub momentum: f64,
    /// D = ∫R_k R r² dr, bohr^{3/2}: ⟨m±1|x|m⟩ = D/2, ⟨m±1|y|m⟩ = ∓iD/2.
    pub elements: [f64; 2],
    /// Phases δ of the waves, rad.
    pub phases: [f64; 2],
}

impl RoundTransitions {
    /// Of the level with `number` radial nodes at angular momentum `m`, to momenta up to `fastest`, 1/bohr.
    ///
    /// # Errors
    /// [`NoTransition`].
    pub fn new(potential: &Potential, m: i32, number: usize, fastest: f64) -> Result<Self, NoTransition> {
        let level = radial_level(potential, m.unsigned_abs(), number)?;
        let bound = level.radial_function(potential, m.unsigned_abs());
        let channel = |m: i32| RoundContinuum::new(potential, m.unsigned_abs(), fastest, level.reach);
        let channels = [channel(m - 1)?, channel(m + 1)?];
        let moved = moved(&bound, level.reach, fastest);
        Ok(Self { m, energy: level.energy, moved, channels })
    }

    /// Angular momentum of the level.
    pub fn angular_momentum(&self) -> i32 {
        self.m
    }

    /// Energy of the level, hartree.
    pub fn energy(&self) -> f64 {
        self.energy
    }

    /// Matrix elements at momentum `k`.
    ///
    /// # Panics
    /// If `k` is not positive or above the largest momentum.
    pub fn at(&self, k: f64) -> RoundDipole {
        let waves = self.channels.each_ref().map(|channel| channel.wave(k));
        RoundDipole {
            momentum: k,
            elements: waves.each_ref().map(|wave| self.element(|r| wave.radial.value(r))),
            phases: waves.map(|RoundWave { phase, .. }| phase),
        }
    }

    /// Exact over plane-wave dipole of an electron that comes back with momentum k > 0 to a level without angular momentum, the same for
    /// every direction and either component: e^{iδ} D/D₀, D₀ = √k ∫J₁(kr) R r² dr.
    ///
    /// # Panics
    /// As [`Self::at`], and if the level has angular momentum.
    pub fn recombination_ratio(&self, k: f64) -> Complex<f64> {
        assert_eq!(self.m, 0, "a level without angular momentum");
        let exact = self.channels[1].wave(k);
        let plane = self.element(|r| k.sqrt() * libm::j1(k * r));
        Complex::from_polar(self.element(|r| exact.radial.value(r)) / plane, exact.phase)
    }

    fn element(&self, wave: impl Fn(f64) -> f64) -> f64 {
        self.moved.iter().map(|&(r, weight)| weight * wave(r)).sum()
    }
}

fn moved(bound: &RadialFunction, reach: f64, fastest: f64) -> Vec<(f64, f64)> {
    let count = (reach / PANEL.0.min(PANEL.1 / fastest)).ceil();
    let panel = reach / count;
    let points =
        (0..count as usize).flat_map(|i| gauss_6().map(move |(at, w)| ((i as f64 + at) * panel, w * panel)));
    points.map(|(r, weight)| (r, weight * r * r * bound.value(r))).collect()
}

impl RoundDipole {
    /// Photoionization cross-section 4π² ω/c Σ |⟨m±1|x|m⟩|²/k at photon energy `photon` = k²/2 - E, bohr²: of a model atom in two
    /// dimensions, light polarized in its plane.
    pub fn cross_section(&self, photon: f64) -> f64 {
        let strength: f64 = self.elements.iter().map(|d| 0.25 * d * d).sum();
        4.0 * PI * PI * photon / SPEED_OF_LIGHT_AU * strength / self.momentum
    }
}
