//! The integral over every momentum in one dimension.

use num_complex::Complex;

use super::{DipoleSeries, Ground, LineDipole, MARGIN};
use crate::field::Field;
use crate::model::Motion;
use crate::simulate::Schedule;
use crate::spectrum::ContinuumAmplitude;
use crate::step::{BLOCK, Ramp};

/// Largest phase of a step of the dipole's integral, rad: error of fourth order in it.
pub(super) const PHASE: f64 = 0.4;
/// The same of the electrons' integral, whose integrand vanishes at both ends.
const DIRECT_PHASE: f64 = 0.8;
/// Velocities kept beyond that of the largest energy asked for.
pub(super) const ROOM: f64 = 1.25;
/// Beyond the farthest classical electron, bohr, and velocity by which electrons may be faster: sums over momenta repeat in space, and
/// nothing may come back from a neighbour.
const BEYOND: (f64, f64) = (60.0, 0.5);

/// Plan for one atom in one field.
#[derive(Clone, Debug)]
pub struct StrongField {
    field: Field,
    ionization_energy: f64,
    schedule: Schedule,
    bare: LineDipole,
    /// First drift momentum, in units of the spacing.
    first: i64,
    momenta: usize,
}

impl StrongField {
    /// Plan for photons and electrons up to `largest_energy` hartree, with `trailing_time` a.u. after the field.
    ///
    /// # Panics
    /// If the bound state does not have the length of its axis, or the field is empty.
    pub fn new(ground: &Ground, field: &Field, largest_energy: f64, trailing_time: f64) -> Self {
        let velocity = ROOM * (2.0 * largest_energy.max(1.0)).sqrt();
        let fastest = 0.5 * velocity * velocity + ground.ionization_energy;
        let schedule = Schedule::new(field, PHASE / fastest, trailing_time);
        Self::with_schedule(ground, field, velocity, schedule)
    }

    /// Plan with electrons of velocity up to `velocity`, 1/bohr, at the times of `schedule`.
    ///
    /// # Panics
    /// As [`Self::new`].
    pub fn with_schedule(ground: &Ground, field: &Field, velocity: f64, schedule: Schedule) -> Self {
        let (farthest, strongest) = reach(field, &schedule);
        let beyond = BEYOND.0 + BEYOND.1 * (schedule.end - schedule.start);
        let spacing = 2.0 * std::f64::consts::PI / (farthest + beyond);
        let bare = LineDipole::plane_waves(ground, velocity, spacing);
        let last = (bare.zero as f64 + strongest / spacing).ceil() as i64;
        Self {
            field: field.clone(),
            ionization_energy: ground.ionization_energy,
            schedule,
            bare,
            first: -last,
            momenta: (2 * last + 1) as usize,
        }
    }

    /// Times of the dipole.
    pub fn schedule(&self) -> &Schedule {
        &self.schedule
    }

    /// The dipole.
    pub fn dipole(&self) -> DipoleSeries {
        self.dipole_with(|_| 1.0)
    }

    /// The dipole of an atom whose bound state has probability `survival(t)` left, see
    /// [`Rate::ionization`](crate::model::tunnelling::Rate::ionization).
    pub fn dipole_with(&self, survival: impl Fn(f64) -> f64) -> DipoleSeries {
        let steps = self.schedule.steps + 2 * MARGIN;
        let tau = self.schedule.time_step;
        let start = self.schedule.start - MARGIN as f64 * tau;
        let mut packet = Packet::new(self);
        let mut padded = Vec::with_capacity(steps + 1);
        for n in 0..=steps {
            let t = start + n as f64 * tau;
            let (a, e) = self.field.potential_and_field(t);
            let left = survival(t).max(0.0).sqrt();
            padded.push([packet.sample(self, a[0], e[0] * left, tau) * left, 0.0]);
            let ([first, _], second) = self.field.potential_integrals(t, tau);
            packet.advance(first, second);
        }
        DipoleSeries::of(self.schedule.clone(), &padded)
    }

    /// Amplitudes of the electrons that leave without returning, at `momenta` > 0 in both directions, in the picture of the field-free
    /// electron at t = 0.
    pub fn electrons(&self, momenta: Vec<f64>) -> ContinuumAmplitude {
        let fastest = momenta.iter().fold(0.0, |m: f64, &k| m.max(k)) + reach(&self.field, &self.schedule).1;
        let step = DIRECT_PHASE / (0.5 * fastest * fastest + self.ionization_energy);
        let schedule = Schedule::new(&self.field, step.min(self.schedule.time_step), 0.0);
        // A, E and what the phase grows by to the next sample: the same for every momentum.
        let samples: Vec<[f64; 4]> = schedule
            .times()
            .into_iter()
            .map(|t| {
                let (a, e) = self.field.potential_and_field(t);
                let ([first, _], second) = self.field.potential_integrals(t, schedule.time_step);
                [a[0], e[0], first, second]
            })
            .collect();
        let direct = |p: f64| self.direct(p, &schedule, &samples);
        let (left, right) = momenta.iter().map(|&k| (direct(-k), direct(k))).unzip();
        ContinuumAmplitude { momenta, left, right }
    }

