//! The classical three steps: an electron starts at rest at the nucleus, moves in the field alone, and returns
//! (Corkum, Phys. Rev. Lett. 71, 1994 (1993); Schafer, Yang, DiMauro, Kulander, Phys. Rev. Lett. 70, 1599 (1993)).
//!
//! v(t) = A(t) - A(t₀), r(t) = α(t) - α(t₀) - A(t₀)(t - t₀), α = ∫A dt. A return is a zero of the path along the direction of
//! the field at t₀; in two dimensions the electron misses the nucleus there by [`Return::miss`].

use num_complex::Complex;

use super::Motion;
use crate::field::{Field, Pulse};
use crate::quantities::field_shape;
use crate::stationary::root::brent;

/// Which of the two paths to one energy.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Branch {
    /// Starts later and returns earlier.
    Short,
    /// Starts earlier and returns later.
    Long,
}

/// One return of an electron.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Return {
    /// Time at which it starts, a.u.
    pub emission: f64,
    /// Time of this return, a.u.
    pub time: f64,
    /// Which return it is, from 1.
    pub number: usize,
    /// Kinetic energy at the return, hartree.
    pub energy: f64,
    /// Energy after the field of an electron that is scattered back by 180° there, hartree.
    pub backscattered: f64,
    /// Distance from the nucleus at the return, bohr; zero for linear polarization.
    pub miss: f64,
    /// Short where the energy falls with a later start, long where it rises.
    pub branch: Branch,
}

/// What is largest at an extreme path.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Extreme {
    /// The energy at the return: the harmonic cutoff.
    Return,
    /// The energy after scattering back: the cutoff of rescattered electrons.
    Backscattering,
}

/// Classical paths in one field.
#[derive(Clone, Debug)]
pub struct ThreeStep {
    motion: Motion,
}

impl ThreeStep {
    /// Tabulates the motion in `field`.
    pub fn new(field: &Field) -> Self {
        Self { motion: Motion::new(field) }
    }

    /// The first `count` returns, within the field, of an electron that starts at `emission`, a.u.
    pub fn returns(&self, emission: f64, count: usize) -> Vec<Return> {
        let Some(path) = Path::from(&self.motion, emission) else { return Vec::new() };
        let samples = self.motion.samples();
        let mut found = Vec::new();
        let mut last = 0.0;
        for (i, &alpha) in samples.iter().enumerate().skip(self.motion.after(emission) + 1) {
            let here = path.along(alpha, self.motion.time(i));
            if here * last < 0.0 {
                let bracket = [(self.motion.time(i - 1), last), (self.motion.time(i), here)];
                let time = brent(|t| path.along(self.motion.integral(t), t), bracket, 1e-14);
                found.push(path.return_at(time, found.len() + 1));
            }
            if found.len() == count {
                break;
            }
            last = here;
        }
        found
    }

    /// The first `count` returns of electrons that start at any sample of the field, by rising time of start: for an overlay
    /// over a time–frequency map, at [`Return::time`] and energy plus ionization energy.
    pub fn all_returns(&self, count: usize) -> Vec<Return> {
        self.motion.times().into_iter().flat_map(|t| self.returns(t, count)).collect()
    }

    /// The path of largest energy among those of return `number`; `None` where nothing returns.
    pub fn highest(&self, number: usize, what: Extreme) -> Option<Return> {
        let energy = |r: &Return| match what {
            Extreme::Return => r.energy,
            Extreme::Backscattering => r.backscattered,
        };
        let at = |t: f64| self.returns(t, number).into_iter().nth(number - 1);
        let times = self.motion.times();
        let found: Vec<Option<Return>> = times.iter().map(|&t| at(t)).collect();
        let of = |i: usize| found[i].as_ref().map_or(0.0, energy);
        let best = (0..times.len()).max_by(|&i, &j| of(i).total_cmp(&of(j)))?;
        let highest = found[best]?;
        // The energy is stationary where v + c E(t)(t - t₀) = 0, c = 1 at the return and 2 after scattering back.
        let slope = |t: f64| at(t).map(|r| self.stationary(&r, what));
        let neighbours = [best.saturating_sub(1), (best + 1).min(times.len() - 1)].map(|i| times[i]);
        let [low, high] = neighbours.map(|t| slope(t).map(|s| (t, s)));
        let refined = match (low, high) {
            (Some(low), Some(high)) if low.1 * high.1 < 0.0 => {
                at(brent(|t| slope(t).unwrap_or(0.0), [low, high], 1e-13))
            }
            _ => None,
        };
        refined.filter(|r| energy(r) >= energy(&highest)).or(Some(highest))
    }

