//! The dipole from its acceleration.

/// d(t_n) from d²d/dt² at every sample, with d and dd/dt at the first one.
///
/// Each integration is the sixth-order closed formula through six neighbouring samples, so the error is O(τ⁶).
///
/// # Panics
/// If there are fewer than six samples.
pub fn twice_integrated(
    acceleration: &[f64],
    time_step: f64,
    initial: f64,
    initial_velocity: f64,
) -> Vec<f64> {
    let velocity = integrated(acceleration, time_step, initial_velocity);
    integrated(&velocity, time_step, initial)
}

/// Integrals over the intervals [0, 1] … [2, 3] of the quintic through values at 0 … 5, times 1440
/// (Adams–Moulton coefficients; Hairer, Nørsett, Wanner, Solving Ordinary Differential Equations I, §III.1,
/// recomputed by exact integration of the Lagrange polynomials).
const WEIGHTS: [[f64; 6]; 3] = [
    [475.0, 1427.0, -798.0, 482.0, -173.0, 27.0],
    [-27.0, 637.0, 1022.0, -258.0, 77.0, -11.0],
    [11.0, -93.0, 802.0, 802.0, -93.0, 11.0],
];

fn integrated(values: &[f64], step: f64, initial: f64) -> Vec<f64> {
    let n = values.len();
    assert!(n >= 6, "at least 6 samples, got {n}");
    let mut out = Vec::with_capacity(n);
    let mut sum = initial;
    out.push(sum);
    for i in 0..n - 1 {
        let (first, interval, mirrored) = if i < 2 {
            (0, i, false)
        } else if i + 4 > n - 1 {
            (n - 6, n - 2 - i, true)
        } else {
            (i - 2, 2, false)
        };
        let weights = WEIGHTS[interval.min(2)];
        let part: f64 = (0..6).map(|k| weights[k] * values[first + if mirrored { 5 - k } else { k }]).sum();
        sum += step * part / 1440.0;
        out.push(sum);
    }
    out
}

#[cfg(test)]
mod tests {
    use super::twice_integrated;

    /// Closed form: the second integral of -ω² cos ωt; and polynomials up to degree 5 exactly.
    #[test]
    fn second_integral_of_a_cosine_and_of_a_quintic() {
        let (step, omega) = (0.05, 0.9f64);
        let a: Vec<f64> = (0..400).map(|i| -omega * omega * (omega * step * f64::from(i)).cos()).collect();
        for (i, d) in twice_integrated(&a, step, 1.0, 0.0).into_iter().enumerate() {
            assert!((d - (omega * step * i as f64).cos()).abs() < 1e-9, "{i}: {d}");
        }
        let quartic: Vec<f64> = (0..12).map(|i| f64::from(i).powi(4)).collect();
        for (i, d) in twice_integrated(&quartic, 1.0, 0.5, -2.0).into_iter().enumerate() {
            let t = i as f64;
            let expected = t.powi(6) / 30.0 - 2.0 * t + 0.5;
            assert!((d - expected).abs() < 1e-9 * expected.abs().max(1.0), "{i}: {d} against {expected}");
        }
    }
}
