//! A potential of the plane given by its values on a rectangle of positions.

use super::PotentialOnGrid;
use crate::cubic::Cubic;
use crate::grid::Grid;

/// Values on every pair of rising positions along x and y, joined by the product of cubic splines along both.
#[derive(Clone, Debug, PartialEq)]
pub struct Rectangle {
    y: Vec<f64>,
    /// V along x, one for every y.
    rows: Vec<Cubic>,
}

/// A grid reaches beyond the values of a [`Rectangle`].
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[error("the grid reaches from {} to {} bohr along {axis}; the potential is known from {} to {} bohr", reach.0, reach.1, known.0, known.1)]
pub struct OutsideRectangle {
    /// Axis along which it does.
    pub axis: &'static str,
    /// First and last point of the grid there, bohr.
    pub reach: (f64, f64),
    /// First and last position of the values, bohr.
    pub known: (f64, f64),
}

impl Rectangle {
    /// Of `values` in hartree, shape `[y.len(), x.len()]`, at positions in bohr.
    ///
    /// # Panics
    /// If the number of values is another; as [`Cubic::new`] along either axis.
    pub fn new(x: &[f64], y: Vec<f64>, values: &[f64]) -> Self {
        assert_eq!(values.len(), x.len() * y.len(), "a value for every pair of positions");
        assert!(y.len() >= 4, "a cubic needs at least 4 points, got {}", y.len());
        assert!(y.windows(2).all(|w| w[0] < w[1]), "positions must rise strictly");
        let rows = values.chunks(x.len()).map(|row| Cubic::new(x.to_vec(), row.to_vec())).collect();
        Self { y, rows }
    }

    /// First and last position along x and along y, bohr.
    pub fn domain(&self) -> [(f64, f64); 2] {
        [self.rows[0].domain(), (self.y[0], self.y[self.y.len() - 1])]
    }

    /// Values and exact gradient on the points of a two-dimensional `grid`.
    ///
    /// # Errors
    /// [`OutsideRectangle`] where the grid reaches beyond the values.
    ///
    /// # Panics
    /// If `grid` has one dimension.
    pub fn on_grid(&self, grid: &Grid) -> Result<PotentialOnGrid, OutsideRectangle> {
        let axes = [("x", grid.x), ("y", grid.y.expect("a plane has two dimensions"))];
        for ((axis, points), known) in axes.into_iter().zip(self.domain()) {
            let reach = (points.position(0), points.position(points.points - 1));
            if reach.0 < known.0 || reach.1 > known.1 {
                return Err(OutsideRectangle { axis, reach, known });
            }
        }
        let mut on_grid = PotentialOnGrid {
            values: vec![0.0; grid.len()],
            gradient: [vec![0.0; grid.len()], vec![0.0; grid.len()]],
        };
        let nx = grid.x.points;
        for (i, x) in grid.x.positions().enumerate() {
            let along_y = |of: fn(&Cubic, f64) -> f64| {
                Cubic::new(self.y.clone(), self.rows.iter().map(|row| of(row, x)).collect())
            };
            let (value, slope) = (along_y(Cubic::value), along_y(Cubic::slope));
            for (j, y) in grid.y_positions().enumerate() {
                let at = j * nx + i;
                on_grid.values[at] = value.value(y);
                on_grid.gradient[0][at] = slope.value(y);
                on_grid.gradient[1][at] = value.slope(y);
            }
        }
        Ok(on_grid)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn positions(count: usize, first: f64, last: f64) -> Vec<f64> {
        (0..count).map(|i| first + (last - first) * i as f64 / (count - 1) as f64).collect()
    }

    /// A product of cubics is its own product of splines, with its gradient.
    #[test]
    fn a_bicubic_function_is_reproduced() {
        let (f, df) = (|x: f64| 1.0 + x - 0.3 * x.powi(3), |x: f64| 1.0 - 0.9 * x * x);
        let (g, dg) = (|y: f64| 0.5 * y * y + 0.1 * y.powi(3), |y: f64| y + 0.3 * y * y);
        let (x, y) = (positions(9, -3.0, 3.5), positions(7, -2.5, 2.5));
        let values: Vec<f64> = y.iter().flat_map(|y| x.iter().map(move |x| f(*x) * g(*y))).collect();
        let grid = Grid { x: Grid::line(16, 0.35).x, y: Some(Grid::line(24, 0.2).x) };
        let found = Rectangle::new(&x, y, &values).on_grid(&grid).unwrap();
        let points = grid.y_positions().flat_map(|y| grid.x.positions().map(move |x| (x, y)));
        for (i, (x, y)) in points.enumerate() {
            let expected = [f(x) * g(y), df(x) * g(y), f(x) * dg(y)];
            let found = [found.values[i], found.gradient[0][i], found.gradient[1][i]];
            for (found, expected) in found.iter().zip(expected) {
                assert!((found - expected).abs() < 1e-12, "at {x}, {y}: {found} of {expected}");
            }
        }
    }

    #[test]
    fn nothing_is_known_outside() {
        let side = positions(5, -2.0, 2.0);
        let table = Rectangle::new(&side, positions(4, -9.0, 9.0), &[0.0; 20]);
        let refused = table.on_grid(&Grid::square(16, 0.3)).unwrap_err();
        assert_eq!((refused.axis, refused.known), ("x", (-2.0, 2.0)));
        assert!(table.on_grid(&Grid::square(16, 0.25)).is_ok());
    }
}
