//! The softening that gives a model atom a wanted binding energy.

use super::root::brent;
use super::{StationaryError, level, plane_level, radial_level};
use crate::potential::Potential;
use crate::problem::PlaneLabel;

/// A potential whose softening is still open.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Softenable {
    /// See [`Potential::SoftCoulomb`].
    SoftCoulomb {
        /// Charge of the ion.
        charge: f64,
    },
    /// See [`Potential::Screened`].
    Screened {
        /// Charge at short range.
        charge: f64,
        /// Screening length, bohr.
        screening_length: f64,
    },
}

impl Softenable {
    /// The potential with this softening, bohr.
    pub fn with_softening(&self, softening: f64) -> Potential {
        match *self {
            Self::SoftCoulomb { charge } => Potential::SoftCoulomb { charge, softening },
            Self::Screened { charge, screening_length } => {
                Potential::Screened { charge, softening, screening_length }
            }
        }
    }

    fn charge(&self) -> f64 {
        match *self {
            Self::SoftCoulomb { charge } | Self::Screened { charge, .. } => charge,
        }
    }
}

/// Softening in bohr at which state `number` has `energy` (negative, hartree): no grid involved, converged to
/// 1e-11 hartree.
///
/// # Errors
/// [`StationaryError::OutOfReach`] where no softening between 0.02/Z and 200/Z bohr gives that energy.
pub fn tune_softening(atom: &Softenable, number: usize, energy: f64) -> Result<f64, StationaryError> {
    tuned(atom, number, energy, |potential| Ok(level(potential, number)?.energy))
}

/// As [`tune_softening`] in two dimensions, for the state of angular momentum ±`angular` with `number` radial nodes.
///
/// # Errors
/// As [`tune_softening`].
pub fn tune_radial_softening(
    atom: &Softenable,
    angular: u32,
    number: usize,
    energy: f64,
) -> Result<f64, StationaryError> {
    tuned(atom, number, energy, |potential| Ok(radial_level(potential, angular, number)?.energy))
}

/// As [`tune_softening`] in two dimensions, for the lowest of the states that `labels` name.
///
/// # Errors
/// As [`tune_softening`].
pub fn tune_plane_softening(
    atom: &Softenable,
    labels: &[PlaneLabel],
    energy: f64,
) -> Result<f64, StationaryError> {
    tuned(atom, 0, energy, |potential| {
        labels.iter().try_fold(0.0f64, |lowest, label| match plane_level(potential, *label) {
            Ok(level) => Ok(lowest.min(level.energy)),
            Err(StationaryError::NoSuchState { .. }) => Ok(lowest),
            Err(error) => Err(error),
        })
    })
}

fn tuned(
    atom: &Softenable,
    number: usize,
    energy: f64,
    level: impl Fn(&Potential) -> Result<f64, StationaryError>,
) -> Result<f64, StationaryError> {
    // A softening so large that the state is not bound any more counts as energy zero.
    let energy_at = |softening: f64| match level(&atom.with_softening(softening)) {
        Ok(energy) => Ok(energy),
        Err(StationaryError::NoSuchState { .. }) => Ok(0.0),
        Err(other) => Err(other),
    };
    let (smallest, largest) = (0.02 / atom.charge(), 200.0 / atom.charge());
    let mut low = 1.0 / atom.charge();
    let mut high = low;
    let mut at_low = energy_at(low)?;
    let mut at_high = at_low;
    while at_low > energy && low > smallest {
        low = (0.5 * low).max(smallest);
        at_low = energy_at(low)?;
    }
    while at_high < energy && high < largest {
        high = (2.0 * high).min(largest);
        at_high = energy_at(high)?;
    }
    if at_low > energy || at_high < energy {
        return Err(StationaryError::OutOfReach {
            number,
            energy,
            smallest,
            largest,
            lowest: energy_at(smallest)?,
            highest: energy_at(largest)?,
        });
    }
    let mut failure = None;
    let difference = |softening: f64| match energy_at(softening) {
        Ok(found) => found - energy,
        Err(error) => {
            failure = Some(error);
            0.0
        }
    };
    let softening = brent(difference, [(low, at_low - energy), (high, at_high - energy)], 1e-13 * high);
    failure.map_or(Ok(softening), Err)
}
