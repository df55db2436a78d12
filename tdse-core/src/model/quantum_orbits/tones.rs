//! A field that is a sum of few sines, at complex times.

use num_complex::Complex;

use crate::field::{Envelope, Pulse};

type C = Complex<f64>;

/// A(t) = -Σ a sin(ωt + φ).
#[derive(Clone, Debug, PartialEq)]
pub struct Tones {
    /// a, ω and φ of every sine.
    tones: Vec<[f64; 3]>,
}

/// The pulse has no such form.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
#[error(
    "quantum orbits need a field known at complex times: a sin2 or flat-top pulse, linearly polarized, without chirp"
)]
pub struct NotAnalytic;

impl Tones {
    /// E0 cos(ωt + φ) for ever.
    pub fn monochromatic(peak_field: f64, frequency: f64, phase: f64) -> Self {
        Self { tones: vec![[peak_field / frequency, frequency, phase]] }
    }

    /// A pulse along x: of a sin² envelope the three sines whose sum it is between its ends, of a flat top its plateau.
    ///
    /// # Errors
    /// [`NotAnalytic`].
    pub fn of(pulse: &Pulse) -> Result<Self, NotAnalytic> {
        if pulse.chirp != 0.0 || pulse.ellipticity != 0.0 || pulse.angle != 0.0 {
            return Err(NotAnalytic);
        }
        let a = pulse.peak_field / pulse.frequency;
        let tone = |part: f64, frequency: f64| [part * a, frequency, pulse.phase - frequency * pulse.centre];
        match pulse.envelope {
            Envelope::FlatTop { .. } => Ok(Self { tones: vec![tone(1.0, pulse.frequency)] }),
            Envelope::Sin2 { duration } => {
                let side = 2.0 * std::f64::consts::PI / duration;
                let tones = vec![
                    tone(0.5, pulse.frequency),
                    tone(0.25, pulse.frequency + side),
                    tone(0.25, pulse.frequency - side),
                ];
                Ok(Self { tones })
            }
            Envelope::Gaussian { .. } => Err(NotAnalytic),
        }
    }

    /// A.
    pub fn potential(&self, t: C) -> C {
        -self.tones.iter().map(|[a, w, f]| a * (t * w + f).sin()).sum::<C>()
    }

    /// E = -dA/dt.
    pub fn field(&self, t: C) -> C {
        self.tones.iter().map(|[a, w, f]| a * w * (t * w + f).cos()).sum()
    }

    /// A primitive of A.
    pub fn integral(&self, t: C) -> C {
        -self.tones.iter().map(|&[a, w, f]| a * sine_integral(w, f, t)).sum::<C>()
    }

    /// A primitive of A².
    pub fn square_integral(&self, t: C) -> C {
        let pairs = self.tones.iter().flat_map(|x| self.tones.iter().map(move |y| (x, y)));
        let half = std::f64::consts::FRAC_PI_2;
        // sin x sin y = ½ cos(x - y) - ½ cos(x + y), and cos is a sine a quarter turn on.
        pairs
            .map(|(&[a, v, f], &[b, w, g])| {
                let (minus, plus) =
                    (sine_integral(v - w, f - g + half, t), sine_integral(v + w, f + g + half, t));
                0.5 * a * b * (minus - plus)
            })
            .sum()
    }
}

/// ∫sin(ωt + φ) dt.
fn sine_integral(w: f64, f: f64, t: C) -> C {
    if w.abs() < 1e-12 { t * f.sin() } else { -(t * w + f).cos() / w }
}
