//! The hot loop allocates nothing: counted, not claimed.
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
use tdse_core::simulate::{Atom, Plan, advance};

struct Counting;

thread_local! {
    /// Of this thread, so that tests may run beside each other.
    static CALLS: Cell<usize> = const { Cell::new(0) };
}

// SAFETY: every call goes to the system's allocator with the caller's own arguments.
unsafe impl GlobalAlloc for Counting {
    unsafe fn alloc(&self, layout: Layout) -> *mut u8 {
        CALLS.with(|calls| calls.set(calls.get() + 1));
        // SAFETY: as the caller promised.
        unsafe { System.alloc(layout) }
    }

    unsafe fn dealloc(&self, pointer: *mut u8, layout: Layout) {
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
            let plan = plan.mapping(&numerics, MapRange { largest: 1.5, padding: 2 });
            let (mut state, mut work) = (plan.initial_state(), plan.make_workspace());
            advance(&plan, &mut state, &mut work, 1);
            let before = CALLS.with(Cell::get);
            advance(&plan, &mut state, &mut work, 200);
            let during = CALLS.with(Cell::get) - before;
            assert_eq!(during, 0, "{gauge:?}, ε = {ellipticity}: {during} allocations in 200 steps");
        }
    }
}
