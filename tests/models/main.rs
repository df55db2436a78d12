//! Simpler models through the program: what it writes, says, and makes anew. The scenarios are shipped ones, all invented, at a
//! size fit for a test.

mod comparison;
mod plane;

use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::process::Command;

use tdse_cli::store::{self, Contents, Values};

/// A folder, and what the program said there.
struct Ran {
    out: PathBuf,
    data: String,
}

impl Ran {
    fn result(&self) -> Contents {
        store::read(&self.out.join("result.h5")).unwrap()
    }

    /// Events of one kind in the newest log.
    fn events(&self, kind: &str) -> usize {
        let mut logs: Vec<PathBuf> =
            self.out.join("log").read_dir().unwrap().map(|entry| entry.unwrap().path()).collect();
        logs.sort_by_key(|log| log.metadata().unwrap().modified().unwrap());
        let text = std::fs::read_to_string(logs.last().expect("a log")).unwrap();
        text.lines().filter(|line| line.contains(&format!("\"event\":\"{kind}\""))).count()
    }
}

/// The program with a shipped configuration and changes.
fn tdse(command: &str, config: &Path, out: &Path, sets: &[&str]) -> Ran {
    let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
    program.args([command, "--quiet", "--out"]).arg(out).arg(config);
    for set in sets {
        program.args(["--set", set]);
    }
    let ended = program.output().expect("the program starts");
    assert!(ended.status.success(), "{command} {sets:?}: {ended:?}");
    Ran { out: out.into(), data: String::from_utf8(ended.stdout).unwrap() }
}

fn shipped(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs").join(name)
}

fn numbers(contents: &Contents, group: &str, name: &str) -> Vec<f64> {
    contents.real(group, name).unwrap_or_else(|| panic!("{group}/{name}")).iter().copied().collect()
}

fn of(contents: &Contents, model: &str, name: &str) -> Vec<f64> {
    numbers(contents, &format!("models/{model}/comparison"), name)
}

fn verdicts(contents: &Contents, model: &str, name: &str) -> Vec<i64> {
    match contents.get(&format!("models/{model}/comparison"), name) {
        Some(Values::Integer(verdicts)) => verdicts.iter().copied().collect(),
        other => panic!("{model}/{name}: {other:?}"),
    }
}

/// 800 nm, 1e14 W/cm², hydrogen: shorter than shipped.
const SHORT: &str = "/field/pulses/0/envelope/cycles=4";

/// Models come and go without a propagation. A curve half as large again as the full result is 0.176 decades above it and, after one
/// shift, the same (planted; log₁₀ 1.5).
#[test]
fn models_are_derived_anew_and_a_planted_curve_is_recognised() {
    let folder = tempfile::tempdir().unwrap();
    let (config, out) = (folder.path().join("short.json"), folder.path().join("out"));
    std::fs::copy(shipped("quickstart.json"), &config).unwrap();
    let fine = "/outputs/harmonics/energy_step=0.01 eV";
    let plain = tdse("run", &config, &out, &[SHORT, fine]);
    assert_eq!((plain.events("propagated"), plain.events("derived")), (1, 0));
    let full = plain.result();
    assert!(!full.groups().any(|(path, _)| path.starts_with("models/")));

    let spectrum = numbers(&full, "harmonics", "spectrum");
    let mut table = String::from("photon_energy [eV],spectrum [au]\n");
    for (energy, value) in numbers(&full, "harmonics", "photon_energy").iter().zip(&spectrum) {
        let _ = writeln!(table, "{energy:e},{:e}", 1.5 * value);
    }
    std::fs::write(folder.path().join("own.csv"), table).unwrap();
    let models = r#"/models={"tolerance": {"decades": 0.1}, "curve": {"file": "own.csv"}, "three_step": {}, "strong_field": {},
        "quantum_orbits": {}, "tunnelling": {}, "recombination": {}, "perturbation": {}}"#;
    let ran = tdse("run", &config, &out, &[SHORT, fine, models]);
    assert_eq!((ran.events("propagated"), ran.events("derived")), (0, 1), "models need no propagation");
    let result = ran.result();
    assert_eq!(numbers(&result, "harmonics", "spectrum"), spectrum, "the full result stays");

    let [level, shifted] = ["level_difference", "shifted_distance"].map(|name| of(&result, "curve", name)[0]);
    println!("level {level}, shifted {shifted}");
    assert!((level - 1.5f64.log10()).abs() < 2e-3 && shifted < 2e-3, "level {level}, shifted {shifted}");
    assert!((of(&result, "curve", "harmonic_yield_ratio")[0] - 1.5).abs() < 5e-3);
    assert!(of(&result, "curve", "cutoff_difference")[0].abs() < 1e-9);
    let [own, full, off] = ["cutoff_energy", "full_cutoff", "cutoff_difference"]
        .map(|name| of(&result, "strong_field", name)[0]);
    let photon = numbers(&result, "summary", "first_photon_energy")[0];
    assert!(((own - full) / photon - off).abs() < 1e-9, "{own} and {full} eV are {off} photons apart");
    // 1 is within the tolerance, 2 different; without bars nothing is within them.
    assert_eq!(verdicts(&result, "curve", "shape_verdict"), [1]);
    assert_eq!(verdicts(&result, "curve", "distance_verdict"), [2]);
    assert_eq!(verdicts(&result, "curve", "verdict"), [1]);

    // Corkum 1993; Lewenstein et al. 1994: the quantum cutoff lies above the classical one by (F - 1) Ip, F ≤ 1.325.
    let [classical, quantum] =
        ["three_step", "quantum_orbits"].map(|model| of(&result, model, "cutoff_energy")[0]);
    let above = (quantum - classical) / 13.598;
    println!("classical {classical} eV, quantum {quantum} eV: {above:.3} Ip above");
    assert!(above > 0.1 && above < 0.325, "{above}");
    // The axes are the full run's.
    for group in ["harmonics/photon_energy", "harmonic_yields/order"] {
        let (group, axis) = group.split_once('/').unwrap();
        for model in ["strong_field", "recombination", "curve"] {
            assert_eq!(
                result.get(group, axis),
                result.get(&format!("models/{model}/{group}"), axis),
                "{model}"
            );
        }
    }
    let time = result.get("populations", "time");
    assert!(time.is_some() && time == result.get("models/tunnelling/ionization", "time"));
    for picture in ["model_spectra.png", "classical_returns.png", "ionization.png"] {
        assert!(out.join("report").join(picture).is_file(), "{picture}");
    }
    for words in ["Simpler models beside the full result", "strong_field: ", "Cutoff of the model"] {
        assert!(ran.data.contains(words), "no {words:?} in:\n{}", ran.data);
    }
    // And away again.
    let gone = tdse("run", &config, &out, &[SHORT, fine]);
    assert!(!gone.result().groups().any(|(path, _)| path.starts_with("models/")));
}

