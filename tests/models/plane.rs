//! Models in two dimensions.

use super::*;

/// A box and a grid far too coarse for results, fine for the laws below.
const SMALL: [&str; 6] = [
    "/numerics/spacing=0.8 bohr",
    "/numerics/extent=120 bohr",
    "/numerics/time_step=0.2 au",
    "/numerics/absorber={\"kind\": \"smooth\", \"width\": \"25 bohr\"}",
    "/numerics/allow_inadequate=true",
    "/field/pulses/0/wavelength=500 nm",
];

/// Every model in two dimensions: on the axes of the full run, by component and helicity, in the same pictures; linear light along x has
/// no y.
#[test]
fn every_model_in_two_dimensions() {
    let folder = tempfile::tempdir().unwrap();
    let models = r#"/models={"three_step": {}, "strong_field": {"depletion": true}, "quantum_orbits": {}, "tunnelling": {},
        "perturbation": {}, "recombination": {}}"#;
    let result = |name: &str, more: &[&str]| {
        let sets: Vec<&str> = SMALL.iter().chain(more).chain([&models]).copied().collect();
        let out = folder.path().join(name);
        let ran = tdse("run", &shipped("circular.json"), &out, &sets);
        for picture in ["model_spectra.png", "ionization.png"] {
            assert!(out.join("report").join(picture).is_file(), "{picture}");
        }
        ran.result()
    };
    let elliptical = result("elliptical", &["/field/pulses/0/ellipticity=0.3"]);
    // The ground state by its other name.
    let even = r#"/atom/state={"kind": "single", "parity_x": "even", "parity_y": "even"}"#;
    let linear = result("linear", &["/field/pulses/0/ellipticity=0", even]);
    for full in [&elliptical, &linear] {
        for model in ["strong_field", "recombination"] {
            for group in [
                "harmonics/component",
                "harmonics/photon_energy",
                "harmonics/helicity",
                "harmonic_yields/helicity",
            ] {
                let (group, axis) = group.split_once('/').unwrap();
                let own = format!("models/{model}/{group}");
                assert!(full.get(group, axis).is_some(), "{group}/{axis}");
                assert_eq!(full.get(group, axis), full.get(&own, axis), "{own}/{axis}");
            }
            let yields = numbers(full, &format!("models/{model}/harmonic_yields"), "yield");
            let both = numbers(full, &format!("models/{model}/harmonic_yields"), "helicity_yield");
            let (plus, minus) = both.split_at(yields.len());
            for ((y, p), m) in yields.iter().zip(plus).zip(minus).filter(|((y, _), _)| y.is_finite()) {
                assert!((p + m - y).abs() < 1e-9 * y, "{p:e} and {m:e} are not {y:e}");
            }
        }
        for group in [
            "momentum/momentum_x",
            "momentum/momentum_y",
            "photoelectrons/energy",
            "photoelectrons/emission_angle",
        ] {
            let (group, axis) = group.split_once('/').unwrap();
            let own = format!("models/strong_field/{group}");
            assert!(
                full.get(group, axis).is_some() && full.get(group, axis) == full.get(&own, axis),
                "{own}/{axis}"
            );
        }
        for (model, number) in [
            ("three_step", "cutoff_energy"),
            ("quantum_orbits", "cutoff_energy"),
            ("strong_field", "electron_yield_ratio"),
            ("perturbation", "electron_yield_ratio"),
            ("perturbation", "ionization_ratio"),
            ("tunnelling", "ionization_ratio"),
            ("tunnelling", "saturation_intensity"),
        ] {
            let value = of(full, model, number)[0];
            println!("{model} {number}: {value}");
            assert!(value.is_finite() && value > 0.0, "{model}/{number}: {value}");
        }
    }
    // A short-range atom lets electrons go directly: the model's yield is about right (bounds invented by us).
    let ratio = of(&linear, "strong_field", "electron_yield_ratio")[0];
    assert!((0.3..3.0).contains(&ratio), "{ratio}");
    let spectrum = numbers(&linear, "models/strong_field/harmonics", "spectrum");
    let (x, y) = spectrum.split_at(spectrum.len() / 2);
    let largest = x.iter().copied().filter(|v| v.is_finite()).fold(0.0, f64::max);
    assert!(largest > 0.0 && y.iter().all(|v| v.is_nan() || *v < 1e-20 * largest));
    for model in ["three_step", "quantum_orbits"] {
        let [straight, bent] = [&linear, &elliptical].map(|full| of(full, model, "cutoff_energy")[0]);
        assert!(bent < straight && bent > 0.8 * straight, "{model}: {straight} and {bent} eV");
    }
}

/// Ionization by one photon of 31 eV in two dimensions: the model is the full result to a few parts in a hundred even in the coarse box
/// (bound invented by us; to 0.2 % on a fine grid, see the tests of the core), and two levels are written as populations.
#[test]
fn one_photon_in_two_dimensions() {
    let folder = tempfile::tempdir().unwrap();
    let more = [
        "/field/pulses/0/wavelength=40 nm",
        "/field/pulses/0/intensity=1e13 W/cm^2",
        "/field/pulses/0/envelope/cycles=10",
        "/field/pulses/0/ellipticity=0",
        "/outputs/populations/states=3",
        "/atom/potential/depth=50 eV",
        r#"/models={"perturbation": {}}"#,
    ];
    let sets: Vec<&str> = SMALL.iter().chain(&more).copied().collect();
    let result = tdse("run", &shipped("circular.json"), &folder.path().join("out"), &sets).result();
    let ratio = of(&result, "perturbation", "ionization_ratio")[0];
    println!("model / full: {ratio}, electrons {}", of(&result, "perturbation", "electron_yield_ratio")[0]);
    assert!((ratio - 1.0).abs() < 0.05, "{ratio}");
    let angular = numbers(&result, "models/perturbation/photoelectrons", "angular_distribution");
    let angles = numbers(&result, "models/perturbation/photoelectrons", "emission_angle");
    for (p, angle) in angular.iter().zip(&angles) {
        assert!((p / angular[0] - angle.cos().powi(2)).abs() < 1e-9, "linear light from m = 0: cos²");
    }
    assert_eq!(result.get("populations", "time"), result.get("models/perturbation/populations", "time"));
    let levels = numbers(&result, "models/perturbation/populations", "populations");
    let full = numbers(&result, "populations", "populations");
    assert_eq!(levels.len(), full.len(), "the ground state and both m = ±1");

    // The probability does not hang on where the run's spectrum ends, here below the line.
    let short: Vec<&str> = sets.iter().chain(&["/outputs/photoelectrons/max_energy=1 eV"]).copied().collect();
    let result = tdse("run", &shipped("circular.json"), &folder.path().join("short"), &short).result();
    let cut = of(&result, "perturbation", "ionization_ratio")[0];
    println!(
        "spectrum up to 1 eV: {cut}, electrons {}",
        numbers(&result, "models/perturbation/comparison", "electron_yield")[0]
    );
    assert!((cut / ratio - 1.0).abs() < 1e-3, "{cut} where the axis ends below the line, {ratio} where not");
}
