//! Quasi-static rate of the model atom, from its own asymptotic coefficient and its Stark-shifted ionization energy.

use std::f64::consts::PI;

use super::{polarizability, resonances};
use crate::cubic::Cubic;
use crate::potential::Potential;
use crate::quantities::barrier_suppression_field;
use crate::stationary::{StationaryError, level, radial_level};

/// Part of the reach (decay by e⁻²⁰) at which the coefficient is read off.
const READ_AT: f64 = 0.75;
/// Fields of the table of Stark shifts.
const FIELDS: usize = 24;

/// ψ → C r^{Z/κ-(D-1)/2} e^{-κr} Y far from the atom in D dimensions, Y = 1, e^{imφ}/√2π, 1/√4π.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Asymptotic {
    /// D, from 1 to 3.
    pub dimensions: u32,
    /// Energy of the level, hartree.
    pub energy: f64,
    /// Charge Z seen from far away.
    pub charge: f64,
    /// C towards x → -∞ and x → +∞; the same twice in more dimensions than one.
    pub coefficient: [f64; 2],
}

impl Asymptotic {
    /// Of level `number` in one dimension, its wave function normalised.
    ///
    /// # Errors
    /// As [`level`].
    pub fn on_line(potential: &Potential, number: usize) -> Result<Self, StationaryError> {
        let found = level(potential, number)?;
        let step = (potential.smallest_length() / 32.0).min(found.reach / 1000.0);
        let half = (found.reach / step).floor() as usize;
        let positions: Vec<f64> = (0..=2 * half).map(|i| (i as f64 - half as f64) * step).collect();
        let psi = found.wave_function(potential, &positions);
        let norm = (psi.iter().map(|p| p * p).sum::<f64>() * step).sqrt();
        let away = (READ_AT * half as f64) as usize;
        let read = |i: usize| psi[i] / norm / decaying(potential, found.energy, 0.25, positions[i].abs());
        Ok(Self {
            dimensions: 1,
            energy: found.energy,
            charge: potential.far_charge(),
            coefficient: [read(half - away), read(half + away)],
        })
    }

    /// Of the level with `number` radial nodes at angular momentum ±`angular` in two dimensions.
    ///
    /// # Errors
    /// As [`radial_level`].
    pub fn on_plane(potential: &Potential, angular: u32, number: usize) -> Result<Self, StationaryError> {
        let found = radial_level(potential, angular, number)?;
        let r = READ_AT * found.reach;
        let value = found.radial_function(potential, angular).value(r);
        let decay = decaying(potential, found.energy, f64::from(angular * angular), r) / r.sqrt();
        Ok(Self {
            dimensions: 2,
            energy: found.energy,
            charge: potential.far_charge(),
            coefficient: [value / decay; 2],
        })
    }

    /// Leading-order rate in a static field, 1/a.u. of time, for electrons that leave against it, at level energy `energy`:
    /// κ |C|²/Ω (πF/κ³)^{(D-1)/2} (2κ²/F)^{2Z/κ} e^{-2κ³/3F}, Ω = 1, 2π, 4π: each momentum q across the field tunnels with e^{-κq²/F}
    /// less, and is integrated over (the derivation of Landau, Lifshitz, Quantum Mechanics, §77, for any number of dimensions; three
    /// give (4/F) e^{-2/3F} for hydrogen).
    ///
    /// # Panics
    /// If the number of dimensions is not 1, 2 or 3.
    pub fn leading_rate(&self, field: f64, energy: f64) -> f64 {
        if field == 0.0 {
            return 0.0;
        }
        let strength = field.abs();
        let kappa = (-2.0 * energy).sqrt();
        let directions = match self.dimensions {
            1 => 1.0,
            2 => 2.0 * PI,
            3 => 4.0 * PI,
            other => panic!("1 <= dimensions <= 3, got {other}"),
        };
        let across = (PI * strength / kappa.powi(3)).powf(0.5 * f64::from(self.dimensions - 1)) / directions;
        let side = usize::from(field < 0.0);
        kappa
            * self.coefficient[side].powi(2)
            * across
            * (2.0 * kappa * kappa / strength).powf(2.0 * self.charge / kappa)
            * (-2.0 * kappa.powi(3) / (3.0 * strength)).exp()
    }
}

