//! `tdse states`: bound states and the tuned softening.

use std::fmt::Write as _;

use tdse_core::potential::Potential;
use tdse_core::stationary::{StationaryError, bound_states, count_below, level, plane_level, plane_states};
use tdse_core::units::HARTREE_EV;

use crate::scan::levels::state_name;
use crate::scan::prepare::{Point, Prepared};
use crate::text::Table;

/// Most levels listed.
const MOST: usize = 24;

/// Text of the bound states of every different atom of a request.
///
/// # Errors
/// Where states on the grid do not converge.
pub fn text(prepared: &Prepared) -> Result<String, StationaryError> {
    let mut out = String::new();
    let mut seen: Vec<(Potential, tdse_core::grid::Grid)> = Vec::new();
    for point in &prepared.points {
        let key = (point.job.problem.potential.clone(), point.job.numerics.grid);
        if !seen.contains(&key) {
            if !seen.is_empty() {
                out.push('\n');
            }
            if !point.label.is_empty() {
                let _ = writeln!(out, "{}", point.label);
            }
            out += &atom(point)?;
            seen.push(key);
        }
    }
    Ok(out)
}

fn atom(point: &Point) -> Result<String, StationaryError> {
    if point.job.numerics.grid.dimensions() == 2 {
        return on_plane(point);
    }
    let (potential, grid) = (&point.job.problem.potential, point.job.numerics.grid);
    let half = 0.5 * grid.x.extent();
    let count = if potential.is_confining() { MOST } else { count_below(potential, 0.0, half).min(MOST) };
    let on_grid = bound_states(potential, &grid, count.max(point.job.states()))?;
    let mut out = softening(potential);
    let mut table = Table::new();
    table.row("state", "energy / eV", "energy / hartree", "on the grid, difference / hartree");
    for (number, energy) in on_grid.energies.iter().enumerate() {
        // A level whose Rydberg orbit is wider than the box is the box's own.
        let free = level(potential, number).ok().filter(|level| level.reach < 4.0 * half);
        let (ev, exact, difference) = match free {
            Some(level) => (
                format!("{:.8}", level.energy * HARTREE_EV),
                format!("{:.12}", level.energy),
                format!("{:+.1e}", energy - level.energy),
            ),
            None => {
                (format!("{:.8}", energy * HARTREE_EV), format!("{energy:.12}"), "squeezed by the box".into())
            }
        };
        table.row(&number.to_string(), ev, &exact, &difference);
    }
    let _ = write!(out, "{table}");
    Ok(out)
}

fn softening(potential: &Potential) -> String {
    match potential {
        Potential::SoftCoulomb { softening, .. } | Potential::Screened { softening, .. } => {
            format!("softening {softening:.12} bohr\n")
        }
        _ => String::new(),
    }
}

/// The states that the run lists, by symmetry.
fn on_plane(point: &Point) -> Result<String, StationaryError> {
    let job = &point.job;
    let (potential, grid) = (&job.problem.potential, job.numerics.grid);
    let mut table = Table::new();
    table.row("state", "energy / eV", "energy / hartree", "on the grid, difference / hartree");
    for state in plane_states(potential, &grid, &job.labels)? {
        let free = plane_level(potential, state.label)?.energy;
        let ev = format!("{:.8}", free * HARTREE_EV);
        let difference = format!("{:+.1e}", state.energy - free);
        table.row(&state_name(state.label), ev, &format!("{free:.12}"), &difference);
    }
    Ok(format!("{}{table}", softening(potential)))
}
