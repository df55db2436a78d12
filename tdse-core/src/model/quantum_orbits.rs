//! Quantum orbits: the complex times of start t' and return t that make the action of the strong-field approximation stationary
//! (Lewenstein, Salières, L'Huillier, Phys. Rev. A 52, 4747 (1995); Salières et al., Science 292, 902 (2001)).
//!
//! (p+A(t'))² = -2 Ip and (p+A(t))² = 2(Ω - Ip), p = -∫A/(t - t'). Along the first condition the photon energy Ω(t) is an analytic
//! function of t, and dΩ/dt = 0 where the short and the long orbit meet: the complex cutoff (Pisanty, Ciappina, Lewenstein, J. Phys.
//! Photonics 2, 034013 (2020)). Both orbits are followed from there. In two dimensions p, A and E are vectors and products of two of
//! them are x x' + y y' without conjugation; there the orbits of the field's part along its strongest direction come first, and then
//! the rest of it grows.

mod continued;
mod highest;

pub use continued::Continued;
pub use highest::NotAnalytic;

use std::f64::consts::PI;

use num_complex::Complex;

use super::strong_field::spreading;
use super::three_step::Branch;

type C = Complex<f64>;

/// Flight of the classical electron of highest energy, in units of the phase, rad (from 17.96° to 252.04°).
const FLIGHT: f64 = 4.085_573_93;
/// Steps in which the part of the field across its strongest direction grows.
const WIDER: u32 = 20;
/// Newton steps at the most.
const ITERATIONS: usize = 60;
/// Part of the cutoff's distance from the threshold by which energies follow each other.
const FOLLOW: f64 = 0.02;

/// One orbit at one photon energy.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Orbit {
    /// Photon energy, hartree.
    pub energy: f64,
    /// Time of the start, a.u., its imaginary part the time under the barrier.
    pub emission: C,
    /// Time of the return, a.u.
    pub time: C,
    /// Short or long.
    pub branch: Branch,
    /// Ωt - ∫((p+A)²/2 + Ip): its real part is the dipole phase, rad, minus its imaginary part the logarithm of the weight.
    pub action: C,
    /// Contribution to ∫⟨x⟩e^{iΩt}dt without matrix elements: (2π/iτ)^{D/2} 2πi/√det e^{i action}, the sign of the root that of its
    /// principal value; not uniform near the cutoff, where det → 0.
    pub amplitude: C,
    /// Whether it contributes: beyond the cutoff the orbit whose weight grows does not.
    pub contributes: bool,
}

/// The orbits around one classical path of highest energy.
#[derive(Clone, Debug)]
pub struct QuantumOrbits {
    /// The field.
    pub field: Continued,
    /// Unit vector along which it is strongest.
    pub direction: [f64; 2],
    /// Times of start and return of the classical path in its part along that direction, a.u.
    pub classical: [f64; 2],
    /// Ionization energy, hartree.
    pub ionization_energy: f64,
    /// Number of dimensions, for the spreading.
    pub dimensions: u32,
}

/// Where short and long orbit meet.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ComplexCutoff {
    /// Complex photon energy, hartree; its real part is the cutoff.
    pub energy: C,
    /// Time of the start.
    pub emission: C,
    /// Time of the return.
    pub time: C,
    /// d²Ω/dt² there.
    curvature: C,
}

/// Ω and dΩ/dt at a time of return, with the time of the start that belongs to it.
struct Curve {
    emission: C,
    energy: C,
    slope: C,
}

