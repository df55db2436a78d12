//! Polarization of harmonics: helicities, ellipticity and orientation.

use num_complex::Complex;

use super::harmonics::{EnergyAxis, Harmonics, Window, harmonics, sampled_by_order, sums_by_order};
use crate::simulate::Schedule;

/// Sense of rotation of light along +z.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Helicity {
    /// +1: from x to y, as a pulse of ε > 0.
    Positive,
    /// -1.
    Negative,
}

/// Spectra of both components of the acceleration.
#[derive(Clone, Debug, PartialEq)]
pub struct PlaneHarmonics {
    /// a_x(ω) and a_y(ω), on the same axis.
    pub components: [Harmonics; 2],
}

impl PlaneHarmonics {
    /// Spectra of an acceleration, one entry per sample; see [`harmonics`].
    ///
    /// # Panics
    /// If `acceleration` does not belong to `schedule`.
    pub fn of(acceleration: &[[f64; 2]], schedule: &Schedule, window: Window, axis: EnergyAxis) -> Self {
        let along = |d: usize| {
            let component: Vec<f64> = acceleration.iter().map(|a| a[d]).collect();
            harmonics(&component, schedule, window, axis)
        };
        Self { components: [along(0), along(1)] }
    }

    /// a± = (a_x ∓ i a_y)/√2, so that |a₊|² + |a₋|² = |a_x|² + |a_y|².
    pub fn helicity(&self, helicity: Helicity) -> Harmonics {
        let [x, y] = &self.components;
        let turn = match helicity {
            Helicity::Positive => Complex::new(0.0, -1.0),
            Helicity::Negative => Complex::new(0.0, 1.0),
        };
        let amplitude = x.amplitude.iter().zip(&y.amplitude);
        let scale = std::f64::consts::FRAC_1_SQRT_2;
        Harmonics { axis: x.axis, amplitude: amplitude.map(|(x, y)| (x + turn * y) * scale).collect() }
    }

    /// Ellipticity (|a₊| - |a₋|)/(|a₊| + |a₋|), from -1 to 1, positive for helicity +1; zero where nothing is radiated.
    pub fn ellipticity(&self) -> Vec<f64> {
        self.both(|plus, minus| {
            let (plus, minus) = (plus.norm(), minus.norm());
            if plus + minus > 0.0 { (plus - minus) / (plus + minus) } else { 0.0 }
        })
    }

    /// Angle of the major axis to x, arg(a₋ a₊*)/2, rad, in (-π/2, π/2].
    pub fn orientation(&self) -> Vec<f64> {
        self.both(|plus, minus| 0.5 * (minus * plus.conj()).arg())
    }

    fn both(&self, f: impl Fn(Complex<f64>, Complex<f64>) -> f64) -> Vec<f64> {
        let [plus, minus] = [Helicity::Positive, Helicity::Negative].map(|h| self.helicity(h).amplitude);
        plus.into_iter().zip(minus).map(|(p, m)| f(p, m)).collect()
    }
}

/// Energy radiated with helicity +1 and -1 within half a photon of every order 1 … `orders` of `photon`, hartree.
///
/// # Panics
/// If `acceleration` does not belong to `schedule`.
pub fn helicity_yields(
    acceleration: &[[f64; 2]],
    schedule: &Schedule,
    window: Window,
    photon: f64,
    orders: usize,
) -> [Vec<f64>; 2] {
    let axis = sampled_by_order(schedule, photon, orders);
    let spectra = PlaneHarmonics::of(acceleration, schedule, window, axis);
    [Helicity::Positive, Helicity::Negative]
        .map(|h| sums_by_order(&spectra.helicity(h).spectrum(), axis, orders))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Light along +z of helicity +1 turns from x to y (E ∝ (cos ωt, sin ωt)); an ellipse of ε at angle θ is
    /// cos ωt (cos θ, sin θ) + ε sin ωt (-sin θ, cos θ) (Born, Wolf, Principles of Optics, §1.4, from memory).
    #[test]
    fn an_ellipse_has_its_helicity_ellipticity_and_orientation() {
        let schedule = Schedule { start: -100.0, time_step: 0.05, steps: 4000, field_end: 100.0, end: 100.0 };
        let axis = EnergyAxis { step: 0.5, points: 3 };
        for (ellipticity, angle) in [(1.0, 0.0), (-1.0, 0.0), (0.4, 0.9), (-0.7, -0.3), (0.0, 1.2)] {
            let acceleration: Vec<[f64; 2]> = schedule
                .times()
                .into_iter()
                .map(|t: f64| {
                    let (c, s) = ((1.0 * t).cos(), ellipticity * (1.0 * t).sin());
                    let (sin, cos) = f64::sin_cos(angle);
                    [c * cos - s * sin, c * sin + s * cos]
                })
                .collect();
            let spectra = PlaneHarmonics::of(&acceleration, &schedule, Window::Blackman, axis);
            let (found, turned) = (spectra.ellipticity()[2], spectra.orientation()[2]);
            assert!((found - ellipticity).abs() < 1e-6, "ellipticity {found} of {ellipticity}");
            if ellipticity.abs() < 1.0 {
                assert!((turned - angle).abs() < 1e-6, "orientation {turned} of {angle}");
            }
            let [plus, minus] = helicity_yields(&acceleration, &schedule, Window::Blackman, 1.0, 2);
            let expected = (1.0 + ellipticity).powi(2) / (2.0 * (1.0 + ellipticity * ellipticity));
            let part = plus[0] / (plus[0] + minus[0]);
            assert!((part - expected).abs() < 1e-6, "part {part} of helicity +1 against {expected}");
        }
    }
}
