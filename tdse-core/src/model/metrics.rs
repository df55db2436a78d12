//! How far a model is from the full result, each number with the full result's error bar, so that a difference smaller than the bar is
//! not called one.

mod electrons;

pub use electrons::{Breaks, ElectronComparison, FLOOR, breaks, compare_electrons, moving_mean};

use std::f64::consts::{LN_10, PI};
use std::ops::RangeInclusive;

use num_complex::Complex;

use crate::compare::Measured;
use crate::spectrum::measured_cutoff;

/// Rounding allowed in a number that is to be its neutral value.
const ROUNDING: f64 = 1e-12;

/// What a number says of the model.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// It differs from the full result by no more than the full result's own error.
    WithinError,
    /// By more than that (or the error is not known), and no more than the tolerance.
    WithinTolerance,
    /// By more than both.
    Different,
    /// It could not be had.
    Missing,
}

impl Verdict {
    /// The word for it in files.
    pub fn name(self) -> &'static str {
        match self {
            Self::WithinError => "within_error",
            Self::WithinTolerance => "within_tolerance",
            Self::Different => "different",
            Self::Missing => "missing",
        }
    }
}

/// The worst of several verdicts, those that are missing left out; missing where nothing is left.
pub fn worst(verdicts: impl IntoIterator<Item = Verdict>) -> Verdict {
    let rank = |v: &Verdict| match v {
        Verdict::Missing => 0,
        Verdict::WithinError => 1,
        Verdict::WithinTolerance => 2,
        Verdict::Different => 3,
    };
    verdicts.into_iter().max_by_key(rank).unwrap_or(Verdict::Missing)
}

/// Differences that still count as agreement; the defaults are invented by us.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tolerance {
    /// Of cutoffs, orders; two.
    pub orders: f64,
    /// Of levels and distances, decades; 0.3, a factor of two.
    pub decades: f64,
    /// Of slopes, decades per order; 0.02.
    pub slope: f64,
    /// Of ratios of yields and ionization, as |ratio - 1|; 0.5.
    pub ratio: f64,
    /// Of phases, rad; 0.5.
    pub phase: f64,
}

impl Default for Tolerance {
    fn default() -> Self {
        Self { orders: 2.0, decades: 0.3, slope: 0.02, ratio: 0.5, phase: 0.5 }
    }
}

/// One number of a comparison.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Metric {
    /// Its value; NaN where it could not be had.
    pub value: f64,
    /// Its value for a model that agrees: 0 of a difference, 1 of a ratio.
    pub neutral: f64,
    /// What the full result's error bars make of it.
    pub error: Option<f64>,
}

impl Metric {
    fn difference(value: f64, error: Option<f64>) -> Self {
        Self { value, neutral: 0.0, error }
    }

    /// model / full, with the relative error of the full value.
    pub fn ratio(model: f64, full: Measured) -> Self {
        let value = model / full.value;
        let error = bar(full).map(|e| value.abs() * (e / full.value).abs());
        Self { value, neutral: 1.0, error }
    }

    /// Whether the difference is smaller than the full result's own error; `None` where that is not known.
    pub fn within_error(&self) -> Option<bool> {
        self.error.map(|e| (self.value - self.neutral).abs() <= e + ROUNDING)
    }

    /// Judges the number against its bar and a tolerance in its own unit.
    pub fn verdict(&self, tolerance: f64) -> Verdict {
        let off = (self.value - self.neutral).abs();
        match self.within_error() {
            _ if off.is_nan() => Verdict::Missing,
            Some(true) => Verdict::WithinError,
            _ if off <= tolerance + ROUNDING => Verdict::WithinTolerance,
            _ => Verdict::Different,
        }
    }
}

fn bar(measured: Measured) -> Option<f64> {
    measured.error.filter(|e| e.is_finite())
}

/// Comparison of harmonic yields, order by order.
#[derive(Clone, Debug, PartialEq)]
pub struct HarmonicComparison {
    /// Orders of the plateau, over which all but the cutoff is taken.
    pub plateau: RangeInclusive<usize>,
    /// Difference of the measured cutoffs, model - full, orders.
    pub cutoff: Metric,
    /// Measured cutoff of the model, orders; NaN where there is none.
    pub model_cutoff: f64,
    /// The same of the full run, which may differ from the knee of all its orders.
    pub full_cutoff: f64,
    /// Difference of the plateau's slopes, decades per order.
    pub slope: Metric,
    /// Difference of the plateau's levels in its middle, decades.
    pub level: Metric,
    /// Root-mean-square distance, decades.
    pub distance: Metric,
    /// The same after the vertical shift that makes it smallest.
    pub shifted_distance: Metric,
    /// That shift, decades to add to the model.
    pub shift: f64,
    /// Ratio of the yields summed over the plateau, model / full.
    pub yields: Metric,
}

impl HarmonicComparison {
    /// Whether cutoff, slope and, after the one free shift, shape agree: the worst of the three.
    pub fn shape(&self, tolerance: &Tolerance) -> Verdict {
        worst([
            self.cutoff.verdict(tolerance.orders),
            self.slope.verdict(tolerance.slope),
            self.shifted_distance.verdict(tolerance.decades),
        ])
    }
}

