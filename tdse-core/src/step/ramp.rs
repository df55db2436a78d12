//! The factor e^{i(α + βj)} on every point j of an axis, without a trigonometric call per point.

use num_complex::Complex;

/// Points per block; also the block of every sum over the grid, so that sums do not depend on threads.
pub const BLOCK: usize = 64;

/// e^{i(α + βj)} as coarse\[j / BLOCK\] · fine\[j mod BLOCK\]: each factor is exact to rounding, so nothing builds up along
/// the axis.
#[derive(Clone, Debug)]
pub struct Ramp {
    /// e^{iβl} for l < [`BLOCK`].
    pub fine: [Complex<f64>; BLOCK],
    /// e^{i(α + β BLOCK b)} for every block b.
    pub coarse: Vec<Complex<f64>>,
}

impl Ramp {
    /// A ramp of ones for an axis of `points` points.
    pub fn new(points: usize) -> Self {
        let one = Complex::new(1.0, 0.0);
        Self { fine: [one; BLOCK], coarse: vec![one; points.div_ceil(BLOCK)] }
    }

    /// Sets α = `start` and β = `slope`, rad.
    pub fn set(&mut self, start: f64, slope: f64) {
        powers(Complex::new(1.0, 0.0), slope, &mut self.fine);
        powers(Complex::cis(start), slope * BLOCK as f64, &mut self.coarse);
    }
}

/// first·e^{iθl} for every l by doubling: the exponent's bits one after the other, so at most log₂(length) products
/// deep.
pub(super) fn powers(first: Complex<f64>, theta: f64, out: &mut [Complex<f64>]) {
    out[0] = first;
    let mut done = 1;
    while done < out.len() {
        let factor = Complex::cis(theta * done as f64);
        let more = done.min(out.len() - done);
        let (ready, rest) = out.split_at_mut(done);
        for (new, old) in rest[..more].iter_mut().zip(&*ready) {
            *new = *old * factor;
        }
        done += more;
    }
}

#[cfg(test)]
mod tests {
    use super::{BLOCK, Ramp};
    use num_complex::Complex;

    /// Oracle: cos and sin at every point.
    #[test]
    fn equals_the_exponential_at_every_point() {
        for (start, slope) in [(0.3, 1e-3), (-2.0, 0.7), (100.0, -0.31), (0.0, 0.0)] {
            let mut ramp = Ramp::new(1000);
            ramp.coarse.fill(Complex::new(f64::NAN, f64::NAN));
            ramp.set(start, slope);
            for j in 0..1000 {
                let found = ramp.coarse[j / BLOCK] * ramp.fine[j % BLOCK];
                let expected = Complex::cis(start + slope * j as f64);
                // The angle itself, up to 800 rad, is rounded to 1e-13.
                assert!((found - expected).norm() < 2e-13, "{j}: {found} against {expected}");
                assert!((found.norm() - 1.0).abs() < 2e-15, "{j}: modulus {}", found.norm());
            }
        }
    }
}
