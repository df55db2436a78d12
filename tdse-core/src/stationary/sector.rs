//! The Hamiltonian of a plane on functions of given parities in x and y: a quarter of the grid.
//!
//! The grid keeps the mirrors x → -x and y → -y exactly. The kinetic energy is a small dense matrix per axis, exactly the one of
//! the periodic grid.

use std::f64::consts::PI;

use nalgebra::{DMatrix, DVector};

use super::bound::Operator;
use crate::grid::Axis;
use crate::problem::Parity;

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

    /// Values on the whole plane, ∫ψ² = 1.
    pub(super) fn unfolded(&self, psi: &DVector<f64>) -> Vec<f64> {
        let (nx, ny) = self.shape();
        let scale = 0.5 / (psi.norm() * (self.axes[0].spacing * self.axes[1].spacing).sqrt());
        let fold = |i: usize, n: usize, parity: Parity| {
            if i < n { (n - 1 - i, parity.sign()) } else { (i - n, 1.0) }
        };
        let mut out = Vec::with_capacity(4 * nx * ny);
        for j in 0..2 * ny {
            let (row, row_sign) = fold(j, ny, self.parity[1]);
            for i in 0..2 * nx {
                let (column, sign) = fold(i, nx, self.parity[0]);
                out.push(psi[row * nx + column] * sign * row_sign * scale);
            }
        }
        out
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
