//! Round atoms of two dimensions given by a table along the radius, against the formulas that the tables were filled from.

mod support;

use std::sync::Arc;

use support::{field, sin2_pulse, wish};
use tdse_core::choose::{AtomFacts, Pins, choose};
use tdse_core::cubic::Cubic;
use tdse_core::field::{Field, Pulse};
use tdse_core::grid::Grid;
use tdse_core::model::perturbation::TwoLevels;
use tdse_core::model::strong_field::PlaneDipole;
use tdse_core::model::tunnelling::QuasiStatic;
use tdse_core::potential::Potential;
use tdse_core::problem::{
    Absorber, Gauge, InitialState, Numerics, PlaneLabel, Problem, Record, Scheme, Symmetry,
};
use tdse_core::simulate::{Atom, Plan, advance};
use tdse_core::stationary::{RoundStates, RoundTransitions, level, lowest_plane_levels, radial_level};

const GROUND: PlaneLabel = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };
const WELL: Potential = Potential::GaussianWell { depth: 1.5, width: 2.0 };

/// Values of `formula` every `step` bohr from the centre to `last`.
fn table(formula: &Potential, step: f64, last: f64) -> Potential {
    let radii: Vec<f64> = (0..=(last / step).round() as usize).map(|i| i as f64 * step).collect();
    let values = radii.iter().map(|r| formula.value(*r)).collect();
    Potential::Sampled(Arc::new(Cubic::even(radii, values)))
}

fn light() -> Field {
    field(Pulse { ellipticity: 0.5, ..sin2_pulse(0.3, 0.1, 2.0) })
}

/// Both components of the force on the electron at every step of a short elliptical pulse.
fn force(potential: &Potential, spacing: f64) -> Vec<f64> {
    let numerics = Numerics {
        grid: Grid::square((48.0 / spacing / 8.0).round() as usize * 8, spacing),
        time_step: 0.1,
        scheme: Scheme::FourthOrder,
        gauge: Gauge::Length,
        absorber: Absorber::Round { width: 8.0 },
        trailing_time: 0.0,
    };
    let atom = Arc::new(Atom::on_plane(potential, &numerics.grid, &[GROUND]).unwrap());
    let problem = Problem { potential: potential.clone(), initial: InitialState::Single(0), field: light() };
    let plan = Plan::new(&problem, atom, &numerics, Record { populations: 1 }).unwrap();
    let (mut state, mut work) = (plan.initial_state(), plan.make_workspace_on(1));
    advance(&plan, &mut state, &mut work, plan.schedule().steps);
    state.series.gradient.iter().flatten().copied().collect()
}

/// Largest difference over the largest value.
fn apart(a: &[f64], b: &[f64]) -> f64 {
    let largest = b.iter().fold(0.0f64, |most, v| most.max(v.abs()));
    a.iter().zip(b).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max) / largest
}

/// The levels of the formula, to what a cubic spline leaves: every bound one, also where the points are much closer than the well
/// is wide and the centrifugal force keeps the electron away.
#[test]
fn a_table_has_the_levels_of_its_formula() {
    let wide = Potential::GaussianWell { depth: 2.0, width: 4.0 };
    for (formula, step, bound) in [(WELL, 0.1, 3e-8), (WELL, 0.05, 2e-9), (wide, 0.05, 2e-9)] {
        let last = 500.0;
        let table = table(&formula, step, last);
        let expected = lowest_plane_levels(&formula, 60).unwrap();
        let found = lowest_plane_levels(&table, 60).unwrap();
        assert_eq!(found.len(), expected.len());
        let mut largest = 0.0f64;
        for ((label, level), (same, exact)) in found.iter().zip(&expected) {
            assert_eq!(label, same);
            largest = largest.max((level.energy - exact.energy).abs());
            assert!(level.reach <= last, "{level:?} is read beyond the table");
        }
        println!("{} levels of {formula:?} every {step} bohr: off {largest:.1e}", found.len());
        assert!(largest < bound, "{largest}");
        let grid = Grid::square(160, 0.5);
        let count = |potential| RoundStates::in_box(potential, &grid).unwrap().count();
        assert_eq!(count(&table), count(&formula));
    }
}

/// Nothing is taken from beyond a table: one that ends where the level has all but vanished has that level, and what is read of the
/// level there is not from further out.
#[test]
fn a_short_table_is_read_to_its_end() {
    let last = 14.0;
    let level = radial_level(&table(&WELL, 0.05, last), 0, 0).unwrap();
    let exact = radial_level(&WELL, 0, 0).unwrap();
    assert!((level.energy - exact.energy).abs() < 1e-8, "{} against {}", level.energy, exact.energy);
    assert!(level.reach <= last && exact.reach > last, "{} and {}", level.reach, exact.reach);
}

