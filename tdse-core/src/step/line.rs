//! The step in one dimension.

use num_complex::Complex;
use pulp::Arch;

use super::kernel::{
    LANES, LARGEST_TILT, Multiply, MultiplyRamp, MultiplyRampTilt, Sum, SumAndMultiplyRamp, Sums,
};
use super::ramp::{BLOCK, Ramp};
use super::{Drive, Moments, Splitting};
use crate::absorber;
use crate::grid::{Grid, Transform};
use crate::potential::PotentialOnGrid;
use crate::problem::{Absorber, Gauge, Numerics};

/// Everything about a step that does not change with time.
///
/// Neighbouring steps share their outer local factors, so ψ is kept *open*: without the closing factor
/// e^{-iwτ(V + xE)} of the step that led to it. [`Line::open`] and [`Line::close`] convert; moments of densities are the
/// same in both forms.
#[derive(Clone, Debug)]
pub struct Line {
    arch: Arch,
    grid: Grid,
    gauge: Gauge,
    time_step: f64,
    splitting: Splitting,
    transform: Transform,
    /// e^{-iwτV}: what an open ψ lacks, but for the field.
    closing: Vec<Complex<f64>>,
    /// V' twice at every point, beside the two parts of ψ.
    gradient: Vec<[f64; 2]>,
    /// e^{-2iwτV} e^{-τW}: the closing factor of one step, the opening one of the next, and the absorber.
    outer: Vec<Complex<f64>>,
    /// e^{-imτ(V - τ²|V'|²/48)}; empty without a middle factor.
    middle: Vec<Complex<f64>>,
    /// e^{-i…τk²/2}/n in the order of the transform.
    kinetic: Vec<Complex<f64>>,
    edge_blocks: usize,
}

/// Scratch of [`Line::step`]; holds nothing between steps.
#[derive(Clone, Debug)]
pub struct LineWorkspace {
    scratch: Vec<Complex<f64>>,
    ramp: Ramp,
    momentum_ramps: [Ramp; 2],
}

impl Line {
    /// Precomputes the factors of a step.
    ///
    /// # Panics
    /// If `potential` does not belong to the grid of `numerics`, or the grid is not one-dimensional or no multiple of 8 points.
    pub fn new(potential: &PotentialOnGrid, numerics: &Numerics) -> Self {
        let (grid, tau) = (numerics.grid, numerics.time_step);
        let axis = grid.x;
        assert_eq!(grid.dimensions(), 1, "a line has one dimension");
        assert_eq!(potential.values.len(), axis.points, "potential and grid have the same length");
        assert!(axis.points.is_multiple_of(LANES), "a multiple of {LANES} points, got {}", axis.points);
        let splitting = Splitting::of(numerics.scheme);
        let damping = match numerics.absorber {
            Absorber::None => vec![0.0; axis.points],
            Absorber::Smooth { width } | Absorber::Round { width } => absorber::strength(axis, width),
        };
        let (values, gradient) = (potential.values.clone(), &potential.gradient[0]);
        let outer = values
            .iter()
            .zip(&damping)
            .map(|(v, w)| Complex::from_polar((-tau * w).exp(), -2.0 * splitting.outer * tau * v))
            .collect();
        let middle = splitting.middle.map_or_else(Vec::new, |m| {
            let corrected = values.iter().zip(gradient).map(|(v, g)| v - tau * tau / 48.0 * g * g);
            corrected.map(|v| Complex::cis(-m * tau * v)).collect()
        });
        let scale = 1.0 / axis.points as f64;
        let kinetic = axis
            .momenta()
            .map(|k| Complex::from_polar(scale, -splitting.kinetic * tau * 0.5 * k * k))
            .collect();
        let edge = match numerics.absorber {
            Absorber::None => axis.extent() / 16.0,
            Absorber::Smooth { width } | Absorber::Round { width } => width,
        };
        let blocks = (edge / axis.spacing) as usize / BLOCK;
        // A block is left at each edge of any box that is eight blocks long.
        let edge_blocks = blocks.max(usize::from(axis.points >= 8 * BLOCK));
        Self {
            arch: Arch::new(),
            grid,
            gauge: numerics.gauge,
            time_step: tau,
            splitting,
            transform: Transform::new(axis.points),
            closing: values.iter().map(|v| Complex::cis(-splitting.outer * tau * v)).collect(),
            gradient: gradient.iter().map(|&g| [g, g]).collect(),
            outer,
            middle,
            kinetic,
            edge_blocks,
        }
    }

