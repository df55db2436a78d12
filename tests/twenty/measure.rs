//! A run with chosen numerics, a far finer one of the same case, and the distance between the two.

use std::sync::Arc;
use std::time::Instant;

use tdse_core::choose::{AtomFacts, FLOOR, PinnedAbsorber, Pins, Wish, choose};
use tdse_core::field::Field;
use tdse_core::potential::PotentialOnGrid;
use tdse_core::problem::{Absorber, Numerics, Record};
use tdse_core::simulate::{Atom, Plan, Schedule, run};
use tdse_core::spectrum::{Window, order_yields};
use tdse_core::stationary::bound_states;

use crate::cases::Case;

/// What is compared of a run.
pub struct Outcome {
    pub acceleration: Vec<f64>,
    pub schedule: Schedule,
    /// Population of the initial state at the end.
    pub survival: f64,
    pub seconds: f64,
}

/// Errors in units of nothing: relative, relative, absolute.
#[derive(Clone, Copy, Debug)]
pub struct Errors {
    pub rms: f64,
    pub harmonic: f64,
    /// Order of the harmonic with the largest error.
    pub order: usize,
    pub survival: f64,
}

impl Errors {
    pub fn largest(&self) -> f64 {
        self.rms.max(self.harmonic).max(self.survival)
    }
}

/// Numerics chosen for a case, the step shortened to a whole number over the field: runs of different steps then end
/// at the same time, and their windows are the same.
pub fn chosen(case: &Case, accuracy: f64, pins: &Pins) -> Numerics {
    let problem = &case.problem;
    let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
    let mut numerics =
        choose(&Wish { problem, facts: &facts, pins, accuracy, populations: 0, max_photon: None }).numerics;
    whole(&mut numerics, &problem.field);
    numerics
}

pub fn whole(numerics: &mut Numerics, field: &Field) {
    let (start, end) = field.interval();
    let length = end - start + numerics.trailing_time;
    numerics.time_step = length / (length / numerics.time_step - 1e-9).ceil();
}

/// Points times steps of a run.
pub fn work(case: &Case, numerics: &Numerics) -> f64 {
    let steps = Schedule::new(&case.problem.field, numerics.time_step, numerics.trailing_time).steps;
    numerics.grid.len() as f64 * steps as f64
}

/// Every choice at least twice finer than those for any of these accuracies, the strictest last, and a box that nothing
/// leaves where that costs at most `most` points times steps; an absorber twice as wide, twice as far out, otherwise.
pub fn reference(case: &Case, accuracies: &[f64], most: f64) -> Numerics {
    let all: Vec<Numerics> = accuracies.iter().map(|&a| chosen(case, a, &Pins::default())).collect();
    let (accuracy, numerics) = (accuracies[all.len() - 1], &all[all.len() - 1]);
    let spacing = Some(0.5 * numerics.grid.x.spacing);
    let width = numerics.absorber.width();
    let extent = 2.0 * all.iter().map(|n| n.grid.x.extent()).fold(0.0, f64::max);
    let finer = |pins: Pins| {
        let free = chosen(case, accuracy, &pins).time_step;
        chosen(case, accuracy, &Pins { time_step: Some(free.min(0.5 * numerics.time_step)), ..pins })
    };
    let closed = Pins { spacing, absorber: Some(PinnedAbsorber::None), ..Pins::default() };
    let free = finer(closed);
    let free =
        if free.grid.x.extent() < extent { finer(Pins { extent: Some(extent), ..closed }) } else { free };
    if width == 0.0 || work(case, &free) <= most {
        return free;
    }
    let absorber = Some(PinnedAbsorber::Width(2.0 * width));
    finer(Pins { spacing, absorber, extent: Some(extent), ..Pins::default() })
}

/// Whether spacing, step, absorber and the space inside it are all at least twice finer.
pub fn is_twice_finer(finer: &Numerics, than: &Numerics) -> bool {
    let wider = match (finer.absorber.width(), than.absorber.width()) {
        (0.0, _) => true,
        (wide, width) => width > 0.0 && wide >= 2.0 * width,
    };
    let at_most_half = |a: f64, b: f64| a <= 0.5 * b * (1.0 + 1e-9);
    wider
        && at_most_half(finer.grid.x.spacing, than.grid.x.spacing)
        && at_most_half(finer.time_step, than.time_step)
        && at_most_half(than.grid.x.extent(), finer.grid.x.extent())
}