impl QuantumOrbits {
    /// The cutoff; `None` where it was not found.
    pub fn cutoff(&self) -> Option<ComplexCutoff> {
        let frequency = self.frequency();
        // From the classical limit on: the root moves smoothly with the ionization energy.
        let strength = self.field.field(C::from(self.classical[0])).map(|part| part.re);
        let strength = strength[0].hypot(strength[1]);
        let ponderomotive = (strength / (2.0 * frequency)).powi(2);
        let first = (1e-3 * ponderomotive).min(self.ionization_energy);
        let count = ((self.ionization_energy / first).ln() / 0.3).ceil().max(1.0);
        let mut at = self.classical.map(C::from);
        at[0] += C::i() * (2.0 * first).sqrt() / strength;
        let squeezed = |part: f64| Self { field: self.field.squeezed(self.direction, part), ..self.clone() };
        let straight = squeezed(0.0);
        for n in 0..=count as usize {
            let energy = first * (self.ionization_energy / first).powf(n as f64 / count);
            let here = Self { ionization_energy: energy, ..straight.clone() };
            at = here.stationary(at)?;
        }
        if straight.field != self.field {
            for n in 1..=WIDER {
                at = squeezed(f64::from(n) / f64::from(WIDER)).stationary(at)?;
            }
        }
        let step = 1e-3 / frequency;
        let here = self.curve(at[1], at[0])?;
        let [before, after] = [-step, step].map(|h| self.curve(at[1] + h, at[0]).map(|c| c.slope));
        let curvature = (after? - before?) / (2.0 * step);
        Some(ComplexCutoff { energy: here.energy, emission: at[0], time: at[1], curvature })
    }

    /// Frequency of light whose classical path of highest energy flies as long: the scale of steps in time.
    fn frequency(&self) -> f64 {
        FLIGHT / (self.classical[1] - self.classical[0])
    }

    /// Short and long orbit at photon energies `energies` (above the ionization energy, hartree); `None` where an orbit was lost.
    pub fn orbits(&self, energies: &[f64]) -> [Vec<Option<Orbit>>; 2] {
        let Some(cutoff) = self.cutoff() else {
            return [vec![None; energies.len()], vec![None; energies.len()]];
        };
        // Of both roots the one that returns earlier below the cutoff is the short orbit.
        let root = |energy: f64| (2.0 * (energy - cutoff.energy) / cutoff.curvature.norm()).sqrt();
        let turn = C::cis(-0.5 * cutoff.curvature.arg());
        let below = (root(cutoff.energy.re - 0.1 * self.ionization_energy.max(cutoff.energy.re)) * turn).re;
        let short_sign = -below.signum();
        [(Branch::Short, short_sign), (Branch::Long, -short_sign)].map(|(branch, sign)| {
            let guess = |energy: f64| cutoff.time + root(energy) * turn * sign;
            energies.iter().map(|&energy| self.followed(&cutoff, guess, energy, branch)).collect()
        })
    }

    /// Follows one orbit from the cutoff to `energy`.
    fn followed(
        &self,
        cutoff: &ComplexCutoff,
        guess: impl Fn(f64) -> C,
        energy: f64,
        branch: Branch,
    ) -> Option<Orbit> {
        let centre = cutoff.energy.re;
        let step = FOLLOW * centre;
        let count = ((energy - centre).abs() / step).ceil().max(1.0) as usize;
        let way = |n: usize| centre + (energy - centre) * n as f64 / count as f64;
        let mut emission = cutoff.emission;
        let (mut last, mut older) = (guess(way(1)), cutoff.time);
        for n in 1..=count {
            let start = if n == 1 { last } else { last + (last - older) * 0.5 };
            let (time, started) = self.at_energy(way(n), start, emission)?;
            (older, last, emission) = (last, time, started);
        }
        let orbit = self.orbit(energy, emission, last, branch);
        // Beyond the cutoff weights of the two go apart; that of the orbit that contributes falls below the cutoff's own.
        let grows = |o: &Orbit| {
            let at_cutoff = self.action(cutoff.energy.re, cutoff.emission, cutoff.time).im;
            energy > centre && o.action.im < at_cutoff
        };
        Some(Orbit { contributes: !grows(&orbit), ..orbit })
    }

    /// Newton's method for Ω(t) = `energy`.
    fn at_energy(&self, energy: f64, mut time: C, mut emission: C) -> Option<(C, C)> {
        for _ in 0..ITERATIONS {
            let here = self.curve(time, emission)?;
            emission = here.emission;
            let mut change = (here.energy - energy) / here.slope;
            // No further than a tenth of a radian at once.
            let limit = 0.1 / self.frequency();
            if change.norm() > limit {
                change *= limit / change.norm();
            }
            time -= change;
            if change.norm() < 1e-12 / self.frequency() {
                return Some((time, emission));
            }
        }
        None
    }

