//! The hot loop allocates nothing, and a run takes the memory that was foretold: counted, not claimed.
#![expect(
    unsafe_code,
    reason = "a global allocator that counts can only be written so; it forwards every call unchanged"
)]

mod support;

use std::alloc::{GlobalAlloc, Layout, System};
use std::cell::Cell;
use std::sync::Arc;

use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::field::Pulse;
use tdse_core::grid::Grid;
use tdse_core::outgoing::MapRange;
use tdse_core::potential::Potential;
use tdse_core::problem::{Absorber, Gauge, Numerics, PlaneLabel, Record, Scheme, Symmetry};
use tdse_core::simulate::{Atom, Held, Load, Plan, advance};

struct Counting;

thread_local! {
    /// Of this thread, so that tests may run beside each other.
    static CALLS: Cell<usize> = const { Cell::new(0) };
    /// Bytes allocated and not yet freed.
    static LIVE: Cell<usize> = const { Cell::new(0) };
}

// SAFETY: every call goes to the system's allocator with the caller's own arguments.
unsafe impl GlobalAlloc for Counting {
    unsafe fn alloc(&self, layout: Layout) -> *mut u8 {
        CALLS.with(|calls| calls.set(calls.get() + 1));
        LIVE.with(|live| live.set(live.get().wrapping_add(layout.size())));
        // SAFETY: as the caller promised.
        unsafe { System.alloc(layout) }
    }

    unsafe fn dealloc(&self, pointer: *mut u8, layout: Layout) {
        LIVE.with(|live| live.set(live.get().wrapping_sub(layout.size())));
        // SAFETY: as the caller promised.
        unsafe { System.dealloc(pointer, layout) }
    }
}

#[global_allocator]
static ALLOCATOR: Counting = Counting;

#[test]
fn advancing_allocates_nothing() {
    for gauge in [Gauge::Length, Gauge::Velocity] {
        for scheme in [Scheme::FourthOrder, Scheme::Strang] {
            let mut numerics = numerics(768, 0.4, 0.1);
            (numerics.gauge, numerics.scheme) = (gauge, scheme);
            numerics.absorber = Absorber::Smooth { width: 60.0 };
            let problem = ground(SQRT_2_ATOM, field(near_infrared()));
            let shared = atom(&SQRT_2_ATOM, &numerics, 3);
            let plan = Plan::new(&problem, shared, &numerics, Record { populations: 3 }).unwrap();
            let (mut state, mut work) = (plan.initial_state(), plan.make_workspace());
            advance(&plan, &mut state, &mut work, 1);
            let before = CALLS.with(Cell::get);
            advance(&plan, &mut state, &mut work, 1000);
            let during = CALLS.with(Cell::get) - before;
            assert_eq!(during, 0, "{gauge:?}, {scheme:?}: {during} allocations in 1000 steps");
            assert_eq!(state.step, 1001);
        }
    }
}

/// On one thread; more threads share rayon's own queues.
#[test]
fn advancing_in_the_plane_allocates_nothing() {
    let well = Potential::GaussianWell { depth: 1.4, width: 1.0 };
    let label = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };
    for gauge in [Gauge::Length, Gauge::Velocity] {
        for ellipticity in [0.0, 0.5] {
            let numerics = Numerics {
                grid: Grid::square(64, 0.6),
                gauge,
                absorber: Absorber::Round { width: 8.0 },
                ..numerics(64, 0.6, 0.1)
            };
            let light = field(Pulse { ellipticity, ..near_infrared() });
            let problem = ground(well.clone(), light);
            let shared = Arc::new(Atom::on_plane(&well, &numerics.grid, &[label]).unwrap());
            let plan = Plan::new(&problem, shared, &numerics, Record { populations: 1 }).unwrap();
            let plan = plan.mapping(&numerics, MapRange { largest: 1.5, spacing: 0.08 });
            let (mut state, mut work) = (plan.initial_state(), plan.make_workspace());
            advance(&plan, &mut state, &mut work, 1);
            let before = CALLS.with(Cell::get);
            advance(&plan, &mut state, &mut work, 200);
            let during = CALLS.with(Cell::get) - before;
            assert_eq!(during, 0, "{gauge:?}, ε = {ellipticity}: {during} allocations in 200 steps");
        }
    }
}

/// What `make` leaves allocated, bytes.
fn bytes_of<T>(make: impl FnOnce() -> T) -> (T, usize) {
    let before = LIVE.with(Cell::get);
    let made = make();
    (made, LIVE.with(Cell::get).wrapping_sub(before))
}

