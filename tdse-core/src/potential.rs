//! Model atoms: the potential energy of the active electron and its gradient.

mod band;
mod rectangle;

pub use rectangle::{OutsideRectangle, Rectangle};

use std::sync::Arc;

use crate::cubic::Cubic;
use crate::grid::Grid;

/// Potential energy of the active electron, hartree, as a function of r in bohr.
///
/// In two dimensions each of these is round (others are given as [`PotentialOnGrid`]); in one dimension [`Potential::Sampled`] may be asymmetric.
#[derive(Clone, Debug, PartialEq)]
pub enum Potential {
    /// -Z/√(r²+a²) (Javanainen, Eberly, Su, Phys. Rev. A 38, 3430 (1988), eq. 1).
    SoftCoulomb {
        /// Charge Z of the ion.
        charge: f64,
        /// Softening a, bohr.
        softening: f64,
    },
    /// -Z e^{-r/λ}/√(r²+a²).
    Screened {
        /// Charge Z at short range.
        charge: f64,
        /// Softening a, bohr.
        softening: f64,
        /// Screening length λ, bohr.
        screening_length: f64,
    },
    /// -λ(λ+1)/(2w²) sech²(r/w) (Landau, Lifshitz, Quantum Mechanics, §23 problem 5).
    PoschlTeller {
        /// Depth parameter λ.
        lambda: f64,
        /// Width w, bohr.
        width: f64,
    },
    /// -D exp(-r²/(2w²)).
    GaussianWell {
        /// Depth D, hartree.
        depth: f64,
        /// Width w, bohr.
        width: f64,
    },
    /// ½Ω²r².
    Harmonic {
        /// Frequency Ω, hartree.
        frequency: f64,
    },
    /// Values on rising positions, joined by a cubic spline; in two dimensions on rising distances from the centre, from 0 on, joined by
    /// [`Cubic::even`]: with any other slope there they would have a cusp.
    Sampled(Arc<Cubic>),
}

impl Potential {
    /// V and dV/dr at `r`, where r is the signed position in one dimension.
    pub fn value_and_slope(&self, r: f64) -> (f64, f64) {
        match self {
            Self::SoftCoulomb { charge, softening } => {
                let s = r.hypot(*softening);
                (-charge / s, charge * r / (s * s * s))
            }
            Self::Screened { charge, softening, screening_length } => {
                let s = r.hypot(*softening);
                let v = -charge * (-r.abs() / screening_length).exp() / s;
                (v, -v * (r / (s * s) + r.signum() / screening_length))
            }
            Self::PoschlTeller { lambda, width } => {
                let sech = 1.0 / (r / width).cosh();
                let v = -lambda * (lambda + 1.0) / (2.0 * width * width) * sech * sech;
                (v, -2.0 * v * (r / width).tanh() / width)
            }
            Self::GaussianWell { depth, width } => {
                let v = -depth * (-r * r / (2.0 * width * width)).exp();
                (v, -v * r / (width * width))
            }
            Self::Harmonic { frequency } => (0.5 * (frequency * r).powi(2), frequency * frequency * r),
            Self::Sampled(table) => (table.value(r), table.slope(r)),
        }
    }

    /// V at `r`.
    pub fn value(&self, r: f64) -> f64 {
        self.value_and_slope(r).0
    }

    /// Charge seen from far away: V → -Z/r; zero for a short-range potential.
    pub fn far_charge(&self) -> f64 {
        match self {
            Self::SoftCoulomb { charge, .. } => *charge,
            _ => 0.0,
        }
    }

    /// Whether every motion is bound, so that nothing can ionize.
    pub fn is_confining(&self) -> bool {
        matches!(self, Self::Harmonic { .. })
    }

    /// Shortest length over which the potential changes, bohr: what a grid spacing has to resolve.
    pub fn smallest_length(&self) -> f64 {
        match self {
            Self::SoftCoulomb { softening, .. } => *softening,
            Self::Screened { softening, screening_length, .. } => softening.min(*screening_length),
            Self::PoschlTeller { width, .. } | Self::GaussianWell { width, .. } => *width,
            Self::Harmonic { frequency } => frequency.powf(-0.5),
            Self::Sampled(table) => 2.0 * table.spacing(),
        }
    }

    /// Whether V(-r) = V(r).
    pub fn is_even(&self) -> bool {
        !matches!(self, Self::Sampled(_))
    }

    /// Whether it is analytic along the line, so that its momenta die away exponentially.
    pub fn is_smooth(&self) -> bool {
        !matches!(self, Self::Screened { .. } | Self::Sampled(_))
    }

    /// Jump of dV/dr at r = 0, hartree/bohr: zero for a smooth potential.
    pub fn kink(&self) -> f64 {
        match self {
            Self::Screened { charge, softening, screening_length } => {
                2.0 * charge / (softening * screening_length)
            }
            _ => 0.0,
        }
    }

    /// Range of r where the potential is defined, bohr.
    pub fn domain(&self) -> (f64, f64) {
        match self {
            Self::Sampled(table) => table.domain(),
            _ => (f64::NEG_INFINITY, f64::INFINITY),
        }
    }
}

/// Potential and its gradient on the points of a grid: what the propagator needs of an atom.
///
/// A caller of the library may fill it with any potential, from values on a [`Rectangle`] for instance.
#[derive(Clone, Debug, PartialEq)]
pub struct PotentialOnGrid {
    /// V, hartree, length `grid.len()`, x fastest.
    pub values: Vec<f64>,
    /// ∂V/∂x and ∂V/∂y, hartree/bohr, each of length `grid.len()`; the second is empty in one dimension.
    pub gradient: [Vec<f64>; 2],
}

impl PotentialOnGrid {
    /// Samples `potential` on every point of `grid`; along a line, what the grid can hold of it (`band`).
    pub fn sample(potential: &Potential, grid: &Grid) -> Self {
        if grid.y.is_none() && !potential.is_smooth() {
            let [values, slope] = band::within_the_band(potential, grid.x);
            return Self { values, gradient: [slope, Vec::new()] };
        }
        let plane = grid.dimensions() == 2;
        let room = Vec::with_capacity;
        let gradient = [room(grid.len()), room(if plane { grid.len() } else { 0 })];
        let mut on_grid = Self { values: room(grid.len()), gradient };
        for y in grid.y_positions() {
            for x in grid.x.positions() {
                let r = if plane { x.hypot(y) } else { x };
                let (value, slope) = potential.value_and_slope(r);
                on_grid.values.push(value);
                let over_r = if plane && r > 0.0 { slope / r } else { 0.0 };
                on_grid.gradient[0].push(if plane { over_r * x } else { slope });
                if plane {
                    on_grid.gradient[1].push(over_r * y);
                }
            }
        }
        on_grid
    }
}
