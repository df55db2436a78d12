//! The one-dimensional step with everything recorded, beside the bare transforms it contains.
//!
//! The ratio, not the time, is the result: both run in turn in one process.

#[path = "../tests/support/mod.rs"]
mod support;

use std::time::{Duration, Instant};

use criterion::{Criterion, criterion_group, criterion_main};
use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::grid::Transform;
use tdse_core::problem::{Gauge, Record};
use tdse_core::simulate::{Plan, advance};

/// Steps per round; both sides do the same number of transforms.
const STEPS: usize = 100;
/// Transform pairs between two rescalings.
const CHUNK: usize = 20;

fn ratios(c: &mut Criterion) {
    for gauge in [Gauge::Length, Gauge::Velocity] {
        for points in [1024, 2048, 4096, 8192, 16_384] {
            one_size(c, gauge, points);
        }
    }
}

fn one_size(c: &mut Criterion, gauge: Gauge, points: usize) {
    let mut numerics = numerics(points, 0.4, 0.125);
    numerics.gauge = gauge;
    numerics.trailing_time = 1e5;
    let problem = ground(SQRT_2_ATOM, field(near_infrared()));
    let plan = Plan::new(&problem, atom(&SQRT_2_ATOM, &numerics, 1), &numerics, Record::default()).unwrap();
    let mut state = plan.initial_state();
    let mut work = plan.make_workspace();
    let transform = Transform::new(points);
    let mut scratch = transform.make_scratch();
    let mut data = state.psi.clone();
    let mut step = || {
        if state.step + STEPS > plan.schedule().steps {
            state = plan.initial_state();
        }
        let start = Instant::now();
        advance(&plan, &mut state, &mut work, STEPS);
        start.elapsed()
    };
    let scale = (points as f64).powi(-(CHUNK as i32));
    let mut bare = || {
        let mut elapsed = Duration::ZERO;
        for _ in 0..2 * STEPS / CHUNK {
            let start = Instant::now();
            for _ in 0..CHUNK {
                transform.forward(&mut data, &mut scratch);
                transform.inverse(&mut data, &mut scratch);
            }
            elapsed += start.elapsed();
            // Keeps the numbers finite; outside the measured time.
            for d in &mut data {
                *d *= scale;
            }
        }
        elapsed
    };
    let mut pairs: Vec<f64> = (0..30).map(|_| step().as_secs_f64() / bare().as_secs_f64()).collect();
    pairs.sort_by(f64::total_cmp);
    println!(
        "{gauge:?} gauge, N = {points}: step / bare transform pairs = {:.3} (median of {}; {:.3} to {:.3})",
        pairs[pairs.len() / 2],
        pairs.len(),
        pairs[0],
        pairs[pairs.len() - 1]
    );
    c.bench_function(&format!("step/{gauge:?}/{points}"), |b| {
        b.iter_custom(|rounds| (0..rounds).map(|_| step()).sum::<Duration>() / STEPS as u32);
    });
}

mod group {
    #![allow(missing_docs, reason = "the macro makes a public function")]
    use super::{Criterion, Duration, criterion_group, ratios};
    criterion_group! {
        name = step;
        config = Criterion::default().sample_size(10).warm_up_time(Duration::from_millis(200)).measurement_time(Duration::from_millis(500));
        targets = ratios
    }
}
criterion_main!(group::step);
