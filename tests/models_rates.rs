//! Tunnelling rates and static-field widths against numbers computed independently (complex scaling with two grids and angles;
//! forty-digit arithmetic for the closed forms) and handed to the project; sources of the formulas stand beside each check.

mod support;

use std::f64::consts::{PI, SQRT_2};
use std::sync::Arc;

use support::*;
use tdse_core::cubic::Cubic;
use tdse_core::elements::Element;
use tdse_core::field::{Envelope, Field, SampledField};
use tdse_core::model::tunnelling::{
    Asymptotic, Orbital, QuasiStatic, Rate, Stark, barrier_suppression_intensity, keldysh_exponent, resonance,
};
use tdse_core::potential::Potential;
use tdse_core::problem::{Absorber, Numerics};
use tdse_core::stationary::level;
use tdse_core::units;

const ATOM_1: Potential = Potential::SoftCoulomb { charge: 1.0, softening: 1.0 };
const POSCHL_TELLER: Potential = Potential::PoschlTeller { lambda: 1.0, width: 1.0 };

fn orbital(symbol: &str) -> Orbital {
    let l = u32::from(!matches!(symbol, "H" | "He"));
    let ionization_energy = Element::with_symbol(symbol).unwrap().ionization_energy();
    Orbital { ionization_energy, charge: 1.0, l, m: 0 }
}

fn close(found: f64, expected: f64, tolerance: f64, what: &str) {
    assert!((found / expected - 1.0).abs() < tolerance, "{what}: {found:e} against {expected:e}");
}

/// Ammosov, Delone, Krainov, Sov. Phys. JETP 64, 1191 (1986), with gamma functions in place of Stirling's formula.
#[test]
fn adk_rates() {
    let numbers = [
        ("H", 1.000_266_853, 3.999_509_57),
        ("He", 0.743_882_135_8, 4.255_749),
        ("Ne", 0.794_310_358_7, 4.243_546_37),
        ("Ar", 0.929_153_733_9, 4.115_632_78),
        ("Kr", 0.985_830_923, 4.025_474_09),
        ("Xe", 1.059_089_673, 3.882_345_77),
    ];
    for (symbol, number, coefficient) in numbers {
        close(orbital(symbol).effective_number(), number, 2e-7, symbol);
        close(orbital(symbol).coefficient(), coefficient, 1e-6, symbol);
    }
    let rates = [
        ("H", 1e14, 2.853_108_2e-4, 6.444_186_8e-5),
        ("He", 5e14, 3.001_653_1e-5, 6.501_824_8e-6),
        ("He", 1e15, 1.348_586_6e-3, 3.473_850_4e-4),
        ("Ne", 4e14, 3.296_920_3e-4, 7.452_206_1e-5),
        ("Ne", 8e14, 1.033_907_9e-2, 2.779_174_1e-3),
        ("Ar", 1e14, 3.354_270_5e-5, 6.782_745_3e-6),
        ("Ar", 2e14, 2.381_426_5e-3, 5.726_669_3e-4),
        ("Xe", 5e13, 1.266_578_4e-4, 2.620_895_7e-5),
        ("Xe", 1e14, 6.691_654_3e-3, 1.646_677_9e-3),
    ];
    for (symbol, intensity, at_crest, average) in rates {
        let field = units::peak_field(intensity);
        close(orbital(symbol).static_rate(field), at_crest, 2e-6, symbol);
        close(orbital(symbol).average_rate(field), average, 2e-6, symbol);
    }
    assert_eq!(orbital("H").static_rate(0.0), 0.0);
}

/// Landau, Lifshitz, Quantum Mechanics, §77: (4/F) exp(-2/3F); and hydrogen's true widths (complex rotation in fifty digits,
/// consistent with Damburg, Kolosov, J. Phys. B 9, 3149 (1976)) approach it as 1 - 107F/12.
#[test]
fn hydrogen_in_a_static_field() {
    let hydrogen = Orbital { ionization_energy: 0.5, charge: 1.0, l: 0, m: 0 };
    let landau = [
        (0.03, 2.978_175_248_270_886e-8),
        (0.05, 1.295_677_433_850_088_5e-4),
        (0.08, 1.201_847_382_097_571_1e-2),
    ];
    for (field, expected) in landau {
        close(hydrogen.static_rate(field), expected, 1e-12, "Landau");
    }
    let widths = [(0.01, 4.070_774_088e-27), (0.015, 1.159_445_482e-17), (0.02, 5.545_903_842e-13)];
    for (field, width) in widths {
        let series = 1.0 - 107.0 * field / 12.0 + 7363.0 * field * field / 288.0;
        close(hydrogen.static_rate(field) * series, width, 1e3 * f64::powi(field, 3), "series");
    }
}

