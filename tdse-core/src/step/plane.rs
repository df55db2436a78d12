//! The step in two dimensions.
//!
//! T = Tx + Ty exactly, so one step is three passes through memory whatever the scheme: along the rows the opening local
//! factor, the moments and the first x factor; along the columns, gathered into an array of their own, the first y factor,
//! the local factor in the middle and the second y factor; along the rows, gathered back, the second x factor.

mod along;
mod doubled;
mod kept;
mod local;
mod turn;

pub use doubled::{Doubled, Doubling};

use std::ops::Range;

use num_complex::Complex;
use pulp::Arch;

use self::along::{Along, KineticFactor};
use self::kept::transposed;
use self::local::{LineSums, MultiplyLine, SumLine, TiltLine};
use self::turn::{GROUP, Order, each_group, gather_columns, gather_rows};
use super::kernel::{LARGEST_TILT, Multiply};
use super::ramp::powers;
use super::{Drive, Moments, Splitting};
use crate::absorber;
use crate::grid::{Axis, Grid};
use crate::potential::PotentialOnGrid;
use crate::problem::{Absorber, Gauge, Mirror, Numerics, Parity};

type C = Complex<f64>;

/// Everything about a step in the plane that does not change with time.
///
/// ψ is kept open, as by [`Line`](super::Line). Under a mirror y → -y only the rows y > 0 are kept, shape `[ny/2, nx]`; under
/// x → -x the same with x and y exchanged throughout: inside, rows run along y.
#[derive(Clone, Debug)]
pub struct Plane {
    arch: Arch,
    /// The grid, its axes exchanged under a mirror x → -x.
    grid: Grid,
    y: Axis,
    mirror: Option<Parity>,
    exchanged: bool,
    gauge: Gauge,
    time_step: f64,
    splitting: Splitting,
    along: [Along; 2],
    order: Order,
    /// e^{-iwτV}, shape `[rows, nx]`.
    closing: Vec<C>,
    /// e^{-2iwτV} e^{-τW}.
    outer: Vec<C>,
    /// ∇V by rows.
    gradient: [Vec<f64>; 2],
    /// e^{-imτ(V - τ²|∇V|²/48)} by columns in their order, shape `[nx, rows]`; empty without a middle factor.
    middle: Vec<C>,
    /// ∇V by columns in their order; empty without a middle factor or in velocity gauge.
    turned_gradient: [Vec<f64>; 2],
    kinetic: [KineticFactor; 2],
    /// Points of each row away from the edges.
    inner: Vec<Range<usize>>,
    largest_field: f64,
}

/// Scratch of [`Plane::step`]; holds nothing between steps.
#[derive(Clone, Debug)]
pub struct PlaneWorkspace {
    turned: Vec<C>,
    lanes: Vec<Lane>,
    rows: Vec<LineSums>,
    columns: Vec<LineSums>,
    tables: Tables,
}

/// Scratch of one thread.
#[derive(Clone, Debug)]
struct Lane {
    scratch: Vec<C>,
    /// A group of lines, for what works in place.
    lines: Vec<C>,
}

/// Factors of one step that belong to a whole row or column.
#[derive(Clone, Debug)]
struct Tables {
    /// e^{-2iwτ E_x x} over x and e^{-2iwτ E_y y} over rows.
    opening: [Vec<C>; 2],
    /// The same for the middle factor: over x, and over a column's points in their order.
    middle: [Vec<C>; 2],
    tilt: [f64; 2],
    /// For [`Plane::closed`].
    closing: [Vec<C>; 2],
    /// First and second kinetic factor along x and y; as planned in length gauge.
    kinetic: [[KineticFactor; 2]; 2],
}

impl Plane {
    /// Precomputes the factors of a step; under a `mirror` for half the plane.
    ///
    /// # Panics
    /// If `potential` does not belong to the grid of `numerics`, or the grid is not two-dimensional, or a length is no
    /// multiple of 8 (16 along y under a mirror).
    pub fn new(potential: &PotentialOnGrid, numerics: &Numerics, mirror: Option<Mirror>) -> Self {
        match mirror {
            None => Self::upright(potential, numerics, None),
            Some(Mirror::Y(parity)) => Self::upright(potential, numerics, Some(parity)),
            Some(Mirror::X(parity)) => {
                let x = numerics.grid.x;
                let grid = Grid { x: numerics.grid.y.expect("a plane has two dimensions"), y: Some(x) };
                let turned = |v: &[f64]| transposed(v, x.points);
                let [gx, gy] = &potential.gradient;
                let potential =
                    PotentialOnGrid { values: turned(&potential.values), gradient: [turned(gy), turned(gx)] };
                let plane = Self::upright(&potential, &Numerics { grid, ..numerics.clone() }, Some(parity));
                Self { exchanged: true, ..plane }
            }
        }
    }

