//! How sure a number is: the run varied, one choice of numerics at a time, and errors by cause from what comes out.
//!
//! Two pure functions: [`variations`] turns numerics into finer ones, [`errors`] turns the values that each of them gave
//! into error bars. Running them is the caller's business. [`model_atoms`] asks the other question, what the choice of
//! the model potential does; its spread is no numerical error and is never mixed with one.

mod models;

pub use models::{ModelAtom, model_atoms, plane_model_atoms};

use crate::problem::{Absorber, Numerics, Scheme};
use crate::step::resonant_step;

/// Factor of the finer time step.
const STEP: f64 = 0.5;
/// Factor of the finer spacing.
const SPACING: f64 = 0.75;
/// Factor of the larger box, and of the wider absorber: half as much again shows too little of their errors.
const LARGER: f64 = 2.0;
/// Part of the run by which it is made longer.
const LONGER: f64 = 0.25;
/// Part of the resonant step that a finer grid may use.
const BELOW_RESONANCE: f64 = 0.9;
/// Factor between an estimate from two runs and the bar: the finer run has an error of its own (common practice).
const SAFETY: f64 = 2.0;

/// A choice of numerics that is varied alone.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cause {
    /// The time step.
    TimeStep = 0,
    /// The grid's spacing.
    Spacing = 1,
    /// The length of the box.
    Extent = 2,
    /// The absorber's width.
    Absorber = 3,
    /// The field-free time after the field.
    TrailingTime = 4,
}

impl Cause {
    /// All of them with the word for each, which is that of the configuration.
    pub const WORDS: [(Self, &'static str); 5] = [
        (Self::TimeStep, "time_step"),
        (Self::Spacing, "spacing"),
        (Self::Extent, "extent"),
        (Self::Absorber, "absorber"),
        (Self::TrailingTime, "trailing_time"),
    ];

    /// The word for it.
    pub fn word(self) -> &'static str {
        Self::WORDS[self as usize].1
    }
}

/// One run of several that differ in numerics alone.
#[derive(Clone, Debug, PartialEq)]
pub struct Variation {
    /// What was made finer: one choice, none (the run itself, always first), or everything (always last).
    pub what: Varied,
    /// The numerics.
    pub numerics: Numerics,
}

/// What a variation makes finer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Varied {
    /// Nothing: the run as it is.
    Nothing,
    /// One choice, told from the run itself.
    One(Cause),
    /// One choice, told from the run with the finer time step, because the step would be too long beside it.
    OneBesideStep(Cause),
    /// Everything but the trailing time, at once.
    All,
}

/// The run itself, each choice made finer alone, and all but the trailing time together; `length` is the run's, a.u. of
/// time. A longer run is left out of the last, since it stretches a window that spans the run.
///
/// The step is halved, the spacing taken to three quarters, box and absorber doubled (the wider absorber keeps
/// the room between), the run made a quarter longer. Without an absorber there is none to widen.
pub fn variations(numerics: &Numerics, binding_energy: f64, length: f64) -> Vec<Variation> {
    let finer = |change: fn(&mut Numerics)| {
        let mut finer = numerics.clone();
        change(&mut finer);
        finer
    };
    let step = finer(|n| n.time_step *= STEP);
    let mut spacing = finer(|n| with_spacing(n, SPACING));
    let resonance = resonant_step(spacing.grid.largest_along_axis(), binding_energy);
    let is_slow = numerics.time_step < BELOW_RESONANCE * resonance;
    if !is_slow {
        spacing.time_step = step.time_step;
    }
    let beside = if is_slow { Varied::One } else { Varied::OneBesideStep };
    let mut longer = numerics.clone();
    longer.trailing_time += LONGER * length;
    let mut all = vec![
        Variation { what: Varied::Nothing, numerics: numerics.clone() },
        Variation { what: Varied::One(Cause::TimeStep), numerics: step.clone() },
        Variation { what: beside(Cause::Spacing), numerics: spacing },
        Variation {
            what: Varied::One(Cause::Extent),
            numerics: finer(|n| with_extents(n, n.grid.extents().map(|extent| LARGER * extent))),
        },
    ];
    if numerics.absorber.width() > 0.0 {
        all.push(Variation { what: Varied::One(Cause::Absorber), numerics: finer(widen) });
    }
    all.push(Variation { what: Varied::One(Cause::TrailingTime), numerics: longer });
    let mut together = step;
    with_spacing(&mut together, SPACING);
    with_extents(&mut together, numerics.grid.extents().map(|extent| LARGER * extent));
    if numerics.absorber.width() > 0.0 {
        widen(&mut together);
    }
    all.push(Variation { what: Varied::All, numerics: together });
    all
}

