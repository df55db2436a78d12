//! `tdse states --continuum`: scattering states of the model atom, and what one photon does between them and the initial
//! state, as comma-separated values with units in the header line.

use std::fmt::Write as _;

use tdse_core::grid::Axis;
use tdse_core::stationary::{ScatteringStates, bound_states, transition_dipole};
use tdse_core::units::{HARTREE_EV, TIME_FS};

use crate::scan::prepare::{Job, Prepared};

/// Energies listed.
const ENERGIES: usize = 200;

const HEADER: &str = "energy [eV],momentum [hbar/bohr],transmission,reflection,transmission_phase [rad],\
                      reflection_left_phase [rad],reflection_right_phase [rad],delay [as],photon_energy [eV],\
                      ionization_left [bohr^1.5],ionization_left_phase [rad],ionization_right [bohr^1.5],\
                      ionization_right_phase [rad],recombination_left [bohr^1.5],recombination_left_phase [rad],\
                      recombination_right [bohr^1.5],recombination_right_phase [rad],cross_section [bohr^2]";

/// Table for every different atom of a request, up to `highest` hartree.
///
/// # Errors
/// Where an atom has no continuum, or its state does not converge.
pub fn text(prepared: &Prepared, highest: f64) -> Result<String, String> {
    let mut out = String::new();
    let mut seen: Vec<String> = Vec::new();
    for point in &prepared.points {
        let job = &point.job;
        if job.numerics.grid.dimensions() == 2 {
            return Err("--continuum: needs /atom/dimensions 1".into());
        }
        let atom = format!("{:?}", job.problem.potential);
        if seen.contains(&atom) {
            continue;
        }
        seen.push(atom);
        if !point.label.is_empty() {
            let _ = writeln!(out, "# {}", point.label);
        }
        out += &atom_table(job, highest)?;
    }
    Ok(out)
}

/// The atom's states on the grid of its point, from which they decay.
fn atom_table(job: &Job, highest: f64) -> Result<String, String> {
    let (potential, grid) = (&job.problem.potential, job.numerics.grid);
    let number = job.problem.initial.lowest();
    let states = ScatteringStates::new(potential, grid.x).map_err(|error| error.to_string())?;
    let bound = bound_states(potential, &grid, number + 1).map_err(|error| error.to_string())?;
    let mut out = format!(
        "# state {number} at {:.8} eV; phases against exp(+-ikx), in a Coulomb tail against exp(i(k|x| + (Z/k) ln 2k|x|)); \
         left and right: where an ionized electron goes, where the wave of a reflection comes from; recombination: of an \
         electron that moves to the left or right\n{HEADER}\n",
        bound.energies[number] * HARTREE_EV
    );
    for n in 1..=ENERGIES {
        let energy = highest * n as f64 / ENERGIES as f64;
        out += &row(&states, grid.x, (&bound.states[number], bound.energies[number]), energy);
    }
    Ok(out)
}

fn row(states: &ScatteringStates, axis: Axis, (bound, level): (&[f64], f64), energy: f64) -> String {
    let k = (2.0 * energy).sqrt();
    let found = states.amplitudes(k);
    let dipole = transition_dipole(states, axis, bound, k);
    let photon = energy - level;
    let mut cells = vec![
        energy * HARTREE_EV,
        k,
        found.transmission.norm_sqr(),
        found.reflection_left.norm_sqr(),
        found.transmission.arg(),
        found.reflection_left.arg(),
        found.reflection_right.arg(),
        states.delay(k) * TIME_FS * 1e3,
        photon * HARTREE_EV,
    ];
    for matrix_element in dipole.ionization.into_iter().chain(dipole.recombination()) {
        cells.extend([matrix_element.norm(), matrix_element.arg()]);
    }
    cells.push(dipole.cross_section(photon));
    let cells: Vec<String> = cells.into_iter().map(|cell| format!("{cell:.10e}")).collect();
    cells.join(",") + "\n"
}
