//! Numbers and tables for people.

use std::fmt;

use crate::report::number::with_error;

/// A number with five significant digits, scientific where that is shorter.
pub fn number(value: f64) -> String {
    if value == 0.0 {
        return "0".into();
    }
    if !value.is_finite() {
        return "none".into();
    }
    let exponent = value.abs().log10().floor();
    if !(-3.0..6.0).contains(&exponent) {
        return format!("{value:.4e}");
    }
    let decimals = (4.0 - exponent).max(0.0) as usize;
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').into() } else { text }
}

/// A number with its error bar, in letters that every terminal has.
pub fn with_bar(value: f64, error: f64) -> String {
    let text = with_error(value, error);
    text.replace('\u{2212}', "-").replace('\u{b1}', "+-").replace('\u{b7}', "*")
}

/// An amount of memory.
pub fn bytes(value: u64) -> String {
    let value = value as f64;
    [(1e9, "GB"), (1e6, "MB"), (1e3, "kB")]
        .into_iter()
        .find(|(scale, _)| value >= *scale)
        .map_or_else(|| format!("{value} B"), |(scale, unit)| format!("{:.1} {unit}", value / scale))
}

/// A length of time, two units at most.
pub fn duration(seconds: f64) -> String {
    let whole = seconds.round() as u64;
    match whole {
        _ if seconds < 0.095 => format!("{:.0} ms", (seconds * 1e3).max(1.0)),
        _ if seconds < 10.0 => format!("{seconds:.1} s"),
        0..60 => format!("{whole} s"),
        60..3600 => format!("{} min {} s", whole / 60, whole % 60),
        3600..86_400 => format!("{} h {} min", whole / 3600, whole / 60 % 60),
        _ => format!("{} d {} h", whole / 86_400, whole / 3600 % 24),
    }
}

/// Rows of name, value, unit and remark, aligned when displayed.
#[derive(Clone, Debug, Default)]
pub struct Table {
    rows: Vec<[String; 4]>,
}

impl Table {
    /// No rows yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a row.
    pub fn row(&mut self, name: &str, value: impl Into<String>, unit: &str, remark: &str) {
        self.rows.push([name.into(), value.into(), unit.into(), remark.into()]);
    }
}

impl fmt::Display for Table {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let width =
            |column: usize| self.rows.iter().map(|row| row[column].chars().count()).max().unwrap_or(0);
        let (name, value, unit) = (width(0), width(1), width(2));
        for [a, b, c, d] in &self.rows {
            writeln!(f, "{}", format!("  {a:name$}  {b:>value$} {c:unit$}  {d}").trim_end())?;
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_short() {
        let cases = [
            (0.0, "0"),
            (1.5, "1.5"),
            (13.605_693, "13.606"),
            (1e14, "1.0000e14"),
            (-0.5, "-0.5"),
            (800.0, "800"),
        ];
        for (value, text) in cases {
            assert_eq!(number(value), text);
        }
    }

    #[test]
    fn durations_have_two_units() {
        let cases = [
            (0.02, "20 ms"),
            (3.21, "3.2 s"),
            (61.0, "1 min 1 s"),
            (7322.0, "2 h 2 min"),
            (90_000.0, "1 d 1 h"),
        ];
        for (seconds, text) in cases {
            assert_eq!(duration(seconds), text);
        }
    }
}
