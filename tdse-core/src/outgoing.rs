//! Amplitude that the absorber takes, collected coherently at final momenta instead of being lost.
//!
//! With H - iW the amplitude ⟨χ_k(t)|ψ(t)⟩ falls by ⟨χ_k|Wψ⟩ per unit of time, for any χ_k that solves the equation
//! without W. What was taken and what is left in the box then add up to ⟨χ_k(T)|ψ(T)⟩ as if nothing had been taken.
//! Out at the absorber the electron is free but for the tail and the field, so χ_k is a Volkov state (Volkov, Z. Phys. 94,
//! 250 (1935)) built on the atom's own scattering state: with A and its integral α both counted from their last values,
//! χ_k = e^{iAx} ψ_k(x - α) e^{-i(k²t + ∫A²)/2}, the quivering electron (Kramers' frame) in the tail it sees on average.
//! Built on plane waves instead, electrons would appear Z/R too fast; what remains here is estimated by [`tail_left`].
//! (The sum is written here for this purpose; its check is the projection in a box that nothing leaves.)
//!
//! The sum over steps is smooth: what the absorber overlaps with at momentum k changes at frequencies below k²/2. It is
//! taken every few steps, by a trapezoid whose end is corrected to sixth order.

mod chirp;
mod motion;
mod plane;
mod tail;

pub(crate) use chirp::sum_length;
pub use motion::Motion;
pub use plane::{MapCollector, MapRange, MapScratch, MomentumMap, map_interval};
pub use tail::{TailLeft, tail_left};

use std::f64::consts::PI;

use num_complex::Complex;

use crate::absorber;
use crate::grid::{Axis, Transform, good_length};
use crate::stationary::{Scattering, ScatteringStates, Side};

/// Time between two samples, in units of 2/k_max², the inverse of the largest energy (tried: at twice this, heights at
/// the upper end of the energies asked for err by half a percent).
const SAMPLING: f64 = 2.0;
/// First weights of Gregory's rule of sixth order (textbook; the test below is that it is exact to degree five).
const GREGORY: [f64; 5] = [95.0 / 288.0, 317.0 / 240.0, 23.0 / 30.0, 793.0 / 720.0, 157.0 / 160.0];

/// Steps between two samples where `largest` is the largest momentum, 1/bohr.
pub fn sampling_interval(largest: f64, time_step: f64) -> usize {
    (SAMPLING * 2.0 / (largest * largest) / time_step).floor().max(1.0) as usize
}

/// What the absorber is, in space and per step.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Edges {
    /// The axis.
    pub axis: Axis,
    /// Absorber's width per side, bohr.
    pub width: f64,
    /// Time step, a.u.
    pub time_step: f64,
}

/// Amplitude collected so far: plain arrays, one entry per momentum of the [`Collector`].
#[derive(Clone, Debug, PartialEq, Default)]
pub struct Outgoing {
    /// At momentum -k, bohr^{1/2}.
    pub left: Vec<Complex<f64>>,
    /// At momentum +k, bohr^{1/2}.
    pub right: Vec<Complex<f64>>,
    /// In two dimensions instead: the map of a [`MapCollector`], shape `[k_y, k_x]`, bohr.
    pub map: Vec<Complex<f64>>,
}

/// Scratch of [`Collector::collect`]; holds nothing between calls.
#[derive(Clone, Debug, Default)]
pub struct CollectorScratch {
    taken: Vec<Complex<f64>>,
    transform: Vec<Complex<f64>>,
}

/// Everything about collecting that is known before a run.
#[derive(Clone, Debug)]
pub struct Collector {
    momenta: Vec<f64>,
    scattering: Vec<Scattering>,
    /// Outgoing waves times Δx/√2π at the left and the right, flat `[momentum, point]`, points from inside to outside.
    waves: [Vec<Complex<f64>>; 2],
    /// Points per side the waves are known on: the absorber, and as far to both of its sides as the electron quivers.
    count: usize,
    /// Those of them that lie beyond the axis.
    beyond: usize,
    axis: Axis,
    /// The axis with `beyond` points, and what makes it a good length, added.
    padded: Axis,
    transform: Transform,
    /// 1 - e^{-τW} on the axis.
    taken: Vec<f64>,
    /// Largest displacement that is taken as a shift in space, bohr.
    largest_shift: f64,
    motion: Vec<Motion>,
    interval: usize,
}

