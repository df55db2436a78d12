//! Time left, from what finished points took and what the others are estimated to take.

/// Estimates made better by measurements.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Pace {
    jobs: f64,
    /// Estimated work that is left, s on one core.
    left: f64,
    /// Estimated and measured work that is done.
    done: [f64; 2],
}

impl Pace {
    /// `work` is estimated, in seconds on one core; `jobs` points at once.
    pub fn new(work: f64, jobs: usize) -> Self {
        Self { jobs: jobs.max(1) as f64, left: work, done: [0.0; 2] }
    }

    /// A point that was estimated so took so long.
    pub fn took(&mut self, estimate: f64, measured: f64) {
        self.left = (self.left - estimate).max(0.0);
        self.done[0] += estimate;
        self.done[1] += measured;
    }

    /// Time left, s; none before anything was measured.
    pub fn left(&self) -> Option<f64> {
        let [estimated, measured] = self.done;
        (estimated > 0.0).then(|| self.left * measured / estimated / self.jobs)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_left_is_scaled_by_what_was_measured() {
        let mut pace = Pace::new(10.0, 2);
        assert_eq!(pace.left(), None);
        pace.took(2.0, 3.0);
        assert_eq!(pace.left(), Some(8.0 * 1.5 / 2.0));
        pace.took(8.0, 9.0);
        assert_eq!(pace.left(), Some(0.0));
    }
}
