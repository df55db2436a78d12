//! Harmonics: laws, and the cutoff against the law it is never told.

mod support;

use std::f64::consts::PI;
use std::sync::Arc;

use support::*;
use tdse_core::cubic::Cubic;
use tdse_core::field::Envelope;
use tdse_core::grid::good_length;
use tdse_core::potential::Potential;
use tdse_core::problem::Absorber;
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::{EnergyAxis, Window, harmonics, measured_cutoff, order_yields, radiated_energy};
use tdse_core::units::{self, Quantity};

/// Lewenstein et al., Phys. Rev. A 49, 2117 (1994): Ip F(Ip/Up) + 3.17 Up; F by the complex quantum orbit, computed
/// independently and handed to the project, at Ip/Up = 0.1, 0.5, 1, 5, 10; linear in between.
fn cutoff_law(ip: f64, up: f64) -> f64 {
    const F: [(f64, f64); 6] = [
        (0.0, 1.324_089),
        (0.1, 1.320_314),
        (0.5, 1.306_654),
        (1.0, 1.292_174),
        (5.0, 1.225_409),
        (10.0, 1.186_079),
    ];
    let ratio = ip / up;
    let i = F.iter().rposition(|p| p.0 <= ratio).unwrap().min(F.len() - 2);
    let ((x0, y0), (x1, y1)) = (F[i], F[i + 1]);
    ip * (y0 + (y1 - y0) * (ratio - x0) / (x1 - x0)) + 3.173_136_6 * up
}

fn nanometres(wavelength: f64) -> f64 {
    units::angular_frequency(wavelength * Quantity::Length.unit("nm").unwrap().factor)
}

#[test]
fn measured_cutoff_follows_the_law() {
    let pairs = [(800.0, 0.8e14), (800.0, 1.5e14), (1030.0, 1e14), (1300.0, 0.8e14), (1600.0, 0.8e14)];
    for (wavelength, intensity) in pairs {
        let frequency = nanometres(wavelength);
        let pulse = sin2_pulse(frequency, units::peak_field(intensity), 6.0);
        let width = 60.0;
        let reach = 2.5 * pulse.quiver_amplitude() + 40.0 + width;
        let mut numerics = numerics(good_length((2.0 * reach / 0.35) as usize), 0.35, 0.125);
        numerics.absorber = Absorber::Smooth { width };
        let (plan, state) = solve(&ground(SQRT_2_ATOM, field(pulse)), &numerics);
        let law = cutoff_law(0.5, pulse.ponderomotive_energy()) / frequency;
        // As far as the time step resolves; the law sets nothing here.
        let orders = (0.5 * PI / numerics.time_step / frequency) as usize;
        let yields =
            order_yields(&acceleration(&plan, &state), plan.schedule(), Window::Hann, frequency, orders);
        let found = measured_cutoff(&yields).expect("a plateau that falls off");
        println!("{wavelength} nm, {intensity:e} W/cm²: law {law:.2}, measured {:.2} photons", found.order);
        assert!((found.order - law).abs() < 1.5, "{found:?} against {law}");
    }
}

/// Mirror symmetry: a pulse with φ + π is the mirror image of the pulse with φ.
#[test]
fn phase_reversal_turns_the_acceleration_round() {
    let mut numerics = numerics(1024, 0.4, 0.2);
    numerics.absorber = Absorber::Smooth { width: 60.0 };
    for phase in [0.0, 0.7] {
        let run = |phase: f64| {
            let pulse = tdse_core::field::Pulse { phase, ..near_infrared() };
            let (plan, state) = solve(&ground(SQRT_2_ATOM, field(pulse)), &numerics);
            acceleration(&plan, &state)
        };
        let (there, back) = (run(phase), run(phase + PI));
        let back: Vec<f64> = back.into_iter().map(|a| -a).collect();
        let difference = deviation(&back, &there);
        println!("φ = {phase}: a(φ+π) = -a(φ) to {difference:e}");
        assert!(difference < 1e-9, "{difference:e}");
    }
}

