//! Results on disk: what is written comes back exactly, scans stack, and what is not ours is refused.
//!
//! That other programs can open the files is checked by `python/open_everywhere.py` on the files that these tests
//! leave in `target/tmp/layout`.

use std::fs;
use std::path::{Path, PathBuf};

use hdf5_metno::filters::Filter;
use hdf5_metno::types::VarLenUnicode;
use ndarray::{Array1, Array2, ArrayD, Axis, IxDyn};
use tdse_cli::store::{
    Contents, Error, Gathering, Patterns, Point, Provenance, ScanAxis, ScanDimension, Status, Values, gather,
    publish, read, read_groups, read_headline, table, write,
};

const PHOTON_ENERGIES: usize = 120;

fn provenance(title: &str) -> Provenance {
    Provenance {
        title: title.into(),
        start_time: "2026-03-01T12:00:00Z".into(),
        end_time: "2026-03-01T12:00:07Z".into(),
        version: "0.1.0".into(),
        commit: "0123abc".into(),
        instruction_set: "AVX2".into(),
        host_cores: "8".into(),
        input: "{\n  \"title\": \"Phase φ\"\n}\n".into(),
        overrides: "[]".into(),
        configuration: "{}".into(),
        inputs: [("field.csv".to_owned(), "time [fs],electric_field [V/m]\n".repeat(5000))].into(),
    }
}

/// Numbers without meaning that differ from array to array and use all bits.
fn some(shape: &[usize], seed: f64) -> ArrayD<f64> {
    let length = shape.iter().product();
    let numbers = (0..length).map(|i| (seed + i as f64 * 0.618_033_988_749_895).sin() / 3.0);
    ArrayD::from_shape_vec(IxDyn(shape), numbers.collect()).unwrap()
}

/// A result of one point in one dimension with every group of the layout in it.
fn point(photon: f64, cep: f64) -> Contents {
    let mut result = Contents::new(provenance("One point"));
    let times = 20_000;
    for group in ["field", "dynamics", "populations", "time_frequency"] {
        let length = if group == "time_frequency" { 30 } else { times };
        if group == "populations" {
            result.insert(group, "state", vec![0, 1, 2]);
        }
        result.insert(group, "time", Array1::linspace(-10.0, 30.0, length));
    }
    result.insert("field", "electric_field", some(&[times], cep));
    result.insert("field", "vector_potential", some(&[times], cep + 1.0));
    for (seed, name) in ["dipole_acceleration", "dipole", "norm"].iter().enumerate() {
        result.insert("dynamics", name, some(&[times], seed as f64));
    }
    result.insert("populations", "energy", vec![-13.6, -7.5, -4.0]);
    result.insert("populations", "initial_population", some(&[times], 4.0));
    result.insert("populations", "populations", some(&[3, times], 5.0));
    spectra(&mut result, "harmonics", photon, cep);
    spectra(&mut result, "models/strong_field/harmonics", photon, cep + 0.5);
    result.insert("harmonics", "spectrum_errors", some(&[PHOTON_ENERGIES], 6.0));
    result.remark("harmonics", "window", "none");
    result.insert("harmonic_yields", "order", vec![1, 2, 3]);
    result.insert("harmonic_yields", "yield", some(&[3], cep));
    result.insert("time_frequency", "photon_energy", Array1::linspace(0.0, 60.0, 40));
    result.insert("time_frequency", "intensity", some(&[30, 40], 7.0));
    result.insert("photoelectrons", "energy", Array1::linspace(0.0, 20.0, 50));
    for (seed, name) in ["yield", "left", "right"].iter().enumerate() {
        result.insert("photoelectrons", name, some(&[50], cep + seed as f64));
    }
    result.insert("momentum", "momentum", Array1::linspace(-2.0, 2.0, 21));
    result.insert("momentum", "density", some(&[21], cep));
    result.insert("levels", "state", vec![0, 1]);
    result.insert("levels", "energy", vec![-13.6, f64::NAN]);
    result.insert("levels", "population", vec![0.75, f64::NAN]);
    result.insert("summary", "electron_method", 1);
    result.insert("summary", "ionization_probability", 0.25 + cep / 100.0);
    result.insert("summary", "ionization_probability_errors", 1e-5);
    result.insert("summary", "cutoff_energy", 42.0 + cep);
    result.insert("refinement", "cause", (0..5i64).collect::<Vec<_>>());
    for name in ["harmonic_yields", "electron_spectrum", "cutoff_energy", "ionization_probability"] {
        result.insert("refinement", name, some(&[5], cep));
    }
    result.remark("refinement", "causes", "0 time_step, 1 spacing, 2 extent, 3 absorber, 4 trailing_time");
    result.insert("model_atoms", "model", vec![0i64, 1]);
    result.insert("model_atoms", "order", vec![1i64, 2, 3]);
    result.insert("model_atoms", "yield", some(&[2, 3], cep));
    for name in ["cutoff_energy", "ionization_probability"] {
        result.insert("model_atoms", name, some(&[2], cep));
    }
    for name in [
        "initial_energy",
        "classical_cutoff",
        "ponderomotive_energy",
        "first_photon_energy",
        "final_norm",
        "bound_population",
        "initial_population",
        "electron_yield",
        "asymmetry",
        "unaccounted_probability",
        "lowest_clean_momentum",
        "coulomb_shift",
        "coulomb_sideband",
    ] {
        result.insert("summary", name, 0.5);
    }
    result.insert("summary", "status", Status::Done as i64);
    result.insert("summary", "reason", "");
    for group in ["returns", "orbits", "branches", "ionization", "comparison"] {
        filled(&mut result, group, cep);
    }
    result
}

