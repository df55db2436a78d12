//! What a point costs: steps, memory, and time on one core.

use super::prepare::Job;
use tdse_core::simulate::Schedule;

/// Nanoseconds per point, binary logarithm of the number of points, and step (two transform pairs and what goes with
/// them), as measured on one core of a server processor; an estimate only, replaced by measured times as a scan goes.
const NANOSECONDS: f64 = 3.2;

/// An estimate.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cost {
    /// Time steps.
    pub steps: usize,
    /// Grid points.
    pub points: usize,
    /// Time on one core, s.
    pub seconds: f64,
    /// Memory at the peak.
    pub bytes: u64,
}

/// Estimated cost of a point.
pub fn cost(job: &Job) -> Cost {
    let numerics = &job.numerics;
    let points = numerics.grid.len();
    let steps = Schedule::new(&job.problem.field, numerics.time_step, numerics.trailing_time).steps;
    let log = (points as f64).log2();
    // ψ, scratch and factors, the bound states with their iteration, fields and series.
    let states = job.states().max(8);
    let bytes = points * (16 * 8 + 8 * 5 * states) + steps * (12 * 8 + 6 * 8);
    Cost {
        steps,
        points,
        seconds: steps as f64 * points as f64 * log * NANOSECONDS * 1e-9,
        bytes: bytes as u64,
    }
}
