//! Exact scattering states of a one-dimensional model atom.
//!
//! At momentum k > 0 one solution F of the stationary equation is carried from left to right; F and F* hold everything.
//! With G the outgoing wave at the right (e^{ikx}, or its Coulomb counterpart of unit flux k) and F → e^{ikx} at the left,
//! F → αG + βG* at the right, |α|² - |β|² = 1. The states with incoming-wave boundary condition, which a detector that
//! sees momentum ±k projects on (Breit, Bethe, Phys. Rev. 93, 888 (1954)), are then
//! √2π ψ_k = F/α and √2π ψ_-k = F* - (β*/α) F, with ∫ψ_k* ψ_k' dx = δ(k - k').

mod mesh;

pub use mesh::NoContinuum;
pub(super) use mesh::free_from;

use std::f64::consts::PI;

use num_complex::Complex;

use mesh::mesh_through;

use super::magnus::Interval;
use super::tail::{Tail, Wave};
use crate::grid::Axis;
use crate::potential::Potential;

/// Change of momentum, relative to max(k, 0.1), over which a phase is differentiated.
const DIFFERENCE: f64 = 2e-3;

/// A side of the atom, and the direction that leads there.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// x → -∞, momenta -k.
    Left,
    /// x → +∞, momenta +k.
    Right,
}

impl Side {
    fn sign(self) -> f64 {
        match self {
            Self::Left => -1.0,
            Self::Right => 1.0,
        }
    }
}

/// Amplitudes at one momentum. Phases are those of e^{±ikx}, and in a Coulomb tail of e^{i(k|x| + (Z/k) ln 2k|x|)}.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scattering {
    /// Momentum k > 0, 1/bohr.
    pub momentum: f64,
    /// Transmission amplitude t, the same from both sides.
    pub transmission: Complex<f64>,
    /// Reflection amplitude of a wave that comes from the left.
    pub reflection_left: Complex<f64>,
    /// Reflection amplitude of a wave that comes from the right.
    pub reflection_right: Complex<f64>,
}

/// Scattering states of a model atom on the points of an axis.
#[derive(Clone, Debug)]
pub struct ScatteringStates {
    potential: Potential,
    axis: Axis,
    tail: Tail,
    /// Distances of the left and right matching points from zero, bohr.
    ends: [f64; 2],
    intervals: Vec<Interval>,
    /// Number of intervals to the left of every grid point.
    marks: Vec<usize>,
}

impl ScatteringStates {
    /// Prepares the integration: a mesh that holds every point of `axis` and goes on to where waves are free.
    ///
    /// # Errors
    /// [`NoContinuum`] for a potential without free motion, or a table that ends too early.
    pub fn new(potential: &Potential, axis: Axis) -> Result<Self, NoContinuum> {
        if potential.is_confining() {
            return Err(NoContinuum::Confining);
        }
        let tail = Tail::of(potential);
        let edge = axis.position(axis.points - 1);
        let ends =
            [free_from(potential, tail, Side::Left, edge)?, free_from(potential, tail, Side::Right, edge)?];
        let (intervals, marks) = mesh_through(potential, ends, axis);
        Ok(Self { potential: potential.clone(), axis, tail, ends, intervals, marks })
    }

    /// Transmission and reflection at momentum `k`.
    pub fn amplitudes(&self, k: f64) -> Scattering {
        let (alpha, beta) = self.walk(k, |_, _| {});
        Scattering {
            momentum: k,
            transmission: 1.0 / alpha.conj(),
            reflection_left: -beta / alpha.conj(),
            reflection_right: (beta / alpha).conj(),
        }
    }

    /// Group delay d(arg t)/dE of a transmitted packet against the free one (against the pure Coulomb phase in its
    /// tail), a.u. of time; negative where it arrives early (Wigner, Phys. Rev. 98, 145 (1955)).
    pub fn delay(&self, k: f64) -> f64 {
        let h = (DIFFERENCE * k.max(0.1)).min(0.2 * k);
        let t = |n: f64| self.amplitudes(k + n * h).transmission;
        // Five-point difference; every phase is taken against its mirror, so that none wraps.
        let (near, far) = ((t(1.0) / t(-1.0)).arg(), (t(2.0) / t(-2.0)).arg());
        (8.0 * near - far) / (12.0 * h * k)
    }

    /// ψ_-k and ψ_k on the grid, incoming-wave boundary condition, normalised to δ(k - k'): `[left, right]`.
    pub fn states(&self, k: f64) -> [Vec<Complex<f64>>; 2] {
        let mut solution = Vec::with_capacity(self.marks.len());
        let (alpha, beta) = self.walk(k, |_, f| solution.push(f));
        let scale = 1.0 / (2.0 * PI).sqrt();
        let left = solution.iter().map(|f| (f.conj() - beta.conj() / alpha * f) * scale).collect();
        for f in &mut solution {
            *f = *f / alpha * scale;
        }
        [left, solution]
    }

