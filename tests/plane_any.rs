//! Potentials of a plane that are not round, given by their values on the grid: states by parity, runs, and the watch over them.
//! Everything is exact: separable problems are products of lines.

mod support;

use std::sync::Arc;

use num_complex::Complex;
use support::{deviation, field, final_wave, plan_from, sin2_pulse};
use tdse_core::field::Pulse;
use tdse_core::grid::Grid;
use tdse_core::potential::{Potential, PotentialOnGrid, Rectangle};
use tdse_core::problem::{
    Absorber, Gauge, InitialState, Numerics, Parity, PlaneLabel, Record, Scheme, Symmetry, Term,
};
use tdse_core::simulate::{Atom, Plan, State, run};
use tdse_core::stationary::{StationaryError, bound_states, parity_states, plane_states};
use tdse_core::watch::{Watched, doubts};

type C = Complex<f64>;

fn label(x: Parity, y: Parity, number: usize) -> PlaneLabel {
    PlaneLabel { symmetry: Symmetry::Mirror([x, y]), number }
}

const GROUND: PlaneLabel = PlaneLabel { symmetry: Symmetry::Mirror([Parity::Even; 2]), number: 0 };

/// Values and gradient of a function of x and y with its derivatives.
fn on_grid(grid: &Grid, at: impl Fn(f64, f64) -> [f64; 3]) -> PotentialOnGrid {
    let points = grid.y_positions().flat_map(|y| grid.x.positions().map(move |x| (x, y)));
    let all: Vec<[f64; 3]> = points.map(|(x, y)| at(x, y)).collect();
    let part = |i: usize| all.iter().map(|v| v[i]).collect();
    PotentialOnGrid { values: part(0), gradient: [part(1), part(2)] }
}

/// V(x, y) = a(x) + b(y).
fn sum_of(grid: &Grid, a: &Potential, b: &Potential) -> PotentialOnGrid {
    on_grid(grid, |x, y| {
        let ((va, sa), (vb, sb)) = (a.value_and_slope(x), b.value_and_slope(y));
        [va + vb, sa, sb]
    })
}

/// Ωx (nx + ½) + Ωy (ny + ½): textbook.
#[test]
fn levels_of_the_anisotropic_oscillator() {
    use Parity::{Even, Odd};
    let (fx, fy) = (0.5, 0.37);
    let grid = Grid { x: Grid::line(72, 0.35).x, y: Some(Grid::line(80, 0.4).x) };
    let [x, y] = [fx, fy].map(|frequency| Potential::Harmonic { frequency });
    let potential = sum_of(&grid, &x, &y);
    for parity in [[Even, Even], [Odd, Even], [Even, Odd], [Odd, Odd]] {
        let first = parity.map(|p| f64::from(u8::from(p == Odd)));
        let mut levels: Vec<f64> = (0..8)
            .flat_map(|a| (0..8).map(move |b| (f64::from(a), f64::from(b))))
            .map(|(a, b)| fx * (first[0] + 2.0 * a + 0.5) + fy * (first[1] + 2.0 * b + 0.5))
            .collect();
        levels.sort_by(f64::total_cmp);
        let labels: Vec<PlaneLabel> = (0..4).map(|n| label(parity[0], parity[1], n)).collect();
        for (state, level) in parity_states(&potential, &grid, &labels).unwrap().iter().zip(levels) {
            println!("{:?}: {:.12} of {level:.12}", state.label, state.energy);
            assert!((state.energy - level).abs() < 1e-9, "{:?}: {} of {level}", state.label, state.energy);
            let norm = state.wave_function().iter().map(C::norm_sqr).sum::<f64>() * grid.cell();
            assert!((norm - 1.0).abs() < 1e-12, "norm {norm}");
        }
    }
}

