//! Plain facts about what went wrong in a run, from what every step records anyway and from a look at ψ at a few moments
//! ([`Series::local_error`](crate::simulate::Series::local_error) and `free_energy`), against the accuracy asked.

use crate::choose::FLOOR;
use crate::problem::{Absorber, Numerics};
use crate::simulate::{Schedule, State};
use crate::spectrum::{EnergyAxis, Window, harmonics};

/// Probability at the top of the momentum grid that is allowed, in units of the accuracy squared: an amplitude of the size
/// of the accuracy, that wraps around to the wrong momentum.
const TOP: f64 = 1.0;
/// Probability at the edge of a box without absorber, in the same unit.
const EDGE: f64 = 1.0;
/// Probability of the initial state within an absorber, in units of the accuracy: taken at a rate far below one.
const HELD: f64 = 0.1;
/// Rise of the norm between two samples that rounding may make.
const RISE: f64 = 1e-11;
/// Local errors add up over the run at worst; they are allowed this multiple of the accuracy. (Fast oscillations of their
/// sign make the sum far smaller in fact.)
const LOCAL: f64 = 10.0;
/// Energy that may be lost or gained without field, in units of the accuracy, hartree per hartree.
const ENERGY: f64 = 1.0;
/// Part of what was ionized that may be left in the box when a momentum map is read: yields are good to this.
const LEFT: f64 = 5e-3;
/// What every limit has added for rounding.
const ROUNDING: f64 = 1e-13;

/// What was watched.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// Density at the top of the momentum grid: the spacing is too coarse.
    MomentumTop,
    /// Density at the edge of a box without absorber: the box is too small.
    BoxEdge,
    /// Initial state within the absorber: the box is too small.
    StateInAbsorber,
    /// Norm that grows.
    NormBalance,
    /// One step against two halves of it: the step is too long.
    LocalError,
    /// Energy not kept without field.
    FreeEnergy,
    /// Acceleration not died down where no window brings it to zero: the trailing time is too short.
    TrailingTime,
    /// A window whose ends show in the spectrum.
    WindowLeak,
    /// Electrons still in the box when the run of a momentum map ends: the trailing time is too short.
    LeftInside,
}

impl Kind {
    /// Word for files and messages.
    pub fn name(self) -> &'static str {
        match self {
            Self::MomentumTop => "momentum_top",
            Self::BoxEdge => "box_edge",
            Self::StateInAbsorber => "state_in_absorber",
            Self::NormBalance => "norm_balance",
            Self::LocalError => "local_error",
            Self::FreeEnergy => "free_energy",
            Self::TrailingTime => "trailing_time",
            Self::WindowLeak => "window_leak",
            Self::LeftInside => "left_inside",
        }
    }
}

/// What a run is held against.
#[derive(Clone, Copy, Debug)]
pub struct Watched<'a> {
    /// The run, finished or not.
    pub state: &'a State,
    /// Its numerics.
    pub numerics: &'a Numerics,
    /// Number of steps of the whole run.
    pub steps: usize,
    /// Accuracy asked for.
    pub accuracy: f64,
}

/// Something that went wrong.
#[derive(Clone, Debug, PartialEq)]
pub struct Doubt {
    /// What was watched.
    pub kind: Kind,
    /// What was found.
    pub number: f64,
    /// What is allowed.
    pub limit: f64,
    /// A sentence with both, and the fix.
    pub sentence: String,
}

/// Everything that is beyond its limit, in the order of [`Kind`]; none where all is well.
pub fn doubts(watched: &Watched) -> Vec<Doubt> {
    let series = &watched.state.series;
    let largest = |values: &[f64]| values.iter().copied().fold(0.0, f64::max);
    let squared = watched.accuracy * watched.accuracy;
    let first = series.edge.first().copied().unwrap_or_default();
    let edge = match watched.numerics.absorber {
        Absorber::None => (
            Kind::BoxEdge,
            largest(&series.edge),
            EDGE * squared,
            "of the norm reached the outermost sixteenths of the box; enlarge the extent",
        ),
        Absorber::Smooth { .. } | Absorber::Round { .. } => (
            Kind::StateInAbsorber,
            first,
            HELD * watched.accuracy,
            "of the initial state lies within the absorber; enlarge the extent",
        ),
    };
    let rise = series.norm.windows(2).map(|pair| pair[1] - pair[0]).fold(0.0, f64::max);
    let local = watched.steps as f64 * largest(&series.local_error);
    let found = [
        (
            Kind::MomentumTop,
            largest(&series.top),
            TOP * squared,
            "of the norm came to the upper quarter of the momenta; use a finer spacing",
        ),
        edge,
        (
            Kind::NormBalance,
            rise,
            RISE,
            "is the largest rise of the norm from one step to the next; use a shorter step",
        ),
        (
            Kind::LocalError,
            local,
            LOCAL * watched.accuracy,
            "is what the error of one step, against two halves of it, sums up to over the run; use a shorter step",
        ),
        (
            Kind::FreeEnergy,
            energy_change(watched),
            ENERGY * watched.accuracy,
            "of the energy was gained or lost without field; use a shorter step, or a finer spacing",
        ),
    ];
    found
        .into_iter()
        .filter_map(|(kind, number, limit, what)| doubt(kind, number, limit + ROUNDING, what))
        .collect()
}