/// Spectrum at whole orders of a flat-top pulse, through a Blackman window over its plateau.
fn flat_top_orders(potential: Potential) -> (Vec<f64>, f64) {
    let frequency = nanometres(400.0);
    let period = 2.0 * PI / frequency;
    let envelope = Envelope::FlatTop { ramp: 4.0 * period, plateau: 16.0 * period };
    let pulse = pulse(frequency, units::peak_field(5e13), envelope);
    let mut numerics = numerics(1024, 0.25, period / 2048.0);
    numerics.absorber = Absorber::Smooth { width: 60.0 };
    let (plan, state) = solve(&ground(potential, field(pulse)), &numerics);
    let all = acceleration(&plan, &state);
    let (start, end) = (-8.0 * period, 8.0 * period);
    let schedule = Schedule { start, end, steps: 16 * 2048, ..plan.schedule().clone() };
    let plateau = &all[4 * 2048..=20 * 2048];
    let axis = EnergyAxis { step: frequency, points: 14 };
    (harmonics(plateau, &schedule, Window::Blackman, axis).spectrum(), state.series.norm[state.step])
}

/// Ben-Tal, Moiseyev, Beswick, J. Phys. B 26, 3017 (1993): V(-x) = V(x) and E(t + T/2) = -E(t) leave no even orders.
#[test]
fn even_orders_need_an_asymmetric_atom() {
    let (symmetric, norm) = flat_top_orders(Potential::PoschlTeller { lambda: 1.0, width: 1.0 });
    println!("norm left {norm}; orders {symmetric:?}");
    assert!(norm > 0.99, "depletion below one per cent, {norm} left");
    for even in [2, 4, 6, 8, 10] {
        let neighbours = symmetric[even - 1].min(symmetric[even + 1]);
        assert!(symmetric[even] < 1e-5 * neighbours, "order {even}: {:e} of {neighbours:e}", symmetric[even]);
    }
    // Invented: the same well with a step on one side, binding a similar state.
    let x: Vec<f64> = (-800..=800).map(|i| 0.25 * f64::from(i)).collect();
    let v = x.iter().map(|&x| -(1.0 / x.cosh()).powi(2) - 0.15 / (x - 2.0).cosh().powi(2)).collect();
    let (lopsided, _) = flat_top_orders(Potential::Sampled(Arc::new(Cubic::new(x, v))));
    println!("lopsided: {lopsided:?}");
    for even in [2, 4, 6] {
        let neighbours = lopsided[even - 1].min(lopsided[even + 1]);
        assert!(lopsided[even] > 1e-2 * neighbours, "order {even}: {:e} of {neighbours:e}", lopsided[even]);
    }
}

/// Larmor's energy counted twice: the integral of 2|a(ω)|²/(3πc³) over ω > 0 is ∫ 2a²/(3c³) dt (Parseval).
#[test]
fn radiated_energy_adds_up_to_larmors_power() {
    let numerics = numerics(2048, 0.4, 0.2);
    let (plan, state) = solve(&ground(SQRT_2_ATOM, field(near_infrared())), &numerics);
    let a = acceleration(&plan, &state);
    let power: f64 = a.iter().map(|a| 2.0 * a * a / 3.0 * numerics.time_step).sum::<f64>()
        / units::SPEED_OF_LIGHT_AU.powi(3);
    let axis = EnergyAxis::up_to(PI / numerics.time_step, 0.002);
    let spectrum = harmonics(&a, plan.schedule(), Window::None, axis).spectrum();
    let energy: f64 = spectrum.iter().map(|&s| radiated_energy(s) * axis.step).sum::<f64>()
        - 0.5 * radiated_energy(spectrum[0]) * axis.step;
    assert!((energy / power - 1.0).abs() < 1e-3, "{energy:e} against {power:e}");
}
