//! Fourier sums of a line at any uniform momenta, by the chirp-z transform.

use num_complex::Complex;

use crate::grid::{Axis, Transform, good_length};

type C = Complex<f64>;

/// Plan for F_j = Σ_n f_n e^{-ik_j x_n} at k_j = (j - last) Δk, j = 0 … 2 last, over the points of an axis (Rabiner, Schafer,
/// Rader, IEEE Trans. Audio Electroacoust. 17, 86 (1969), eq. 10: with jn = (j² + n² - (j-n)²)/2 the sum becomes a
/// convolution with a chirp).
#[derive(Clone, Debug)]
pub(super) struct MomentumSum {
    /// What point n is multiplied with.
    before: Vec<C>,
    /// Transform of the chirp, wrapped around, divided by its length.
    kernel: Vec<C>,
    /// What entry j is multiplied with.
    after: Vec<C>,
    transform: Transform,
}

/// Length of the line that the sums at `momenta` over `samples` points are done on.
pub(crate) fn sum_length(samples: usize, momenta: usize) -> usize {
    good_length(samples + momenta - 1)
}

impl MomentumSum {
    /// Plan for the momenta from -`last` to `last` times `spacing`, 1/bohr.
    pub(super) fn new(axis: Axis, last: usize, spacing: f64) -> Self {
        let (samples, momenta) = (axis.points, 2 * last + 1);
        let rate = spacing * axis.spacing;
        let chirp = |n: usize| C::cis(0.5 * rate * (n * n) as f64);
        let length = sum_length(samples, momenta);
        let transform = Transform::new(length);
        let mut kernel = vec![C::default(); length];
        for (j, k) in kernel[..momenta].iter_mut().enumerate() {
            *k = chirp(j);
        }
        for n in 1..samples {
            kernel[length - n] = chirp(n);
        }
        transform.forward(&mut kernel, &mut transform.make_scratch());
        for k in &mut kernel {
            *k /= length as f64;
        }
        let k = |j: usize| (j as f64 - last as f64) * spacing;
        Self {
            before: (0..samples).map(|n| C::cis(rate * (last * n) as f64) * chirp(n).conj()).collect(),
            after: (0..momenta).map(|j| C::cis(-k(j) * axis.position(0)) * chirp(j).conj()).collect(),
            kernel,
            transform,
        }
    }

    /// Length of the line that [`Self::evaluate`] works on.
    pub(super) fn length(&self) -> usize {
        self.kernel.len()
    }

    /// Scratch for [`Self::evaluate`].
    pub(super) fn make_scratch(&self) -> Vec<C> {
        self.transform.make_scratch()
    }

    /// The sums of the line whose points begin `line`, by rising momentum; overwrites it.
    pub(super) fn evaluate<'a>(
        &'a self,
        line: &'a mut [C],
        scratch: &mut [C],
    ) -> impl Iterator<Item = C> + use<'a> {
        let line = &mut line[..self.kernel.len()];
        for (p, before) in line.iter_mut().zip(&self.before) {
            *p *= before;
        }
        line[self.before.len()..].fill(C::default());
        self.transform.forward(line, scratch);
        for (p, kernel) in line.iter_mut().zip(&self.kernel) {
            *p *= kernel;
        }
        self.transform.inverse(line, scratch);
        line.iter().zip(&self.after).map(|(p, after)| p * after)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Oracle: the sum as it is written.
    #[test]
    fn equals_the_sum_as_written() {
        let axis = Axis { points: 48, spacing: 0.7 };
        let values: Vec<C> =
            (0..48).map(|n| C::from_polar((0.3 * f64::from(n)).sin(), f64::from(n))).collect();
        for (last, spacing) in [(0, 0.1), (5, 0.31), (70, 0.02)] {
            let sum = MomentumSum::new(axis, last, spacing);
            let mut line = vec![C::new(7.0, 7.0); sum.length()];
            line[..48].copy_from_slice(&values);
            let found: Vec<C> = sum.evaluate(&mut line, &mut sum.make_scratch()).collect();
            assert_eq!(found.len(), 2 * last + 1);
            for (j, found) in found.iter().enumerate() {
                let k = (j as f64 - last as f64) * spacing;
                let slow: C = values.iter().zip(axis.positions()).map(|(v, x)| v * C::cis(-k * x)).sum();
                assert!((found - slow).norm() < 1e-12, "{j}: {found} against {slow}");
            }
        }
    }
}
