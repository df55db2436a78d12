//! Laser fields: pulses defined by their vector potential, and fields sampled by a user.

use std::f64::consts::{LN_2, PI};
use std::sync::Arc;

use crate::cubic::Cubic;

/// Where a Gaussian envelope is cut, as a fraction of its maximum; see [`Envelope::Gaussian`].
pub const GAUSSIAN_CUT: f64 = 1e-8;

/// Field envelope f(τ), 1 at its maximum, zero outside [`Envelope::half_length`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Envelope {
    /// f = cos²(πτ/T) for |τ| < T/2, that is sin² from zero to zero.
    Sin2 {
        /// Total length T, a.u. of time.
        duration: f64,
    },
    /// f = (g - c)/(1 - c) with g² of the given full width at half maximum and c = [`GAUSSIAN_CUT`], cut at zero.
    Gaussian {
        /// Full width at half maximum of the intensity, a.u. of time.
        fwhm: f64,
    },
    /// sin² ramps of the given length on both sides of a plateau of ones.
    FlatTop {
        /// Length of each ramp, a.u. of time.
        ramp: f64,
        /// Length of the plateau, a.u. of time.
        plateau: f64,
    },
}

impl Envelope {
    /// Distance from the centre at which the envelope has become zero.
    pub fn half_length(&self) -> f64 {
        match *self {
            Self::Sin2 { duration } => duration / 2.0,
            Self::Gaussian { fwhm } => fwhm * (-GAUSSIAN_CUT.ln() / (2.0 * LN_2)).sqrt(),
            Self::FlatTop { ramp, plateau } => ramp + plateau / 2.0,
        }
    }

    /// f and df/dτ at `tau` from the centre.
    pub fn value_and_slope(&self, tau: f64) -> (f64, f64) {
        if tau.abs() >= self.half_length() {
            return (0.0, 0.0);
        }
        match *self {
            Self::Sin2 { duration } => sin2_edge(0.5 - tau.abs() / duration, -tau.signum() / duration),
            Self::Gaussian { fwhm } => {
                let g = (-2.0 * LN_2 * (tau / fwhm).powi(2)).exp();
                let scale = 1.0 / (1.0 - GAUSSIAN_CUT);
                ((g - GAUSSIAN_CUT) * scale, -4.0 * LN_2 * tau / (fwhm * fwhm) * g * scale)
            }
            Self::FlatTop { ramp, plateau } => {
                let inside = (self.half_length() - tau.abs()) / (2.0 * ramp);
                if tau.abs() <= plateau / 2.0 {
                    (1.0, 0.0)
                } else {
                    sin2_edge(inside, -0.5 * tau.signum() / ramp)
                }
            }
        }
    }
}

/// sin²(πu) and its derivative to τ, where du/dτ = `slope`.
fn sin2_edge(u: f64, slope: f64) -> (f64, f64) {
    let (sin, cos) = (PI * u).sin_cos();
    (sin * sin, 2.0 * PI * slope * sin * cos)
}

/// One pulse, defined by its vector potential so that it has no net area:
/// with phase Φ = ωτ + bτ²/2 + φ and s = 1/√(1+ε²),
/// A_major = -(E0 s/ω) f sin Φ, A_minor = (ε E0 s/ω) f cos Φ, E = -dA/dt.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Pulse {
    /// Carrier angular frequency ω, hartree.
    pub frequency: f64,
    /// E0, a.u.; the crest of an elliptical pulse is E0 s.
    pub peak_field: f64,
    /// Envelope f.
    pub envelope: Envelope,
    /// Carrier-envelope phase φ, rad; 0 puts a crest of the field at the envelope's centre.
    pub phase: f64,
    /// Envelope centre, a.u. of time.
    pub centre: f64,
    /// Linear chirp b, rad per a.u. of time squared; up-chirp for b > 0.
    pub chirp: f64,
    /// Ellipticity ε in [-1, 1]; ε > 0 turns from x to y.
    pub ellipticity: f64,
    /// Angle of the major axis to x, rad.
    pub angle: f64,
}

impl Pulse {
    /// Vector potential and electric field at time `t`, a.u.
    pub fn potential_and_field(&self, t: f64) -> ([f64; 2], [f64; 2]) {
        let tau = t - self.centre;
        let (f, slope) = self.envelope.value_and_slope(tau);
        let (sin, cos) = (self.frequency * tau + 0.5 * self.chirp * tau * tau + self.phase).sin_cos();
        let rate = self.frequency + self.chirp * tau;
        let s = 1.0 / (1.0 + self.ellipticity * self.ellipticity).sqrt();
        let major = self.peak_field * s / self.frequency;
        let minor = self.ellipticity * major;
        let a = [-major * f * sin, minor * f * cos];
        let e = [major * (slope * sin + f * rate * cos), minor * (f * rate * sin - slope * cos)];
        (rotate(a, self.angle), rotate(e, self.angle))
    }

