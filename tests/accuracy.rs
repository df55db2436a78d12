//! Numerics chosen for an accuracy reach it: the acceleration of a run with chosen numerics against one with every choice
//! at least twice finer and a box that nothing leaves. Scenarios are invented.

mod support;

use support::*;
use tdse_core::choose::{AtomFacts, PinnedAbsorber, Pins, choose};
use tdse_core::potential::Potential;
use tdse_core::problem::{Numerics, Problem};

fn scenarios() -> Vec<(&'static str, Problem)> {
    let soft = |softening| Potential::SoftCoulomb { charge: 1.0, softening };
    vec![
        ("800 nm, 1e14, a = 1.414", ground(soft(2f64.sqrt()), field(light(800.0, 1e14, 4.0)))),
        (
            "400 nm, 5e13, Poschl-Teller",
            ground(Potential::PoschlTeller { lambda: 1.0, width: 1.0 }, field(light(400.0, 5e13, 6.0))),
        ),
        ("1200 nm, 1e14, a = 1.19", ground(soft(1.189_274_8), field(light(1200.0, 1e14, 2.0)))),
        ("800 nm, 4e14, a = 0.695", ground(soft(0.694_948_2), field(light(800.0, 4e14, 2.0)))),
        ("60 nm, 1e13, a = 1", ground(soft(1.0), field(light(60.0, 1e13, 8.0)))),
        (
            "600 nm, 1e14, Gaussian well",
            ground(Potential::GaussianWell { depth: 1.0, width: 1.2 }, field(light(600.0, 1e14, 4.0))),
        ),
        (
            "400 nm, 8e13, screened",
            ground(
                Potential::Screened { charge: 1.0, softening: 1.0, screening_length: 8.0 },
                field(light(400.0, 8e13, 3.0)),
            ),
        ),
    ]
}

fn chosen(problem: &Problem, accuracy: f64, pins: &Pins) -> Numerics {
    let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
    choose(&wish(problem, &facts, pins, accuracy)).numerics
}

#[test]
fn chosen_numerics_reach_the_accuracy() {
    for (name, problem) in scenarios() {
        let numerics = chosen(&problem, 1e-4, &Pins::default());
        let (plan, state) = solve(&problem, &numerics);
        let found = acceleration(&plan, &state);
        let finer = Pins {
            spacing: Some(0.5 * numerics.grid.x.spacing),
            time_step: Some(0.5 * numerics.time_step),
            absorber: Some(PinnedAbsorber::None),
            ..Pins::default()
        };
        let finer_numerics = chosen(&problem, 1e-4, &finer);
        let (plan, state) = solve(&problem, &finer_numerics);
        let exact: Vec<f64> = acceleration(&plan, &state).into_iter().step_by(2).collect();
        let n = found.len().min(exact.len());
        let square = |v: &mut dyn Iterator<Item = f64>| v.map(|x| x * x).sum::<f64>().sqrt();
        let error = square(&mut found[..n].iter().zip(&exact).map(|(a, b)| a - b))
            / square(&mut exact[..n].iter().copied());
        println!(
            "{name}: error {error:.1e}; spacing {}, {} points, step {}, absorber {}; reference {} points",
            numerics.grid.x.spacing,
            numerics.grid.x.points,
            numerics.time_step,
            numerics.absorber.width(),
            finer_numerics.grid.x.points
        );
        assert!(error < 1e-4, "{name}: {error:e}");
    }
}
