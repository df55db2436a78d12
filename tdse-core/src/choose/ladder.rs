//! The coarse ladder that choices stand on.

/// Rungs of a decade.
const RUNGS: [f64; 10] = [1.0, 1.25, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0];

/// Largest rung that is not above `value`.
///
/// # Panics
/// If `value` is not a positive number.
pub fn at_most(value: f64) -> f64 {
    let decade = decade(value);
    let rung = RUNGS.iter().rev().map(|r| r * decade).find(|r| *r <= value * (1.0 + 1e-12));
    rung.unwrap_or(decade)
}

/// Smallest rung that is not below `value`. Panics as [`at_most`].
pub fn at_least(value: f64) -> f64 {
    let decade = decade(value);
    let rung = RUNGS.iter().map(|r| r * decade).find(|r| *r >= value * (1.0 - 1e-12));
    rung.unwrap_or(10.0 * decade)
}

fn decade(value: f64) -> f64 {
    assert!(value > 0.0 && value.is_finite(), "a ladder needs a positive number, got {value}");
    // Written out as text and read back, so that 0.1 is 0.1 and not 10^-1 with a rounding error.
    format!("1e{}", value.log10().floor()).parse().unwrap_or(1.0)
}

#[cfg(test)]
mod tests {
    use super::{at_least, at_most};

    #[test]
    fn rungs_enclose_the_value() {
        for value in [0.003, 0.0125, 0.19, 0.4, 0.999, 1.0, 7.3, 55.0, 99.0, 1234.0] {
            let (low, high) = (at_most(value), at_least(value));
            assert!(low <= value * (1.0 + 1e-9) && value <= high * (1.0 + 1e-9), "{low} ≤ {value} ≤ {high}");
            assert!(high / low < 1.4, "{low} and {high} lie close");
            assert_eq!((at_most(low), at_least(high)), (low, high), "a rung is its own");
        }
    }
}