    /// Start and end, a.u. of time.
    pub fn interval(&self) -> (f64, f64) {
        let half = self.envelope.half_length();
        (self.centre - half, self.centre + half)
    }

    /// Period 2π/ω of the unchirped carrier, a.u. of time.
    pub fn period(&self) -> f64 {
        2.0 * PI / self.frequency
    }

    /// Ponderomotive energy E0²/(4ω²) at the envelope's peak, hartree.
    pub fn ponderomotive_energy(&self) -> f64 {
        (self.peak_field / (2.0 * self.frequency)).powi(2)
    }

    /// Quiver amplitude E0/ω² at the envelope's peak, bohr.
    pub fn quiver_amplitude(&self) -> f64 {
        self.peak_field / (self.frequency * self.frequency)
    }
}

fn rotate([x, y]: [f64; 2], angle: f64) -> [f64; 2] {
    if angle == 0.0 {
        return [x, y];
    }
    let (sin, cos) = angle.sin_cos();
    // Half of π is no number: along an axis means exactly along it, so that a mirror is seen.
    let exact = |part: f64| if part.abs() < 1e-15 { 0.0 } else { part };
    let (sin, cos) = (exact(sin), exact(cos));
    [cos * x - sin * y, sin * x + cos * y]
}

/// Electric field given by a table: component tables over time, zero outside, A = -∫E from zero at its start.
#[derive(Clone, Debug, PartialEq)]
pub struct SampledField {
    /// E_x, and E_y where the table has it, a.u. over a.u. of time.
    pub components: [Option<Arc<Cubic>>; 2],
}

impl SampledField {
    fn potential_and_field(&self, t: f64) -> ([f64; 2], [f64; 2]) {
        let (mut a, mut e) = ([0.0; 2], [0.0; 2]);
        for (axis, table) in self.components.iter().enumerate() {
            if let Some(table) = table {
                let (first, last) = table.domain();
                a[axis] = -table.integral(t);
                e[axis] = if (first..=last).contains(&t) { table.value(t) } else { 0.0 };
            }
        }
        (a, e)
    }

    /// First and last time of the table.
    pub fn interval(&self) -> (f64, f64) {
        let domains = self.components.iter().flatten().map(|table| table.domain());
        domains.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), (c, d)| (a.min(c), b.max(d)))
    }
}

/// The whole field: the sum of pulses and, if given, a sampled field.
#[derive(Clone, Debug, PartialEq, Default)]
pub struct Field {
    /// Pulses; the first one counts the photons of `harmonic_order`.
    pub pulses: Vec<Pulse>,
    /// Field from a table.
    pub sampled: Option<SampledField>,
}

impl Field {
    /// Vector potential and electric field at time `t`, a.u.; x is the polarization axis of one dimension.
    pub fn potential_and_field(&self, t: f64) -> ([f64; 2], [f64; 2]) {
        let parts = self.pulses.iter().map(|p| p.potential_and_field(t));
        let parts = parts.chain(self.sampled.iter().map(|s| s.potential_and_field(t)));
        parts.fold(([0.0; 2], [0.0; 2]), |(a, e), (da, de)| {
            ([a[0] + da[0], a[1] + da[1]], [e[0] + de[0], e[1] + de[1]])
        })
    }

    /// Electric field at time `t`, a.u.
    pub fn electric_field(&self, t: f64) -> [f64; 2] {
        self.potential_and_field(t).1
    }

    /// Vector potential at time `t`, a.u.
    pub fn vector_potential(&self, t: f64) -> [f64; 2] {
        self.potential_and_field(t).0
    }

    /// Start of the first part and end of the last, a.u. of time; `(0, 0)` without any.
    pub fn interval(&self) -> (f64, f64) {
        let parts = self.pulses.iter().map(Pulse::interval);
        let parts = parts.chain(self.sampled.iter().map(SampledField::interval));
        parts.reduce(|(a, b), (c, d)| (a.min(c), b.max(d))).unwrap_or((0.0, 0.0))
    }

    /// ∫A dt per component and ∫A² dt over `[t, t + h]` (three-point Gauss–Legendre, error O(h⁷)).
    pub fn potential_integrals(&self, t: f64, h: f64) -> ([f64; 2], f64) {
        let (mut first, mut second) = ([0.0; 2], 0.0);
        for (node, weight) in GAUSS_3 {
            let a = self.vector_potential(t + node * h);
            first[0] += weight * h * a[0];
            first[1] += weight * h * a[1];
            second += weight * h * (a[0] * a[0] + a[1] * a[1]);
        }
        (first, second)
    }
}

/// Nodes and weights of three-point Gauss–Legendre quadrature on [0, 1] (Abramowitz, Stegun, table 25.4).
const GAUSS_3: [(f64, f64); 3] =
    [(0.112_701_665_379_258_31, 5.0 / 18.0), (0.5, 8.0 / 18.0), (0.887_298_334_620_741_7, 5.0 / 18.0)];
