//! Two cores over one: what a scan gains, beside what two copies of the bare transform loop gain, in one run.
//!
//! The machine's own limits (shared caches, clocks, noise) are in both; the ratio of the gains is the result.

#[path = "../tests/support/mod.rs"]
mod support;

use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Instant;

use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::field::Pulse;
use tdse_core::grid::Transform;
use tdse_core::problem::Record;
use tdse_core::simulate::{Plan, run};

/// Points of the scan, and pieces of the bare loop.
const PIECES: usize = 8;
/// Many and short, because whoever else is on the machine comes and goes.
const ROUNDS: usize = 31;

/// Seconds that `threads` threads take for all pieces, each taken by whoever is free.
fn seconds(threads: usize, piece: &(impl Fn(usize) + Sync)) -> f64 {
    let next = AtomicUsize::new(0);
    let start = Instant::now();
    std::thread::scope(|scope| {
        for _ in 0..threads {
            scope.spawn(|| {
                while let Some(i) = Some(next.fetch_add(1, Ordering::Relaxed)).filter(|i| *i < PIECES) {
                    piece(i);
                }
            });
        }
    });
    start.elapsed().as_secs_f64()
}

fn main() {
    let numerics = numerics(768, 0.4, 0.15);
    let shared = atom(&SQRT_2_ATOM, &numerics, 1);
    let point = |i: usize| {
        let phase = std::f64::consts::TAU * i as f64 / PIECES as f64;
        let problem = ground(SQRT_2_ATOM, field(Pulse { phase, ..near_infrared() }));
        let plan = Plan::new(&problem, Arc::clone(&shared), &numerics, Record::default()).unwrap();
        std::hint::black_box(run(&plan).series.norm.last().copied());
    };
    let transform = Transform::new(768);
    let bare = |_: usize| {
        let mut data = shared.wave_function(&tdse_core::problem::InitialState::Single(0));
        let mut scratch = transform.make_scratch();
        for _ in 0..600 {
            for _ in 0..20 {
                transform.forward(&mut data, &mut scratch);
                transform.inverse(&mut data, &mut scratch);
            }
            for d in &mut data {
                *d *= 768f64.powi(-20);
            }
        }
        std::hint::black_box(data[0]);
    };
    let mut gains: Vec<[f64; 4]> = (0..ROUNDS)
        .map(|_| [seconds(1, &point), seconds(2, &point), seconds(1, &bare), seconds(2, &bare)])
        .collect();
    let ratio = |t: &[f64; 4]| (t[0] / t[1]) / (t[2] / t[3]);
    gains.sort_by(|a, b| ratio(a).total_cmp(&ratio(b)));
    let quartile = |quarter: usize| ratio(&gains[quarter * (ROUNDS - 1) / 4]);
    println!(
        "two cores over one, points beside bare transforms: ratio of gains {:.3}, median of {ROUNDS} rounds (quartiles {:.3} \
         and {:.3})",
        quartile(2),
        quartile(1),
        quartile(3)
    );
    let best = |i: usize| gains.iter().map(|t| t[i]).fold(f64::INFINITY, f64::min);
    let [points, loops] = [best(0) / best(1), best(2) / best(3)];
    println!(
        "of the shortest times: points {points:.3}, bare transforms {loops:.3}, ratio {:.3}",
        points / loops
    );
}
