//! Cost of both ways to electron spectra beside the propagation they need (800 nm, 1e14 W/cm², 4 cycles, 300 energies).

#[path = "../tests/support/mod.rs"]
mod support;

use std::time::{Duration, Instant};

use support::{SQRT_2_ATOM, atom, field, final_wave, ground, near_infrared, numerics};
use tdse_core::problem::{Absorber, Record};
use tdse_core::simulate::{Plan, run};
use tdse_core::spectrum::{ContinuumAmplitude, EnergyAxis, momenta_of};
use tdse_core::stationary::ScatteringStates;

fn timed<T>(work: impl FnOnce() -> T) -> (T, Duration) {
    let start = Instant::now();
    let result = work();
    (result, start.elapsed())
}

fn main() {
    let axis = EnergyAxis::up_to(2.5, 2.5 / 300.0);
    let problem = ground(SQRT_2_ATOM, field(near_infrared()));
    let plan_of = |numerics: &_| {
        Plan::new(&problem, atom(&SQRT_2_ATOM, numerics, 1), numerics, Record::default()).unwrap()
    };

    let large = numerics(4608, 0.4, 0.15);
    let plan = plan_of(&large);
    let (state, propagation) = timed(|| run(&plan));
    let states = ScatteringStates::new(&SQRT_2_ATOM, large.grid.x).unwrap();
    let psi = final_wave(&plan, &state);
    let (_, projection) = timed(|| ContinuumAmplitude::of(&psi, &states, momenta_of(axis)));
    println!(
        "scattering states, {} points: propagation {propagation:.1?}, projection {projection:.1?}",
        psi.len()
    );

    let mut small = numerics(768, 0.4, 0.15);
    small.absorber = Absorber::Smooth { width: 60.0 };
    let plan = plan_of(&small);
    let (_, bare) = timed(|| run(&plan));
    let states = ScatteringStates::new(&SQRT_2_ATOM, small.grid.x).unwrap();
    let (plan, planning) = timed(|| plan.collecting(&small, &states, momenta_of(axis)));
    let (_, collecting) = timed(|| run(&plan));
    let interval = plan.collector().map_or(0, tdse_core::outgoing::Collector::interval);
    println!(
        "outgoing amplitude, {} points: propagation {bare:.1?}, planning {planning:.1?}, with a sample every {interval} \
         steps {collecting:.1?}",
        small.grid.len()
    );
}