/// Puts every dataset of a group in, three values along every axis.
fn filled(result: &mut Contents, group: &str, seed: f64) {
    for dataset in table::group(group).unwrap().datasets {
        let rank = if dataset.role == table::Role::Axis { 1 } else { dataset.line.axes.len() };
        let shape = vec![3; rank];
        let values: Values = match (dataset.kind, dataset.role) {
            (table::Kind::Real, table::Role::Axis) => Array1::linspace(0.0, 1.0, 3).into(),
            (table::Kind::Real, _) => some(&shape, seed).into(),
            (_, table::Role::Axis) => vec![0i64, 1, 2].into(),
            _ => ArrayD::from_elem(IxDyn(&shape), 1i64).into(),
        };
        result.insert(group, dataset.name, values);
    }
}

fn spectra(result: &mut Contents, group: &str, photon: f64, cep: f64) {
    let energies = Array1::linspace(0.0, 59.5, PHOTON_ENERGIES);
    result.insert(group, "photon_energy", energies.clone());
    result.insert(group, "harmonic_order", energies / photon);
    for (seed, name) in ["spectrum", "spectral_phase", "radiated_energy"].iter().enumerate() {
        result.insert(group, name, some(&[PHOTON_ENERGIES], cep + 10.0 * seed as f64));
    }
}

/// A result of one point in two dimensions: vectors have the axis of components first.
fn plane_point() -> Contents {
    let mut result = Contents::new(provenance("One point in the plane"));
    for group in ["field", "dynamics", "harmonics"] {
        result.insert(group, "component", vec![0, 1]);
    }
    result.insert("field", "time", Array1::linspace(0.0, 1.0, 11));
    result.insert("field", "electric_field", some(&[2, 11], 0.0));
    result.insert("dynamics", "time", Array1::linspace(0.0, 1.0, 11));
    result.insert("dynamics", "dipole", some(&[2, 11], 1.0));
    result.insert("dynamics", "norm", some(&[11], 1.5));
    result.insert("harmonics", "photon_energy", Array1::linspace(0.0, 10.0, 6));
    result.insert("harmonics", "harmonic_order", Array1::linspace(0.0, 5.0, 6));
    result.insert("harmonics", "spectrum", some(&[2, 6], 2.0));
    result.insert("harmonics", "radiated_energy", some(&[6], 3.0));
    for group in ["harmonics", "harmonic_yields"] {
        result.insert(group, "helicity", vec![1, -1]);
    }
    result.insert("harmonics", "helicity_spectrum", some(&[2, 6], 2.5));
    result.insert("harmonics", "harmonic_ellipticity", some(&[6], 2.6));
    result.insert("harmonics", "harmonic_orientation", some(&[6], 2.7));
    result.insert("harmonic_yields", "order", vec![1, 2, 3]);
    result.insert("harmonic_yields", "yield", some(&[3], 2.8));
    result.insert("harmonic_yields", "helicity_yield", some(&[2, 3], 2.9));
    result.insert("photoelectrons", "energy", Array1::linspace(0.0, 20.0, 50));
    result.insert("photoelectrons", "yield", some(&[50], 3.1));
    result.insert("photoelectrons", "emission_angle", Array1::linspace(0.0, 6.0, 7));
    result.insert("photoelectrons", "angular_distribution", some(&[7], 3.2));
    result.insert("momentum", "momentum_y", Array1::linspace(-1.0, 1.0, 5));
    result.insert("momentum", "momentum_x", Array1::linspace(-2.0, 2.0, 7));
    result.insert("momentum", "density", some(&[5, 7], 4.0));
    result
}

