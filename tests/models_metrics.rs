//! Planted differences: what the comparison says of curves whose distance from the full result is known.

use std::f64::consts::PI;

use num_complex::Complex;
use tdse_core::compare::Measured;
use tdse_core::model::curve::{BadCurve, Curve};
use tdse_core::model::metrics::{
    HarmonicComparison, Metric, Tolerance, Verdict, breaks, compare_electrons, compare_harmonics,
    compare_phases, moving_mean, worst,
};
use tdse_core::spectrum::EnergyAxis;

/// Largest distance that counts as none, decades, of the tests.
const TOLERANCE: f64 = 0.05;

/// A spectrum drawn by hand (invented): steep start, plateau, fall from the order `knee` on, floor.
fn drawn(knee: f64) -> Vec<f64> {
    (1..80)
        .map(|q| {
            let q = f64::from(q);
            let start = 3.0 - 2.0 * (q - 1.0);
            let body = -5.0 - 0.01 * (q - 5.0) - 0.4 * (q - knee).max(0.0);
            10f64.powf(start.max(body).max(-16.0) + 0.1 * (2.3 * q).sin())
        })
        .collect()
}

fn with_bars(yields: &[f64], part: f64) -> Vec<Measured> {
    yields.iter().map(|&value| Measured { value, error: Some(part * value) }).collect()
}

fn without_bars(yields: &[f64]) -> Vec<Measured> {
    yields.iter().map(|&value| Measured { value, error: None }).collect()
}

fn compared(model: &[f64], full: &[Measured]) -> HarmonicComparison {
    compare_harmonics(model, full, 9..=30, Some(0.3))
}

#[test]
fn half_as_much_again_is_equal_after_the_shift_alone() {
    let full = drawn(33.0);
    let model: Vec<f64> = full.iter().map(|y| 1.5 * y).collect();
    for full in [with_bars(&full, 0.02), without_bars(&full)] {
        let found = compared(&model, &full);
        assert!(
            (found.distance.value - 1.5f64.log10()).abs() < 1e-12
                && (found.shift + 1.5f64.log10()).abs() < 1e-12
        );
        assert_eq!(found.distance.verdict(TOLERANCE), Verdict::Different);
        assert!(matches!(
            found.shifted_distance.verdict(TOLERANCE),
            Verdict::WithinError | Verdict::WithinTolerance
        ));
        assert!(found.shifted_distance.value < 1e-12 && found.slope.value.abs() < 1e-12);
        assert!(
            (found.yields.value - 1.5).abs() < 1e-12 && (found.level.value - 1.5f64.log10()).abs() < 1e-12
        );
        assert_eq!(found.yields.verdict(0.1), Verdict::Different);
        assert_eq!(found.cutoff.value, 0.0);
        assert!(matches!(
            found.shape(&Tolerance::default()),
            Verdict::WithinError | Verdict::WithinTolerance
        ));
    }
    // Without bars nothing can be within them.
    assert_eq!(compared(&model, &without_bars(&full)).shifted_distance.within_error(), None);
}

#[test]
fn a_curve_inside_the_error_bar_is_not_called_different() {
    let full = drawn(33.0);
    let model: Vec<f64> =
        full.iter().enumerate().map(|(i, y)| y * (1.0 + 0.08 * (1.7 * i as f64).sin())).collect();
    let inside = compared(&model, &with_bars(&full, 0.1));
    for metric in
        [inside.distance, inside.shifted_distance, inside.slope, inside.level, inside.yields, inside.cutoff]
    {
        assert_eq!(metric.verdict(0.0), Verdict::WithinError, "{metric:?}");
    }
    let outside = compared(&model, &with_bars(&full, 0.01));
    assert_eq!(outside.distance.verdict(0.0), Verdict::Different, "{:?}", outside.distance);
    assert_eq!(outside.distance.verdict(0.1), Verdict::WithinTolerance);
}