/// Perelomov, Popov, Terent'ev 1966 as written by Ilkov, Decker, Chin, J. Phys. B 25, 4005 (1992) (from memory).
#[test]
fn ppt_rates() {
    let exponents = [
        (0.1, 0.999_003_199_487_108_9),
        (0.5, 0.976_804_459_286_746_5),
        (1.0, 0.922_430_399_014_150_5),
        (2.0, 0.798_804_686_400_910_6),
        (5.0, 0.554_635_547_021_678_7),
    ];
    for (gamma, expected) in exponents {
        assert!(
            (keldysh_exponent(gamma) - expected).abs() < 1e-12,
            "g({gamma}) = {}",
            keldysh_exponent(gamma)
        );
    }
    assert!((keldysh_exponent(0.029_999) - keldysh_exponent(0.030_001)).abs() < 1e-7);
    let rates = [
        ("H", 1e14, 800.0, 2.329_404_4e-4),
        ("Ar", 1e14, 800.0, 2.652_509_8e-5),
        ("Ar", 2e14, 800.0, 1.195_584_8e-3),
        ("Xe", 5e13, 800.0, 2.705_267_5e-4),
        ("Xe", 3e13, 1064.0, 4.193_292_4e-6),
        ("Ne", 5e14, 800.0, 3.958_831_3e-4),
        ("Ar", 2e14, 10_600.0, 5.753_259_6e-4),
    ];
    let nanometre = units::Quantity::Length.unit("nm").unwrap().factor;
    for (symbol, intensity, wavelength, expected) in rates {
        let frequency = units::angular_frequency(wavelength * nanometre);
        let found = orbital(symbol).ppt_rate(units::peak_field(intensity), frequency);
        close(found, expected, 2e-6, &format!("{symbol}, {wavelength} nm"));
    }
    // γ → 0: the averaged quasi-static rate, for any m.
    for m in [0, 1] {
        let orbital = Orbital { m, ..orbital("Ar") };
        close(orbital.ppt_rate(0.08, 1e-3), orbital.average_rate(0.08), 2e-3, "long wavelength");
    }
}

/// Augst, Strickland, Meyerhofer, Chin, Eberly, Phys. Rev. Lett. 63, 2212 (1989): 4.00e9 Ip⁴/Z², Ip in eV.
#[test]
fn barrier_suppression() {
    let table = [
        ("H", 1.367_954e14),
        ("He", 1.462_061e15),
        ("Ne", 8.651_208e14),
        ("Ar", 2.467_732e14),
        ("Kr", 1.536_664e14),
        ("Xe", 8.660_375e13),
    ];
    for (symbol, expected) in table {
        close(barrier_suppression_intensity(orbital(symbol).ionization_energy, 1.0), expected, 1e-6, symbol);
    }
    let ion = barrier_suppression_intensity(54.417_765_528_2 / units::HARTREE_EV, 2.0);
    close(ion, 8.770_386e15, 1e-6, "He+");
}

/// (atom, field, Re E, Γ) of the level below, from complex scaling.
fn widths() -> Vec<(Potential, f64, f64, f64)> {
    vec![
        (ATOM_1, 0.05, -0.677_365_402_8, 1.465_048e-6),
        (ATOM_1, 0.06, -0.680_946_394_5, 3.054_068e-5),
        (ATOM_1, 0.15, f64::NAN, 0.054_327_95),
        (SQRT_2_ATOM, 0.03, -0.506_106_299_5, 7.238_223e-7),
        (SQRT_2_ATOM, 0.04, -0.511_309_251_8, 8.729_912e-5),
        (SQRT_2_ATOM, 0.05, -0.518_780_434_2, 1.197_388e-3),
        (SQRT_2_ATOM, 0.06, -0.528_461_606_2, 5.527_988e-3),
        (SQRT_2_ATOM, 0.08, -0.550_741_793_6, 0.027_612_75),
        (SQRT_2_ATOM, 0.1, -0.572_798_470_4, 0.063_927_1),
        (POSCHL_TELLER, 0.06, -0.505_344_022_9, 2.610_306e-5),
        (POSCHL_TELLER, 0.1, -0.516_053_579_5, 1.954_705e-3),
    ]
}

