//! The coarse ladder that choices stand on.

/// Rungs of a decade.
const RUNGS: [&str; 10] = ["1", "1.25", "1.5", "2", "2.5", "3", "4", "5", "6", "8"];

/// Largest rung that is not above `value`.
///
/// # Panics
/// If `value` is not a positive number.
pub fn at_most(value: f64) -> f64 {
    rungs_around(value).filter(|rung| *rung <= value * (1.0 + 1e-12)).fold(0.0, f64::max)
}

/// Smallest rung that is not below `value`. Panics as [`at_most`].
pub fn at_least(value: f64) -> f64 {
    rungs_around(value).filter(|rung| *rung >= value * (1.0 - 1e-12)).fold(f64::INFINITY, f64::min)
}

/// The rungs of the value's decade and the next one, as their decimal text reads: 0.15, not 1.5 times 0.1.
fn rungs_around(value: f64) -> impl Iterator<Item = f64> {
    assert!(value > 0.0 && value.is_finite(), "a ladder needs a positive number, got {value}");
    let decade = value.log10().floor() as i32;
    (decade - 1..=decade + 1)
        .flat_map(|decade| RUNGS.iter().filter_map(move |rung| format!("{rung}e{decade}").parse().ok()))
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
