//! Loops over one line of the plane: local factors multiplied on, moments taken along the way.

#![expect(
    clippy::inline_always,
    reason = "vector code must be inlined into the function that pulp dispatches to"
)]

use std::ops::Range;

use num_complex::Complex;
use pulp::{Simd, WithSimd, bytemuck};

use crate::step::kernel::TAYLOR;
use crate::step::ramp::BLOCK;

type C = Complex<f64>;

/// Sums over one line, without the volume element.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct LineSums {
    pub(super) norm: f64,
    pub(super) gradient: [f64; 2],
    /// Part of the norm away from the edges.
    pub(super) inner: f64,
    /// Part of the norm in the upper quarter of the momenta along the line.
    pub(super) top: f64,
}

/// Σ|ψ|², Σ|ψ|²∇V, and Σ|ψ|² over `inner`.
pub(super) struct SumLine<'a> {
    pub(super) psi: &'a [C],
    pub(super) gradient: [&'a [f64]; 2],
    pub(super) inner: Range<usize>,
}

impl WithSimd for SumLine<'_> {
    type Output = LineSums;

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) -> LineSums {
        let mut sums = LineSums::default();
        let [gx, gy] = self.gradient.map(|g| g.chunks(BLOCK));
        for (b, ((psi, gx), gy)) in self.psi.chunks(BLOCK).zip(gx).zip(gy).enumerate() {
            let mut density = [0.0; BLOCK];
            for (d, p) in density.iter_mut().zip(psi) {
                *d = p.re * p.re + p.im * p.im;
            }
            let density = &density[..psi.len()];
            let [norm, x, y] = block_sums(simd, density, gx, gy);
            sums.norm += norm;
            sums.gradient[0] += x;
            sums.gradient[1] += y;
            let (start, end) = (b * BLOCK, b * BLOCK + psi.len());
            if self.inner.start <= start && end <= self.inner.end {
                sums.inner += norm;
            } else if self.inner.start < end && start < self.inner.end {
                let part = self.inner.start.max(start) - start..self.inner.end.min(end) - start;
                sums.inner += density[part].iter().sum::<f64>();
            }
        }
        sums
    }
}

/// Σd, Σd gx, Σd gy of one block.
#[inline(always)]
fn block_sums<S: Simd>(simd: S, density: &[f64], gx: &[f64], gy: &[f64]) -> [f64; 3] {
    let [density, gx, gy] = [density, gx, gy].map(|v| S::as_simd_f64s(v).0);
    let zero = simd.splat_f64s(0.0);
    let (mut norm, mut x, mut y) = (zero, zero, zero);
    for ((d, gx), gy) in density.iter().zip(gx).zip(gy) {
        norm = simd.add_f64s(norm, *d);
        x = simd.mul_add_f64s(*d, *gx, x);
        y = simd.mul_add_f64s(*d, *gy, y);
    }
    [norm, x, y].map(|v| simd.reduce_sum_f64s(v))
}

/// ψ_j ← ψ_j table_j ramp_j phase.
pub(super) struct MultiplyLine<'a> {
    pub(super) psi: &'a mut [C],
    pub(super) table: &'a [C],
    pub(super) ramp: &'a [C],
    pub(super) phase: C,
}

impl WithSimd for MultiplyLine<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let phase = simd.splat_c64s(self.phase);
        let (psi, table, ramp) =
            (S::as_mut_simd_c64s(self.psi).0, S::as_simd_c64s(self.table).0, S::as_simd_c64s(self.ramp).0);
        for ((p, t), r) in psi.iter_mut().zip(table).zip(ramp) {
            *p = simd.mul_c64s(*p, simd.mul_c64s(*t, simd.mul_c64s(phase, *r)));
        }
    }
}

/// ψ_j ← ψ_j table_j ramp_j phase e^{i tilt·∇V_j}, for angles up to [`LARGEST_TILT`](crate::step::kernel::LARGEST_TILT).
pub(super) struct TiltLine<'a> {
    pub(super) psi: &'a mut [C],
    pub(super) table: &'a [C],
    pub(super) ramp: &'a [C],
    pub(super) phase: C,
    pub(super) gradient: [&'a [f64]; 2],
    pub(super) tilt: [f64; 2],
}

impl WithSimd for TiltLine<'_> {
    type Output = ();

    #[inline(always)]
    fn with_simd<S: Simd>(self, simd: S) {
        let pair = |[re, im]: [f64; 2]| -> S::f64s { bytemuck::cast(simd.splat_c64s(C::new(re, im))) };
        let [one, two, three, four] = TAYLOR.map(pair);
        let (odd, unit) = (pair([0.0, 1.0]), pair([1.0, 0.0]));
        let phase = simd.splat_c64s(self.phase);
        let [cx, cy] = self.tilt;
        let [gx, gy] = self.gradient.map(|g| g.chunks(BLOCK));
        let tables = self.table.chunks(BLOCK).zip(self.ramp.chunks(BLOCK));
        for (((psi, (table, ramp)), gx), gy) in self.psi.chunks_mut(BLOCK).zip(tables).zip(gx).zip(gy) {
            let mut angle = [[0.0; 2]; BLOCK];
            for ((a, gx), gy) in angle.iter_mut().zip(gx).zip(gy) {
                *a = [cx * gx + cy * gy; 2];
            }
            let angle = S::as_simd_f64s(bytemuck::cast_slice(&angle[..psi.len()])).0;
            let (psi, table, ramp) =
                (S::as_mut_simd_c64s(psi).0, S::as_simd_c64s(table).0, S::as_simd_c64s(ramp).0);
            for (((p, t), r), a) in psi.iter_mut().zip(table).zip(ramp).zip(angle) {
                let q = simd.mul_f64s(*a, *a);
                let series = simd.mul_add_f64s(four, q, three);
                let series = simd.mul_add_f64s(series, q, two);
                let series = simd.mul_add_f64s(series, q, one);
                let tilt = bytemuck::cast(simd.mul_f64s(series, simd.mul_add_f64s(odd, *a, unit)));
                let factor = simd.mul_c64s(*t, simd.mul_c64s(phase, *r));
                *p = simd.mul_c64s(simd.mul_c64s(*p, tilt), factor);
            }
        }
    }
}