/// Quantum orbits of a chirped Gaussian pulse with its second harmonic: the cutoff lies above the classical one by (F - 1) Ip with F
/// above 1 (Lewenstein et al. 1994, of a long pulse of one colour: up to 1.325).
#[test]
fn orbits_of_a_chirped_gaussian_pulse_with_a_second_colour() {
    let folder = tempfile::tempdir().unwrap();
    let sets = [
        r#"/field/pulses=[{"wavelength": "800 nm", "intensity": "1e14 W/cm^2", "envelope": {"kind": "gaussian", "fwhm": "4 fs"},
            "chirp": "0.02 rad/fs^2"}, {"wavelength": "400 nm", "intensity": "2e12 W/cm^2", "envelope": {"kind": "gaussian", "fwhm": "4 fs"}}]"#,
        r#"/models={"three_step": {}, "quantum_orbits": {}}"#,
    ];
    let result = tdse("run", &shipped("quickstart.json"), &folder.path().join("out"), &sets).result();
    let [classical, quantum] =
        ["three_step", "quantum_orbits"].map(|model| of(&result, model, "cutoff_energy")[0]);
    let above = (quantum - classical) / 13.598;
    println!("classical {classical} eV, quantum {quantum} eV: {above:.3} Ip above");
    assert!(above > 0.0 && above < 0.5, "{above}");
    let times = numbers(&result, "models/quantum_orbits/orbits", "barrier_time");
    assert!(times.iter().filter(|time| time.is_finite()).count() > 20, "{times:?}");
}

