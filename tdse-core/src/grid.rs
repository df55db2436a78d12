//! Uniform periodic grids and their Fourier representation.

use std::f64::consts::PI;
use std::sync::Arc;

use num_complex::Complex;
use rustfft::{Fft, FftPlanner};

/// One Cartesian axis: `points` positions `spacing` apart, placed symmetrically about zero,
/// x_j = (j - (n-1)/2) Δx, periodic with length n Δx. A mirror maps the grid onto itself exactly.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Axis {
    /// Number of points n.
    pub points: usize,
    /// Spacing Δx, bohr.
    pub spacing: f64,
}

impl Axis {
    /// Position of point `j`, bohr.
    pub fn position(&self, j: usize) -> f64 {
        (j as f64 - 0.5 * (self.points as f64 - 1.0)) * self.spacing
    }

    /// All positions, bohr, rising.
    pub fn positions(self) -> impl Iterator<Item = f64> {
        (0..self.points).map(move |j| self.position(j))
    }

    /// Period n Δx, bohr.
    pub fn extent(&self) -> f64 {
        self.points as f64 * self.spacing
    }

    /// Largest momentum π/Δx the grid holds, 1/bohr.
    pub fn largest_momentum(&self) -> f64 {
        PI / self.spacing
    }

    /// Momentum of transform index `m`, 1/bohr, in the order of the transform (0, 1, … , -2, -1).
    pub fn momentum(&self, m: usize) -> f64 {
        let n = self.points;
        let signed = if m < n.div_ceil(2) { m as f64 } else { m as f64 - n as f64 };
        2.0 * PI * signed / self.extent()
    }

    /// All momenta in the order of the transform, 1/bohr.
    pub fn momenta(self) -> impl Iterator<Item = f64> {
        (0..self.points).map(move |m| self.momentum(m))
    }
}

/// A grid in one or two dimensions; arrays over it are flat with shape `[ny, nx]`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Grid {
    /// The x axis, along the field in one dimension.
    pub x: Axis,
    /// The y axis; absent in one dimension.
    pub y: Option<Axis>,
}

impl Axis {
    /// Axis of at least `extent` with a good number of points, see [`good_length`].
    pub fn covering(extent: f64, spacing: f64) -> Self {
        // An extent that is n Δx must not gain a point by rounding.
        Self { points: good_length((extent / spacing * (1.0 - 1e-12)).ceil() as usize), spacing }
    }
}

impl Grid {
    /// One-dimensional grid.
    pub fn line(points: usize, spacing: f64) -> Self {
        Self { x: Axis { points, spacing }, y: None }
    }

    /// Square two-dimensional grid with the same axis both ways.
    pub fn square(points: usize, spacing: f64) -> Self {
        let axis = Axis { points, spacing };
        Self { x: axis, y: Some(axis) }
    }

    /// Grid of at least these extents and exactly these spacings, bohr, in as many dimensions as it has now.
    ///
    /// Axes of a plane have a multiple of 16 points, so that half of it can be computed where a mirror allows that.
    #[must_use]
    pub fn covering(&self, extents: [f64; 2], spacings: [f64; 2]) -> Self {
        let axis = |d: usize| Axis::covering(extents[d], spacings[d]);
        let even = |axis: Axis| Axis { points: axis.points.next_multiple_of(16), ..axis };
        match self.y {
            None => Self { x: axis(0), y: None },
            Some(_) => Self { x: even(axis(0)), y: Some(even(axis(1))) },
        }
    }

    /// Lengths along both axes, bohr; zero along the second in one dimension.
    pub fn extents(&self) -> [f64; 2] {
        [self.x.extent(), self.y.map_or(0.0, |y| y.extent())]
    }

    /// Spacings along both axes, bohr; zero along the second in one dimension.
    pub fn spacings(&self) -> [f64; 2] {
        [self.x.spacing, self.y.map_or(0.0, |y| y.spacing)]
    }

    /// Number of dimensions, 1 or 2.
    pub fn dimensions(&self) -> usize {
        1 + usize::from(self.y.is_some())
    }

    /// Number of points.
    pub fn len(&self) -> usize {
        self.x.points * self.y.map_or(1, |y| y.points)
    }

    /// Whether the grid has no point.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// Volume element, bohr or bohr².
    pub fn cell(&self) -> f64 {
        self.x.spacing * self.y.map_or(1.0, |y| y.spacing)
    }

    /// Largest momentum the grid holds, 1/bohr: in two dimensions that of its corners.
    pub fn largest_momentum(&self) -> f64 {
        self.x.largest_momentum().hypot(self.y.map_or(0.0, |y| y.largest_momentum()))
    }

    /// Largest momentum the grid holds along an axis, 1/bohr.
    pub fn largest_along_axis(&self) -> f64 {
        self.x.largest_momentum().max(self.y.map_or(0.0, |y| y.largest_momentum()))
    }

    /// Positions along y; a single zero in one dimension.
    pub fn y_positions(&self) -> impl Iterator<Item = f64> + use<> {
        let y = self.y;
        (0..y.map_or(1, |y| y.points)).map(move |j| y.map_or(0.0, |y| y.position(j)))
    }
}

/// The smallest length of at least `at_least` that is 2^a 3^b with a ≥ 3 and b ≤ 2: fast to transform, and coarse
/// enough that neighbours in a scan share it.
pub fn good_length(at_least: usize) -> usize {
    let mut best = usize::MAX;
    for odd in [1, 3, 9] {
        let mut n = 8 * odd;
        while n < at_least {
            n *= 2;
        }
        best = best.min(n);
    }
    best
}

/// Forward and inverse transform of one length, unnormalised: forward e^{-ikx}, inverse e^{+ikx}, no factor 1/n.
#[derive(Clone)]
pub struct Transform {
    forward: Arc<dyn Fft<f64>>,
    inverse: Arc<dyn Fft<f64>>,
}

impl Transform {
    /// Plans both directions for `points` points.
    pub fn new(points: usize) -> Self {
        let mut planner = FftPlanner::new();
        Self { forward: planner.plan_fft_forward(points), inverse: planner.plan_fft_inverse(points) }
    }

    /// Scratch of the right length.
    pub fn make_scratch(&self) -> Vec<Complex<f64>> {
        let length = self.forward.get_inplace_scratch_len().max(self.inverse.get_inplace_scratch_len());
        vec![Complex::default(); length]
    }

    /// Forward transform in place.
    ///
    /// # Panics
    /// If `data.len()` is not a multiple of the planned length, or `scratch` is shorter than [`Self::make_scratch`].
    pub fn forward(&self, data: &mut [Complex<f64>], scratch: &mut [Complex<f64>]) {
        self.forward.process_with_scratch(data, scratch);
    }

    /// Inverse transform in place, unnormalised. Panics as [`Self::forward`].
    pub fn inverse(&self, data: &mut [Complex<f64>], scratch: &mut [Complex<f64>]) {
        self.inverse.process_with_scratch(data, scratch);
    }
}

impl std::fmt::Debug for Transform {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "Transform({})", self.forward.len())
    }
}
