//! The strong-field spectrum beside the full run with the large box it needs no less for electrons (800 nm, 1e14 W/cm², 4 cycles): their
//! times take turns in one run, and the ratio is printed.

#[path = "../tests/support/mod.rs"]
mod support;

use std::time::{Duration, Instant};

use support::{SQRT_2_ATOM, atom, field, ground, near_infrared, numerics};
use tdse_core::grid::Grid;
use tdse_core::model::strong_field::{Ground, StrongField};
use tdse_core::problem::Record;
use tdse_core::simulate::{Plan, run};
use tdse_core::spectrum::{EnergyAxis, Window, harmonics};
use tdse_core::stationary::bound_states;

fn timed<T>(work: impl FnOnce() -> T) -> (T, Duration) {
    let start = Instant::now();
    let result = work();
    (result, start.elapsed())
}

fn main() {
    let light = field(near_infrared());
    let problem = ground(SQRT_2_ATOM, light.clone());
    let large = numerics(4608, 0.4, 0.15);
    let full_atom = atom(&SQRT_2_ATOM, &large, 1);
    let grid = Grid::line(512, 0.2);
    let bound = bound_states(&SQRT_2_ATOM, &grid, 1).unwrap();
    let ground = Ground { axis: grid.x, state: &bound.states[0], ionization_energy: -bound.energies[0] };
    let axis = EnergyAxis::up_to(2.0, 0.002);
    let mut best = [Duration::MAX; 2];
    for _ in 0..5 {
        let (_, full) = timed(|| {
            let plan = Plan::new(&problem, full_atom.clone(), &large, Record::default()).unwrap();
            run(&plan)
        });
        let (_, model) = timed(|| {
            let series = StrongField::new(&ground, &light, 2.0, 0.0).dipole();
            harmonics(&series.along_x(), &series.schedule, Window::Hann, axis)
        });
        best = [best[0].min(full), best[1].min(model)];
    }
    let ratio = best[1].as_secs_f64() / best[0].as_secs_f64();
    println!("full run {:.1?}, strong-field spectrum {:.1?}: ratio {ratio:.3}", best[0], best[1]);
}
