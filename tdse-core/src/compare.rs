//! Whether two values are the same within their error bars.

/// What two values say of each other.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Agreement {
    /// They differ by no more than their bars together.
    Same,
    /// They differ by more.
    Different,
    /// They are equal to the last bit, whatever the bars.
    Equal,
    /// They differ, and neither has a bar to judge that by.
    Unjudged,
    /// One of them is not there.
    Missing,
}

/// A value with its error bar, if there is one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measured {
    /// The value; NaN where there is none.
    pub value: f64,
    /// Its bar.
    pub error: Option<f64>,
}

impl Measured {
    fn bar(&self) -> Option<f64> {
        self.error.filter(|error| error.is_finite())
    }
}

/// Judges two values of one quantity.
///
/// Bars of numerical errors are bounds, not standard deviations, so they add; a value without a bar counts as exact
/// beside one that has it.
pub fn judge(a: Measured, b: Measured) -> Agreement {
    if a.value.is_nan() || b.value.is_nan() {
        return Agreement::Missing;
    }
    if a.value.to_bits() == b.value.to_bits() {
        return Agreement::Equal;
    }
    match (a.bar(), b.bar()) {
        (None, None) => Agreement::Unjudged,
        (one, other) => {
            let room = one.unwrap_or(0.0) + other.unwrap_or(0.0);
            if (a.value - b.value).abs() <= room { Agreement::Same } else { Agreement::Different }
        }
    }
}

/// How many of a set of values say what.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Tally {
    /// Equal to the last bit.
    pub equal: usize,
    /// Same within the bars.
    pub same: usize,
    /// Different.
    pub different: usize,
    /// Without a bar.
    pub unjudged: usize,
    /// Not there on one side.
    pub missing: usize,
}

impl Tally {
    /// Counts pairs.
    pub fn of(pairs: impl Iterator<Item = (Measured, Measured)>) -> Self {
        let mut tally = Self::default();
        for (a, b) in pairs {
            *match judge(a, b) {
                Agreement::Equal => &mut tally.equal,
                Agreement::Same => &mut tally.same,
                Agreement::Different => &mut tally.different,
                Agreement::Unjudged => &mut tally.unjudged,
                Agreement::Missing => &mut tally.missing,
            } += 1;
        }
        tally
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn measured(value: f64, error: impl Into<Option<f64>>) -> Measured {
        Measured { value, error: error.into() }
    }

    #[test]
    fn bars_add_and_their_edge_belongs_to_them() {
        let a = measured(1.0, 0.25);
        assert_eq!(judge(a, measured(1.5, 0.25)), Agreement::Same);
        assert_eq!(judge(a, measured(1.5, 0.125)), Agreement::Different);
        assert_eq!(judge(a, measured(1.25, None)), Agreement::Same);
        assert_eq!(judge(a, measured(1.25, f64::NAN)), Agreement::Same);
        assert_eq!(judge(measured(1.0, None), measured(1.0, None)), Agreement::Equal);
        assert_eq!(judge(measured(1.0, None), measured(1.1, None)), Agreement::Unjudged);
        assert_eq!(judge(a, measured(f64::NAN, 1.0)), Agreement::Missing);
    }

    #[test]
    fn every_pair_is_counted_once() {
        let one = [1.0, 2.0, f64::NAN, 4.0].map(|value| measured(value, 0.1));
        let other = [1.0, 2.15, 3.0, 4.5].map(|value| measured(value, 0.1));
        let tally = Tally::of(one.into_iter().zip(other));
        assert_eq!(tally, Tally { equal: 1, same: 1, different: 1, unjudged: 0, missing: 1 });
    }
}