/// Everything equal, numbers to the last bit.
fn assert_identical(a: &Contents, b: &Contents) {
    assert_eq!(a.provenance, b.provenance);
    assert_eq!(a.scan(), b.scan());
    let paths = |contents: &Contents| contents.groups().map(|(path, _)| path.to_owned()).collect::<Vec<_>>();
    assert_eq!(paths(a), paths(b));
    for ((path, a), (_, b)) in a.groups().zip(b.groups()) {
        assert_eq!(a.attributes, b.attributes, "{path}");
        assert!(a.arrays.keys().eq(b.arrays.keys()), "{path}");
        for (name, values) in &a.arrays {
            assert!(values.is_identical(&b.arrays[name]), "{path}/{name}");
        }
    }
}

/// A file for the Python check to open; others go to temporary folders.
fn kept(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("layout");
    fs::create_dir_all(&folder).unwrap();
    folder.join(name)
}

#[test]
fn what_is_written_comes_back_exactly() {
    let mut line = point(1.55, 0.0);
    line.insert("photoelectrons", "yield_errors", [f64::NAN, -0.0, 5e-324, f64::INFINITY, 0.1].repeat(10));
    for (name, result) in [("point.h5", line), ("plane.h5", plane_point())] {
        let path = kept(name);
        write(&path, &result).unwrap();
        assert_identical(&read(&path).unwrap(), &result);
    }
}

/// Of one point of a scan: what differs between points is numbers, and texts of other lengths.
fn point_of_scan(number: usize) -> Contents {
    let mut result = plane_point();
    spectra(&mut result, "models/three_step/harmonics", 1.55, number as f64);
    result.insert("harmonics", "spectrum", some(&[2, 6], number as f64));
    result.insert("summary", "status", (number % 2) as i64);
    result.insert("summary", "reason", "the box is small".repeat(number % 3));
    result.insert("summary", "cutoff_energy", if number == 2 { f64::NAN } else { number as f64 });
    result.provenance.end_time = format!("2026-03-01T12:00:{number:02}Z");
    result.provenance.configuration = format!("{{ \"note\": \"{}\" }}", "ω".repeat(700 * (number % 4)));
    result
}

/// Every object of a file, with its attributes; of arrays also the shape and the type.
fn skeleton(path: &Path) -> Vec<String> {
    fn walk(group: &hdf5_metno::Group, found: &mut Vec<String>) {
        found.push(format!("{} {:?}", group.name(), group.attr_names().unwrap()));
        for name in group.member_names().unwrap() {
            let Ok(array) = group.dataset(&name) else {
                walk(&group.group(&name).unwrap(), found);
                continue;
            };
            let (name, type_of) = (array.name(), array.dtype().unwrap().to_descriptor().unwrap());
            found.push(format!("{name} {type_of:?} {:?} {:?}", array.shape(), array.attr_names().unwrap()));
        }
    }
    let file = hdf5_metno::File::open(path).unwrap();
    let mut found = Vec::new();
    walk(&file.group("/").unwrap(), &mut found);
    // The library lists them as they happen to lie in the file.
    found.sort();
    found
}

#[test]
fn files_made_after_a_pattern_are_like_those_made_from_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let mut patterns = Patterns::new();
    let (alone, path) = (folder.path().join("alone.h5"), kept("copy.h5"));
    for number in 0..9 {
        // Now and then one that is not like those before.
        let result = if number % 4 == 3 { plane_point() } else { point_of_scan(number) };
        for published in publish(&[patterns.begin(&path, &result).unwrap()]) {
            published.unwrap();
        }
        write(&alone, &result).unwrap();
        assert_identical(&read(&path).unwrap(), &result);
        assert_eq!(skeleton(&path), skeleton(&alone));
        let [copied, plain] = [&path, &alone].map(|path| fs::metadata(path).unwrap().len());
        assert!(copied <= plain + 16384, "{copied} bytes instead of {plain}");
    }
}