    /// Number of points.
    pub fn len(&self) -> usize {
        self.outer.len()
    }

    /// Whether the line has no point.
    pub fn is_empty(&self) -> bool {
        self.outer.is_empty()
    }

    /// Workspace for [`Self::step`].
    pub fn make_workspace(&self) -> LineWorkspace {
        let points = self.grid.x.points;
        LineWorkspace {
            scratch: self.transform.make_scratch(),
            ramp: Ramp::new(points),
            momentum_ramps: [Ramp::new(points / 2), Ramp::new(points / 2)],
        }
    }

    /// Largest electric field for which the gradient correction is evaluated to rounding, a.u.
    pub fn largest_field(&self) -> f64 {
        let steepest = self.gradient.iter().fold(0.0, |m: f64, g| m.max(g[0].abs()));
        match self.splitting.middle {
            Some(m) if self.gauge == Gauge::Length => {
                LARGEST_TILT / (m * self.time_step.powi(3) / 24.0 * steepest)
            }
            _ => f64::INFINITY,
        }
    }

    /// Advances the open `psi` by one step; returns the moments at its start.
    pub fn step(&self, psi: &mut [Complex<f64>], drive: &Drive, work: &mut LineWorkspace) -> Moments {
        self.set_ramp(&mut work.ramp, 2.0 * self.splitting.outer * self.time_step, drive.field[0], 0.0);
        let sums = self.arch.dispatch(SumAndMultiplyRamp {
            psi,
            table: &self.outer,
            ramp: &work.ramp,
            gradient: &self.gradient,
            edge: self.edge_blocks,
        });
        self.transform.forward(psi, &mut work.scratch);
        let top = top_of(psi);
        if let Some(fraction) = self.splitting.middle {
            self.kinetic_factor(psi, drive.potential_integral[0][0], drive.square_integral[0], work);
            self.transform.inverse(psi, &mut work.scratch);
            self.middle_factor(psi, fraction, drive.middle_field[0], work);
            self.transform.forward(psi, &mut work.scratch);
            self.kinetic_factor(psi, drive.potential_integral[1][0], drive.square_integral[1], work);
        } else {
            let both = drive.potential_integral[0][0] + drive.potential_integral[1][0];
            self.kinetic_factor(psi, both, drive.square_integral[0] + drive.square_integral[1], work);
        }
        self.transform.inverse(psi, &mut work.scratch);
        self.moments(sums, top)
    }

    /// Moments of `psi` without a step; overwrites `psi`'s transform into `copy`.
    pub fn moments_of(&self, psi: &[Complex<f64>], work: &mut LineWorkspace) -> Moments {
        let mut copy = psi.to_vec();
        self.transform.forward(&mut copy, &mut work.scratch);
        let sums = self.arch.dispatch(Sum { psi, gradient: &self.gradient, edge: self.edge_blocks });
        self.moments(sums, top_of(&copy))
    }

    /// ⟨ψ|p²/2 + V|ψ⟩, hartree, of a `psi` in length gauge, which is overwritten.
    pub fn energy(&self, values: &[f64], psi: &mut [Complex<f64>], work: &mut LineWorkspace) -> f64 {
        let potential: f64 = psi.iter().zip(values).map(|(p, v)| p.norm_sqr() * v).sum();
        self.transform.forward(psi, &mut work.scratch);
        let axis = self.grid.x;
        let kinetic: f64 = psi.iter().zip(axis.momenta()).map(|(p, k)| p.norm_sqr() * 0.5 * k * k).sum();
        (potential + kinetic / axis.points as f64) * self.grid.cell()
    }

    /// Turns ψ at a time when the field is `field` into the open form.
    pub fn open(&self, psi: &mut [Complex<f64>], field: f64) {
        let field = if self.gauge == Gauge::Length { field } else { 0.0 };
        let rate = self.splitting.outer * self.time_step * field;
        for ((p, c), x) in psi.iter_mut().zip(&self.closing).zip(self.grid.x.positions()) {
            *p *= c.conj() * Complex::cis(rate * x);
        }
    }

