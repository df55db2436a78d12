//! One step against two halves of it, and the energy: a look at ψ in one array beside it, at the price of some steps.
//!
//! Without absorber a step is unitary, so two halves forth and the whole one back end as far from where they began as the two
//! ways end apart. Nothing here is planned per point: every factor is an exponential, which a few looks at a run can afford.

use num_complex::Complex;

use super::along::KineticFactor;
use super::turn::{GROUP, each_group, gather_columns, scatter_columns};
use super::{Lane, Plane, PlaneWorkspace};
use crate::problem::Gauge;
use crate::step::Drive;

type C = Complex<f64>;

/// What [`Plane::doubled`] needs along the axes.
#[derive(Clone, Debug)]
pub struct Doubling {
    /// Kinetic factors of half a step forth.
    half: [KineticFactor; 2],
    /// Of a whole step back.
    back: [KineticFactor; 2],
}

/// What the field does during one step and its halves.
#[derive(Clone, Copy, Debug)]
pub struct Doubled<'a> {
    /// The step.
    pub whole: &'a Drive,
    /// Its halves.
    pub halves: &'a [Drive; 2],
    /// E at its end, a.u.
    pub next: [f64; 2],
}

/// e^{-i duration (V - correction |∇V + E|²) - i duration r·E}, but for a common phase.
#[derive(Clone, Copy, Debug)]
struct Local {
    duration: f64,
    field: [f64; 2],
    correction: f64,
}

impl Plane {
    /// What [`Self::doubled`] needs.
    pub fn doubling(&self) -> Doubling {
        let factors = |fraction: f64| {
            let duration = fraction * self.splitting.kinetic * self.time_step;
            [0, 1].map(|d| self.along[d].factor([self.grid.x, self.y][d], duration))
        };
        Doubling { half: factors(0.5), back: factors(-1.0) }
    }

    /// Norm of the difference between the open `psi` after one step without absorber and after two halves, but for a common
    /// phase, relative to its own; `values` is V on the whole grid.
    ///
    /// # Panics
    /// If `psi` does not have the kept length.
    pub fn doubled(
        &self,
        doubling: &Doubling,
        values: &[f64],
        psi: &[C],
        drives: &Doubled,
        work: &mut PlaneWorkspace,
    ) -> f64 {
        work.turned.copy_from_slice(psi);
        let outer = self.splitting.outer * self.time_step;
        let [whole, first, second] =
            [drives.whole, &drives.halves[0], &drives.halves[1]].map(|drive| self.inside_drive(drive));
        let next = self.inside(drives.next);
        let local = |duration, field| Local { duration, field, correction: 0.0 };
        let half = 0.5 * self.time_step;
        // An open ψ lacks the closing factor of its last step.
        self.local(values, local(1.5 * outer, whole.field), work);
        self.between(&doubling.half, half, &first, values, work);
        self.local(values, local(outer, second.field), work);
        self.between(&doubling.half, half, &second, values, work);
        self.local(values, local(-0.5 * outer, next), work);
        self.between(&doubling.back, -self.time_step, &whole.reversed(next), values, work);
        self.local(values, local(-2.0 * outer, whole.field), work);
        let norm: f64 = psi.iter().map(C::norm_sqr).sum();
        let overlap: C = psi.iter().zip(&work.turned).map(|(p, t)| p.conj() * t).sum();
        let factor = overlap / norm;
        let rest: f64 = psi.iter().zip(&work.turned).map(|(p, t)| (t - factor * p).norm_sqr()).sum();
        (rest / norm).sqrt()
    }

