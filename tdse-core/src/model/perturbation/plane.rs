//! Ionization by one photon in two dimensions.

use std::f64::consts::PI;

use num_complex::Complex;

use super::{sampling, steps, transform};
use crate::field::Field;
use crate::simulate::Schedule;
use crate::spectrum::{EnergyAxis, momenta_of};
use crate::stationary::{RoundDipole, RoundTransitions};

type C = Complex<f64>;

/// Electrons in first order of the field, by angular momentum m - 1 and m + 1.
#[derive(Clone, Debug, PartialEq)]
pub struct PlaneOnePhoton {
    m: i32,
    axis: EnergyAxis,
    dipoles: Vec<RoundDipole>,
    /// a = -i ½D (Ẽ_x ± iẼ_y) at the momenta of the axis, ∫Σ|a|² dk = probability.
    amplitudes: Vec<[C; 2]>,
}

impl PlaneOnePhoton {
    /// Amplitudes at the energies of `axis` (Dirac, Proc. R. Soc. A 114, 243 (1927)): exact waves of the atom and the actual field with its whole
    /// bandwidth; exact where the field is weak.
    ///
    /// # Panics
    /// If the transitions do not reach up to the axis' end.
    pub fn new(transitions: &RoundTransitions, field: &Field, axis: EnergyAxis) -> Self {
        let (momenta, ip) = (momenta_of(axis), -transitions.energy());
        let fastest = momenta.iter().fold(0.0, |m: f64, &k| m.max(k));
        let schedule = Schedule::new(field, steps(0.5 * fastest * fastest + ip).min(sampling(field)), 0.0);
        let samples: Vec<[f64; 2]> = schedule.times().into_iter().map(|t| field.electric_field(t)).collect();
        let along = |d: usize| samples.iter().map(|e| e[d]).collect::<Vec<f64>>();
        let (x, y) = (along(0), along(1));
        let dipoles: Vec<RoundDipole> = momenta.iter().map(|&k| transitions.at(k)).collect();
        let amplitudes = dipoles.iter().map(|dipole| {
            let omega = 0.5 * dipole.momentum * dipole.momentum + ip;
            let light = [&x, &y].map(|samples| transform(samples, &schedule, omega));
            let turning = [light[0] + C::i() * light[1], light[0] - C::i() * light[1]];
            [0, 1].map(|i| C::new(0.0, -0.5 * dipole.elements[i]) * turning[i])
        });
        let amplitudes = amplitudes.collect();
        Self { m: transitions.angular_momentum(), axis, dipoles, amplitudes }
    }

    /// dP/dE on the axis, 1/hartree.
    pub fn spectrum(&self) -> Vec<f64> {
        let all = self.amplitudes.iter().zip(&self.dipoles);
        all.map(|(a, dipole)| (a[0].norm_sqr() + a[1].norm_sqr()) / dipole.momentum).collect()
    }

    /// Probability of an electron within the axis.
    pub fn probability(&self) -> f64 {
        self.over_momenta(|n| self.amplitudes[n].iter().map(C::norm_sqr).sum())
    }

    /// dP/dθ at every angle to x, of electrons within the axis, 1/rad.
    pub fn angular_distribution(&self, angles: &[f64]) -> Vec<f64> {
        let orders = [self.m - 1, self.m + 1];
        let at = |angle: f64, n: usize| {
            let parts = [0, 1].map(|i| {
                let turn = f64::from(orders[i]) * angle - 0.5 * PI * f64::from(orders[i].abs());
                self.amplitudes[n][i] * C::cis(turn + self.dipoles[n].phases[i])
            });
            (parts[0] + parts[1]).norm_sqr() / (2.0 * PI)
        };
        angles.iter().map(|&angle| self.over_momenta(|n| at(angle, n))).collect()
    }

    /// ∫dk by trapezoids, from threshold on with the first value.
    fn over_momenta(&self, value: impl Fn(usize) -> f64) -> f64 {
        let k = |n: usize| self.dipoles[n].momentum;
        let pairs = (1..self.axis.points).map(|n| 0.5 * (k(n) - k(n - 1)) * (value(n) + value(n - 1)));
        k(0) * value(0) + pairs.sum::<f64>()
    }
}