/// Field that rises to `strength` as sin² in `ramp` and stays for `hold`, a.u. of time.
fn static_field(strength: f64, ramp: f64, hold: f64) -> Field {
    let times: Vec<f64> = (0..=400).map(|i| (ramp + hold) * f64::from(i) / 400.0).collect();
    let at = |t: f64| if t < ramp { (0.5 * PI * t / ramp).sin().powi(2) } else { 1.0 };
    let values = times.iter().map(|&t| strength * at(t)).collect();
    Field {
        pulses: vec![],
        sampled: Some(SampledField { components: [Some(Arc::new(Cubic::new(times, values))), None] }),
    }
}

/// Decay of the norm in the last third of a run in a field that stays.
fn measured_width(potential: &Potential, strength: f64, expected: f64) -> f64 {
    let (ramp, hold) = if expected > 1e-3 { (60.0, 240.0) } else { (300.0, 1500.0) };
    let problem = ground(potential.clone(), static_field(strength, ramp, hold));
    let numerics = Numerics { absorber: Absorber::Smooth { width: 60.0 }, ..numerics(1152, 0.25, 0.1) };
    let (plan, state) = solve(&problem, &numerics);
    let last = plan.schedule().steps;
    let first = last - last / 3;
    let norm = &state.series.norm;
    (norm[first] / norm[last]).ln() / ((last - first) as f64 * plan.schedule().time_step)
}

/// One run per width: what the norm loses, to a part in a hundred.
#[test]
fn static_field_widths_measured_with_the_solver() {
    for (potential, field, _, expected) in widths() {
        let found = measured_width(&potential, field, expected);
        println!(
            "{potential:?}, F = {field}: measured {found:e} against {expected:e}: {:e}",
            found / expected - 1.0
        );
        close(found, expected, 0.01, &format!("{potential:?}, F = {field}"));
    }
}

/// The stationary equation with an outgoing wave, either sign of the field.
#[test]
fn static_field_resonances() {
    for (potential, field, energy, width) in widths() {
        let bare = level(&potential, 0).unwrap().energy;
        for sign in [1.0, -1.0] {
            let found = resonance(&potential, bare, sign * field).unwrap();
            println!("{potential:?}, F = {field}: {found:?}: {:e}", found.width / width - 1.0);
            close(found.width, width, 1e-4, "width");
            let off = (found.energy - energy).abs() / (bare - energy).abs();
            assert!(energy.is_nan() || off < 1e-5, "{found:?}: shift off by {off:e} of itself");
        }
    }
}

/// ψ = N(1+s) e^{-s}, s = √(x²+2), of the soft core with a = √2 (exact, N by forty-digit quadrature): C = N. Pöschl–Teller
/// λ = 1: sech x/√2 → √2 e^{-x}. Two dimensions, a² = 6.75: R = (1+ks)e^{-ks}, k = 2/3, so C/R(0) = k e^{ka}/(1+ka).
#[test]
fn asymptotic_coefficients() {
    let soft = Asymptotic::on_line(&SQRT_2_ATOM, 0).unwrap();
    let short = Asymptotic::on_line(&POSCHL_TELLER, 0).unwrap();
    println!("{soft:?} {short:?}");
    for side in [0, 1] {
        close(soft.coefficient[side], 0.974_776_768_656_2, 1e-4, "soft core");
        close(short.coefficient[side], SQRT_2, 1e-6, "Pöschl–Teller");
    }
    let softening = 6.75f64.sqrt();
    let round = Potential::SoftCoulomb { charge: 1.0, softening };
    let plane = Asymptotic::on_plane(&round, 0, 0).unwrap();
    let at_centre =
        tdse_core::stationary::radial_level(&round, 0, 0).unwrap().radial_function(&round, 0).value(0.0);
    let k = 2.0 / 3.0;
    let expected = at_centre * k / ((1.0 + k * softening) * (-k * softening).exp());
    println!("{plane:?}, expected {expected}");
    close(plane.coefficient[0], expected, 1e-3, "two dimensions");
}

