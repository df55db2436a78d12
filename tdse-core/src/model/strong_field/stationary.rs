//! The dipole by the momentum that returns: p_s = -(α(t) - α(t'))/(t - t') makes the action stationary, and the integral over the
//! others gives the spreading of the packet.

use num_complex::Complex;
use rayon::prelude::*;

use super::line::{PHASE, ROOM};
use super::{DipoleSeries, LineDipole, MARGIN, PlaneDipole};
use crate::field::{Field, Pulse};
use crate::potential::Potential;
use crate::quantities::field_shape;
use crate::simulate::Schedule;
use crate::stationary::StationaryError;

/// Longest excursion in periods of the slowest pulse, where there are pulses alone: later returns have spread.
const EXCURSION: f64 = 2.5;
/// Velocity beyond 2 max |A|, which none of the electrons that return exceeds, 1/bohr.
const BEYOND: f64 = 0.1;

/// Matrix elements with plane waves.
#[derive(Clone, Debug)]
pub enum Bare {
    /// One dimension.
    Line(LineDipole),
    /// Two dimensions.
    Plane(PlaneDipole),
}

impl Bare {
    /// Number of dimensions.
    pub fn dimensions(&self) -> u32 {
        match self {
            Self::Line(_) => 1,
            Self::Plane(_) => 2,
        }
    }

    fn at(&self, k: [f64; 2]) -> [Complex<f64>; 2] {
        match self {
            Self::Line(d) => [d.at(k[0]), Complex::default()],
            Self::Plane(d) => d.at(k),
        }
    }
}

/// (2π/(ε + iτ))^{D/2} of an electron on its way for τ in D dimensions, ε a regularisation: its modulus falls as τ^{-D/2}
/// (Lewenstein et al. 1994, eq. 13, written for D = 3).
pub fn spreading(dimensions: u32, excursion: f64, regularisation: f64) -> Complex<f64> {
    (2.0 * std::f64::consts::PI / Complex::new(regularisation, excursion)).powf(0.5 * f64::from(dimensions))
}

/// Plan of the dipole by returning momenta.
#[derive(Clone, Debug)]
pub struct Stationary {
    /// Matrix elements.
    pub bare: Bare,
    /// The field.
    pub field: Field,
    /// Ionization energy, hartree.
    pub ionization_energy: f64,
    /// Longest time between start and return, a.u.; contributions fade over its last quarter.
    pub longest_excursion: f64,
    /// Times.
    pub schedule: Schedule,
}

/// A, E, α and ∫A²/2 at one sample.
#[derive(Clone, Copy)]
struct Sample {
    potential: [f64; 2],
    field: [f64; 2],
    alpha: [f64; 2],
    quiver: f64,
}

/// A round state R(r) e^{imφ} before the field, in two dimensions.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Round {
    /// Angular momentum.
    pub m: i32,
    /// Nodes of R.
    pub number: usize,
    /// Ionization energy, hartree.
    pub ionization_energy: f64,
}

impl Stationary {
    /// Plan for photons up to `largest_energy` hartree of an atom in two dimensions, with `trailing_time` a.u. after the field.
    ///
    /// # Errors
    /// As [`PlaneDipole::new`].
    pub fn on_plane(
        potential: &Potential,
        state: Round,
        field: &Field,
        largest_energy: f64,
        trailing_time: f64,
    ) -> Result<Self, StationaryError> {
        let velocity = ROOM * (2.0 * largest_energy.max(1.0)).sqrt();
        let schedule = Schedule::new(
            field,
            PHASE / (0.5 * velocity * velocity + state.ionization_energy),
            trailing_time,
        );
        let returning = 2.0 * field_shape(field).peak_potential + BEYOND;
        let whole = schedule.end - schedule.start;
        let period = field.pulses.iter().map(Pulse::period).fold(0.0, f64::max);
        // A sampled field has no period that is known.
        let longest_excursion = if field.sampled.is_some() { whole } else { (EXCURSION * period).min(whole) };
        Ok(Self {
            bare: Bare::Plane(PlaneDipole::new(potential, state.m, state.number, returning)?),
            field: field.clone(),
            ionization_energy: state.ionization_energy,
            longest_excursion,
            schedule,
        })
    }

