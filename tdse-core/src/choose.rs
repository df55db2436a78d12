//! Numerics from physics: what a user did not pin is chosen by simple stated rules, what was pinned is judged.
//!
//! Choices stand on coarse ladders and come from envelope maxima, never from a phase, so neighbours in a scan share them.

mod electrons;
mod judge;
pub mod ladder;
mod plane;
mod rules;
mod smoothness;

pub use electrons::{
    Electrons, Energies, choose_for_electrons, electron_bytes, electron_work, fastest_electron, tail_of,
};

pub use plane::map_range;

use crate::grid::Grid;
use crate::potential::Potential;
use crate::problem::{Absorber, Gauge, InitialState, Numerics, Problem, Scheme};
use crate::stationary::{StationaryError, level};

/// An accuracy is one of the harmonic yields above this part of the largest yield, and up to the cutoff.
pub const FLOOR: f64 = 1e-8;

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
    /// Round, with the width chosen; two dimensions only.
    Round,
    /// Round, of this width, bohr; two dimensions only.
    RoundWidth(f64),
}

impl From<Absorber> for PinnedAbsorber {
    fn from(absorber: Absorber) -> Self {
        match absorber {
            Absorber::None => Self::None,
            Absorber::Smooth { width } => Self::Width(width),
            Absorber::Round { width } => Self::RoundWidth(width),
        }
    }
}

/// What the rules need to know of a model atom; found once per atom, without a grid.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AtomFacts {
    /// Number of dimensions, 1 or 2.
    pub dimensions: usize,
    /// Energy of the initial state, of a superposition its lowest member, hartree.
    pub initial_energy: f64,
    /// Energy of the highest member of the initial state, hartree.
    pub highest_energy: f64,
    /// Distance from zero at which the highest member has decayed by e⁻²⁰, bohr.
    pub reach: f64,
    /// Length ℓ with which wave functions fall as e^{-kℓ} in momentum, bohr.
    pub analytic_length: f64,
}

impl AtomFacts {
    /// Facts of `potential` with this initial state, in one dimension; in two see [`AtomFacts::on_plane`].
    ///
    /// # Errors
    /// [`StationaryError::NoSuchState`] where the initial state names one that is not bound.
    pub fn new(potential: &Potential, initial: &InitialState) -> Result<Self, StationaryError> {
        let highest = level(potential, initial.highest())?;
        Ok(Self {
            dimensions: 1,
            initial_energy: level(potential, initial.lowest())?.energy,
            highest_energy: highest.energy,
            reach: highest.reach,
            analytic_length: smoothness::along_a_line(potential, &highest),
        })
    }

    /// Ionization energy -E of the initial state, hartree.
    pub fn ionization_energy(&self) -> f64 {
        -self.initial_energy
    }
}

/// What is asked of the numerics.
#[derive(Clone, Copy, Debug)]
pub struct Wish<'a> {
    /// Atom and field.
    pub problem: &'a Problem,
    /// Facts of the atom.
    pub facts: &'a AtomFacts,
    /// What the user fixed.
    pub pins: &'a Pins,
    /// Error asked for: of the dipole acceleration, relative in root-mean-square over the run; of every harmonic yield up to the
    /// cutoff and above [`FLOOR`], relative; in one dimension also absolute of the ionization probability,
    /// where populations are asked for and a Coulomb tail is known by its formula, and relative of the peaks of an electron spectrum by
    /// scattering states above 1e-4 of the highest ([`choose_for_electrons`]).
    pub accuracy: f64,
    /// Number of bound states whose populations are asked for.
    pub populations: usize,
    /// Largest photon energy that is written, hartree, where the user gave one.
    pub max_photon: Option<f64>,
}

/// A choice of numerics.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Knob {
    /// Grid spacing, bohr.
    Spacing,
    /// Length of the box, bohr.
    Extent,
    /// Absorber: width per side, bohr.
    Absorber,
    /// Time step, a.u.
    TimeStep,
    /// Splitting.
    Scheme,
    /// Gauge.
    Gauge,
    /// Field-free time after the field, a.u.
    TrailingTime,
    /// Way to the electron spectrum.
    ElectronMethod,
}

/// Why a choice is what it is.
#[derive(Clone, Debug, PartialEq)]
pub struct Reason {
    /// The choice.
    pub knob: Knob,
    /// The reason, one sentence.
    pub why: String,
}