impl Collector {
    /// Collector at `momenta` for an absorber; `motion` has one entry per sample of the run, the start included.
    ///
    /// # Panics
    /// If `motion` or `momenta` is empty, or a momentum is not positive.
    pub fn new(edges: Edges, states: &ScatteringStates, momenta: Vec<f64>, motion: Vec<Motion>) -> Self {
        assert!(!motion.is_empty(), "a run has at least one sample");
        let Edges { axis, width, time_step } = edges;
        let taken = absorber::strength(axis, width).iter().map(|w| -(-time_step * w).exp_m1()).collect();
        let largest_shift = 0.5 * (0.5 * axis.extent() - width);
        let farthest = motion.iter().map(|m| m.displacement.abs()).fold(0.0, f64::max).min(largest_shift);
        let beyond = (farthest / axis.spacing).ceil() as usize + 1;
        let inside = ((width / axis.spacing).ceil() as usize + beyond).min(axis.points / 2);
        let padded = Axis { points: good_length(axis.points + 2 * beyond), ..axis };
        let scale = axis.spacing / (2.0 * PI).sqrt();
        let waves = [Side::Left, Side::Right].map(|side| {
            let wave = |&k: &f64| states.outgoing_wave(k, side, inside, beyond);
            momenta.iter().flat_map(wave).map(|g| g * scale).collect()
        });
        let largest = momenta.iter().copied().fold(0.0, f64::max);
        assert!(largest > 0.0, "momenta to collect at are positive");
        let interval = sampling_interval(largest, time_step);
        let scattering = momenta.iter().map(|&k| states.amplitudes(k)).collect();
        Self {
            momenta,
            scattering,
            waves,
            count: inside + beyond,
            beyond,
            axis,
            padded,
            transform: Transform::new(padded.points),
            taken,
            largest_shift,
            motion,
            interval,
        }
    }

    /// Momenta k > 0 at which amplitude is collected, in both directions, 1/bohr.
    pub fn momenta(&self) -> &[f64] {
        &self.momenta
    }

    /// Steps between two samples.
    pub fn interval(&self) -> usize {
        self.interval
    }

    /// Nothing collected yet.
    pub fn start(&self) -> Outgoing {
        let zero = vec![Complex::default(); self.momenta.len()];
        Outgoing { left: zero.clone(), right: zero, map: Vec::new() }
    }

    /// Scratch for [`Self::collect`].
    pub fn make_scratch(&self) -> CollectorScratch {
        CollectorScratch {
            taken: vec![Complex::default(); self.padded.points],
            transform: self.transform.make_scratch(),
        }
    }

    /// Whether a sample is due at `step`. Samples are counted from the end, where there is something to take.
    pub fn is_due(&self, step: usize) -> bool {
        (self.motion.len() - 1 - step).is_multiple_of(self.interval)
    }

    /// Phase at the end of the run: what the amplitude left in the box at momentum ±`k` is multiplied with.
    pub fn final_phase(&self, k: f64) -> Complex<f64> {
        self.motion[self.motion.len() - 1].phase(k)
    }

