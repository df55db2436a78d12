//! The orbits that lead to the highest photon energy of an actual field.

use super::{Continued, QuantumOrbits};
use crate::field::{Envelope, Field};
use crate::model::three_step::{Extreme, Return, ThreeStep, strongest_part};

/// Part of the highest return energy by which another electron may return with less and still stand for it.
const SHORT_OF_HIGHEST: f64 = 0.01;

/// Why a field has no quantum orbits.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum NotAnalytic {
    /// It comes from a table.
    #[error("a table is known at real times alone, and quantum orbits start at complex ones")]
    Sampled,
    /// The orbits of highest energy pass where the field is not analytic.
    #[error(
        "the electron of highest energy passes a joint of an envelope, where nothing continues to complex times"
    )]
    Joint,
    /// Nothing returns.
    #[error("no electron returns in this field")]
    NoReturn,
}

impl QuantumOrbits {
    /// The orbits around the electron that classically returns with the highest energy, in `dimensions` dimensions.
    ///
    /// # Errors
    /// [`NotAnalytic`].
    pub fn highest(field: &Field, ionization_energy: f64, dimensions: u32) -> Result<Self, NotAnalytic> {
        if field.sampled.is_some() {
            return Err(NotAnalytic::Sampled);
        }
        let (strongest, direction) = strongest_part(field);
        let model = ThreeStep::new(&strongest);
        let within = |path: &Return| {
            let continued = Continued::around(field, path.emission).ok()?;
            let orbits = Self {
                field: continued,
                direction,
                classical: [path.emission, path.time],
                ionization_energy,
                dimensions,
            };
            (path.time <= orbits.field.interval()[1]).then_some(orbits)
        };
        let highest = model.highest(1, Extreme::Return).ok_or(NotAnalytic::NoReturn)?;
        if let Some(orbits) = within(&highest) {
            return Ok(orbits);
        }
        let mut others = model.all_returns(1);
        others.retain(|path| path.energy > (1.0 - SHORT_OF_HIGHEST) * highest.energy);
        others.sort_by(|a, b| b.energy.total_cmp(&a.energy));
        others.iter().find_map(within).ok_or(NotAnalytic::Joint)
    }

    /// Whether [`Self::highest`] finds them: at once where the field has no joint between its ends.
    ///
    /// # Errors
    /// [`NotAnalytic`].
    pub fn fit(field: &Field) -> Result<(), NotAnalytic> {
        let joined = field.pulses.iter().any(|pulse| matches!(pulse.envelope, Envelope::FlatTop { .. }));
        if joined || field.pulses.len() != 1 || field.sampled.is_some() {
            return Self::highest(field, 0.0, 1).map(|_| ());
        }
        Ok(())
    }
}
