//! What is bound of an atom with a Coulomb tail, from the states below zero that a box holds.
//!
//! Infinitely many levels lie below zero, a box has some of them, the highest squeezed. Populations per quantum number go on
//! smoothly through E = 0, so the sum up to there is ∫p dn to the quantum number at E = 0, a fraction beyond the last level:
//! Euler and Maclaurin's midpoint form (DLMF 2.10(i)), for each parity or angular momentum by itself. Counting whole levels
//! instead errs by up to half the population of the last.

use std::f64::consts::PI;

use crate::grid::Grid;
use crate::potential::Potential;

/// The series of bound states of an atom with a Coulomb tail, as a box holds it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BoundSeries {
    /// Charge Z of -Z/r, zero for none.
    charge: f64,
    /// Half of the box, bohr.
    reach: f64,
}

impl BoundSeries {
    /// Those of `potential` in the box of `grid`; in two dimensions in the circle that it holds.
    pub fn new(potential: &Potential, grid: &Grid) -> Self {
        let [x, y] = grid.extents();
        let across = if grid.dimensions() == 1 { x } else { x.min(y) };
        Self { charge: potential.far_charge(), reach: 0.5 * across }
    }

    /// Population of all bound states on a line, from energies (hartree, rising) and populations of those in the box.
    pub fn bound_on_line(self, energies: &[f64], populations: &[f64]) -> f64 {
        let parity = |first: usize| {
            let all = energies.iter().zip(populations).skip(first).step_by(2);
            let (energies, populations): (Vec<f64>, Vec<f64>) = all.filter(|(e, _)| **e < 0.0).unzip();
            self.bound(energies.last().copied(), &populations)
        };
        parity(0) + parity(1)
    }

    /// Population of all bound states of one series, from those below zero in the box, by rising energy; `last` is the highest
    /// energy, hartree.
    pub fn bound(self, last: Option<f64>, populations: &[f64]) -> f64 {
        let whole: f64 = populations.iter().sum();
        match (populations, last) {
            ([.., before, end], Some(energy)) if self.charge > 0.0 => {
                let beyond = self.to_zero(energy);
                whole + (beyond - 0.5) * (end + 0.5 * (beyond + 0.5) * (end - before))
            }
            _ => whole,
        }
    }

    /// Quantum numbers from a level to E = 0: the difference of (1/π) ∫ √(2(E + Z/x)) dx, from zero to the turning point or
    /// the edge (Wentzel, Kramers, Brillouin; what happens near the core is the same at both energies).
    fn to_zero(self, energy: f64) -> f64 {
        let turning = self.charge / -energy;
        let end = turning.min(self.reach);
        let below = (2.0 * self.charge / turning).sqrt()
            * ((end * (turning - end)).sqrt() + turning * (end / turning).sqrt().asin());
        ((8.0 * self.charge * self.reach).sqrt() - below) / PI
    }
}