fn doubt(kind: Kind, number: f64, limit: f64, what: &str) -> Option<Doubt> {
    let sentence = || format!("{number:.1e} {what} ({limit:.1e} is allowed)");
    (number > limit).then(|| Doubt { kind, number, limit, sentence: sentence() })
}

/// Relative change of the energy while no field was on, as far as the absorber did not take it: what leaves takes along at
/// most the energy of the largest momentum, and where that is more than the change nothing is said.
fn energy_change(watched: &Watched) -> f64 {
    let series = &watched.state.series;
    let [before, after] = series.free_energy[..] else { return 0.0 };
    let since = watched.steps.saturating_sub(free_samples(watched)).min(series.norm.len() - 1);
    let taken = (series.norm[since] - series.norm[series.norm.len() - 1]).max(0.0);
    let largest = 0.5 * watched.numerics.grid.largest_momentum().powi(2);
    ((after - before).abs() - taken * largest).max(0.0) / before.abs().max(1e-3)
}

/// Samples of the field-free time, at least.
fn free_samples(watched: &Watched) -> usize {
    (watched.numerics.trailing_time / watched.numerics.time_step) as usize + 2
}

/// Whether a run with a momentum map ended before its electrons were out; `held` is the population of all bound states then, see
/// [`Plan::round_populations`](crate::simulate::Plan::round_populations).
pub fn left_inside(state: &State, held: f64) -> Option<Doubt> {
    let norm = &state.series.norm;
    let (before, after) = (norm.first()?, norm.last()?);
    let ionized = before - held;
    if ionized <= ROUNDING {
        return None;
    }
    let what = "of the electrons set free were still in the box at the end and are not in the momentum map; lengthen the \
                trailing time";
    doubt(Kind::LeftInside, (after - held) / ionized, LEFT, what)
}

/// Whether the ends of the run show in its spectrum: the amplitude they make at photon energy `highest` (the cutoff), beside the
/// one at `photon`, may not reach that of the floor of harmonic yields.
///
/// A series that ends with the value a under a window whose first derivative that is not zero there is the n-th, w_n, adds
/// |a w_n|/ω^{n+1} (integration by parts; textbook).
///
/// # Panics
/// If `acceleration` does not belong to `schedule`.
pub fn ending(
    acceleration: &[f64],
    schedule: &Schedule,
    window: Window,
    [photon, highest]: [f64; 2],
) -> Option<Doubt> {
    let axis = EnergyAxis { step: photon, points: 2 };
    let fundamental = harmonics(acceleration, schedule, window, axis).amplitude[1].norm();
    // The largest value within the last period: the last sample may be a zero crossing.
    let period = 2.0 * std::f64::consts::PI / photon / schedule.time_step;
    let last = &acceleration[acceleration.len().saturating_sub(period as usize + 1)..];
    let value = last.iter().fold(0.0, |m: f64, a| m.max(a.abs()));
    let length = schedule.end - schedule.start;
    let (order, derivative) = first_derivative(window, length);
    let number = value * derivative / highest.powi(order + 1) / fundamental;
    let (kind, what) = match window {
        Window::None => (
            Kind::TrailingTime,
            "of the fundamental's amplitude is what the sudden end of the acceleration adds at the cutoff; lengthen the trailing \
             time, or choose a window",
        ),
        _ => (
            Kind::WindowLeak,
            "of the fundamental's amplitude is what the window's ends add at the cutoff; lengthen its flanks, or choose blackman",
        ),
    };
    doubt(kind, number, FLOOR.sqrt(), what)
}

/// Order n and size of the first derivative of a window that is not zero at its end.
fn first_derivative(window: Window, length: f64) -> (i32, f64) {
    let pi = std::f64::consts::PI;
    match window {
        Window::None => (0, 1.0),
        Window::Hann => (2, 2.0 * (pi / length).powi(2)),
        Window::Blackman => (2, 0.18 * (2.0 * pi / length).powi(2)),
        Window::Taper { length: flank } => (2, 0.5 * (pi / flank).powi(2)),
    }
}
