//! The measured cutoff: the knee of the harmonic yields, found from the yields alone.

/// Fewest orders on each side of a knee.
const FEWEST: usize = 3;
/// Decades by which an order may stand above all later ones and still belong to the plateau.
const PLATEAU: f64 = 0.5;
/// Decades below the plateau's median down to which the fall is fitted: further down it steepens.
const FALL: f64 = 3.0;
/// Fewest orders of a plateau.
const LENGTH: f64 = 4.0;
/// Steepest slope of a plateau, decades per order.
const LEVEL: f64 = -0.2;
/// Decades per order by which the fall must be steeper than the plateau.
const STEEPER: f64 = 0.1;

/// A knee of two straight lines in the logarithm of the yields.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cutoff {
    /// Where the lines meet, in orders (photons of the first pulse), not rounded.
    pub order: f64,
    /// Slope before, decades per order.
    pub plateau_slope: f64,
    /// Slope after, decades per order.
    pub fall_slope: f64,
    /// Root-mean-square distance of the yields from the lines, decades.
    pub scatter: f64,
}

/// Knee of `yields` at orders 1, 2, …; `None` where there is no plateau that falls off.
///
/// Neighbouring orders are averaged with weights ¼, ½, ¼, which removes the alternation of even and odd ones. The
/// fit begins at the first order that stands less than half a decade above all later ones (the plateau), and ends
/// where the yield has fallen three decades below the plateau's median.
pub fn measured_cutoff(yields: &[f64]) -> Option<Cutoff> {
    let smooth: Vec<f64> =
        yields.windows(3).map(|w| (0.25 * w[0] + 0.5 * w[1] + 0.25 * w[2]).log10()).collect();
    // Entry i is order i + 2.
    let later = |i: usize| smooth[i + 1..].iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let begin = (0..smooth.len().saturating_sub(1)).find(|&i| smooth[i] <= later(i) + PLATEAU)?;
    let end = (begin + 2 * FEWEST..smooth.len()).find(|&i| smooth[i] < median(&smooth[begin..i]) - FALL)?;
    let points: Vec<(f64, f64)> = (begin..=end).map(|i| ((i + 2) as f64, smooth[i])).collect();
    let knees = (10 * (FEWEST - 1)..10 * (points.len() - FEWEST)).map(|i| points[0].0 + 0.1 * i as f64);
    knees
        .map(|knee| fit(&points, knee))
        .filter(|fit| fit.fall_slope < fit.plateau_slope - STEEPER)
        .min_by(|a, b| a.scatter.total_cmp(&b.scatter))
        .filter(|fit| fit.plateau_slope > LEVEL && fit.order - points[0].0 >= LENGTH)
}

fn median(values: &[f64]) -> f64 {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    sorted[sorted.len() / 2]
}

/// Least squares of y = c + s min(x - knee, 0) + t max(x - knee, 0).
fn fit(points: &[(f64, f64)], knee: f64) -> Cutoff {
    let mut normal = nalgebra::Matrix3::zeros();
    let mut right = nalgebra::Vector3::zeros();
    for &(x, y) in points {
        let row = nalgebra::Vector3::new(1.0, (x - knee).min(0.0), (x - knee).max(0.0));
        normal += row * row.transpose();
        right += row * y;
    }
    let solution = normal.lu().solve(&right).unwrap_or_default();
    let square: f64 = points
        .iter()
        .map(|&(x, y)| {
            y - solution[0] - solution[1] * (x - knee).min(0.0) - solution[2] * (x - knee).max(0.0)
        })
        .map(|r| r * r)
        .sum();
    Cutoff {
        order: knee,
        plateau_slope: solution[1],
        fall_slope: solution[2],
        scatter: (square / points.len() as f64).sqrt(),
    }
}

#[cfg(test)]
mod tests {
    use super::measured_cutoff;

    /// A spectrum drawn by hand (invented): steep start, plateau of even and odd orders, fall, floor.
    #[test]
    fn a_drawn_knee_is_found() {
        for knee in [23.0, 31.5, 40.2] {
            let drawn = |order: f64| {
                let start = 3.0 - 2.0 * (order - 1.0);
                let body = -5.0 - 0.02 * (order - 5.0) - 0.4 * (order - knee).max(0.0);
                start.max(body).max(-16.0)
            };
            let yields: Vec<f64> = (1..90)
                .map(|q| 10f64.powf(drawn(f64::from(q))) * if q % 2 == 0 { 0.05 } else { 1.0 })
                .collect();
            let found = measured_cutoff(&yields).unwrap();
            assert!((found.order - knee).abs() < 1.0, "{found:?} for a knee at {knee}");
        }
    }

    #[test]
    fn a_spectrum_that_only_falls_has_no_cutoff() {
        let yields: Vec<f64> = (1..60).map(|q| 10f64.powf(-0.6 * f64::from(q))).collect();
        assert_eq!(measured_cutoff(&yields), None);
        assert_eq!(measured_cutoff(&[1.0, 0.1]), None);
        assert_eq!(measured_cutoff(&[0.0; 40]), None);
    }
}
