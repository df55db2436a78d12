//! The Hamiltonian of a plane on functions of given parities in x and y: a quarter of the grid.
//!
//! The grid keeps the mirrors x → -x and y → -y exactly. The kinetic energy is a small dense matrix per axis, exactly the one of
//! the periodic grid.

use std::f64::consts::PI;
use std::sync::Arc;

use nalgebra::{DMatrix, DVector};

use super::bound::Operator;
use crate::grid::Axis;
use crate::problem::Parity;

/// A real function of given parities, kept where x, y > 0; copies share its values.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Quarter {
    /// x fastest.
    values: Arc<[f64]>,
    /// Points along half of each axis.
    half: [usize; 2],
    /// Signs of the images at -x and at -y.
    signs: [f64; 2],
    factor: f64,
}

impl Quarter {
    /// The function times a number.
    pub(super) fn times(&self, factor: f64) -> Self {
        Self { factor, ..self.clone() }
    }

    /// Points of the whole grid.
    pub(super) fn points(&self) -> usize {
        4 * self.values.len()
    }

    /// Value at point `i` of the whole grid, x fastest.
    pub(super) fn at(&self, i: usize) -> f64 {
        let [nx, ny] = self.half;
        let fold = |i: usize, n: usize, sign: f64| if i < n { (n - 1 - i, sign) } else { (i - n, 1.0) };
        let (row, row_sign) = fold(i / (2 * nx), ny, self.signs[1]);
        let (column, sign) = fold(i % (2 * nx), nx, self.signs[0]);
        self.values[row * nx + column] * sign * row_sign * self.factor
    }
}

/// H on the functions of given parities, on the quarter x, y > 0, x fastest; unit vectors are normalised states.
pub(super) struct Sector {
    axes: [Axis; 2],
    parity: [Parity; 2],
    potential: DMatrix<f64>,
    directions: [Direction; 2],
}

/// Kinetic energy along one half axis for one parity.
struct Direction {
    /// Rows: orthonormal cosines or sines on the half axis.
    waves: DMatrix<f64>,
    /// k²/2 of each.
    energies: Vec<f64>,
    kinetic: DMatrix<f64>,
}

impl Direction {
    fn new(axis: Axis, parity: Parity) -> Self {
        let half = axis.points / 2;
        let first = usize::from(parity == Parity::Odd);
        let waves = DMatrix::from_fn(half, half, |k, j| {
            let k = k + first;
            let angle = PI * k as f64 * (j as f64 + 0.5) / half as f64;
            let scale = if k == 0 || k == half { 1.0 } else { 2.0 };
            (scale / half as f64).sqrt() * if first == 0 { angle.cos() } else { angle.sin() }
        });
        let momentum = |k: usize| 2.0 * PI * (k + first) as f64 / axis.extent();
        let energies: Vec<f64> = (0..half).map(|k| 0.5 * momentum(k).powi(2)).collect();
        let mut weighted = waves.clone();
        for (mut row, t) in weighted.row_iter_mut().zip(&energies) {
            row *= *t;
        }
        let kinetic = waves.tr_mul(&weighted);
        Self { waves, energies, kinetic }
    }
}

impl Sector {
    /// With the potential at (column, row) of the quarter.
    pub(super) fn new(
        axes: [Axis; 2],
        parity: [Parity; 2],
        potential: impl FnMut(usize, usize) -> f64,
    ) -> Self {
        let [nx, ny] = axes.map(|a| a.points / 2);
        let potential = DMatrix::from_fn(nx, ny, potential);
        let directions = [0, 1].map(|d| Direction::new(axes[d], parity[d]));
        Self { axes, parity, potential, directions }
    }

    /// V on the quarter, one row per x.
    pub(super) fn potential(&self) -> &DMatrix<f64> {
        &self.potential
    }

    /// Kinetic energy along x or y, on half an axis.
    pub(super) fn kinetic(&self, direction: usize) -> &DMatrix<f64> {
        &self.directions[direction].kinetic
    }

    pub(super) fn shape(&self) -> (usize, usize) {
        self.potential.shape()
    }

    /// A function of x and y on the quarter.
    pub(super) fn sample(&self, function: impl Fn(f64, f64) -> f64) -> DVector<f64> {
        let (nx, ny) = self.shape();
        let at = |d: usize, i: usize| (i as f64 + 0.5) * self.axes[d].spacing;
        let values = DMatrix::from_fn(nx, ny, |i, j| function(at(0, i), at(1, j)));
        DVector::from_column_slice(values.as_slice())
    }

    /// A vector of a smaller sector with the same spacings, zero outside.
    pub(super) fn padded(&self, small: &Self, psi: &DVector<f64>) -> DVector<f64> {
        let ((nx, ny), (sx, sy)) = (self.shape(), small.shape());
        let mut out = DVector::zeros(nx * ny);
        for j in 0..sy {
            out.rows_mut(j * nx, sx).copy_from(&psi.rows(j * sx, sx));
        }
        out
    }

    pub(super) fn residual(&self, psi: &DVector<f64>, energy: f64) -> f64 {
        (self.apply(psi) - energy * psi).norm() / psi.norm()
    }

    /// The function with ∫ψ² = 1 over the whole plane.
    pub(super) fn normalised(&self, psi: &DVector<f64>) -> Quarter {
        let scale = 0.5 / (psi.norm() * (self.axes[0].spacing * self.axes[1].spacing).sqrt());
        Quarter {
            values: psi.iter().map(|value| value * scale).collect(),
            half: [self.shape().0, self.shape().1],
            signs: self.parity.map(Parity::sign),
            factor: 1.0,
        }
    }

    fn matrix(&self, psi: &DVector<f64>) -> DMatrix<f64> {
        let (nx, ny) = self.shape();
        DMatrix::from_column_slice(nx, ny, psi.as_slice())
    }
}

impl Operator for Sector {
    fn largest(&self) -> f64 {
        let kinetic = |d: &Direction| d.energies.iter().copied().fold(0.0, f64::max);
        self.directions.iter().map(kinetic).sum::<f64>() + self.potential.amax()
    }

    fn apply(&self, psi: &DVector<f64>) -> DVector<f64> {
        let psi = self.matrix(psi);
        let mut out = psi.component_mul(&self.potential);
        out.gemm(1.0, &self.directions[0].kinetic, &psi, 1.0);
        out.gemm(1.0, &psi, &self.directions[1].kinetic, 1.0);
        DVector::from_column_slice(out.as_slice())
    }

    fn precondition(&self, psi: &DVector<f64>, shift: f64) -> DVector<f64> {
        let [x, y] = &self.directions;
        let mut inside = &x.waves * self.matrix(psi) * y.waves.transpose();
        for (mut column, ty) in inside.column_iter_mut().zip(&y.energies) {
            for (value, tx) in column.iter_mut().zip(&x.energies) {
                *value /= tx + ty + shift;
            }
        }
        let out = x.waves.tr_mul(&inside) * &y.waves;
        DVector::from_column_slice(out.as_slice())
    }
}
