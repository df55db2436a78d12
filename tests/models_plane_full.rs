//! Simpler models in two dimensions against the full solution; sources beside each check.

mod support;

use std::f64::consts::PI;
use std::sync::Arc;

use support::*;
use tdse_core::compare::Measured;
use tdse_core::cubic::Cubic;
use tdse_core::field::{Field, SampledField};
use tdse_core::grid::Grid;
use tdse_core::model::metrics::compare_harmonics;
use tdse_core::model::perturbation::{PlaneOnePhoton, TwoLevels};
use tdse_core::model::recombination::recombined_on_plane;
use tdse_core::model::strong_field::{Round, Stationary};
use tdse_core::model::tunnelling::{QuasiStatic, Rate, Stark};
use tdse_core::potential::Potential;
use tdse_core::problem::{Absorber, Numerics, PlaneLabel, Record, Symmetry};
use tdse_core::simulate::{Atom, Plan, State, run};
use tdse_core::spectrum::{EnergyAxis, Harmonics, Window, harmonics};
use tdse_core::stationary::{RoundStates, RoundTransitions, radial_level};

const ROUND: Potential = Potential::SoftCoulomb { charge: 1.0, softening: 0.8 };

/// A well with a few levels, and no tail: everything its ground state goes to by one photon is a level of |m| = 1 or the continuum.
const WELL: Potential = Potential::GaussianWell { depth: 1.2, width: 1.6 };

/// Field along x that rises to `strength` as sin² in `ramp` and stays for `hold`, a.u. of time.
fn static_field(strength: f64, ramp: f64, hold: f64) -> Field {
    let times: Vec<f64> = (0..=400).map(|i| (ramp + hold) * f64::from(i) / 400.0).collect();
    let at = |t: f64| if t < ramp { (0.5 * PI * t / ramp).sin().powi(2) } else { 1.0 };
    let values = times.iter().map(|&t| strength * at(t)).collect();
    let table = Arc::new(Cubic::new(times, values));
    Field { pulses: vec![], sampled: Some(SampledField { components: [Some(table), None] }) }
}

/// A run of the plane atom from its lowest state in a box of `points` points of 0.4 bohr.
fn full(light: &Field, points: usize, absorber: Absorber, time_step: f64) -> (Plan, State) {
    let grid = Grid::square(points, 0.4);
    let label = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };
    let atom = Arc::new(Atom::on_plane(&ROUND, &grid, &[label]).unwrap());
    let numerics = Numerics { grid, absorber, time_step, ..numerics(8, 0.4, time_step) };
    let plan = Plan::new(&ground(ROUND, light.clone()), atom, &numerics, Record::default()).unwrap();
    let state = run(&plan);
    (plan, state)
}

/// What the norm loses in a field that stays: the leading-order rate within a fifth of it below barrier suppression (Ip²/4), as in one
/// dimension, and closer the weaker the field.
#[test]
fn widths_of_the_plane_atom() {
    let model = QuasiStatic::on_plane(&ROUND, 0, 0).unwrap();
    let bare = QuasiStatic { stark: Stark::None, ..model.clone() };
    let ratios: Vec<f64> = [(0.04, 450.0), (0.05, 240.0)]
        .into_iter()
        .map(|(strength, hold)| {
            let ramp = hold / 3.0;
            let light = static_field(strength, ramp, hold);
            let (plan, state) = full(&light, 256, Absorber::Smooth { width: 20.0 }, 0.1);
            let last = plan.schedule().steps;
            let first = last - last / 3;
            let norm = &state.series.norm;
            let width = (norm[first] / norm[last]).ln() / ((last - first) as f64 * plan.schedule().time_step);
            let ratio = model.rate(strength) / width;
            println!(
                "{model:?} F = {strength}: width {width:e}, leading/full {ratio}, unshifted {}",
                bare.rate(strength) / width
            );
            ratio
        })
        .collect();
    assert!(ratios.iter().all(|ratio| (ratio - 1.0).abs() < 0.2), "{ratios:?}");
    assert!((ratios[0] - 1.0).abs() < (ratios[1] - 1.0).abs(), "{ratios:?}");
}

