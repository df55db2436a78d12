//! A look at ψ at a few moments of a run, at negligible cost: one step against two halves of it, and the energy kept while
//! no field is on.

use num_complex::Complex;

use crate::field::Field;
use crate::potential::PotentialOnGrid;
use crate::problem::{Absorber, Numerics};
use crate::step::{Doubled, Doubling, Drive, Line, LineWorkspace, Step, StepWorkspace};

use super::{Schedule, drive};

type C = Complex<f64>;

/// Most moments at which a step is doubled.
pub(super) const MOMENTS: usize = 3;

/// Steps from which on a run is long enough for all of them to be negligible, in one and in two dimensions.
const LONG: [usize; 2] = [1000, 2000];

/// What looks at ψ at a few moments of a run.
#[derive(Clone, Debug)]
pub(super) struct Probe {
    halving: Halving,
    /// Step numbers, rising, and what both halves of each step need of the field.
    moments: Vec<(usize, [Drive; 2])>,
    /// First sample without field, and the last one, where they are two.
    free: Option<[usize; 2]>,
}

/// How a step is halved.
#[derive(Clone, Debug)]
enum Halving {
    /// The step and its half, both without absorber.
    Line(Box<[Line; 2]>),
    Plane(Doubling),
}

impl Probe {
    /// Probe at the step of the largest field; in a long run also of the largest field in the second half, and at three quarters of the run.
    pub(super) fn new(
        potential: &PotentialOnGrid,
        numerics: &Numerics,
        field: &Field,
        schedule: &Schedule,
        drives: &[Drive],
        kernel: &Step,
    ) -> Self {
        let halving = match kernel {
            Step::Line(_) => {
                let whole = Numerics { absorber: Absorber::None, ..numerics.clone() };
                let half = Numerics { time_step: 0.5 * whole.time_step, ..whole.clone() };
                Halving::Line(Box::new([whole, half].map(|n| Line::new(potential, &n))))
            }
            Step::Plane(plane) => Halving::Plane(plane.doubling()),
        };
        let halved =
            Schedule { time_step: 0.5 * schedule.time_step, steps: 2 * schedule.steps, ..schedule.clone() };
        let strength = |n: &usize| drives[*n].field[0].hypot(drives[*n].field[1]);
        let strongest = |from: usize| {
            (from..schedule.steps).max_by(|a, b| strength(a).total_cmp(&strength(b))).unwrap_or(0)
        };
        let mut steps = vec![strongest(0)];
        if schedule.steps >= LONG[numerics.grid.dimensions() - 1] {
            steps.extend([strongest(schedule.steps / 2), 3 * schedule.steps / 4]);
        }
        steps.sort_unstable();
        steps.dedup();
        let halves = |n: usize| [drive(field, &halved, 2 * n), drive(field, &halved, 2 * n + 1)];
        let first =
            ((schedule.field_end - schedule.start) / schedule.time_step - 1e-9).ceil().max(0.0) as usize;
        Self {
            halving,
            moments: steps.into_iter().map(|n| (n, halves(n))).collect(),
            free: (first + 1 < schedule.steps).then_some([first, schedule.steps]),
        }
    }

    /// Step numbers at which a step is doubled.
    pub(super) fn steps(&self) -> impl Iterator<Item = usize> {
        self.moments.iter().map(|(n, _)| *n)
    }

    /// Whether the step that starts at sample `step` is doubled.
    pub(super) fn doubles_at(&self, step: usize) -> bool {
        self.steps().any(|n| n == step)
    }

    /// Whether the energy is taken at sample `step`.
    pub(super) fn weighs_at(&self, step: usize) -> bool {
        self.free.is_some_and(|free| free.contains(&step))
    }

    /// Norm of the difference between the open `psi` after step `step` and after two halves of it, but for a common phase,
    /// relative to its own; `drive` is that of the step, `next` the field after it.
    pub(super) fn local_error(
        &self,
        run: (&Step, &PotentialOnGrid),
        step: usize,
        psi: &[C],
        (drive, next): (&Drive, [f64; 2]),
        work: &mut (&mut StepWorkspace, &mut [C]),
    ) -> f64 {
        let (_, halves) = self.moments.iter().find(|(n, _)| *n == step).expect("a step that is doubled");
        let (kernel, potential) = run;
        match (&self.halving, kernel) {
            (Halving::Plane(doubling), Step::Plane(plane)) => {
                let drives = Doubled { whole: drive, halves, next };
                let scratch = work.0.of_plane().expect("the workspace of a plane");
                plane.doubled(doubling, &potential.values, psi, &drives, scratch)
            }
            (Halving::Line(lines), Step::Line(line)) => {
                let (copy, scratch) = work.0.of_line().expect("the workspace of a line");
                // In the gauge of the run: no vector potential here.
                copy.copy_from_slice(psi);
                line.close(copy, drive.field[0], 0.0, scratch);
                doubled_line(lines, (drive, halves, next[0]), copy, work.1, scratch)
            }
            _ => unreachable!("a probe made for the same step"),
        }
    }

    /// ⟨H⟩ without field, hartree, of an open `psi` at a time of this field and vector potential.
    pub(super) fn energy(
        &self,
        (kernel, potential): (&Step, &PotentialOnGrid),
        psi: &[C],
        [field, vector_potential]: [[f64; 2]; 2],
        work: &mut StepWorkspace,
    ) -> f64 {
        match (&self.halving, kernel) {
            (Halving::Plane(_), Step::Plane(plane)) => {
                let scratch = work.of_plane().expect("the workspace of a plane");
                plane.energy(&potential.values, psi, [field, vector_potential], scratch)
            }
            (Halving::Line(lines), Step::Line(line)) => {
                let (copy, scratch) = work.of_line().expect("the workspace of a line");
                copy.copy_from_slice(psi);
                line.close(copy, field[0], vector_potential[0], scratch);
                lines[0].energy(&potential.values, copy, scratch)
            }
            _ => unreachable!("a probe made for the same step"),
        }
    }
}

/// The same in one dimension, for a ψ that is not open; overwrites `psi` and `halves`.
fn doubled_line(
    [whole, half]: &[Line; 2],
    (drive, drives, next): (&Drive, &[Drive; 2], f64),
    psi: &mut [C],
    halves: &mut [C],
    work: &mut LineWorkspace,
) -> f64 {
    halves.copy_from_slice(psi);
    whole.open(psi, drive.field[0]);
    whole.step(psi, drive, work);
    whole.close(psi, next, 0.0, work);
    half.open(halves, drive.field[0]);
    for drive in drives {
        half.step(halves, drive, work);
    }
    half.close(halves, next, 0.0, work);
    let norm: f64 = halves.iter().map(C::norm_sqr).sum();
    let overlap: C = halves.iter().zip(&*psi).map(|(h, p)| h.conj() * p).sum();
    let factor = overlap / norm;
    let rest: f64 = halves.iter().zip(&*psi).map(|(h, p)| (p - factor * h).norm_sqr()).sum();
    (rest / norm).sqrt()
}
