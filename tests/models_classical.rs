//! Classical paths against numbers computed independently with forty digits and handed to the project:
//! field E0 cos ωt, start at rest at the nucleus (Schafer, Yang, DiMauro, Kulander, Phys. Rev. Lett. 70, 1599 (1993);
//! Kulander, Schafer, Krause (1993); Paulus, Becker, Nicklich, Walther, J. Phys. B 27, L703 (1994), from memory).

mod support;

use std::f64::consts::PI;

use num_complex::Complex;
use support::*;
use tdse_core::field::{Envelope, Field, Pulse};
use tdse_core::model::branches::IntensityWindow;
use tdse_core::model::three_step::{Branch, Extreme, Return, ThreeStep, strongest_part};

const FREQUENCY: f64 = 0.057;
const PEAK: f64 = 0.05;

/// Up of the field, hartree.
fn ponderomotive() -> f64 {
    PEAK * PEAK / (4.0 * FREQUENCY * FREQUENCY)
}

/// E0 cos ωt for eight cycles, switched on and off where A is zero, so fast that no electron starts on the way.
fn monochromatic() -> Field {
    let period = 2.0 * PI / FREQUENCY;
    field(pulse(FREQUENCY, PEAK, Envelope::FlatTop { ramp: 1e-9 * period, plateau: 8.0 * period }))
}

/// Phase of the field, degrees, at a time within the cycle that starts at the crest at t = 0.
fn degrees(time: f64) -> f64 {
    time * FREQUENCY * 180.0 / PI
}

/// The same path in the half cycle that starts at t = 0: every half cycle of the plateau has it, mirrored.
fn in_first_half_cycle(path: Return) -> [f64; 2] {
    let half = PI / FREQUENCY;
    let shift = (path.emission / half).floor() * half;
    [degrees(path.emission - shift), degrees(path.time - shift)]
}

#[test]
fn paths_of_largest_energy() {
    let model = ThreeStep::new(&monochromatic());
    let up = ponderomotive();
    let highest = |number, what| model.highest(number, what).unwrap();
    let returns =
        [3.173_136_566_678_666_6, 1.542_284_091_765_788_3, 2.404_279_047_817_506, 1.734_584_593_380_633_9];
    for (i, expected) in returns.into_iter().enumerate() {
        let found = highest(i + 1, Extreme::Return).energy / up;
        assert!((found - expected).abs() < 1e-10, "return {}: {found} Up against {expected}", i + 1);
    }
    let backscattered = [10.007_564_815_181_537, 7.030_121_834_357_535, 8.768_436_206_149_7];
    for (i, expected) in backscattered.into_iter().enumerate() {
        let found = highest(i + 1, Extreme::Backscattering).backscattered / up;
        assert!(
            (found - expected).abs() < 1e-10,
            "scattered at return {}: {found} Up against {expected}",
            i + 1
        );
    }
    let phases = [
        (Extreme::Return, [17.956_929_736_656_484, 252.043_070_263_343_5]),
        (Extreme::Backscattering, [14.951_780_149_038_754, 261.671_466_832_262_9]),
    ];
    for (what, expected) in phases {
        let found = in_first_half_cycle(highest(1, what));
        for (f, e) in found.into_iter().zip(expected) {
            assert!((f - e).abs() < 1e-7, "{what:?}: {found:?}° against {expected:?}°");
        }
    }
    let cutoff = highest(1, Extreme::Return);
    let excursion = (cutoff.time - cutoff.emission) * FREQUENCY / (2.0 * PI);
    assert!((excursion - 0.650_239_279_240_797_3).abs() < 1e-9, "{excursion} cycles");
    assert!((model.direct_limit() / up - 2.0).abs() < 1e-5, "{} Up", model.direct_limit() / up);
    assert!((model.cutoff(0.5).unwrap() - 0.5 - 3.173_136_566_678_666_6 * up).abs() < 1e-10);
}

#[test]
fn single_paths() {
    let model = ThreeStep::new(&monochromatic());
    let cases = [
        (5.0, 302.891_856_499_360_3, 1.718_112_228_234_207, Branch::Long),
        (30.0, 218.686_641_029_567_26, 2.531_523_048_170_123_4, Branch::Short),
    ];
    for (start, expected, energy, branch) in cases {
        let found = model.returns(start / 180.0 * PI / FREQUENCY, 1)[0];
        assert!((degrees(found.time) - expected).abs() < 1e-9, "{start}°: {}°", degrees(found.time));
        assert!((found.energy / ponderomotive() - energy).abs() < 1e-11, "{start}°: {}", found.energy);
        assert_eq!((found.branch, found.miss), (branch, 0.0));
    }
    // Before the crest nothing returns within the first cycles.
    assert!(model.returns(-10.0 / 180.0 * PI / FREQUENCY, 1).is_empty());
}

