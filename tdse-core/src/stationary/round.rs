//! Every bound state of a round atom in a box of the plane, by angular momentum: what ionization is counted from.
//!
//! States R(r) e^{imφ} are kept as functions of r, not as arrays over the plane, and a wave function is projected on all of one m
//! together: P_m = b† G⁻¹ b with the overlaps b and their own G on the grid. So neither their normalisation nor their being not
//! quite orthogonal matters; what R lacks beside the grid's own states, 1e-6 or so, errs 1 - ΣP by its square, and by it times
//! the square root of what is ionized.

use nalgebra::{DMatrix, DVector};
use num_complex::Complex;

use super::level::rough_radial_level;
use super::{BoundSeries, RadialFunction, StationaryError, radial_count_below};
use crate::grid::{Axis, Grid};
use crate::potential::Potential;

type C = Complex<f64>;

/// Energy below which a state counts as bound, hartree.
const BOUND: f64 = -1e-9;

/// The bound states of a round atom in a box.
#[derive(Clone, Debug)]
pub struct RoundStates {
    /// The radial functions of |m| = 0, 1, 2, … , by rising energy.
    radial: Vec<Vec<RadialFunction>>,
    /// The highest energy of each |m|, hartree.
    highest: Vec<f64>,
    /// What the box lacks of them.
    series: BoundSeries,
}

impl RoundStates {
    /// Every state with an energy below zero in the circle that a two-dimensional grid holds, those that it squeezes included;
    /// none of a potential that confines, from which nothing ionizes.
    ///
    /// # Errors
    /// As [`radial_level`](super::radial_level).
    ///
    /// # Panics
    /// If the grid is not two-dimensional.
    pub fn in_box(potential: &Potential, grid: &Grid) -> Result<Self, StationaryError> {
        assert_eq!(grid.dimensions(), 2, "a plane has two dimensions");
        let [x, y] = grid.extents();
        let reach = 0.5 * x.min(y);
        let (mut radial, mut highest) = (Vec::new(), Vec::new());
        while !potential.is_confining() {
            let m = radial.len() as u32;
            let count = radial_count_below(potential, m, BOUND, reach);
            if count == 0 {
                break;
            }
            let level = |number| rough_radial_level(potential, m, number, reach);
            let all = (0..count).map(level).collect::<Result<Vec<_>, StationaryError>>()?;
            highest.extend(all.last().map(|(energy, _)| *energy));
            radial.push(all.into_iter().map(|(_, function)| function).collect());
        }
        Ok(Self { radial, highest, series: BoundSeries::new(potential, grid) })
    }

    /// Number of states, m and -m counted apart.
    pub fn count(&self) -> usize {
        self.radial.iter().enumerate().map(|(m, all)| all.len() * if m == 0 { 1 } else { 2 }).sum()
    }

    /// Population of all bound states of every angular momentum m, by rising m; `row` fills in row j of the wave function on
    /// `grid`, in length gauge. What is missing to the norm at the start is ionized.
    ///
    /// # Panics
    /// If the grid has one dimension or odd lengths.
    pub fn populations(&self, grid: &Grid, row: impl Fn(usize, &mut [C])) -> Vec<(i32, f64)> {
        let axes = [grid.x, grid.y.expect("a plane has two dimensions")];
        assert!(axes.iter().all(|axis| axis.points.is_multiple_of(2)), "even numbers of points");
        let mut sums: Vec<Sums> = self.radial.iter().map(|all| Sums::new(all.len())).collect();
        let [mut above, mut below] = [vec![C::default(); grid.x.points], vec![C::default(); grid.x.points]];
        let half = axes[1].points / 2;
        for j in 0..half {
            row(half + j, &mut above);
            row(half - 1 - j, &mut below);
            self.add_rows([&above, &below], axes, j, &mut sums);
        }
        let mut found = Vec::new();
        for ((m, sums), highest) in (0..).zip(&sums).zip(&self.highest) {
            let [forth, back] =
                sums.shares(grid.cell()).map(|shares| self.series.bound(Some(*highest), &shares));
            found.push((m, forth));
            if m > 0 {
                found.push((-m, back));
            }
        }
        found.sort_by_key(|(m, _)| *m);
        found
    }

    /// Adds rows `j` above and below the middle: four points at a time, at which R is the same.
    fn add_rows(&self, [above, below]: [&[C]; 2], axes: [Axis; 2], j: usize, sums: &mut [Sums]) {
        let nx = axes[0].points;
        let y = (j as f64 + 0.5) * axes[1].spacing;
        for i in 0..nx / 2 {
            let x = (i as f64 + 0.5) * axes[0].spacing;
            let r = x.hypot(y);
            let (right, left) = (nx / 2 + i, nx / 2 - 1 - i);
            let turn = C::new(x, -y) / r;
            // e^{-imφ} of the first quarter; the others have its conjugate and the sign (-1)^m.
            let (mut phase, mut sign) = (C::new(1.0, 0.0), 1.0);
            for (all, sums) in self.radial.iter().zip(&mut *sums) {
                let (with, against) = (above[right] + below[left] * sign, below[right] + above[left] * sign);
                let overlaps = [phase * with + phase.conj() * against, phase.conj() * with + phase * against];
                sums.add(all, r, overlaps);
                phase *= turn;
                sign = -sign;
            }
        }
    }
}

/// Sums over the grid of one |m|.
struct Sums {
    /// R at the present point.
    radial: Vec<f64>,
    /// ΣR_a R_b over the whole plane, a ≤ b.
    gram: DMatrix<f64>,
    /// ⟨m⟩ and ⟨-m⟩.
    overlaps: [DVector<C>; 2],
}

impl Sums {
    fn new(count: usize) -> Self {
        let overlaps = [DVector::zeros(count), DVector::zeros(count)];
        Self { radial: vec![0.0; count], gram: DMatrix::zeros(count, count), overlaps }
    }

    fn add(&mut self, functions: &[RadialFunction], r: f64, psi: [C; 2]) {
        for (value, function) in self.radial.iter_mut().zip(functions) {
            *value = function.value(r);
        }
        for (b, value) in self.radial.iter().enumerate() {
            if *value == 0.0 {
                continue;
            }
            for (overlaps, psi) in self.overlaps.iter_mut().zip(psi) {
                overlaps[b] += psi * *value;
            }
            for a in 0..=b {
                self.gram[(a, b)] += 4.0 * self.radial[a] * value;
            }
        }
    }

    /// b† G⁻¹ b of both directions, as what each state adds to those below it: the squares of L⁻¹ b with G = L L†.
    fn shares(&self, cell: f64) -> [Vec<f64>; 2] {
        let mut gram = self.gram.clone();
        gram.fill_lower_triangle_with_upper_triangle();
        let factors = gram.cholesky();
        self.overlaps.each_ref().map(|b| {
            let Some(factors) = &factors else { return vec![0.0; b.len()] };
            let parts = [b.map(|c| c.re), b.map(|c| c.im)];
            let [re, im] = parts.map(|part| {
                factors.l_dirty().solve_lower_triangular(&part).unwrap_or_else(|| DVector::zeros(b.len()))
            });
            re.iter().zip(&im).map(|(re, im)| (re * re + im * im) * cell).collect()
        })
    }
}
