//! Short and long paths of a full result over the intensity, through the program. The scenario is the shipped one, invented.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use tdse_cli::store::{self, Contents, Values};

const BRANCHES: &str = "models/quantum_orbits/branches";
/// rad cm²/W.
const UNIT: f64 = 1e-14;

fn shipped() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs/short_and_long.json")
}

fn tdse(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_tdse")).args(arguments).output().expect("the program starts")
}

/// Slopes in `UNIT` by [intensity][order], short or long.
fn slopes(contents: &Contents, name: &str, orbit: usize) -> Vec<Vec<f64>> {
    let all = contents.real(BRANCHES, name).unwrap_or_else(|| panic!("{name}"));
    let of_intensity =
        |i: usize| all.index_axis(ndarray::Axis(0), i).index_axis(ndarray::Axis(0), orbit).to_owned();
    (0..all.shape()[0]).map(|i| of_intensity(i).iter().map(|slope| slope / UNIT).collect()).collect()
}

/// Lewenstein, Salières, L'Huillier, Phys. Rev. A 52, 4747 (1995): the phase of the plateau turns slowly with the intensity by the
/// short path and fast by the long one; in the cutoff they are one, and turn by 3.2 Up/ω. Near the threshold the long path takes a
/// period and its action is Up times that, a slope of 2π Up/ω over Up (closed form).
///
/// Measured here at 1.2e14 W/cm², in 1e-14 rad cm²/W: orders 17 to 23 differ from the orbits by 0.02 to 0.94 on the short, by 0.3 to
/// 2.9 on the long paths; the cutoff turns by 13.2, against 12.3.
#[test]
fn paths_of_the_full_result_turn_as_the_orbits_do() {
    let folder = tempfile::tempdir().unwrap();
    let (config, out) = (shipped(), folder.path().join("out"));
    let ended = tdse(&["run", "--quiet", config.to_str().unwrap(), "--out", out.to_str().unwrap()]);
    assert!(ended.status.success(), "{ended:?}");
    let said = String::from_utf8(ended.stdout).unwrap();
    assert!(
        said.contains("Phase slopes of the full result's paths against the quantum orbits at 1.2000e14"),
        "{said}"
    );
    let result = store::read(&out.join("result.h5")).unwrap();
    let [short, long] = [0, 1].map(|orbit| slopes(&result, "phase_slope", orbit));
    let [slow, fast] = [0, 1].map(|orbit| slopes(&result, "orbit_phase_slope", orbit));
    let middle = short.len() / 2;
    for order in [17, 19, 21, 23] {
        let at = |slopes: &[Vec<f64>]| slopes[middle][order - 1];
        println!("{order}: {:.2} {:.2}, orbits {:.2} {:.2}", at(&short), at(&long), at(&slow), at(&fast));
        assert!((at(&short) - at(&slow)).abs() < 1.2, "short path of order {order}");
        assert!((at(&long) - at(&fast)).abs() < 3.2, "long path of order {order}");
    }
    // Up/ω per intensity: E²/4ω³ of 800 nm (CODATA 2022), 3.856e-14 cm²/W.
    let per_intensity = 3.856;
    for order in (27..=45).step_by(2) {
        let (one, other) = (short[middle][order - 1], long[middle][order - 1]);
        assert!(one.to_bits() == other.to_bits(), "told apart in the cutoff: {one} and {other}");
        assert!((one / (3.2 * per_intensity) - 1.0).abs() < 0.1, "order {order} turns by {one}");
    }
    let threshold = fast[middle][8] / (std::f64::consts::TAU * per_intensity);
    assert!((threshold - 1.0).abs() < 0.02, "order 9 is the first above the threshold: {threshold}");
    // Where the window does not lie within the scan there is no slope, nor at even orders.
    assert!(short[0][18].is_nan() && short[middle][17].is_nan() && slow[1][18].is_finite());
    // Both contribute about as much, and together what there is.
    let parts = slopes(&result, "branch_amplitude", 0)[middle][18]
        / slopes(&result, "branch_amplitude", 1)[middle][18];
    assert!((0.3..3.0).contains(&parts), "{parts}");
    assert!(out.join("report/branches.png").is_file());

    // Gathered again it is the same, and a point alone is asked nothing of the kind.
    let ended = tdse(&["gather", out.to_str().unwrap()]);
    assert!(ended.status.success(), "{ended:?}");
    let again = store::read(&out.join("result.h5")).unwrap();
    assert_eq!(
        again.get(BRANCHES, "branch_phase").map(Values::shape),
        result.get(BRANCHES, "branch_phase").map(Values::shape)
    );
    assert!(store::differences(&result, &again).is_empty());
}

/// Without the ion's long reach, which the orbits leave out, both paths come closer (measured: 0.1 to 0.9 on the short, 0.1 to 1.1 on the
/// long ones). Pöschl–Teller, λ = 1: Ip of half a hartree.
#[test]
fn paths_of_a_short_range_well() {
    let folder = tempfile::tempdir().unwrap();
    let (config, out) = (shipped(), folder.path().join("out"));
    let atom = r#"/atom={"potential": {"kind": "poschl_teller", "lambda": 1, "width": "1 bohr"}}"#;
    let ended =
        tdse(&["run", "--quiet", config.to_str().unwrap(), "--out", out.to_str().unwrap(), "--set", atom]);
    assert!(ended.status.success(), "{ended:?}");
    let result = store::read(&out.join("result.h5")).unwrap();
    for orbit in [0, 1] {
        let [full, orbits] = ["phase_slope", "orbit_phase_slope"].map(|name| slopes(&result, name, orbit));
        for order in [17, 19, 21, 23] {
            let [full, orbit] = [&full, &orbits].map(|slopes| slopes[slopes.len() / 2][order - 1]);
            println!("{order}: {full:.2}, orbit {orbit:.2}");
            assert!((full - orbit).abs() < 1.3, "order {order}");
        }
    }
}

/// Refused before anything runs, with the place, the value, what is allowed and a way out.
#[test]
fn scans_that_cannot_part_the_paths_are_refused() {
    let said = |sets: &[&str]| {
        let config = shipped();
        let mut arguments = vec!["check", config.to_str().unwrap()];
        arguments.extend(sets.iter().flat_map(|set| ["--set", set]));
        let ended = tdse(&arguments);
        assert_eq!(ended.status.code(), Some(2), "{sets:?}: {ended:?}");
        String::from_utf8(ended.stderr).unwrap().trim_end().to_owned()
    };
    let allowed = "allowed: a scan over /field/pulses/0/intensity on an axis of its own, with 12 or more rising values in equal \
                   steps; at /models/quantum_orbits try {}";
    let place = "/models/quantum_orbits/branches: {}";
    let phase =
        r#"/scan=[{"parameter": "/field/pulses/0/phase", "from": "0 deg", "to": "90 deg", "points": 20}]"#;
    assert_eq!(
        said(&[phase]),
        format!("{place} needs the intensity scanned, and no axis does that; {allowed}")
    );
    let log = r#"/scan/0/spacing="log""#;
    let few = format!("{place} needs more intensities, or equal steps between them, upwards; {allowed}");
    assert_eq!(said(&["/scan/0/points=11"]), few);
    assert_eq!(said(&[log]), few);
    let wide = r#"/models/quantum_orbits/branches/window="1e14 W/cm^2""#;
    assert_eq!(
        said(&[wide]),
        r#"/models/quantum_orbits/branches/window: "1e14 W/cm^2" does not fit the scan; allowed: from three steps of the scan, 9e12 W/cm^2, to half of its range, 6e13 W/cm^2; try "4.8e13 W/cm^2""#
    );
}
