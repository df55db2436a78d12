//! In two dimensions every kind of inadequacy, provoked on purpose, is named by the watch, and a run with chosen numerics
//! raises no doubt. Scenarios are invented.

mod support;

use std::sync::Arc;

use support::{field, sin2_pulse, wish};
use tdse_core::choose::{AtomFacts, PinnedAbsorber, Pins, choose};
use tdse_core::field::Pulse;
use tdse_core::grid::Grid;
use tdse_core::potential::Potential;
use tdse_core::problem::{
    Absorber, Gauge, InitialState, Numerics, PlaneLabel, Problem, Record, Scheme, Symmetry,
};
use tdse_core::simulate::{Atom, Plan, State, advance};
use tdse_core::stationary::RoundStates;
use tdse_core::watch::{Kind, Watched, doubts, left_inside};

const ACCURACY: f64 = 1e-3;
const GROUND: PlaneLabel = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };

/// An electron that leaves well within the run, in a field of any polarization.
fn problem(ellipticity: f64) -> Problem {
    Problem {
        potential: Potential::GaussianWell { depth: 1.1, width: 1.5 },
        initial: InitialState::Single(0),
        field: field(Pulse { ellipticity, ..sin2_pulse(0.4, 0.1, 5.0) }),
    }
}

fn chosen() -> Numerics {
    let problem = problem(0.5);
    let facts = AtomFacts::on_plane(&problem.potential, &[GROUND]).unwrap();
    let pins = Pins {
        absorber: Some(PinnedAbsorber::RoundWidth(25.0)),
        trailing_time: Some(30.0),
        ..Pins::default()
    };
    let wish = wish(&problem, &facts, &pins, ACCURACY);
    let numerics = choose(&wish).numerics;
    println!("{numerics:?}");
    numerics
}

fn solved(problem: &Problem, numerics: &Numerics) -> (Plan, State) {
    let atom = Arc::new(Atom::on_plane(&problem.potential, &numerics.grid, &[GROUND]).unwrap());
    let plan = Plan::new(problem, atom, numerics, Record::default()).unwrap();
    let (mut state, mut work) = (plan.initial_state(), plan.make_workspace_on(2));
    advance(&plan, &mut state, &mut work, plan.schedule().steps);
    (plan, state)
}

/// Kinds of doubt that a run raises.
fn watched(numerics: &Numerics) -> Vec<Kind> {
    let (plan, state) = solved(&problem(0.5), numerics);
    let found =
        doubts(&Watched { state: &state, numerics, steps: plan.schedule().steps, accuracy: ACCURACY });
    println!("{:?} {:?} {:?}", state.series.local_error, state.series.free_energy, found);
    assert!(!state.series.local_error.is_empty() && state.series.free_energy.len() == 2);
    found.into_iter().map(|doubt| doubt.kind).collect()
}

#[test]
fn chosen_numerics_raise_no_doubt() {
    for (scheme, gauge) in [(Scheme::FourthOrder, Gauge::Length), (Scheme::FourthOrder, Gauge::Velocity)] {
        assert_eq!(watched(&Numerics { scheme, gauge, ..chosen() }), []);
    }
}

#[test]
fn a_coarse_grid_shows_at_the_top_of_its_momenta() {
    let mut numerics = chosen();
    numerics.grid = Grid::square(96, 2.0 * numerics.grid.x.spacing);
    assert!(watched(&numerics).contains(&Kind::MomentumTop));
}

#[test]
fn a_small_box_shows_at_its_edge() {
    let numerics = Numerics { absorber: Absorber::None, ..chosen() };
    assert!(watched(&numerics).contains(&Kind::BoxEdge));
}

/// Round, and on all sides.
#[test]
fn a_state_in_the_absorber_is_seen() {
    for absorber in [Absorber::Round { width: 6.0 }, Absorber::Smooth { width: 6.0 }] {
        let small = Numerics { grid: Grid::square(64, 0.25), time_step: 0.04, absorber, ..chosen() };
        assert!(watched(&small).contains(&Kind::StateInAbsorber));
    }
}

#[test]
fn a_long_step_shows_when_it_is_doubled() {
    for gauge in [Gauge::Length, Gauge::Velocity] {
        let numerics = Numerics { scheme: Scheme::Strang, gauge, ..chosen() };
        assert!(watched(&numerics).contains(&Kind::LocalError));
    }
}

/// A step of fifth order in its length loses a factor 32 when it is halved, on half the plane and on the whole.
#[test]
fn the_local_error_is_of_fifth_order() {
    let numerics = chosen();
    let mut errors = Vec::new();
    for ellipticity in [0.0, 1e-300] {
        let of = |factor: f64| {
            let numerics = Numerics { time_step: 0.1 * factor, trailing_time: 0.0, ..numerics.clone() };
            let (plan, state) = solved(&problem(ellipticity), &numerics);
            assert_eq!(plan.mirror().is_some(), ellipticity == 0.0);
            state.series.local_error[0]
        };
        let (coarse, fine) = (of(1.0), of(0.5));
        println!("{coarse:.3e} / {fine:.3e} = {}", coarse / fine);
        assert!((25.0..40.0).contains(&(coarse / fine)), "{coarse} / {fine}");
        errors.push(coarse);
    }
    assert!((errors[0] / errors[1] - 1.0).abs() < 1e-6, "{errors:?}");
}

/// Energy is kept without a field to what the splitting allows, and what the absorber takes is not held against it.
#[test]
fn an_energy_that_drifts_and_a_norm_that_grows_are_named() {
    let numerics = chosen();
    let (plan, mut state) = solved(&problem(0.5), &numerics);
    let steps = plan.schedule().steps;
    let kinds = |state: &State| -> Vec<Kind> {
        let found = doubts(&Watched { state, numerics: &numerics, steps, accuracy: ACCURACY });
        found.into_iter().map(|doubt| doubt.kind).collect()
    };
    state.series.norm[steps / 2] += 1e-6;
    assert_eq!(kinds(&state), [Kind::NormBalance]);
    state.series.norm.fill(1.0);
    state.series.free_energy[1] = state.series.free_energy[0] - 3e-3;
    assert_eq!(kinds(&state), [Kind::FreeEnergy]);
}

/// A map that is read before the electrons are out misses the rest; the electrons here are set free at 0.7 / bohr or faster.
#[test]
fn electrons_left_in_the_box_are_named() {
    let numerics = chosen();
    let bound = RoundStates::in_box(&problem(0.5).potential, &numerics.grid).unwrap();
    let kind = |trailing_time| {
        let (plan, state) = solved(&problem(0.5), &Numerics { trailing_time, ..numerics.clone() });
        let populations = plan.round_populations(&state, &bound, &mut plan.make_workspace());
        let held: f64 = populations.iter().map(|(_, p)| p).sum();
        println!("{trailing_time}: held {held:.6} of {:.6}", state.series.norm.last().unwrap());
        left_inside(&state, held).map(|doubt| doubt.kind)
    };
    assert_eq!(kind(0.0), Some(Kind::LeftInside));
    assert_eq!(kind(300.0), None);
}
