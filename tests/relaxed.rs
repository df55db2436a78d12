//! No choice is much finer than it need be: each is relaxed by itself, until the accuracy is missed, and the table printed.
//! The scenarios are those of the shipped configurations, by their numbers; the truth is the same with all choices finer.
//!
//! `cargo test --release -p tdse-core --test relaxed -- --ignored --nocapture`

mod support;

use std::fmt::Write;

use support::*;
use tdse_core::choose::{AtomFacts, FLOOR, Pins, choose};
use tdse_core::grid::good_length;
use tdse_core::problem::{Absorber, Numerics, Problem};
use tdse_core::spectrum::{Window, order_yields};
use tdse_core::stationary::{Softenable, tune_softening};
use tdse_core::step::resonant_step;
use tdse_core::units::HARTREE_EV;

const ACCURACY: f64 = 1e-4;
/// Factors by which a choice is relaxed.
const FACTORS: [f64; 6] = [1.0, 1.25, 1.5, 2.0, 2.5, 3.0];

fn scenario(ionization_energy: f64, nanometres: f64, intensity: f64, cycles: f64) -> (Problem, f64) {
    let binding = ionization_energy / HARTREE_EV;
    let family = Softenable::SoftCoulomb { charge: 1.0 };
    let softening = tune_softening(&family, 0, -binding).unwrap();
    (ground(family.with_softening(softening), field(light(nanometres, intensity, cycles))), binding)
}

struct Found {
    yields: Vec<f64>,
    acceleration: Vec<f64>,
    step: f64,
}

fn found(problem: &Problem, binding: f64, numerics: &Numerics) -> Found {
    let pulse = &problem.field.pulses[0];
    let orders = ((1.32 * binding + 3.17 * pulse.ponderomotive_energy()) / pulse.frequency) as usize;
    let (plan, state) = solve(problem, numerics);
    let acceleration = acceleration(&plan, &state);
    let yields = order_yields(&acceleration, plan.schedule(), Window::Hann, pulse.frequency, orders);
    Found { yields, acceleration, step: numerics.time_step }
}

/// Largest of the relative errors of the yields above the floor and up to the cutoff, and the root-mean-square of the
/// acceleration where the samples are common to both.
fn error(found: &Found, exact: &Found) -> f64 {
    let largest = exact.yields.iter().copied().fold(0.0, f64::max);
    let pairs = found.yields.iter().zip(&exact.yields).filter(|(_, e)| **e > FLOOR * largest);
    let harmonic = pairs.map(|(f, e)| (f / e - 1.0).abs()).fold(0.0, f64::max);
    let stride = (found.step / exact.step).round() as usize;
    let square = |v: &mut dyn Iterator<Item = f64>| v.map(|x| x * x).sum::<f64>().sqrt();
    let there = || exact.acceleration.iter().step_by(stride);
    let rms = square(&mut found.acceleration.iter().zip(there()).map(|(a, b)| a - b))
        / square(&mut there().copied());
    harmonic.max(rms)
}

/// Every choice finer: a quarter of the step, which all the factors make a whole number of, a spacing of 0.72, one and a half times the box within twice the absorber.
fn finer(base: &Numerics) -> Numerics {
    let (width, inner) = (base.absorber.width(), 0.5 * base.grid.x.extent() - base.absorber.width());
    let mut new = Numerics { time_step: 0.25 * base.time_step, ..base.clone() };
    new.absorber = Absorber::Smooth { width: 2.0 * width };
    new.grid.x.spacing *= 0.72;
    new.grid.x.points = good_length((2.0 * (2.0 * width + 1.5 * inner) / new.grid.x.spacing) as usize);
    new
}

/// Numerics with one choice relaxed by a factor; `None` where the step would pass its resonance. The run's end stays.
fn relaxed(base: &Numerics, binding: f64, knob: usize, factor: f64) -> Option<Numerics> {
    let mut new = base.clone();
    let (width, inner) = (base.absorber.width(), 0.5 * base.grid.x.extent() - base.absorber.width());
    let (mut new_width, mut new_inner) = (width, inner);
    match knob {
        0 => new.grid.x.spacing *= factor,
        1 => new.time_step *= factor,
        2 => new_width /= factor,
        _ => new_inner /= factor,
    }
    new.absorber = Absorber::Smooth { width: new_width };
    // Whole blocks of eight points, no rounding to good lengths: a box is as large as it is meant to be.
    new.grid.x.points = 8 * (2.0 * (new_width + new_inner) / new.grid.x.spacing / 8.0).round() as usize;
    let resonance = resonant_step(new.grid.x.largest_momentum(), binding);
    (new.time_step < resonance).then_some(new)
}

#[test]
#[ignore = "minutes; a table"]
fn how_far_each_choice_can_be_relaxed() {
    let scenarios = [
        ("quickstart: H, 800 nm, 1e14", scenario(13.598_434, 800.0, 1e14, 6.0)),
        ("few_cycle_argon: 1030 nm, 1.5e14", scenario(15.759_6, 1030.0, 1.5e14, 4.0)),
        ("intensity_scan: Ne, 800 nm, 4e14", scenario(21.564_5, 800.0, 4e14, 6.0)),
        ("wavelength_scan: Ar, 1600 nm, 8e13", scenario(15.759_6, 1600.0, 8e13, 6.0)),
    ];
    for (name, (problem, binding)) in scenarios {
        let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
        let pins = Pins::default();
        let wish = wish(&problem, &facts, &pins, ACCURACY);
        let mut base = choose(&wish).numerics;
        let (start, end) = problem.field.interval();
        // Steps that all the factors divide: every relaxed run ends with the others.
        let steps = 60.0 * ((end - start) / base.time_step / 60.0).ceil();
        base.time_step = (end - start) / steps;
        let truth = found(&problem, binding, &finer(&base));
        println!(
            "{name}: spacing {}, step {:.4}, absorber {}, {} points",
            base.grid.x.spacing,
            base.time_step,
            base.absorber.width(),
            base.grid.len()
        );
        for (knob, what) in ["spacing", "step", "absorber", "inner box"].into_iter().enumerate() {
            let mut line = format!("  {what:10}");
            let mut furthest = 0.0;
            for factor in FACTORS {
                let Some(numerics) = relaxed(&base, binding, knob, factor) else {
                    write!(line, "  x{factor}: resonance").unwrap();
                    break;
                };
                let error = error(&found(&problem, binding, &numerics), &truth);
                write!(line, "  x{factor}: {error:.1e}").unwrap();
                if error <= ACCURACY {
                    furthest = factor;
                }
            }
            println!("{line}  -> {furthest}");
        }
    }
}
