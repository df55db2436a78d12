//! Two dimensions through the program. The scenarios are the shipped ones at a size fit for a test, all invented.

use std::fmt::Write as _;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use tdse_cli::store::{self, Contents, Values};

/// A box and a grid far too coarse for results, fine for the laws below.
const SMALL: [&str; 5] = [
    "/numerics/spacing=0.8 bohr",
    "/numerics/extent=150 bohr",
    "/numerics/time_step=0.2 au",
    "/numerics/absorber={\"kind\": \"smooth\", \"width\": \"25 bohr\"}",
    "/numerics/allow_inadequate=true",
];

fn config(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs").join(name)
}

fn tdse(arguments: &[&str], sets: &[&str]) -> Output {
    let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
    program.args(arguments);
    for set in sets {
        program.args(["--set", set]);
    }
    program.output().expect("the program starts")
}

fn text(path: &Path) -> &str {
    path.to_str().expect("a path in UTF-8")
}

/// Runs a shipped configuration, small, with further changes.
fn run(name: &str, out: &Path, more: &[&str], options: &[&str]) -> Contents {
    let sets: Vec<&str> = SMALL.iter().chain(more).copied().collect();
    let path = config(name);
    let arguments: Vec<&str> =
        ["run", text(&path), "--quiet", "--out", text(out)].iter().chain(options).copied().collect();
    let ended = tdse(&arguments, &sets);
    assert!(ended.status.success(), "{name}: {ended:?}");
    store::read(&out.join("result.h5")).unwrap()
}

fn values(contents: &Contents, group: &str, name: &str) -> Vec<f64> {
    let found = contents.real(group, name).unwrap_or_else(|| panic!("{group}/{name}"));
    found.iter().copied().collect()
}

fn number(contents: &Contents, name: &str) -> f64 {
    values(contents, "summary", name)[0]
}

/// The identity of the only point of a folder.
fn identity(out: &Path) -> String {
    let table = std::fs::read_to_string(out.join("points.csv")).unwrap();
    table.lines().nth(1).and_then(|row| row.split(',').nth(1)).expect("a point").to_owned()
}

/// What is neither bound nor among the electrons is nothing; a round atom answers a circular field with its helicity;
/// threads, jobs and a second reading of the resolved text change no bit.
#[test]
fn a_circular_pulse() {
    let folder = tempfile::tempdir().unwrap();
    let (one, again) = (folder.path().join("one"), folder.path().join("again"));
    let more = ["/numerics/trailing_time=4 fs"];
    let found = run("circular.json", &one, &more, &["--jobs", "2"]);
    let (ionized, electrons) = (number(&found, "ionization_probability"), number(&found, "electron_yield"));
    let left = number(&found, "unaccounted_probability");
    println!("ionized {ionized:.5}, electrons {electrons:.5}, unaccounted {left:.1e}");
    assert!(ionized > 0.01, "ionized {ionized}");
    // The bound is our own; it holds the slowest electrons, the last ones, and the box's reflections.
    assert!(left.abs() < 5e-3 * ionized, "unaccounted {left} of {ionized}");
    // Both are sums over the same map: over all momenta, and over the energies asked for.
    let density = found.real("momentum", "density").unwrap();
    let (x, y) = (values(&found, "momentum", "momentum_x"), values(&found, "momentum", "momentum_y"));
    assert_eq!(density.shape(), [y.len(), x.len()]);
    let total = density.sum() * (x[1] - x[0]) * (y[1] - y[0]);
    assert!((total / electrons - 1.0).abs() < 0.01, "momenta {total}, energies {electrons}");
    let angles = values(&found, "photoelectrons", "angular_distribution");
    let around = angles.iter().sum::<f64>() * std::f64::consts::TAU / angles.len() as f64;
    assert!((around / electrons - 1.0).abs() < 0.01, "angles {around}, energies {electrons}");
    let yields = found.real("harmonic_yields", "helicity_yield").unwrap();
    assert!(yields[[1, 0]] < 1e-3 * yields[[0, 0]], "fundamental {} and {}", yields[[0, 0]], yields[[1, 0]]);
    let spectra = found.real("harmonics", "helicity_spectrum").unwrap().sum();
    let components = found.real("harmonics", "spectrum").unwrap().sum();
    assert!((spectra / components - 1.0).abs() < 1e-12, "helicities {spectra}, components {components}");
    for picture in ["harmonics", "momentum_map", "angular_distribution", "lissajous", "photoelectrons"] {
        assert!(one.join(format!("report/{picture}.png")).is_file(), "{picture}");
    }

    let result = one.join("result.h5");
    let ended = tdse(&["run", text(&result), "--quiet", "--jobs", "1", "--out", text(&again)], &[]);
    assert!(ended.status.success(), "{ended:?}");
    assert_eq!(identity(&one), identity(&again));
    // Doubts quote what is written, which now is the resolved value.
    let other = store::differences(&found, &store::read(&again.join("result.h5")).unwrap());
    assert!(other.iter().all(|place| place == "summary/reason"), "{other:?}");
}