    /// Turns the open form at a time of this `field` and vector `potential` into ψ in length gauge.
    pub fn close(&self, psi: &mut [Complex<f64>], field: f64, potential: f64, work: &mut LineWorkspace) {
        let rate = match self.gauge {
            Gauge::Length => -self.splitting.outer * self.time_step * field,
            // ψ_length = e^{iAx} ψ_velocity.
            Gauge::Velocity => potential,
        };
        work.ramp.set(rate * self.grid.x.position(0), rate * self.grid.x.spacing);
        self.arch.dispatch(MultiplyRamp { psi, table: &self.closing, ramp: &work.ramp });
    }

    /// e^{-i duration·field·x + i extra} in length gauge, e^{i extra} in velocity gauge.
    fn set_ramp(&self, ramp: &mut Ramp, duration: f64, field: f64, extra: f64) {
        let field = if self.gauge == Gauge::Length { field } else { 0.0 };
        let rate = -duration * field;
        ramp.set(rate * self.grid.x.position(0) + extra, rate * self.grid.x.spacing);
    }

    /// e^{-imτṼ} with V holding the field: its cross term -(τ²/48) 2E V' is a small rotation, its E² term a phase.
    fn middle_factor(&self, psi: &mut [Complex<f64>], fraction: f64, field: f64, work: &mut LineWorkspace) {
        let correction = fraction * self.time_step.powi(3) / 48.0;
        match self.gauge {
            Gauge::Length => {
                self.set_ramp(&mut work.ramp, fraction * self.time_step, field, correction * field * field);
                let tilt = 2.0 * correction * field;
                self.arch.dispatch(MultiplyRampTilt {
                    psi,
                    table: &self.middle,
                    ramp: &work.ramp,
                    gradient: &self.gradient,
                    c: tilt,
                });
            }
            Gauge::Velocity => self.arch.dispatch(Multiply { psi, table: &self.middle }),
        }
    }

    /// e^{-i∫(k+A)²/2 dt}/n on the transform of ψ; `first` = ∫A dt, `second` = ∫A² dt, unused in length gauge.
    fn kinetic_factor(&self, psi: &mut [Complex<f64>], first: f64, second: f64, work: &mut LineWorkspace) {
        if self.gauge == Gauge::Length {
            return self.arch.dispatch(Multiply { psi, table: &self.kinetic });
        }
        let half = psi.len() / 2;
        let (low, high) = psi.split_at_mut(half);
        let spacing = self.grid.x.momentum(1);
        let [ramp_low, ramp_high] = &mut work.momentum_ramps;
        ramp_low.set(-0.5 * second, -spacing * first);
        ramp_high.set(-0.5 * second - self.grid.x.momentum(half) * first, -spacing * first);
        self.arch.dispatch(MultiplyRamp { psi: low, table: &self.kinetic[..half], ramp: ramp_low });
        self.arch.dispatch(MultiplyRamp { psi: high, table: &self.kinetic[half..], ramp: ramp_high });
    }

    fn moments(&self, sums: Sums, top: f64) -> Moments {
        let cell = self.grid.cell();
        Moments {
            norm: sums.norm * cell,
            gradient: [sums.gradient * cell, 0.0],
            edge: sums.edge * cell,
            top: top * cell / self.grid.x.points as f64,
        }
    }
}