/// Nearly: `found` has what was foretold and at most `more` bytes beside it.
fn foretold(what: &str, found: usize, said: usize, more: usize) {
    println!("{what}: {found} bytes, foretold {said}");
    assert!(found >= said && found <= said + more, "{what}: {found} bytes, foretold {said}");
}

/// What transforms keep beyond one number per point and direction, and the boxes things lie in.
const BESIDE: usize = 10_000;

#[test]
fn memory_in_the_plane_is_what_was_foretold() {
    let well = Potential::GaussianWell { depth: 3.0, width: 2.0 };
    let label = |m, number| PlaneLabel { symmetry: Symmetry::Angular(m), number };
    for gauge in [Gauge::Length, Gauge::Velocity] {
        for scheme in [Scheme::FourthOrder, Scheme::Strang] {
            let upright = std::f64::consts::FRAC_PI_2;
            for (ellipticity, angle, labels) in [
                (0.0, 0.0, vec![label(0, 0)]),
                (0.0, upright, vec![label(0, 0)]),
                (0.5, 0.0, vec![label(0, 0), label(1, 0), label(-1, 0)]),
            ] {
                let light = Pulse { ellipticity, angle, ..near_infrared() };
                one_plane(&well, &labels, light, (gauge, scheme));
            }
        }
    }
}

fn one_plane(potential: &Potential, labels: &[PlaneLabel], light: Pulse, (gauge, scheme): (Gauge, Scheme)) {
    let absorber = Absorber::Round { width: 20.0 };
    let numerics =
        Numerics { grid: Grid::square(320, 0.4), gauge, scheme, absorber, ..numerics(64, 0.4, 0.1) };
    let ellipticity = light.ellipticity;
    let problem = ground(potential.clone(), field(light));
    let range = MapRange { largest: 3.0, spacing: 0.025 };
    let record = Record { populations: labels.len() };
    let load = Load {
        field: &problem.field,
        numerics: &numerics,
        states: Held::Plane(labels),
        initial: &problem.initial,
        record,
        map: Some(range),
        threads: 2,
    };
    let said = load.memory();
    println!("{gauge:?}, {scheme:?}, ε = {ellipticity}: {said:?}");
    let (plan, planned) = bytes_of(|| {
        let atom = Arc::new(Atom::on_plane(potential, &numerics.grid, labels).unwrap());
        Plan::new(&problem, atom, &numerics, record).unwrap().mapping(&numerics, range)
    });
    assert_eq!(plan.mirror().is_some(), ellipticity == 0.0);
    foretold("plan", planned, said.tables + said.states, BESIDE);
    let (state, held) = bytes_of(|| plan.initial_state());
    let map = 16 * state.outgoing.as_ref().unwrap().map.len();
    foretold("state", held, said.wave_function + said.series + map, 0);
    let (work, scratch) = bytes_of(|| plan.make_workspace_on(2));
    foretold("workspace", scratch, said.workspace + said.map - map, BESIDE);
    drop(work);
    // Beside tables and states: two and a half wave functions of the grid, four with the map.
    let one = 16 * numerics.grid.len();
    let without = said.wave_function + said.workspace;
    assert!(2 * without <= 5 * one, "{without} bytes without the map, a wave function has {one}");
    assert!(without + said.map <= 4 * one, "{} bytes with the map", without + said.map);
}

#[test]
fn memory_on_a_line_is_what_was_foretold() {
    let numerics = Numerics { absorber: Absorber::Smooth { width: 60.0 }, ..numerics(3072, 0.2, 0.05) };
    let problem = ground(SQRT_2_ATOM, field(near_infrared()));
    let record = Record { populations: 3 };
    let shared = atom(&SQRT_2_ATOM, &numerics, 3);
    let load = Load {
        field: &problem.field,
        numerics: &numerics,
        states: Held::Line(shared.states()),
        initial: &problem.initial,
        record,
        map: None,
        threads: 1,
    };
    let said = load.memory();
    let (plan, planned) =
        bytes_of(|| Plan::new(&problem, Arc::new((*shared).clone()), &numerics, record).unwrap());
    foretold("plan", planned, said.tables + said.states, BESIDE);
    let (_state, held) = bytes_of(|| plan.initial_state());
    foretold("state", held, said.wave_function + said.series, 0);
    let (_work, scratch) = bytes_of(|| plan.make_workspace());
    foretold("workspace", scratch, said.workspace, BESIDE);
}