/// Orders 3n are forbidden, 3n+1 turn with the fundamental, 3n+2 with its second harmonic (Eichmann et al., Phys. Rev. A 51,
/// R3414 (1995); Alon, Averbukh, Moiseyev, Phys. Rev. Lett. 80, 3743 (1998); both from memory). Ramps of three cycles let
/// a part of the forbidden orders through; the bounds are our own.
#[test]
fn counter_rotating_colours() {
    let folder = tempfile::tempdir().unwrap();
    let found = run("counter_rotating.json", folder.path(), &[], &[]);
    let ionized = number(&found, "ionization_probability");
    assert!(ionized < 0.05, "ionized {ionized}");
    let yields = found.real("harmonic_yields", "helicity_yield").unwrap();
    let of = |helicity: usize, order: usize| yields[[helicity, order - 1]];
    let total = |order: usize| of(0, order) + of(1, order);
    for order in 1..=11 {
        println!("order {order}: {:.2e} {:.2e}", of(0, order), of(1, order));
    }
    for order in [1, 4, 7] {
        assert!(of(0, order) > 10.0 * of(1, order), "order {order} turns with the fundamental");
        assert!(of(1, order + 1) > 10.0 * of(0, order + 1), "order {} with its second harmonic", order + 1);
    }
    for order in [3, 6] {
        let mean = (total(order - 1) * total(order + 1)).sqrt();
        assert!(total(order) < 0.05 * mean, "order {order}: {} of {mean}", total(order));
    }
}

/// An electron that is driven aside does not come back: the plateau falls with the ellipticity (Budil et al., Phys. Rev. A
/// 48, R3437 (1993), from memory). Linear light keeps a mirror, so that half the plane is computed and no y component
/// arises.
#[test]
fn harmonics_fall_with_the_ellipticity() {
    let folder = tempfile::tempdir().unwrap();
    let more = ["/scan/0/points=3", "/field/pulses/0/envelope/cycles=3"];
    let found = run("elliptical_scan.json", folder.path(), &more, &[]);
    let spectrum = found.real("harmonics", "spectrum").unwrap();
    let energies = values(&found, "harmonics", "photon_energy");
    assert_eq!(spectrum.shape(), [3, 2, energies.len()]);
    let yields = found.real("harmonic_yields", "yield").unwrap();
    // From the ionization energy, 11 eV, to the classical cutoff.
    let plateau = |point: usize| (9..=17).map(|order| yields[[point, order - 1]]).sum::<f64>();
    println!("plateau {:.2e} {:.2e} {:.2e}", plateau(0), plateau(1), plateau(2));
    assert!(plateau(1) < 0.5 * plateau(0) && plateau(2) < 0.1 * plateau(1));
    assert!((0..energies.len()).all(|i| spectrum[[0, 1, i]] == 0.0), "no component along y");
    let tilt = found.real("harmonics", "harmonic_ellipticity").unwrap();
    assert!(tilt.index_axis(ndarray::Axis(0), 0).iter().all(|e| e.abs() < 1e-9), "linear light");
    let cost =
        String::from_utf8(tdse(&["check", text(&config("elliptical_scan.json"))], &["/scan=[]"]).stdout);
    let cost = cost.unwrap();
    assert!(cost.contains("half of them kept by the mirror"), "{cost}");
    // How many depends on the machine's cores.
    assert!(cost.contains("wave functions of the whole grid") && cost.contains("bound states"), "{cost}");
}

