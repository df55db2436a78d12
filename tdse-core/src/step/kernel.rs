//! Loops over the grid: factors multiplied on, moments taken along the way.
//!
//! Written once over `pulp`'s vectors and run with the widest instructions the processor has, so the same executable
//! gives the same bits wherever the instruction set is the same. Sums run block by block in a fixed order.

#![expect(
    clippy::inline_always,
    reason = "vector code must be inlined into the function that pulp dispatches to"
)]

use num_complex::Complex;
use pulp::{Arch, Simd, WithSimd, bytemuck};

use super::ramp::{BLOCK, Ramp};

type C = Complex<f64>;

/// Grid lengths must be a multiple of this, so that no vector is left incomplete.
pub(super) const LANES: usize = 8;

/// Sums over one pass: norm, gradient, and the norm in the outer blocks (all without the volume element).
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Sums {
    pub(super) norm: f64,
    pub(super) gradient: f64,
    pub(super) edge: f64,
}

/// ψ_j ← ψ_j table_j.
pub(super) struct Multiply<'a> {
    pub(super) psi: &'a mut [C],
    pub(super) table: &'a [C],
}

impl WithSimd for Multiply<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let (psi, table) = (S::as_mut_simd_c64s(self.psi).0, S::as_simd_c64s(self.table).0);
        for (p, t) in psi.iter_mut().zip(table) {
            *p = simd.mul_c64s(*p, *t);
        }
    }
}

/// ψ_j ← ψ_j table_j e^{i(α+βj)}.
pub(super) struct MultiplyRamp<'a> {
    pub(super) psi: &'a mut [C],
    pub(super) table: &'a [C],
    pub(super) ramp: &'a Ramp,
}

impl WithSimd for MultiplyRamp<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let blocks = self.psi.chunks_mut(BLOCK).zip(self.table.chunks(BLOCK)).zip(&self.ramp.coarse);
        for ((psi, table), coarse) in blocks {
            times_ramp(simd, psi, table, *coarse, &self.ramp.fine);
        }
    }
}

/// [`MultiplyRamp`], with the moments of ψ as it was before; `edge` blocks at each end count as the edge.
pub(super) struct SumAndMultiplyRamp<'a> {
    pub(super) psi: &'a mut [C],
    pub(super) table: &'a [C],
    pub(super) ramp: &'a Ramp,
    pub(super) gradient: &'a [[f64; 2]],
    pub(super) edge: usize,
}

impl WithSimd for SumAndMultiplyRamp<'_> {
    type Output = Sums;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> Sums {
        let count = self.ramp.coarse.len();
        let mut sums = Sums::default();
        let blocks =
            self.psi.chunks_mut(BLOCK).zip(self.table.chunks(BLOCK)).zip(self.gradient.chunks(BLOCK));
        for (b, (((psi, table), gradient), coarse)) in blocks.zip(&self.ramp.coarse).enumerate() {
            sums.add(block_sums(simd, psi, gradient), b < self.edge || b + self.edge >= count);
            times_ramp(simd, psi, table, *coarse, &self.ramp.fine);
        }
        sums
    }
}

/// The moments alone.
pub(super) struct Sum<'a> {
    pub(super) psi: &'a [C],
    pub(super) gradient: &'a [[f64; 2]],
    pub(super) edge: usize,
}

impl WithSimd for Sum<'_> {
    type Output = Sums;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> Sums {
        let count = self.psi.len().div_ceil(BLOCK);
        let mut sums = Sums::default();
        for (b, (psi, gradient)) in self.psi.chunks(BLOCK).zip(self.gradient.chunks(BLOCK)).enumerate() {
            sums.add(block_sums(simd, psi, gradient), b < self.edge || b + self.edge >= count);
        }
        sums
    }
}

impl Sums {
    #[inline(always)]
    fn add(&mut self, (norm, gradient): (f64, f64), at_edge: bool) {
        self.norm += norm;
        self.gradient += gradient;
        self.edge += if at_edge { norm } else { 0.0 };
    }
}

/// ψ_j ← ψ_j table_j e^{i(α+βj)} e^{i c g_j}, for |c g_j| ≤ [`LARGEST_TILT`].
pub(super) struct MultiplyRampTilt<'a> {
    pub(super) psi: &'a mut [C],
    pub(super) table: &'a [C],
    pub(super) ramp: &'a Ramp,
    pub(super) gradient: &'a [[f64; 2]],
    pub(super) c: f64,
}

