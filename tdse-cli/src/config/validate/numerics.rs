//! `numerics`.

use tdse_core::choose::{PinnedAbsorber, Pins};
use tdse_core::problem::{Gauge, Scheme};

use super::Check;
use crate::config::raw;
use crate::config::request::{Inadequate, Sharing};

/// What the user fixed.
pub(super) fn pins(check: &mut Check, numerics: &raw::Numerics, dimensions: u32) -> Pins {
    let shape = match numerics.absorber {
        Some(raw::Absorber::Smooth { shape, .. }) => shape,
        _ => None,
    };
    if shape.is_some() && dimensions == 1 {
        let fix = check.without("/numerics/absorber", "shape");
        let allowed = "the key only beside dimensions 2";
        check.complain("/numerics/absorber/shape", "needs two dimensions", allowed, fix);
    }
    Pins {
        spacing: numerics.spacing.as_ref().map(raw::Length::value),
        extent: numerics.extent.as_ref().map(raw::Length::value),
        time_step: numerics.time_step.as_ref().map(raw::Time::value),
        scheme: numerics.scheme.map(Scheme::from),
        gauge: numerics.gauge.map(Gauge::from),
        absorber: numerics.absorber.as_ref().map(|absorber| pinned(absorber, dimensions)),
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

/// In two dimensions an absorber is round unless it is to lie along the sides.
fn pinned(absorber: &raw::Absorber, dimensions: u32) -> PinnedAbsorber {
    let raw::Absorber::Smooth { width, shape, .. } = absorber else { return PinnedAbsorber::None };
    let is_round = dimensions == 2 && *shape != Some(raw::Shape::Sides);
    match (width.as_ref().map(raw::Length::value), is_round) {
        (None, true) => PinnedAbsorber::Round,
        (None, false) => PinnedAbsorber::Smooth,
        (Some(width), true) => PinnedAbsorber::RoundWidth(width),
        (Some(width), false) => PinnedAbsorber::Width(width),
    }
}
