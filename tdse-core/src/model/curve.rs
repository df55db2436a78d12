//! A user's own spectrum or rate, judged as the models are.

use super::tunnelling;
use crate::field::{Field, Pulse};
use crate::spectrum::EnergyAxis;
use crate::units::intensity;

/// Positive values over rising positions, joined by straight lines of the logarithm.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    positions: Vec<f64>,
    values: Vec<f64>,
}

/// Why a table is no curve.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum BadCurve {
    /// Too few points, or positions and values that do not pair up.
    #[error(
        "a curve needs at least 2 points, as many values as positions; got {positions} positions and {values} values"
    )]
    Length {
        /// Number of positions.
        positions: usize,
        /// Number of values.
        values: usize,
    },
    /// A position that does not rise.
    #[error("positions of a curve rise: entry {index} is {value}, after {before}")]
    NotRising {
        /// Index of the entry, from 0.
        index: usize,
        /// Its position.
        value: f64,
        /// The one before it.
        before: f64,
    },
    /// A value that is negative or not a number.
    #[error("values of a curve are 0 or more: entry {index} is {value}")]
    Value {
        /// Index of the entry, from 0.
        index: usize,
        /// Its value.
        value: f64,
    },
}

/// What a curve of rates is a function of.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RateOver {
    /// Of a static field's strength, a.u.: taken at every moment.
    Field,
    /// Of the intensity, W/cm², averaged over a cycle: taken at that of the envelope, of light along a line.
    Intensity,
}

impl RateOver {
    fn position(self, field: &Field, t: f64) -> f64 {
        let envelope = |p: &Pulse| p.peak_field * p.envelope.value_and_slope(t - p.centre).0;
        match self {
            Self::Field => {
                let [x, y] = field.electric_field(t);
                x.hypot(y)
            }
            Self::Intensity => intensity(field.pulses.iter().map(envelope).sum()),
        }
    }
}

/// The field goes beyond the last entry of a curve of rates.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Beyond {
    /// Where the curve ends.
    pub last: f64,
    /// Where the field goes.
    pub reached: f64,
}

impl Curve {
    /// Curve through points; zeros are allowed, and make the pieces that end in them zero.
    ///
    /// # Errors
    /// [`BadCurve`].
    pub fn new(positions: Vec<f64>, values: Vec<f64>) -> Result<Self, BadCurve> {
        if positions.len() < 2 || positions.len() != values.len() {
            return Err(BadCurve::Length { positions: positions.len(), values: values.len() });
        }
        // NaN does not rise either.
        let wrong = (1..positions.len())
            .find(|&i| positions[i].partial_cmp(&positions[i - 1]) != Some(std::cmp::Ordering::Greater));
        if let Some(index) = wrong {
            return Err(BadCurve::NotRising { index, value: positions[index], before: positions[index - 1] });
        }
        if let Some(index) = values.iter().position(|v| !(v.is_finite() && *v >= 0.0)) {
            return Err(BadCurve::Value { index, value: values[index] });
        }
        Ok(Self { positions, values })
    }

    /// First and last position.
    pub fn domain(&self) -> (f64, f64) {
        (self.positions[0], self.positions[self.positions.len() - 1])
    }

    /// Value at `x`; NaN outside of the domain, where the curve says nothing.
    pub fn at(&self, x: f64) -> f64 {
        let (first, last) = self.domain();
        if !(first..=last).contains(&x) {
            return f64::NAN;
        }
        let i = self.positions.partition_point(|&p| p <= x).clamp(1, self.positions.len() - 1);
        let t = (x - self.positions[i - 1]) / (self.positions[i] - self.positions[i - 1]);
        let (a, b) = (self.values[i - 1], self.values[i]);
        match t {
            0.0 => a,
            1.0 => b,
            _ if a == 0.0 || b == 0.0 => 0.0,
            _ => a * (b / a).powf(t),
        }
    }

    /// Values on an energy axis, positions being energies in hartree: a spectrum beside the full run's.
    pub fn on(&self, axis: EnergyAxis) -> Vec<f64> {
        axis.values().into_iter().map(|e| self.at(e)).collect()
    }

    /// Probability to be ionized at `times` (rising, a.u.) where the values are rates, 1/a.u. of time: 1 - exp(-∫w dt), Simpson's rule
    /// between the times. Below its first entry the rate is taken for zero.
    ///
    /// # Errors
    /// [`Beyond`].
    pub fn ionization(&self, over: RateOver, field: &Field, times: &[f64]) -> Result<Vec<f64>, Beyond> {
        let (first, last) = self.domain();
        let middles = times.windows(2).map(|pair| 0.5 * (pair[0] + pair[1]));
        let positions = times.iter().copied().chain(middles).map(|t| over.position(field, t));
        let reached = positions.fold(0.0, f64::max);
        if reached > last {
            return Err(Beyond { last, reached });
        }
        let rate = |position: f64| if position < first { 0.0 } else { self.at(position) };
        Ok(tunnelling::ionization(times, |t| rate(over.position(field, t))))
    }

    /// Integrals over half a photon around orders 1 … `orders`, positions being energies in hartree; NaN where the curve does not
    /// cover the order.
    pub fn order_yields(&self, photon: f64, orders: usize) -> Vec<f64> {
        const PANELS: usize = 64;
        (1..=orders)
            .map(|order| {
                let at = |i: usize| self.at((order as f64 - 0.5 + i as f64 / PANELS as f64) * photon);
                let inner: f64 = (1..PANELS).map(at).sum();
                (inner + 0.5 * (at(0) + at(PANELS))) * photon / PANELS as f64
            })
            .collect()
    }
}