    /// Without a mirror, or under y → -y.
    fn upright(potential: &PotentialOnGrid, numerics: &Numerics, mirror: Option<Parity>) -> Self {
        let (grid, tau) = (numerics.grid, numerics.time_step);
        let y = grid.y.expect("a plane has two dimensions");
        assert_eq!(potential.values.len(), grid.len(), "potential and grid have the same length");
        let rows = if mirror.is_some() { y.points / 2 } else { y.points };
        assert!(grid.x.points.is_multiple_of(GROUP) && rows.is_multiple_of(GROUP), "multiples of {GROUP}");
        let splitting = Splitting::of(numerics.scheme);
        let kept = (y.points - rows) * grid.x.points..;
        let [gx, gy] = potential.gradient.each_ref().map(|g| g[kept.clone()].to_vec());
        let values = &potential.values[kept.clone()];
        let damping = &absorber::on_grid(&grid, numerics.absorber)[kept];
        let along = [Along::new(grid.x, None), Along::new(y, mirror)];
        let order = along[1].order(rows);
        let turned = |value: &dyn Fn(usize) -> f64| -> Vec<f64> {
            let mut out = vec![0.0; values.len()];
            for (i, column) in out.chunks_mut(rows).enumerate() {
                (0..rows).for_each(|j| column[order.place[j]] = value(j * grid.x.points + i));
            }
            out
        };
        let middle = splitting.middle.map_or_else(Vec::new, |m| {
            let square = |i: usize| gx[i] * gx[i] + gy[i] * gy[i];
            let corrected = turned(&|i| values[i] - tau * tau / 48.0 * square(i));
            corrected.into_iter().map(|v| C::cis(-m * tau * v)).collect()
        });
        let tilts = splitting.middle.filter(|_| numerics.gauge == Gauge::Length);
        let turned_gradient =
            if tilts.is_some() { [turned(&|i| gx[i]), turned(&|i| gy[i])] } else { Default::default() };
        let steepest = gx.iter().zip(&gy).fold(0.0, |m: f64, (x, y)| m.max(x.hypot(*y)));
        let outer = values
            .iter()
            .zip(damping)
            .map(|(v, w)| C::from_polar((-tau * w).exp(), -2.0 * splitting.outer * tau * v))
            .collect();
        Self {
            arch: Arch::new(),
            kinetic: [0, 1].map(|d| along[d].factor([grid.x, y][d], splitting.kinetic * tau)),
            inner: inner_points(&grid, y, numerics.absorber).split_off(y.points - rows),
            closing: values.iter().map(|v| C::cis(-splitting.outer * tau * v)).collect(),
            largest_field: tilts
                .map_or(f64::INFINITY, |m| LARGEST_TILT / (m * tau.powi(3) / 24.0 * steepest)),
            gauge: numerics.gauge,
            gradient: [gx, gy],
            time_step: tau,
            grid,
            y,
            mirror,
            exchanged: false,
            splitting,
            along,
            order,
            outer,
            middle,
            turned_gradient,
        }
    }

    /// The mirror under which half the plane is kept.
    pub fn mirror(&self) -> Option<Mirror> {
        self.mirror.map(if self.exchanged { Mirror::X } else { Mirror::Y })
    }

    /// Number of points kept.
    pub fn len(&self) -> usize {
        self.outer.len()
    }

    /// Whether no point is kept.
    pub fn is_empty(&self) -> bool {
        self.outer.is_empty()
    }

    /// Largest electric field for which the gradient correction is evaluated to rounding, a.u.
    pub fn largest_field(&self) -> f64 {
        self.largest_field
    }

