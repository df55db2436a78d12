//! Other model atoms of the same ionization energy: how much of a result is the model's.

use crate::potential::Potential;
use crate::stationary::{
    Softenable, StationaryError, level, radial_level, tune_radial_softening, tune_softening,
};

/// Screening lengths of the soft-core members, bohr.
const SCREENING: [f64; 2] = [20.0, 8.0];
/// Width of the short-range wells in units of the bound state's decay length 1/√(2 Ip).
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
    let tune = |open: &Softenable| tune_softening(open, 0, -ionization_energy);
    let ground = |potential: &Potential| Ok(level(potential, 0)?.energy);
    let width = WELL * decay_length(ionization_energy);
    let short = Potential::PoschlTeller { lambda: 1.0, width };
    let well = deepened(|depth| Potential::GaussianWell { depth, width }, ionization_energy, ground)?;
    named(tune, [short, well])
}

/// The same in two dimensions, where the energies of both wells have no closed form: they are as wide as along the line, and
/// as deep as the ionization energy wants.
///
/// # Errors
/// As [`model_atoms`].
pub fn plane_model_atoms(ionization_energy: f64) -> Result<Vec<ModelAtom>, StationaryError> {
    let tune = |open: &Softenable| tune_radial_softening(open, 0, 0, -ionization_energy);
    let ground = |potential: &Potential| Ok(radial_level(potential, 0, 0)?.energy);
    let width = WELL * decay_length(ionization_energy);
    // λ(λ+1)/(2w²) is the depth.
    let lambda = |depth: f64| 0.5 * ((1.0 + 8.0 * width * width * depth).sqrt() - 1.0);
    let short = |depth| Potential::PoschlTeller { lambda: lambda(depth), width };
    let short = deepened(short, ionization_energy, ground)?;
    let well = deepened(|depth| Potential::GaussianWell { depth, width }, ionization_energy, ground)?;
    named(tune, [short, well])
}

fn decay_length(ionization_energy: f64) -> f64 {
    1.0 / (2.0 * ionization_energy).sqrt()
}

/// The soft cores that `tune` softens, and a Pöschl–Teller and a Gaussian well.
fn named(
    tune: impl Fn(&Softenable) -> Result<f64, StationaryError>,
    [short, well]: [Potential; 2],
) -> Result<Vec<ModelAtom>, StationaryError> {
    let mut atoms = Vec::new();
    for screening_length in SCREENING {
        let open = Softenable::Screened { charge: 1.0, screening_length };
        let name = format!("soft core screened over {screening_length} bohr");
        atoms.push(ModelAtom { name, potential: open.with_softening(tune(&open)?) });
    }
    atoms.push(ModelAtom { name: "short range, Poschl-Teller".into(), potential: short });
    atoms.push(ModelAtom { name: "short range, Gaussian well".into(), potential: well });
    Ok(atoms)
}

/// The well of a depth at which its ground state has the energy -`binding`, by bisection: deeper binds more.
fn deepened(
    well: impl Fn(f64) -> Potential,
    binding: f64,
    ground: impl Fn(&Potential) -> Result<f64, StationaryError>,
) -> Result<Potential, StationaryError> {
    let bound = |depth: f64| match ground(&well(depth)) {
        Ok(energy) => Ok(-energy),
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
    Ok(well(f64::midpoint(low, high)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::grid::Grid;
    use crate::problem::{PlaneLabel, Symmetry};
    use crate::stationary::plane_states;

    /// Argon's 15.7596 eV (NIST, from memory) and hydrogen's half a hartree.
    const BINDING: [f64; 2] = [15.7596 / crate::units::HARTREE_EV, 0.5];

    fn differ(atoms: &[ModelAtom]) {
        assert_eq!(atoms.len(), 4);
        let at_origin: Vec<f64> = atoms.iter().map(|atom| atom.potential.value(0.0)).collect();
        for (i, a) in at_origin.iter().enumerate() {
            assert!(at_origin[..i].iter().all(|b| (a - b).abs() > 1e-3), "{at_origin:?}");
        }
    }

    #[test]
    fn all_of_them_have_the_ionization_energy_asked_for_and_differ() {
        for binding in BINDING {
            let atoms = model_atoms(binding).unwrap();
            for atom in &atoms {
                let found = level(&atom.potential, 0).unwrap().energy;
                assert!((found + binding).abs() < 1e-9, "{}: {found}", atom.name);
            }
            differ(&atoms);
        }
    }

    /// The grid knows nothing of the shooting they were tuned by. The wells are smooth; what the kink of a screened atom costs
    /// there falls with the square of the spacing at least.
    #[test]
    fn those_of_the_plane_have_it_on_a_grid_too() {
        let lowest = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };
        for binding in BINDING {
            let atoms = plane_model_atoms(binding).unwrap();
            for atom in &atoms {
                let error = |points: usize, spacing: f64| {
                    let grid = Grid::square(points, spacing);
                    let states = plane_states(&atom.potential, &grid, &[lowest]).unwrap();
                    (states[0].energy + binding).abs()
                };
                let (coarse, fine) = (error(160, 0.25), error(320, 0.125));
                println!("{:?}: {coarse:.1e}, {fine:.1e}", atom.potential);
                let held = if atom.potential.is_smooth() { 1e-9 } else { 0.25 * coarse };
                assert!(coarse < 1e-4 && fine < held, "{}: {coarse:e}, {fine:e}", atom.name);
            }
            differ(&atoms);
        }
    }
}
