//! Data for looking at pictures. All of it is invented by us: shapes of the right kind, no physics.

use tdse_cli::report::electrons::{ElectronPicture, MomentumPicture, Peaks};
use tdse_cli::report::figure::{Across, Curve, Figure, Mark, Multiples, Origin, Panel, Trace, Up};
use tdse_cli::report::harmonics::HarmonicPicture;
use tdse_cli::report::lissajous::{Guides, PlanePicture};
use tdse_cli::report::map::Shading;
use tdse_cli::report::momentum_map::MomentumMapPicture;
use tdse_cli::report::parameter::{Axis, Values};
use tdse_cli::report::populations::PopulationPicture;
use tdse_cli::report::scale::{Kind, Range};
use tdse_cli::report::scan::{NumberMap, NumberScan, SpectrumScan};
use tdse_cli::report::time_frequency::TimeFrequencyPicture;
use tdse_cli::report::verdict::VerdictPicture;
use tdse_cli::report::{
    electrons, field, figure, harmonics, lissajous, models, momentum_map, populations, scan, time_frequency,
    verdict,
};

/// `count` values from `from` to `to`, ends included.
pub fn even(from: f64, to: f64, count: usize) -> Vec<f64> {
    (0..count).map(|i| from + (to - from) * i as f64 / (count - 1) as f64).collect()
}

/// Odd peaks on a plateau that ends at `cutoff`, over a floor.
pub fn invented_spectrum(energy: &[f64], photon: f64, cutoff: f64, floor: f64) -> Vec<f64> {
    let value = |&e: &f64| {
        let order = e / photon;
        let envelope =
            if e < cutoff { -3.0 - 2.0 * (1.0 - (-order / 4.0).exp()) } else { -5.0 - 0.9 * (e - cutoff) };
        let peak = (std::f64::consts::FRAC_PI_2 * order).sin().powi(2);
        let ripple = 0.4 * (7.3 * order).sin() + 0.3 * (17.1 * order).cos();
        let grass = 10_f64.powf(0.6 * (311.0 * e).sin() + 0.3 * (97.0 * e).cos());
        10_f64.powf(envelope + 2.6 * (peak - 1.0) + ripple) + floor * grass
    };
    energy.iter().map(value).collect()
}

/// A pulse of `cycles` cycles with a period of 3.44 fs: time, field in V/m, vector potential in V s/m.
fn invented_pulse(cycles: f64, count: usize) -> (Vec<f64>, Vec<f64>, Vec<f64>) {
    let length = 3.44 * cycles;
    let time = even(-0.5 * length, 0.5 * length, count);
    let envelope = |t: f64| (std::f64::consts::PI * t / length).cos().powi(2);
    let phase = |t: f64| std::f64::consts::TAU * t / 3.44;
    let field = time.iter().map(|&t| 3.4e10 * envelope(t) * phase(t).cos()).collect();
    let potential = time.iter().map(|&t| -1.85e-5 * envelope(t) * phase(t).sin()).collect();
    (time, field, potential)
}

/// All demonstration pictures with their names.
pub fn all() -> Vec<(&'static str, String)> {
    let mut pictures = vec![
        ("harmonics_long", harmonics_of(1.2037, 68.0, 120.0, 1e-16)),
        ("harmonics_short", harmonics_of(1.5498, 17.0, 24.0, 1e-9)),
        ("harmonics_very_long", harmonics_of(0.3, 380.0, 520.0, 1e-22)),
    ];
    for (name, cycles, count) in [("field_long", 40.0, 60_000), ("field_short", 3.0, 400)] {
        let (time, field, potential) = invented_pulse(cycles, count);
        let svg = field::draw(&field::FieldPicture {
            title: "Invented pulse",
            time: &time,
            electric_field: &[("", &field)],
            vector_potential: &[("", &potential)],
        });
        pictures.push((name, svg));
    }
    let (time, x, a) = invented_pulse(6.0, 900);
    let (y, b): (Vec<f64>, Vec<f64>) =
        (a.iter().map(|v| v * 1.2e15).collect(), x.iter().map(|v| v * 3e-16).collect());
    let svg = field::draw(&field::FieldPicture {
        title: "Invented elliptical pulse",
        time: &time,
        electric_field: &[("x", &x), ("y", &y)],
        vector_potential: &[("x", &a), ("y", &b)],
    });
    pictures.push(("field_two_directions", svg));
    pictures.extend(plane_pictures(&x, &y));
    pictures.push(("time_frequency", map_of_bursts()));
    pictures.extend(electron_pictures());
    pictures.extend([("populations_linear", populations_of(0.4)), ("populations_log", populations_of(1e-4))]);
    pictures.extend(scans());
    pictures.extend(of_models());
    pictures.push(("comparison", comparison()));
    pictures
}

