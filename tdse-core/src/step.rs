//! One time step: splitting coefficients, kinetic and local factors, and the moments taken on the way.

mod either;
mod kernel;
mod line;
mod plane;
mod ramp;

pub use either::{Step, StepWorkspace};
pub use kernel::instruction_set;
pub use line::{Line, LineWorkspace};
pub use plane::{Doubled, Doubling, Plane, PlaneWorkspace};
pub(crate) use ramp::{BLOCK, Ramp};

use crate::problem::Scheme;

/// What one step needs of the field.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Drive {
    /// E at the step's start, a.u.
    pub field: [f64; 2],
    /// E in the step's middle, a.u.
    pub middle_field: [f64; 2],
    /// ∫A dt over the first and the second half of the step, a.u.
    pub potential_integral: [[f64; 2]; 2],
    /// ∫A² dt over both halves, a.u.
    pub square_integral: [f64; 2],
}

fn exchanged([x, y]: [f64; 2]) -> [f64; 2] {
    [y, x]
}

impl Drive {
    /// With x and y exchanged.
    pub(crate) fn exchanged(&self) -> Self {
        let [a, b] = self.potential_integral;
        Self {
            field: exchanged(self.field),
            middle_field: exchanged(self.middle_field),
            potential_integral: [exchanged(a), exchanged(b)],
            square_integral: self.square_integral,
        }
    }

    /// The same step run backwards, from where the field is `end`.
    pub(crate) fn reversed(&self, end: [f64; 2]) -> Self {
        let ([a, b], [a2, b2]) = (self.potential_integral, self.square_integral);
        Self {
            field: end,
            middle_field: self.middle_field,
            potential_integral: [b, a].map(|integral| integral.map(|i| -i)),
            square_integral: [-b2, -a2],
        }
    }
}

/// Expectation values at the start of a step, of ψ as it is there.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Moments {
    /// ∫|ψ|².
    pub norm: f64,
    /// ⟨∇V⟩, hartree/bohr.
    pub gradient: [f64; 2],
    /// Part of ∫|ψ|² in the outer blocks of 64 points of the grid: the absorber, or 1/16 of the box at each side without one;
    /// a block at least, from 512 points on.
    pub edge: f64,
    /// Part of ∫|ψ|² in the upper quarter of the momenta the grid holds.
    pub top: f64,
}

/// Fractions of the step: e^{-iw τV} e^{-i…T} [e^{-imτṼ}] e^{-i…T} e^{-iwτV}.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Splitting {
    /// w, of each outer local factor.
    outer: f64,
    /// Of each kinetic factor.
    kinetic: f64,
    /// m, of the local factor in the middle, with gradient correction; none in Strang's splitting.
    middle: Option<f64>,
}

impl Splitting {
    /// Fourth order: Chin, Chen, J. Chem. Phys. 117, 1409 (2002), eq. (2.12), with ṼV = V - (τ²/48)|∇V|²;
    /// second order: Strang, SIAM J. Numer. Anal. 5, 506 (1968).
    fn of(scheme: Scheme) -> Self {
        match scheme {
            Scheme::FourthOrder => Self { outer: 1.0 / 6.0, kinetic: 0.5, middle: Some(2.0 / 3.0) },
            Scheme::Strang => Self { outer: 0.5, kinetic: 1.0, middle: None },
        }
    }
}

/// Largest time step before waves at the top of the momentum grid come back in phase with the bound state after one
/// step, 2π/(k_max²/2 + Ip), a.u. of time.
pub fn resonant_step(largest_momentum: f64, binding_energy: f64) -> f64 {
    2.0 * std::f64::consts::PI / (0.5 * largest_momentum * largest_momentum + binding_energy.max(0.0))
}
