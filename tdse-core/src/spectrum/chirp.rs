//! Fourier sums on any uniform frequency axis, by the chirp-z transform.

use num_complex::Complex;

use crate::grid::{Transform, good_length};

/// Plan for X_k = Σ_n f_n e^{iω_k t_n}, t_n = t_0 + nτ, ω_k = kΔ (Rabiner, Schafer, Rader, IEEE Trans. Audio
/// Electroacoust. 17, 86 (1969), eq. 10: the sum becomes a convolution with a chirp).
#[derive(Clone, Debug)]
pub struct FourierSum {
    samples: usize,
    start: f64,
    step: f64,
    /// e^{i k² Δτ/2} for k below the larger of both lengths.
    chirp: Vec<Complex<f64>>,
    /// Transform of the conjugate chirp, wrapped around, divided by its length.
    kernel: Vec<Complex<f64>>,
    transform: Transform,
    frequencies: usize,
}

impl FourierSum {
    /// Plan for `samples` samples from `start` in steps of `time_step`, at `frequencies` frequencies 0, Δ, 2Δ, ….
    ///
    /// # Panics
    /// If either count is zero.
    pub fn new(samples: usize, start: f64, time_step: f64, frequencies: usize, step: f64) -> Self {
        assert!(samples > 0 && frequencies > 0, "at least one sample and one frequency");
        let longest = samples.max(frequencies);
        let rate = 0.5 * step * time_step;
        let chirp: Vec<_> = (0..longest).map(|k| quadratic_phase(rate, k)).collect();
        let length = good_length(samples + frequencies - 1);
        let transform = Transform::new(length);
        let mut kernel = vec![Complex::default(); length];
        for k in 0..frequencies {
            kernel[k] = chirp[k].conj();
        }
        for n in 1..samples {
            kernel[length - n] = chirp[n].conj();
        }
        transform.forward(&mut kernel, &mut transform.make_scratch());
        for k in &mut kernel {
            *k /= length as f64;
        }
        Self { samples, start, step, chirp, kernel, transform, frequencies }
    }

    /// Evaluates the sum; `out` has one entry per frequency.
    ///
    /// # Panics
    /// If `values` does not have the planned number of samples.
    pub fn evaluate(&self, values: &[f64]) -> Vec<Complex<f64>> {
        assert_eq!(values.len(), self.samples, "as many values as samples planned");
        let mut work = vec![Complex::default(); self.kernel.len()];
        for ((w, v), c) in work.iter_mut().zip(values).zip(&self.chirp) {
            *w = c * v;
        }
        let mut scratch = self.transform.make_scratch();
        self.transform.forward(&mut work, &mut scratch);
        for (w, k) in work.iter_mut().zip(&self.kernel) {
            *w *= k;
        }
        self.transform.inverse(&mut work, &mut scratch);
        let phase = |k: usize| Complex::cis(k as f64 * self.step * self.start);
        (0..self.frequencies).map(|k| work[k] * self.chirp[k] * phase(k)).collect()
    }
}

/// e^{i rate k²}, right to rounding even where rate·k² is many thousand turns: the rounding error of the product is
/// itself known exactly.
fn quadratic_phase(rate: f64, k: usize) -> Complex<f64> {
    let square = (k as f64) * (k as f64);
    let angle = rate * square;
    let rest = rate.mul_add(square, -angle);
    Complex::cis(angle) * Complex::new(1.0, rest)
}

#[cfg(test)]
mod tests {
    use super::FourierSum;
    use num_complex::Complex;

    /// Oracle: the sum as it is written.
    #[test]
    fn equals_the_sum_as_written() {
        let values: Vec<f64> =
            (0..1501).map(|i| (f64::from(i) * 0.37).sin() * (f64::from(i) * 0.01).cos()).collect();
        let (start, time_step, step) = (-213.5, 0.25, 0.0037);
        for frequencies in [1, 7, 3000] {
            let sum = FourierSum::new(values.len(), start, time_step, frequencies, step);
            let fast = sum.evaluate(&values);
            assert_eq!(fast.len(), frequencies);
            for k in (0..frequencies).step_by(97) {
                let slow: Complex<f64> = values
                    .iter()
                    .enumerate()
                    .map(|(n, v)| Complex::cis(k as f64 * step * (start + n as f64 * time_step)) * v)
                    .sum();
                assert!((fast[k] - slow).norm() < 1e-10, "{k}: {} against {slow}", fast[k]);
            }
        }
    }
}
