//! Strong-field approximation: one bound state, and free electrons on which only the field acts (Keldysh, Sov. Phys. JETP 20, 1307
//! (1965); Lewenstein, Balcou, Ivanov, L'Huillier, Corkum, Phys. Rev. A 49, 2117 (1994)), with the model atom's own matrix
//! elements d(k) = ⟨k|x|n⟩ between its bound state and plane waves.
//!
//! With S_p(t) = ∫((p+A)²/2 + Ip) dt the amplitude of drift momentum p is b_p(t) = ∫E(t') d(p+A(t')) e^{iS_p(t')} dt'. Electrons:
//! -i b_p after the field. Dipole: ⟨x⟩(t) = 2 Re[-i ∫ d*(p+A(t)) e^{-iS_p(t)} b_p(t) dp]. In one dimension the integral over p is
//! done as it stands, which costs momenta × times; [`Stationary`] takes the momentum that returns, in one dimension or two.

mod bare;
mod line;
mod plane;
mod stationary;

pub use bare::{Ground, LineDipole, PlaneDipole};
pub use line::StrongField;
pub use plane::PlaneElectrons;
pub use stationary::{Bare, Round, Stationary, spreading};

use crate::simulate::Schedule;

/// What a model says of the dipole, in the form a run records it.
#[derive(Clone, Debug, PartialEq)]
pub struct DipoleSeries {
    /// Its times.
    pub schedule: Schedule,
    /// ⟨r⟩ at every sample, bohr.
    pub position: Vec<[f64; 2]>,
    /// d²d/dt² = -d²⟨r⟩/dt² at every sample, bohr per a.u. of time squared.
    pub acceleration: Vec<[f64; 2]>,
}

/// Samples before the first and behind the last that the second derivative needs.
const MARGIN: usize = 4;

impl DipoleSeries {
    /// Of ⟨r⟩ at the samples of `schedule` and [`MARGIN`] more at both sides, differentiated to eighth order.
    fn of(schedule: Schedule, padded: &[[f64; 2]]) -> Self {
        assert_eq!(padded.len(), schedule.steps + 1 + 2 * MARGIN, "samples and margins");
        let rate = schedule.time_step.powi(-2);
        let second = |w: &[[f64; 2]], d: usize| {
            let sum: f64 = (1..=MARGIN).map(|m| SECOND[m] * (w[MARGIN - m][d] + w[MARGIN + m][d])).sum();
            -rate * (SECOND[0] * w[MARGIN][d] + sum)
        };
        let acceleration = padded.windows(2 * MARGIN + 1).map(|w| [second(w, 0), second(w, 1)]).collect();
        let position = padded[MARGIN..padded.len() - MARGIN].to_vec();
        Self { schedule, position, acceleration }
    }

    /// The acceleration along x, for [`harmonics`](crate::spectrum::harmonics()).
    pub fn along_x(&self) -> Vec<f64> {
        self.along(0)
    }

    /// The acceleration along axis 0 (x) or 1 (y).
    pub fn along(&self, axis: usize) -> Vec<f64> {
        self.acceleration.iter().map(|a| a[axis]).collect()
    }
}

/// Central second difference of eighth order (Fornberg, Math. Comput. 51, 699 (1988), table 1).
const SECOND: [f64; MARGIN + 1] = [-205.0 / 72.0, 8.0 / 5.0, -1.0 / 5.0, 8.0 / 315.0, -1.0 / 560.0];
