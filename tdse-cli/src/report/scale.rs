//! From values to places in the picture, and the ranges axes take from data.

/// How an axis spreads its values.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// Evenly.
    Linear,
    /// Evenly, marked at parts of the circle: values in degrees.
    Degrees,
    /// By their logarithm.
    Log,
}

/// The ends of an axis, `low < high`, both finite (and positive where logarithmic).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Range {
    /// Smallest value shown.
    pub low: f64,
    /// Largest value shown.
    pub high: f64,
}

impl Range {
    /// Smallest and largest of the values an axis of this kind can show, widened where they coincide.
    pub fn of(values: impl Iterator<Item = f64>, kind: Kind) -> Option<Self> {
        let (low, high) = values
            .filter(|&v| shown(v, kind))
            .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), v| (low.min(v), high.max(v)));
        (low <= high).then(|| Self { low, high }.opened(kind))
    }

    /// Whether an axis of this kind can be drawn over it.
    pub fn usable(self, kind: Kind) -> bool {
        self.low < self.high && shown(self.low, kind) && shown(self.high, kind)
    }

    /// Widened by a share of its length at both ends.
    #[must_use]
    pub fn padded(self, share: f64) -> Self {
        let margin = share * (self.high - self.low);
        Self { low: self.low - margin, high: self.high + margin }
    }

    /// The range of a spectrum on a logarithmic axis: up from its own floor (a second percentile, so that single deep
    /// minima do not stretch it), at most `decades` long.
    pub fn above_floor(values: impl Iterator<Item = f64>, decades: f64) -> Option<Self> {
        let mut sorted: Vec<f64> = values.filter(|&v| shown(v, Kind::Log)).collect();
        sorted.sort_by(f64::total_cmp);
        let (floor, top) = (*sorted.get(sorted.len() / 50)?, *sorted.last()?);
        let high = top * 1.6;
        let low = (floor / 1.6).max(high / 10_f64.powf(decades.max(0.1))).max(SMALLEST);
        Some(Self { low, high }.opened(Kind::Log))
    }

    fn opened(self, kind: Kind) -> Self {
        let Self { low, high } = self;
        let size = low.abs().max(high.abs());
        match kind {
            _ if high - low > (1e-12 * size).max(SMALLEST) => self,
            Kind::Log => Self { low: (low / 3.0).max(SMALLEST), high: high * 3.0 },
            Kind::Linear | Kind::Degrees if size <= SMALLEST => Self { low: -1.0, high: 1.0 },
            Kind::Linear | Kind::Degrees => Self { low: low - 0.1 * size, high: high + 0.1 * size },
        }
    }
}

/// Beyond these an axis would overflow or underflow its own arithmetic.
const LARGEST: f64 = 1e300;
const SMALLEST: f64 = 1e-300;

/// Whether an axis of this kind can show the value.
pub fn shown(value: f64, kind: Kind) -> bool {
    match kind {
        Kind::Linear | Kind::Degrees => value.abs() <= LARGEST,
        Kind::Log => (SMALLEST..=LARGEST).contains(&value),
    }
}

/// A range laid between two places of the picture.
#[derive(Debug, Clone, Copy)]
pub struct Scale {
    kind: Kind,
    range: Range,
    start: f64,
    end: f64,
}

impl Scale {
    /// `range.low` at `start`, `range.high` at `end`.
    pub fn new(kind: Kind, range: Range, start: f64, end: f64) -> Self {
        Self { kind, range, start, end }
    }

    /// The place of a value. On a logarithmic axis zero and negative values lie one axis length below its lower end;
    /// NaN stays NaN.
    pub fn place(&self, value: f64) -> f64 {
        self.start + self.share(value) * (self.end - self.start)
    }

    /// The value's share of the way from the lower to the upper end.
    pub fn share(&self, value: f64) -> f64 {
        let Range { low, high } = self.range;
        match self.kind {
            Kind::Linear | Kind::Degrees => (value - low) / (high - low),
            Kind::Log if value <= 0.0 => -1.0,
            Kind::Log => (value.ln() - low.ln()) / (high.ln() - low.ln()),
        }
    }

    /// The range shown.
    pub fn range(&self) -> Range {
        self.range
    }
}
