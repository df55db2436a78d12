//! Numerics in two dimensions: the rules of one, with what a plane changes.
//!
//! The grid is square and the absorber a ring, for atoms that are round; the splitting's resonance comes earlier, because a
//! wave in the corner of the momentum grid has twice the energy of one at the end of an axis.

use super::rules::{NARROWEST_ABSORBER, Needs};
use super::{AtomFacts, Choice, MOST_POINTS, PinnedAbsorber, Wish, judge, ladder, smoothness};
use crate::grid::{Axis, Grid, good_length};
use crate::potential::Potential;
use crate::problem::{Absorber, Gauge, Numerics, PlaneLabel, Scheme};
use crate::stationary::{Level, StationaryError, plane_level};

impl AtomFacts {
    /// Facts of a round `potential` whose initial state is made of the states that `labels` name.
    ///
    /// # Errors
    /// [`StationaryError::NoSuchState`] where one is not bound.
    ///
    /// # Panics
    /// If there is no label.
    pub fn on_plane(potential: &Potential, labels: &[PlaneLabel]) -> Result<Self, StationaryError> {
        let levels: Vec<Level> =
            labels.iter().map(|label| plane_level(potential, *label)).collect::<Result<_, _>>()?;
        let by_energy = |a: &&Level, b: &&Level| a.energy.total_cmp(&b.energy);
        let lowest = levels.iter().min_by(by_energy).expect("at least one state");
        let highest = levels.iter().max_by(by_energy).expect("at least one state");
        Ok(Self {
            initial_energy: lowest.energy,
            highest_energy: highest.energy,
            reach: highest.reach,
            analytic_length: smoothness::analytic_length(potential),
        })
    }
}

/// Chooses what was not pinned, for two dimensions.
pub fn choose_plane(wish: &Wish) -> Choice {
    let needs = Needs::of(wish);
    let pins = wish.pins;
    let spacing = pins.spacing.unwrap_or_else(|| ladder::at_most(needs.spacing));
    let ring = |width: f64| Absorber::Round { width: ladder::at_least(width) };
    let absorber = match pins.absorber {
        None if needs.absorber_width > 0.0 => ring(needs.absorber_width),
        Some(PinnedAbsorber::Smooth) => ring(needs.absorber_width.max(NARROWEST_ABSORBER)),
        Some(PinnedAbsorber::Width(width)) => Absorber::Round { width },
        None | Some(PinnedAbsorber::None) => Absorber::None,
    };
    let extent = pins.extent.unwrap_or(2.0 * (needs.inner(absorber) + absorber.width()));
    // A resolved extent is n Δx; its rounding must not add a point. Half the plane needs a multiple of 16.
    let points = (extent / spacing * (1.0 - 1e-12)).ceil().min(MOST_POINTS.sqrt()) as usize;
    let axis = Axis { points: good_length(points).next_multiple_of(16), spacing };
    let (grid, scheme) = (Grid { x: axis, y: Some(axis) }, pins.scheme.unwrap_or(Scheme::FourthOrder));
    let longest = needs.time_step(scheme, grid.largest_momentum());
    let numerics = Numerics {
        grid,
        time_step: pins.time_step.unwrap_or_else(|| ladder::at_most(longest)),
        scheme,
        gauge: pins.gauge.unwrap_or(Gauge::Length),
        absorber,
        trailing_time: pins.trailing_time.unwrap_or(0.0),
    };
    let (reasons, findings) = (needs.reasons(pins, &numerics), judge::judge(wish, &needs, &numerics));
    Choice { numerics, reasons, findings }
}