/// Weak field: what the full solution ionizes by one photon, linear, elliptical, from m = 0 and m = 1, to 0.2 %; a strong field to more.
#[test]
fn one_photon_ionization_is_the_full_result_in_weak_fields() {
    for (potential, m, ellipticity) in [(WELL, 0, 0.0), (WELL, 1, 0.6), (ROUND, 0, 0.0)] {
        let mut light = sin2_pulse(1.0, 0.02, 10.0);
        light.ellipticity = ellipticity;
        let light = field(light);
        let grid = Grid::square(256, 0.4);
        let label = PlaneLabel { symmetry: Symmetry::Angular(m), number: 0 };
        let atom = Arc::new(Atom::on_plane(&potential, &grid, &[label]).unwrap());
        let numerics = Numerics {
            grid,
            absorber: Absorber::Smooth { width: 20.0 },
            trailing_time: 10.0,
            ..numerics(8, 0.4, 0.05)
        };
        let plan =
            Plan::new(&ground(potential.clone(), light.clone()), atom, &numerics, Record::default()).unwrap();
        let state = run(&plan);
        let round = RoundStates::in_box(&potential, &grid).unwrap();
        let bound: f64 =
            plan.round_populations(&state, &round, &mut plan.make_workspace()).iter().map(|(_, p)| p).sum();
        let full = state.series.norm[0] - bound;
        let transitions = RoundTransitions::new(&potential, m, 0, 2.0).unwrap();
        let model = PlaneOnePhoton::new(&transitions, &light, EnergyAxis::up_to(2.0, 0.005));
        let (found, off) = (model.probability(), model.probability() / full - 1.0);
        println!("{potential:?} m = {m}, ellipticity {ellipticity}: {found:e} against {full:e}: {off:e}");
        assert!(off.abs() < 2e-3, "{potential:?} m = {m}: {found:e} against {full:e}");
        let angles: Vec<f64> = (0..60).map(|i| 2.0 * PI * f64::from(i) / 60.0).collect();
        let around = model.angular_distribution(&angles);
        let sum: f64 = around.iter().sum::<f64>() * 2.0 * PI / 60.0;
        assert!((sum / found - 1.0).abs() < 1e-9, "{sum:e} against {found:e}");
        if (m, ellipticity) == (0, 0.0) {
            // From m = 0 by linear light: cos².
            for (p, angle) in around.iter().zip(&angles) {
                assert!((p / around[0] - angle.cos().powi(2)).abs() < 1e-9);
            }
        }
    }
}

/// A deep well: linear light on the resonance turns its ground state into the level of |m| = 1 and back as two levels flop (Rabi 1937),
/// here in the field as it is.
#[test]
fn two_levels_of_the_plane_flop_as_the_whole_atom_does() {
    let well = Potential::GaussianWell { depth: 6.0, width: 1.0 };
    let levels = TwoLevels::on_plane(&well, [0, 0]).unwrap();
    // ∫Ω f² dt = 1.5 π of a sin² envelope, whose mean is ½: up, and half of the way down again.
    let strength = 0.02 / levels.dipole.abs();
    let light = field(sin2_pulse(levels.transition, strength, 1.5 * levels.transition / 0.02));
    let grid = Grid::square(64, 0.25);
    let label = |m: i32| PlaneLabel { symmetry: Symmetry::Angular(m), number: 0 };
    let atom = Arc::new(Atom::on_plane(&well, &grid, &[label(0), label(1), label(-1)]).unwrap());
    let numerics = Numerics { grid, absorber: Absorber::Smooth { width: 3.0 }, ..numerics(8, 0.25, 0.02) };
    let problem = ground(well, light.clone());
    let plan = Plan::new(&problem, atom, &numerics, Record { populations: 3 }).unwrap();
    let series = run(&plan).series;
    let times: Vec<f64> = series.population_steps.iter().map(|&n| plan.schedule().time(n)).collect();
    let model = levels.populations(&light, &times);
    let full: Vec<f64> = series.populations.chunks(3).map(|p| p[1] + p[2]).collect();
    let off = model.iter().zip(&full).map(|(m, f)| (m - f).abs()).fold(0.0, f64::max);
    println!("{levels:?}: largest {}, off by {off}", full.iter().copied().fold(0.0, f64::max));
    assert!(full.iter().any(|&p| p > 0.9) && off < 0.02, "off by {off}");
    for p in series.populations.chunks(3) {
        assert!((p[1] - p[2]).abs() < 1e-9, "linear light takes ±1 alike: {p:?}");
    }
}

