//! Numbers as people read them: real superscripts, a true minus sign, digits that the step or the error deserves.

/// `10⁻⁶`; the plain `1` and `10` where they are.
pub fn power_of_ten(exponent: i32) -> String {
    match exponent {
        0 => "1".into(),
        1 => "10".into(),
        _ => format!("10{}", superscript(exponent)),
    }
}

/// A tick's value on an axis whose ticks are `step` apart.
pub fn at_step(value: f64, step: f64) -> String {
    let size = value.abs().max(step.abs());
    if !(1e-4..1e6).contains(&size) {
        let exponent = size.log10().floor() as i32;
        let scale = 10_f64.powi(exponent);
        let digits = decimals(step / scale);
        return if value.abs() < step * 1e-6 {
            "0".into()
        } else {
            format!("{}·{}", signed(format!("{:.digits$}", value / scale)), power_of_ten(exponent))
        };
    }
    let digits = decimals(step);
    signed(format!("{value:.digits$}"))
}

/// A value to `figures` significant figures, without trailing zeros.
pub fn significant(value: f64, figures: usize) -> String {
    if !value.is_finite() {
        return if value.is_nan() { "not available".into() } else { signed(format!("{value}")) };
    }
    if value == 0.0 {
        return "0".into();
    }
    let (mantissa, exponent) = split(value, figures);
    if !(-4..6).contains(&exponent) {
        return format!("{}·{}", signed(trimmed(mantissa)), power_of_ten(exponent));
    }
    let digits = figures.saturating_add_signed(-1 - exponent as isize);
    signed(trimmed(format!("{value:.digits$}")))
}

/// A value with its error to two figures of the error: `61.84 ± 0.12`.
pub fn with_error(value: f64, error: f64) -> String {
    if !(value.is_finite() && error.is_finite() && error > 0.0) {
        return significant(value, 6);
    }
    let (_, exponent) = split(value.abs().max(error), 2);
    let scale = if (-4..6).contains(&exponent) { 1.0 } else { 10_f64.powi(exponent) };
    let digits = usize::try_from(1 - split(error / scale, 2).1).unwrap_or(0);
    let pair = format!("{} ± {:.digits$}", signed(format!("{:.digits$}", value / scale)), error / scale);
    if scale == 1.0 { pair } else { format!("({pair})·{}", power_of_ten(exponent)) }
}

/// Mantissa of so many figures and exponent, after rounding: 9.99 to two figures is 1.0 and 1.
fn split(value: f64, figures: usize) -> (String, i32) {
    let text = format!("{value:.*e}", figures.saturating_sub(1));
    let (mantissa, exponent) = text.split_once('e').expect("the format writes an exponent");
    (mantissa.to_owned(), exponent.parse().expect("the exponent is a whole number"))
}

fn superscript(exponent: i32) -> String {
    let raised = |digit| match digit {
        '-' => '⁻',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        '4' => '⁴',
        '5' => '⁵',
        '6' => '⁶',
        '7' => '⁷',
        '8' => '⁸',
        '9' => '⁹',
        _ => '⁰',
    };
    exponent.to_string().chars().map(raised).collect()
}

/// Decimals that show a step of one, two, four or five times a power of ten.
fn decimals(step: f64) -> usize {
    usize::try_from(-(step.abs() * 1.000_001).log10().floor() as i32).unwrap_or(0).min(15)
}

fn trimmed(text: String) -> String {
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

fn signed(text: String) -> String {
    match text.strip_prefix('-') {
        Some(size) if size.chars().all(|c| matches!(c, '0' | '.')) => size.to_owned(),
        Some(size) => format!("−{size}"),
        None => text,
    }
}