/// A run so small that a test can repeat it.
const QUICK: [&str; 8] = [
    "/scan=[]",
    "/numerics/extent=80 bohr",
    "/numerics/absorber/width=16 bohr",
    "/numerics/spacing=1 bohr",
    "/numerics/time_step=0.3 au",
    "/field/pulses/0/envelope/cycles=1",
    "/field/pulses/0/ellipticity=0.3",
    "/outputs/harmonics/max_energy=30 eV",
];

/// The atom asked for and four others of its ionization energy, 11.14 eV by the grid-free level. A grid of 0.7 bohr errs, most of
/// all about a screened atom's kink.
#[test]
fn other_model_atoms_of_the_plane() {
    let folder = tempfile::tempdir().unwrap();
    let (out, no) = (folder.path().join("out"), folder.path().join("no"));
    let path = config("elliptical_scan.json");
    let even = r#"/atom/state={"kind": "single", "number": 0, "parity_x": "even", "parity_y": "even"}"#;
    let finer = ["/numerics/spacing=0.7 bohr", "/numerics/time_step=0.2 au"];
    let sets: Vec<&str> = SMALL.iter().chain(&QUICK).chain(&finer).copied().chain([even]).collect();
    let ended = tdse(&["refine", text(&path), "--model-atoms", "--quiet", "--out", text(&out)], &sets);
    assert!(ended.status.success(), "{ended:?}");
    let found = store::read(&out.join("result.h5")).unwrap();
    let ionized = values(&found, "model_atoms", "ionization_probability");
    assert_eq!(ionized.len(), 5);
    assert_eq!(ionized[0].to_bits(), number(&found, "ionization_probability").to_bits());
    assert!(
        ionized[1..].iter().all(|other| *other > 0.0 && (other - ionized[0]).abs() > 1e-6),
        "{ionized:?}"
    );
    let others = store::read(&out.join("refine/model_atoms/result.h5")).unwrap();
    let energies = values(&others, "summary", "initial_energy");
    println!("initial energies {energies:?} eV, ionized {ionized:?}");
    assert!(energies.iter().all(|energy| (energy + 11.14).abs() < 0.1), "{energies:?}");

    let excited = r#"/atom/state={"kind": "single", "number": 0, "angular_momentum": 1}"#;
    let deep = "/atom/potential/depth=200 eV";
    let sets: Vec<&str> = SMALL.iter().chain(&QUICK).copied().chain([excited, deep]).collect();
    let ended = tdse(&["refine", text(&path), "--model-atoms", "--quiet", "--out", text(&no)], &sets);
    let said = String::from_utf8(ended.stderr).unwrap();
    assert_eq!(ended.status.code(), Some(2), "{said}");
    assert!(said.contains("/atom/state") && said.contains("ground state"), "{said}");
    assert!(!no.exists(), "nothing is made where it is refused");
}

