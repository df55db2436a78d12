//! The kinetic factor along one line of the plane, whole or mirrored.

use std::f64::consts::PI;

use num_complex::Complex;
use pulp::Arch;

use super::turn::Order;
use crate::grid::{Axis, Transform};
use crate::problem::Parity;
use crate::step::kernel::Multiply;

type C = Complex<f64>;

/// Transform of a line, with the order its points are kept in.
#[derive(Clone, Debug)]
pub(super) enum Along {
    /// Every point of a periodic axis.
    Whole(Transform),
    /// The half y > 0 of an even or odd function: a cosine transform of its M points by a Fourier transform of length M
    /// (Makhoul, IEEE Trans. Acoust. Speech Signal Process. 28, 27 (1980): points 0, 2, 4, … , 5, 3, 1). The sines of an
    /// odd function are the cosines of (-1)^j ψ_j in reverse order.
    Mirrored(Transform, Parity),
}

/// Kinetic factor, divided by the length of the transform, as [`Along`] wants it.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum KineticFactor {
    /// κ_k in the order of the transform.
    Whole(Vec<C>),
    /// What V_k and V_{M-k} are multiplied with.
    Mirrored(Vec<[C; 2]>),
}

impl Along {
    pub(super) fn new(axis: Axis, mirror: Option<Parity>) -> Self {
        match mirror {
            None => Self::Whole(Transform::new(axis.points)),
            Some(parity) => Self::Mirrored(Transform::new(axis.points / 2), parity),
        }
    }

    pub(super) fn make_scratch(&self) -> Vec<C> {
        match self {
            Self::Whole(transform) | Self::Mirrored(transform, _) => transform.make_scratch(),
        }
    }

    /// The order of the `points` points kept.
    pub(super) fn order(&self, points: usize) -> Order {
        match self {
            Self::Whole(_) => Order { place: (0..points).collect(), sign: vec![1.0; points], signed: false },
            Self::Mirrored(_, parity) => {
                let place = |j: usize| if j.is_multiple_of(2) { j / 2 } else { points - 1 - j / 2 };
                let sign = |j: usize| if j.is_multiple_of(2) { 1.0 } else { parity.sign() };
                Order {
                    place: (0..points).map(place).collect(),
                    sign: (0..points).map(sign).collect(),
                    signed: *parity == Parity::Odd,
                }
            }
        }
    }

    /// The factor e^{-i duration k²/2} on the momenta of `axis`.
    pub(super) fn factor(&self, axis: Axis, duration: f64) -> KineticFactor {
        let kappa = |k: f64, n: usize| C::from_polar(1.0 / n as f64, -0.5 * duration * k * k);
        match self {
            Self::Whole(_) => KineticFactor::Whole(axis.momenta().map(|k| kappa(k, axis.points)).collect()),
            Self::Mirrored(_, parity) => {
                let half = axis.points / 2;
                let momentum = |k: usize| mirrored_momentum(axis, *parity, k);
                // With X_k the cosine transform and ω = e^{-iπk/2M}: X_k = (ω V_k + ω* V_{M-k})/2, V_k = ω*(X_k - iX_{M-k}).
                let pair = |k: usize| {
                    let (one, other) = (kappa(momentum(k), half), kappa(momentum(half - k), half));
                    let turned = C::cis(PI * k as f64 / half as f64);
                    [(one + other) * 0.5, (one - other) * 0.5 * turned]
                };
                let zero = [kappa(momentum(0), half), C::default()];
                KineticFactor::Mirrored(std::iter::once(zero).chain((1..half).map(pair)).collect())
            }
        }
    }

    /// Forward transform.
    pub(super) fn forward(&self, line: &mut [C], scratch: &mut [C]) {
        match self {
            Self::Whole(transform) | Self::Mirrored(transform, _) => transform.forward(line, scratch),
        }
    }

    /// Part of Σ|ψ_j|² in the upper quarter of the momenta, of a transformed line.
    pub(super) fn top(&self, line: &[C]) -> f64 {
        let n = line.len();
        match self {
            Self::Whole(_) => {
                line[n / 2 - n / 8..n / 2 + n / 8].iter().map(C::norm_sqr).sum::<f64>() / n as f64
            }
            Self::Mirrored(_, parity) => {
                // 2/M of |X_k|² is the norm, and 1/M at k = 0.
                let square = |k: usize| cosine(line, k);
                // Of the momenta at three quarters the whole line counts the positive one.
                let (range, limit, last) = match parity {
                    Parity::Even => (n - n / 4 + 1..n, n - n / 4, 0.0),
                    Parity::Odd => (1..n / 4, n / 4, line[0].norm_sqr()),
                };
                (2.0 * range.map(square).sum::<f64>() + square(limit) + last) / n as f64
            }
        }
    }

    /// Σ ½k²|ψ_k|² over the points kept of `axis`, of a transformed line.
    pub(super) fn energy(&self, line: &[C], axis: Axis) -> f64 {
        let n = line.len();
        let square = |k: f64| 0.5 * k * k;
        match self {
            Self::Whole(_) => {
                line.iter().zip(axis.momenta()).map(|(p, k)| square(k) * p.norm_sqr()).sum::<f64>() / n as f64
            }
            Self::Mirrored(_, parity) => {
                let momentum = |k: usize| mirrored_momentum(axis, *parity, k);
                let waves = (1..n).map(|k| square(momentum(k)) * 2.0 * cosine(line, k));
                (square(momentum(0)) * line[0].norm_sqr() + waves.sum::<f64>()) / n as f64
            }
        }
    }

    /// Multiplies a transformed line by `factor` and transforms it back.
    pub(super) fn back(&self, arch: Arch, line: &mut [C], factor: &KineticFactor, scratch: &mut [C]) {
        match (self, factor) {
            (Self::Whole(transform), KineticFactor::Whole(table)) => {
                arch.dispatch(Multiply { psi: line, table });
                transform.inverse(line, scratch);
            }
            (Self::Mirrored(transform, _), KineticFactor::Mirrored(pairs)) => {
                arch.dispatch(|| multiply_pairs(line, pairs));
                transform.inverse(line, scratch);
            }
            _ => unreachable!("a factor made by the same line"),
        }
    }
}

/// Momentum of cosine `k` of the half of `axis`, 1/bohr; sines count from above.
fn mirrored_momentum(axis: Axis, parity: Parity, k: usize) -> f64 {
    let k = if parity == Parity::Odd { axis.points / 2 - k } else { k };
    2.0 * PI * k as f64 / axis.extent()
}

/// |X_k|² = |ω V_k + ω* V_{M-k}|²/4 with ω = e^{-iπk/2M}, for k > 0.
fn cosine(line: &[C], k: usize) -> f64 {
    let turn = C::cis(-PI * k as f64 / (2 * line.len()) as f64);
    0.25 * (turn * line[k] + turn.conj() * line[line.len() - k]).norm_sqr()
}

/// V_k ← s_k V_k + d_k V_{M-k}.
#[inline(always)]
#[expect(clippy::inline_always, reason = "compiled for the instructions that pulp dispatches to")]
fn multiply_pairs(line: &mut [C], pairs: &[[C; 2]]) {
    let n = line.len();
    line[0] *= pairs[0][0];
    for k in 1..n / 2 {
        let (a, b) = (line[k], line[n - k]);
        line[k] = pairs[k][0] * a + pairs[k][1] * b;
        line[n - k] = pairs[n - k][0] * b + pairs[n - k][1] * a;
    }
    let middle = pairs[n / 2][0] + pairs[n / 2][1];
    line[n / 2] *= middle;
}
