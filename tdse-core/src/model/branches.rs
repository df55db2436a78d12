//! Short and long branch of a full result, told apart by how fast the dipole phase of a harmonic turns with the intensity
//! (Balcou, Dederichs, Gaarde, L'Huillier, J. Phys. B 32, 2973 (1999): distribution over quantum paths by a windowed Fourier
//! transform over the intensity).
//!
//! A path contributes e^{-iαI}: α is small for the short, large for the long one; Lewenstein, Salières, L'Huillier 1995 give α Up/ω
//! with α near 3.2 at the cutoff.

use std::f64::consts::{LN_2, PI};
use std::ops::Range;

use num_complex::Complex;

/// Samples of the distribution within its resolution.
const SAMPLES: f64 = 40.0;

/// Intensities of a scan, uniform, and the window through which the phase is looked at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IntensityWindow {
    /// First intensity, in any unit.
    pub first: f64,
    /// Step between intensities.
    pub step: f64,
    /// Centre of the window.
    pub centre: f64,
    /// Full width at half maximum of the window's amplitude, Gaussian.
    pub width: f64,
}

impl IntensityWindow {
    fn weight(&self, intensity: f64) -> f64 {
        (-4.0 * LN_2 * ((intensity - self.centre) / self.width).powi(2)).exp()
    }

    /// D(α) = ∫ a(I) w(I) e^{iα(I - centre)} dI of one harmonic's amplitudes at the scan's intensities, for phase slopes `alphas`,
    /// rad per unit of intensity.
    ///
    /// # Panics
    /// If step or width is not positive.
    pub fn distribution(&self, amplitudes: &[Complex<f64>], alphas: &[f64]) -> Vec<Complex<f64>> {
        assert!(self.step > 0.0 && self.width > 0.0, "positive step and width");
        alphas
            .iter()
            .map(|alpha| {
                let term = |(n, a): (usize, &Complex<f64>)| {
                    let intensity = self.first + n as f64 * self.step;
                    a * Complex::from_polar(self.weight(intensity), alpha * (intensity - self.centre))
                };
                amplitudes.iter().enumerate().map(term).sum::<Complex<f64>>() * self.step
            })
            .collect()
    }

    /// The part of the amplitude at the window's centre that comes from phase slopes in `range`, and its mean slope weighted with
    /// |D|²; together all ranges give back a(centre).
    ///
    /// # Panics
    /// As [`Self::distribution`], and if the range is empty.
    pub fn part(&self, amplitudes: &[Complex<f64>], range: Range<f64>) -> Part {
        assert!(range.start < range.end, "a range of slopes, got {range:?}");
        let spacing = (self.resolution() / SAMPLES).min((range.end - range.start) / 8.0);
        let count = ((range.end - range.start) / spacing).ceil() as usize;
        let h = (range.end - range.start) / count as f64;
        let alphas: Vec<f64> = (0..count).map(|i| range.start + (i as f64 + 0.5) * h).collect();
        let distribution = self.distribution(amplitudes, &alphas);
        let sum: Complex<f64> = distribution.iter().sum();
        let power: f64 = distribution.iter().map(Complex::norm_sqr).sum();
        let moment: f64 = distribution.iter().zip(&alphas).map(|(d, a)| d.norm_sqr() * a).sum();
        Part { amplitude: sum * (h / (2.0 * PI)), slope: moment / power, power: power * h }
    }

    /// Phase slope in `range` at which |D| is largest, where that is a maximum within the range and not its edge; `None` otherwise,
    /// and where an amplitude is not known.
    ///
    /// # Panics
    /// As [`Self::part`].
    pub fn peak(&self, amplitudes: &[Complex<f64>], range: Range<f64>) -> Option<f64> {
        assert!(range.start < range.end, "a range of slopes, got {range:?}");
        let count = ((range.end - range.start) / self.resolution() * SAMPLES).ceil().max(8.0) as usize;
        let h = (range.end - range.start) / count as f64;
        let alphas: Vec<f64> = (0..=count).map(|i| range.start + i as f64 * h).collect();
        let power: Vec<f64> = self.distribution(amplitudes, &alphas).iter().map(Complex::norm_sqr).collect();
        let top = |i: &usize| power[*i] > power[i - 1] && power[*i] >= power[i + 1];
        let i = (1..count).filter(top).max_by(|a, b| power[*a].total_cmp(&power[*b]))?;
        // Vertex of the parabola through the three highest samples.
        let (before, after) = (power[i] - power[i - 1], power[i] - power[i + 1]);
        Some(alphas[i] + 0.5 * h * (before - after) / (before + after))
    }

    /// Full width at half maximum of |D| of one path, 8 ln 2/width: paths closer than this are not told apart.
    pub fn resolution(&self) -> f64 {
        8.0 * LN_2 / self.width
    }

    /// Largest |α| that the step of the scan tells apart, π/step.
    pub fn largest_slope(&self) -> f64 {
        PI / self.step
    }
}

/// What one range of phase slopes contributes to a harmonic.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Part {
    /// Complex amplitude at the window's centre, in the unit of a(ω).
    pub amplitude: Complex<f64>,
    /// Mean phase slope α, rad per unit of intensity; NaN where nothing is.
    pub slope: f64,
    /// ∫|D|² dα over the range.
    pub power: f64,
}