    /// The dipole, ⟨r⟩(t) = 2 Re[-i ∫ (2π/(ε+iτ))^{D/2} d*(p_s+A(t)) E(t')·d(p_s+A(t')) e^{-iS} dt'], τ = t - t'. The regularisation ε = 1/Ip
    /// is the width of the bound state. In the plateau it has the shape of the integral over all momenta and lies above it, by a factor of
    /// 1.7 in one dimension and of 2.3 in two where that was measured (`tests/`).
    pub fn dipole(&self) -> DipoleSeries {
        self.dipole_with(|_| 1.0)
    }

    /// The dipole of an atom whose bound state has probability `survival(t)` left.
    pub fn dipole_with(&self, survival: impl Fn(f64) -> f64) -> DipoleSeries {
        let tau = self.schedule.time_step;
        let samples = self.samples();
        let left: Vec<f64> = (0..samples.len())
            .map(|n| survival(self.schedule.start + (n as f64 - MARGIN as f64) * tau).max(0.0).sqrt())
            .collect();
        let longest = (self.longest_excursion / tau).ceil().max(4.0) as usize;
        let weights: Vec<Complex<f64>> = (0..=longest)
            .map(|m| {
                let u = m as f64 / longest as f64;
                let fade = (2.0 * std::f64::consts::PI * (u - 0.75).max(0.0)).cos().powi(2);
                let phase = Complex::cis(-self.ionization_energy * m as f64 * tau);
                let end = if m == 0 { 0.5 } else { 1.0 };
                spreading(self.bare.dimensions(), m as f64 * tau, 1.0 / self.ionization_energy)
                    * phase
                    * (fade * end)
            })
            .collect();
        let padded: Vec<[f64; 2]> = (0..samples.len())
            .into_par_iter()
            .map(|n| {
                let mut sum = [Complex::<f64>::default(); 2];
                for (m, weight) in weights.iter().enumerate().take(n + 1) {
                    let part = self.contribution(&samples[n], &samples[n - m], m as f64 * tau);
                    for (s, p) in sum.iter_mut().zip(part) {
                        *s += p * weight * left[n - m];
                    }
                }
                sum.map(|s| 2.0 * tau * s.im * left[n])
            })
            .collect();
        DipoleSeries::of(self.schedule.clone(), &padded)
    }

    /// d*(v) E(t')·d(v') e^{-i∫(p+A)²/2} of an electron that started at `from` and returns at `to`.
    fn contribution(&self, to: &Sample, from: &Sample, excursion: f64) -> [Complex<f64>; 2] {
        if from.field == [0.0; 2] {
            return [Complex::default(); 2];
        }
        let (momentum, action) = if excursion == 0.0 {
            ([-to.potential[0], -to.potential[1]], 0.0)
        } else {
            let p = [0, 1].map(|d| -(to.alpha[d] - from.alpha[d]) / excursion);
            // ∫(p+A)²/2 = ∫A²/2 - p²τ/2 at this p.
            (p, to.quiver - from.quiver - 0.5 * (p[0] * p[0] + p[1] * p[1]) * excursion)
        };
        let velocity = |s: &Sample| [momentum[0] + s.potential[0], momentum[1] + s.potential[1]];
        let start = self.bare.at(velocity(from));
        let pull = start[0] * from.field[0] + start[1] * from.field[1];
        let common = pull * Complex::cis(-action);
        self.bare.at(velocity(to)).map(|d| d.conj() * common)
    }

    fn samples(&self) -> Vec<Sample> {
        let tau = self.schedule.time_step;
        let start = self.schedule.start - MARGIN as f64 * tau;
        let (mut alpha, mut quiver) = ([0.0; 2], 0.0);
        (0..=self.schedule.steps + 2 * MARGIN)
            .map(|n| {
                let t = start + n as f64 * tau;
                let (potential, field) = self.field.potential_and_field(t);
                let sample = Sample { potential, field, alpha, quiver };
                let (first, second) = self.field.potential_integrals(t, tau);
                alpha = [alpha[0] + first[0], alpha[1] + first[1]];
                quiver += 0.5 * second;
                sample
            })
            .collect()
    }
}
