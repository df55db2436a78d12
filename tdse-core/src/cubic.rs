//! Cubic interpolation of tables given by a user, with its exact derivative and integral.
//!
//! Own code because value, slope and running integral must belong to one and the same curve: a field and the vector
//! potential made from it, a potential and its gradient.

/// Twice continuously differentiable piecewise cubic through given points.
///
/// End slopes are those of the cubic through the four outermost points, so a cubic is reproduced exactly.
#[derive(Clone, Debug, PartialEq)]
pub struct Cubic {
    x: Vec<f64>,
    y: Vec<f64>,
    slope: Vec<f64>,
    /// Integral from the first point to each point.
    integral: Vec<f64>,
}

impl Cubic {
    /// Spline through `(x[i], y[i])`.
    ///
    /// # Panics
    /// If the lengths differ, there are fewer than four points, or `x` does not rise strictly.
    pub fn new(x: Vec<f64>, y: Vec<f64>) -> Self {
        Self::with_end_slopes(x, y, end_slopes)
    }

    /// The same for a function of the distance from a centre, `x[0]`: level there, as the spline through the points and their
    /// mirror images is.
    ///
    /// # Panics
    /// As [`Self::new`].
    pub fn even(x: Vec<f64>, y: Vec<f64>) -> Self {
        Self::with_end_slopes(x, y, |x, y| [0.0, end_slopes(x, y)[1]])
    }

    fn with_end_slopes(x: Vec<f64>, y: Vec<f64>, ends: impl Fn(&[f64], &[f64]) -> [f64; 2]) -> Self {
        assert_eq!(x.len(), y.len(), "as many values as positions");
        assert!(x.len() >= 4, "a cubic needs at least 4 points, got {}", x.len());
        assert!(x.windows(2).all(|w| w[0] < w[1]), "positions must rise strictly");
        let slope = spline_slopes(&x, &y, ends(&x, &y));
        let mut integral = vec![0.0; x.len()];
        for i in 1..x.len() {
            let h = x[i] - x[i - 1];
            integral[i] =
                integral[i - 1] + h * (y[i - 1] + y[i]) / 2.0 + h * h * (slope[i - 1] - slope[i]) / 12.0;
        }
        Self { x, y, slope, integral }
    }

    /// First and last position.
    pub fn domain(&self) -> (f64, f64) {
        (self.x[0], self.x[self.x.len() - 1])
    }

    /// Smallest distance between neighbouring positions.
    pub fn spacing(&self) -> f64 {
        self.x.windows(2).map(|w| w[1] - w[0]).fold(f64::INFINITY, f64::min)
    }

    /// Positions and values, as given.
    pub fn points(&self) -> (&[f64], &[f64]) {
        (&self.x, &self.y)
    }

    /// Smallest of the values given.
    pub fn lowest(&self) -> f64 {
        self.y.iter().copied().fold(f64::INFINITY, f64::min)
    }

    /// Value at `x`; outside the domain the value at its end.
    pub fn value(&self, x: f64) -> f64 {
        let (i, h, t) = self.locate(x);
        let (m0, m1) = (h * self.slope[i], h * self.slope[i + 1]);
        let (y0, y1) = (self.y[i], self.y[i + 1]);
        let c2 = 3.0 * (y1 - y0) - 2.0 * m0 - m1;
        let c3 = 2.0 * (y0 - y1) + m0 + m1;
        y0 + t * (m0 + t * (c2 + t * c3))
    }

    /// Derivative at `x`; zero outside the domain.
    pub fn slope(&self, x: f64) -> f64 {
        let (first, last) = self.domain();
        if x < first || x > last {
            return 0.0;
        }
        let (i, h, t) = self.locate(x);
        let (m0, m1) = (h * self.slope[i], h * self.slope[i + 1]);
        let (y0, y1) = (self.y[i], self.y[i + 1]);
        let c2 = 3.0 * (y1 - y0) - 2.0 * m0 - m1;
        let c3 = 2.0 * (y0 - y1) + m0 + m1;
        (m0 + t * (2.0 * c2 + 3.0 * t * c3)) / h
    }

    /// Integral from the first position to `x`, the curve being zero outside its domain.
    pub fn integral(&self, x: f64) -> f64 {
        let (i, h, t) = self.locate(x);
        let (m0, m1) = (h * self.slope[i], h * self.slope[i + 1]);
        let (y0, y1) = (self.y[i], self.y[i + 1]);
        let c2 = 3.0 * (y1 - y0) - 2.0 * m0 - m1;
        let c3 = 2.0 * (y0 - y1) + m0 + m1;
        self.integral[i] + h * t * (y0 + t * (m0 / 2.0 + t * (c2 / 3.0 + t * c3 / 4.0)))
    }

    /// Interval index, its length, and the position in it from 0 to 1, held at the ends outside.
    fn locate(&self, x: f64) -> (usize, f64, f64) {
        let after = self.x.partition_point(|&p| p <= x);
        let i = after.clamp(1, self.x.len() - 1) - 1;
        let h = self.x[i + 1] - self.x[i];
        (i, h, ((x - self.x[i]) / h).clamp(0.0, 1.0))
    }
}