#[test]
fn a_cutoff_moved_by_two_photons_differs_by_two() {
    let full = with_bars(&drawn(33.0), 0.01);
    for moved in [2.0, -2.0] {
        let found = compared(&drawn(33.0 + moved), &full).cutoff;
        println!("{found:?}");
        assert!((found.value - moved).abs() < 0.2, "{found:?}");
        assert_eq!((found.verdict(1.0), found.error), (Verdict::Different, Some(0.3)));
    }
    let strict = Tolerance { orders: 1.0, ..Tolerance::default() };
    assert_eq!(compared(&drawn(35.0), &full).shape(&strict), Verdict::Different);
    assert_eq!(worst([Verdict::Missing, Verdict::WithinError]), Verdict::WithinError);
    assert_eq!(worst([]), Verdict::Missing);
    let none = compared(&vec![1e-3; 79], &full).cutoff;
    assert_eq!(none.verdict(1.0), Verdict::Missing);
}

#[test]
fn slopes_ratios_and_phases() {
    let full = drawn(33.0);
    let tilted: Vec<f64> = full.iter().enumerate().map(|(i, y)| y * 10f64.powf(0.03 * i as f64)).collect();
    let found = compared(&tilted, &with_bars(&full, 0.1));
    assert!((found.slope.value - 0.03).abs() < 1e-12, "{:?}", found.slope);
    assert_eq!(found.slope.verdict(0.0), Verdict::Different);
    // Bars all of one size tilt the line by ⟨|q - q̄|⟩/⟨(q - q̄)²⟩ of it: 22 orders, 5.5/40.25.
    let decades = -(0.9f64).log10();
    assert!((found.slope.error.unwrap() / (decades * 5.5 / 40.25) - 1.0).abs() < 1e-9, "{:?}", found.slope);

    let ratio = Metric::ratio(0.55, Measured { value: 0.5, error: Some(0.05) });
    assert!((ratio.value - 1.1).abs() < 1e-12 && ratio.within_error() == Some(true), "{ratio:?}");
    let ratio = Metric::ratio(0.55, Measured { value: 0.5, error: Some(0.01) });
    assert_eq!((ratio.verdict(0.2), ratio.verdict(0.05)), (Verdict::WithinTolerance, Verdict::Different));

    let full: Vec<Complex<f64>> = (0..12).map(|i| Complex::from_polar(1.0, 2.7 * f64::from(i))).collect();
    let turned: Vec<Complex<f64>> = full
        .iter()
        .enumerate()
        .map(|(i, a)| a * Complex::from_polar(3.0, 3.0 + if i % 2 == 0 { 0.2 } else { -0.2 }))
        .collect();
    let phases = compare_phases(&turned, &full, Some(&[0.25; 12])).unwrap();
    assert!((phases.offset - 3.0).abs() < 1e-12 && (phases.rms.value - 0.2).abs() < 1e-12, "{phases:?}");
    assert_eq!(phases.rms.within_error(), Some(true));
    assert!(phases.differences.iter().all(|d| d.abs() < PI / 2.0));
    assert_eq!(compare_phases(&[], &[], None), None);
}

#[test]
fn curves_of_a_user() {
    let curve = Curve::new(vec![0.0, 1.0, 2.0, 4.0], vec![1.0, 100.0, 0.0, 1.0]).unwrap();
    assert!((curve.at(0.5) - 10.0).abs() < 1e-12, "logarithmic between points");
    assert_eq!((curve.at(1.0), curve.at(1.5), curve.at(2.0), curve.at(4.0)), (100.0, 0.0, 0.0, 1.0));
    assert!(curve.at(-0.1).is_nan() && curve.at(4.1).is_nan());
    let sampled = curve.on(EnergyAxis { step: 1.0, points: 6 });
    assert_eq!(&sampled[..3], &[1.0, 100.0, 0.0]);
    assert!(sampled[5].is_nan());
    // ∫ e^{-E} over a photon around order 2.
    let decay: Vec<f64> = (0..=100).map(|i| 0.1 * f64::from(i)).collect();
    let decay = Curve::new(decay.clone(), decay.iter().map(|e| (-e).exp()).collect()).unwrap();
    let found = decay.order_yields(1.5, 8);
    let expected = (-2.25f64).exp() - (-3.75f64).exp();
    assert!((found[1] / expected - 1.0).abs() < 1e-4 && found[7].is_nan(), "{found:?} against {expected}");

    let bad = |x: &[f64], y: &[f64]| Curve::new(x.to_vec(), y.to_vec()).unwrap_err();
    assert_eq!(bad(&[1.0], &[1.0]), BadCurve::Length { positions: 1, values: 1 });
    assert_eq!(bad(&[1.0, 1.0], &[1.0, 2.0]), BadCurve::NotRising { index: 1, value: 1.0, before: 1.0 });
    assert!(matches!(bad(&[1.0, f64::NAN], &[1.0, 2.0]), BadCurve::NotRising { .. }));
    assert_eq!(bad(&[1.0, 2.0], &[1.0, -2.0]), BadCurve::Value { index: 1, value: -2.0 });
}

