//! Momentum map in two dimensions: what the absorber takes, collected coherently in Volkov states.
//!
//! As in one dimension ⟨χ_k|ψ⟩ falls by ⟨χ_k|Wψ⟩ per unit of time, here with plane Volkov states
//! χ_k = e^{i(k+A)·r} e^{-i∫(k+A)²/2}/2π (Volkov, Z. Phys. 94, 250 (1935)), A counted from its last value. What is still
//! inside at the end flies on until it is out: the run is as long as the slowest electrons of interest need.
//!
//! A long tail beyond the absorber shifts no electron: where the absorber takes it, it is faster than it ends, but the sum over
//! time keeps what turns like e^{-ik²t/2}, and that is its whole energy, the tail's included. What plane waves err there is
//! the height (`tests/plane_tail.rs`).

use std::f64::consts::{PI, SQRT_2};

use num_complex::Complex;

use super::chirp::MomentumSum;
use super::{GREGORY, sampling_interval};
use crate::absorber;
use crate::grid::Grid;
use crate::problem::Numerics;
use crate::step::Drive;

type C = Complex<f64>;

/// Where the map is taken.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MapRange {
    /// Largest momentum along x and along y, 1/bohr.
    pub largest: f64,
    /// Distance of neighbouring momenta along either axis, 1/bohr.
    pub spacing: f64,
}

impl MapRange {
    /// Momenta to either side of zero, along either axis.
    pub fn last(&self) -> usize {
        (self.largest / self.spacing * (1.0 + 1e-12)).floor() as usize
    }

    /// Momenta along either axis, rising, 1/bohr.
    pub fn momenta(&self) -> Vec<f64> {
        let last = self.last();
        (0..=2 * last).map(|j| (j as f64 - last as f64) * self.spacing).collect()
    }
}

/// Steps between two samples of a map up to `largest` along both axes, 1/bohr: its corners hold twice that energy.
pub fn map_interval(largest: f64, time_step: f64) -> usize {
    sampling_interval(largest * SQRT_2, time_step)
}

/// Everything about the map that is known before a run.
#[derive(Clone, Debug)]
pub struct MapCollector {
    grid: Grid,
    /// Sums over x and over y.
    sums: [MomentumSum; 2],
    /// Momenta of both axes, rising, 1/bohr.
    momenta: [Vec<f64>; 2],
    /// 1 - e^{-τW}, shape of the grid.
    taken: Vec<f64>,
    motion: Vec<PlaneMotion>,
    interval: usize,
}

/// Scratch of [`MapCollector::collect`]; holds nothing between calls.
#[derive(Clone, Debug, Default)]
pub struct MapScratch {
    line: Vec<C>,
    kick: Vec<C>,
    turned: Vec<C>,
    fft: Vec<C>,
    phases: [Vec<C>; 2],
}

/// A free electron's motion up to one sample, A counted from its last value, a.u.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
struct PlaneMotion {
    time: f64,
    potential: [f64; 2],
    displacement: [f64; 2],
    square: f64,
}

impl PlaneMotion {
    fn samples(drives: &[Drive], potential: &[[f64; 2]], time_step: f64) -> Vec<Self> {
        let last = potential.last().copied().unwrap_or_default();
        let mut now = Self::default();
        let mut motion = Vec::with_capacity(drives.len());
        for (drive, a) in drives.iter().zip(potential) {
            motion.push(Self { potential: [a[0] - last[0], a[1] - last[1]], ..now });
            now.time += time_step;
            now.square += drive.square_integral[0] + drive.square_integral[1];
            for (d, last) in last.into_iter().enumerate() {
                let first = drive.potential_integral[0][d] + drive.potential_integral[1][d];
                now.displacement[d] += first - last * time_step;
                now.square += last * (last * time_step - 2.0 * first);
            }
        }
        motion
    }
}

