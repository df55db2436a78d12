//! Smooth complex absorber at the edges of the box.

use crate::grid::Axis;

/// c of Manolopoulos, J. Chem. Phys. 117, 9552 (2002), eq. (2.20): √2 K(1/√2) = Γ(1/4)²/(2√(2π)).
pub const C: f64 = 2.622_057_554_292_119_5;
/// δ of eq. (2.26): accuracy parameter; 0.2 reflects 0.6 % at the slowest momentum and less above.
pub const DELTA: f64 = 0.2;

/// y(x) of eq. (2.24): the shape of the absorber, 0 at x = 0 and infinite at x = c.
pub fn shape(x: f64) -> f64 {
    let a = 1.0 - 16.0 / C.powi(3);
    let b = (1.0 - 17.0 / C.powi(3)) / (C * C);
    a * x - b * x.powi(3) + 4.0 / (C - x).powi(2) - 4.0 / (C + x).powi(2)
}

/// Slowest momentum k_min, 1/bohr, that an absorber of this width, bohr, takes in with the reflection of [`DELTA`]:
/// width = c/(2 δ k_min).
pub fn slowest_momentum(width: f64) -> f64 {
    C / (2.0 * DELTA * width)
}

/// Width in bohr of the absorber that takes in momenta from `slowest` on.
pub fn width_for(slowest: f64) -> f64 {
    C / (2.0 * DELTA * slowest)
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

#[cfg(test)]
mod tests {
    use super::{C, shape};

    /// Values by an independent evaluation handed to the project, of the potential in
    /// Manolopoulos, J. Chem. Phys. 117, 9552 (2002); the paper prints a = 0.112449, b = 8.28735e-3, c = 2.62206.
    #[test]
    fn shape_has_the_published_constants() {
        assert!((1.0 - 16.0 / C.powi(3) - 0.112_449).abs() < 5e-7);
        assert!(((1.0 - 17.0 / C.powi(3)) / (C * C) - 8.287_35e-3).abs() < 5e-8);
        for (x, y) in
            [(0.5, 0.533_087_531_444_166_5), (1.0, 1.319_560_964_342_335), (2.0, 10.308_466_482_017_325)]
        {
            assert!((shape(x) - y).abs() < 1e-12, "y({x}) = {}", shape(x));
        }
    }
}
