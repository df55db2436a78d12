//! Whether a run still makes sense.

use super::State;

/// How a run is doing.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Health {
    /// Norm at the last sample.
    pub norm: f64,
    /// Largest norm near the edges so far.
    pub edge: f64,
    /// Largest norm at the top of the momentum grid so far.
    pub top: f64,
}

/// What went wrong beyond repair.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum Failure {
    /// Numbers stopped being numbers.
    #[error("the wave function is not finite after step {step}")]
    NotFinite {
        /// Steps done.
        step: usize,
    },
    /// The norm grew, which no exact propagation can.
    #[error("the norm grew from {before} to {after} by step {step}")]
    NormGrew {
        /// Norm at the start.
        before: f64,
        /// Norm at the last sample.
        after: f64,
        /// Steps done.
        step: usize,
    },
}

/// Judges the recorded samples of a state.
pub fn health(state: &State) -> Result<Health, Failure> {
    let series = &state.series;
    let (Some(&before), Some(&after)) = (series.norm.first(), series.norm.last()) else {
        return Ok(Health { norm: 1.0, edge: 0.0, top: 0.0 });
    };
    if !after.is_finite() || series.gradient.last().is_some_and(|g| !(g[0] + g[1]).is_finite()) {
        return Err(Failure::NotFinite { step: state.step });
    }
    if after > before * (1.0 + 1e-9) {
        return Err(Failure::NormGrew { before, after, step: state.step });
    }
    let largest = |values: &[f64]| values.iter().copied().fold(0.0, f64::max);
    Ok(Health { norm: after, edge: largest(&series.edge), top: largest(&series.top) })
}
