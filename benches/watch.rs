//! What watching a run costs beyond running it: a ratio within one run.
//!
//! Every step is timed by itself; those that are watched are held against the median of the others. What the steps'
//! kernels sum on the way (norm, edge, top of the momenta) is in every step, and in the bench of the step.

#[path = "../tests/support/mod.rs"]
mod support;

use std::time::Instant;

use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::problem::Record;
use tdse_core::simulate::{Plan, advance};

const ROUNDS: usize = 15;

fn main() {
    let mut numerics = numerics(768, 0.4, 0.15);
    numerics.trailing_time = 50.0;
    let problem = ground(SQRT_2_ATOM, field(near_infrared()));
    let plan = Plan::new(&problem, atom(&SQRT_2_ATOM, &numerics, 1), &numerics, Record::default()).unwrap();
    let watched = plan.doubled_steps();
    let steps = plan.schedule().steps;
    let mut ratios: Vec<f64> = (0..ROUNDS)
        .map(|_| {
            let (mut state, mut work) = (plan.initial_state(), plan.make_workspace());
            let times: Vec<f64> = (0..steps)
                .map(|_| {
                    let start = Instant::now();
                    advance(&plan, &mut state, &mut work, 1);
                    start.elapsed().as_secs_f64()
                })
                .collect();
            assert_eq!(state.series.local_error.len(), watched.len());
            assert_eq!(state.series.free_energy.len(), 2);
            let mut sorted = times.clone();
            sorted.sort_by(f64::total_cmp);
            let usual = sorted[steps / 2];
            let free = (plan.schedule().field_end - plan.schedule().start) / plan.schedule().time_step;
            let looked = watched.iter().copied().chain([free.ceil() as usize]);
            looked.map(|n| times[n] - usual).sum::<f64>() / (usual * steps as f64)
        })
        .collect();
    ratios.sort_by(f64::total_cmp);
    println!(
        "watching / running = {:.4} (median of {ROUNDS}; {:.4} to {:.4}), {steps} steps, {} of them doubled",
        ratios[ROUNDS / 2],
        ratios[0],
        ratios[ROUNDS - 1],
        watched.len()
    );
}
