//! Matrix elements of the position between a bound state and plane waves.

use std::f64::consts::PI;

use num_complex::Complex;

use crate::grid::Axis;
use crate::potential::Potential;
use crate::spectrum::FourierSum;
use crate::stationary::{StationaryError, radial_level};

/// A bound state in one dimension, on the points of an axis, ∫n² = 1.
#[derive(Clone, Copy, Debug)]
pub struct Ground<'a> {
    /// The axis.
    pub axis: Axis,
    /// Its real wave function there.
    pub state: &'a [f64],
    /// Its ionization energy, hartree.
    pub ionization_energy: f64,
}

/// d(k) = ⟨k|x|n⟩ = (2π)^{-1/2} ∫ e^{-ikx} x n(x) dx on uniform momenta, falling smoothly to zero beyond the largest.
#[derive(Clone, Debug)]
pub struct LineDipole {
    /// Spacing of the momenta, 1/bohr.
    pub(super) spacing: f64,
    /// Index of k = 0.
    pub(super) zero: usize,
    pub(super) values: Vec<Complex<f64>>,
}

/// Part of the largest momentum over which d falls to zero beyond it.
const FALL: f64 = 0.15;

impl LineDipole {
    /// Of a bound state and plane waves, up to momentum `largest`.
    ///
    /// # Panics
    /// If the state does not have the length of the axis.
    pub fn plane_waves(ground: &Ground, largest: f64, spacing: f64) -> Self {
        let axis = ground.axis;
        assert_eq!(ground.state.len(), axis.points, "state and axis have the same length");
        let moved: Vec<f64> = axis.positions().zip(ground.state).map(|(x, n)| x * n).collect();
        let count = count(largest, spacing);
        let sum = FourierSum::new(axis.points, axis.position(0), axis.spacing, count, spacing);
        let scale = axis.spacing / (2.0 * PI).sqrt();
        // The sum has e^{ikx}: d(-k), and as x n(x) is real, d(k) is its conjugate.
        let half: Vec<Complex<f64>> = sum.evaluate(&moved).into_iter().map(|v| v * scale).collect();
        Self::from_halves(&half, &half.iter().map(Complex::conj).collect::<Vec<_>>(), largest, spacing)
    }

    fn from_halves(minus: &[Complex<f64>], plus: &[Complex<f64>], largest: f64, spacing: f64) -> Self {
        let taper = |i: usize| {
            let beyond = (i as f64 * spacing / largest - 1.0) / FALL;
            (0.5 * PI * beyond.clamp(0.0, 1.0)).cos().powi(2)
        };
        let zero = minus.len() - 1;
        let left = (1..minus.len()).rev().map(|i| minus[i] * taper(i));
        let right = plus.iter().enumerate().map(|(i, v)| v * taper(i));
        Self { spacing, zero, values: left.chain(right).collect() }
    }

    /// d(k), zero beyond the table.
    pub fn at(&self, k: f64) -> Complex<f64> {
        let (first, weights) = self.stencil(k);
        weights.iter().zip(first..).map(|(w, i)| self.value(i) * w).sum()
    }

    /// The first of six neighbouring entries, counted from k = 0, and Lagrange's weights for momentum `k`.
    pub(super) fn stencil(&self, k: f64) -> (i64, [f64; 6]) {
        let s = k / self.spacing;
        let base = s.floor();
        (base as i64 - 2, lagrange(s - base))
    }

    /// Entry `i`, counted from k = 0.
    fn value(&self, i: i64) -> Complex<f64> {
        let at = usize::try_from(i + self.zero as i64).ok();
        at.and_then(|i| self.values.get(i)).copied().unwrap_or_default()
    }
}

fn count(largest: f64, spacing: f64) -> usize {
    (largest * (1.0 + FALL) / spacing).ceil() as usize + 1
}