/// The reference of a case with its outcome: one that an earlier call left in the folder `TDSE_TWENTY_KEEP`, if it is twice
/// finer than what is chosen now; else a new one, left there.
pub fn kept(case: &Case, accuracies: &[f64], most: f64) -> (Numerics, Outcome) {
    let finer = reference(case, accuracies, most);
    let Ok(folder) = std::env::var("TDSE_TWENTY_KEEP") else {
        let found = outcome(case, &finer);
        return (finer, found);
    };
    std::fs::create_dir_all(&folder).unwrap();
    let all: Vec<Numerics> = accuracies.iter().map(|&a| chosen(case, a, &Pins::default())).collect();
    for entry in std::fs::read_dir(&folder).unwrap() {
        let path = entry.unwrap().path();
        let Some(old) = named(case, &finer, path.file_name().unwrap().to_str().unwrap()) else { continue };
        if all.iter().all(|numerics| is_twice_finer(&old, numerics)) {
            let found = read(case, &old, &std::fs::read(path).unwrap());
            return (old, found);
        }
    }
    let found = outcome(case, &finer);
    let (axis, width) = (finer.grid.x, finer.absorber.width());
    let name = format!("{}-{}-{}-{}-{width}", case.number, axis.points, axis.spacing, finer.time_step);
    let numbers = [found.seconds, found.survival].into_iter().chain(found.acceleration.iter().copied());
    let bytes: Vec<u8> = numbers.flat_map(f64::to_le_bytes).collect();
    std::fs::write(std::path::Path::new(&folder).join(name), bytes).unwrap();
    (finer, found)
}

/// The numerics that a file of this case is named after; the rest as in `like`.
fn named(case: &Case, like: &Numerics, name: &str) -> Option<Numerics> {
    let parts: Vec<&str> = name.strip_prefix(&format!("{}-", case.number))?.split('-').collect();
    let [points, spacing, step, width] = parts[..] else { return None };
    let width = width.parse().ok()?;
    let mut numerics = Numerics { time_step: step.parse().ok()?, ..like.clone() };
    numerics.grid = tdse_core::grid::Grid::line(points.parse().ok()?, spacing.parse().ok()?);
    numerics.absorber = if width > 0.0 { Absorber::Smooth { width } } else { Absorber::None };
    Some(numerics)
}

fn read(case: &Case, numerics: &Numerics, bytes: &[u8]) -> Outcome {
    let mut numbers = bytes.chunks_exact(8).map(|eight| f64::from_le_bytes(eight.try_into().unwrap()));
    let (seconds, survival) = (numbers.next().unwrap(), numbers.next().unwrap());
    let schedule = Schedule::new(&case.problem.field, numerics.time_step, numerics.trailing_time);
    Outcome { acceleration: numbers.collect(), schedule, survival, seconds }
}

pub fn outcome(case: &Case, numerics: &Numerics) -> Outcome {
    let began = Instant::now();
    let potential = &case.problem.potential;
    let atom = Atom {
        potential: PotentialOnGrid::sample(potential, &numerics.grid),
        bound: bound_states(potential, &numerics.grid, 1).unwrap(),
        plane: Vec::new(),
    };
    let plan = Plan::new(&case.problem, Arc::new(atom), numerics, Record::default()).unwrap();
    let state = run(&plan);
    let norm = state.series.norm[0];
    let gradient = state.series.gradient.iter();
    Outcome {
        acceleration: gradient.zip(plan.electric_field()).map(|(g, e)| g[0] + e[0] * norm).collect(),
        schedule: plan.schedule().clone(),
        survival: *state.series.initial_population.last().unwrap(),
        seconds: began.elapsed().as_secs_f64(),
    }
}

/// Harmonics that count: up to the cutoff 1.32 Ip + 3.17 Up (Lewenstein et al., Phys. Rev. A 49, 2117 (1994), eq. 32).
fn orders(case: &Case) -> usize {
    let pulse = &case.problem.field.pulses[0];
    let cutoff = 1.32 * case.binding + 3.17 * pulse.ponderomotive_energy();
    (cutoff / pulse.frequency).floor().max(1.0) as usize
}

pub fn errors(case: &Case, found: &Outcome, exact: &Outcome) -> Errors {
    let photon = case.problem.field.pulses[0].frequency;
    let yields = |o: &Outcome| order_yields(&o.acceleration, &o.schedule, Window::Hann, photon, orders(case));
    let (f, e) = (yields(found), yields(exact));
    let largest = e.iter().copied().fold(0.0, f64::max);
    let relative = |i: usize| (f[i] - e[i]).abs() / e[i];
    let above = (0..e.len()).filter(|&i| e[i] > FLOOR * largest);
    let worst = above.max_by(|&i, &j| relative(i).total_cmp(&relative(j))).unwrap();
    let there: Vec<f64> = found.schedule.times().iter().map(|&t| interpolated(exact, t)).collect();
    let square = |v: &mut dyn Iterator<Item = f64>| v.map(|x| x * x).sum::<f64>().sqrt();
    Errors {
        rms: square(&mut found.acceleration.iter().zip(&there).map(|(a, b)| a - b))
            / square(&mut there.iter().copied()),
        harmonic: relative(worst),
        order: worst + 1,
        survival: (found.survival - exact.survival).abs(),
    }
}

/// The acceleration at time `t` by the polynomial through the eight nearest samples.
fn interpolated(outcome: &Outcome, t: f64) -> f64 {
    let values = &outcome.acceleration;
    let place = (t - outcome.schedule.start) / outcome.schedule.time_step;
    let first = (place.floor() as usize).saturating_sub(3).min(values.len() - 8);
    (0..8)
        .map(|i| {
            let others = (0..8).filter(|&j| j != i);
            let weight: f64 = others.map(|j| (place - (first + j) as f64) / (i as f64 - j as f64)).product();
            weight * values[first + i]
        })
        .sum()
}