    fn orbit(&self, energy: f64, emission: C, time: C, branch: Branch) -> Orbit {
        let tau = time - emission;
        let [start, back] = self.at(emission, time);
        let mixed = dot(back.velocity, start.velocity) / tau;
        let twice = [dot(start.velocity, start.velocity), dot(back.velocity, back.velocity)];
        let determinant = (twice[1] / tau + dot(back.velocity, back.field))
            * (twice[0] / tau - dot(start.velocity, start.field))
            - mixed * mixed;
        let action = self.action(energy, emission, time);
        let spread = spreading(self.dimensions, 1.0, 0.0) * tau.powf(-0.5 * f64::from(self.dimensions));
        let amplitude = spread * C::new(0.0, 2.0 * PI) / determinant.sqrt() * (C::i() * action).exp();
        Orbit { energy, emission, time, branch, action, amplitude, contributes: true }
    }

    fn action(&self, energy: f64, emission: C, time: C) -> C {
        let tau = time - emission;
        let p = self.momentum(emission, time);
        let quiver = self.field.square_integral(time) - self.field.square_integral(emission);
        time * energy - 0.5 * (quiver - dot(p, p) * tau) - tau * self.ionization_energy
    }

    /// p of the orbit between two times.
    pub fn momentum(&self, emission: C, time: C) -> [C; 2] {
        let (from, to) = (self.field.integral(emission), self.field.integral(time));
        [0, 1].map(|d| -(to[d] - from[d]) / (time - emission))
    }

    /// p + A and E at the start and at the return.
    fn at(&self, emission: C, time: C) -> [End; 2] {
        let p = self.momentum(emission, time);
        [emission, time].map(|t| {
            let a = self.field.potential(t);
            End { velocity: [p[0] + a[0], p[1] + a[1]], field: self.field.field(t) }
        })
    }

    /// Solves the first condition for t' at a given t, from a guess.
    fn curve(&self, time: C, mut emission: C) -> Option<Curve> {
        let frequency = self.frequency();
        for _ in 0..ITERATIONS {
            let [start, _] = self.at(emission, time);
            let twice = dot(start.velocity, start.velocity);
            let slope = twice / (time - emission) - dot(start.velocity, start.field);
            let change = (0.5 * twice + self.ionization_energy) / slope;
            emission -= change;
            if change.norm() < 1e-13 / frequency {
                let [start, back] = self.at(emission, time);
                let tau = time - emission;
                let (mixed, twice) = (dot(back.velocity, start.velocity), dot(back.velocity, back.velocity));
                let own = dot(start.velocity, start.velocity) / tau - dot(start.velocity, start.field);
                // dt'/dt = (v·v'/τ)/own
                let slope = mixed * mixed / (tau * tau * own) - twice / tau - dot(back.velocity, back.field);
                return Some(Curve { emission, energy: 0.5 * twice + self.ionization_energy, slope });
            }
        }
        None
    }

    /// Secant method for dΩ/dt = 0, from guesses of t' and t.
    fn stationary(&self, [mut emission, time]: [C; 2]) -> Option<[C; 2]> {
        let frequency = self.frequency();
        let mut old = time + 1e-3 / frequency;
        let mut new = time;
        let first = self.curve(old, emission)?;
        let mut at_old = first.slope;
        for _ in 0..ITERATIONS {
            let here = self.curve(new, emission)?;
            emission = here.emission;
            let change = here.slope * (new - old) / (here.slope - at_old);
            (old, at_old) = (new, here.slope);
            if change.norm() < 1e-12 / frequency || here.slope == C::default() {
                return Some([emission, new]);
            }
            new -= change;
        }
        None
    }
}

/// p + A and E at either end of an orbit.
struct End {
    velocity: [C; 2],
    field: [C; 2],
}

/// x x' + y y'.
fn dot(a: [C; 2], b: [C; 2]) -> C {
    a[0] * b[0] + a[1] * b[1]
}