/// A round well is no sum of two lines, and its states are known from shooting along the radius, those of a degenerate pair among
/// them.
#[test]
fn states_of_a_round_atom_are_those_found_along_the_radius() {
    use Parity::{Even, Odd};
    let well = Potential::GaussianWell { depth: 1.5, width: 2.0 };
    let grid = Grid::square(96, 0.4);
    let potential = PotentialOnGrid::sample(&well, &grid);
    let labels = [
        label(Even, Even, 0),
        label(Odd, Even, 0),
        label(Even, Odd, 0),
        label(Odd, Odd, 0),
        label(Even, Even, 1),
    ];
    let (found, expected) =
        (parity_states(&potential, &grid, &labels).unwrap(), plane_states(&well, &grid, &labels).unwrap());
    for (found, expected) in found.iter().zip(&expected) {
        let overlap = found.overlap(&expected.wave_function(), grid.cell()).re;
        println!("{:?}: {:.12}, overlap {overlap:.10}", found.label, found.energy);
        assert!((found.energy - expected.energy).abs() < 1e-10, "{} of {}", found.energy, expected.energy);
        assert!((overlap - 1.0).abs() < 1e-8, "overlap {overlap}");
    }
}

/// A table of the anisotropic oscillator, exact at its points, has its levels: a cubic reproduces a parabola.
#[test]
fn a_table_on_a_rectangle_has_the_levels_of_what_it_holds() {
    let side: Vec<f64> = (0..=60).map(|i| -15.0 + 0.5 * f64::from(i)).collect();
    let at = |x: f64, y: f64| 0.5 * ((0.5 * x).powi(2) + (0.37 * y).powi(2));
    let values: Vec<f64> = side.iter().flat_map(|y| side.iter().map(move |x| at(*x, *y))).collect();
    let grid = Grid::square(80, 0.37);
    let potential = Rectangle::new(&side, side.clone(), &values).on_grid(&grid).unwrap();
    let labels = [GROUND, label(Parity::Even, Parity::Odd, 0)];
    for (state, level) in parity_states(&potential, &grid, &labels).unwrap().iter().zip([0.435, 0.805]) {
        assert!((state.energy - level).abs() < 1e-9, "{:?}: {} of {level}", state.label, state.energy);
    }
}

#[test]
fn without_a_mirror_there_is_no_parity() {
    let grid = Grid::square(32, 0.5);
    let tilted = on_grid(&grid, |x, y| [0.5 * (x * x + y * y) + 0.1 * y, x, y + 0.1]);
    let refused = parity_states(&tilted, &grid, &[GROUND]).unwrap_err();
    assert!(matches!(refused, StationaryError::NoMirror { axis: "y", .. }), "{refused}");
    let turned = on_grid(&grid, |x, y| [0.5 * (x * x + y * y + x * y), x + 0.5 * y, y + 0.5 * x]);
    let refused = parity_states(&turned, &grid, &[GROUND]).unwrap_err();
    assert!(matches!(refused, StationaryError::NoMirror { axis: "x", .. }), "{refused}");
}

fn numerics(grid: Grid, absorber: Absorber) -> Numerics {
    Numerics {
        grid,
        time_step: 0.1,
        scheme: Scheme::FourthOrder,
        gauge: Gauge::Length,
        absorber,
        trailing_time: 10.0,
    }
}

fn forces(state: &State, d: usize) -> Vec<f64> {
    state.series.gradient.iter().map(|g| g[d]).collect()
}