/// The pulse a run wrote, read back as a table, drives the same electron but for the spline between its samples (a fourth of
/// the step's fourth power, and tables are rounded to nothing); turned by a right angle it turns everything.
#[test]
fn a_sampled_field_with_both_components() {
    let folder = tempfile::tempdir().unwrap();
    let path = config("elliptical_scan.json");
    let light = ["/field/pulses/0/angle=20 deg", "/numerics/trailing_time=0 fs"];
    let found = |name: &str, more: &[String]| {
        let out = folder.path().join(name);
        let more: Vec<&str> =
            QUICK.iter().chain(&light).copied().chain(more.iter().map(String::as_str)).collect();
        let sets: Vec<&str> = SMALL.iter().copied().chain(more).collect();
        let ended = tdse(&["run", text(&path), "--quiet", "--out", text(&out)], &sets);
        assert!(ended.status.success(), "{ended:?}");
        store::read(&out.join("result.h5")).unwrap()
    };
    let pulse = found("pulse", &[]);
    let (times, field) = (values(&pulse, "field", "time"), pulse.real("field", "electric_field").unwrap());
    let sampled = |name: &str, turned: fn([f64; 2]) -> [f64; 2]| {
        let mut table = "time [fs],electric_field_x [V/m],electric_field_y [V/m]\n".to_owned();
        for (n, time) in times.iter().enumerate() {
            let [x, y] = turned([field[[0, n]], field[[1, n]]]);
            writeln!(table, "{time:e},{x:e},{y:e}").unwrap();
        }
        let file = folder.path().join(format!("{name}.csv"));
        std::fs::write(&file, table).unwrap();
        let light = format!(r#"/field={{"sampled": {{"file": {:?}}}}}"#, text(&file));
        found(name, &[light]).real("dynamics", "dipole_acceleration").unwrap().clone()
    };
    let straight = sampled("straight", |e| e);
    let turned = sampled("turned", |[x, y]| [-y, x]);
    let given = pulse.real("dynamics", "dipole_acceleration").unwrap();
    let largest = given.iter().fold(0.0f64, |most, a| most.max(a.abs()));
    let (mut off, mut swapped) = (0.0f64, 0.0f64);
    for n in 0..times.len() {
        for d in 0..2 {
            off = off.max((straight[[d, n]] - given[[d, n]]).abs() / largest);
        }
        swapped = swapped.max((turned[[0, n]] + straight[[1, n]]).abs() / largest);
        swapped = swapped.max((turned[[1, n]] - straight[[0, n]]).abs() / largest);
    }
    println!("sampled against given {off:.1e}, turned {swapped:.1e}");
    assert!(off < 1e-4, "{off}");
    assert!(swapped < 1e-10, "{swapped}");
}

/// A table along the radius drives the electron that its formula drives, and the models take it. The bounds are ours: of the
/// acceleration 9.8e-5 were measured with points 0.1 bohr apart, 1.6e-5 with 0.05 and 7.5e-8 with 0.025.
#[test]
fn a_potential_sampled_along_the_radius() {
    let folder = tempfile::tempdir().unwrap();
    let (depth, width) = (30.0, 1.2);
    let mut table = "# invented\nposition [bohr],potential [eV]\n".to_owned();
    for r in (0..=1400).map(|i| 0.05 * f64::from(i)) {
        writeln!(table, "{r},{:e}", -depth * f64::exp(-0.5 * (r / width).powi(2))).unwrap();
    }
    let file = folder.path().join("well.csv");
    std::fs::write(&file, table).unwrap();
    let sampled = format!(r#"/atom/potential={{"kind": "sampled", "file": {:?}}}"#, text(&file));
    let light =
        ["/field/pulses/0/ellipticity=0.5", "/numerics/spacing=0.5 bohr", "/numerics/time_step=0.1 au"];
    let shared: Vec<&str> = QUICK.iter().chain(&light).copied().collect();
    let models = r#"/models={"strong_field": {}, "tunnelling": {}, "perturbation": {}, "recombination": {}}"#;
    let more: Vec<&str> = shared.iter().copied().chain([sampled.as_str(), models]).collect();
    let (by_table, by_formula) = (folder.path().join("table"), folder.path().join("formula"));
    let found = run("elliptical_scan.json", &by_table, &more, &[]);
    let expected = run("elliptical_scan.json", &by_formula, &shared, &[]);
    let acceleration = |contents: &Contents| values(contents, "dynamics", "dipole_acceleration");
    let (a, b) = (acceleration(&found), acceleration(&expected));
    let largest = b.iter().fold(0.0f64, |most, v| most.max(v.abs()));
    let off = a.iter().zip(&b).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max) / largest;
    let energy = number(&found, "initial_energy") - number(&expected, "initial_energy");
    println!("acceleration off {off:.1e}, energy {energy:.1e} eV");
    assert!(off < 2.5e-5, "{off}");
    assert!(energy.abs() < 1e-6, "{energy}");
    for model in ["strong_field", "tunnelling", "perturbation", "recombination"] {
        let group = format!("models/{model}/comparison");
        let (_, own) = found.groups().find(|(path, _)| *path == group).expect("a model's comparison");
        assert_eq!(own.attributes.get("failure"), None, "{model}");
    }
}

/// Bars on the numbers of two dimensions, the absorber kept round, and points in one and in two dimensions beside each other.
#[test]
fn refined_and_compared() {
    let folder = tempfile::tempdir().unwrap();
    let (fine, both) = (folder.path().join("fine"), folder.path().join("both"));
    let sets: Vec<&str> = SMALL.iter().chain(&QUICK).copied().collect();
    let path = config("elliptical_scan.json");
    let ended = tdse(&["refine", text(&path), "--quiet", "--out", text(&fine)], &sets);
    assert!(ended.status.success(), "{ended:?}");
    let found = store::read(&fine.join("result.h5")).unwrap();
    let bars = found.real("harmonic_yields", "helicity_yield_errors").unwrap();
    assert!(bars.iter().take(5).all(|bar| *bar > 0.0), "{bars:?}");
    assert!(number(&found, "ionization_probability_errors") > 0.0);
    let finer = std::fs::read_to_string(fine.join("refine/numerics/request.json")).unwrap();
    assert!(finer.contains("\"round\"") && !finer.contains("\"sides\""));

    let scan = r#"/scan=[{"parameter": "/atom/dimensions", "values": [1, 2]}]"#;
    let linear = ["/field/pulses/0/ellipticity=0", scan];
    let sets: Vec<&str> = sets.into_iter().chain(linear).collect();
    let ended = tdse(&["run", text(&path), "--quiet", "--out", text(&both)], &sets);
    assert!(ended.status.success(), "{ended:?}");
    let found = store::read(&both.join("result.h5")).unwrap();
    assert!(matches!(found.get("summary", "status"), Some(Values::Integer(status)) if status.len() == 2));
    let energies = values(&found, "summary", "initial_energy");
    assert!((energies[0] - energies[1]).abs() > 0.1, "another atom: {energies:?}");
    let ended = tdse(&["compare", text(&both), "--along", "/atom/dimensions"], &[]);
    let said = String::from_utf8(ended.stdout).unwrap();
    assert!(ended.status.success() && said.contains("ionization_probability"), "{said}");
}

#[test]
fn what_the_machine_cannot_hold_is_refused_and_states_are_listed() {
    let path = config("circular.json");
    let ended =
        tdse(&["check", text(&path)], &["/numerics/spacing=0.001 bohr", "/numerics/time_step=1e-7 au"]);
    let said = String::from_utf8(ended.stderr).unwrap();
    assert_eq!(ended.status.code(), Some(2), "{said}");
    assert!(said.contains("/numerics/spacing") && said.contains("of memory"), "{said}");

    // Levels of an independent calculation handed to the project, to 1e-9 hartree.
    let atom = r#"/atom={"dimensions": 2, "potential": {"kind": "soft_coulomb", "softening": "0.8 bohr"}}"#;
    let small = ["/numerics/spacing=0.25 bohr", "/numerics/extent=90 bohr", "/numerics/time_step=0.02 au"];
    let sets: Vec<&str> = small.into_iter().chain([atom, SMALL[3], SMALL[4], "/outputs={}"]).collect();
    let ended = tdse(&["states", text(&path)], &sets);
    let said = String::from_utf8(ended.stdout).unwrap();
    for (name, energy) in [
        ("m = 0, number 0", "-0.49910940"),
        ("m = 1, number 0", "-0.18398798"),
        ("m = -1, number 0", "-0.18398798"),
        ("m = 0, number 1", "-0.12933755"),
    ] {
        let line = said.lines().find(|line| line.trim_start().starts_with(name)).unwrap_or_default();
        assert!(line.contains(energy), "{name}: {energy} in {line:?} of\n{said}");
    }
}
