//! Root of a continuous function between two points of opposite sign.

/// A bracket: position and value at both ends.
pub(crate) type Bracket = [(f64, f64); 2];

/// Root of `f` in a bracket whose end values differ in sign, to `tolerance` in the position
/// (Brent, Algorithms for Minimization without Derivatives, 1973, ch. 4).
///
/// # Panics
/// If the end values have the same sign.
pub(crate) fn brent(mut f: impl FnMut(f64) -> f64, bracket: Bracket, tolerance: f64) -> f64 {
    let [(mut a, mut fa), (mut b, mut fb)] = bracket;
    assert!(fa * fb <= 0.0, "a root needs a change of sign, got f({a}) = {fa}, f({b}) = {fb}");
    let (mut c, mut fc) = (a, fa);
    let mut d = b - a;
    let mut e = d;
    for _ in 0..200 {
        if fb * fc > 0.0 {
            (c, fc) = (a, fa);
            d = b - a;
            e = d;
        }
        if fc.abs() < fb.abs() {
            (a, fa, b, fb, c, fc) = (b, fb, c, fc, b, fb);
        }
        let close = 2.0 * f64::EPSILON * b.abs() + 0.5 * tolerance;
        let half = 0.5 * (c - b);
        if half.abs() <= close || fb == 0.0 {
            return b;
        }
        let step = interpolate([a, b, c], [fa, fb, fc], half);
        if step * half > 0.0 && 2.0 * step.abs() < (3.0 * half.abs() - close).min(e.abs()) {
            e = d;
            d = step;
        } else {
            d = half;
            e = half;
        }
        (a, fa) = (b, fb);
        b += if d.abs() > close { d } else { close.copysign(half) };
        fb = f(b);
    }
    b
}

/// Secant or inverse quadratic step from `b`, where `half` leads to the middle of `b` and `c`.
fn interpolate([a, b, c]: [f64; 3], [fa, fb, fc]: [f64; 3], half: f64) -> f64 {
    let s = fb / fa;
    if a == c {
        return -2.0 * half * s / (1.0 - s);
    }
    let (q, r) = (fa / fc, fb / fc);
    -s * (2.0 * half * q * (q - r) - (b - a) * (r - 1.0)) / ((q - 1.0) * (r - 1.0) * (s - 1.0))
}

#[cfg(test)]
mod tests {
    use super::brent;

    /// Dottie number, the root of cos x = x (OEIS A003957), and a root of high multiplicity in the derivative.
    #[test]
    fn known_roots() {
        let f = |x: f64| x.cos() - x;
        let root = brent(f, [(0.0, f(0.0)), (1.0, f(1.0))], 1e-15);
        assert!((root - 0.739_085_133_215_160_6).abs() < 1e-14, "{root}");
        let cubed = |x: f64| (x - 0.3).powi(3);
        let root = brent(cubed, [(-1.0, cubed(-1.0)), (2.0, cubed(2.0))], 1e-12);
        assert!((root - 0.3).abs() < 1e-5, "{root}");
    }
}