/// The decaying u of u'' = 2(V - E + (m² - ¼)/2r²) u with `square` = m²: W_{Z/κ,m}(2κr)/(2κ)^{Z/κ} by its asymptotic series
/// (Abramowitz, Stegun, eq. 13.5.2 with 13.1.33), times exp(∫ΔV/κ dr) for the rest of the potential.
fn decaying(potential: &Potential, energy: f64, square: f64, r: f64) -> f64 {
    let kappa = (-2.0 * energy).sqrt();
    let n = potential.far_charge() / kappa;
    let (mut term, mut sum) = (1.0, 0.0);
    for j in 1..40 {
        sum += term;
        let k = n - f64::from(j) + 0.5;
        let next = term * (square - k * k) / (f64::from(j) * 2.0 * kappa * r);
        if next.abs() >= f64::abs(term) {
            break;
        }
        term = next;
    }
    // ΔV = -Z/√(r²+a²) + Z/r falls as r⁻³; over u = r₀/r it is smooth.
    let (_, last) = potential.domain();
    let rest = |at: f64| if at > last { 0.0 } else { potential.value(at) + potential.far_charge() / at };
    let count = 200;
    let integral: f64 = (0..count)
        .map(|i| {
            let u = (f64::from(i) + 0.5) / f64::from(count);
            rest(r / u) * r / (u * u) / f64::from(count)
        })
        .sum();
    r.powf(n) * (-kappa * r).exp() * sum * (integral / kappa).exp()
}

/// How the level moves in a static field.
#[derive(Clone, Debug, PartialEq)]
pub enum Stark {
    /// It stays.
    None,
    /// By -αF²/2, beyond a field by what it is there.
    Polarizability {
        /// α, a.u.
        alpha: f64,
        /// The field beyond which the shift stays, a.u.
        until: f64,
    },
    /// To the real part of the resonance, tabulated over |F|; for fields towards -x and towards +x.
    Resonance([Cubic; 2]),
}

/// Quasi-static rate of the model atom.
#[derive(Clone, Debug)]
pub struct QuasiStatic {
    /// Decay of the level.
    pub asymptotic: Asymptotic,
    /// Its shift.
    pub stark: Stark,
}

impl QuasiStatic {
    /// Rate of level `number` in one dimension with the shift of its resonance in fields up to `largest_field`, a.u.
    ///
    /// # Errors
    /// As [`level`], and [`StationaryError::NotConverged`] where the resonance could not be followed.
    ///
    /// # Panics
    /// If `largest_field` is not positive.
    pub fn on_line(
        potential: &Potential,
        number: usize,
        largest_field: f64,
    ) -> Result<Self, StationaryError> {
        let asymptotic = Asymptotic::on_line(potential, number)?;
        let table = |sign: f64| -> Result<Cubic, StationaryError> {
            let fields: Vec<f64> = (0..=FIELDS).map(|i| largest_field * i as f64 / FIELDS as f64).collect();
            let signed: Vec<f64> = fields[1..].iter().map(|f| sign * f).collect();
            let followed = resonances(potential, asymptotic.energy, &signed)?;
            let shifted = followed.iter().map(|r| r.energy);
            Ok(Cubic::new(fields, std::iter::once(asymptotic.energy).chain(shifted).collect()))
        };
        let positive = table(1.0)?;
        let negative = match potential {
            Potential::Sampled(_) => table(-1.0)?,
            _ => positive.clone(),
        };
        Ok(Self { asymptotic, stark: Stark::Resonance([negative, positive]) })
    }

    /// Rate of the level with `number` radial nodes at angular momentum ±`angular` in two dimensions, its shift by its polarizability up
    /// to the field of barrier suppression, Ip²/4Z, with Z = 1 where the potential has no tail. Over the barrier there is no level to
    /// shift, and -αF²/2 has no end.
    ///
    /// # Errors
    /// As [`radial_level`] and [`polarizability`].
    pub fn on_plane(potential: &Potential, angular: u32, number: usize) -> Result<Self, StationaryError> {
        let asymptotic = Asymptotic::on_plane(potential, angular, number)?;
        let charge = if asymptotic.charge > 0.0 { asymptotic.charge } else { 1.0 };
        let stark = Stark::Polarizability {
            alpha: polarizability(potential, angular, number)?,
            until: barrier_suppression_field(-asymptotic.energy, charge),
        };
        Ok(Self { asymptotic, stark })
    }

    /// Energy of the level in a field, hartree; beyond the table, or the last field of a polarizability, that at its end.
    pub fn energy(&self, field: f64) -> f64 {
        match &self.stark {
            Stark::None => self.asymptotic.energy,
            Stark::Polarizability { alpha, until } => {
                self.asymptotic.energy - 0.5 * alpha * field.abs().min(*until).powi(2)
            }
            Stark::Resonance(tables) => tables[usize::from(field > 0.0)].value(field.abs()),
        }
    }

    /// Leading-order rate with the shifted energy, 1/a.u. of time.
    pub fn rate(&self, field: f64) -> f64 {
        self.asymptotic.leading_rate(field, self.energy(field))
    }
}