    /// -i b_p after the field, given A, E, ∫A and ∫A² at its samples.
    fn direct(&self, p: f64, schedule: &Schedule, samples: &[[f64; 4]]) -> Complex<f64> {
        let tau = schedule.time_step;
        // The phase is counted from t = 0 as if A were zero before the field.
        let mut phase = (0.5 * p * p + self.ionization_energy) * schedule.start;
        let mut sum: Complex<f64> = Complex::default();
        for &[a, e, first, second] in samples {
            sum += self.bare.at(p + a) * Complex::cis(phase) * e;
            phase += (0.5 * p * p + self.ionization_energy) * tau + p * first + 0.5 * second;
        }
        Complex::new(0.0, -tau) * sum
    }
}

/// Distance from the nucleus of the farthest electron that starts at rest, at the end, bohr; and largest |A|.
fn reach(field: &Field, schedule: &Schedule) -> (f64, f64) {
    let motion = Motion::new(field);
    let alpha_end = motion.integral(schedule.field_end)[0];
    motion.times().iter().zip(motion.samples()).fold((0.0f64, 0.0f64), |(far, strongest), (&t, alpha)| {
        let a = field.vector_potential(t)[0];
        let end = alpha_end - alpha[0] - a * (schedule.end - t);
        (far.max(end.abs()), strongest.max(a.abs()))
    })
}

/// e^{iS} and b of every momentum, and what the next step needs.
struct Packet {
    /// e^{iS}.
    phase: Vec<Complex<f64>>,
    /// b.
    amplitude: Vec<Complex<f64>>,
    /// The integrand at the last three samples, newest first.
    before: [Vec<Complex<f64>>; 3],
    /// e^{i(p²/2 + Ip)τ}.
    free: Vec<Complex<f64>>,
    ramp: Ramp,
    spacing: f64,
    first: f64,
}

impl Packet {
    fn new(plan: &StrongField) -> Self {
        let n = plan.momenta;
        let spacing = plan.bare.spacing;
        let momentum = |j: usize| (plan.first + j as i64) as f64 * spacing;
        let zeros = || vec![Complex::default(); n];
        let free = (0..n).map(|j| {
            let p = momentum(j);
            Complex::cis((0.5 * p * p + plan.ionization_energy) * plan.schedule.time_step)
        });
        Self {
            phase: vec![Complex::new(1.0, 0.0); n],
            amplitude: zeros(),
            before: [zeros(), zeros(), zeros()],
            free: free.collect(),
            ramp: Ramp::new(n),
            spacing,
            first: momentum(0),
        }
    }

    /// Adds the sample of the integrand at vector potential `a` and field `e`, and returns ⟨x⟩ there.
    fn sample(&mut self, plan: &StrongField, a: f64, e: f64, tau: f64) -> f64 {
        self.before.rotate_right(1);
        let [new, one, two] = &mut self.before;
        let shifted = Shifted::new(&plan.bare, plan.first, a);
        let mut sum: Complex<f64> = Complex::default();
        // Where d is zero for this A nothing is added, and nothing comes back.
        for j in shifted.range(self.phase.len()) {
            let phase = self.phase[j];
            let d = shifted.at(j) * phase;
            let f = d * e;
            // Adams–Moulton of fourth order; `new` still holds the oldest sample.
            self.amplitude[j] += (f * 9.0 + one[j] * 19.0 - two[j] * 5.0 + new[j]) * (tau / 24.0);
            new[j] = f;
            sum += d.conj() * self.amplitude[j];
        }
        // 2 Re[-i Σ] = 2 Im Σ
        2.0 * sum.im * self.spacing
    }

    /// Moves e^{iS} on by a step with ∫A and ∫A².
    fn advance(&mut self, first: f64, second: f64) {
        self.ramp.set(self.first * first + 0.5 * second, self.spacing * first);
        let blocks = self.phase.chunks_mut(BLOCK).zip(self.free.chunks(BLOCK));
        for ((phase, free), coarse) in blocks.zip(&self.ramp.coarse) {
            for ((p, f), fine) in phase.iter_mut().zip(free).zip(&self.ramp.fine) {
                *p *= f * (coarse * fine);
            }
        }
    }
}

/// d(p + A) on every drift momentum: the same six weights for all of them.
struct Shifted<'a> {
    values: &'a [Complex<f64>],
    weights: [f64; 6],
    /// Index of the table entry that belongs to drift momentum 0 and weight 0.
    offset: i64,
}

impl<'a> Shifted<'a> {
    fn new(table: &'a LineDipole, first: i64, a: f64) -> Self {
        let (start, weights) = table.stencil(a);
        Self { values: &table.values, weights, offset: first + start + table.zero as i64 }
    }

    /// Momenta whose six entries lie in the table.
    fn range(&self, momenta: usize) -> std::ops::Range<usize> {
        let first = (-self.offset).max(0) as usize;
        let end = (self.values.len() as i64 - 5 - self.offset).clamp(0, momenta as i64) as usize;
        first.min(end)..end
    }

    fn at(&self, j: usize) -> Complex<f64> {
        let i = (j as i64 + self.offset) as usize;
        let [a, b, c, d, e, f] = self.weights;
        let v = &self.values[i..i + 6];
        v[0] * a + v[1] * b + v[2] * c + v[3] * d + v[4] * e + v[5] * f
    }
}
