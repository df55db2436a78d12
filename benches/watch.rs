//! What watching a run costs beyond running it: a ratio within one run, in one and in two dimensions.
//!
//! Every step is timed by itself; those that are watched are held against the median of the others. What the steps'
//! kernels sum on the way (norm, edge, top of the momenta) is in every step, and in the bench of the step.

#[path = "../tests/support/mod.rs"]
mod support;

use std::sync::Arc;
use std::time::Instant;

use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::field::Pulse;
use tdse_core::grid::Grid;
use tdse_core::potential::Potential;
use tdse_core::problem::{Absorber, Numerics, PlaneLabel, Record, Symmetry};
use tdse_core::simulate::{Atom, Plan, advance};

fn main() {
    let mut line = numerics(768, 0.4, 0.15);
    line.trailing_time = 50.0;
    let problem = ground(SQRT_2_ATOM, field(near_infrared()));
    let plan = Plan::new(&problem, atom(&SQRT_2_ATOM, &line, 1), &line, Record::default()).unwrap();
    watched("line", &plan, 15);
    let soft = Potential::SoftCoulomb { charge: 1.0, softening: 0.8 };
    for ellipticity in [0.0, 0.5] {
        let numerics = Numerics {
            grid: Grid::square(256, 0.4),
            time_step: 0.1,
            absorber: Absorber::Round { width: 25.0 },
            ..line.clone()
        };
        let label = PlaneLabel { symmetry: Symmetry::Angular(0), number: 0 };
        let shared = Arc::new(Atom::on_plane(&soft, &numerics.grid, &[label]).unwrap());
        let problem = ground(soft.clone(), field(Pulse { ellipticity, ..near_infrared() }));
        let plan = Plan::new(&problem, shared, &numerics, Record::default()).unwrap();
        watched(if plan.mirror().is_some() { "half plane" } else { "plane" }, &plan, 1);
    }
}

/// Populations are taken in the same steps, and stay out of the ratio by the median.
fn watched(name: &str, plan: &Plan, rounds: usize) {
    let doubled = plan.doubled_steps();
    let steps = plan.schedule().steps;
    let mut ratios: Vec<f64> = (0..rounds)
        .map(|_| {
            let (mut state, mut work) = (plan.initial_state(), plan.make_workspace());
            let times: Vec<f64> = (0..steps)
                .map(|_| {
                    let start = Instant::now();
                    advance(plan, &mut state, &mut work, 1);
                    start.elapsed().as_secs_f64()
                })
                .collect();
            assert_eq!(state.series.local_error.len(), doubled.len());
            assert_eq!(state.series.free_energy.len(), 2);
            let mut sorted = times.clone();
            sorted.sort_by(f64::total_cmp);
            let usual = sorted[steps / 2];
            let free = (plan.schedule().field_end - plan.schedule().start) / plan.schedule().time_step;
            let looked = doubled.iter().copied().chain([free.ceil() as usize]);
            looked.map(|n| times[n] - usual).sum::<f64>() / (usual * steps as f64)
        })
        .collect();
    ratios.sort_by(f64::total_cmp);
    println!(
        "{name}: watching / running = {:.4} (median of {rounds}; {:.4} to {:.4}), {steps} steps, {} of them doubled",
        ratios[rounds / 2],
        ratios[0],
        ratios[rounds - 1],
        doubled.len()
    );
}
