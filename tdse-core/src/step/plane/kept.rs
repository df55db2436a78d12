//! The part of the plane that is kept under a mirror, and what is outside it: whole wave functions, vectors, overlaps.

use num_complex::Complex;

use super::Plane;
use crate::step::{Drive, exchanged};

type C = Complex<f64>;

impl Plane {
    /// A vector as it is inside, or back.
    pub(super) fn inside(&self, vector: [f64; 2]) -> [f64; 2] {
        if self.exchanged { exchanged(vector) } else { vector }
    }

    /// A drive as it is inside.
    pub(super) fn inside_drive(&self, drive: &Drive) -> Drive {
        if self.exchanged { drive.exchanged() } else { *drive }
    }

    /// Index on the grid of the caller of point `i` of the whole plane inside.
    pub(super) fn outside(&self, i: usize) -> usize {
        let nx = self.grid.x.points;
        if self.exchanged { i % nx * self.y.points + i / nx } else { i }
    }

    /// ∫ f* ψ without the volume element, of f on the whole grid and the part of ψ kept.
    pub fn overlap(&self, f: impl Fn(usize) -> C, kept: &[C]) -> C {
        let start = self.grid.len() - self.len();
        let f = |i: usize| f(self.outside(i));
        let direct: C = kept.iter().enumerate().map(|(i, p)| f(start + i).conj() * p).sum();
        let Some(parity) = self.mirror else { return direct };
        let nx = self.grid.x.points;
        let mirrored = |i: usize| start - nx - i / nx * nx + i % nx;
        let other: C = kept.iter().enumerate().map(|(i, p)| f(mirrored(i)).conj() * p).sum();
        direct + other * parity.sign()
    }

    /// The part of a wave function on the whole grid that is kept.
    ///
    /// # Panics
    /// If `psi` does not have the grid's length.
    pub fn folded(&self, psi: &[C]) -> Vec<C> {
        assert_eq!(psi.len(), self.grid.len(), "wave function and grid have the same length");
        (self.grid.len() - self.len()..self.grid.len()).map(|i| psi[self.outside(i)]).collect()
    }

    /// The wave function on the whole grid, from the part kept.
    ///
    /// # Panics
    /// If the lengths are not those of the part kept and of the grid.
    pub fn unfold(&self, kept: &[C], out: &mut [C]) {
        assert!(kept.len() == self.len() && out.len() == self.grid.len(), "part and whole");
        let row = if self.exchanged { self.y.points } else { self.grid.x.points };
        for (j, row) in out.chunks_mut(row).enumerate() {
            self.row(kept, j, row);
        }
    }

    /// Row `j` of the whole grid, from the part kept.
    ///
    /// # Panics
    /// If `j` is beyond the grid or `out` is no row.
    pub fn row(&self, kept: &[C], j: usize, out: &mut [C]) {
        let nx = self.grid.x.points;
        let start = self.y.points - self.order.place.len();
        let inside = |j: usize| match self.mirror {
            Some(parity) if j < start => (start - 1 - j, parity.sign()),
            _ => (j - start, 1.0),
        };
        if self.exchanged {
            for (i, o) in out.iter_mut().enumerate() {
                let (from, sign) = inside(i);
                *o = kept[from * nx + j] * sign;
            }
            return;
        }
        let (from, sign) = inside(j);
        out.iter_mut().zip(&kept[from * nx..(from + 1) * nx]).for_each(|(o, k)| *o = k * sign);
    }
}

/// Values of shape `[ny, nx]` as `[nx, ny]`.
pub(super) fn transposed(values: &[f64], nx: usize) -> Vec<f64> {
    let rows = values.len() / nx;
    (0..values.len()).map(|i| values[i % rows * nx + i / rows]).collect()
}
