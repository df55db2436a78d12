//! Choosing numerics takes well under a millisecond a point; printed for every potential, worst field of the twenty.

#[path = "../tests/twenty/cases.rs"]
mod cases;

use std::time::Instant;

use tdse_core::choose::{AtomFacts, Pins, Wish, choose};

const ROUNDS: u32 = 200;

fn main() {
    let mut slowest = 0.0f64;
    for case in cases::all() {
        let problem = &case.problem;
        let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
        let pins = Pins::default();
        let start = Instant::now();
        for _ in 0..ROUNDS {
            let wish = Wish {
                problem,
                facts: &facts,
                pins: &pins,
                accuracy: 1e-4,
                populations: 2,
                max_photon: None,
            };
            std::hint::black_box(choose(&wish));
        }
        let milliseconds = 1e3 * start.elapsed().as_secs_f64() / f64::from(ROUNDS);
        println!("{:2} {} ({:.2} hartree): {milliseconds:.4} ms", case.number, case.name, case.binding);
        slowest = slowest.max(milliseconds);
    }
    println!("slowest of all: {slowest:.4} ms a point (mean of {ROUNDS})");
}