    /// ⟨ψ_-k|ψ⟩ and ⟨ψ_k|ψ⟩ of a function on the grid: `[left, right]`, without storing a state.
    ///
    /// # Panics
    /// If `psi` does not have the length of the axis.
    pub fn project(&self, psi: &[Complex<f64>], k: f64) -> [Complex<f64>; 2] {
        assert_eq!(psi.len(), self.marks.len(), "wave function and grid have the same length");
        let mut with_conjugate: Complex<f64> = Complex::default();
        let mut with_solution: Complex<f64> = Complex::default();
        let (alpha, beta) = self.walk(k, |j, f| {
            with_conjugate += f.conj() * psi[j];
            with_solution += f * psi[j];
        });
        let scale = self.axis.spacing / (2.0 * PI).sqrt();
        let left = with_solution - beta / alpha.conj() * with_conjugate;
        [left * scale, with_conjugate / alpha.conj() * scale]
    }

    /// The outgoing wave of this side, √2π times normalised, on the outermost `inside` points of the axis there and on
    /// `beyond` points that continue it: from inside to outside.
    pub(crate) fn outgoing_wave(
        &self,
        k: f64,
        side: Side,
        inside: usize,
        beyond: usize,
    ) -> Vec<Complex<f64>> {
        let Wave { value, slope } = self.tail.wave(k, self.ends[usize::from(side == Side::Right)]);
        let edge = self.axis.position(self.axis.points - 1);
        let (points, spacing) = (self.axis.points, self.axis.spacing);
        let outside = |i: usize| side.sign() * (edge + i as f64 * spacing);
        let mut wave = Vec::with_capacity(inside + beyond);
        let mut y = [value, slope * side.sign()];
        let mut at_edge = y;
        let (mut from_left, mut from_right) = (0, self.intervals.len());
        for i in 0..inside {
            match side {
                Side::Left => {
                    carry(&mut y, &self.intervals[from_left..self.marks[i]], k);
                    from_left = self.marks[i];
                }
                Side::Right => {
                    let mark = self.marks[points - 1 - i];
                    carry_back(&mut y, &self.intervals[mark..from_right], k);
                    from_right = mark;
                }
            }
            if i == 0 {
                at_edge = y;
            }
            wave.push(y[0]);
        }
        wave.reverse();
        // Walked outwards, a mirrored interval is the same to either side but for the sign of the slope.
        let mut y = [at_edge[0], at_edge[1] * side.sign()];
        for i in 0..beyond {
            carry(&mut y, &[Interval::new(&self.potential, outside(i), outside(i + 1))], k);
            wave.push(y[0]);
        }
        wave
    }

    /// Carries F from left to right, showing it at every grid point; returns α and β.
    fn walk(&self, k: f64, mut visit: impl FnMut(usize, Complex<f64>)) -> (Complex<f64>, Complex<f64>) {
        assert!(k > 0.0, "scattering states have a momentum k > 0, got {k}");
        let start = self.tail.wave(k, self.ends[0]);
        // The outgoing wave at the left runs to -x; F is its conjugate.
        let mut y = [start.value.conj(), -start.slope.conj()];
        let mut done = 0;
        for (j, &mark) in self.marks.iter().enumerate() {
            carry(&mut y, &self.intervals[done..mark], k);
            done = mark;
            visit(j, y[0]);
        }
        carry(&mut y, &self.intervals[done..], k);
        let Wave { value, slope } = self.tail.wave(k, self.ends[1]);
        let over = Complex::new(0.0, 2.0 * k).inv();
        let alpha = (y[1] * value.conj() - y[0] * slope.conj()) * over;
        let beta = (y[0] * slope - y[1] * value) * over;
        (alpha, beta)
    }
}

/// Carries (ψ, ψ') to the right.
fn carry(y: &mut [Complex<f64>; 2], intervals: &[Interval], k: f64) {
    let energy = 0.5 * k * k;
    for interval in intervals {
        let [[a, b], [c, d]] = interval.transfer(energy);
        *y = [y[0] * a + y[1] * b, y[0] * c + y[1] * d];
    }
}

/// Carries (ψ, ψ') to the left: the inverse of a matrix of determinant 1.
fn carry_back(y: &mut [Complex<f64>; 2], intervals: &[Interval], k: f64) {
    let energy = 0.5 * k * k;
    for interval in intervals.iter().rev() {
        let [[a, b], [c, d]] = interval.transfer(energy);
        *y = [y[0] * d - y[1] * b, y[1] * a - y[0] * c];
    }
}