fn with_spacing(numerics: &mut Numerics, factor: f64) {
    let spacings = numerics.grid.spacings().map(|spacing| factor * spacing);
    numerics.grid = numerics.grid.covering(numerics.grid.extents(), spacings);
}

fn with_extents(numerics: &mut Numerics, extents: [f64; 2]) {
    numerics.grid = numerics.grid.covering(extents, numerics.grid.spacings());
}

fn widen(numerics: &mut Numerics) {
    let (Absorber::Smooth { width } | Absorber::Round { width }) = &mut numerics.absorber else { return };
    let more = (LARGER - 1.0) * *width;
    *width *= LARGER;
    with_extents(numerics, numerics.grid.extents().map(|extent| extent + 2.0 * more));
}

/// How far a value's neighbours along its axis share its error: the difference of two runs vanishes by chance here and
/// there, the error does not.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Neighbours {
    /// Values stand alone.
    None,
    /// So many values to each side.
    Within(usize),
}

/// Error bars of a set of values.
#[derive(Clone, Debug, PartialEq)]
pub struct Errors {
    /// One bar per value, in its unit; NaN where the value or one needed for it is not there.
    pub bars: Vec<f64>,
    /// What each cause alone contributes, one entry per value.
    pub by_cause: Vec<(Cause, Vec<f64>)>,
}

impl Errors {
    /// The cause that contributes most: whose contributions have the largest median beside the bars.
    pub fn limiting(&self) -> Option<Cause> {
        let share = |contributions: &[f64]| {
            let shares = contributions.iter().zip(&self.bars).map(|(part, bar)| part / bar);
            median(shares.filter(|share| share.is_finite()).collect())
        };
        let shares = self.by_cause.iter().filter_map(|(cause, parts)| Some((*cause, share(parts)?)));
        shares.max_by(|a, b| a.1.total_cmp(&b.1)).map(|(cause, _)| cause)
    }
}

fn median(mut values: Vec<f64>) -> Option<f64> {
    values.sort_by(f64::total_cmp);
    values.get(values.len() / 2).copied()
}

/// Error bars of values that each of [`variations`] gave: `values[i]` belongs to `runs[i]`, all of one length.
///
/// The contribution of a cause is the difference that making it finer made, for the time step extrapolated by the
/// splitting's order (Richardson, Phil. Trans. R. Soc. A 210, 307 (1911)). A difference is no smaller than the median of the
/// relative differences of its `neighbours` makes it. The bar is twice the larger of the difference that everything
/// together made and the root of the sum of squares of the contributions.
///
/// # Panics
/// If the lengths differ, or the first run is not the one as it is.
pub fn errors(runs: &[Variation], values: &[Vec<f64>], neighbours: Neighbours) -> Errors {
    assert_eq!(runs.len(), values.len(), "one set of values per run");
    assert!(values.iter().all(|set| set.len() == values[0].len()), "sets of one length");
    assert_eq!(runs[0].what, Varied::Nothing, "the run itself comes first");
    let step = runs.iter().position(|run| run.what == Varied::One(Cause::TimeStep));
    let order = match runs[0].numerics.scheme {
        Scheme::FourthOrder => 4,
        Scheme::Strang => 2,
    };
    let (mut by_cause, mut together) = (Vec::new(), None);
    let between = |finer: &[f64], coarser: &[f64], share: f64| {
        let differences: Vec<f64> = finer.iter().zip(coarser).map(|(a, b)| share * (a - b).abs()).collect();
        smoothed(&differences, &values[0], neighbours)
    };
    for (run, set) in runs.iter().zip(values) {
        match run.what {
            Varied::Nothing => {}
            Varied::One(Cause::TimeStep) => {
                let share = 1.0 / (1.0 - STEP.powi(order));
                by_cause.push((Cause::TimeStep, between(set, &values[0], share)));
            }
            Varied::One(cause) => {
                by_cause.push((cause, between(set, &values[0], 1.0)));
            }
            Varied::OneBesideStep(cause) => {
                let beside = &values[step.expect("a run with the finer step")];
                by_cause.push((cause, between(set, beside, 1.0)));
            }
            Varied::All => together = Some(between(set, &values[0], 1.0)),
        }
    }
    let bar = |i: usize| {
        let sum = by_cause.iter().map(|(_, parts)| parts[i] * parts[i]).sum::<f64>().sqrt();
        let all = together.as_ref().map_or(0.0, |all: &Vec<f64>| all[i]);
        // `max` would drop a NaN.
        SAFETY * if all > sum || all.is_nan() { all } else { sum }
    };
    let bars = (0..values[0].len()).map(bar).collect();
    Errors { bars, by_cause }
}

