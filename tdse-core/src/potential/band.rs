//! What a grid can hold of a potential that is not smooth.
//!
//! Sampled as it is, a kink, or the ripple of a table's spline, has momenta beyond the grid's, which the grid takes for small
//! ones: forces that are not there. Without them a potential is wrong only where it couples to momenta that the grid
//! lacks anyhow, an error of second order.

use std::f64::consts::PI;

use super::Potential;
use crate::grid::Axis;

/// Momentum at which half passes, in units of the grid's largest. A kink is felt by the force on the electron too, at a
/// part ω² of its size: only what leaves nothing to fold back there, as products of two waves do, keeps Ehrenfest's law.
const CUT: f64 = 0.75;
/// Width of the window over the sinc, in spacings: momenta up to 0.55 of the grid's largest pass, from 0.95 none.
const WINDOW: f64 = 12.0;
/// Reach of the filter to each side, in spacings: the window is 1e-12 there.
const REACH: usize = 90;
/// Points and weights of the Gauss–Legendre rule of order eight on [-1, 1] (Abramowitz, Stegun, table 25.4); both signs.
const GAUSS: [(f64, f64); 4] = [
    (0.183_434_642_495_649_8, 0.362_683_783_378_362),
    (0.525_532_409_916_329, 0.313_706_645_877_887_27),
    (0.796_666_477_413_626_7, 0.222_381_034_453_374_48),
    (0.960_289_856_497_536_3, 0.101_228_536_290_376_26),
];
/// Quadrature points of a cell: eight in each quarter, for a kink at zero is where two cells meet; a table's knots, where
/// its third derivative jumps, may lie anywhere.
const NODES: usize = 32;
/// Sums run side by side.
const LANES: usize = 8;

/// Values and slopes of `potential` on the points of `axis`, without momenta that the axis does not hold.
///
/// An even potential stays so bit by bit.
pub(super) fn within_the_band(potential: &Potential, axis: Axis) -> [Vec<f64>; 2] {
    let offsets = nodes();
    let filter = filter(&offsets);
    let cells = axis.points + 2 * REACH;
    let first = axis.position(0) - REACH as f64 * axis.spacing;
    let positions = (0..cells).flat_map(|cell| {
        let middle = first + cell as f64 * axis.spacing;
        offsets.iter().map(move |(offset, _)| middle + offset * axis.spacing)
    });
    let (values, slopes): (Vec<f64>, Vec<f64>) = positions.map(|x| potential.value_and_slope(x)).unzip();
    let filtered = |raw: &[f64]| -> Vec<f64> {
        let windows = raw.windows(filter.len()).step_by(NODES);
        windows.map(|window| dot(window, &filter)).collect()
    };
    let [mut v, mut slope] = [filtered(&values), filtered(&slopes)];
    if potential.is_even() {
        for (left, right) in (0..axis.points / 2).zip((0..axis.points).rev()) {
            (v[right], slope[right]) = (v[left], -slope[left]);
        }
    }
    [v, slope]
}

/// Sum of products of two arrays whose length is a multiple of [`LANES`].
fn dot(a: &[f64], b: &[f64]) -> f64 {
    let mut sums = [0.0; LANES];
    for (a, b) in a.chunks_exact(LANES).zip(b.chunks_exact(LANES)) {
        for i in 0..LANES {
            sums[i] += a[i] * b[i];
        }
    }
    sums.iter().sum()
}

/// Offsets from a cell's middle, in spacings, rising, with their weights.
fn nodes() -> Vec<(f64, f64)> {
    let quarter = |middle: f64| {
        let rising = GAUSS.iter().rev().map(|&(x, w)| (-x, w)).chain(GAUSS);
        rising.map(move |(x, w)| (middle + 0.125 * x, 0.125 * w))
    };
    [-0.375, -0.125, 0.125, 0.375].into_iter().flat_map(quarter).collect()
}

/// Weights of the quadrature points of 2 `REACH` + 1 cells: a sinc under a Gaussian window, their sum made one.
fn filter(offsets: &[(f64, f64)]) -> Vec<f64> {
    let reach = REACH as f64;
    let weights = (0..=2 * REACH).flat_map(|cell| {
        offsets.iter().map(move |(offset, weight)| {
            let x = cell as f64 - reach + offset;
            let sinc = (CUT * PI * x).sin() / (PI * x);
            weight * sinc * (-0.5 * (x / WINDOW).powi(2)).exp()
        })
    });
    let weights: Vec<f64> = weights.collect();
    let sum: f64 = weights.iter().sum();
    weights.iter().map(|w| w / sum).collect()
}

#[cfg(test)]
mod tests {
    use super::{NODES, REACH, filter, nodes};
    use std::f64::consts::PI;

    /// What a filter is for: low waves as they are, and nothing of those that the grid cannot hold.
    #[test]
    fn waves_that_the_grid_holds_pass_and_no_others() {
        let (offsets, filter) = (nodes(), filter(&nodes()));
        assert_eq!(filter.len(), (2 * REACH + 1) * NODES);
        let passed = |momentum: f64| -> f64 {
            let at = |i: usize| (i / NODES) as f64 - REACH as f64 + offsets[i % NODES].0;
            filter.iter().enumerate().map(|(i, w)| w * (momentum * PI * at(i)).cos()).sum()
        };
        for momentum in [0.0, 0.1, 0.4, 0.55] {
            assert!((passed(momentum) - 1.0).abs() < 1e-12, "{momentum}: {}", passed(momentum));
        }
        for momentum in [0.95, 1.2, 1.5, 2.0, 4.0] {
            assert!(passed(momentum).abs() < 1e-12, "{momentum}: {}", passed(momentum));
        }
    }
}