/// A scan over three parameters is drawn in slices; along a single one the Keldysh parameter is a second axis.
#[test]
fn verdicts_over_one_and_three_parameters() {
    let folder = tempfile::tempdir().unwrap();
    let axis = |place: &str, name: &str, values: &str| {
        format!(r#"{{"parameter": "/field/pulses/0/{place}", "name": "{name}", "values": {values}}}"#)
    };
    let cycles = axis("envelope/cycles", "cycles", "[2, 3]");
    let wavelength = axis("wavelength", "wavelength", r#"["600 nm", "800 nm"]"#);
    let intensity = axis("intensity", "intensity", r#"["5e13 W/cm^2", "1e14 W/cm^2"]"#);
    let models = r#"/models={"three_step": {}, "tunnelling": {}}"#;
    let config = shipped("model_validity.json");
    let scan = format!("/scan=[{cycles}, {wavelength}, {intensity}]");
    let ran = tdse("run", &config, &folder.path().join("three"), &[models, &scan]);
    for words in
        ["  at cycles 2\n", "  at cycles 3\n", "intensity from 5.0000e13 W/cm**2 to 1.0000e14 W/cm**2"]
    {
        assert_eq!(
            ran.data.matches(words).count(),
            if words.contains("from") { 4 } else { 2 },
            "{words:?}: {}",
            ran.data
        );
    }
    let drawn = |name: &str| std::fs::read_to_string(ran.out.join("report").join(name)).unwrap();
    assert!(drawn("verdict_1.svg").contains("cycles 2") && drawn("verdict_2.svg").contains("cycles 3"));
    let ran = tdse("run", &config, &folder.path().join("one"), &[models, &format!("/scan=[{wavelength}]")]);
    let drawn = std::fs::read_to_string(ran.out.join("report/verdict.svg")).unwrap();
    // γ of 600 and 800 nm at 1e14 W/cm² is 1.42 and 1.07: 1.2 lies between.
    assert!(drawn.contains("Keldysh parameter") && drawn.contains(">1.20<"), "{drawn}");
}

/// The shipped scan at its corners. Keldysh 1965: tunnelling rates hold where γ is small, and fail by orders of magnitude where it is
/// large; γ falls as 1/(λ√I).
#[test]
fn the_verdict_map_follows_the_keldysh_parameter() {
    let folder = tempfile::tempdir().unwrap();
    let sets = ["/scan/0/points=2", "/scan/1/points=2", "/field/pulses/0/envelope/cycles=4"];
    let ran = tdse("run", &shipped("model_validity.json"), &folder.path().join("out"), &sets);
    let result = ran.result();
    let gamma = of(&result, "tunnelling", "keldysh_parameter");
    // Wavelengths 600 and 1200 nm, intensities 3e13 and 1.92e14 W/cm².
    let ratio = 2.0 * (1.92e14f64 / 3e13).sqrt();
    assert!((gamma[0] / gamma[3] - ratio).abs() < 1e-6 * ratio, "{gamma:?}");
    let ionization = of(&result, "tunnelling", "ionization_ratio");
    println!("γ {gamma:?}: ionization {ionization:?}");
    assert!(ionization[0] < 0.1, "multiphoton: {ionization:?}");
    assert!((ionization[3] - 1.0).abs() < 0.5, "tunnelling: {ionization:?}");
    let verdict = verdicts(&result, "tunnelling", "verdict");
    assert_eq!((verdict[0], verdict[3]), (2, 1));
    for model in ["three_step", "strong_field", "quantum_orbits", "recombination"] {
        assert_eq!(verdicts(&result, model, "verdict").len(), 4, "{model}");
        assert!(ran.data.contains(&format!("\n{model}\n")), "{}", ran.data);
    }
    assert!(ran.data.contains("x +\n") || ran.data.contains("x x\n"), "a map of signs:\n{}", ran.data);
    assert!(ran.out.join("report/verdict.png").is_file());
    // Spectra are stacked like those of the full run; series stay with the points.
    let shape = |group: &str, name: &str| result.real(group, name).unwrap().shape().to_vec();
    assert_eq!(shape("models/strong_field/harmonics", "spectrum"), shape("harmonics", "spectrum"));
    assert!(result.groups().all(|(path, _)| !path.ends_with("returns") && !path.ends_with("ionization")));
}

/// A table of something else is refused before anything runs, with the line, what it says and what belongs there.
#[test]
fn a_curve_of_another_kind_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    std::fs::copy(shipped("quickstart.json"), folder.path().join("short.json")).unwrap();
    let said = |table: &str, models: &str| {
        std::fs::write(folder.path().join("own.csv"), table).unwrap();
        let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
        let config = folder.path().join("short.json");
        let ended = program.arg("check").arg(config).args(["--set", models]).output().unwrap();
        assert_eq!(ended.status.code(), Some(2), "{ended:?}");
        String::from_utf8(ended.stderr).unwrap()
    };
    let curve = r#"/models={"curve": {"file": "own.csv"}}"#;
    assert_eq!(
        said("time [fs],electric_field [V/m]\n0,0\n1,1\n2,1\n3,0\n", curve).trim_end(),
        r#"/models/curve/file: "own.csv" has a fault in line 1: "time [fs]" is not photon_energy and its unit; allowed: a header such as photon_energy [eV],spectrum [au], with the unit eV, meV, keV, hartree or au; correct line 1 of the file"#
    );
    assert_eq!(
        said("photon_energy [eV],spectrum [au]\n0,0\n1,1\n2,-1\n3,0\n", curve).trim_end(),
        r#"/models/curve/file: "own.csv" holds no curve: values of a curve are 0 or more: entry 2 is -1; allowed: values of 0 or more; correct the file"#
    );
    let electrons = r#"/models={"curve": {"file": "own.csv", "of": "photoelectrons"}}"#;
    assert_eq!(
        said("energy [eV],yield [1/eV]\n0,0\n1,1\n2,1\n3,0\n", electrons).trim_end(),
        r#"/models/curve: {"file":"own.csv","of":"photoelectrons"} is laid beside outputs.photoelectrons, which is not there; allowed: that output, or the key left out; at /models try {}"#
    );
}