    /// Largest energy after the field of electrons that do not return, max |A(t₀)|²/2, hartree: 2 Up of a long pulse.
    pub fn direct_limit(&self) -> f64 {
        0.5 * crate::quantities::field_shape(self.motion.field()).peak_potential.powi(2)
    }

    /// Harmonic cutoff of this very field, ionization energy and largest return energy, hartree; `None` where nothing returns.
    pub fn cutoff(&self, ionization_energy: f64) -> Option<f64> {
        self.highest(1, Extreme::Return).map(|r| r.energy + ionization_energy)
    }

    fn stationary(&self, r: &Return, what: Extreme) -> f64 {
        let c = match what {
            Extreme::Return => 1.0,
            Extreme::Backscattering => 2.0,
        };
        let path = Path::from(&self.motion, r.emission).expect("a path that returned has a direction");
        let [v, e] = path.velocity_and_field(r.time);
        v + c * e * (r.time - r.emission)
    }
}

/// The pulses' part along the direction of the largest field, turned to x, and that direction as a unit vector: in it move the electrons
/// that start with just the velocity across it that brings them back. Linear light of one direction is its own strongest part.
pub fn strongest_part(field: &Field) -> (Field, [f64; 2]) {
    let peak = field.electric_field(field_shape(field).peak_time);
    let angle = peak[1].atan2(peak[0]);
    let pulses = field.pulses.iter().map(|pulse| part_along(pulse, angle)).collect();
    (Field { pulses, sampled: None }, [angle.cos(), angle.sin()])
}

/// Of A = a f (-sin Φ, ε cos Φ) along an angle β to the major axis: -a ρ f sin(Φ - χ), ρ e^{iχ} = cos β + iε sin β.
fn part_along(pulse: &Pulse, angle: f64) -> Pulse {
    let s = 1.0 / (1.0 + pulse.ellipticity.powi(2)).sqrt();
    let (sin, cos) = (angle - pulse.angle).sin_cos();
    let part = Complex::new(cos, pulse.ellipticity * sin);
    Pulse {
        peak_field: pulse.peak_field * s * part.norm(),
        phase: pulse.phase - part.arg(),
        ellipticity: 0.0,
        angle: 0.0,
        ..*pulse
    }
}

/// A path from its start on.
struct Path<'a> {
    motion: &'a Motion,
    emission: f64,
    /// Unit vector of the field at the start.
    direction: [f64; 2],
    alpha: [f64; 2],
    potential: [f64; 2],
}

impl<'a> Path<'a> {
    /// `None` where there is no field to start in.
    fn from(motion: &'a Motion, emission: f64) -> Option<Self> {
        let (potential, [ex, ey]) = motion.field().potential_and_field(emission);
        let size = ex.hypot(ey);
        (size > 0.0).then(|| Self {
            motion,
            emission,
            direction: [ex / size, ey / size],
            alpha: motion.integral(emission),
            potential,
        })
    }

    fn displacement(&self, alpha: [f64; 2], time: f64) -> [f64; 2] {
        let flight = time - self.emission;
        [0, 1].map(|d| alpha[d] - self.alpha[d] - self.potential[d] * flight)
    }

    /// r(t) along the direction of the field at the start.
    fn along(&self, alpha: [f64; 2], time: f64) -> f64 {
        self.dot(self.displacement(alpha, time))
    }

    fn dot(&self, v: [f64; 2]) -> f64 {
        v[0] * self.direction[0] + v[1] * self.direction[1]
    }

    /// v(t) and E(t) along the direction of the field at the start.
    fn velocity_and_field(&self, time: f64) -> [f64; 2] {
        let (a, e) = self.motion.field().potential_and_field(time);
        [self.dot([a[0] - self.potential[0], a[1] - self.potential[1]]), self.dot(e)]
    }

    fn return_at(&self, time: f64, number: usize) -> Return {
        let a = self.motion.field().vector_potential(time);
        let v = [a[0] - self.potential[0], a[1] - self.potential[1]];
        // Turned round, v → -v; the drift momentum is v - A.
        let drift = [-v[0] - a[0], -v[1] - a[1]];
        let r = self.displacement(self.motion.integral(time), time);
        let along = self.dot(r);
        let miss = [0, 1].map(|d| r[d] - along * self.direction[d]);
        // d(v²/2)/dt₀ = E(t₀)(v + E(t)(t - t₀)) along the path that returns.
        let [speed, field] = self.velocity_and_field(time);
        let rises = speed + field * (time - self.emission) > 0.0;
        Return {
            emission: self.emission,
            time,
            number,
            energy: 0.5 * (v[0] * v[0] + v[1] * v[1]),
            backscattered: 0.5 * (drift[0] * drift[0] + drift[1] * drift[1]),
            miss: miss[0].hypot(miss[1]),
            branch: if rises { Branch::Long } else { Branch::Short },
        }
    }
}