/// Largest angle of a tilt: there the series below is exact to 2e-16.
pub(super) const LARGEST_TILT: f64 = 0.04;

/// e^{iθ} = p_c(θ²) + iθ p_s(θ²), Taylor series through θ⁷; coefficients of p_c and p_s side by side.
pub(super) const TAYLOR: [[f64; 2]; 4] =
    [[1.0, 1.0], [-1.0 / 2.0, -1.0 / 6.0], [1.0 / 24.0, 1.0 / 120.0], [-1.0 / 720.0, -1.0 / 5040.0]];

impl WithSimd for MultiplyRampTilt<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let pair = |[re, im]: [f64; 2]| pairs(simd, re, im);
        let [one, two, three, four] = TAYLOR.map(pair);
        let (scale, odd, unit) = (pair([self.c, self.c]), pair([0.0, self.c]), pair([1.0, 0.0]));
        let blocks =
            self.psi.chunks_mut(BLOCK).zip(self.table.chunks(BLOCK)).zip(self.gradient.chunks(BLOCK));
        for (((psi, table), gradient), coarse) in blocks.zip(&self.ramp.coarse) {
            let coarse = simd.splat_c64s(*coarse);
            let (psi, table) = (S::as_mut_simd_c64s(psi).0, S::as_simd_c64s(table).0);
            let fine = S::as_simd_c64s(&self.ramp.fine).0;
            let gradient = S::as_simd_f64s(bytemuck::cast_slice(gradient)).0;
            for (((p, t), f), g) in psi.iter_mut().zip(table).zip(fine).zip(gradient) {
                let theta = simd.mul_f64s(scale, *g);
                let q = simd.mul_f64s(theta, theta);
                let series = simd.mul_add_f64s(four, q, three);
                let series = simd.mul_add_f64s(series, q, two);
                let series = simd.mul_add_f64s(series, q, one);
                let tilt = bytemuck::cast(simd.mul_f64s(series, simd.mul_add_f64s(odd, *g, unit)));
                let factor = simd.mul_c64s(*t, simd.mul_c64s(coarse, *f));
                *p = simd.mul_c64s(simd.mul_c64s(*p, tilt), factor);
            }
        }
    }
}

/// Vector of `re` in even and `im` in odd lanes.
#[inline(always)]
fn pairs<S: Simd>(simd: S, re: f64, im: f64) -> S::f64s {
    bytemuck::cast(simd.splat_c64s(C::new(re, im)))
}

#[inline(always)]
fn times_ramp<S: Simd>(simd: S, psi: &mut [C], table: &[C], coarse: C, fine: &[C; BLOCK]) {
    let coarse = simd.splat_c64s(coarse);
    let (psi, table, fine) = (S::as_mut_simd_c64s(psi).0, S::as_simd_c64s(table).0, S::as_simd_c64s(fine).0);
    for ((p, t), f) in psi.iter_mut().zip(table).zip(fine) {
        *p = simd.mul_c64s(*p, simd.mul_c64s(*t, simd.mul_c64s(coarse, *f)));
    }
}

/// Σ|ψ|² and Σ|ψ|²g of one block.
#[inline(always)]
fn block_sums<S: Simd>(simd: S, psi: &[C], gradient: &[[f64; 2]]) -> (f64, f64) {
    let psi = S::as_simd_f64s(bytemuck::cast_slice(psi)).0;
    let gradient = S::as_simd_f64s(bytemuck::cast_slice(gradient)).0;
    let zero = simd.splat_f64s(0.0);
    let (mut norm, mut force) = ([zero; 2], [zero; 2]);
    for (psi, gradient) in psi.chunks_exact(2).zip(gradient.chunks_exact(2)) {
        for l in 0..2 {
            let square = simd.mul_f64s(psi[l], psi[l]);
            norm[l] = simd.add_f64s(norm[l], square);
            force[l] = simd.mul_add_f64s(square, gradient[l], force[l]);
        }
    }
    (
        simd.reduce_sum_f64s(simd.add_f64s(norm[0], norm[1])),
        simd.reduce_sum_f64s(simd.add_f64s(force[0], force[1])),
    )
}

/// Name of the instruction set the loops run with on this machine.
pub fn instruction_set() -> &'static str {
    match Arch::new() {
        #[cfg(target_arch = "x86_64")]
        Arch::V3(_) => "x86-64-v3 (AVX2, FMA)",
        #[cfg(target_arch = "aarch64")]
        Arch::Neon(_) => "aarch64 (NEON)",
        Arch::Scalar => "scalar",
        _ => "wider than the program names",
    }
}