#[test]
fn a_point_that_cannot_be_written_leaves_the_pattern_as_it_was() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("point.h5");
    let mut patterns = Patterns::new();
    drop(patterns.begin(&path, &point_of_scan(0)).unwrap());
    let mut bad = point_of_scan(1);
    bad.provenance.input = "null\0byte".into();
    let error = patterns.begin(&path, &bad).unwrap_err();
    assert!(matches!(&error, Error::Write { path: named, .. } if *named == path), "{error}");
    publish(&[patterns.begin(&path, &point_of_scan(2)).unwrap()]).remove(0).unwrap();
    assert_identical(&read(&path).unwrap(), &point_of_scan(2));
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "no unfinished file is left");
}

#[test]
fn every_dataset_of_the_table_is_in_the_files_of_these_tests() {
    let (line, plane) = (point(1.55, 0.0), plane_point());
    for group in table::GROUPS {
        for dataset in group.datasets {
            let there = line.get(group.name, dataset.name).or(plane.get(group.name, dataset.name));
            assert!(there.is_some(), "{}/{} is never written", group.name, dataset.name);
        }
    }
}

#[test]
fn single_groups_can_be_read() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("point.h5");
    let whole = point(1.55, 0.0);
    write(&path, &whole).unwrap();
    let part = read_groups(&path, &["summary", "models/strong_field/harmonics"]).unwrap();
    let names: Vec<_> = part.groups().map(|(name, _)| name).collect();
    assert_eq!(names, ["models/strong_field/harmonics", "summary"]);
    assert_eq!(part.get("summary", "cutoff_energy"), whole.get("summary", "cutoff_energy"));
    let headline = read_headline(&path).unwrap();
    assert_eq!(headline.groups().map(|(name, _)| name).collect::<Vec<_>>(), ["summary"]);
    assert_eq!(headline.get("summary", "cutoff_energy"), whole.get("summary", "cutoff_energy"));
    assert_eq!(headline.provenance.configuration, whole.provenance.configuration);
}

fn scan_axis(name: &str, units: Option<&str>, values: impl Into<Values>) -> ScanAxis {
    let long_name = format!("Scanned {name}");
    ScanAxis { name: name.into(), units: units.map(Into::into), long_name, values: values.into() }
}

/// Two photon energies, three phases; the second dimension also names its phases in words.
fn scan() -> Vec<ScanDimension> {
    let photons = scan_axis("photon", Some("eV"), vec![1.55, 1.2]);
    let phases = scan_axis("cep", Some("deg"), vec![0.0, 45.0, 90.0]);
    let words = scan_axis("shape", None, ["cosine", "between", "sine"].map(String::from).to_vec());
    vec![ScanDimension { axes: vec![photons] }, ScanDimension { axes: vec![phases, words] }]
}

/// Writes the six points of [`scan`] but for the fifth.
fn points(folder: &Path) -> Vec<Point> {
    let mut points = Vec::new();
    for photon in [1.55, 1.2] {
        for cep in [0.0, 45.0, 90.0] {
            let path = folder.join(format!("{photon}-{cep}.h5"));
            write(&path, &point(photon, cep)).unwrap();
            points.push(Point::File(path));
        }
    }
    points[4] = Point::Absent { status: Status::Failed, reason: "norm grew".into() };
    points
}

