//! The gamma function.

use std::f64::consts::PI;

/// Coefficients for g = 7 (Lanczos, J. SIAM Numer. Anal. B 1, 86 (1964); values in common use, from memory, checked below).
const LANCZOS: [f64; 9] = [
    0.999_999_999_999_809_9,
    676.520_368_121_885_1,
    -1_259.139_216_722_402_8,
    771.323_428_777_653_1,
    -176.615_029_162_140_6,
    12.507_343_278_686_905,
    -0.138_571_095_265_720_12,
    9.984_369_578_019_572e-6,
    1.505_632_735_149_311_6e-7,
];

/// Γ(x) for x > 0, to 1e-13 of its value.
pub(super) fn gamma(x: f64) -> f64 {
    assert!(x > 0.0, "gamma function at x > 0, got {x}");
    if x < 0.5 {
        return PI / ((PI * x).sin() * gamma(1.0 - x));
    }
    let x = x - 1.0;
    let sum: f64 =
        LANCZOS.iter().enumerate().map(|(i, c)| if i == 0 { *c } else { c / (x + i as f64) }).sum();
    let t = x + 7.5;
    (2.0 * PI).sqrt() * t.powf(x + 0.5) * (-t).exp() * sum
}

#[cfg(test)]
mod tests {
    use super::gamma;

    /// Γ(n+1) = n!, Γ(½) = √π, and Γ(x+1) = xΓ(x).
    #[test]
    fn factorials_and_halves() {
        let mut factorial = 1.0;
        for n in 1..15 {
            factorial *= f64::from(n);
            assert!((gamma(f64::from(n) + 1.0) / factorial - 1.0).abs() < 1e-13, "{n}");
        }
        assert!((gamma(0.5) / std::f64::consts::PI.sqrt() - 1.0).abs() < 1e-13);
        for x in [0.1, 0.37, 1.9, 4.2] {
            assert!((gamma(x + 1.0) / (x * gamma(x)) - 1.0).abs() < 1e-13, "{x}");
        }
    }
}
