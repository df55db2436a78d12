//! What a run takes in memory, known before it is planned.
//!
//! Counted array by array as plans, states and workspaces allocate them (the test counts the allocator's bytes); of the
//! transforms' own tables only the length is known, one number per point and direction.

use std::collections::HashSet;
use std::mem::size_of;

use super::{POPULATION_SAMPLES, Schedule, straight};
use crate::field::Field;
use crate::grid::{Axis, Transform};
use crate::outgoing::{MapRange, sum_length};
use crate::problem::{Gauge, InitialState, Mirror, Numerics, Parity, PlaneLabel, Record, Scheme, Symmetry};
use crate::step::Drive;

/// Bytes of a complex and of a real number.
const C: usize = 16;
const R: usize = 8;
/// Most moments at which the direction of the field is looked at; most runs have fewer steps.
const LOOKS: usize = 1 << 14;

/// Bytes of a run, by what they are for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Memory {
    /// ψ, of half the plane where a mirror allows that.
    pub wave_function: usize,
    /// Scratch of every step.
    pub workspace: usize,
    /// What does not change: factors of the step, potential, field, absorber.
    pub tables: usize,
    /// Bound states, and the initial state.
    pub states: usize,
    /// Momentum map and its scratch.
    pub map: usize,
    /// What is recorded.
    pub series: usize,
}

impl Memory {
    /// All of it.
    pub fn total(&self) -> usize {
        self.wave_function + self.workspace + self.tables + self.states + self.map + self.series
    }
}

/// The bound states an atom is made with.
#[derive(Clone, Copy, Debug)]
pub enum Held<'a> {
    /// So many, in one dimension.
    Line(usize),
    /// These, in two.
    Plane(&'a [PlaneLabel]),
}

/// A run as far as its memory goes.
#[derive(Clone, Copy, Debug)]
pub struct Load<'a> {
    /// The field.
    pub field: &'a Field,
    /// The numerics.
    pub numerics: &'a Numerics,
    /// The atom's states.
    pub states: Held<'a>,
    /// Those of them that the run starts from.
    pub initial: &'a InitialState,
    /// What is recorded.
    pub record: Record,
    /// The momentum map, in two dimensions.
    pub map: Option<MapRange>,
    /// Threads of the workspace.
    pub threads: usize,
}

