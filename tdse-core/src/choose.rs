//! Numerics from physics: what a user did not pin is chosen by simple stated rules.

use crate::problem::{Absorber, Gauge, Scheme};

/// What the user fixed; `None` leaves the choice to the rules.
#[derive(Clone, Copy, Debug, PartialEq, Default)]
pub struct Pins {
    /// Grid spacing, bohr; taken exactly.
    pub spacing: Option<f64>,
    /// Full box length per axis, bohr; rounded up to a good number of points.
    pub extent: Option<f64>,
    /// Time step, a.u.; taken exactly.
    pub time_step: Option<f64>,
    /// Splitting.
    pub scheme: Option<Scheme>,
    /// Gauge.
    pub gauge: Option<Gauge>,
    /// Edges; the width may be left open.
    pub absorber: Option<PinnedAbsorber>,
    /// Field-free time after the field, a.u.
    pub trailing_time: Option<f64>,
}

/// An absorber as far as the user fixed it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PinnedAbsorber {
    /// None at all.
    None,
    /// Smooth, with the width chosen.
    Smooth,
    /// Smooth, of this width per side, bohr.
    Width(f64),
}

impl From<Absorber> for PinnedAbsorber {
    fn from(absorber: Absorber) -> Self {
        match absorber {
            Absorber::None => Self::None,
            Absorber::Smooth { width } => Self::Width(width),
        }
    }
}
