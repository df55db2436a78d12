//! Tunnelling: rates in a static field, of atoms in three dimensions and of the model atom, and what they give over a pulse.

mod atoms;
mod gamma;
mod polarizability;
mod quasi_static;
mod resonance;

pub use atoms::{Orbital, PptSum, keldysh_exponent};
pub use polarizability::polarizability;
pub use quasi_static::{Asymptotic, QuasiStatic, Stark};
pub use resonance::{Resonance, resonance, resonances};

use std::sync::Arc;

use crate::cubic::Cubic;
use crate::field::Field;
use crate::quantities::barrier_suppression_field;
use crate::units;

/// Step, downwards, in which the search for saturation looks for a factor that saturates.
const OVER_BARRIER: f64 = 1.25;

/// A rate at a field of given strength.
#[derive(Clone, Debug)]
pub enum Rate {
    /// Quasi-static rate of an atom in three dimensions, see [`Orbital::static_rate`].
    Adk(Orbital),
    /// Rate of an atom in three dimensions averaged over a cycle, see [`Orbital::ppt_rate`].
    Ppt {
        /// The orbital.
        orbital: Orbital,
        /// Angular frequency of the light, hartree.
        frequency: f64,
    },
    /// Quasi-static rate of the model atom.
    Model(QuasiStatic),
}

impl Rate {
    /// Rate at field `[E_x, E_y]`, 1/a.u. of time; for [`Rate::Ppt`] the field is the amplitude of the carrier.
    pub fn at(&self, [x, y]: [f64; 2]) -> f64 {
        match self {
            Self::Adk(orbital) => orbital.static_rate(x.hypot(y)),
            Self::Ppt { orbital, frequency } => orbital.ppt_rate(x.hypot(y), *frequency),
            // In one dimension the sign says to which side the electron leaves.
            Self::Model(model) if y == 0.0 => model.rate(x),
            Self::Model(model) => model.rate(x.hypot(y)),
        }
    }

    /// Rate at time `t` of a field: at E(t), or, averaged over a cycle, at the sum of the pulses' envelopes.
    fn during(&self, field: &Field, t: f64) -> f64 {
        match self {
            Self::Ppt { .. } => {
                let envelope =
                    |p: &crate::field::Pulse| p.peak_field * p.envelope.value_and_slope(t - p.centre).0;
                self.at([field.pulses.iter().map(envelope).sum(), 0.0])
            }
            Self::Adk(_) | Self::Model(_) => self.at(field.electric_field(t)),
        }
    }

    /// Probability to be ionized at `times` (rising, a.u.), 1 - exp(-∫w dt), Simpson's rule between them.
    ///
    /// Averaged rates hear of pulses alone, not of a sampled field.
    pub fn ionization(&self, field: &Field, times: &[f64]) -> Vec<f64> {
        ionization(times, |t| self.during(field, t))
    }

    /// Factor on the whole field at which the probability after it is 1 - 1/e; `None` where no factor between 1e-3 and 1e3
    /// has it.
    pub fn saturation(&self, field: &Field) -> Option<f64> {
        let (start, end) = field.interval();
        let count = crate::quantities::samples(field, end - start);
        let times: Vec<f64> = (0..=count).map(|i| start + (end - start) * i as f64 / count as f64).collect();
        let exponent = |factor: f64| {
            let scaled = scaled(field, factor);
            -(-self.ionization(&scaled, &times).last().copied().unwrap_or(0.0)).ln_1p()
        };
        let (mut low, mut high) = (1e-3f64, 1e3f64);
        // Far over the barrier rates of leading order fall again.
        while exponent(high) < 1.0 && high > low {
            high /= OVER_BARRIER;
        }
        if exponent(low) > 1.0 || high <= low {
            return None;
        }
        while high / low > 1.0 + 1e-9 {
            let middle = (low * high).sqrt();
            if exponent(middle) < 1.0 { low = middle } else { high = middle }
        }
        Some((low * high).sqrt())
    }

    /// Intensity of the first pulse, W/cm², at which the probability after the field is 1 - 1/e; see [`Rate::saturation`].
    pub fn saturation_intensity(&self, field: &Field) -> Option<f64> {
        let peak = field.pulses.first()?.peak_field;
        self.saturation(field).map(|factor| units::intensity(peak * factor))
    }
}

/// 1 - exp(-∫w dt) at `times` (rising), Simpson's rule between them.
pub(super) fn ionization(times: &[f64], rate: impl Fn(f64) -> f64) -> Vec<f64> {
    let mut exponent = 0.0;
    let mut last = times.first().map(|&t| (t, rate(t)));
    let mut out = Vec::with_capacity(times.len());
    for &t in times {
        if let Some((before, known)) = last {
            let (middle, here) = (rate(0.5 * (before + t)), rate(t));
            exponent += (t - before) / 6.0 * (known + 4.0 * middle + here);
            last = Some((t, here));
        }
        out.push(-f64::exp_m1(-exponent));
    }
    out
}

fn scaled(field: &Field, factor: f64) -> Field {
    let mut scaled = field.clone();
    for pulse in &mut scaled.pulses {
        pulse.peak_field *= factor;
    }
    for table in scaled.sampled.iter_mut().flat_map(|s| &mut s.components).flatten() {
        let (times, values) = table.points();
        *table = Arc::new(Cubic::new(times.to_vec(), values.iter().map(|v| v * factor).collect()));
    }
    scaled
}

/// Intensity of linearly polarized light, W/cm², whose crest pulls the barrier of -Z/r down to -Ip (Augst, Strickland,
/// Meyerhofer, Chin, Eberly, Phys. Rev. Lett. 63, 2212 (1989)).
pub fn barrier_suppression_intensity(ionization_energy: f64, charge: f64) -> f64 {
    units::intensity(barrier_suppression_field(ionization_energy, charge))
}