impl Load<'_> {
    /// Bytes of plan, state and workspace, and of the atom they share with others.
    pub fn memory(&self) -> Memory {
        let numerics = self.numerics;
        let (points, schedule) = (numerics.grid.len(), self.schedule());
        let samples = schedule.steps + 1;
        let kept = points / self.parts();
        let rows = POPULATION_SAMPLES + 2;
        let recorded = samples * 5 * R + rows * (2 + self.record.populations) * R + 5 * R;
        let field = samples * (size_of::<Drive>() + 2 * R);
        let dimensions = numerics.grid.dimensions();
        let mut memory = Memory {
            wave_function: C * kept,
            workspace: 0,
            tables: field + points * R * (1 + dimensions),
            states: self.states() * R + kept * C,
            map: 0,
            series: recorded,
        };
        match numerics.grid.y {
            None => self.add_line(&mut memory),
            Some(y) => self.add_plane(y, &mut memory),
        }
        if let (Some(range), Some(y)) = (self.map, numerics.grid.y) {
            add_map([numerics.grid.x, y], range, samples, &mut memory);
        }
        memory
    }

    fn schedule(&self) -> Schedule {
        Schedule::new(self.field, self.numerics.time_step, self.numerics.trailing_time)
    }

    /// Into how many mirror images the plane falls.
    fn parts(&self) -> usize {
        let Held::Plane(labels) = self.states else { return 1 };
        let schedule = self.schedule();
        let looks = (0..=schedule.steps).step_by(schedule.steps.div_ceil(LOOKS).max(1));
        let fields = looks.map(|n| self.field.electric_field(schedule.time(n)));
        let Some(mirror) = straight(&self.numerics.grid, fields) else { return 1 };
        let parity = |label: &PlaneLabel| match (label.symmetry, mirror) {
            (Symmetry::Angular(m), _) => (m == 0).then_some(Parity::Even),
            (Symmetry::Mirror([x, _]), Mirror::X(_)) => Some(x),
            (Symmetry::Mirror([_, y]), Mirror::Y(_)) => Some(y),
        };
        let parities = self.initial.numbers().into_iter().map(|number| labels.get(number).and_then(parity));
        let mut parities = parities.collect::<Vec<_>>();
        parities.dedup();
        if let [Some(_)] = parities[..] { 2 } else { 1 }
    }

    /// Numbers of all states: on a plane they lie on a quarter, and m and -m share both of theirs.
    fn states(&self) -> usize {
        let points = self.numerics.grid.len();
        let labels = match self.states {
            Held::Line(count) => return count * points,
            Held::Plane(labels) => labels,
        };
        let name = |label: &PlaneLabel| match label.symmetry {
            Symmetry::Angular(m) => (Symmetry::Angular(m.abs()), label.number),
            mirror @ Symmetry::Mirror(_) => (mirror, label.number),
        };
        let different: HashSet<_> = labels.iter().map(name).collect();
        let quarters = |(symmetry, _): &(Symmetry, usize)| match symmetry {
            Symmetry::Angular(m) if *m != 0 => 2,
            _ => 1,
        };
        different.iter().map(quarters).sum::<usize>() * (points / 4)
    }

    /// Arrays of one number per point kept that a step holds: closing and outer factor, gradient, what the middle needs.
    fn step_arrays(&self) -> usize {
        3 + match (self.numerics.scheme, self.numerics.gauge) {
            (Scheme::Strang, _) => 0,
            (Scheme::FourthOrder, Gauge::Velocity) => 1,
            (Scheme::FourthOrder, Gauge::Length) => 2,
        }
    }

    /// The line has its gradient twice instead of turned, one factor more, and two more of itself to double a step with.
    fn add_line(&self, memory: &mut Memory) {
        let points = self.numerics.grid.x.points;
        let middle = usize::from(self.numerics.scheme == Scheme::FourthOrder);
        memory.tables += 3 * ((4 + middle) * C * points + own(points));
        let blocks = |points: usize| (64 + points.div_ceil(64)) * C;
        memory.workspace += C * 2 * points + scratch(points) * C;
        // The coarse half of a ramp is an array; the fine one lies within the workspace itself.
        memory.workspace += 3 * blocks(points) - 2 * 64 * C;
    }

    fn add_plane(&self, y: Axis, memory: &mut Memory) {
        let x = self.numerics.grid.x;
        let (nx, rows) = (x.points, y.points / self.parts());
        let kept = nx * rows;
        // A mirrored factor has two numbers per point.
        let factors = (nx + y.points) * C;
        memory.tables += self.step_arrays() * C * kept + 3 * factors + rows * 4 * R + own(nx) + own(rows);
        let longest = scratch(nx).max(scratch(rows)).max(nx).max(rows);
        let lane = (longest + 8 * rows) * C;
        let lines = 3 * C * (nx + rows) + 2 * factors + (nx + rows) * 5 * R;
        memory.workspace += kept * C + self.threads * lane + lines;
    }
}

fn add_map(axes: [Axis; 2], range: MapRange, samples: usize, memory: &mut Memory) {
    let momenta = 2 * range.last() + 1;
    let lines = axes.map(|axis| sum_length(axis.points, momenta));
    memory.tables += axes[0].points * axes[1].points * R + samples * 6 * R + 2 * momenta * R;
    for (axis, line) in axes.iter().zip(lines) {
        memory.tables += (axis.points + line + momenta) * C + own(line);
    }
    let turned = momenta * axes[1].points;
    let [line, longest] = [lines, lines.map(scratch)].map(|[x, y]| x.max(y));
    memory.map += (momenta * momenta + turned + line + axes[0].points + longest + 2 * momenta) * C;
}

/// Bytes that a transform of this length, both ways, keeps.
fn own(points: usize) -> usize {
    2 * C * points
}

/// Numbers that transforms of this length need beside their data.
fn scratch(points: usize) -> usize {
    Transform::new(points).make_scratch().len()
}
