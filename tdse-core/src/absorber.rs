//! Smooth complex absorber at the edges of the box.

use crate::grid::{Axis, Grid};
use crate::problem::Absorber;

/// c of Manolopoulos, J. Chem. Phys. 117, 9552 (2002), eq. (2.20): √2 K(1/√2) = Γ(1/4)²/(2√(2π)).
pub const C: f64 = 2.622_057_554_292_119_5;
/// δ of eq. (2.26) there: accuracy parameter. Smaller than the 0.2 recommended there: fast electrons must be taken too,
/// to a reflection of 1e-12 ([`reflection`]).
pub const DELTA: f64 = 0.125;
/// Envelope of the reflection by k times the width, measured; see [`reflection`].
const REFLECTION: (f64, f64, f64) = (1.1e-4, 10.0, 8.4);

/// y(x): the shape of the absorber, 0 at x = 0 and infinite at x = c.
///
/// It is 4/(c-x)² + 4/(c+x)² - 8/c², the even one (Gonzalez-Lezana, Rackham, Manolopoulos, J. Chem. Phys. 120, 2247
/// (2004)), which begins as a parabola. The one of 2002 begins as a straight line, and that kink reflects (14/(k w))⁶ of
/// the electrons however fast they are: no good against a plateau of 1e-8 of the fundamental.
pub fn shape(x: f64) -> f64 {
    4.0 / (C - x).powi(2) + 4.0 / (C + x).powi(2) - 8.0 / (C * C)
}

/// Upper bound of the part of |ψ|² of momentum `momentum`, 1/bohr, that an absorber of this `width`, bohr, reflects.
///
/// An envelope fitted by us to an integration of the stationary equation, from k w = 10 to 100; below, electrons are
/// reflected as if there were little absorber.
pub fn reflection(momentum: f64, width: f64) -> f64 {
    let (at, there, power) = REFLECTION;
    (at * (there / (momentum * width)).powf(power)).min(1.0)
}

/// Width in bohr times momentum in 1/bohr at which [`reflection`] is `part`.
pub fn width_times_momentum(part: f64) -> f64 {
    let (at, there, power) = REFLECTION;
    there * (at / part).powf(1.0 / power)
}

/// Slowest momentum k_min = c/(2 δ width), 1/bohr, that an absorber of this width, bohr, takes in: 4e-5 of it is
/// reflected, less above, and most of it at half that momentum.
pub fn slowest_momentum(width: f64) -> f64 {
    C / (2.0 * DELTA * width)
}

/// W(x) ≥ 0 with V_abs = -iW, hartree, on the points of `axis`: W = (k_min²/2) y(2 δ k_min (|x| - x_1)) over `width`
/// bohr at each side.
///
/// # Panics
/// If `width` is not positive or both sides overlap.
pub fn strength(axis: Axis, width: f64) -> Vec<f64> {
    let inner = 0.5 * axis.extent() - width;
    assert!(width > 0.0 && inner > 0.0, "0 < width < half the box: {width} of {} bohr", axis.extent());
    let slowest = slowest_momentum(width);
    let depth = |x: f64| (2.0 * DELTA * slowest * (x.abs() - inner)).max(0.0);
    axis.positions().map(|x| 0.5 * slowest * slowest * shape(depth(x))).collect()
}

/// W on every point of a two-dimensional `grid`, hartree: on all sides the sum of both axes, or round, infinite beyond the
/// circle that touches the nearer edges.
///
/// # Panics
/// If the grid has one dimension; as [`strength`].
pub fn on_grid(grid: &Grid, absorber: Absorber) -> Vec<f64> {
    let y = grid.y.expect("a plane has two dimensions");
    match absorber {
        Absorber::None => vec![0.0; grid.len()],
        Absorber::Smooth { width } => {
            let along_x = strength(grid.x, width);
            strength(y, width).iter().flat_map(|b| along_x.iter().map(move |a| a + b)).collect()
        }
        Absorber::Round { width } => {
            let radius = 0.5 * grid.x.extent().min(y.extent());
            assert!(width > 0.0 && width < radius, "0 < width < half the box: {width} of {radius} bohr");
            let slowest = slowest_momentum(width);
            let depth = |r: f64| (2.0 * DELTA * slowest * (r - radius + width)).max(0.0);
            let at = |r: f64| {
                if r < radius { 0.5 * slowest * slowest * shape(depth(r)) } else { f64::INFINITY }
            };
            grid.y_positions().flat_map(|y| grid.x.positions().map(move |x| at(x.hypot(y)))).collect()
        }
    }
}

#[cfg(test)]
mod tests {
    use super::{C, reflection, shape, width_times_momentum};

    /// Closed form of the leading terms: y = 24 x²/c⁴ + 40 x⁴/c⁶ + …, and 4/(c-x)² at the end.
    #[test]
    fn shape_begins_as_a_parabola_and_ends_infinite() {
        let x = 1e-2;
        let series = 24.0 * (x * x) / C.powi(4) + 40.0 * x.powi(4) / C.powi(6);
        assert!((shape(x) / series - 1.0).abs() < 1e-8, "{} against {series}", shape(x));
        let s = 1e-4;
        assert!((shape(C - s) * s * s / 4.0 - 1.0).abs() < 1e-7);
    }

    #[test]
    fn width_and_reflection_are_inverse() {
        for part in [1e-5, 1e-8, 1e-12] {
            assert!((reflection(0.3, width_times_momentum(part) / 0.3) / part - 1.0).abs() < 1e-9);
        }
    }
}
