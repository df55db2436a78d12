//! Other model atoms of the same ionization energy: how much of a result is the model's.

use crate::potential::Potential;
use crate::stationary::{Softenable, StationaryError, level, tune_softening};

/// Screening lengths of the soft-core members, bohr.
const SCREENING: [f64; 2] = [20.0, 8.0];
/// Width of the Gaussian well in units of the bound state's decay length 1/√(2 Ip).
const WELL: f64 = 1.0;

/// A model atom beside others of the same ionization energy.
#[derive(Clone, Debug, PartialEq)]
pub struct ModelAtom {
    /// What it is, for people.
    pub name: String,
    /// The potential.
    pub potential: Potential,
}

/// Model atoms whose ground state has the energy -`ionization_energy`, hartree: soft cores with screened tails of 20 and
/// 8 bohr (their softening differs from that of the bare one), a Pöschl–Teller well with one bound state
/// (λ = 1, E = -1/(2w²); Landau, Lifshitz, Quantum Mechanics, §23, problem 5), and a Gaussian well.
///
/// # Errors
/// Where a softening or a depth cannot be found.
pub fn model_atoms(ionization_energy: f64) -> Result<Vec<ModelAtom>, StationaryError> {
    let decay_length = 1.0 / (2.0 * ionization_energy).sqrt();
    let mut atoms = Vec::new();
    for screening_length in SCREENING {
        let open = Softenable::Screened { charge: 1.0, screening_length };
        let softening = tune_softening(&open, 0, -ionization_energy)?;
        let name = format!("soft core screened over {screening_length} bohr");
        atoms.push(ModelAtom { name, potential: open.with_softening(softening) });
    }
    let short = Potential::PoschlTeller { lambda: 1.0, width: decay_length };
    atoms.push(ModelAtom { name: "short range, Poschl-Teller".into(), potential: short });
    let width = WELL * decay_length;
    let depth = depth_of_well(width, ionization_energy)?;
    let well = Potential::GaussianWell { depth, width };
    atoms.push(ModelAtom { name: "short range, Gaussian well".into(), potential: well });
    Ok(atoms)
}

/// Depth at which the ground state of a Gaussian well has the energy -`binding`, by bisection: deeper binds more.
fn depth_of_well(width: f64, binding: f64) -> Result<f64, StationaryError> {
    let bound = |depth: f64| match level(&Potential::GaussianWell { depth, width }, 0) {
        Ok(level) => Ok(-level.energy),
        // So shallow that the level is lost in the tail.
        Err(StationaryError::NoSuchState { .. }) => Ok(0.0),
        Err(other) => Err(other),
    };
    let (mut low, mut high) = (binding, 2.0 * binding);
    while bound(high)? < binding {
        (low, high) = (high, 2.0 * high);
    }
    while high - low > 1e-13 * high {
        let middle = f64::midpoint(low, high);
        if middle <= low || middle >= high {
            break;
        }
        if bound(middle)? < binding { low = middle } else { high = middle }
    }
    Ok(f64::midpoint(low, high))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Argon's 15.7596 eV (NIST, from memory) and hydrogen's half a hartree.
    #[test]
    fn all_of_them_have_the_ionization_energy_asked_for_and_differ() {
        for binding in [15.7596 / crate::units::HARTREE_EV, 0.5] {
            let atoms = model_atoms(binding).unwrap();
            assert_eq!(atoms.len(), 4);
            for atom in &atoms {
                let found = level(&atom.potential, 0).unwrap().energy;
                assert!((found + binding).abs() < 1e-9, "{}: {found}", atom.name);
            }
            let at_origin: Vec<f64> = atoms.iter().map(|atom| atom.potential.value(0.0)).collect();
            for (i, a) in at_origin.iter().enumerate() {
                assert!(at_origin[..i].iter().all(|b| (a - b).abs() > 1e-3), "{at_origin:?}");
            }
        }
    }
}