impl MapCollector {
    /// Collector for the absorber of `numerics`; `drives` and `potential` have one entry per sample of the run.
    ///
    /// # Panics
    /// If `numerics` has no absorber or one dimension, or the range is empty or beyond what the grid holds.
    pub fn new(numerics: &Numerics, range: MapRange, drives: &[Drive], potential: &[[f64; 2]]) -> Self {
        assert!(numerics.absorber.width() > 0.0, "only an absorber takes anything");
        assert!(range.spacing > 0.0 && range.largest >= range.spacing, "momenta to collect at");
        let grid = numerics.grid;
        let axes = [grid.x, grid.y.expect("a plane has two dimensions")];
        let momenta = range.momenta();
        let held = axes[0].largest_momentum().min(axes[1].largest_momentum());
        let largest = momenta[2 * range.last()];
        assert!(largest <= held * (1.0 + 1e-12), "{largest} of the {held} / bohr that the grid holds");
        let tau = numerics.time_step;
        let taken =
            absorber::on_grid(&grid, numerics.absorber).iter().map(|w| -(-tau * w).exp_m1()).collect();
        Self {
            sums: axes.map(|axis| MomentumSum::new(axis, range.last(), range.spacing)),
            interval: map_interval(range.largest, tau),
            motion: PlaneMotion::samples(drives, potential, tau),
            grid,
            momenta: [momenta.clone(), momenta],
            taken,
        }
    }

    /// Momenta of the map along x and y, rising, 1/bohr.
    pub fn momenta(&self) -> &[Vec<f64>; 2] {
        &self.momenta
    }

    /// Steps between two samples.
    pub fn interval(&self) -> usize {
        self.interval
    }

    /// An empty map, shape `[k_y, k_x]`, amplitudes in bohr.
    pub fn start(&self) -> Vec<C> {
        vec![C::default(); self.momenta[0].len() * self.momenta[1].len()]
    }

    /// Scratch for [`Self::collect`].
    pub fn make_scratch(&self) -> MapScratch {
        let longest = |length: fn(&MomentumSum) -> usize| self.sums.iter().map(length).max().unwrap_or(0);
        let rows = self.grid.y.map_or(1, |y| y.points);
        MapScratch {
            line: vec![C::default(); longest(MomentumSum::length)],
            kick: vec![C::default(); self.grid.x.points],
            turned: vec![C::default(); self.momenta[0].len() * rows],
            fft: vec![C::default(); longest(|sum| sum.make_scratch().len())],
            phases: self.momenta.each_ref().map(|k| vec![C::default(); k.len()]),
        }
    }

    /// Whether a sample is due at `step`; counted from the end.
    pub fn is_due(&self, step: usize) -> bool {
        (self.motion.len() - 1 - step).is_multiple_of(self.interval)
    }

    /// Adds what the absorber takes around `step`; `row` fills in row j of the wave function in length gauge.
    ///
    /// # Panics
    /// If `map` is not one of this collector, or `step` is beyond the run.
    pub fn collect(
        &self,
        map: &mut [C],
        row: impl Fn(usize, &mut [C]),
        step: usize,
        scratch: &mut MapScratch,
    ) {
        let [kx, ky] = &self.momenta;
        assert_eq!(map.len(), kx.len() * ky.len(), "map and collector have the same shape");
        let (motion, weight) = (self.motion[step], self.weight(self.motion.len() - 1 - step));
        let (nx, rows) = (self.grid.x.points, self.grid.y.map_or(1, |y| y.points));
        let MapScratch { line, kick, turned, fft, phases } = scratch;
        for (kick, x) in kick.iter_mut().zip(self.grid.x.positions()) {
            *kick = C::cis(-motion.potential[0] * x);
        }
        for (j, y) in self.grid.y_positions().enumerate() {
            row(j, &mut line[..nx]);
            let taken = &self.taken[j * nx..(j + 1) * nx];
            let turn = C::from_polar(weight, -motion.potential[1] * y);
            for ((p, t), kick) in line.iter_mut().zip(taken).zip(&*kick) {
                *p *= turn * kick * t;
            }
            for (i, p) in self.sums[0].evaluate(line, fft).enumerate() {
                turned[i * rows + j] = p;
            }
        }
        for (d, phases) in phases.iter_mut().enumerate() {
            for (phase, k) in phases.iter_mut().zip(&self.momenta[d]) {
                *phase = C::cis(0.5 * k * k * motion.time + k * motion.displacement[d]);
            }
        }
        let scale = C::from_polar(self.grid.cell() / (2.0 * PI), 0.5 * motion.square);
        for (i, column) in turned.chunks(rows).enumerate() {
            line[..rows].copy_from_slice(column);
            for ((j, p), phase) in self.sums[1].evaluate(line, fft).enumerate().zip(&phases[1]) {
                map[j * kx.len() + i] += p * phase * phases[0][i] * scale;
            }
        }
    }

