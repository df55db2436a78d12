//! Electron spectra beside each other, and the energies at which one breaks.

use nalgebra::{SMatrix, SVector};

use super::{Metric, mean, rms};
use crate::compare::Measured;

/// Part of its largest value down to which a spectrum is compared.
pub const FLOOR: f64 = 1e-6;

/// Comparison of electron spectra.
#[derive(Clone, Debug, PartialEq)]
pub struct ElectronComparison {
    /// First and last place compared.
    pub places: [usize; 2],
    /// Root-mean-square distance, decades.
    pub distance: Metric,
    /// The same after the vertical shift that makes it smallest.
    pub shifted_distance: Metric,
    /// That shift, decades to add to the model.
    pub shift: f64,
}

/// Moving mean over an odd number of places, `2 half + 1`; NaN at the ends. Over one photon it is without the peaks that a small shift
/// of a level would tear apart.
pub fn moving_mean(values: &[f64], half: usize) -> Vec<f64> {
    let at = |i: usize| {
        let around = i.checked_sub(half).and_then(|first| values.get(first..=i + half));
        around.map_or(f64::NAN, mean)
    };
    (0..values.len()).map(at).collect()
}

/// Compares spectra on one axis, moving means over `2 half + 1` places, wherever the full one stands above [`FLOOR`] of its largest
/// value and both are positive; `None` where no place does.
///
/// # Panics
/// If the lengths differ.
pub fn compare_electrons(model: &[f64], full: &[Measured], half: usize) -> Option<ElectronComparison> {
    assert_eq!(model.len(), full.len(), "spectra on one axis");
    let values: Vec<f64> = full.iter().map(|f| f.value).collect();
    let errors: Vec<f64> = full.iter().map(|f| f.error.unwrap_or(f64::NAN)).collect();
    let [model, values, errors] = [model, &values, &errors].map(|values| moving_mean(values, half));
    let floor = FLOOR * values.iter().copied().filter(|v| v.is_finite()).fold(0.0, f64::max);
    let there: Vec<usize> = (0..values.len()).filter(|&i| values[i] > floor && model[i] > 0.0).collect();
    let (first, last) = (*there.first()?, *there.last()?);
    let differences: Vec<f64> = there.iter().map(|&i| (model[i] / values[i]).log10()).collect();
    let shift = -mean(&differences);
    let shifted: Vec<f64> = differences.iter().map(|d| d + shift).collect();
    // The bar reaches further down than up on a logarithmic scale.
    let bars: Vec<f64> = there.iter().map(|&i| -(1.0 - (errors[i] / values[i]).min(1.0)).log10()).collect();
    let bar = Some(rms(&bars)).filter(|_| there.iter().all(|&i| errors[i].is_finite()));
    Some(ElectronComparison {
        places: [first, last],
        distance: Metric::difference(rms(&differences), bar),
        shifted_distance: Metric::difference(rms(&shifted), bar),
        shift,
    })
}

/// Where an electron spectrum breaks, in the unit of its energies.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Breaks {
    /// End of the electrons that do not return, classically 2 Up.
    pub direct: f64,
    /// Start of the plateau of those scattered back.
    pub plateau: f64,
    /// End of that plateau, classically 10 Up.
    pub rescattered: f64,
}

/// Decades over the whole range by which slopes must differ to make a break.
const STEEPER: f64 = 3.0;
/// Places for breaks in the first search.
const PLACES: usize = 40;
/// Most values that the lines are fitted to.
const MOST: usize = 200;
/// Decades below the largest value down to which the spectrum is looked at.
const DECADES: f64 = 13.0;

/// Breaks of a spectrum without peaks (see [`moving_mean`]) over the even energies in `step` from `first` on: four straight lines
/// through its logarithm, which fall, fall faster, less and faster again, by least squares; `None` where the best ones do not. No law
/// is put in.
pub fn breaks(first: f64, step: f64, spectrum: &[f64]) -> Option<Breaks> {
    let largest = spectrum.iter().copied().filter(|v| v.is_finite()).fold(0.0, f64::max);
    let seen = |v: &f64| *v > largest * 10f64.powf(-DECADES);
    let begin = spectrum.iter().position(seen)?;
    let length = spectrum[begin..].iter().take_while(|v| seen(v)).count();
    if length < 3 * PLACES {
        return None;
    }
    let stride = length.div_ceil(MOST);
    let decades: Vec<f64> =
        spectrum[begin..begin + length].iter().step_by(stride).map(|v| v.log10()).collect();
    let span = (decades.len() - 1) as f64;
    let mut best = (f64::INFINITY, [0.0; 3]);
    let place = |n: usize| n as f64 / PLACES as f64;
    for a in 2..PLACES - 4 {
        for b in a + 2..PLACES - 2 {
            for c in b + 2..PLACES - 1 {
                better(&decades, [place(a), place(b), place(c)], &mut best);
            }
        }
    }
    let mut reach = 0.5 * place(1);
    while best.0.is_finite() && reach * span > 0.1 {
        for knot in 0..3 {
            for side in [-1.0, 1.0] {
                let mut knots = best.1;
                knots[knot] += side * reach;
                better(&decades, knots, &mut best);
            }
        }
        reach *= 0.7;
    }
    let at = |place: f64| first + (begin as f64 + place * span * stride as f64) * step;
    let [direct, plateau, rescattered] = best.1.map(at);
    best.0.is_finite().then_some(Breaks { direct, plateau, rescattered })
}

/// Takes knots, parts of the range, whose lines lie closer and turn as they should.
fn better(decades: &[f64], knots: [f64; 3], best: &mut (f64, [f64; 3])) {
    let [a, b, c] = knots;
    if !(0.0 < a && a < b && b < c && c < 1.0) {
        return;
    }
    let span = (decades.len() - 1) as f64;
    let row =
        |x: f64| SVector::<f64, 5>::from([1.0, x, (x - a).max(0.0), (x - b).max(0.0), (x - c).max(0.0)]);
    let (mut normal, mut right, mut square) =
        (SMatrix::<f64, 5, 5>::zeros(), SVector::<f64, 5>::zeros(), 0.0);
    for (i, &y) in decades.iter().enumerate() {
        let row = row(i as f64 / span);
        normal += row * row.transpose();
        right += row * y;
        square += y * y;
    }
    let Some(solution) = normal.cholesky().map(|factors| factors.solve(&right)) else { return };
    // Sum of squares left over.
    let left = square - solution.dot(&right);
    let turns = solution[2] < -STEEPER && solution[3] > STEEPER && solution[4] < -STEEPER;
    if turns && left < best.0 {
        *best = (left, knots);
    }
}
