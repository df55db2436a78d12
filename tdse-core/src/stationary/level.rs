//! Grid-free bound levels of a model atom, by shooting from both sides: along the line, or along the radius of a plane.

use std::f64::consts::PI;

use super::StationaryError;
use super::magnus::{Mesh, decaying_solution};
use super::radial::{RadialFunction, RadialMesh};
use super::root::brent;
use crate::potential::Potential;

/// Decay wanted between the turning point and the far ends, in e-folds of the wave function.
const DECAY: f64 = 20.0;
/// Accuracy wanted of an energy, relative to max(|E|, 1e-3 hartree).
const ACCURACY: f64 = 1e-12;
/// Energy of the threshold above which nothing counts as bound, hartree.
const THRESHOLD: f64 = -1e-10;

/// A converged bound level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Level {
    /// Number, from 0 by rising energy; also the number of nodes.
    pub number: usize,
    /// Energy, hartree.
    pub energy: f64,
    /// Distance from zero at which the wave function has decayed by e⁻²⁰, bohr.
    pub reach: f64,
}

impl Level {
    /// Real wave function on rising `positions`, not normalised, positive for x → +∞.
    pub fn wave_function(&self, potential: &Potential, positions: &[f64]) -> Vec<f64> {
        let step = potential.smallest_length() / 8.0;
        let (first, last) = potential.domain();
        let (left_end, right_end) = ((-self.reach).max(first), self.reach.min(last));
        let split = positions.partition_point(|&x| x < meeting_point(potential));
        let left = decaying_solution(
            potential,
            self.energy,
            left_end,
            positions[..=split.min(positions.len() - 1)].iter().copied(),
            step,
        );
        let right = decaying_solution(
            potential,
            self.energy,
            right_end,
            positions[split..].iter().rev().copied(),
            step,
        );
        // The two pieces meet at positions[split]; they are scaled to agree there in (ψ, ψ') as well as they can.
        let (l, r) = (left[left.len() - 1], right[right.len() - 1]);
        let r = [r[0], -r[1]];
        let scale = (l[0] * r[0] + l[1] * r[1]) / (l[0] * l[0] + l[1] * l[1]);
        let left = left[..split].iter().map(|y| y[0] * scale);
        left.chain(right.iter().rev().map(|y| y[0])).collect()
    }
}

impl Level {
    /// R(r) of a level at angular momentum ±`angular` in two dimensions, ∫R² r dr = 1.
    pub fn radial_function(&self, potential: &Potential, angular: u32) -> RadialFunction {
        RadialFunction::new(potential, angular, self.energy, self.reach)
    }
}

/// Where the two integrations meet: the bottom of the potential, zero for a symmetric one.
fn meeting_point(potential: &Potential) -> f64 {
    match potential {
        Potential::Sampled(table) => {
            let (x, v) = table.points();
            let lowest = (0..v.len()).min_by(|&i, &j| v[i].total_cmp(&v[j])).unwrap_or(0);
            x[lowest.clamp(1, x.len() - 2)]
        }
        _ => 0.0,
    }
}

/// A model atom along the line, or along the radius of a plane with an angular momentum.
#[derive(Clone, Copy)]
struct Well<'a> {
    potential: &'a Potential,
    angular: Option<u32>,
}

/// One of two integrations that meet.
enum Half {
    Line(Mesh),
    Centre(RadialMesh),
    Far(RadialMesh),
}

impl Half {
    fn angle(&self, energy: f64) -> f64 {
        match self {
            Self::Line(mesh) => mesh.angle(energy),
            Self::Centre(mesh) | Self::Far(mesh) => mesh.angle(energy),
        }
    }

    fn decay(&self, energy: f64) -> f64 {
        match self {
            Self::Line(mesh) => mesh.decay(energy),
            Self::Centre(_) => f64::INFINITY,
            Self::Far(mesh) => mesh.decay(energy),
        }
    }
}