/// Within a fifth of the width with the shifted energy as long as there is a barrier (F < Ip²/4 of a Coulomb potential), and worse
/// with the bare energy.
#[test]
fn leading_order_rate_of_the_model_atom() {
    for (potential, field, _, width) in widths() {
        let model = QuasiStatic::on_line(&potential, 0, field).unwrap();
        let bare = QuasiStatic { stark: Stark::None, ..model.clone() };
        let (ratio, unshifted) = (model.rate(field) / width, bare.rate(field) / width);
        println!("{potential:?}, F = {field}: leading/true {ratio}, unshifted {unshifted}");
        assert!(unshifted > ratio && (unshifted - 1.0).abs() > (ratio - 1.0).abs());
        if field < model.asymptotic.energy.powi(2) / 4.0 {
            assert!((ratio - 1.0).abs() < 0.2, "{potential:?}, F = {field}: {ratio}");
        }
    }
}

/// The ratio to the true width tends to 1 in weak fields: the parabola through three of them meets zero field there.
#[test]
fn leading_order_becomes_exact_in_weak_fields() {
    for (potential, fields, room) in
        [(POSCHL_TELLER, [0.025, 0.03, 0.035], 0.003), (SQRT_2_ATOM, [0.02, 0.025, 0.03], 0.03)]
    {
        let model = QuasiStatic::on_line(&potential, 0, 0.05).unwrap();
        let ratio = |field: f64| {
            model.rate(field) / resonance(&potential, model.asymptotic.energy, field).unwrap().width
        };
        let [a, b, c] = fields.map(ratio);
        let step = fields[0] / (fields[1] - fields[0]);
        let limit = a - step * (b - a) + 0.5 * step * (step + 1.0) * (c - 2.0 * b + a);
        println!("{potential:?}: {a}, {b}, {c} → {limit}");
        assert!((1.0 - c).abs() > (1.0 - b).abs() && (1.0 - b).abs() > (1.0 - a).abs(), "{a}, {b}, {c}");
        assert!((limit - 1.0).abs() < room, "{limit}");
    }
}

/// P = 1 - exp(-∫w dt): constant rate in a constant field, saturation where the exponent is 1.
#[test]
fn ionization_in_time_and_saturation() {
    let rate = Rate::Adk(orbital("Ar"));
    let constant = static_field(0.07, 1e-3, 100.0);
    let times: Vec<f64> = (0..=9).map(|i| 5.0 + 10.0 * f64::from(i)).collect();
    let found = rate.ionization(&constant, &times);
    for (p, t) in found.iter().zip(&times).skip(1) {
        close(*p, 1.0 - (-rate.at([0.07, 0.0]) * (t - times[0])).exp(), 1e-3, "constant field");
    }
    assert!(found.windows(2).all(|p| p[0] <= p[1]));
    let frequency = 0.057;
    let light = field(pulse(frequency, 0.05, Envelope::Sin2 { duration: 10.0 * 2.0 * PI / frequency }));
    for rate in [rate, Rate::Ppt { orbital: orbital("Ar"), frequency }] {
        let factor = rate.saturation(&light).unwrap();
        let strong = field(pulse(frequency, 0.05 * factor, light.pulses[0].envelope));
        let (start, end) = light.interval();
        let times: Vec<f64> = (0..=4000).map(|i| start + (end - start) * f64::from(i) / 4000.0).collect();
        let after = rate.ionization(&strong, &times)[4000];
        close(after, 1.0 - (-1.0f64).exp(), 1e-4, "saturation");
        let intensity = rate.saturation_intensity(&light).unwrap();
        println!("saturation at {intensity:e} W/cm²");
        close(intensity, units::intensity(0.05 * factor), 1e-12, "intensity");
    }
}
