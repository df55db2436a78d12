//! Where waves become free, and the mesh that leads there.

use super::Side;
use crate::grid::Axis;
use crate::potential::Potential;
use crate::stationary::magnus::Interval;
use crate::stationary::tail::Tail;

/// Interval of integration as a part of the local length scale L + |x|/8, where L is the potential's smallest length.
const FINENESS: f64 = 1.0 / 48.0;
/// Longest interval of integration, bohr.
const LONGEST: f64 = 0.5;
/// Potential that counts as none, hartree: by its formula, and at the end of a table.
const NEGLIGIBLE: f64 = 1e-14;
const NEGLIGIBLE_AT_END: f64 = 1e-6;
/// Where a short-range potential that has not yet vanished is given up, bohr.
const GIVEN_UP: f64 = 1e5;
/// The potential has no free motion far away that scattering states could be matched to.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum NoContinuum {
    /// Every motion is bound.
    #[error("a harmonic potential binds every motion: it has no scattering states")]
    Confining,
    /// The potential has not vanished where its table ends, or 1e5 bohr away.
    #[error(
        "the potential is still {value:e} hartree at {position} bohr: scattering states need it below {allowed:e}"
    )]
    NotVanished {
        /// Where it was looked at last, bohr.
        position: f64,
        /// Potential there, hartree.
        value: f64,
        /// Largest potential that would do, hartree.
        allowed: f64,
    },
    /// The table of the potential does not cover the box.
    #[error("the box reaches to {edge} bohr, the table of the potential to {position} bohr")]
    Short {
        /// End of the table, bohr.
        position: f64,
        /// Outermost grid point, bohr.
        edge: f64,
    },
}

/// Distance from zero, at least `edge`, from which on waves have the form of [`Tail`].
pub(in crate::stationary) fn free_from(
    potential: &Potential,
    tail: Tail,
    side: Side,
    edge: f64,
) -> Result<f64, NoContinuum> {
    let domain = potential.domain();
    let limit = match side {
        Side::Left => -domain.0,
        Side::Right => domain.1,
    };
    if limit < edge {
        return Err(NoContinuum::Short { position: side.sign() * limit, edge });
    }
    let mut end = edge.max(tail.reach());
    if potential.far_charge() != 0.0 {
        return Ok(end);
    }
    loop {
        let value = potential.value(side.sign() * end);
        if value.abs() < NEGLIGIBLE {
            return Ok(end);
        }
        if end >= limit.min(GIVEN_UP) {
            let position = side.sign() * end;
            let allowed = NEGLIGIBLE_AT_END;
            let vanished = value.abs() < allowed;
            return if vanished {
                Ok(end)
            } else {
                Err(NoContinuum::NotVanished { position, value, allowed })
            };
        }
        end = (1.1 * end + 1.0).min(limit);
    }
}

/// Intervals from `-ends[0]` to `ends[1]` with a node at every point of `axis`, and the number of intervals to the left
/// of each point.
pub(super) fn mesh_through(potential: &Potential, ends: [f64; 2], axis: Axis) -> (Vec<Interval>, Vec<usize>) {
    let mut mesh = MeshBuilder { potential, at: -ends[0], intervals: Vec::new() };
    let mut marks = Vec::with_capacity(axis.points);
    for x in axis.positions() {
        mesh.reach(x);
        marks.push(mesh.intervals.len());
    }
    mesh.reach(ends[1]);
    (mesh.intervals, marks)
}

/// Intervals from left to right.
struct MeshBuilder<'a> {
    potential: &'a Potential,
    at: f64,
    intervals: Vec<Interval>,
}

impl MeshBuilder<'_> {
    /// Goes on to `x`, with a node at zero, where a potential may have a kink.
    fn reach(&mut self, x: f64) {
        if self.at < 0.0 && x > 0.0 {
            self.reach(0.0);
        }
        while self.at < x {
            let nearest = if self.at < 0.0 { x.min(0.0) } else { self.at };
            let scale = self.potential.smallest_length() + nearest.abs() / 8.0;
            let longest = LONGEST.min(FINENESS * scale);
            let gap = x - self.at;
            let to = if gap > 2.0 { self.at + 1.0 } else { x };
            let count = ((to - self.at) / longest).ceil().max(1.0);
            let from = self.at;
            let node = |i: f64| if i == count { to } else { from + (to - from) * i / count };
            for i in 0..count as usize {
                self.intervals.push(Interval::new(self.potential, node(i as f64), node(i as f64 + 1.0)));
            }
            self.at = to;
        }
    }
}
