//! What collecting leaves uncorrected of a Coulomb tail.

/// What the tail -Z/|x| beyond the absorber still does to collected electrons that quiver in the field.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TailLeft {
    /// Shift that plane waves would have and that is corrected for, Z/R, hartree.
    pub corrected: f64,
    /// Largest mean shift that remains, Zα²/(2R³), hartree.
    pub shift: f64,
    /// Largest amplitude of false sidebands one photon away, relative to the line, Zα/(ωR²).
    pub sideband: f64,
}

/// Estimate of [`TailLeft`] for charge `charge`, an absorber that begins `inner` bohr away, and a field of angular
/// frequency `frequency` and quiver amplitude `quiver` (first terms in α/R of -Z/|x + α(t)|).
pub fn tail_left(charge: f64, inner: f64, frequency: f64, quiver: f64) -> TailLeft {
    TailLeft {
        corrected: charge / inner,
        shift: 0.5 * charge * quiver * quiver / inner.powi(3),
        sideband: charge * quiver / (frequency * inner * inner),
    }
}
