//! Static polarizability of a round level in two dimensions.

use nalgebra::{DMatrix, DVector};

use crate::potential::Potential;
use crate::quadrature::gauss_6;
use crate::stationary::{StationaryError, radial_level};

/// Functions of r in which the level's answer to the field is sought.
const FUNCTIONS: usize = 40;
/// Panels of six points over the level's reach.
const PANELS: usize = 400;
/// Times that reach up to which functions are integrated.
const BEYOND: f64 = 2.0;

/// α, so that E(F) = E - αF²/2, of the level with `number` radial nodes at angular momentum ±`angular`, bohr³: the mean over directions
/// of the field where that is not zero.
///
/// (H_M - E) g_M = r R for M = m ± 1, α = ½ Σ_M ∫R g_M r² dr (Dalgarno, Lewis, Proc. R. Soc. A 233, 70 (1955)), in functions
/// (βr)^M e^{-βr/2} L_j^{(2M+1)}(βr) with β = 2κ.
///
/// # Errors
/// As [`radial_level`]; [`StationaryError::NotConverged`] where the answer is singular.
pub fn polarizability(potential: &Potential, angular: u32, number: usize) -> Result<f64, StationaryError> {
    let level = radial_level(potential, angular, number)?;
    let radial = level.radial_function(potential, angular);
    let beta = 2.0 * (2.0 * level.energy.abs()).sqrt();
    let panel = BEYOND * level.reach / PANELS as f64;
    let points: Vec<[f64; 4]> = (0..PANELS)
        .flat_map(|i| gauss_6().map(move |(at, weight)| ((i as f64 + at) * panel, weight * panel)))
        .map(|(r, weight)| [r, weight * r, radial.value(r), potential.value(r)])
        .collect();
    let norm: f64 = points.iter().map(|[_, weight, value, _]| weight * value * value).sum();
    let answer = |m: u32| -> Result<f64, StationaryError> {
        let mut operator = DMatrix::<f64>::zeros(FUNCTIONS, FUNCTIONS);
        let mut source = DVector::<f64>::zeros(FUNCTIONS);
        for &[r, weight, level_value, v] in &points {
            let [values, slopes] = functions(m, beta, r);
            let local = 0.5 * f64::from(m * m) / (r * r) + v - level.energy;
            for a in 0..FUNCTIONS {
                source[a] += weight * values[a] * r * level_value;
                for b in 0..=a {
                    operator[(a, b)] +=
                        weight * (0.5 * slopes[a] * slopes[b] + local * values[a] * values[b]);
                }
            }
        }
        operator.fill_upper_triangle_with_lower_triangle();
        let found = operator.lu().solve(&source).ok_or(StationaryError::NotConverged {
            what: "the polarizability of the level",
            reached: f64::NAN,
            wanted: 0.0,
            unit: "bohr^3",
        })?;
        Ok(found.dot(&source))
    };
    Ok(0.5 * (answer(angular + 1)? + answer(angular.abs_diff(1))?) / norm)
}

/// The functions and their slopes at `r`.
fn functions(m: u32, beta: f64, r: f64) -> [[f64; FUNCTIONS]; 2] {
    let (power, x) = (f64::from(m), beta * r);
    let shape = x.powf(power) * (-0.5 * x).exp();
    let [own, next] = [2.0 * power + 1.0, 2.0 * power + 2.0].map(|alpha| laguerre(alpha, x));
    let mut out = [[0.0; FUNCTIONS]; 2];
    for j in 0..FUNCTIONS {
        // dL_j^{(α)}/dx = -L_{j-1}^{(α+1)} (Abramowitz, Stegun, eq. 22.5.17 with 22.8.6); scaled to one norm.
        let scale = (1.0 + j as f64).powf(-power - 0.5);
        let slope = if j == 0 { 0.0 } else { -next[j - 1] };
        out[0][j] = scale * shape * own[j];
        out[1][j] = scale * beta * shape * ((power / x - 0.5) * own[j] + slope);
    }
    out
}

/// L_0^{(α)} … at `x` (Abramowitz, Stegun, eq. 22.7.12).
fn laguerre(alpha: f64, x: f64) -> [f64; FUNCTIONS] {
    let mut l = [1.0; FUNCTIONS];
    l[1] = 1.0 + alpha - x;
    for j in 1..FUNCTIONS - 1 {
        let n = j as f64;
        l[j + 1] = ((2.0 * n + 1.0 + alpha - x) * l[j] - (n + alpha) * l[j - 1]) / (n + 1.0);
    }
    l
}