    /// Workspace for [`Self::step`] on `threads` threads of the current rayon pool; one thread uses no pool.
    ///
    /// # Panics
    /// If `threads` is zero.
    pub fn make_workspace(&self, threads: usize) -> PlaneWorkspace {
        assert!(threads > 0, "at least one thread");
        let (rows, nx) = (self.order.place.len(), self.grid.x.points);
        let longest = self.along.each_ref().map(|a| a.make_scratch().len()).into_iter().max().unwrap_or(0);
        let one = C::new(1.0, 0.0);
        let lengths = [nx, rows];
        let lane = Lane {
            scratch: vec![C::default(); longest.max(nx).max(rows)],
            lines: vec![C::default(); GROUP * rows],
        };
        PlaneWorkspace {
            turned: vec![C::default(); self.len()],
            lanes: vec![lane; threads],
            rows: vec![LineSums::default(); rows],
            columns: vec![LineSums::default(); nx],
            tables: Tables {
                opening: lengths.map(|n| vec![one; n]),
                middle: lengths.map(|n| vec![one; n]),
                tilt: [0.0; 2],
                closing: lengths.map(|n| vec![one; n]),
                kinetic: [self.kinetic.clone(), self.kinetic.clone()],
            },
        }
    }

    /// Advances the open `psi` by one step; returns the moments at its start.
    ///
    /// # Panics
    /// If `psi` does not have the kept length, or the field has a component across the mirror.
    pub fn step(&self, psi: &mut [C], drive: &Drive, work: &mut PlaneWorkspace) -> Moments {
        assert_eq!(psi.len(), self.len(), "wave function and plane have the same length");
        self.prepare(&self.inside_drive(drive), &mut work.tables);
        let PlaneWorkspace { turned, lanes, rows, columns, tables } = work;
        let (nx, along, tables) = (self.grid.x.points, self.order.place.len(), &*tables);
        each_group(psi, rows, lanes, 0, &|first, lines, sums, lane: &mut Lane| {
            for (j, (line, sum)) in lines.chunks_mut(nx).zip(sums).enumerate() {
                *sum = self.open_row(first + j, line, tables, lane);
            }
        });
        each_group(turned, columns, lanes, 0, &|first, lines, sums, lane: &mut Lane| {
            gather_columns(psi, lines, nx, first, &self.order);
            for (i, (line, sum)) in lines.chunks_mut(along).zip(sums).enumerate() {
                sum.top = self.turn_column(first + i, line, tables, lane);
            }
        });
        each_group(psi, rows, lanes, 0, &|first, lines, _, lane: &mut Lane| {
            gather_rows(turned, lines, first, &self.order);
            if self.splitting.middle.is_some() {
                for line in lines.chunks_mut(nx) {
                    self.along[0].forward(line, &mut lane.scratch);
                    self.along[0].back(self.arch, line, &tables.kinetic[1][0], &mut lane.scratch);
                }
            }
        });
        self.moments(rows, columns)
    }

    /// Opening local factor and first x factor on row `j`; its sums as it was before.
    fn open_row(&self, j: usize, line: &mut [C], tables: &Tables, lane: &mut Lane) -> LineSums {
        let row = j * line.len()..(j + 1) * line.len();
        let mut sums = self.sum_row(j, line);
        self.arch.dispatch(MultiplyLine {
            psi: line,
            table: &self.outer[row],
            ramp: &tables.opening[0],
            phase: tables.opening[1][j],
        });
        self.along[0].forward(line, &mut lane.scratch);
        sums.top = self.along[0].top(line);
        self.along[0].back(self.arch, line, &tables.kinetic[0][0], &mut lane.scratch);
        sums
    }

    fn sum_row(&self, j: usize, line: &[C]) -> LineSums {
        let row = j * line.len()..(j + 1) * line.len();
        let gradient = self.gradient.each_ref().map(|g| &g[row.clone()]);
        self.arch.dispatch(SumLine { psi: line, gradient, inner: self.inner[j].clone() })
    }

    /// y factors and the middle factor between them on column `i`; the part of its norm at the top.
    fn turn_column(&self, i: usize, line: &mut [C], tables: &Tables, lane: &mut Lane) -> f64 {
        let column = i * line.len()..(i + 1) * line.len();
        self.along[1].forward(line, &mut lane.scratch);
        let top = self.along[1].top(line);
        self.along[1].back(self.arch, line, &tables.kinetic[0][1], &mut lane.scratch);
        if self.splitting.middle.is_none() {
            return top;
        }
        let table = &self.middle[column.clone()];
        match self.gauge {
            Gauge::Length => self.arch.dispatch(TiltLine {
                psi: line,
                table,
                ramp: &tables.middle[1],
                phase: tables.middle[0][i],
                gradient: self.turned_gradient.each_ref().map(|g| &g[column.clone()]),
                tilt: tables.tilt,
            }),
            Gauge::Velocity => self.arch.dispatch(Multiply { psi: line, table }),
        }
        self.along[1].forward(line, &mut lane.scratch);
        self.along[1].back(self.arch, line, &tables.kinetic[1][1], &mut lane.scratch);
        top
    }