impl Well<'_> {
    /// A level found with ends at ±`reach`, or as far along the radius as the potential is known.
    fn level(&self, number: usize, energy: f64, reach: f64) -> Level {
        let known = if self.angular.is_some() { self.potential.domain().1 } else { f64::INFINITY };
        Level { number, energy, reach: reach.min(known) }
    }

    /// Both meshes for ends at ±`reach`, cut to the domain of the potential; or from the centre and from `reach`.
    fn meshes(&self, reach: f64, fineness: f64) -> [Half; 2] {
        let (first, last) = self.potential.domain();
        if let Some(m) = self.angular {
            return [
                Half::Centre(RadialMesh::inner(self.potential, m, fineness)),
                Half::Far(RadialMesh::outer(self.potential, m, reach.min(last), fineness)),
            ];
        }
        let near = meeting_point(self.potential);
        [(-reach).max(first), reach.min(last)]
            .map(|far| Half::Line(Mesh::new(self.potential, far, near, fineness)))
    }
}

/// Continuous, rising function of the energy that is n at level n.
fn quantum_number(meshes: &[Half; 2], energy: f64) -> f64 {
    (meshes[0].angle(energy) + meshes[1].angle(energy)) / PI - 1.0
}

/// Number of levels below `energy` in a box from -`reach` to `reach` at whose ends the solution must decay.
pub fn count_below(potential: &Potential, energy: f64, reach: f64) -> usize {
    let meshes = Well { potential, angular: None }.meshes(reach, 1.0 / 16.0);
    (quantum_number(&meshes, energy) + 1.0).floor().max(0.0) as usize
}

/// Bound level `number` of `potential`, converged to 1e-12 of its energy, no grid involved.
///
/// # Errors
/// [`StationaryError::NoSuchState`] where the potential binds fewer states, [`StationaryError::NotConverged`].
pub fn level(potential: &Potential, number: usize) -> Result<Level, StationaryError> {
    converged(Well { potential, angular: None }, number)
}

/// Level `number` (its radial nodes) of a round `potential` in two dimensions at angular momentum ±`angular`, converged as
/// [`level`].
///
/// # Errors
/// As [`level`].
pub fn radial_level(potential: &Potential, angular: u32, number: usize) -> Result<Level, StationaryError> {
    converged(Well { potential, angular: Some(angular) }, number)
}

/// Number of levels of angular momentum ±`angular` below `energy` in a round box of radius `reach`.
pub fn radial_count_below(potential: &Potential, angular: u32, energy: f64, reach: f64) -> usize {
    let meshes = Well { potential, angular: Some(angular) }.meshes(reach, 1.0 / 16.0);
    (quantum_number(&meshes, energy) + 1.0).floor().max(0.0) as usize
}

/// Energy to 1e-8 hartree or so, and R(r), of a level in a round box of radius `reach` or more than the level needs.
pub(super) fn rough_radial_level(
    potential: &Potential,
    angular: u32,
    number: usize,
    reach: f64,
) -> Result<(f64, RadialFunction), StationaryError> {
    let level = rough(Well { potential, angular: Some(angular) }, number, reach)?;
    Ok((level.energy, RadialFunction::new(potential, angular, level.energy, level.reach)))
}

fn converged(well: Well, number: usize) -> Result<Level, StationaryError> {
    let potential = well.potential;
    let mut reach = first_reach(potential);
    let mut energy = loop {
        let found = locate(well, number, reach)?;
        let decayed = well.meshes(reach, 1.0 / 8.0).iter().all(|m| m.decay(found) > DECAY);
        if decayed || reach >= whole(potential) {
            break found;
        }
        reach *= 1.5;
    };
    let mut last = f64::NAN;
    let mut change = f64::INFINITY;
    let wanted = ACCURACY * energy.abs().max(1e-3);
    let mut fineness = 1.0 / 8.0;
    let mut raw = refine(well, number, reach, fineness, energy);
    while fineness > 1.0 / 1024.0 {
        fineness *= 0.5;
        let finer = refine(well, number, reach, fineness, energy);
        energy = finer + (finer - raw) / 15.0;
        change = (energy - last).abs();
        if change < wanted {
            return Ok(well.level(number, energy, reach));
        }
        (raw, last) = (finer, energy);
    }
    // Rounding of the many steps, or a kink in a table, sets the floor.
    if change < 1e-10 * energy.abs().max(1.0) {
        return Ok(well.level(number, energy, reach));
    }
    Err(StationaryError::NotConverged { what: "a bound level", reached: change, wanted, unit: "hartree" })
}

