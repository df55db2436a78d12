//! The hot loop allocates nothing: counted, not claimed.
#![expect(
    unsafe_code,
    reason = "a global allocator that counts can only be written so; it forwards every call unchanged"
)]

mod support;

use std::alloc::{GlobalAlloc, Layout, System};
use std::sync::atomic::{AtomicUsize, Ordering};

use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::problem::{Absorber, Gauge, Record, Scheme};
use tdse_core::simulate::{Plan, advance};

struct Counting;

static CALLS: AtomicUsize = AtomicUsize::new(0);

// SAFETY: every call goes to the system's allocator with the caller's own arguments.
unsafe impl GlobalAlloc for Counting {
    unsafe fn alloc(&self, layout: Layout) -> *mut u8 {
        CALLS.fetch_add(1, Ordering::Relaxed);
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
            let before = CALLS.load(Ordering::Relaxed);
            advance(&plan, &mut state, &mut work, 1000);
            let during = CALLS.load(Ordering::Relaxed) - before;
            assert_eq!(during, 0, "{gauge:?}, {scheme:?}: {during} allocations in 1000 steps");
            assert_eq!(state.step, 1001);
        }
    }
}
