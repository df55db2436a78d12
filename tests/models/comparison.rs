//! Comparisons with the error bars of the full result, and of electrons.

use super::*;

/// Bars of the full result come into every number that has one, a curve that ionizes as much as the full result, to the last digit
/// (planted), is within the bar and said to be, and the repeated runs do without models.
#[test]
fn comparisons_get_the_bars_of_the_full_result() {
    let folder = tempfile::tempdir().unwrap();
    let (config, out) = (folder.path().join("short.json"), folder.path().join("out"));
    std::fs::copy(shipped("quickstart.json"), &config).unwrap();
    let electrons = r#"/outputs/photoelectrons={"max_energy": "40 eV"}"#;
    let plain = tdse("run", &config, &out, &[SHORT, electrons]).result();
    let time = numbers(&plain, "populations", "time");
    let ionized = numbers(&plain, "summary", "ionization_probability")[0];
    let rate = -(-ionized).ln_1p() / (time[time.len() - 1] - time[0]);
    let mut table = String::from("electric_field [V/m],rate [1/fs]\n");
    for field in 0..5 {
        let _ = writeln!(table, "{field}e11,{rate:e}");
    }
    std::fs::write(folder.path().join("own.csv"), table).unwrap();
    let models = r#"/models={"three_step": {}, "strong_field": {}, "recombination": {}, "quantum_orbits": {}, "tunnelling": {},
        "perturbation": {}, "curve": {"file": "own.csv", "of": "rate_over_field"}}"#;
    let ran = tdse("refine", &config, &out, &[SHORT, electrons, models]);
    let result = ran.result();
    let photon = numbers(&result, "summary", "first_photon_energy")[0];
    let cutoff = numbers(&result, "summary", "cutoff_energy_errors")[0] / photon;
    for model in ["three_step", "strong_field", "recombination", "quantum_orbits"] {
        assert!((of(&result, model, "cutoff_difference_errors")[0] - cutoff).abs() < 1e-12, "{model}");
    }
    let of_yields =
        ["slope_difference", "level_difference", "distance", "shifted_distance", "harmonic_yield_ratio"];
    let of_electrons = ["electron_distance", "electron_shifted_distance", "electron_yield_ratio"];
    for (model, names) in [
        ("strong_field", &[&of_yields[..], &of_electrons].concat()),
        ("recombination", &of_yields.to_vec()),
        ("perturbation", &of_electrons.to_vec()),
    ] {
        for name in names {
            let bar = of(&result, model, &format!("{name}_errors"))[0];
            assert!(bar > 0.0 && bar.is_finite(), "{model}/{name}: {bar}");
        }
    }
    let [full, bar] = ["ionization_probability", "ionization_probability_errors"]
        .map(|name| numbers(&result, "summary", name)[0]);
    for model in ["tunnelling", "perturbation", "curve"] {
        let [ratio, error] =
            ["ionization_ratio", "ionization_ratio_errors"].map(|name| of(&result, model, name)[0]);
        assert!((error / ratio - bar / full).abs() < 1e-9 * bar / full && bar > 0.0, "{error} of {ratio}");
    }
    assert_eq!(verdicts(&result, "curve", "ionization_verdict"), [0]);
    let said = ran.data.rsplit("Simpler models beside the full result").next().unwrap();
    assert!(said.contains("curve: within the error bar\n"), "{said}");
    let line = said.lines().find(|line| line.contains("Ionization probability, model / full")).unwrap();
    assert!(line.contains("+-") && line.ends_with("within the error bar"), "{line}");
    let finer = store::read(&ran.out.join("refine/numerics/result.h5")).unwrap();
    assert!(!finer.groups().any(|(path, _)| path.starts_with("models/")));
}

/// Paulus, Becker, Nicklich, Walther, J. Phys. B 27, L703 (1994): electrons scattered back reach 10 Up, those that do not return 2 Up;
/// in the full spectrum the plateau ends there (measured 2.1 photons above the classical limit of this pulse), and the first break
/// lies 3.1 photons higher. The planted curve is half as large again as the full spectrum.
#[test]
fn electron_spectra_are_compared() {
    let folder = tempfile::tempdir().unwrap();
    let (config, out) = (folder.path().join("short.json"), folder.path().join("out"));
    std::fs::copy(shipped("quickstart.json"), &config).unwrap();
    let electrons = "/outputs/photoelectrons={}";
    let whole = r#"/models={"three_step": {}, "strong_field": {}}"#;
    let result = tdse("run", &config, &out, &[SHORT, electrons, whole]).result();
    let photon = numbers(&result, "summary", "first_photon_energy")[0];
    let [direct, rescattered] =
        ["direct_difference", "rescattering_difference"].map(|name| of(&result, "three_step", name)[0]);
    println!("breaks off by {direct} and {rescattered} photons");
    assert!(rescattered.abs() < 3.0 && (-4.5..0.0).contains(&direct), "{direct}, {rescattered}");
    let [limit, found] = ["direct_limit", "direct_break"].map(|name| of(&result, "three_step", name)[0]);
    assert!((direct - (limit - found) / photon).abs() < 1e-9);
    assert_eq!(verdicts(&result, "three_step", "direct_verdict"), [2]);
    // Direct electrons alone lack the plateau: orders of magnitude.
    assert!(of(&result, "strong_field", "electron_shifted_distance")[0] > 1.0);
    assert_eq!(verdicts(&result, "strong_field", "electron_shape_verdict"), [2]);
    let undepleted = of(&result, "strong_field", "harmonic_yield_ratio")[0];

    let yields = numbers(&result, "photoelectrons", "yield");
    let mut table = String::from("energy [eV],yield [1/eV]\n");
    for (energy, value) in numbers(&result, "photoelectrons", "energy").iter().zip(&yields) {
        let _ = writeln!(table, "{energy:e},{:e}", 1.5 * value);
    }
    std::fs::write(folder.path().join("own.csv"), table).unwrap();
    let models = r#"/models={"strong_field": {"depletion": true}, "curve": {"file": "own.csv", "of": "photoelectrons"}}"#;
    let ran = tdse("run", &config, &out, &[SHORT, electrons, models]);
    assert_eq!(ran.events("propagated"), 0);
    let result = ran.result();
    let [distance, shifted, ratio] =
        ["electron_distance", "electron_shifted_distance", "electron_yield_ratio"]
            .map(|name| of(&result, "curve", name)[0]);
    assert!((distance - 1.5f64.log10()).abs() < 1e-9 && shifted < 1e-9, "{distance}, {shifted}");
    // The full number is a sum over momenta, not over the axis.
    assert!((ratio - 1.5).abs() < 5e-3, "{ratio}");
    assert_eq!(verdicts(&result, "curve", "verdict"), verdicts(&result, "curve", "electron_shape_verdict"));
    // What is left of the bound state emits less: 7 % are ionized in the end.
    let depleted = of(&result, "strong_field", "harmonic_yield_ratio")[0] / undepleted;
    println!("depletion leaves {depleted} of the harmonics");
    assert!((0.8..0.9999).contains(&depleted), "{depleted}");
    assert!(
        ran.data.contains("Root-mean-square distance of the electron spectra in decades"),
        "{}",
        ran.data
    );
}