/// How bad a pinned value is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// It may miss the accuracy asked.
    Doubtful,
    /// It is known to miss it.
    Inadequate,
    /// It cannot be computed at all.
    Impossible,
}

/// A pinned value, or a field, that the rules object to.
#[derive(Clone, Debug, PartialEq)]
pub struct Finding {
    /// The choice concerned; `None` for the field itself.
    pub knob: Option<Knob>,
    /// How bad.
    pub verdict: Verdict,
    /// What is wrong, with numbers and units.
    pub reason: String,
    /// What is allowed.
    pub allowed: String,
    /// A value that passes, in the knob's unit; zero where none does.
    pub passes: f64,
}

/// Chosen numerics with their reasons and objections.
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// The numerics.
    pub numerics: Numerics,
    /// Why, one entry per [`Knob`].
    pub reasons: Vec<Reason>,
    /// Objections to what was pinned.
    pub findings: Vec<Finding>,
}

/// More points than any machine holds; a grid stops here, and is refused by whoever knows the machine.
const MOST_POINTS: f64 = 1e12;

/// Chooses what was not pinned, in well under a millisecond, in as many dimensions as the atom has.
///
/// In two dimensions the grid is square and an absorber that is left open a ring, for atoms that are round.
pub fn choose(wish: &Wish) -> Choice {
    let needs = rules::Needs::of(wish);
    let pins = wish.pins;
    let spacing = pins.spacing.unwrap_or_else(|| ladder::at_most(needs.spacing));
    let absorber = absorber(wish, needs.absorber_width);
    let extent = pins.extent.unwrap_or(2.0 * (needs.inner(absorber) + absorber.width()));
    let grid = grid(wish.facts.dimensions, extent, spacing);
    let scheme = pins.scheme.unwrap_or(Scheme::FourthOrder);
    let longest = needs.time_step(scheme, grid.largest_along_axis());
    let numerics = Numerics {
        grid,
        time_step: pins.time_step.unwrap_or_else(|| ladder::at_most(longest)),
        scheme,
        gauge: pins.gauge.unwrap_or(Gauge::Length),
        absorber,
        trailing_time: pins.trailing_time.unwrap_or(0.0),
    };
    let reasons = needs.reasons(pins, &numerics);
    let findings = judge::judge(wish, &needs, &numerics);
    Choice { numerics, reasons, findings }
}

fn grid(dimensions: usize, extent: f64, spacing: f64) -> Grid {
    let most = if dimensions == 1 { MOST_POINTS } else { MOST_POINTS.sqrt() };
    let shape = if dimensions == 1 { Grid::line(1, spacing) } else { Grid::square(1, spacing) };
    shape.covering([extent.min(most * spacing); 2], [spacing; 2])
}

/// The absorber, where `needed` is the width that the rules ask for, zero for none.
fn absorber(wish: &Wish, needed: f64) -> Absorber {
    let ring = |width| {
        if wish.facts.dimensions == 1 { Absorber::Smooth { width } } else { Absorber::Round { width } }
    };
    let wide = || ladder::at_least(needed.max(rules::NARROWEST_ABSORBER));
    match wish.pins.absorber {
        None if needed > 0.0 => ring(ladder::at_least(needed)),
        None | Some(PinnedAbsorber::None) => Absorber::None,
        Some(PinnedAbsorber::Smooth) => Absorber::Smooth { width: wide() },
        Some(PinnedAbsorber::Width(width)) => Absorber::Smooth { width },
        Some(PinnedAbsorber::Round) => ring(wide()),
        Some(PinnedAbsorber::RoundWidth(width)) => ring(width),
    }
}

/// The strictest of several choices, all in one or all in two dimensions: serves all of them.
///
/// # Panics
/// If there is none.
pub fn strictest(all: &[Numerics]) -> Numerics {
    let mut common = all[0].clone();
    let (mut extents, mut spacings) = (common.grid.extents(), common.grid.spacings());
    for one in all {
        for d in 0..2 {
            extents[d] = extents[d].max(one.grid.extents()[d]);
            spacings[d] = spacings[d].min(one.grid.spacings()[d]);
        }
        common.time_step = common.time_step.min(one.time_step);
        common.trailing_time = common.trailing_time.max(one.trailing_time);
        if one.absorber.width() > common.absorber.width() {
            common.absorber = one.absorber;
        }
    }
    common.grid = common.grid.covering(extents, spacings);
    common
}