/// Lagrange's weights at -2 … 3 for a point `t` between 0 and 1.
fn lagrange(t: f64) -> [f64; 6] {
    let at = [t + 2.0, t + 1.0, t, t - 1.0, t - 2.0, t - 3.0];
    let norm = [-120.0, 24.0, -12.0, 12.0, -24.0, 120.0];
    std::array::from_fn(|i| (0..6).filter(|&j| j != i).map(|j| at[j]).product::<f64>() / norm[i])
}

/// d(k) = ⟨k|r|n⟩ = i ∇_k ψ(k) of a round state R(r) e^{imφ}/√2π in two dimensions, ψ(k) = (-i)^m e^{imφ}/√2π ∫ R J_m(kr) r dr.
#[derive(Clone, Debug)]
pub struct PlaneDipole {
    m: i32,
    spacing: f64,
    /// g = (2π)^{-1/2} ∫ R J_m r dr and dg/dk at k = 0, spacing, ….
    table: Vec<[f64; 2]>,
}

impl PlaneDipole {
    /// Of the level with `number` radial nodes at angular momentum `m`, up to momentum `largest`.
    ///
    /// # Errors
    /// As [`radial_level`].
    pub fn new(potential: &Potential, m: i32, number: usize, largest: f64) -> Result<Self, StationaryError> {
        let order = m.unsigned_abs();
        let level = radial_level(potential, order, number)?;
        let radial = level.radial_function(potential, order);
        let step = (0.1 * potential.smallest_length()).min(0.5 / largest);
        let radii: Vec<(f64, f64)> = (0..(level.reach / step) as usize)
            .map(|i| (i as f64 + 0.5) * step)
            .map(|r| (r, radial.value(r) * r * step / (2.0 * PI).sqrt()))
            .collect();
        let spacing = 0.5 / level.reach.max(1.0);
        let count = (largest / spacing).ceil() as usize + 2;
        let table = (0..count)
            .map(|i| {
                let k = i as f64 * spacing;
                let mut sums = [0.0; 2];
                for &(r, weight) in &radii {
                    let [value, slope] = bessel(order, k * r);
                    sums[0] += weight * value;
                    sums[1] += weight * r * slope;
                }
                sums
            })
            .collect();
        Ok(Self { m, spacing, table })
    }

    /// d(k), zero beyond the table.
    pub fn at(&self, [kx, ky]: [f64; 2]) -> [Complex<f64>; 2] {
        let k = kx.hypot(ky).max(1e-9);
        let s = k / self.spacing;
        let i = s as usize;
        if i + 1 >= self.table.len() {
            return [Complex::default(); 2];
        }
        let (t, u) = (s - i as f64, 1.0 - (s - i as f64));
        let ([g0, s0], [g1, s1]) = (self.table[i], self.table[i + 1]);
        let h = self.spacing;
        let g = u * u * ((1.0 + 2.0 * t) * g0 + t * h * s0) + t * t * ((1.0 + 2.0 * u) * g1 - u * h * s1);
        let slope = 6.0 * t * u * (g1 - g0) / h + u * (1.0 - 3.0 * t) * s0 + t * (1.0 - 3.0 * u) * s1;
        let sign = if self.m < 0 && self.m % 2 != 0 { -1.0 } else { 1.0 }; // J_{-m} = (-1)^m J_m
        let (x, y) = (kx / k, ky / k);
        let turn = Complex::new(y, -x).powi(self.m) * Complex::i() * sign; // (-i)^m e^{imφ} i
        let around = Complex::new(0.0, f64::from(self.m) * g / k);
        [turn * (slope * x - around * y), turn * (slope * y + around * x)]
    }
}

/// J_m and its derivative (J_{m-1} - J_{m+1})/2 (Abramowitz, Stegun, eq. 9.1.27).
fn bessel(m: u32, x: f64) -> [f64; 2] {
    let j = |order: i32| libm::jn(order, x);
    let m = m as i32;
    [j(m), 0.5 * (j(m - 1) - j(m + 1))]
}
