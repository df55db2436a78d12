//! Loops over the grid: factors multiplied on, moments taken along the way.
//!
//! Every loop runs inside `pulp`'s dispatch, so the compiler may use the widest instructions of the processor; no
//! multiply-add is fused and sums keep eight fixed lanes per block, so the loops themselves give the same bits
//! everywhere.

use num_complex::Complex;
use pulp::Arch;

use super::ramp::{BLOCK, Ramp};

const LANES: usize = 8;

/// Sums over one pass: norm, gradient, and the norm in the outer blocks (all without the volume element).
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Sums {
    pub(super) norm: f64,
    pub(super) gradient: f64,
    pub(super) edge: f64,
}

/// ψ_j ← ψ_j table_j.
pub(super) fn multiply(arch: Arch, psi: &mut [Complex<f64>], table: &[Complex<f64>]) {
    arch.dispatch(
        #[inline(always)]
        || {
            for (p, t) in psi.iter_mut().zip(table) {
                *p = times(*p, *t);
            }
        },
    );
}

/// ψ_j ← ψ_j table_j e^{i(α+βj)}.
pub(super) fn multiply_ramp(arch: Arch, psi: &mut [Complex<f64>], table: &[Complex<f64>], ramp: &Ramp) {
    arch.dispatch(
        #[inline(always)]
        || {
            let blocks = psi.chunks_mut(BLOCK).zip(table.chunks(BLOCK)).zip(&ramp.coarse);
            for ((psi, table), &coarse) in blocks {
                for ((p, t), f) in psi.iter_mut().zip(table).zip(&ramp.fine) {
                    *p = times(*p, times(*t, times(coarse, *f)));
                }
            }
        },
    );
}

/// ψ_j ← ψ_j table_j e^{i(α+βj)} e^{i c g_j}, for |c g_j| ≤ [`LARGEST_TILT`].
pub(super) fn multiply_ramp_tilt(
    arch: Arch,
    psi: &mut [Complex<f64>],
    table: &[Complex<f64>],
    ramp: &Ramp,
    c: f64,
    gradient: &[f64],
) {
    arch.dispatch(
        #[inline(always)]
        || {
            let blocks = psi.chunks_mut(BLOCK).zip(table.chunks(BLOCK));
            for (((psi, table), gradient), &coarse) in blocks.zip(gradient.chunks(BLOCK)).zip(&ramp.coarse) {
                for (((p, t), f), g) in psi.iter_mut().zip(table).zip(&ramp.fine).zip(gradient) {
                    let q = times(*p, small_rotation(c * g));
                    *p = times(q, times(*t, times(coarse, *f)));
                }
            }
        },
    );
}

/// Largest angle of [`small_rotation`]: there its error is 2e-16 and below.
pub(super) const LARGEST_TILT: f64 = 0.04;

/// e^{iθ} by its Taylor series through θ⁷.
#[inline(always)]
fn small_rotation(theta: f64) -> Complex<f64> {
    let q = theta * theta;
    Complex::new(
        1.0 - q * (0.5 - q * (1.0 / 24.0 - q * (1.0 / 720.0))),
        theta * (1.0 - q * (1.0 / 6.0 - q * (1.0 / 120.0 - q * (1.0 / 5040.0)))),
    )
}

/// [`multiply_ramp`], with the moments of ψ as it was before; `edge` blocks at each end count as the edge.
pub(super) fn multiply_ramp_and_sum(
    arch: Arch,
    psi: &mut [Complex<f64>],
    table: &[Complex<f64>],
    ramp: &Ramp,
    gradient: &[f64],
    edge: usize,
) -> Sums {
    arch.dispatch(
        #[inline(always)]
        || {
            let count = ramp.coarse.len();
            let mut sums = Sums::default();
            let blocks = psi.chunks_mut(BLOCK).zip(table.chunks(BLOCK)).zip(gradient.chunks(BLOCK));
            for (b, (((psi, table), gradient), &coarse)) in blocks.zip(&ramp.coarse).enumerate() {
                let (norm, force) = block_sums(psi, gradient);
                sums.norm += norm;
                sums.gradient += force;
                sums.edge += if b < edge || b + edge >= count { norm } else { 0.0 };
                for ((p, t), f) in psi.iter_mut().zip(table).zip(&ramp.fine) {
                    *p = times(*p, times(*t, times(coarse, *f)));
                }
            }
            sums
        },
    )
}

/// The moments alone.
pub(super) fn sum(arch: Arch, psi: &[Complex<f64>], gradient: &[f64], edge: usize) -> Sums {
    arch.dispatch(
        #[inline(always)]
        || {
            let count = psi.len().div_ceil(BLOCK);
            let mut sums = Sums::default();
            for (b, (psi, gradient)) in psi.chunks(BLOCK).zip(gradient.chunks(BLOCK)).enumerate() {
                let (norm, force) = block_sums(psi, gradient);
                sums.norm += norm;
                sums.gradient += force;
                sums.edge += if b < edge || b + edge >= count { norm } else { 0.0 };
            }
            sums
        },
    )
}

/// Σ|ψ|² and Σ|ψ|²g of one block, in fixed lanes.
#[inline(always)]
fn block_sums(psi: &[Complex<f64>], gradient: &[f64]) -> (f64, f64) {
    let (mut norm, mut force) = ([0.0; LANES], [0.0; LANES]);
    let whole = psi.len() / LANES * LANES;
    for (psi, gradient) in psi[..whole].chunks_exact(LANES).zip(gradient[..whole].chunks_exact(LANES)) {
        for l in 0..LANES {
            let density = psi[l].re * psi[l].re + psi[l].im * psi[l].im;
            norm[l] += density;
            force[l] += density * gradient[l];
        }
    }
    for (l, (p, g)) in psi[whole..].iter().zip(&gradient[whole..]).enumerate() {
        norm[l] += p.norm_sqr();
        force[l] += p.norm_sqr() * g;
    }
    (fold(norm), fold(force))
}

#[inline(always)]
fn fold(lanes: [f64; LANES]) -> f64 {
    let [a, b, c, d, e, f, g, h] = lanes;
    ((a + b) + (c + d)) + ((e + f) + (g + h))
}

/// Product written out, so that it is inlined into the dispatched loops.
#[inline(always)]
fn times(a: Complex<f64>, b: Complex<f64>) -> Complex<f64> {
    Complex::new(a.re * b.re - a.im * b.im, a.re * b.im + a.im * b.re)
}