    /// ⟨ψ|p²/2 + V|ψ⟩, hartree, from the open `psi` at a time of this `field` and vector `potential`; `values` is V on the
    /// whole grid.
    ///
    /// # Panics
    /// As [`Self::closed`].
    pub fn energy(
        &self,
        values: &[f64],
        psi: &[C],
        [field, potential]: [[f64; 2]; 2],
        work: &mut PlaneWorkspace,
    ) -> f64 {
        self.closed(psi, field, potential, work);
        let start = self.grid.len() - self.len();
        let value = |i: usize| values[self.outside(start + i)];
        let mut sum: f64 = work.turned.iter().enumerate().map(|(i, p)| p.norm_sqr() * value(i)).sum();
        let (nx, along) = (self.grid.x.points, self.order.place.len());
        let PlaneWorkspace { turned, lanes, .. } = work;
        let lane = &mut lanes[0];
        let lines = &mut lane.lines[..GROUP * along];
        for first in (0..nx).step_by(GROUP) {
            gather_columns(turned, lines, nx, first, &self.order);
            for line in lines.chunks_mut(along) {
                self.along[1].forward(line, &mut lane.scratch);
                sum += self.along[1].energy(line, self.y);
            }
        }
        for line in turned.chunks_mut(nx) {
            self.along[0].forward(line, &mut lane.scratch);
            sum += self.along[0].energy(line, self.grid.x);
        }
        sum * self.grid.cell() * if self.mirror.is_some() { 2.0 } else { 1.0 }
    }

    /// What a step of length `tau`, of either sign, does between its outer local factors.
    fn between(
        &self,
        planned: &[KineticFactor; 2],
        tau: f64,
        drive: &Drive,
        values: &[f64],
        work: &mut PlaneWorkspace,
    ) {
        let Some(middle) = self.splitting.middle else {
            let [a, b] = drive.potential_integral;
            let square = drive.square_integral.iter().sum();
            return self.kinetic(planned, [a[0] + b[0], a[1] + b[1]], square, work);
        };
        self.kinetic(planned, drive.potential_integral[0], drive.square_integral[0], work);
        let (duration, correction) = (middle * tau, tau * tau / 48.0);
        self.local(values, Local { duration, field: drive.middle_field, correction }, work);
        self.kinetic(planned, drive.potential_integral[1], drive.square_integral[1], work);
    }

    fn kinetic(&self, planned: &[KineticFactor; 2], first: [f64; 2], second: f64, work: &mut PlaneWorkspace) {
        let PlaneWorkspace { turned, lanes, rows, tables, .. } = work;
        let [x, y] = match self.gauge {
            Gauge::Length => planned,
            Gauge::Velocity => {
                self.shift(planned, first, second, &mut tables.kinetic[0]);
                &tables.kinetic[0]
            }
        };
        let (nx, along) = (self.grid.x.points, self.order.place.len());
        each_group(turned, rows, lanes, 0, &|_, lines, _, lane: &mut Lane| {
            for line in lines.chunks_mut(nx) {
                self.along[0].forward(line, &mut lane.scratch);
                self.along[0].back(self.arch, line, x, &mut lane.scratch);
            }
        });
        let lane = &mut lanes[0];
        let lines = &mut lane.lines[..GROUP * along];
        for group in (0..nx).step_by(GROUP) {
            gather_columns(turned, lines, nx, group, &self.order);
            for line in lines.chunks_mut(along) {
                self.along[1].forward(line, &mut lane.scratch);
                self.along[1].back(self.arch, line, y, &mut lane.scratch);
            }
            scatter_columns(lines, turned, nx, group, &self.order);
        }
    }

    fn local(&self, values: &[f64], local: Local, work: &mut PlaneWorkspace) {
        let [ex, ey] = if self.gauge == Gauge::Length { local.field } else { [0.0; 2] };
        let (nx, axis, y) = (self.grid.x.points, self.grid.x, self.y);
        let above = y.points - self.order.place.len();
        let ([gx, gy], start) = (&self.gradient, self.grid.len() - self.len());
        let angle = |i: usize, at: f64| {
            let (gx, gy) = (gx[i], gy[i]);
            let square = gx * (gx + 2.0 * ex) + gy * (gy + 2.0 * ey);
            -local.duration * (values[self.outside(start + i)] - local.correction * square + at)
        };
        let PlaneWorkspace { turned, lanes, rows, .. } = work;
        each_group(turned, rows, lanes, 0, &|first, lines, _, _: &mut Lane| {
            for (j, line) in lines.chunks_mut(nx).enumerate() {
                let (start, height) = ((first + j) * nx, ey * y.position(above + first + j));
                for (i, p) in line.iter_mut().enumerate() {
                    *p *= C::cis(angle(start + i, ex * axis.position(i) + height));
                }
            }
        });
    }
}
