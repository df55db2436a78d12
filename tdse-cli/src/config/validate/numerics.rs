//! `numerics`.

use tdse_core::choose::{PinnedAbsorber, Pins};
use tdse_core::problem::{Gauge, Scheme};

use crate::config::raw;
use crate::config::request::{Inadequate, Sharing};

/// What the user fixed.
pub(super) fn pins(numerics: &raw::Numerics) -> Pins {
    Pins {
        spacing: numerics.spacing.as_ref().map(raw::Length::value),
        extent: numerics.extent.as_ref().map(raw::Length::value),
        time_step: numerics.time_step.as_ref().map(raw::Time::value),
        scheme: numerics.scheme.map(Scheme::from),
        gauge: numerics.gauge.map(Gauge::from),
        absorber: numerics.absorber.as_ref().map(PinnedAbsorber::from),
        trailing_time: numerics.trailing_time.as_ref().map(raw::Time::value),
    }
}

pub(super) fn inadequate(numerics: &raw::Numerics) -> Inadequate {
    if numerics.allow_inadequate { Inadequate::Allowed } else { Inadequate::Refused }
}

pub(super) fn sharing(numerics: &raw::Numerics) -> Sharing {
    if numerics.common { Sharing::Common } else { Sharing::PerPoint }
}

impl From<raw::Scheme> for Scheme {
    fn from(scheme: raw::Scheme) -> Self {
        match scheme {
            raw::Scheme::FourthOrder => Self::FourthOrder,
            raw::Scheme::Strang => Self::Strang,
        }
    }
}

impl From<raw::Gauge> for Gauge {
    fn from(gauge: raw::Gauge) -> Self {
        match gauge {
            raw::Gauge::Length => Self::Length,
            raw::Gauge::Velocity => Self::Velocity,
        }
    }
}

impl From<&raw::Absorber> for PinnedAbsorber {
    fn from(absorber: &raw::Absorber) -> Self {
        match absorber {
            raw::Absorber::None { .. } => Self::None,
            raw::Absorber::Smooth { width: None, .. } => Self::Smooth,
            raw::Absorber::Smooth { width: Some(width), .. } => Self::Width(width.value()),
        }
    }
}
