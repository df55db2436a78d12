//! Electrons of the strong-field approximation in two dimensions.

use std::f64::consts::PI;

use num_complex::Complex;
use rayon::prelude::*;

use super::PlaneDipole;
use crate::field::Field;
use crate::outgoing::MomentumMap;
use crate::simulate::Schedule;
use crate::spectrum::{EnergyAxis, momenta_of};

/// Phase of a step of the fastest electron, rad: the integrand vanishes smoothly at both ends.
const PHASE: f64 = 0.8;

/// Plan of direct electrons in two dimensions up to one momentum.
#[derive(Clone, Debug)]
pub struct PlaneElectrons<'a> {
    dipole: &'a PlaneDipole,
    ionization_energy: f64,
    largest: f64,
    time_step: f64,
    samples: Vec<Sample>,
}

/// Time, A, E, ∫A and ∫A²/2.
#[derive(Clone, Copy, Debug)]
struct Sample {
    time: f64,
    potential: [f64; 2],
    field: [f64; 2],
    alpha: [f64; 2],
    quiver: f64,
}

impl<'a> PlaneElectrons<'a> {
    /// Plan for momenta up to `largest`, 1/bohr.
    pub fn new(dipole: &'a PlaneDipole, field: &Field, ionization_energy: f64, largest: f64) -> Self {
        let fastest = largest + crate::quantities::field_shape(field).peak_potential;
        let step = PHASE / (0.5 * fastest * fastest + ionization_energy);
        let schedule = Schedule::new(field, step, 0.0);
        let (mut alpha, mut quiver) = ([0.0; 2], 0.0);
        let samples = schedule.times().into_iter().map(|time| {
            let (potential, e) = field.potential_and_field(time);
            let sample = Sample { time, potential, field: e, alpha, quiver };
            let (first, second) = field.potential_integrals(time, step);
            alpha = [alpha[0] + first[0], alpha[1] + first[1]];
            quiver += 0.5 * second;
            sample
        });
        Self { dipole, ionization_energy, largest, time_step: step, samples: samples.collect() }
    }

    /// Amplitude a(k), bohr, ∫|a|² d²k being the probability: -i ∫E·d(k+A) e^{iS} dt.
    pub fn amplitude(&self, [kx, ky]: [f64; 2]) -> Complex<f64> {
        let free = 0.5 * (kx * kx + ky * ky) + self.ionization_energy;
        let sum: Complex<f64> = self
            .samples
            .iter()
            .map(|s| {
                let d = self.dipole.at([kx + s.potential[0], ky + s.potential[1]]);
                let action = free * s.time + kx * s.alpha[0] + ky * s.alpha[1] + s.quiver;
                (d[0] * s.field[0] + d[1] * s.field[1]) * Complex::cis(action)
            })
            .sum();
        Complex::new(0.0, -self.time_step) * sum
    }

    /// |a|² at momenta along x and y, in the form of a full run's; zero beyond the largest momentum of the plan.
    pub fn map(&self, momenta: [Vec<f64>; 2]) -> MomentumMap {
        let row = |&y: &f64| -> Vec<f64> {
            let at = |&x: &f64| {
                if x.hypot(y) > self.largest { 0.0 } else { self.amplitude([x, y]).norm_sqr() }
            };
            momenta[0].iter().map(at).collect()
        };
        let density = momenta[1].par_iter().map(row).collect::<Vec<_>>().concat();
        MomentumMap { momenta, density }
    }

    /// dP/dE = ∫|a|² dθ on `axis`, 1/hartree, by `directions` equally spaced directions.
    pub fn spectrum(&self, axis: EnergyAxis, directions: usize) -> Vec<f64> {
        let turn = 2.0 * PI / directions as f64;
        let around = |k: f64| {
            let one = |i: usize| {
                let (sin, cos) = (i as f64 * turn).sin_cos();
                self.amplitude([k * cos, k * sin]).norm_sqr() * turn
            };
            (0..directions).map(one).sum()
        };
        momenta_of(axis).into_iter().map(around).collect()
    }
}
