//! Expansion of scans: which points, in which order, written how.
//!
//! The configurations are invented for these tests.

use std::path::Path;

use serde_json::{Value, json};
use tdse_cli::config::read;
use tdse_cli::scan::points::{Coordinates, ScanRequest, read_scan};

fn scan(axes: &Value) -> ScanRequest {
    let text = json!({
        "atom": { "potential": { "kind": "soft_coulomb" }, "element": "Ne" },
        "field": { "pulses": [
            { "wavelength": "800 nm", "intensity": "1e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 4 } }
        ] },
        "scan": axes,
    });
    read_scan(&text.to_string(), &[], Path::new(""), |_| false)
        .unwrap_or_else(|complaints| panic!("{complaints}"))
}

/// What the points say at `pointer`.
fn written(scan: &ScanRequest, pointer: &str) -> Vec<Value> {
    let trees =
        scan.points.iter().map(|point| serde_json::from_str::<Value>(&point.text).unwrap_or_default());
    trees.map(|tree| tree.pointer(pointer).cloned().unwrap_or_default()).collect()
}

const PHASE: &str = "/field/pulses/0/phase";
const CYCLES: &str = "/field/pulses/0/envelope/cycles";

#[test]
fn ends_are_included_and_the_unit_is_that_of_the_first() {
    let phases = scan(&json!([{ "parameter": PHASE, "from": "0 deg", "to": "345 deg", "points": 24 }]));
    let expected: Vec<Value> = (0..24).map(|i| json!(format!("{} deg", 15 * i))).collect();
    assert_eq!(written(&phases, PHASE), expected);
    assert_eq!((phases.shape.as_slice(), phases.axes[0].name.as_str()), (&[24][..], "field_pulses_0_phase"));

    let wavelength = "/field/pulses/0/wavelength";
    let colours = scan(&json!([{ "parameter": wavelength, "from": "0.8 um", "to": "2000 nm", "points": 3 }]));
    assert_eq!(written(&colours, wavelength), ["0.8 um", "1.4 um", "2 um"]);
}

#[test]
fn values_have_twelve_digits_and_may_descend() {
    let thirds = scan(&json!([{ "parameter": PHASE, "from": "1 rad", "to": "0 rad", "points": 4 }]));
    assert_eq!(written(&thirds, PHASE), ["1 rad", "0.666666666667 rad", "0.333333333333 rad", "0 rad"]);
}

/// Powers of ten: 10^13.5 = 3.1622776601683795e13.
#[test]
fn logarithmic_axes_have_equal_ratios() {
    let intensity = "/field/pulses/0/intensity";
    let axis = json!([{ "parameter": intensity, "from": "1e13 W/cm^2", "to": "1e15 W/cm^2", "points": 5, "spacing": "log" }]);
    let expected =
        ["1e13 W/cm^2", "3.16227766017e13 W/cm^2", "1e14 W/cm^2", "3.16227766017e14 W/cm^2", "1e15 W/cm^2"];
    assert_eq!(written(&scan(&axis), intensity), expected);
}

#[test]
fn whole_numbers_stay_whole() {
    let states = scan(&json!([{ "parameter": "/atom/state/number", "from": 0, "to": 2, "points": 3 }]));
    assert_eq!(written(&states, "/atom/state/number"), [json!(0), json!(1), json!(2)]);
}

#[test]
fn the_last_axis_is_fastest_and_axes_in_step_share_a_dimension() {
    let grid = scan(&json!([
        { "parameter": PHASE, "name": "cep", "values": ["0 deg", "90 deg"], "together": "pair" },
        { "parameter": CYCLES, "name": "cycles", "from": 2, "to": 6, "points": 3 },
        { "parameter": "/atom/element", "name": "gas", "values": ["Ar", "Xe"], "together": "pair" },
    ]));
    assert_eq!(grid.shape, [2, 3]);
    assert_eq!(grid.axes.iter().map(|axis| axis.dimension).collect::<Vec<_>>(), [0, 1, 0]);
    let labels: Vec<&str> = grid.points.iter().map(|point| point.label.as_str()).collect();
    let expected = [
        r#"cep = "0 deg", cycles = 2, gas = "Ar""#,
        r#"cep = "0 deg", cycles = 4, gas = "Ar""#,
        r#"cep = "0 deg", cycles = 6, gas = "Ar""#,
        r#"cep = "90 deg", cycles = 2, gas = "Xe""#,
        r#"cep = "90 deg", cycles = 4, gas = "Xe""#,
        r#"cep = "90 deg", cycles = 6, gas = "Xe""#,
    ];
    assert_eq!(labels, expected);
}

#[test]
fn a_point_is_a_configuration_of_its_own() {
    let grid = scan(&json!([
        { "parameter": "/numerics/spacing", "values": ["0.2 bohr", "0.4 bohr"] },
        { "parameter": "/field/pulses/0/envelope", "values": [{ "kind": "gaussian", "fwhm": "5 fs" }, { "kind": "sin2", "cycles": 3 }] },
    ]));
    assert_eq!(grid.points.len(), 4);
    for point in &grid.points {
        assert!(!point.text.contains("\"scan\""), "{}", point.text);
        assert_eq!(read(&point.text, &[], Path::new("")).as_ref(), Ok(&point.request));
    }
}

#[test]
fn an_axis_may_supply_what_the_file_lacks() {
    let text = json!({
        "atom": { "potential": { "kind": "soft_coulomb" } },
        "field": { "pulses": [{ "intensity": "1e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 4 } }] },
        "scan": [
            { "parameter": "/atom/element", "values": ["Ar", "Xe"] },
            { "parameter": "/field/pulses/0/wavelength", "values": ["800 nm", "1.3 um"] },
        ],
    });
    let scan = read_scan(&text.to_string(), &[], Path::new(""), |_| false);
    assert_eq!(scan.map(|scan| scan.points.len()), Ok(4));
}

#[test]
fn without_axes_there_is_one_point() {
    let single = scan(&json!([]));
    assert_eq!((single.points.len(), single.shape.len()), (1, 0));
    assert_eq!(single.points[0].label, "");
}

#[test]
fn coordinates_are_numbers_where_they_can_be() {
    let coordinates = |parameter: &str, values: Value| {
        let scan = scan(&json!([{ "parameter": parameter, "values": values }]));
        scan.axes[0].coordinates.clone()
    };
    let numbers = |values: &[f64], unit| Coordinates::Numbers { values: values.to_vec(), unit };
    assert_eq!(coordinates(PHASE, json!(["0 deg", "45 deg"])), numbers(&[0.0, 45.0], Some("deg")));
    assert_eq!(coordinates(PHASE, json!(["0.5 pi", "90 deg"])), numbers(&[0.5, 0.5], Some("pi")));
    assert_eq!(coordinates(CYCLES, json!([2, 3.5])), numbers(&[2.0, 3.5], None));
    let words = Coordinates::Words(vec!["Ar".into(), "H".into()]);
    assert_eq!(coordinates("/atom/element", json!(["Ar", "H"])), words);
}

#[test]
fn overrides_come_before_the_scan() {
    let text = json!({
        "atom": { "potential": { "kind": "soft_coulomb" }, "element": "Ne" },
        "field": { "pulses": [
            { "wavelength": "800 nm", "intensity": "1e14 W/cm^2", "envelope": { "kind": "sin2", "cycles": 4 } }
        ] },
        "scan": [{ "parameter": PHASE, "from": "0 deg", "to": "90 deg", "points": 2 }],
    });
    let sets = ["/scan/0/points=3".to_owned(), "/field/pulses/0/wavelength=1.2 um".to_owned()];
    let scan =
        read_scan(&text.to_string(), &sets, Path::new(""), |_| false).unwrap_or_else(|c| panic!("{c}"));
    assert_eq!(written(&scan, PHASE), ["0 deg", "45 deg", "90 deg"]);
    assert_eq!(written(&scan, "/field/pulses/0/wavelength"), ["1.2 um"; 3]);
}