/// Compares yields of orders 1, 2, …, of a model with those of the full run over the orders `plateau`.
///
/// Cutoffs are knees of the orders from the plateau's middle on, where there is one: the rise up to the ionization energy, steep in
/// some models, is no part of them. The cutoff's bar is the one of the full run's cutoff where it is given in `cutoff_error`, orders. Orders without a positive yield
/// on both sides are left out.
///
/// # Panics
/// If `plateau` is empty or starts below order 1.
pub fn compare_harmonics(
    model: &[f64],
    full: &[Measured],
    plateau: RangeInclusive<usize>,
    cutoff_error: Option<f64>,
) -> HarmonicComparison {
    assert!(*plateau.start() >= 1 && !plateau.is_empty(), "a plateau of orders from 1 on, got {plateau:?}");
    let values: Vec<f64> = full.iter().map(|f| f.value).collect();
    let middle = usize::midpoint(*plateau.start(), *plateau.end());
    let knee = |yields: &[f64]| {
        let upper = yields.get(middle - 1..).and_then(measured_cutoff).map(|c| c.order + (middle - 1) as f64);
        upper.or_else(|| measured_cutoff(yields).map(|c| c.order)).unwrap_or(f64::NAN)
    };
    let (model_cutoff, full_cutoff) = (knee(model), knee(&values));
    let points = points(model, full, &plateau);
    let differences: Vec<f64> = points.iter().map(|p| p.model - p.full).collect();
    let bars: Option<Vec<f64>> = points.iter().map(|p| p.bar).collect();
    let shift = -mean(&differences);
    let shifted: Vec<f64> = differences.iter().map(|d| d + shift).collect();
    let rms_bar = bars.as_deref().map(rms);
    let [slope, level] = line(&points, &differences);
    let slope_bar = bars.as_deref().map(|bars| slope_error(&points, bars));
    let sums = (
        points.iter().map(|p| 10f64.powf(p.model)).sum::<f64>(),
        Measured {
            value: points.iter().map(|p| 10f64.powf(p.full)).sum(),
            error: bars.as_ref().map(|_| points.iter().filter_map(|p| p.error).sum()),
        },
    );
    HarmonicComparison {
        plateau,
        cutoff: Metric::difference(model_cutoff - full_cutoff, cutoff_error),
        model_cutoff,
        full_cutoff,
        slope: Metric::difference(slope, slope_bar),
        level: Metric::difference(level, bars.as_deref().map(mean)),
        distance: Metric::difference(rms(&differences), rms_bar),
        shifted_distance: Metric::difference(rms(&shifted), rms_bar),
        shift,
        yields: Metric::ratio(sums.0, sums.1),
    }
}

/// One order of the plateau, in decades.
struct Point {
    order: f64,
    model: f64,
    full: f64,
    /// Bar of the yield, decades: of bars larger than the yield, infinite.
    bar: Option<f64>,
    error: Option<f64>,
}

fn points(model: &[f64], full: &[Measured], plateau: &RangeInclusive<usize>) -> Vec<Point> {
    plateau
        .clone()
        .filter_map(|order| {
            let (m, f) = (*model.get(order - 1)?, *full.get(order - 1)?);
            let error = bar(f);
            // The bar reaches further down than up on a logarithmic scale.
            let decades =
                error.map(|e| if e < f.value { -(-e / f.value).ln_1p() / LN_10 } else { f64::INFINITY });
            (m > 0.0 && f.value > 0.0).then(|| Point {
                order: order as f64,
                model: m.log10(),
                full: f.value.log10(),
                bar: decades,
                error,
            })
        })
        .collect()
}

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

fn rms(values: &[f64]) -> f64 {
    (values.iter().map(|v| v * v).sum::<f64>() / values.len() as f64).sqrt()
}

/// Slope of the straight line fitted to `values` over the orders, and its value in their middle.
fn line(points: &[Point], values: &[f64]) -> [f64; 2] {
    let centre = points.iter().map(|p| p.order).sum::<f64>() / points.len() as f64;
    let square: f64 = points.iter().map(|p| (p.order - centre).powi(2)).sum();
    let product: f64 = points.iter().zip(values).map(|(p, v)| (p.order - centre) * v).sum();
    [product / square, mean(values)]
}

/// Largest change of that slope by changes within the bars.
fn slope_error(points: &[Point], bars: &[f64]) -> f64 {
    let centre = points.iter().map(|p| p.order).sum::<f64>() / points.len() as f64;
    let square: f64 = points.iter().map(|p| (p.order - centre).powi(2)).sum();
    points.iter().zip(bars).map(|(p, b)| (p.order - centre).abs() * b).sum::<f64>() / square
}

/// Difference of harmonic phases.
#[derive(Clone, Debug, PartialEq)]
pub struct PhaseComparison {
    /// arg(model) - arg(full) at every harmonic less their common offset, rad, in (-π, π].
    pub differences: Vec<f64>,
    /// That offset, the phase of Σ model·full*/|model·full|, rad.
    pub offset: f64,
    /// Root-mean-square of the differences, rad.
    pub rms: Metric,
}

/// Compares complex amplitudes at the same harmonics; `errors` are the full run's phase errors, rad. `None` without any.
///
/// # Panics
/// If the lengths differ.
pub fn compare_phases(
    model: &[Complex<f64>],
    full: &[Complex<f64>],
    errors: Option<&[f64]>,
) -> Option<PhaseComparison> {
    assert_eq!(model.len(), full.len(), "as many amplitudes of the model as of the full run");
    let turned: Vec<Complex<f64>> = model.iter().zip(full).map(|(m, f)| m * f.conj()).collect();
    let unit = |z: &Complex<f64>| if z.norm() > 0.0 { z / z.norm() } else { Complex::default() };
    let sum: Complex<f64> = turned.iter().map(unit).sum();
    if turned.is_empty() {
        return None;
    }
    let offset = sum.arg();
    let back = Complex::cis(-offset);
    let differences: Vec<f64> = turned.iter().map(|z| (z * back).arg()).collect();
    debug_assert!(differences.iter().all(|d| d.abs() <= PI + ROUNDING));
    let rms = Metric::difference(rms(&differences), errors.map(rms));
    Some(PhaseComparison { differences, offset, rms })
}