#[test]
fn a_scan_is_stacked_with_its_axes_first() {
    let folder = tempfile::tempdir().unwrap();
    let (points, scan, origin) = (points(folder.path()), scan(), provenance("A scan"));
    let path = kept("scan.h5");
    gather(&path, Gathering { provenance: &origin, scan: &scan, points: &points }).unwrap();

    let result = read(&path).unwrap();
    assert_eq!(result.provenance, origin);
    assert_eq!(result.scan(), scan);
    assert!(result.groups().all(|(path, _)| !path.ends_with("time_frequency") && path != "field"));
    let spectrum = result.real("harmonics", "spectrum").unwrap();
    assert_eq!(spectrum.shape(), [2, 3, PHOTON_ENERGIES]);
    let order = result.real("harmonics", "harmonic_order").unwrap();
    assert_eq!(order.shape(), [2, 3, PHOTON_ENERGIES], "it differs, since the photon energy is scanned");
    assert_eq!(result.real("harmonics", "photon_energy").unwrap().shape(), [PHOTON_ENERGIES]);

    for (i, photon) in [1.55, 1.2].into_iter().enumerate() {
        for (j, cep) in [0.0, 45.0, 90.0].into_iter().enumerate() {
            let of_point =
                |array: &ArrayD<f64>| array.index_axis(Axis(0), i).index_axis(Axis(0), j).to_owned();
            let missing = (i, j) == (1, 1);
            for (group, name) in [
                ("harmonics", "spectrum"),
                ("harmonics", "harmonic_order"),
                ("harmonics", "spectrum_errors"),
                ("models/strong_field/harmonics", "spectrum"),
                ("momentum", "density"),
                ("summary", "cutoff_energy"),
            ] {
                let stacked = of_point(result.real(group, name).unwrap());
                if missing {
                    assert!(stacked.iter().all(|number| number.is_nan()), "{group}/{name}");
                } else {
                    assert_eq!(Some(&stacked), point(photon, cep).real(group, name), "{group}/{name}");
                }
            }
        }
    }
    let status = Array2::from_shape_vec((2, 3), vec![0, 0, 0, 0, Status::Failed as i64, 0]).unwrap();
    assert_eq!(result.get("summary", "status"), Some(&status.into()));
    let mut reason = Array2::from_elem((2, 3), String::new());
    reason[[1, 1]] = "norm grew".into();
    assert_eq!(result.get("summary", "reason"), Some(&reason.into()));
    write(&folder.path().join("again.h5"), &result).unwrap();
    assert_identical(&read(&folder.path().join("again.h5")).unwrap(), &result);
}

#[test]
fn coordinates_that_all_points_share_are_not_stacked() {
    let folder = tempfile::tempdir().unwrap();
    let points = points(folder.path());
    let (scan, origin) = (vec![scan().remove(1)], provenance("Phases alone"));
    let path = kept("phases.h5");
    gather(&path, Gathering { provenance: &origin, scan: &scan, points: &points[..3] }).unwrap();
    let result = read(&path).unwrap();
    assert_eq!(
        result.real("harmonics", "harmonic_order"),
        point(1.55, 0.0).real("harmonics", "harmonic_order")
    );
    assert_eq!(result.real("harmonics", "spectrum").unwrap().shape(), [3, PHOTON_ENERGIES]);
}

#[test]
fn axes_of_text_and_a_first_point_that_is_missing() {
    let folder = tempfile::tempdir().unwrap();
    let mut points = points(folder.path());
    points[0] = Point::Absent { status: Status::Missing, reason: "not computed yet".into() };
    let atoms = scan_axis("element", None, ["He", "Ne", "Ar"].map(String::from).to_vec());
    let (scan, origin) = (vec![ScanDimension { axes: vec![atoms] }], provenance("Elements"));
    let path = kept("elements.h5");
    gather(&path, Gathering { provenance: &origin, scan: &scan, points: &points[..3] }).unwrap();
    let result = read(&path).unwrap();
    assert_eq!(result.scan(), scan);
    let cutoffs = result.real("summary", "cutoff_energy").unwrap();
    assert!(cutoffs[[0]].is_nan());
    assert_eq!((cutoffs[[1]], cutoffs[[2]]), (87.0, 132.0));
}

#[test]
fn large_stacks_are_compressed_and_come_back() {
    let folder = tempfile::tempdir().unwrap();
    let length = 3000;
    let mut files = Vec::new();
    for number in 0..40 {
        let mut result = Contents::new(provenance("One of many"));
        result.insert("momentum", "momentum", Array1::linspace(-2.0, 2.0, length));
        result.insert("momentum", "density", some(&[length], f64::from(number)));
        let path = folder.path().join(format!("{number}.h5"));
        write(&path, &result).unwrap();
        files.push(Point::File(path));
    }
    let axis = scan_axis("delay", Some("fs"), Array1::linspace(0.0, 39.0, 40));
    let (scan, origin) = (vec![ScanDimension { axes: vec![axis] }], provenance("Many"));
    let path = folder.path().join("result.h5");
    gather(&path, Gathering { provenance: &origin, scan: &scan, points: &files }).unwrap();
    let result = read(&path).unwrap();
    for (number, row) in (0..).zip(result.real("momentum", "density").unwrap().outer_iter()) {
        assert_eq!(row, some(&[length], f64::from(number)));
    }
    let stored = hdf5_metno::File::open(&path).unwrap().dataset("entry/momentum/density").unwrap();
    assert_eq!(stored.filters(), [Filter::Shuffle, Filter::Deflate(4)]);
}

