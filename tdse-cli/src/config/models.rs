//! The simpler models that a request asks for: plain data.

use tdse_core::model::curve::{Curve, RateOver};
use tdse_core::model::metrics::Tolerance;

/// Simpler models beside the full result.
#[derive(Clone, Debug, PartialEq)]
pub struct Models {
    /// Differences that still count as agreement.
    pub tolerance: Tolerance,
    /// The models, in the order of the schema.
    pub asked: Vec<Model>,
}

/// One of them.
#[derive(Clone, Debug, PartialEq)]
pub enum Model {
    /// Classical paths.
    ThreeStep,
    /// Strong-field approximation.
    StrongField(Survival),
    /// Quantum orbits.
    QuantumOrbits,
    /// Tunnelling rates; the orbital in three dimensions has this angular momentum, and none along the field.
    Tunnelling {
        /// Angular momentum.
        angular_momentum: u32,
    },
    /// First order in the field.
    Perturbation,
    /// Strong-field packet times the atom's own recombination dipole.
    Recombination,
    /// A curve of the user's.
    Curve {
        /// What it is a curve of.
        of: CurveOf,
        /// Values over energies in hartree; rates in 1/a.u. of time over fields in a.u. or intensities in W/cm².
        curve: Curve,
    },
}

/// What the strong-field approximation takes to be left of the bound state.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Survival {
    /// All of it.
    Whole,
    /// What the quasi-static rate of the model atom leaves.
    Depleted,
}

/// What a curve is laid beside.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum CurveOf {
    /// The harmonic spectrum.
    Harmonics,
    /// The electron spectrum.
    Photoelectrons,
    /// The ionization probability, by rates over this.
    Ionization(RateOver),
}

impl Model {
    /// Its name in configurations and files.
    pub fn name(&self) -> &'static str {
        match self {
            Self::ThreeStep => "three_step",
            Self::StrongField(_) => "strong_field",
            Self::QuantumOrbits => "quantum_orbits",
            Self::Tunnelling { .. } => "tunnelling",
            Self::Perturbation => "perturbation",
            Self::Recombination => "recombination",
            Self::Curve { .. } => "curve",
        }
    }
}