    /// Sets the factors that this step's field puts on whole rows and columns.
    fn prepare(&self, drive: &Drive, tables: &mut Tables) {
        let along_y = drive.field[1] != 0.0 || drive.middle_field[1] != 0.0;
        assert!(self.mirror.is_none() || !along_y, "a field across the mirror breaks it");
        match self.gauge {
            Gauge::Length => {
                let tau = self.time_step;
                self.ramps(&mut tables.opening, 2.0 * self.splitting.outer * tau, drive.field, 0.0);
                if let Some(m) = self.splitting.middle {
                    let (field, correction) = (drive.middle_field, m * tau.powi(3) / 48.0);
                    let square = field[0] * field[0] + field[1] * field[1];
                    self.ramps(&mut tables.middle, m * tau, field, correction * square);
                    self.reorder(&mut tables.middle[1]);
                    tables.tilt = field.map(|e| 2.0 * correction * e);
                }
            }
            Gauge::Velocity => self.shift_momenta(drive, &mut tables.kinetic),
        }
    }

    /// e^{-i duration E_x x + i extra} over x, e^{-i duration E_y y} over the rows.
    fn ramps(&self, ramps: &mut [Vec<C>; 2], duration: f64, field: [f64; 2], extra: f64) {
        let start = self.y.position(self.y.points - self.order.place.len());
        let rates = field.map(|e| -duration * e);
        powers(
            C::cis(rates[0] * self.grid.x.position(0) + extra),
            rates[0] * self.grid.x.spacing,
            &mut ramps[0],
        );
        powers(C::cis(rates[1] * start), rates[1] * self.y.spacing, &mut ramps[1]);
    }

    /// Brings values over the rows into the order of a column. Under a mirror there is no field along y: all are one.
    fn reorder(&self, values: &mut [C]) {
        if self.mirror.is_some() {
            values.fill(C::new(1.0, 0.0));
        }
    }

    /// The kinetic factors of a step in velocity gauge.
    fn shift_momenta(&self, drive: &Drive, kinetic: &mut [[KineticFactor; 2]; 2]) {
        let strang = self.splitting.middle.is_none();
        for (half, factors) in kinetic.iter_mut().enumerate() {
            let (mut first, mut second) = (drive.potential_integral[half], drive.square_integral[half]);
            if strang {
                let [a, b] = drive.potential_integral;
                (first, second) = ([a[0] + b[0], a[1] + b[1]], drive.square_integral.iter().sum());
            }
            self.shift(&self.kinetic, first, second, factors);
        }
    }

    /// e^{-i k·∫A - i∫A²/2} on `planned` factors; the square goes with x.
    fn shift(
        &self,
        planned: &[KineticFactor; 2],
        first: [f64; 2],
        second: f64,
        factors: &mut [KineticFactor; 2],
    ) {
        for (d, factor) in factors.iter_mut().enumerate() {
            let extra = if d == 0 { -0.5 * second } else { 0.0 };
            match (factor, &planned[d]) {
                (KineticFactor::Whole(factor), KineticFactor::Whole(planned)) => {
                    let axis = [self.grid.x, self.y][d];
                    let (low, high) = factor.split_at_mut(axis.points / 2);
                    let rate = -first[d] * axis.momentum(1);
                    powers(C::cis(extra), rate, low);
                    powers(C::cis(extra - first[d] * axis.momentum(axis.points / 2)), rate, high);
                    factor.iter_mut().zip(planned).for_each(|(f, p)| *f *= p);
                }
                (KineticFactor::Mirrored(factor), KineticFactor::Mirrored(planned)) => {
                    assert!(first[d] == 0.0, "a field across the mirror breaks it");
                    factor.copy_from_slice(planned);
                }
                _ => unreachable!("factors made by the same line"),
            }
        }
    }

    /// Moments of `psi` without a step.
    pub fn moments_of(&self, psi: &[C], work: &mut PlaneWorkspace) -> Moments {
        let PlaneWorkspace { turned, lanes, rows, columns, .. } = work;
        let (nx, along) = (self.grid.x.points, self.order.place.len());
        turned.copy_from_slice(psi);
        each_group(turned, rows, lanes, 0, &|first, lines, sums, lane: &mut Lane| {
            for (j, (line, sum)) in lines.chunks_mut(nx).zip(sums).enumerate() {
                *sum = self.sum_row(first + j, line);
                self.along[0].forward(line, &mut lane.scratch);
                sum.top = self.along[0].top(line);
            }
        });
        each_group(turned, columns, lanes, 0, &|first, lines, sums, lane: &mut Lane| {
            gather_columns(psi, lines, nx, first, &self.order);
            for (line, sum) in lines.chunks_mut(along).zip(sums) {
                self.along[1].forward(line, &mut lane.scratch);
                sum.top = self.along[1].top(line);
            }
        });
        self.moments(rows, columns)
    }