/// Slopes that make the second derivative continuous, with given end slopes (tridiagonal elimination).
fn spline_slopes(x: &[f64], y: &[f64], ends: [f64; 2]) -> Vec<f64> {
    let n = x.len();
    let h: Vec<f64> = x.windows(2).map(|w| w[1] - w[0]).collect();
    let d: Vec<f64> = (0..n - 1).map(|i| (y[i + 1] - y[i]) / h[i]).collect();
    let mut slope = vec![0.0; n];
    [slope[0], slope[n - 1]] = ends;
    let mut diagonal = vec![1.0; n];
    let last = slope[n - 1];
    for i in 1..n - 1 {
        let (lower, upper) = (h[i], h[i - 1]);
        let right = 3.0 * (h[i] * d[i - 1] + h[i - 1] * d[i]);
        let carried = if i == 1 { 0.0 } else { h[i - 2] / diagonal[i - 1] };
        diagonal[i] = 2.0 * (lower + upper) - lower * carried;
        let before = if i == 1 { slope[0] } else { slope[i - 1] / diagonal[i - 1] };
        slope[i] = right - lower * before;
    }
    slope[n - 1] = last;
    for i in (1..n - 1).rev() {
        slope[i] = (slope[i] - h[i - 1] * slope[i + 1]) / diagonal[i];
    }
    slope
}

/// Derivatives at the ends of the cubics through the four outermost points.
fn end_slopes(x: &[f64], y: &[f64]) -> [f64; 2] {
    let last = x.len() - 1;
    [[0, 1, 2, 3], [last, last - 1, last - 2, last - 3]]
        .map(|points| end_slope(points.map(|i| x[i]), points.map(|i| y[i])))
}

/// Derivative at the first of four points of the cubic through them.
fn end_slope(x: [f64; 4], y: [f64; 4]) -> f64 {
    (1..4)
        .map(|j| {
            let weight: f64 = (1..4).filter(|&k| k != j).map(|k| (x[0] - x[k]) / (x[j] - x[k])).product();
            (y[j] - y[0]) / (x[j] - x[0]) * weight
        })
        .sum()
}

#[cfg(test)]
mod tests {
    use super::Cubic;

    /// Closed form: a cubic polynomial is its own spline, with its derivative and integral.
    #[test]
    fn a_cubic_is_reproduced_with_slope_and_integral() {
        let f = |x: f64| 1.0 - 2.0 * x + 0.5 * x * x - 0.25 * x.powi(3);
        let slope = |x: f64| -2.0 + x - 0.75 * x * x;
        let primitive = |x: f64| x - x * x + x.powi(3) / 6.0 - x.powi(4) / 16.0;
        let x = vec![-1.0, -0.3, 0.1, 0.9, 1.4, 2.0];
        let spline = Cubic::new(x.clone(), x.iter().map(|&x| f(x)).collect());
        for i in 0..=60 {
            let at = -1.0 + 0.05 * f64::from(i);
            assert!((spline.value(at) - f(at)).abs() < 1e-13, "value at {at}");
            assert!((spline.slope(at) - slope(at)).abs() < 1e-12, "slope at {at}");
            assert!(
                (spline.integral(at) - primitive(at) + primitive(-1.0)).abs() < 1e-13,
                "integral at {at}"
            );
        }
    }

    /// Closed form: with a level start it is half of the spline through the points and their mirror images.
    #[test]
    fn an_even_spline_is_half_of_the_mirrored_one() {
        let f = |x: f64| (-0.7 * x * x).exp();
        let x: Vec<f64> = (0..=20).map(|i| 0.2 * f64::from(i)).collect();
        let mirrored: Vec<f64> = x[1..].iter().rev().map(|x| -x).chain(x.iter().copied()).collect();
        let whole = Cubic::new(mirrored.clone(), mirrored.into_iter().map(f).collect());
        let half = Cubic::even(x.clone(), x.into_iter().map(f).collect());
        assert_eq!(half.slope(0.0), 0.0);
        for i in 0..=80 {
            let at = 0.05 * f64::from(i);
            assert!((half.value(at) - whole.value(at)).abs() < 1e-15, "value at {at}");
            assert!((half.slope(at) - whole.slope(at)).abs() < 1e-14, "slope at {at}");
        }
    }

    /// Known order of cubic splines (de Boor, A Practical Guide to Splines, ch. V): error ~ h⁴.
    #[test]
    fn error_falls_with_the_fourth_power_of_the_spacing() {
        let error = |n: usize| {
            let x: Vec<f64> = (0..=n).map(|i| 6.0 * i as f64 / n as f64).collect();
            let spline = Cubic::new(x.clone(), x.iter().map(|x| x.sin()).collect());
            (0..1000)
                .map(|i| 0.006 * f64::from(i))
                .map(|x| (spline.value(x) - x.sin()).abs())
                .fold(0.0, f64::max)
        };
        let order = (error(100) / error(200)).log2();
        assert!((order - 4.0).abs() < 0.3, "order {order}");
    }
}