/// Rows far apart make a spline that swings: below its points there is a well of its own, in a plane as along a line.
#[test]
fn a_spline_that_swings_below_its_points_has_its_levels() {
    let (radii, values) = ([0.0, 2.0, 4.0, 8.0, 60.0], [-1.1, -0.2, -0.02, 0.0, 0.0]);
    let round = Cubic::even(radii.to_vec(), values.to_vec());
    let swing = (0..600).map(|i| round.value(0.1 * f64::from(i))).fold(0.0, f64::min);
    let lowest = radial_level(&Potential::Sampled(Arc::new(round)), 0, 0).unwrap().energy;
    println!("down to {swing:.3}, lowest level {lowest:.3}");
    assert!(swing < -1.2 && (swing..-1.1).contains(&lowest), "{lowest}");
    let mirrored = |all: &[f64], sign: f64| {
        all[1..].iter().rev().map(|v| sign * v).chain(all.iter().copied()).collect::<Vec<f64>>()
    };
    let line = Cubic::new(mirrored(&radii, -1.0), mirrored(&values, 1.0));
    let lowest = level(&Potential::Sampled(Arc::new(line)), 0).unwrap().energy;
    assert!((swing..-1.1).contains(&lowest), "{lowest}");
}

/// Ehrenfest's force in an elliptical pulse, at a spacing that is a multiple of the table's and at one that is none, and at the one
/// chosen for the table. The bounds are ours: the spline's own error falls with the fourth power of its step.
#[test]
fn a_table_drives_its_electron_as_its_formula_does() {
    let soft = Potential::SoftCoulomb { charge: 1.0, softening: 0.8 };
    for (formula, bounds) in [(WELL, [2e-6, 4e-7]), (soft, [5e-5, 5e-6])] {
        for spacing in [0.3, 0.4] {
            let exact = force(&formula, spacing);
            for (step, bound) in [0.1, 0.05].into_iter().zip(bounds) {
                let off = apart(&force(&table(&formula, step, 40.0), spacing), &exact);
                println!("{formula:?} every {step} bohr on {spacing} bohr: off {off:.1e}");
                assert!(off < bound, "{off}");
            }
        }
        let accuracy = 1e-3;
        let table = table(&formula, 0.1, 2000.0);
        let spacing = chosen(&table, accuracy);
        let off = apart(&force(&table, spacing), &force(&formula, 0.5 * spacing));
        println!("chosen {spacing} bohr, for the formula {}: off {off:.1e}", chosen(&formula, accuracy));
        assert!(off < accuracy, "{off}");
    }
}

fn chosen(potential: &Potential, accuracy: f64) -> f64 {
    let facts = AtomFacts::on_plane(potential, &[GROUND]).unwrap();
    let problem = Problem { potential: potential.clone(), initial: InitialState::Single(0), field: light() };
    let pins = Pins::default();
    let choice = choose(&wish(&problem, &facts, &pins, accuracy));
    assert_eq!(choice.findings, Vec::new());
    choice.numerics.grid.x.spacing
}

/// The models of the plane are tested elsewhere; here a table gives them what its formula gives, but for the norm of radial
/// functions, which on the formula's coarser mesh is off by 1e-4 (measured).
#[test]
fn the_models_take_a_table() {
    let table = table(&WELL, 0.05, 80.0);
    let both = [&WELL, &table];
    let alike = |what: &str, [exact, found]: [f64; 2], bound: f64| {
        println!("{what}: {exact:.9} and {found:.9}");
        assert!((found / exact - 1.0).abs() < bound, "{what}: {exact} and {found}");
    };
    let rates = both.map(|potential| QuasiStatic::on_plane(potential, 0, 0).unwrap());
    alike("asymptotic coefficient", rates.each_ref().map(|r| r.asymptotic.coefficient[0]), 2e-4);
    alike("quasi-static rate", rates.each_ref().map(|r| r.rate(0.1)), 4e-4);
    let levels = both.map(|potential| TwoLevels::on_plane(potential, [0, 0]).unwrap());
    alike("dipole of two levels", levels.each_ref().map(|l| l.dipole), 1e-4);
    let photon = both.map(|potential| RoundTransitions::new(potential, 0, 0, 2.0).unwrap());
    alike("cross-section", photon.each_ref().map(|t| t.at(0.9).cross_section(1.357)), 3e-4);
    alike("phase", photon.each_ref().map(|t| t.at(0.9).phases[1]), 1e-6);
    let bare = both.map(|potential| PlaneDipole::new(potential, 0, 0, 3.0).unwrap());
    alike("strong-field dipole", bare.each_ref().map(|d| d.at([0.7, 0.3])[0].im), 2e-4);
}
