//! Curves of the user's beside the full result: from HDF5 files, and of rates. All tables are invented here; the scenario is the shipped
//! quickstart, shorter.

use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use tdse_cli::store::{self, Contents, Values};

struct Desk {
    folder: tempfile::TempDir,
}

impl Desk {
    fn new() -> Self {
        let desk = Self { folder: tempfile::tempdir().unwrap() };
        let shipped = Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs/quickstart.json");
        std::fs::copy(shipped, desk.path("short.json")).unwrap();
        desk
    }

    fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    fn tdse(&self, command: &str, sets: &[&str]) -> Output {
        let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
        program
            .arg(command)
            .arg(self.path("short.json"))
            .args(["--set", "/field/pulses/0/envelope/cycles=4"]);
        program.args(sets.iter().flat_map(|set| ["--set", set]));
        if command == "run" {
            program.args(["--quiet", "--out"]).arg(self.path("out"));
        }
        program.output().expect("the program starts")
    }

    fn run(&self, sets: &[&str]) -> Contents {
        let ended = self.tdse("run", sets);
        assert!(ended.status.success(), "{sets:?}: {ended:?}");
        store::read(&self.path("out/result.h5")).unwrap()
    }

    fn refused(&self, sets: &[&str]) -> String {
        let ended = self.tdse("check", sets);
        assert_eq!(ended.status.code(), Some(2), "{sets:?}: {ended:?}");
        String::from_utf8(ended.stderr).unwrap().trim_end().to_owned()
    }

    /// A file as another program writes it.
    fn hdf5(&self, name: &str, datasets: &[(&str, &[f64], Option<&str>)]) {
        let file = hdf5_metno::File::create(self.path(name)).unwrap();
        let group = file.create_group("mine").unwrap();
        for (name, values, units) in datasets {
            let dataset = group.new_dataset_builder().with_data(*values).create(*name).unwrap();
            if let Some(units) = units {
                let text: hdf5_metno::types::FixedAscii<64> =
                    hdf5_metno::types::FixedAscii::from_ascii(units).unwrap();
                dataset
                    .new_attr::<hdf5_metno::types::FixedAscii<64>>()
                    .create("units")
                    .unwrap()
                    .write_scalar(&text)
                    .unwrap();
            }
        }
        let plane = ndarray::Array2::<f64>::zeros((3, 4));
        group.new_dataset_builder().with_data(&plane).create("plane").unwrap();
    }
}

fn numbers(contents: &Contents, group: &str, name: &str) -> Vec<f64> {
    contents.real(group, name).unwrap_or_else(|| panic!("{group}/{name}")).iter().copied().collect()
}

fn compared(contents: &Contents, name: &str) -> f64 {
    numbers(contents, "models/curve/comparison", name)[0]
}

fn verdict(contents: &Contents, name: &str) -> i64 {
    match contents.get("models/curve/comparison", name) {
        Some(Values::Integer(verdicts)) => verdicts[[]],
        other => panic!("{name}: {other:?}"),
    }
}

const FINE: &str = "/outputs/harmonics/energy_step=0.01 eV";

