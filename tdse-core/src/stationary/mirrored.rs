//! Bound states of any potential on a plane that keeps both mirrors, by parity: no formula, no shooting, the grid alone.
//!
//! The iteration starts from products of states along both axes, in the potential through its lowest point: exact for a
//! separable problem.

use nalgebra::{DMatrix, DVector, SymmetricEigen};

use super::bound::{ITERATIONS, Operator, RESIDUAL, improved};
use super::sector::Sector;
use super::{PlaneState, StationaryError};
use crate::grid::{Axis, Grid};
use crate::potential::PotentialOnGrid;
use crate::problem::{PlaneLabel, Symmetry};

/// Part of the largest |V| by which mirror images may differ: rounding of the caller's formula.
const ROUNDING: f64 = 1e-12;
/// States that are iterated beyond the one wanted, so that none below it is missed, and the rounds they take part in.
const BESIDE: (usize, usize) = (6, 20);

/// The states that `labels` name by parity and number, of the Hamiltonian of a two-dimensional `grid` with a `potential` that keeps
/// both mirrors. Whether a state is bound or only held by the box is for the caller to judge by its energy.
///
/// # Errors
/// [`StationaryError::NoMirror`] where the potential keeps no mirror, [`StationaryError::NoSuchState`] where the grid has fewer
/// states, [`StationaryError::NotConverged`].
///
/// # Panics
/// If the grid has one dimension or odd lengths, the potential another length, or a label names an angular momentum.
pub fn parity_states(
    potential: &PotentialOnGrid,
    grid: &Grid,
    labels: &[PlaneLabel],
) -> Result<Vec<PlaneState>, StationaryError> {
    let axes = [grid.x, grid.y.expect("a plane has two dimensions")];
    assert!(axes.iter().all(|axis| axis.points.is_multiple_of(2)), "even numbers of points");
    assert_eq!(potential.values.len(), grid.len(), "potential and grid have the same length");
    mirrored(&potential.values, axes)?;
    labels.iter().map(|label| parity_state(&potential.values, axes, *label)).collect()
}

/// Says where a mirror is broken.
fn mirrored(values: &[f64], [x, y]: [Axis; 2]) -> Result<(), StationaryError> {
    let largest = values.iter().fold(0.0f64, |most, v| most.max(v.abs()));
    let (nx, ny) = (x.points, y.points);
    let images: [(&'static str, &dyn Fn(usize) -> usize); 2] =
        [("x", &|i| i / nx * nx + nx - 1 - i % nx), ("y", &|i| (ny - 1 - i / nx) * nx + i % nx)];
    for (axis, image) in images {
        let difference = (0..values.len()).map(|i| (values[i] - values[image(i)]).abs()).fold(0.0, f64::max);
        if difference > ROUNDING * largest {
            return Err(StationaryError::NoMirror { axis, difference });
        }
    }
    Ok(())
}

fn parity_state(values: &[f64], axes: [Axis; 2], label: PlaneLabel) -> Result<PlaneState, StationaryError> {
    let Symmetry::Mirror(parity) = label.symmetry else {
        panic!("{label:?} needs a round potential; states of others are named by parity")
    };
    let [nx, ny] = axes.map(|axis| axis.points);
    let sector = Sector::new(axes, parity, |i, j| values[(ny / 2 + j) * nx + nx / 2 + i]);
    let wanted = label.number + 1;
    let guesses = products(&sector, wanted + BESIDE.0);
    if guesses.len() < wanted {
        return Err(StationaryError::NoSuchState { number: label.number, bound: guesses.len() });
    }
    let (mut states, ..) = improved(&sector, guesses, BESIDE.1);
    states.truncate(wanted);
    let (states, energies, reached) = improved(&sector, states, ITERATIONS);
    if reached > sector.accepted() || reached.is_nan() || states.len() < wanted {
        return Err(StationaryError::NotConverged {
            what: "a bound state on the plane",
            reached,
            wanted: RESIDUAL,
            unit: "hartree",
        });
    }
    let psi = &states[label.number];
    let real = sector.normalised(&(psi * outermost(psi)));
    Ok(PlaneState::real(label, energies[label.number], real))
}

/// The `count` products of lowest energy; fewer where the quarter has fewer points.
fn products(sector: &Sector, count: usize) -> Vec<DVector<f64>> {
    let potential = sector.potential();
    let lowest = (0..potential.len()).min_by(|&a, &b| potential[a].total_cmp(&potential[b])).unwrap_or(0);
    let (i, j) = (lowest % potential.nrows(), lowest / potential.nrows());
    let along = [potential.column(j).into_owned(), potential.row(i).transpose()];
    let [x, y] = [0, 1].map(|d| {
        let matrix = sector.kinetic(d) + DMatrix::from_diagonal(&along[d]);
        SymmetricEigen::new(matrix)
    });
    let (kx, ky) = (x.eigenvalues.len(), y.eigenvalues.len());
    let mut pairs: Vec<(usize, usize)> = (0..kx).flat_map(|a| (0..ky).map(move |b| (a, b))).collect();
    let energy = |(a, b): (usize, usize)| x.eigenvalues[a] + y.eigenvalues[b];
    pairs.sort_by(|p, q| energy(*p).total_cmp(&energy(*q)));
    pairs.truncate(count);
    let product = |(a, b): (usize, usize)| {
        let values = x.eigenvectors.column(a) * y.eigenvectors.column(b).transpose();
        DVector::from_column_slice(values.as_slice())
    };
    pairs.into_iter().map(product).collect()
}

/// Sign that makes a state positive far out in the first quadrant.
fn outermost(psi: &DVector<f64>) -> f64 {
    let largest = psi.amax();
    psi.iter().rev().find(|v| v.abs() > 1e-3 * largest).copied().unwrap_or(1.0).signum()
}