/// Level `number` to 1e-8 hartree or so with both ends at ±`reach`: a start for an iteration on a grid of that box.
pub(super) fn rough_level(
    potential: &Potential,
    number: usize,
    reach: f64,
) -> Result<Level, StationaryError> {
    rough(Well { potential, angular: None }, number, reach)
}

fn rough(well: Well, number: usize, reach: f64) -> Result<Level, StationaryError> {
    let energy = locate(well, number, reach)?;
    // No further out than the wave function is worth: it would overflow on the way in.
    let mut far = first_reach(well.potential).min(reach);
    while far < reach && well.meshes(far, 1.0 / 8.0).iter().any(|mesh| mesh.decay(energy) < 2.0 * DECAY) {
        far = (1.5 * far).min(reach);
    }
    Ok(well.level(number, energy, far))
}

/// A reach to start from: the whole range of a short-range potential, grown later as the state needs.
fn first_reach(potential: &Potential) -> f64 {
    let range = match potential {
        Potential::Screened { screening_length, .. } => 3.0 * screening_length,
        // No wider than what a deep level can cross without overflow.
        Potential::Sampled(_) => (whole(potential) / 10.0).min(10.0),
        _ => potential.smallest_length(),
    };
    10.0 * range.max(potential.smallest_length()).max(1.0)
}

/// Largest reach that makes sense: the domain of a table, else where the longest Rydberg states end.
fn whole(potential: &Potential) -> f64 {
    let (first, last) = potential.domain();
    last.max(-first).min(2e5)
}

/// Level `number` on a coarse mesh to 1e-6 or so.
fn locate(well: Well, number: usize, reach: f64) -> Result<f64, StationaryError> {
    let potential = well.potential;
    let meshes = well.meshes(reach, 1.0 / 8.0);
    let f = |energy: f64| quantum_number(&meshes, energy) - number as f64;
    let mut bottom = potential.value(meeting_point(potential));
    // The spline of a table may swing below its points.
    while f(bottom) > 0.0 {
        bottom -= bottom.abs().max(1.0);
    }
    let mut top = THRESHOLD;
    if potential.is_confining() {
        top = bottom + 1.0;
        while f(top) < 0.0 {
            top = bottom + 2.0 * (top - bottom);
        }
    }
    let at_top = f(top);
    if at_top < 0.0 {
        if reach < whole(potential) && potential.far_charge() > 0.0 {
            return Ok(THRESHOLD); // a larger box holds it
        }
        return Err(StationaryError::NoSuchState {
            number,
            bound: (at_top + number as f64 + 1.0).floor() as usize,
        });
    }
    Ok(brent(f, [(bottom, f(bottom)), (top, at_top)], 1e-8))
}

/// Level near `guess` on a mesh of this fineness, to rounding.
fn refine(well: Well, number: usize, reach: f64, fineness: f64, guess: f64) -> f64 {
    let meshes = well.meshes(reach, fineness);
    let f = |energy: f64| quantum_number(&meshes, energy) - number as f64;
    let mut width = 1e-6 * guess.abs().max(1e-6);
    loop {
        let bracket = [(guess - width, f(guess - width)), (guess + width, f(guess + width))];
        if bracket[0].1 <= 0.0 && bracket[1].1 >= 0.0 {
            return brent(f, bracket, 1e-16 * guess.abs());
        }
        width *= 4.0;
    }
}