    /// Weight of a sample this many steps before the end, in steps; as in one dimension.
    fn weight(&self, before_end: usize) -> f64 {
        let gregory = GREGORY.get(before_end / self.interval).copied().unwrap_or(1.0);
        gregory * self.interval as f64 - if before_end == 0 { 0.5 } else { 0.0 }
    }
}

/// Density |a(k)|² of free electrons over a grid of momenta, ∫|a|² dk = probability.
#[derive(Clone, Debug, PartialEq)]
pub struct MomentumMap {
    /// Uniform, rising momenta along x and y, 1/bohr.
    pub momenta: [Vec<f64>; 2],
    /// |a|², bohr², shape `[k_y, k_x]`.
    pub density: Vec<f64>,
}

impl MomentumMap {
    /// Map of collected amplitudes.
    pub fn new(collector: &MapCollector, amplitudes: &[C]) -> Self {
        let density = amplitudes.iter().map(C::norm_sqr).collect();
        Self { momenta: collector.momenta.clone(), density }
    }

    fn spacing(&self) -> [f64; 2] {
        self.momenta.each_ref().map(|k| k[1] - k[0])
    }

    /// ∫|a|² dk over the map.
    pub fn probability(&self) -> f64 {
        let [dx, dy] = self.spacing();
        self.density.iter().sum::<f64>() * dx * dy
    }

    /// Density at momentum (`k`, `angle`), by cubic interpolation along both axes, not below zero; zero outside.
    pub fn at(&self, k: f64, angle: f64) -> f64 {
        let (sin, cos) = angle.sin_cos();
        let place = [(k * cos, 0), (k * sin, 1)].map(|(k, d)| {
            let u = (k - self.momenta[d][0]) / self.spacing()[d];
            (u.floor() as i64, u - u.floor())
        });
        let columns = self.momenta[0].len() as i64;
        let inside = |(i, _): (i64, f64), d: usize| i >= 1 && i + 2 < self.momenta[d].len() as i64;
        if !inside(place[0], 0) || !inside(place[1], 1) {
            return 0.0;
        }
        let [wx, wy] = place.map(|(_, t)| cubic_weights(t));
        let mut sum = 0.0;
        for (b, wy) in wy.iter().enumerate() {
            for (a, wx) in wx.iter().enumerate() {
                let (i, j) = (place[0].0 - 1 + a as i64, place[1].0 - 1 + b as i64);
                sum += wx * wy * self.density[(j * columns + i) as usize];
            }
        }
        sum.max(0.0)
    }

    /// dP/dE = ∮|a|² dθ at every energy, 1/hartree.
    pub fn energy_spectrum(&self, energies: &[f64]) -> Vec<f64> {
        let spacing = self.spacing()[0].min(self.spacing()[1]);
        energies
            .iter()
            .map(|e| {
                let k = (2.0 * e).sqrt();
                let count = (4.0 * PI * k / spacing).ceil().max(16.0);
                let angle = |n: usize| 2.0 * PI * n as f64 / count;
                (0..count as usize).map(|n| self.at(k, angle(n))).sum::<f64>() * 2.0 * PI / count
            })
            .collect()
    }

    /// dP/dθ at every angle to x, of electrons between two energies, 1/rad.
    pub fn angular_distribution(&self, angles: &[f64], energies: [f64; 2]) -> Vec<f64> {
        let [first, last] = energies.map(|e| (2.0 * e).sqrt());
        let spacing = self.spacing()[0].min(self.spacing()[1]);
        let count = (2.0 * (last - first) / spacing).ceil().max(8.0);
        let h = (last - first) / count;
        let radial = |angle: f64| {
            let at = |n: usize| first + (n as f64 + 0.5) * h;
            (0..count as usize).map(|n| self.at(at(n), angle) * at(n)).sum::<f64>() * h
        };
        angles.iter().map(|&angle| radial(angle)).collect()
    }
}

/// Lagrange weights of the points at -1, 0, 1, 2.
fn cubic_weights(t: f64) -> [f64; 4] {
    [
        -t * (t - 1.0) * (t - 2.0) / 6.0,
        (t + 1.0) * (t - 1.0) * (t - 2.0) / 2.0,
        -(t + 1.0) * t * (t - 2.0) / 2.0,
        (t + 1.0) * t * (t - 1.0) / 6.0,
    ]
}
