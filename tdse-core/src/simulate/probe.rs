//! A look at ψ at a few moments of a run, at negligible cost: one step against two halves of it, and the energy kept while
//! no field is on.

use num_complex::Complex;

use crate::field::Field;
use crate::potential::PotentialOnGrid;
use crate::problem::{Absorber, Numerics};
use crate::step::{Drive, Line, LineWorkspace};

use super::{Schedule, drive};

/// Most moments at which a step is doubled.
pub(super) const MOMENTS: usize = 3;

/// Steps from which on a run is long enough for all of them to be negligible.
const LONG: usize = 1000;

/// What looks at ψ at a few moments of a run.
#[derive(Clone, Debug)]
pub(super) struct Probe {
    /// The step and its half, both without absorber.
    lines: [Line; 2],
    /// Step numbers, rising, and what both halves of each step need of the field.
    moments: Vec<(usize, [Drive; 2])>,
    /// First sample without field, and the last one, where they are two.
    free: Option<[usize; 2]>,
}

impl Probe {
    /// Probe at the step of the largest field; in a long run also of the largest field in the second half, and at three quarters of the run.
    pub(super) fn new(
        potential: &PotentialOnGrid,
        numerics: &Numerics,
        field: &Field,
        schedule: &Schedule,
        drives: &[Drive],
    ) -> Self {
        let whole = Numerics { absorber: Absorber::None, ..numerics.clone() };
        let half = Numerics { time_step: 0.5 * whole.time_step, ..whole.clone() };
        let halved =
            Schedule { time_step: 0.5 * schedule.time_step, steps: 2 * schedule.steps, ..schedule.clone() };
        let strength = |n: &usize| drives[*n].field[0].abs();
        let strongest = |from: usize| {
            (from..schedule.steps).max_by(|a, b| strength(a).total_cmp(&strength(b))).unwrap_or(0)
        };
        let mut steps = vec![strongest(0)];
        if schedule.steps >= LONG {
            steps.extend([strongest(schedule.steps / 2), 3 * schedule.steps / 4]);
        }
        steps.sort_unstable();
        steps.dedup();
        let halves = |n: usize| [drive(field, &halved, 2 * n), drive(field, &halved, 2 * n + 1)];
        let first =
            ((schedule.field_end - schedule.start) / schedule.time_step - 1e-9).ceil().max(0.0) as usize;
        Self {
            lines: [Line::new(potential, &whole), Line::new(potential, &half)],
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

    /// Norm of the difference between `psi` after one step and after two halves, but for a common phase, relative to its
    /// own; moment `index`, `drive` and the field after it. Overwrites `psi` and `halves`.
    pub(super) fn doubled(
        &self,
        index: usize,
        (drive, next): (&Drive, f64),
        psi: &mut [Complex<f64>],
        halves: &mut [Complex<f64>],
        work: &mut LineWorkspace,
    ) -> f64 {
        halves.copy_from_slice(psi);
        let [whole, half] = &self.lines;
        whole.open(psi, drive.field[0]);
        whole.step(psi, drive, work);
        whole.close(psi, next, 0.0, work);
        let drives = &self.moments[index].1;
        half.open(halves, drive.field[0]);
        for drive in drives {
            half.step(halves, drive, work);
        }
        half.close(halves, next, 0.0, work);
        let norm: f64 = halves.iter().map(Complex::norm_sqr).sum();
        let overlap: Complex<f64> = halves.iter().zip(&*psi).map(|(h, p)| h.conj() * p).sum();
        let factor = overlap / norm;
        let rest: f64 = halves.iter().zip(&*psi).map(|(h, p)| (p - factor * h).norm_sqr()).sum();
        (rest / norm).sqrt()
    }

    /// ⟨H⟩ without field of a ψ in length gauge, hartree; overwrites `psi`.
    pub(super) fn energy(
        &self,
        potential: &PotentialOnGrid,
        psi: &mut [Complex<f64>],
        work: &mut LineWorkspace,
    ) -> f64 {
        self.lines[0].energy(&potential.values, psi, work)
    }
}