/// Each difference, or what the median of its neighbours' relative differences makes of its value where that is larger.
/// What is not finite stays, and takes no part.
fn smoothed(differences: &[f64], values: &[f64], neighbours: Neighbours) -> Vec<f64> {
    let Neighbours::Within(reach) = neighbours else {
        return differences.to_vec();
    };
    let relative: Vec<f64> = differences.iter().zip(values).map(|(d, v)| d / v.abs()).collect();
    let around = |i: usize| {
        let part = &relative[i.saturating_sub(reach)..(i + reach + 1).min(relative.len())];
        median(part.iter().copied().filter(|r| r.is_finite()).collect()).unwrap_or(0.0)
    };
    let one = |(i, &d): (usize, &f64)| if d.is_nan() { d } else { d.max(around(i) * values[i].abs()) };
    differences.iter().enumerate().map(one).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::grid::{Axis, Grid};
    use crate::problem::Gauge;

    fn numerics(time_step: f64, absorber: Absorber) -> Numerics {
        Numerics {
            grid: Grid { x: Axis { points: 768, spacing: 0.4 }, y: None },
            time_step,
            scheme: Scheme::FourthOrder,
            gauge: Gauge::Length,
            absorber,
            trailing_time: 0.0,
        }
    }

    #[test]
    fn each_variation_is_finer_in_what_it_names_and_no_step_meets_a_resonance() {
        for time_step in [0.05, 0.18] {
            let coarse = numerics(time_step, Absorber::Smooth { width: 60.0 });
            let runs = variations(&coarse, 0.5, 400.0);
            assert_eq!(runs.len(), 7);
            let (first, last) = (&runs[0].numerics, &runs[6].numerics);
            assert_eq!(*first, coarse);
            assert!(last.time_step <= 0.5 * time_step && last.grid.x.spacing <= 0.3 + 1e-12);
            assert!(last.grid.x.extent() >= 2.0 * 307.2 && last.absorber.width() >= 120.0);
            assert!(runs[5].numerics.trailing_time >= 100.0 && last.trailing_time == 0.0);
            for run in &runs {
                let n = &run.numerics;
                assert!(n.time_step < resonant_step(n.grid.largest_along_axis(), 0.5), "{run:?}");
                assert!(n.grid.x.extent() - 2.0 * n.absorber.width() >= 187.2 - 1e-9, "{run:?}");
            }
            let beside = runs.iter().any(|run| matches!(run.what, Varied::OneBesideStep(_)));
            assert_eq!(beside, time_step > 0.1);
        }
        assert_eq!(variations(&numerics(0.1, Absorber::None), 0.5, 400.0).len(), 6);
    }

    /// On a plane every axis is varied alike and the absorber keeps its shape; the rectangle is there to tell the axes apart.
    #[test]
    fn a_plane_is_varied_along_both_axes() {
        for absorber in [Absorber::Round { width: 30.0 }, Absorber::Smooth { width: 30.0 }] {
            let axis = |points, spacing| Axis { points, spacing };
            let grid = Grid { x: axis(256, 0.5), y: Some(axis(192, 0.4)) };
            let coarse = Numerics { grid, ..numerics(0.1, absorber) };
            let runs = variations(&coarse, 0.5, 400.0);
            let [extents, spacings] = [grid.extents(), grid.spacings()];
            let of = |what: Varied| {
                runs.iter().find(|run| run.what == what).map(|run| run.numerics.clone()).unwrap()
            };
            let (fine, large) = (of(Varied::One(Cause::Spacing)), of(Varied::One(Cause::Extent)));
            let (wide, last) = (of(Varied::One(Cause::Absorber)), of(Varied::All));
            for d in 0..2 {
                assert!((fine.grid.spacings()[d] / spacings[d] - SPACING).abs() < 1e-12);
                assert!(fine.grid.extents()[d] >= extents[d] * (1.0 - 1e-9));
                assert!(large.grid.extents()[d] >= LARGER * extents[d] * (1.0 - 1e-9));
                assert_eq!(large.grid.spacings()[d], spacings[d]);
                assert!(wide.grid.extents()[d] - 2.0 * wide.absorber.width() >= extents[d] - 60.0 - 1e-9);
                assert!((last.grid.spacings()[d] / spacings[d] - SPACING).abs() < 1e-12);
                assert!(last.grid.extents()[d] >= LARGER * extents[d] + 60.0 - 1e-9);
            }
            assert_eq!(std::mem::discriminant(&wide.absorber), std::mem::discriminant(&absorber));
            assert_eq!((wide.absorber.width(), last.absorber.width()), (60.0, 60.0));
            for run in &runs {
                let n = &run.numerics;
                let y = n.grid.y.expect("a plane stays a plane");
                assert!(n.grid.x.points.is_multiple_of(16) && y.points.is_multiple_of(16), "{run:?}");
                assert!(n.time_step < resonant_step(n.grid.largest_along_axis(), 0.5), "{run:?}");
            }
        }
    }

    /// Made-up values whose errors are known: 1 + c τ⁴ + d, with d gone on the finer grid.
    #[test]
    fn bars_hold_known_errors_and_name_their_cause() {
        let runs = variations(&numerics(0.05, Absorber::None), 0.5, 400.0);
        let value = |run: &Variation, step: f64, grid: f64| {
            1.0 + step * (run.numerics.time_step / 0.05).powi(4)
                + grid * if run.numerics.grid.x.spacing < 0.35 { 0.01 } else { 1.0 }
        };
        for (step, grid, limiting) in [(1e-3, 1e-5, Cause::TimeStep), (1e-6, -3e-4, Cause::Spacing)] {
            let values: Vec<Vec<f64>> = runs.iter().map(|run| vec![value(run, step, grid); 3]).collect();
            let found = errors(&runs, &values, Neighbours::Within(1));
            let truth = (values[0][0] - 1.0).abs();
            assert!(found.bars.iter().all(|bar| (truth..3.0 * truth).contains(bar)), "{truth}: {found:?}");
            assert_eq!(found.limiting(), Some(limiting));
        }
    }

    #[test]
    fn a_difference_that_vanishes_by_chance_has_its_neighbours_bar() {
        let runs = &variations(&numerics(0.05, Absorber::None), 0.5, 400.0)[..2];
        let values = [vec![1.0; 5], vec![1.1, 0.9, 1.0, 1.1, 0.9]];
        let alone = errors(runs, &values, Neighbours::None).bars[2];
        let shared = errors(runs, &values, Neighbours::Within(2)).bars[2];
        assert!(alone == 0.0 && shared > 0.1, "{alone} and {shared}");
        let gap = [vec![1.0, f64::NAN, 1.0], vec![1.1, 1.1, 1.1]];
        let found = errors(runs, &gap, Neighbours::Within(1)).bars;
        assert!(found[1].is_nan() && found[0] > 0.1 && found[2] > 0.1, "{found:?}");
    }
}