/// A drawn electron spectrum (invented): peaks a photon apart on four straight lines that turn at these energies.
fn drawn_electrons(turns: [f64; 3], photon: f64, shift: f64) -> Vec<f64> {
    let decades = |e: f64| {
        let after = |turn: f64| (e - turn).max(0.0);
        -1.0 - 0.05 * e - 0.35 * after(turns[0]) + 0.38 * after(turns[1]) - 0.4 * after(turns[2])
    };
    let peak = |e: f64| 1.0 + 0.9 * (2.0 * PI * (e - shift) / photon).cos();
    (0..1200).map(|i| 0.1 * f64::from(i)).map(|e| 10f64.powf(decades(e)) * peak(e)).collect()
}

#[test]
fn electron_spectra_are_compared_without_their_peaks() {
    let full = drawn_electrons([17.0, 36.0, 86.0], 1.5, 0.0);
    let half = |shift: f64| -> Vec<f64> {
        drawn_electrons([17.0, 36.0, 86.0], 1.5, shift).iter().map(|y| 0.5 * y).collect()
    };
    let found = compare_electrons(&half(0.0), &with_bars(&full, 0.1), 7).unwrap();
    assert!(
        (found.distance.value - 2f64.log10()).abs() < 1e-12 && (found.shift - 2f64.log10()).abs() < 1e-12
    );
    assert_eq!(found.shifted_distance.verdict(0.0), Verdict::WithinError);
    assert_eq!(found.distance.verdict(TOLERANCE), Verdict::Different);
    // All peaks moved by a third of a photon, as a shifted level moves them: what is left is the steepest slope, 0.4 decades per unit,
    // within one photon.
    let model = half(0.5);
    let found = compare_electrons(&model, &with_bars(&full, 0.1), 7).unwrap();
    println!("{found:?}");
    assert!(
        found.shifted_distance.value < 0.1 && found.shifted_distance.verdict(0.1) == Verdict::WithinTolerance
    );
    // Six decades below the largest the comparison ends: 0.05 E + 0.35 (E - 17) = 6 within a photon.
    let end = 0.1 * found.places[1] as f64;
    assert!((end - 29.9).abs() < 1.5, "{end}");
    assert_eq!(compare_electrons(&model, &without_bars(&full), 7).unwrap().distance.error, None);
    // Place by place the peaks would be torn apart.
    assert!(compare_electrons(&model, &without_bars(&full), 0).unwrap().shifted_distance.value > 0.3);
    assert_eq!(compare_electrons(&[0.0; 9], &without_bars(&[1.0; 9]), 0), None);
}

#[test]
fn breaks_of_electron_spectra() {
    for turns in [[17.0, 36.0, 86.0], [25.0, 42.0, 95.0]] {
        let found = breaks(0.0, 0.1, &moving_mean(&drawn_electrons(turns, 1.5, 0.0), 7)).unwrap();
        println!("{turns:?}: {found:?}");
        for (found, expected) in [found.direct, found.plateau, found.rescattered].into_iter().zip(turns) {
            assert!((found - expected).abs() < 0.8, "{found} for {expected}");
        }
    }
    let falls: Vec<f64> = (0..1200).map(|i| 10f64.powf(-0.008 * f64::from(i))).collect();
    assert_eq!(breaks(0.0, 0.1, &falls), None);
    assert_eq!(breaks(0.0, 0.1, &[1.0; 30]), None);
}