#[test]
fn the_result_of_a_single_run_is_its_point() {
    let folder = tempfile::tempdir().unwrap();
    let (file, path) = (folder.path().join("point.h5"), folder.path().join("result.h5"));
    let mut expected = point(1.55, 0.0);
    write(&file, &expected).unwrap();
    expected.provenance = provenance("A run");
    let points = [Point::File(file)];
    gather(&path, Gathering { provenance: &expected.provenance, scan: &[], points: &points }).unwrap();
    assert_identical(&read(&path).unwrap(), &expected);
}

#[test]
fn points_with_other_axes_are_not_stacked() {
    let folder = tempfile::tempdir().unwrap();
    let mut points = points(folder.path());
    let other = folder.path().join("other.h5");
    let mut result = point(1.55, 0.0);
    result.insert("photoelectrons", "energy", Array1::linspace(0.0, 20.5, 50));
    write(&other, &result).unwrap();
    points[1] = Point::File(other.clone());
    let (scan, origin, path) = (scan(), provenance("A scan"), folder.path().join("result.h5"));
    let error = gather(&path, Gathering { provenance: &origin, scan: &scan, points: &points }).unwrap_err();
    assert!(matches!(&error, Error::Unstackable { dataset, other: named, .. }
        if dataset == "photoelectrons/energy" && *named == other));
    assert!(error.to_string().ends_with("0.41836734693877553 instead of 0.40816326530612246 at position 1"));
    assert!(!path.exists());
}

#[test]
fn scan_axes_do_not_take_names_of_the_layout() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("point.h5");
    write(&file, &point(1.55, 0.0)).unwrap();
    let (origin, path) = (provenance("A scan"), folder.path().join("result.h5"));
    for name in ["photon_energy", "spectrum", "summary", "a b", "a/b", "", "1st"] {
        let scan = [ScanDimension { axes: vec![scan_axis(name, None, vec![1.0])] }];
        let points = [Point::File(file.clone())];
        let error =
            gather(&path, Gathering { provenance: &origin, scan: &scan, points: &points }).unwrap_err();
        assert!(matches!(&error, Error::AxisName { name: named, .. } if named == name), "{error}");
    }
}

#[test]
fn files_cut_short_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("point.h5");
    write(&path, &plane_point()).unwrap();
    let whole = fs::read(&path).unwrap();
    for length in [0, 5, 8, 50, 100, 2000, whole.len() / 2, whole.len() - 1] {
        fs::write(&path, &whole[..length]).unwrap();
        let error = read(&path).unwrap_err();
        assert!(matches!(&error, Error::Damaged { path: named, .. } if *named == path), "{length}: {error}");
        assert!(error.to_string().contains(path.to_str().unwrap()), "{error}");
    }
}

#[test]
fn files_that_contradict_themselves_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let points = points(folder.path());
    let (scan, origin, path) = (scan(), provenance("A scan"), folder.path().join("result.h5"));
    for (name, says) in [
        ("entry/harmonics/radiated_energy", "wrong number of dimensions"),
        ("entry/harmonics/photon_energy", "120 values along photon_energy of 4"),
        ("entry/momentum/momentum", "21 values along momentum of 4"),
        ("entry/branches/cep", "the scan axis shape has the shape [3]"),
        ("entry/branches/shape", "the scan axis shape has the shape [4]"),
        ("entry/summary/reason", "wrong number of dimensions"),
        ("entry/title", "title holds 4 texts"),
    ] {
        gather(&path, Gathering { provenance: &origin, scan: &scan, points: &points }).unwrap();
        let file = hdf5_metno::File::open_rw(&path).unwrap();
        let text = file.dataset(name).unwrap().dtype().unwrap().is::<VarLenUnicode>();
        file.unlink(name).unwrap();
        let new = file.new_dataset_builder();
        if text {
            new.with_data(&["a", "b", "c", "d"].map(|word| word.parse::<VarLenUnicode>().unwrap()))
                .create(name)
                .unwrap();
        } else {
            new.with_data(&[1.0, 2.0, 3.0, 4.0]).create(name).unwrap();
        }
        file.close().unwrap();
        let Err(error) = read(&path) else { panic!("{name}") };
        assert!(matches!(error, Error::Damaged { .. }), "{name}: {error}");
        assert!(error.to_string().contains(says), "{name}: {error}");
    }
}