/// Verdicts along one parameter, of numbers, of one Keldysh parameter, and of words; slopes of short and long paths.
fn of_models() -> [(&'static str, String); 4] {
    let numbers = even(6e13, 1.8e14, 41);
    let words: Vec<String> = ["H", "He", "Ne", "Ar"].map(str::to_owned).into();
    let verdicts: Vec<i64> = (0..41).map(|i| (i / 9) % 4 - 1).collect();
    let gammas: Vec<f64> = numbers.iter().map(|i| 1.07 / (i / 1e14).sqrt()).collect();
    let rows = |values, keldysh: &[f64]| {
        let count = keldysh.len();
        let models = vec![("strong_field", &verdicts[..count]), ("tunnelling", &verdicts[41 - count..])];
        let first = Axis { name: "intensity", unit: "W/cm²", values };
        verdict::draw(&VerdictPicture { title: "Invented verdicts", first, second: None, models, keldysh })
    };
    let orders = even(9.0, 51.0, 22);
    let short: Vec<f64> = orders.iter().map(|q| 1e-14 * (q - 12.0).min(12.0)).collect();
    let long: Vec<f64> = short.iter().map(|slope| 24e-14 - slope).collect();
    let off = |slopes: &[f64]| -> Vec<f64> { slopes.iter().map(|slope| 1.1 * slope).collect() };
    let branches = models::draw_branches(&models::BranchPicture {
        title: "Invented paths",
        orders: &orders,
        full: [&off(&short), &off(&long)],
        orbits: [&short, &long],
        place: "At intensity 1.2·10¹⁴ W/cm²",
    });
    [
        ("verdict_numbers", rows(Values::Linear(&numbers), &gammas)),
        ("verdict_one_keldysh", rows(Values::Linear(&numbers[..12]), &[1.07; 12])),
        ("verdict_words", rows(Values::Text(&words), &[1.07, 1.4, 1.3, 1.1])),
        ("branches", branches),
    ]
}

/// Of two dimensions: a field's figure, a rose, a ring of momenta, two helicities.
fn plane_pictures(x: &[f64], y: &[f64]) -> [(&'static str, String); 4] {
    let plane = |[across, up]: [&str; 2], [x, y]: [Vec<f64>; 2], guides| {
        let (title, notes) = ("Invented elliptical pulse", ["Invented.".to_owned()]);
        lissajous::draw(&PlanePicture { title, across, up, x: &x, y: &y, guides, notes: &notes })
    };
    let gigavolts = |v: &[f64]| v.iter().map(|v| v * 1e-9).collect::<Vec<f64>>();
    let names = ["E along x (GV/m)", "E along y (GV/m)"];
    let figure = plane(names, [gigavolts(x), gigavolts(y)], Guides::Cross);
    let angles = even(0.0, std::f64::consts::TAU, 181);
    let radius = |a: &f64| 0.02 + 0.03 * (a - 0.4).cos().powi(4);
    let rose = |f: fn(f64) -> f64| angles.iter().map(|a| radius(a) * f(*a)).collect::<Vec<f64>>();
    let names = ["towards x (1/rad)", "towards y (1/rad)"];
    let rose = plane(names, [rose(f64::cos), rose(f64::sin)], Guides::Circles);
    let (k, q) = (even(-1.5, 1.5, 151), even(-1.2, 1.2, 121));
    let ring = |x: f64, y: f64| (-((x.hypot(y) - 0.8) / 0.15).powi(2)).exp() * (1.0 + 0.3 * (9.0 * x).cos());
    let density: Vec<f64> = q.iter().flat_map(|y| k.iter().map(move |x| ring(*x, *y))).collect();
    let turn = |f: fn(f64) -> f64| angles.iter().map(|a| 0.9 * f(*a)).collect::<Vec<f64>>();
    let map = momentum_map::draw(&MomentumMapPicture {
        title: "Invented ring",
        momentum_x: &k,
        momentum_y: &q,
        density: &density,
        potential: [&turn(f64::cos), &turn(f64::sin)],
    });
    let energy = even(0.0, 60.0, 3000);
    let [plus, minus] = [(1.55, 40.0), (3.1, 30.0)].map(|(w, cut)| invented_spectrum(&energy, w, cut, 1e-12));
    let helicities = harmonics::draw(&HarmonicPicture {
        title: "Invented helicities",
        photon_energy: &energy,
        spectra: &[("helicity +1", &plus), ("helicity −1", &minus)],
        errors: &[],
        quantity: "|a(ω)|² (a.u.)",
        fundamental: Some(1.55),
        cutoff_law: None,
        measured_cutoff: Some(38.0),
        window: "blackman",
    });
    [("lissajous", figure), ("angular_distribution", rose), ("momentum_map", map), ("helicities", helicities)]
}

fn harmonics_of(photon: f64, cutoff: f64, end: f64, floor: f64) -> String {
    let energy = even(0.0, end, 6000);
    let spectrum = invented_spectrum(&energy, photon, cutoff, floor);
    // The error stays where the spectrum falls.
    let errors: Vec<f64> = spectrum.iter().map(|s| 0.1 * s + 1e3 * floor).collect();
    harmonics::draw(&HarmonicPicture {
        title: "Invented data: phase dependence of the cutoff, 1030 nm compressor output on argon",
        photon_energy: &energy,
        spectra: &[("", &spectrum)],
        errors: &errors,
        quantity: "|a(ω)|² (a.u.)",
        fundamental: Some(photon),
        cutoff_law: Some(cutoff + 0.02 * end),
        measured_cutoff: Some(cutoff),
        window: "sin² over the whole pulse",
    })
}

/// Peaks a photon apart up to 10 Up, more to the right than to the left.
fn electron_pictures() -> [(&'static str, String); 2] {
    let energy = even(0.0, 75.0, 3000);
    let peaks = Peaks { photon: 3.1, level: -13.6, ponderomotive: 6.0 };
    let value = |e: f64, share: f64| {
        let envelope = if e < 12.0 { -1.2 - 0.25 * e } else { -4.2 - ((e - 36.0).max(0.0) / 12.0).powi(2) };
        let peak = (std::f64::consts::PI * (e + 13.6 + 6.0) / 3.1).cos().powi(2);
        share * 10_f64.powf(envelope + 2.0 * (peak - 1.0))
    };
    let series = |share: f64| energy.iter().map(|&e| value(e, share)).collect::<Vec<f64>>();
    let (left, right) = (series(0.2), series(0.8));
    let spectrum = electrons::draw(&ElectronPicture {
        title: "Invented data: electrons above threshold",
        energy: &energy,
        both: &series(1.0),
        errors: &[],
        left: &left,
        right: &right,
        peaks: Some(peaks),
        notes: &["Method: invented.".into()],
    });
    let momentum = even(-2.3, 2.3, 2001);
    let density: Vec<f64> =
        momentum.iter().map(|p| p.abs() * value(13.6 * p * p, 0.5 + 0.3 * p.signum())).collect();
    let distribution = electrons::draw_momentum(&MomentumPicture {
        title: "Invented data: momenta",
        momentum: &momentum,
        density: &density,
    });
    [("photoelectrons", spectrum), ("momentum", distribution)]
}

fn map_of_bursts() -> String {
    let (time, energy) = (even(-8.0, 8.0, 700), even(0.0, 90.0, 450));
    let mut intensity = Vec::new();
    for e in &energy {
        for t in &time {
            let arches: f64 = (-4..=4)
                .map(|k| {
                    let start = f64::from(k) * 1.72;
                    let top = 70.0 * (-(start / 6.0).powi(2)).exp();
                    let u = (t - start) / 1.4;
                    let arch = top * (1.0 - (2.0 * u - 1.0).powi(2));
                    let inside = if (0.0..1.0).contains(&u) { 1.0 } else { 0.0 };
                    inside * (-((e - arch) / 3.0).powi(2)).exp()
                })
                .sum();
            intensity.push(1e-4 * (arches + 1e-8 + (-e / 2.5).exp()));
        }
    }
    time_frequency::draw(&TimeFrequencyPicture {
        title: "Invented data: bursts of a few-cycle pulse",
        time: &time,
        photon_energy: &energy,
        intensity: &intensity,
        quantity: "intensity (a.u.)",
        decades: 6.0,
        window: "Gaussian, 0.25 fs FWHM",
    })
}

fn populations_of(excited: f64) -> String {
    let time = even(-12.0, 18.0, 3000);
    let rise = |t: f64, width: f64| 0.5 * (1.0 + (t / width).tanh());
    let series = |f: &dyn Fn(f64) -> f64| time.iter().map(|&t| f(t)).collect::<Vec<f64>>();
    let norm = series(&|t| 1.0 - 0.08 * rise(t - 4.0, 3.0));
    let ground = series(&|t| 1.0 - (0.08 + 1.3 * excited) * rise(t, 2.0));
    let first = series(&|t| excited * rise(t, 2.0) * (1.0 + 0.2 * (3.0 * t).sin() / t.cosh()));
    let second = series(&|t| 0.28 * excited * rise(t - 0.5, 2.0));
    let third = series(&|t| 0.26 * excited * rise(t - 1.0, 2.5));
    let many: Vec<Vec<f64>> = (0..3).map(|k| series(&|_| 1e-9 / f64::from(k + 1))).collect();
    let mut states: Vec<(&str, &[f64])> =
        vec![("n = 0", &ground), ("n = 1", &first), ("n = 2", &second), ("n = 3", &third)];
    states.extend(["n = 4", "n = 5", "n = 6"].into_iter().zip(many.iter().map(Vec::as_slice)));
    populations::draw(&PopulationPicture {
        title: "Invented data: who takes the norm",
        time: &time,
        norm: &norm,
        states: &states,
    })
}

fn scans() -> Vec<(&'static str, String)> {
    let (phase, energy) = (even(0.0, 345.0, 24), even(0.0, 120.0, 1200));
    let mut spectra = Vec::new();
    for (number, p) in phase.iter().enumerate() {
        let spectrum = invented_spectrum(&energy, 1.2037, 60.0 + 8.0 * (2.0 * p.to_radians()).cos(), 1e-14);
        let missing = number == 7 || number == 8 || number == 19;
        spectra.extend(spectrum.iter().map(|&v| if missing { f64::NAN } else { v }));
    }
    let cep = Axis { name: "cep", unit: "deg", values: Values::Linear(&phase) };
    let map = scan::spectrum(&SpectrumScan {
        title: "Invented data: phase dependence of the cutoff",
        parameter: cep,
        energy: Axis { name: "photon energy", unit: "eV", values: Values::Linear(&energy) },
        spectrum: &spectra,
        quantity: "|a(ω)|² (a.u.)",
        decades: 8.0,
    });
    let cutoff: Vec<f64> = phase.iter().map(|p| 60.0 + 8.0 * (2.0 * p.to_radians()).cos()).collect();
    let mut holed = cutoff.clone();
    holed[7] = f64::NAN;
    let law: Vec<f64> = phase.iter().map(|_| 66.2).collect();
    let curve = scan::numbers(&NumberScan {
        title: "Invented data: cutoff against phase",
        parameter: cep,
        series: &[("measured", &holed), ("classical law", &law)],
        quantity: "cutoff energy (eV)",
        up: Up::Linear,
    });
    vec![("scan_spectrum", map), ("scan_numbers", curve), log_scan(), word_scan(), two_axes()]
}

fn log_scan() -> (&'static str, String) {
    let intensity: Vec<f64> = even(12.7, 15.3, 14).into_iter().map(|e| 10_f64.powf(e)).collect();
    let mut yields: Vec<f64> =
        intensity.iter().map(|i| 1e-16 * (i / 1e13).powi(5) / (1.0 + (i / 3e14).powi(4))).collect();
    yields[4] = f64::NAN;
    let svg = scan::numbers(&NumberScan {
        title: "Invented data: ionization against intensity",
        parameter: Axis { name: "intensity", unit: "W/cm²", values: Values::Log(&intensity) },
        series: &[("", &yields)],
        quantity: "ionization probability",
        up: Up::Decades(14.0),
    });
    ("scan_log", svg)
}

fn word_scan() -> (&'static str, String) {
    let elements: Vec<String> = ["H", "He", "Ne", "Ar", "Kr", "Xe"].map(String::from).to_vec();
    let svg = scan::numbers(&NumberScan {
        title: "Invented data: elements",
        parameter: Axis { name: "element", unit: "", values: Values::Text(&elements) },
        series: &[
            ("measured", &[50.1, 81.0, f64::NAN, 54.2, 50.9, 47.0]),
            ("law", &[52.0, 83.5, 78.0, 55.0, 51.9, 48.2]),
        ],
        quantity: "cutoff energy (eV)",
        up: Up::Linear,
    });
    ("scan_words", svg)
}

fn two_axes() -> (&'static str, String) {
    let phase = even(0.0, 330.0, 12);
    let intensity: Vec<f64> = even(13.5, 14.7, 9).into_iter().map(|e| 10_f64.powf(e)).collect();
    let mut numbers: Vec<f64> = intensity
        .iter()
        .flat_map(|i| phase.iter().map(move |p| 15.8 + 3.17 * 9.9e-14 * i + 4.0 * p.to_radians().cos()))
        .collect();
    numbers[17] = f64::NAN;
    numbers[50] = f64::NAN;
    numbers[51] = f64::NAN;
    let svg = scan::number_map(&NumberMap {
        title: "Invented data: cutoff over intensity and phase",
        first: Axis { name: "intensity", unit: "W/cm²", values: Values::Log(&intensity) },
        second: Axis { name: "cep", unit: "deg", values: Values::Linear(&phase) },
        numbers: &numbers,
        quantity: "cutoff energy (eV)",
        shading: Shading::Linear,
    });
    ("scan_two_axes", svg)
}

fn comparison() -> String {
    let energy = even(0.0, 150.0, 900);
    let shape = |height: f64, kink: f64| -> Vec<f64> {
        let value = |&e: &f64| {
            height
                * (10_f64.powf(-e / 11.0) + 10_f64.powf(-4.3 - ((e - 60.0) / kink).powi(2)))
                * (1.0 + 0.5 * (e * 1.9).sin())
        };
        energy.iter().map(value).collect()
    };
    let names = ["this work, strict", "strong field", "three-step"];
    let series = [shape(1.0, 30.0), shape(0.6, 12.0), shape(1.5, 36.0)];
    let curve = |name: &'static str, y: &[f64]| Curve {
        name: name.into(),
        x: energy.clone().into(),
        y: y.to_vec().into(),
        trace: Trace::Line,
    };
    let ratio = |y: &[f64]| y.iter().zip(&series[0]).map(|(a, b)| a / b).collect::<Vec<f64>>();
    let marks = [
        (24.0, "2 Up 24 eV", Origin::Law),
        (120.0, "10 Up 120 eV", Origin::Law),
        (113.0, "knee 113 eV", Origin::Measured),
    ];
    let marks = marks.map(|(at, label, origin)| Mark { at, label: label.into(), origin }).to_vec();
    let upper = names.iter().zip(&series).map(|(name, y)| curve(name, y)).collect();
    let lower = series.iter().map(|y| curve("", &ratio(y))).collect();
    figure::draw(&Figure {
        title: "Invented data: electron spectra of three models",
        across: Across {
            multiples: Some(Multiples { name: "E / Up", unit: 12.0 }),
            ..Across::linear("energy (eV)")
        },
        panels: vec![
            Panel { marks, ..Panel::new("yield (1/eV)", Up::Decades(10.0), upper) },
            Panel {
                height: 90.0,
                ..Panel::new(
                    "ratio to the first",
                    Up::Fixed(Kind::Log, Range { low: 0.02, high: 50.0 }),
                    lower,
                )
            },
        ],
        notes: vec!["Averaged over nothing; drawn to look at.".into()],
    })
}