    /// Adds what the absorber takes around `step`, where the wave function in length gauge is `psi`.
    ///
    /// # Panics
    /// If `psi` does not have the length of the axis, or `step` is beyond the run.
    pub fn collect(
        &self,
        out: &mut Outgoing,
        psi: &[Complex<f64>],
        step: usize,
        scratch: &mut CollectorScratch,
    ) {
        assert_eq!(psi.len(), self.axis.points, "wave function and axis have the same length");
        let motion = self.motion[step];
        let weight = self.weight(self.motion.len() - 1 - step);
        let shift = motion.displacement.clamp(-self.largest_shift, self.largest_shift);
        let drift = motion.displacement - shift;
        scratch.taken.fill(Complex::default());
        let on_axis = &mut scratch.taken[self.beyond..];
        for (((y, p), part), x) in on_axis.iter_mut().zip(psi).zip(&self.taken).zip(self.axis.positions()) {
            if *part > 0.0 {
                *y = p * Complex::from_polar(part * weight, -motion.potential * x);
            }
        }
        self.shift(scratch, shift);
        let half = self.axis.points / 2 + self.beyond;
        let (left, right) = scratch.taken.split_at_mut(half);
        let left = &mut left[..self.count];
        left.reverse();
        let end = self.axis.points + 2 * self.beyond - half;
        let right = &right[end - self.count..end];
        for (n, scattering) in self.scattering.iter().enumerate() {
            let wave = n * self.count..(n + 1) * self.count;
            let at_left = overlaps(&self.waves[0][wave.clone()], left);
            let at_right = overlaps(&self.waves[1][wave], right);
            let k = scattering.momentum;
            let phase = motion.phase(k);
            let [backward, forward] = [-k, k].map(|p| phase * Complex::cis(p * drift));
            // What still moves inwards meets the atom: it is transmitted or reflected.
            let (from_left, from_right) = (at_left.inward * forward, at_right.inward * backward);
            let t = scattering.transmission;
            out.left[n] +=
                at_left.outward * backward + scattering.reflection_left * from_left + t * from_right;
            out.right[n] +=
                at_right.outward * forward + scattering.reflection_right * from_right + t * from_left;
        }
    }

    /// Turns y(x) into y(x + `shift`).
    fn shift(&self, scratch: &mut CollectorScratch, shift: f64) {
        let scale = 1.0 / self.padded.points as f64;
        self.transform.forward(&mut scratch.taken, &mut scratch.transform);
        for (y, k) in scratch.taken.iter_mut().zip(self.padded.momenta()) {
            *y *= Complex::from_polar(scale, k * shift);
        }
        self.transform.inverse(&mut scratch.taken, &mut scratch.transform);
    }

    /// Weight of a sample this many steps before the end, in steps. The mask acts once per step, at its start, so the
    /// last sample loses the half of one step.
    fn weight(&self, before_end: usize) -> f64 {
        let gregory = GREGORY.get(before_end / self.interval).copied().unwrap_or(1.0);
        gregory * self.interval as f64 - if before_end == 0 { 0.5 } else { 0.0 }
    }
}

struct Overlaps {
    outward: Complex<f64>,
    inward: Complex<f64>,
}

/// ⟨g|y⟩ and ⟨g*|y⟩, from the four real sums both are made of.
fn overlaps(wave: &[Complex<f64>], y: &[Complex<f64>]) -> Overlaps {
    let mut sums = [[0.0f64; 4]; 4];
    for (g, y) in wave.chunks(4).zip(y.chunks(4)) {
        for ((sum, g), y) in sums.iter_mut().zip(g).zip(y) {
            sum[0] += g.re * y.re;
            sum[1] += g.im * y.im;
            sum[2] += g.re * y.im;
            sum[3] += g.im * y.re;
        }
    }
    let [a, b, c, d] = [0, 1, 2, 3].map(|i| sums.iter().map(|s| s[i]).sum::<f64>());
    Overlaps { outward: Complex::new(a + b, c - d), inward: Complex::new(a - b, c + d) }
}

#[cfg(test)]
mod tests {
    use super::GREGORY;

    /// ∫₀^L x^p dx = L^{p+1}/(p+1), with both ends corrected.
    #[test]
    fn end_correction_is_exact_to_degree_five() {
        let last = 20;
        let weight = |n: usize| GREGORY.get(n.min(last - n)).copied().unwrap_or(1.0);
        for degree in 0..6 {
            let sum: f64 = (0..=last).map(|n| weight(n) * (n as f64).powi(degree)).sum();
            let exact = (last as f64).powi(degree + 1) / f64::from(degree + 1);
            assert!((sum / exact - 1.0).abs() < 1e-14, "degree {degree}: {sum} against {exact}");
        }
    }
}