/// A circularly polarized field drives every electron past the nucleus; a slight ellipticity makes it miss by a distance in
/// proportion (by the linearity of the motion in the field).
#[test]
fn elliptical_light_misses_the_nucleus() {
    let miss = |ellipticity: f64| {
        let mut light = pulse(FREQUENCY, PEAK, Envelope::FlatTop { ramp: 1e-7, plateau: 440.0 });
        light.ellipticity = ellipticity;
        let model = ThreeStep::new(&field(light));
        // All of them, where the direction of the field at the start turns as well.
        let closest = model.all_returns(1).into_iter().map(|r| r.miss).fold(f64::INFINITY, f64::min);
        (model.returns(25.0 / 180.0 * PI / FREQUENCY, 1).first().map_or(f64::INFINITY, |r| r.miss), closest)
    };
    let (slight, half) = (miss(0.02).0, miss(0.01).0);
    assert!((slight / half - 2.0).abs() < 0.01, "{slight} and {half} bohr");
    assert!(miss(1.0).1 > 0.1 * PEAK / (FREQUENCY * FREQUENCY), "{} bohr", miss(1.0).1);
}

/// The strongest part of light that turns is the field along that direction, with the cutoff of linear light of that strength.
#[test]
fn strongest_part_of_elliptical_light() {
    let mut light = sin2_pulse(FREQUENCY, PEAK, 4.0);
    (light.ellipticity, light.angle, light.phase) = (0.4, 0.7, 0.3);
    let mut second = sin2_pulse(2.0 * FREQUENCY, 0.3 * PEAK, 8.0);
    (second.ellipticity, second.angle) = (-1.0, 0.2);
    for pulses in [vec![light], vec![light, second]] {
        let whole = Field { pulses, sampled: None };
        let (part, [x, y]) = strongest_part(&whole);
        assert!((x.hypot(y) - 1.0).abs() < 1e-12);
        for t in [-150.0, -20.0, 0.0, 33.0, 170.0] {
            let (a, e) = whole.potential_and_field(t);
            let (found, electric) = part.potential_and_field(t);
            assert!((found[0] - a[0] * x - a[1] * y).abs() < 1e-12 && found[1] == 0.0);
            assert!((electric[0] - e[0] * x - e[1] * y).abs() < 1e-12);
        }
    }
    let cutoff = |light: Pulse| ThreeStep::new(&strongest_part(&field(light)).0).cutoff(0.0).unwrap();
    let mut linear = sin2_pulse(FREQUENCY, PEAK / 1.16f64.sqrt(), 4.0);
    linear.phase = 0.3;
    assert!((cutoff(light) / cutoff(linear) - 1.0).abs() < 0.01, "{} and {}", cutoff(light), cutoff(linear));
}

/// Design: φ = 0 puts a crest at the centre; of a two-cycle pulse the cutoff lies below that of a long one.
#[test]
fn a_short_pulse_has_a_lower_cutoff_that_depends_on_its_phase() {
    let cutoff = |phase: f64| {
        let mut light = sin2_pulse(FREQUENCY, PEAK, 3.0);
        light.phase = phase;
        ThreeStep::new(&field(light)).cutoff(0.0).unwrap() / ponderomotive()
    };
    let (crest, quarter) = (cutoff(0.0), cutoff(PI / 2.0));
    println!("{crest} and {quarter} Up");
    assert!(crest < 3.173 && quarter < 3.173 && (crest - quarter).abs() > 0.05);
}

/// Planted: two paths with known phase slopes and amplitudes over an intensity scan are found as they were put in.
#[test]
fn planted_branches_are_separated() {
    let (short, long) = (Complex::from_polar(1.0, 0.4), Complex::from_polar(0.5, -1.1));
    let (slow, fast) = (3.0, 24.0);
    let window = IntensityWindow { first: 0.5, step: 0.01, centre: 1.5, width: 0.7 };
    let scan: Vec<Complex<f64>> = (0..=200)
        .map(|n| {
            let off = window.first + f64::from(n) * window.step - window.centre;
            short * Complex::cis(-slow * off) + long * Complex::cis(-fast * off)
        })
        .collect();
    for (range, expected, slope) in [(-12.0..13.5, short, slow), (13.5..45.0, long, fast)] {
        let found = window.part(&scan, range.clone());
        assert!((found.amplitude - expected).norm() < 0.01, "{found:?} against {expected}");
        assert!((found.slope - slope).abs() < 0.3, "{found:?} against {slope}");
        let peak = window.peak(&scan, range).unwrap();
        assert!((peak - slope).abs() < 0.05, "{peak} against {slope}");
    }
    // Between the two the distribution falls and rises, with no maximum of its own; an amplitude that is not known leaves none.
    assert_eq!(window.peak(&scan, 7.0..9.0), None);
    let unknown = [&scan[..100], &[Complex::from(f64::NAN)], &scan[101..]].concat();
    assert_eq!(window.peak(&unknown, -12.0..13.5), None);
    // FWHM of exp(-α² width²/(16 ln 2)).
    let half = window.distribution(&[Complex::from(1.0); 201], &[0.0, 0.5 * window.resolution()]);
    assert!((half[1].norm() / half[0].norm() - 0.5).abs() < 2e-3, "{half:?}");
    let peak = window.distribution(&scan, &[slow, fast, 60.0]);
    let peak: Vec<f64> = peak.iter().map(|z| z.norm()).collect();
    assert!((peak[1] / peak[0] - 0.5).abs() < 0.02 && peak[2] < 1e-3 * peak[0], "{peak:?}");
    assert!((window.largest_slope() - 100.0 * PI).abs() < 1e-9);
}