#[test]
fn files_of_later_programs_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("point.h5");
    write(&path, &plane_point()).unwrap();
    let file = hdf5_metno::File::open_rw(&path).unwrap();
    file.delete_attr("layout_version").unwrap();
    file.new_attr::<i64>().create("layout_version").unwrap().write_scalar(&2).unwrap();
    file.close().unwrap();
    let error = read(&path).unwrap_err();
    assert!(matches!(error, Error::NewerLayout { found: 2, known: 1, .. }), "{error}");
    assert!(error.to_string().contains("layout version 2"), "{error}");
}

#[test]
fn what_others_add_is_passed_over() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("point.h5");
    let original = plane_point();
    write(&path, &original).unwrap();
    let file = hdf5_metno::File::open_rw(&path).unwrap();
    file.new_dataset_builder().with_data(&[1.0, 2.0]).create("entry/harmonics/sharpness").unwrap();
    file.create_group("entry/rainbows").unwrap();
    file.create_group("entry/harmonics/by_colour").unwrap();
    file.new_dataset_builder().with_data(&[1.0]).create("entry/remarks").unwrap();
    file.group("entry/harmonics").unwrap().new_attr::<f64>().create("rating").unwrap();
    file.close().unwrap();
    assert_identical(&read(&path).unwrap(), &original);
}

#[test]
fn foreign_files_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let text = folder.path().join("notes.txt");
    fs::write(&text, "nothing that we wrote").unwrap();
    let other = folder.path().join("other.h5");
    hdf5_metno::File::create(&other).unwrap().create_group("data").unwrap();
    for path in [text, other] {
        let error = read(&path).unwrap_err();
        assert!(matches!(&error, Error::Foreign { path: named, .. } if *named == path), "{error}");
    }
    let error = read(&folder.path().join("absent.h5")).unwrap_err();
    assert!(matches!(error, Error::Io { .. }), "{error}");
    assert!(error.to_string().starts_with("cannot read "), "{error}");
}

#[test]
fn a_write_that_fails_leaves_what_was_there() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("point.h5");
    let good = plane_point();
    write(&path, &good).unwrap();
    let mut bad = good.clone();
    bad.provenance.input = "null\0byte".into();
    let error = write(&path, &bad).unwrap_err();
    assert!(matches!(&error, Error::Write { path: named, .. } if *named == path), "{error}");
    assert_identical(&read(&path).unwrap(), &good);
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "no unfinished file is left");

    let error = write(&folder.path().join("absent/point.h5"), &good).unwrap_err();
    assert!(matches!(error, Error::Io { doing: "create", .. }), "{error}");
}

#[test]
#[should_panic(expected = "the layout has no such dataset")]
fn unknown_names_are_a_programmers_error() {
    plane_point().insert("harmonics", "brightness", vec![1.0]);
}

#[test]
#[should_panic(expected = "5 values along photon_energy of 6")]
fn wrong_lengths_are_a_programmers_error() {
    plane_point().insert("harmonics", "radiated_energy", vec![1.0; 5]);
}

#[test]
#[should_panic(expected = "5 values along photon_energy of 6")]
fn axes_in_use_keep_their_length() {
    plane_point().insert("harmonics", "photon_energy", vec![1.0; 5]);
}

#[test]
#[should_panic(expected = "its axis momentum is not there yet")]
fn missing_axes_are_a_programmers_error() {
    plane_point().insert("momentum", "density", vec![1.0; 5]);
}

#[test]
#[should_panic(expected = "Integer values where Real ones are due")]
fn wrong_element_types_are_a_programmers_error() {
    plane_point().insert("harmonics", "radiated_energy", vec![1; 6]);
}