/// Two short-range wells, one along each axis, that the field empties through absorbers along the edges: populations, forces and
/// the whole wave function are products of two lines, on the whole plane and on the half that a field along x leaves.
#[test]
fn a_run_in_a_potential_that_is_not_round_is_the_product_of_two_lines() {
    let wells = [1.0, 1.4].map(|width| Potential::PoschlTeller { lambda: 1.0, width });
    let lines = [Grid::line(112, 0.5), Grid::line(96, 0.55)];
    let grid = Grid { x: lines[0].x, y: Some(lines[1].x) };
    let absorber = Absorber::Smooth { width: 12.0 };
    let whole = numerics(grid, absorber);
    for angle in [0.6f64, 0.0] {
        let light = Pulse { angle, ..sin2_pulse(0.6, 0.12, 3.0) };
        let along = |d: usize, part: f64| {
            let line = numerics(lines[d], absorber);
            let states = bound_states(&wells[d], &lines[d], 1).unwrap();
            let start: Vec<C> = states.states[0].iter().map(|&p| p.into()).collect();
            let atom = Arc::new(Atom::new(&wells[d], &lines[d], 1).unwrap());
            let light = field(Pulse { angle: 0.0, peak_field: 0.12 * part, ..light });
            let plan = plan_from(start, atom, &light, &line);
            let state = run(&plan);
            (final_wave(&plan, &state), state)
        };
        let [x, y] = [along(0, angle.cos()), along(1, angle.sin())];
        let atom = Arc::new(Atom::of_values(sum_of(&grid, &wells[0], &wells[1]), &grid, &[GROUND]).unwrap());
        let start = atom.wave_function(&InitialState::Single(0));
        let record = Record { populations: 1 };
        let plan = Plan::from_wave_function(start, atom, &field(light), &whole, record).unwrap();
        assert_eq!(plan.mirror().is_some(), angle == 0.0, "half the plane where a mirror is kept");
        let state = run(&plan);
        let mut found = vec![C::default(); grid.len()];
        plan.wave_function(&state, &mut found);
        let expected: Vec<C> = y.0.iter().flat_map(|b| x.0.iter().map(move |a| a * b)).collect();
        // States along lines are positive towards +∞ too.
        let apart = found.iter().zip(&expected).map(|(a, b)| (a - b).norm()).fold(0.0, f64::max);
        let norms = x.1.series.norm.iter().zip(&y.1.series.norm);
        let norm: Vec<f64> = norms.clone().map(|(a, b)| a * b).collect();
        // A force along x acts on what is left along y as well.
        let force: Vec<f64> = forces(&x.1, 0).iter().zip(&y.1.series.norm).map(|(f, n)| f * n).collect();
        let (off, dx) = (deviation(&state.series.norm, &norm), deviation(&forces(&state, 0), &force));
        let mut pairs = x.1.series.initial_population.iter().zip(&y.1.series.initial_population);
        let population = pairs.next_back().map(|(a, b)| a * b).unwrap();
        let left = *state.series.populations.last().unwrap();
        println!("angle {angle}: wave {apart:.1e}, norm {off:.1e}, force {dx:.1e}, ground state {left:.6}");
        assert!(apart < 1e-9 && off < 1e-10 && dx < 1e-9, "{apart} {off} {dx}");
        assert!(left < 0.99 && (left - population).abs() < 1e-9, "{left} of {population}");
        let watched =
            Watched { state: &state, numerics: &whole, steps: plan.schedule().steps, accuracy: 1e-2 };
        let found = doubts(&watched);
        assert!(found.is_empty(), "{found:?}");
    }
}

/// Two states of different parity beat at the distance of their levels.
#[test]
fn a_superposition_beats() {
    let [x, y] = [0.5, 0.37].map(|frequency| Potential::Harmonic { frequency });
    let grid = Grid::square(64, 0.45);
    let labels = [GROUND, label(Parity::Odd, Parity::Even, 0)];
    let atom = Arc::new(Atom::of_values(sum_of(&grid, &x, &y), &grid, &labels).unwrap());
    let terms = [0, 1].map(|number| Term { number, weight: 0.5, phase: 0.0 });
    let start = atom.wave_function(&InitialState::Superposition(terms.to_vec()));
    let light = field(sin2_pulse(0.3, 1e-9, 1.0));
    let plan = plan_from(start, atom, &light, &numerics(grid, Absorber::None));
    let state = run(&plan);
    // ⟨x⟩ = cos(Ωx t)/√(2Ωx), and the force is Ωx² times that: textbook.
    let times = plan.schedule().times();
    let expected: Vec<f64> =
        times.iter().map(|t| 0.25 * (0.5 * (t - times[0])).cos() / (2.0f64 * 0.5).sqrt()).collect();
    let off = deviation(&forces(&state, 0), &expected);
    println!("force off by {off:.1e}");
    assert!(off < 1e-6, "{off}");
}
