//! Bound states of the Hamiltonian as the grid represents it: what a run starts from and is projected on.

use nalgebra::{DMatrix, DVector, SymmetricEigen};
use num_complex::Complex;

use super::level::rough_level;
use super::{StationaryError, count_below};
use crate::grid::{Grid, Transform};
use crate::potential::{Potential, PotentialOnGrid};

/// Residual |Hψ - Eψ| wanted of every state, hartree. The energy error is its square over the level distance.
pub(super) const RESIDUAL: f64 = 1e-11;
/// Residual that is still accepted where rounding on a fine grid, or a level close to the threshold, allows no better:
/// the energy is then good to 1e-10 hartree for level distances down to 1e-6 hartree.
const ACCEPTED: f64 = 1e-8;
/// The same on grids so fine that rounding of their largest energies sets it, in units of those.
const ROUNDING: f64 = 1e-11;
/// Rounds for states that are only counted in the bound population: they start from the shooting solution, and mixing
/// among themselves leaves their sum as it is.
const ROUNDS: usize = 4;
/// Most iterations.
pub(super) const ITERATIONS: usize = 400;

/// The lowest bound states of a grid's Hamiltonian, by rising energy.
#[derive(Clone, Debug, PartialEq)]
pub struct BoundStates {
    /// Energies, hartree.
    pub energies: Vec<f64>,
    /// Real wave functions, each of the grid's length, ∫ψ² = 1, positive towards x → +∞.
    pub states: Vec<Vec<f64>>,
}

/// The `count` lowest states of `potential` on a one-dimensional grid.
///
/// # Errors
/// [`StationaryError::NoSuchState`] where fewer are bound, [`StationaryError::NotConverged`].
pub fn bound_states(
    potential: &Potential,
    grid: &Grid,
    count: usize,
) -> Result<BoundStates, StationaryError> {
    iterate(potential, grid, count, count)
}

/// Every state of `potential` on the grid with an energy below zero, among them those the box squeezes, and the `at_least`
/// lowest in any case. States beyond those are good to what the sum of their populations needs.
///
/// # Errors
/// As [`bound_states`].
pub fn bound_states_below(
    potential: &Potential,
    grid: &Grid,
    at_least: usize,
) -> Result<BoundStates, StationaryError> {
    let below = if potential.is_confining() { 0 } else { count_below(potential, 0.0, 0.5 * grid.x.extent()) };
    let mut found = iterate(potential, grid, below.max(at_least), at_least)?;
    let bound = found.energies.partition_point(|&e| e < 0.0).max(at_least);
    found.energies.truncate(bound);
    found.states.truncate(bound);
    Ok(found)
}

fn iterate(
    potential: &Potential,
    grid: &Grid,
    count: usize,
    exact: usize,
) -> Result<BoundStates, StationaryError> {
    let mut guesses = Vec::with_capacity(count);
    let positions: Vec<f64> = grid.x.positions().collect();
    let half = 0.5 * grid.x.extent();
    for number in 0..count {
        let mut guess = rough_level(potential, number, half)?.wave_function(potential, &positions);
        if potential.is_even() {
            keep_parity(&mut guess, number);
        }
        guesses.push(guess);
    }
    let hamiltonian = Hamiltonian::new(PotentialOnGrid::sample(potential, grid).values, grid);
    lowest(&hamiltonian, guesses, exact)
}

/// The even or odd part of state `number` of an even potential: what the two shots leave of the other would be a dipole that
/// oscillates, to be seen beside a weak field's.
fn keep_parity(wave: &mut [f64], number: usize) {
    let sign = if number.is_multiple_of(2) { 1.0 } else { -1.0 };
    let last = wave.len() - 1;
    for left in 0..wave.len() / 2 {
        let half = 0.5 * (wave[left] + sign * wave[last - left]);
        (wave[left], wave[last - left]) = (half, sign * half);
    }
}