/// Ionization by a slow pulse at the rate of |E(t)|, linear and elliptical: it misses what a field that is not slow adds (Perelomov, Popov,
/// Terent'ev 1966), so it is nearer the slower the field, to a quarter at ω = 0.02 (γ = 0.4; bound invented by us), and no farther for
/// elliptical light.
#[test]
fn ionization_by_a_slow_pulse() {
    let rate = Rate::Model(QuasiStatic::on_plane(&ROUND, 0, 0).unwrap());
    let ratio = |frequency: f64, ellipticity: f64, peak: f64| {
        let mut light = sin2_pulse(frequency, peak, 2.0);
        light.ellipticity = ellipticity;
        let light = field(light);
        let (plan, state) = full(&light, 256, Absorber::Smooth { width: 20.0 }, 0.12);
        let round = RoundStates::in_box(&ROUND, &Grid::square(256, 0.4)).unwrap();
        let populations = plan.round_populations(&state, &round, &mut plan.make_workspace());
        let full = state.series.norm[0] - populations.iter().map(|(_, p)| p).sum::<f64>();
        let times = plan.schedule().times();
        let model = rate.ionization(&light, &times)[times.len() - 1];
        println!("ω = {frequency}, ellipticity {ellipticity}: {model:e} against {full:e}: {}", model / full);
        model / full
    };
    let (fast, slow, bent) = (ratio(0.03, 0.0, 0.05), ratio(0.02, 0.0, 0.05), ratio(0.03, 0.5, 0.055));
    assert!((slow - 1.0).abs() < 0.25 && (slow - 1.0).abs() < (fast - 1.0).abs(), "{slow} and {fast}");
    assert!((bent / fast - 1.0).abs() < 0.1, "{bent} and {fast}");
}

/// The atom's own recombination dipole brings the plateau closer in shape to that of the full solution, as in one dimension: linear and
/// elliptical light.
#[test]
fn recombination_improves_the_shape_of_the_plateau() {
    let (photon, peak) = (0.08, 0.1);
    let ground_level = radial_level(&WELL, 0, 0).unwrap();
    let state = Round { m: 0, number: 0, ionization_energy: -ground_level.energy };
    for ellipticity in [0.0, 0.15] {
        let mut light = sin2_pulse(photon, peak, 3.0);
        light.ellipticity = ellipticity;
        let light = field(light);
        let grid = Grid::square(320, 0.4);
        let label = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };
        let atom = Arc::new(Atom::on_plane(&WELL, &grid, &[label]).unwrap());
        let numerics =
            Numerics { grid, absorber: Absorber::Smooth { width: 25.0 }, ..numerics(8, 0.4, 0.12) };
        let plan = Plan::new(&ground(WELL, light.clone()), atom, &numerics, Record::default()).unwrap();
        let run = run(&plan);
        let axis = EnergyAxis { step: photon / 16.0, points: 16 * 34 };
        let series = Stationary::on_plane(&WELL, state, &light, 2.6, 0.0).unwrap().dipole();
        let plane = harmonics(&series.along_x(), &series.schedule, Window::Hann, axis);
        let transitions = RoundTransitions::new(&WELL, 0, 0, 2.6).unwrap();
        let own = recombined_on_plane(&plane, &transitions);
        let full = harmonics(&acceleration(&plan, &run), plan.schedule(), Window::Hann, axis);
        let yields = |h: &Harmonics| -> Vec<f64> {
            h.spectrum()[8..].chunks(16).map(|c| c.iter().sum::<f64>()).collect()
        };
        let measured: Vec<Measured> =
            yields(&full).into_iter().map(|value| Measured { value, error: None }).collect();
        let [plane, own] = [&plane, &own].map(|h| compare_harmonics(&yields(h), &measured, 10..=24, None));
        println!("ellipticity {ellipticity}: Ip {}\n{plane:?}\n{own:?}", state.ionization_energy);
        assert!(own.shifted_distance.value < plane.shifted_distance.value);
    }
}
