//! The times of a run.

use crate::field::Field;

/// Times and field of a run: t_n = start + n τ, n = 0 … steps.
#[derive(Clone, Debug, PartialEq)]
pub struct Schedule {
    /// First time, a.u.
    pub start: f64,
    /// Time step, a.u.
    pub time_step: f64,
    /// Number of steps.
    pub steps: usize,
    /// Time when the field has ended, a.u.
    pub field_end: f64,
    /// Time asked for, a.u.: the last sample lies less than a step behind it, the windows of spectra end there, so that
    /// they do not change with the step.
    pub end: f64,
}

impl Schedule {
    /// From the start of the field to `trailing_time` after its end, lengthened to whole steps.
    pub fn new(field: &Field, time_step: f64, trailing_time: f64) -> Self {
        let (start, field_end) = field.interval();
        // A length within rounding of whole steps counts as whole.
        let steps = ((field_end + trailing_time - start) / time_step - 1e-9).ceil().max(1.0);
        Self { start, time_step, steps: steps as usize, field_end, end: field_end + trailing_time }
    }

    /// Time of sample `n`, a.u.
    pub fn time(&self, n: usize) -> f64 {
        self.start + n as f64 * self.time_step
    }

    /// Every sample's time, a.u.; length `steps + 1`.
    pub fn times(&self) -> Vec<f64> {
        (0..=self.steps).map(|n| self.time(n)).collect()
    }
}