/// A real symmetric operator, with an approximate inverse that makes an iteration fast.
pub(super) trait Operator {
    /// Hψ.
    fn apply(&self, psi: &DVector<f64>) -> DVector<f64>;
    /// About (H + shift)⁻¹ψ.
    fn precondition(&self, psi: &DVector<f64>, shift: f64) -> DVector<f64>;
    /// Largest energy that occurs, hartree: its rounding limits the residual.
    fn largest(&self) -> f64;

    /// Residual that is still accepted, hartree.
    fn accepted(&self) -> f64 {
        ACCEPTED.max(ROUNDING * self.largest())
    }
}

/// H = p²/2 + V on real functions of one dimension.
struct Hamiltonian {
    potential: Vec<f64>,
    /// k²/2 in the order of the transform, divided by the number of points.
    kinetic: Vec<f64>,
    transform: Transform,
    cell: f64,
}

impl Hamiltonian {
    fn new(potential: Vec<f64>, grid: &Grid) -> Self {
        let kinetic = grid.x.momenta().map(|k| 0.5 * k * k).collect();
        Self { potential, kinetic, transform: Transform::new(grid.x.points), cell: grid.cell() }
    }

    /// Applies g(k²/2) to a real function.
    fn in_momentum(&self, psi: &DVector<f64>, g: impl Fn(f64) -> f64) -> DVector<f64> {
        let mut work: Vec<Complex<f64>> = psi.iter().map(|&p| Complex::new(p, 0.0)).collect();
        let mut scratch = self.transform.make_scratch();
        self.transform.forward(&mut work, &mut scratch);
        let scale = 1.0 / psi.len() as f64;
        for (w, &t) in work.iter_mut().zip(&self.kinetic) {
            *w *= g(t) * scale;
        }
        self.transform.inverse(&mut work, &mut scratch);
        DVector::from_iterator(psi.len(), work.iter().map(|w| w.re))
    }
}

impl Operator for Hamiltonian {
    fn apply(&self, psi: &DVector<f64>) -> DVector<f64> {
        let mut out = self.in_momentum(psi, |t| t);
        for ((o, v), p) in out.iter_mut().zip(&self.potential).zip(psi.iter()) {
            *o += v * p;
        }
        out
    }

    fn precondition(&self, psi: &DVector<f64>, shift: f64) -> DVector<f64> {
        // Walls of a confining potential are high: (p²/2 + shift)⁻¹ between two factors that lead to V⁻¹ in them.
        let wall = |v: &f64| (1.0 + v.max(0.0) / shift).sqrt().recip();
        let damped = |psi: &DVector<f64>| {
            DVector::from_iterator(psi.len(), psi.iter().zip(&self.potential).map(|(p, v)| p * wall(v)))
        };
        damped(&self.in_momentum(&damped(psi), |t| 1.0 / (t + shift)))
    }

    fn largest(&self) -> f64 {
        let largest = |values: &[f64]| values.iter().fold(0.0, |m: f64, v| m.max(v.abs()));
        largest(&self.kinetic) + largest(&self.potential)
    }
}

/// The first `exact` states converged, the rest improved in a few rounds together with them.
fn lowest(h: &Hamiltonian, guesses: Vec<Vec<f64>>, exact: usize) -> Result<BoundStates, StationaryError> {
    let guesses: Vec<DVector<f64>> = guesses.into_iter().map(DVector::from_vec).collect();
    let (mut states, energies, worst) = improved(h, guesses[..exact].to_vec(), ITERATIONS);
    if worst > h.accepted() || worst.is_nan() || states.len() < exact {
        return Err(StationaryError::NotConverged {
            what: "the bound states on the grid",
            reached: worst,
            wanted: RESIDUAL,
            unit: "hartree",
        });
    }
    let mut found = BoundStates { energies, states: states.iter().map(|v| finished(v, h.cell)).collect() };
    if guesses.len() > exact {
        states.extend_from_slice(&guesses[exact..]);
        let (all, energies, _) = improved(h, states, ROUNDS);
        found.energies.extend(energies.iter().skip(exact));
        found.states.extend(all.iter().skip(exact).map(|v| finished(v, h.cell)));
    }
    Ok(found)
}