/// A spectrum half as large again, in hartree: log₁₀ 1.5 decades above and the same after the shift (planted). A result of the
/// program's own, by its file alone, is at no distance from itself.
#[test]
fn spectra_in_hdf5_files() {
    let desk = Desk::new();
    let full = desk.run(&[FINE]);
    std::fs::copy(desk.path("out/result.h5"), desk.path("own.h5")).unwrap();
    // Hartree energy by CODATA 2022.
    let energies: Vec<f64> =
        numbers(&full, "harmonics", "photon_energy").iter().map(|e| e / 27.211_386_245_981).collect();
    let values: Vec<f64> = numbers(&full, "harmonics", "spectrum").iter().map(|v| 1.5 * v).collect();
    let unit = "bohr ** 2 / atomic_unit_of_time ** 2";
    desk.hdf5("mine.h5", &[("energy", &energies, Some("hartree")), ("half_more", &values, Some(unit))]);
    let planted =
        r#"/models={"curve": {"file": "mine.h5", "dataset": "/mine/half_more", "axis": "/mine/energy"}}"#;
    let result = desk.run(&[FINE, planted]);
    let [level, shifted] = ["level_difference", "shifted_distance"].map(|name| compared(&result, name));
    println!("level {level}, shifted {shifted}");
    assert!((level - 1.5f64.log10()).abs() < 2e-3 && shifted < 2e-3, "level {level}, shifted {shifted}");

    // What is kept runs again, without the file.
    std::fs::remove_file(desk.path("mine.h5")).unwrap();
    let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
    let again =
        program.args(["run", "--quiet", "--out"]).arg(desk.path("again")).arg(desk.path("out/result.h5"));
    let ended = again.output().unwrap();
    assert!(ended.status.success(), "{ended:?}");
    let again = store::read(&desk.path("again/result.h5")).unwrap();
    assert_eq!(compared(&again, "level_difference").to_bits(), level.to_bits());

    let own = desk.run(&[FINE, r#"/models={"curve": {"file": "own.h5"}}"#]);
    let distance = compared(&own, "distance");
    println!("own {distance}");
    assert!(distance < 2e-3, "{distance}");
}

/// A constant rate w ionizes 1 - exp(-wT); one in proportion to the intensity, under sin², 1 - exp(-3/8 w T) of its peak (∫sin⁴).
#[test]
fn curves_of_rates_ionize() {
    let desk = Desk::new();
    std::fs::write(
        desk.path("flat.csv"),
        "electric_field [GV/m],rate [1/fs]\n0,0.01\n10,0.01\n20,0.01\n100,0.01\n",
    )
    .unwrap();
    let flat = r#"/models={"curve": {"file": "flat.csv", "of": "rate_over_field"}}"#;
    let result = desk.run(&[flat]);
    let time = numbers(&result, "models/curve/ionization", "time");
    let expected = 1.0 - (-0.01 * (time[time.len() - 1] - time[0])).exp();
    let found = compared(&result, "ionization_probability");
    assert!((found / expected - 1.0).abs() < 1e-9, "{found} against {expected}");
    let full = numbers(&result, "summary", "ionization_probability")[0];
    let ratio = compared(&result, "ionization_ratio");
    assert!((ratio - found / full).abs() < 1e-9 * ratio, "{ratio}");
    assert_eq!(verdict(&result, "verdict"), verdict(&result, "ionization_verdict"));
    assert!(desk.path("out/report/ionization.png").is_file());

    // 1e14 W/cm² at the peak, four cycles of 800 nm.
    let mut table = String::from("intensity [TW/cm^2],rate [1/fs]\n");
    for i in 0..=2000 {
        let _ = writeln!(table, "{},{:e}", 0.06 * f64::from(i), 0.05 * 0.0006 * f64::from(i));
    }
    std::fs::write(desk.path("rising.csv"), table).unwrap();
    let rising = r#"/models={"curve": {"file": "rising.csv", "of": "rate_over_intensity"}}"#;
    let found = compared(&desk.run(&[rising]), "ionization_probability");
    let duration: f64 = 4.0 * 800e-9 / 299_792_458.0 * 1e15;
    let expected = 1.0 - (-0.375 * 0.05 * duration).exp();
    assert!((found / expected - 1.0).abs() < 1e-3, "{found} against {expected}");

    // A curve that does not reach the field says nothing, and why.
    std::fs::write(
        desk.path("flat.csv"),
        "electric_field [GV/m],rate [1/fs]\n0,0.01\n5,0.01\n10,0.01\n20,0.01\n",
    )
    .unwrap();
    let result = desk.run(&[flat]);
    let (_, group) = result.groups().find(|(path, _)| *path == "models/curve/comparison").unwrap();
    let failure = &group.attributes["failure"];
    assert!(failure.starts_with("the curve ends at 2e10 V/m, and the field reaches 2.7"), "{failure}");
    assert_eq!(verdict(&result, "verdict"), -1);
}

/// Refused before anything runs, each with the place, what stands there and what is allowed.
#[test]
fn curves_that_cannot_be_had_are_refused() {
    let desk = Desk::new();
    let (energy, value): (Vec<f64>, Vec<f64>) = (0..9).map(|i| (f64::from(i), 1.0)).unzip();
    let spectrum = Some("bohr**2/atomic_unit_of_time**2");
    desk.hdf5(
        "mine.h5",
        &[
            ("energy", &energy, Some("eV")),
            ("value", &value, spectrum),
            ("back", &[3.0, 2.0, 1.0, 0.0, -1.0, -2.0, -3.0, -4.0, -5.0], Some("eV")),
            ("few", &energy[..5], Some("eV")),
            ("bare", &value, None),
            ("length", &energy, Some("nm")),
            ("holes", &[1.0, 1.0, f64::NAN, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0], spectrum),
        ],
    );
    let said = |axis: &str, dataset: &str| {
        desk.refused(&[&format!(
            r#"/models={{"curve": {{"file": "mine.h5", "dataset": "/mine/{dataset}", "axis": "/mine/{axis}"}}}}"#
        )])
    };
    let numbers =
        "allowed: the path of a dataset of numbers along one axis; name another dataset, or correct the file";
    let units = |unit: &str| {
        format!(
            "allowed: an attribute units that can be converted to {unit}; name another dataset, or correct the file"
        )
    };
    let (au, dataset) = ("bohr**2 / atomic_unit_of_time**2", "/models/curve/dataset");
    assert_eq!(
        said("energy", "none"),
        format!(
            r#"{dataset}: "/mine/none" leads to /mine/none in "mine.h5", which is no dataset of the file; {numbers}"#
        )
    );
    assert_eq!(
        said("energy", "plane"),
        format!(
            r#"{dataset}: "/mine/plane" leads to /mine/plane in "mine.h5", which has 2 dimensions; {numbers}"#
        )
    );
    assert_eq!(
        said("energy", "bare"),
        format!(
            r#"{dataset}: "/mine/bare" leads to /mine/bare in "mine.h5", which has no attribute units; {}"#,
            units(au)
        )
    );
    assert_eq!(
        said("length", "value"),
        format!(
            r#"/models/curve/axis: "/mine/length" leads to /mine/length in "mine.h5", which has the units "nm"; {}"#,
            units("eV")
        )
    );
    let more = "name another dataset, or correct the file";
    assert_eq!(
        said("energy", "holes"),
        format!(
            r#"{dataset}: "/mine/holes" leads to /mine/holes in "mine.h5", which has no number at position 2; allowed: finite numbers; {more}"#
        )
    );
    assert_eq!(
        said("back", "value"),
        format!(
            r#"/models/curve/axis: "/mine/back" leads to /mine/back in "mine.h5", which does not rise at position 1; allowed: rising values; {more}"#
        )
    );
    assert_eq!(
        said("few", "value"),
        format!(
            r#"/models/curve/axis: "/mine/few" leads to /mine/few in "mine.h5", which has 5 values, and the dataset 9; allowed: equal numbers, 4 or more; {more}"#
        )
    );
    assert_eq!(
        desk.refused(&[r#"/models={"curve": {"file": "mine.h5"}}"#]),
        r#"/models/curve/file: "mine.h5" leads to /entry/harmonics/photon_energy in "mine.h5", which is no dataset of the file; "#.to_owned() + numbers
    );
    assert_eq!(
        desk.refused(&[
            r#"/models={"curve": {"file": "mine.h5", "of": "rate_over_field", "axis": "/mine/energy"}}"#
        ]),
        r#"/models/curve/dataset: is missing: a curve in an HDF5 file has a dataset and an axis; allowed: the path of a dataset in the file; try "/spectra/mine""#
    );
}

/// The same of CSV files.
#[test]
fn tables_that_hold_something_else_are_refused() {
    let desk = Desk::new();
    std::fs::write(desk.path("own.csv"), "photon_energy [eV],spectrum [au]\n0,0\n1,1\n2,1\n3,0\n").unwrap();
    assert_eq!(
        desk.refused(&[r#"/models={"curve": {"file": "own.csv", "dataset": "/mine/value"}}"#]),
        r#"/models/curve/dataset: "/mine/value" names a dataset, and "own.csv" is no HDF5 file; allowed: an HDF5 file, or the key left out; leave it out"#
    );
    assert_eq!(
        desk.refused(&[r#"/models={"curve": {"file": "own.csv", "of": "rate_over_field"}}"#]),
        r#"/models/curve/file: "own.csv" has a fault in line 1: "photon_energy [eV]" is not electric_field and its unit; allowed: a header such as electric_field [V/m],rate [1/fs], with the unit V/m, MV/cm, GV/m, V/nm, V/angstrom or au; correct line 1 of the file"#
    );
    std::fs::write(desk.path("own.csv"), "intensity [W/cm^2],rate [au]\n0,0\n1e14,1\n2e14,1\n3e14,0\n")
        .unwrap();
    let two = r#"/field/pulses=[
        {"wavelength": "800 nm", "intensity": "1e14 W/cm^2", "envelope": {"kind": "sin2", "cycles": 4}},
        {"wavelength": "400 nm", "intensity": "1e13 W/cm^2", "envelope": {"kind": "sin2", "cycles": 8}}]"#;
    let of_intensity = r#"/models={"curve": {"file": "own.csv", "of": "rate_over_intensity"}}"#;
    assert_eq!(
        desk.refused(&[two, of_intensity]),
        r#"/models/curve: {"file":"own.csv","of":"rate_over_intensity"} holds rates averaged over a cycle, and the field has no one cycle; allowed: a single linearly polarized pulse, or rates over the field; at /models try {}"#
    );
}
