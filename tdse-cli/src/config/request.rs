//! What is asked, checked and in atomic units: plain data.

use tdse_core::choose::Pins;
use tdse_core::elements::Element;
use tdse_core::field::Field;
use tdse_core::potential::Potential;
use tdse_core::problem::{ElectronMethod, InitialState, PlaneLabel, Record};
use tdse_core::spectrum::Window;

use super::models::Models;
use super::raw;
use super::tables::Input;

/// One calculation.
#[derive(Clone, Debug, PartialEq)]
pub struct Request {
    /// Title on results and pictures.
    pub title: String,
    /// The model atom.
    pub atom: AtomRequest,
    /// The laser field.
    pub field: Field,
    /// What is recorded.
    pub record: Record,
    /// Numerics that the user fixed.
    pub pins: Pins,
    /// Way to the electron spectrum, as far as the user fixed it.
    pub electron_method: Option<ElectronMethod>,
    /// Relative error asked for of the dipole acceleration and of harmonic yields.
    pub accuracy: f64,
    /// What to do with pinned numerics that are known to be inadequate.
    pub inadequate: Inadequate,
    /// Which points of a scan share numerics.
    pub sharing: Sharing,
    /// What is derived and written.
    pub outputs: Outputs,
    /// Tables that the configuration names.
    pub inputs: Vec<Input>,
    /// The configuration as written, with defaults: what [`super::resolved`] starts from.
    pub written: raw::Configuration,
}

/// What to do with pinned numerics that are known to be inadequate.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Inadequate {
    /// Refuse them.
    Refused,
    /// Run, and say so in the results.
    Allowed,
}

/// Which points of a scan share numerics.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sharing {
    /// Each point has its own choice.
    PerPoint,
    /// The strictest choice serves all points.
    Common,
}

/// The model atom before its softening is known.
#[derive(Clone, Debug, PartialEq)]
pub struct AtomRequest {
    /// Dimensions of space.
    pub dimensions: usize,
    /// Potential energy.
    pub potential: AtomPotential,
    /// State before the field; in two dimensions its numbers count `labels`.
    pub initial: InitialState,
    /// The states of two dimensions that it names; empty in one.
    pub labels: Vec<PlaneLabel>,
}

impl AtomRequest {
    /// Number of the state of one dimension whose binding energy tunes the softening: of a superposition the lowest member.
    pub fn tuned_state(&self) -> usize {
        self.initial.lowest()
    }
}

/// Potential energy, perhaps without its softening.
#[derive(Clone, Debug, PartialEq)]
pub enum AtomPotential {
    /// All is given.
    Fixed(Potential),
    /// A Coulomb potential with softening.
    Softened {
        /// Charge of the ion.
        charge: f64,
        /// Screening length, bohr; `None` without screening.
        screening_length: Option<f64>,
        /// The softening, or what tunes it.
        softening: Softening,
    },
}

impl AtomPotential {
    /// The potential, with the softening that was found where one had to be tuned.
    pub fn with_softening(&self, tuned: f64) -> Potential {
        match self {
            Self::Fixed(potential) => potential.clone(),
            Self::Softened { charge, screening_length, softening } => {
                let softening = if let Softening::Given(given) = softening { *given } else { tuned };
                softened(*charge, *screening_length, softening)
            }
        }
    }

    /// Ionization energy that the softening has to be tuned to, hartree; `None` where there is nothing to tune.
    pub fn target_energy(&self) -> Option<f64> {
        match self {
            Self::Fixed(_) | Self::Softened { softening: Softening::Given(_), .. } => None,
            Self::Softened { softening: Softening::ForEnergy(energy), .. } => Some(*energy),
            Self::Softened { softening: Softening::ForElement(element), .. } => {
                Some(element.ionization_energy())
            }
        }
    }
}

fn softened(charge: f64, screening_length: Option<f64>, softening: f64) -> Potential {
    match screening_length {
        None => Potential::SoftCoulomb { charge, softening },
        Some(screening_length) => Potential::Screened { charge, softening, screening_length },
    }
}

/// The softening of a Coulomb potential, or what tunes it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Softening {
    /// Given, bohr.
    Given(f64),
    /// Tuned to this ionization energy, hartree.
    ForEnergy(f64),
    /// Tuned to the first ionization energy of an element.
    ForElement(&'static Element),
}

/// What is derived and written; `None` within an output is a default that the program still has to fill in.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Outputs {
    /// Spectrum of the harmonics.
    pub harmonics: Option<Harmonics>,
    /// Time-frequency map.
    pub time_frequency: Option<TimeFrequency>,
    /// Spectrum of the electrons.
    pub photoelectrons: Option<Photoelectrons>,
    /// Simpler models.
    pub models: Option<Models>,
}

/// Spectrum of the electrons.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Photoelectrons {
    /// End of the energy axis, hartree.
    pub max_energy: Option<f64>,
    /// Step of the energy axis, hartree.
    pub energy_step: Option<f64>,
}

/// Spectrum of the harmonics.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Harmonics {
    /// End of the energy axis, hartree.
    pub max_energy: Option<f64>,
    /// Step of the energy axis, hartree.
    pub energy_step: Option<f64>,
    /// Highest order of the yields.
    pub max_order: Option<u32>,
    /// Window over the acceleration.
    pub window: Window,
}

/// Time-frequency map with a Gaussian window.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TimeFrequency {
    /// Full width at half maximum of the window's square, a.u. of time.
    pub window_length: Option<f64>,
    /// End of the energy axis, hartree.
    pub max_energy: Option<f64>,
    /// Step of the energy axis, hartree.
    pub energy_step: Option<f64>,
    /// Step of the time axis, a.u. of time.
    pub time_step: Option<f64>,
}