/// Locally optimal block preconditioned conjugate gradients (Knyazev, SIAM J. Sci. Comput. 23, 517 (2001),
/// algorithm 5.1), the basis orthonormalised in every round: states, energies, and the largest residual.
pub(super) fn improved(
    h: &impl Operator,
    mut x: Vec<DVector<f64>>,
    rounds: usize,
) -> (Vec<DVector<f64>>, Vec<f64>, f64) {
    orthonormalise(&mut x, 0);
    let count = x.len();
    let mut directions: Vec<DVector<f64>> = Vec::new();
    let (mut energies, mut worst, mut best) = (vec![0.0; count], 0.0, f64::INFINITY);
    let mut stalled = 0;
    for _ in 0..rounds {
        let mut basis = x.clone();
        let mut images: Vec<DVector<f64>> = x.iter().map(|v| h.apply(v)).collect();
        worst = 0.0;
        for i in 0..count {
            energies[i] = x[i].dot(&images[i]);
            let residual = &images[i] - energies[i] * &x[i];
            worst = f64::max(worst, residual.norm());
            let shift = energies[i].abs().max(0.05);
            basis.push(h.precondition(&residual, shift));
        }
        stalled = if worst < 0.7 * best { 0 } else { stalled + 1 };
        best = best.min(worst);
        if worst < RESIDUAL || (best < h.accepted() && stalled > 12) {
            break;
        }
        basis.append(&mut directions);
        orthonormalise(&mut basis, count);
        images.extend(basis[count..].iter().map(|v| h.apply(v)));
        (x, directions) = ritz(&basis, &images, count);
    }
    (x, energies, worst)
}

/// The `count` lowest Ritz vectors of the basis, and their parts outside the first `count` basis vectors.
fn ritz(
    basis: &[DVector<f64>],
    images: &[DVector<f64>],
    count: usize,
) -> (Vec<DVector<f64>>, Vec<DVector<f64>>) {
    let size = basis.len();
    let matrix = DMatrix::from_fn(size, size, |i, j| {
        let (i, j) = (i.min(j), i.max(j));
        basis[i].dot(&images[j])
    });
    let eigen = SymmetricEigen::new(matrix);
    let mut order: Vec<usize> = (0..size).collect();
    order.sort_by(|&i, &j| eigen.eigenvalues[i].total_cmp(&eigen.eigenvalues[j]));
    let combine = |column: usize, from: usize| {
        let mut sum = DVector::zeros(basis[0].len());
        for (i, vector) in basis.iter().enumerate().skip(from) {
            sum.axpy(eigen.eigenvectors[(i, column)], vector, 1.0);
        }
        sum
    };
    let x = order[..count].iter().map(|&c| combine(c, 0)).collect();
    let directions = order[..count].iter().map(|&c| combine(c, count)).collect();
    (x, directions)
}

/// Gram–Schmidt, twice, of all vectors from `first` on; those that vanish are dropped.
fn orthonormalise(vectors: &mut Vec<DVector<f64>>, first: usize) {
    let mut kept: Vec<DVector<f64>> = vectors.drain(..first).collect();
    for mut vector in vectors.drain(..) {
        let before = vector.norm();
        if before == 0.0 {
            continue;
        }
        vector /= before;
        for _ in 0..2 {
            for other in &kept {
                let overlap = other.dot(&vector);
                vector.axpy(-overlap, other, 1.0);
            }
        }
        let left = vector.norm();
        if left > 1e-12 {
            kept.push(vector / left);
        }
    }
    *vectors = kept;
}

/// Normalised to ∫ψ² = 1, with the sign that makes it positive towards x → +∞.
fn finished(vector: &DVector<f64>, cell: f64) -> Vec<f64> {
    let largest = vector.amax();
    let outermost = vector.iter().rev().find(|v| v.abs() > 1e-3 * largest).copied().unwrap_or(1.0);
    let scale = outermost.signum() / (vector.norm() * cell.sqrt());
    vector.iter().map(|v| v * scale).collect()
}