    /// Turns ψ at a time when the field is `field` into the open form.
    pub fn open(&self, psi: &mut [C], field: [f64; 2]) {
        let mut ramps = [vec![C::default(); self.grid.x.points], vec![C::default(); self.order.place.len()]];
        self.ramps(&mut ramps, -1.0, self.inside(field).map(|e| self.local_rate(e)), 0.0);
        self.by_rows(psi, &ramps, |factor| factor.conj());
    }

    /// ψ in length gauge, in `work`, from the open form at a time of this `field` and vector `potential`.
    ///
    /// # Panics
    /// If `psi` does not have the kept length.
    pub fn closed<'w>(
        &self,
        psi: &[C],
        field: [f64; 2],
        potential: [f64; 2],
        work: &'w mut PlaneWorkspace,
    ) -> &'w [C] {
        let rates = match self.gauge {
            Gauge::Length => self.inside(field).map(|e| self.local_rate(e)),
            // ψ_length = e^{iA·r} ψ_velocity.
            Gauge::Velocity => self.inside(potential),
        };
        let PlaneWorkspace { turned, tables, .. } = work;
        turned.copy_from_slice(psi);
        self.ramps(&mut tables.closing, -1.0, rates, 0.0);
        self.by_rows(turned, &tables.closing, |factor| factor);
        turned
    }

    fn local_rate(&self, field: f64) -> f64 {
        if self.gauge == Gauge::Length { -self.splitting.outer * self.time_step * field } else { 0.0 }
    }

    /// Multiplies by `of` the closing factor and the ramps over x and over the rows.
    fn by_rows(&self, psi: &mut [C], ramps: &[Vec<C>; 2], of: impl Fn(C) -> C) {
        let nx = self.grid.x.points;
        for ((row, closing), phase) in psi.chunks_mut(nx).zip(self.closing.chunks(nx)).zip(&ramps[1]) {
            for ((p, c), ramp) in row.iter_mut().zip(closing).zip(&ramps[0]) {
                *p *= of(c * ramp * phase);
            }
        }
    }

    fn moments(&self, rows: &[LineSums], columns: &[LineSums]) -> Moments {
        let total = |lines: &[LineSums], part: &dyn Fn(&LineSums) -> f64| lines.iter().map(part).sum::<f64>();
        let scale = self.grid.cell() * if self.mirror.is_some() { 2.0 } else { 1.0 };
        let norm = total(rows, &|s| s.norm);
        let along_y = if self.mirror.is_some() { 0.0 } else { total(rows, &|s| s.gradient[1]) * scale };
        Moments {
            norm: norm * scale,
            gradient: self.inside([total(rows, &|s| s.gradient[0]) * scale, along_y]),
            edge: (norm - total(rows, &|s| s.inner)).max(0.0) * scale,
            top: total(rows, &|s| s.top).max(total(columns, &|s| s.top)) * scale,
        }
    }
}

/// Points of every row that are neither in the absorber nor, without one, in the outer 1/16 of the box at each side.
fn inner_points(grid: &Grid, y: Axis, absorber: Absorber) -> Vec<Range<usize>> {
    let width = match absorber {
        Absorber::None => None,
        Absorber::Smooth { width } | Absorber::Round { width } => Some(width),
    };
    let half = |axis: Axis| 0.5 * axis.extent() - width.unwrap_or(axis.extent() / 16.0);
    let (hx, hy) = (half(grid.x), half(y));
    y.positions()
        .map(|y| {
            let reach = match absorber {
                Absorber::Round { .. } => (hx.min(hy).powi(2) - y * y).max(0.0).sqrt(),
                Absorber::None | Absorber::Smooth { .. } if y.abs() > hy => 0.0,
                Absorber::None | Absorber::Smooth { .. } => hx,
            };
            let out = grid.x.positions().take_while(|x| *x < -reach).count();
            if reach > 0.0 { out..grid.x.points - out } else { 0..0 }
        })
        .collect()
}

#[cfg(test)]
mod oracle;