/// Σ|ψ_k|² over the upper quarter of the momenta, both signs.
fn top_of(transformed: &[Complex<f64>]) -> f64 {
    let n = transformed.len();
    transformed[n / 2 - n / 8..n / 2 + n / 8].iter().map(Complex::norm_sqr).sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::Potential;
    use crate::problem::Scheme;

    type C = Complex<f64>;

    fn numerics(scheme: Scheme, gauge: Gauge) -> Numerics {
        Numerics {
            grid: Grid::line(96, 0.4),
            time_step: 0.1,
            scheme,
            gauge,
            absorber: Absorber::Smooth { width: 8.0 },
            trailing_time: 0.0,
        }
    }

    const DRIVE: Drive = Drive {
        field: [0.07, 0.0],
        middle_field: [0.05, 0.0],
        potential_integral: [[0.011, 0.0], [0.007, 0.0]],
        square_integral: [0.002, 0.001],
    };

    fn packet(grid: Grid) -> Vec<C> {
        grid.x.positions().map(|x| C::cis(0.7 * x) * (-0.1 * (x - 1.0) * (x - 1.0)).exp()).collect()
    }

    /// The step as the formulas say it, with an exponential at every point: the truth for the fast one.
    fn plain_step(potential: &Potential, numerics: &Numerics, psi: &mut Vec<C>) {
        let (axis, tau) = (numerics.grid.x, numerics.time_step);
        let length = numerics.gauge == Gauge::Length;
        let field = |e: [f64; 2]| if length { e[0] } else { 0.0 };
        let damping = absorber::strength(axis, numerics.absorber.width());
        let kinetic = |psi: &mut Vec<C>, duration: f64, a: f64, a2: f64| {
            let transform = Transform::new(axis.points);
            let mut scratch = transform.make_scratch();
            transform.forward(psi, &mut scratch);
            for (p, k) in psi.iter_mut().zip(axis.momenta()) {
                let shift = if length { 0.0 } else { k * a + 0.5 * a2 };
                *p *= C::cis(-(0.5 * k * k * duration + shift)) / axis.points as f64;
            }
            transform.inverse(psi, &mut scratch);
        };
        let local = |psi: &mut Vec<C>, duration: f64, e: f64, correction: f64| {
            for (p, x) in psi.iter_mut().zip(axis.positions()) {
                let (v, slope) = potential.value_and_slope(x);
                let (v, slope) = (v + x * e, slope + e);
                *p *= C::cis(-duration * (v - correction * slope * slope));
            }
        };
        let outer = if numerics.scheme == Scheme::FourthOrder { 1.0 / 6.0 } else { 0.5 };
        local(psi, 2.0 * outer * tau, field(DRIVE.field), 0.0);
        for (p, w) in psi.iter_mut().zip(damping) {
            *p *= (-tau * w).exp();
        }
        let [[a, _], [b, _]] = DRIVE.potential_integral;
        let [a2, b2] = DRIVE.square_integral;
        match numerics.scheme {
            Scheme::FourthOrder => {
                kinetic(psi, 0.5 * tau, a, a2);
                local(psi, 2.0 / 3.0 * tau, field(DRIVE.middle_field), tau * tau / 48.0);
                kinetic(psi, 0.5 * tau, b, b2);
            }
            Scheme::Strang => kinetic(psi, tau, a + b, a2 + b2),
        }
    }

    #[test]
    fn the_step_is_what_its_formulas_say_and_its_workspace_is_scratch() {
        let potential = Potential::SoftCoulomb { charge: 1.0, softening: 1.2 };
        for scheme in [Scheme::FourthOrder, Scheme::Strang] {
            for gauge in [Gauge::Length, Gauge::Velocity] {
                let numerics = numerics(scheme, gauge);
                let line = Line::new(&PotentialOnGrid::sample(&potential, &numerics.grid), &numerics);
                let (mut fast, mut plain) = (packet(numerics.grid), packet(numerics.grid));
                let mut work = line.make_workspace();
                work.scratch.fill(C::new(f64::NAN, f64::NAN));
                for ramp in work.momentum_ramps.iter_mut().chain([&mut work.ramp]) {
                    ramp.coarse.fill(C::new(f64::NAN, f64::NAN));
                    ramp.fine.fill(C::new(f64::NAN, f64::NAN));
                }
                let moments = line.step(&mut fast, &DRIVE, &mut work);
                let before = packet(numerics.grid);
                plain_step(&potential, &numerics, &mut plain);
                for (a, b) in fast.iter().zip(&plain) {
                    assert!((a - b).norm() < 1e-13, "{scheme:?}, {gauge:?}: {a} against {b}");
                }
                let sum = |f: &dyn Fn(f64) -> f64| -> f64 {
                    let density = before.iter().map(C::norm_sqr);
                    density.zip(numerics.grid.x.positions()).map(|(d, x)| d * f(x)).sum::<f64>() * 0.4
                };
                assert!((moments.norm - sum(&|_| 1.0)).abs() < 1e-13);
                assert!((moments.gradient[0] - sum(&|x| potential.value_and_slope(x).1)).abs() < 1e-13);
            }
        }
    }
}
