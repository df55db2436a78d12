//! The ionization probability and the peaks of the electron spectrum are as good as the accuracy asked for. Laser scenarios are
//! invented.

mod support;

use std::f64::consts::PI;

use nalgebra::{DMatrix, SymmetricEigen};
use num_complex::Complex;
use support::*;
use tdse_core::choose::{
    AtomFacts, Electrons as CountedElectrons, Energies, PinnedAbsorber, Pins, Wish, choose,
    choose_for_electrons, fastest_electron,
};
use tdse_core::grid::Grid;
use tdse_core::potential::Potential;
use tdse_core::problem::{ElectronMethod, Numerics, Problem};
use tdse_core::simulate::Atom;
use tdse_core::spectrum::{ContinuumAmplitude, Electrons, EnergyAxis, momenta_of, without_bound};
use tdse_core::stationary::{BoundSeries, ScatteringStates, bound_states};

/// ∫₀^{nπ} (1 - cos u)/u du for n = 0 … `most`, by Simpson's rule.
fn cosine_integrals(most: usize) -> Vec<f64> {
    let f = |u: f64| if u == 0.0 { 0.0 } else { (1.0 - u.cos()) / u };
    let (parts, mut sums) = (64, vec![0.0]);
    let h = PI / f64::from(parts);
    for n in 0..most {
        let start = n as f64 * PI;
        let third = |i: i32| {
            let u = start + f64::from(i) * h;
            f(u) + 4.0 * f(u + 0.5 * h) + f(u + h)
        };
        sums.push(sums[n] + (0..parts).map(third).sum::<f64>() * h / 6.0);
    }
    sums
}

/// Energies below zero of an s electron at charge `z` in a sphere, and the populations that the 1s state of charge 1 has in
/// them; matrix elements of 1/r between sin(iπr/L) in closed form.
fn sudden(z: f64, radius: f64, size: usize) -> (Vec<f64>, Vec<f64>) {
    let cosines = cosine_integrals(2 * size);
    let h = DMatrix::from_fn(size, size, |a, b| {
        let (i, j) = (a + 1, b + 1);
        let kinetic = if i == j { 0.5 * (i as f64 * PI / radius).powi(2) } else { 0.0 };
        kinetic - z / radius * (cosines[i + j] - cosines[i.abs_diff(j)])
    });
    let eigen = SymmetricEigen::new(h);
    // ∫ 2 r e^{-r} √(2/L) sin(kr) dr, beyond the sphere too.
    let start: Vec<f64> = (1..=size)
        .map(|i| {
            let k = i as f64 * PI / radius;
            (2.0 / radius).sqrt() * 4.0 * k / (1.0 + k * k).powi(2)
        })
        .collect();
    let mut found: Vec<(f64, f64)> = (0..size)
        .map(|n| {
            let overlap: f64 = eigen.eigenvectors.column(n).iter().zip(&start).map(|(v, s)| v * s).sum();
            (eigen.eigenvalues[n], overlap * overlap)
        })
        .filter(|(energy, _)| *energy < 0.0)
        .collect();
    found.sort_by(|a, b| a.0.total_cmp(&b.0));
    found.into_iter().unzip()
}

/// Hydrogenic closed form: |⟨ns, Z = 2|1s, Z = 1⟩|² = 2⁹ n⁵ (n - 2)^{2n-4} / (n + 2)^{2n+4} (Migdal 1941, from memory; its
/// first values are the textbook's 0.702 and 1/4), summed to 20 000 and the rest, which falls as n⁻³, added.
fn tritium() -> f64 {
    let term = |n: i32| {
        let n_ = f64::from(n);
        let powers = if n == 2 {
            -8.0 * 4f64.ln()
        } else {
            f64::from(2 * n - 4) * (n_ - 2.0).abs().ln() - f64::from(2 * n + 4) * (n_ + 2.0).ln()
        };
        (powers + 512f64.ln() + 5.0 * n_.ln()).exp()
    };
    assert!((term(1) - (512.0f64 / 729.0)).abs() < 1e-12, "(16 √2/27)², textbook: {}", term(1));
    assert!((term(2) - 0.25).abs() < 1e-12, "textbook: {}", term(2));
    let most = 20_000;
    (1..=most).map(term).sum::<f64>() + 0.5 * term(most) * (f64::from(most) - 1.0)
}

/// Exact: the helium ion left by tritium's β decay is bound with 0.974 (sudden change of the charge, Migdal, J. Phys. USSR 4,
/// 449 (1941), from memory); a sphere holds a few of its levels.
#[test]
fn what_a_box_lacks_of_the_levels_is_added() {
    let exact = tritium();
    println!("exact {exact:.7}");
    for radius in [20.0, 25.0, 31.0] {
        let (energies, populations) = sudden(2.0, radius, 30 * radius as usize);
        let whole: f64 = populations.iter().sum();
        // One series: a line whose levels of the other parity are all empty.
        let series = BoundSeries::new(
            &Potential::SoftCoulomb { charge: 2.0, softening: 1.0 },
            &Grid::line(1000, radius / 500.0),
        );
        let found = series.bound(energies.last().copied(), &populations);
        println!(
            "{radius} bohr, {} levels: whole {:.1e}, with what lacks {:.1e}",
            energies.len(),
            whole - exact,
            found - exact
        );
        assert!(
            (found - exact).abs() < 0.1 * (whole - exact).abs().max(1e-4),
            "{radius}: {found} of {exact}"
        );
    }
}

fn chosen(problem: &Problem, accuracy: f64, pins: &Pins) -> Numerics {
    let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
    choose(&Wish { populations: 1, ..wish(problem, &facts, pins, accuracy) }).numerics
}

fn ionized(problem: &Problem, numerics: &Numerics) -> f64 {
    let (plan, state) = solve(problem, numerics);
    let atom = Atom::new(&problem.potential, &numerics.grid, 1).unwrap();
    let populations = plan.populations(&state, &atom.bound);
    1.0 - BoundSeries::new(&problem.potential, &numerics.grid)
        .bound_on_line(&atom.bound.energies, &populations)
}

/// Against spacing and step of the finest, and a box that nothing leaves, at least 1200 bohr to each side.
#[test]
fn ionization_is_as_accurate_as_asked() {
    let soft = |softening| Potential::SoftCoulomb { charge: 1.0, softening };
    let scenarios = [
        ("800 nm, 1e14, a = 1.414", ground(soft(2f64.sqrt()), field(light(800.0, 1e14, 6.0)))),
        ("1600 nm, 6e13, a = 1.414", ground(soft(2f64.sqrt()), field(light(1600.0, 6e13, 3.0)))),
        ("400 nm, 1.5e14, a = 1.414", ground(soft(2f64.sqrt()), field(light(400.0, 1.5e14, 12.0)))),
        ("800 nm, 3e14, a = 0.9", ground(soft(0.9), field(light(800.0, 3e14, 3.0)))),
        ("60 nm, 1e13, a = 1", ground(soft(1.0), field(light(60.0, 1e13, 8.0)))),
        (
            "600 nm, 1e14, Gaussian well",
            ground(Potential::GaussianWell { depth: 1.0, width: 1.2 }, field(light(600.0, 1e14, 4.0))),
        ),
    ];
    std::thread::scope(|scope| {
        for (name, problem) in &scenarios {
            scope.spawn(|| judge(name, problem));
        }
    });
}

fn judge(name: &str, problem: &Problem) {
    let finest = chosen(problem, 1e-6, &Pins::default());
    let pins = Pins {
        spacing: Some(finest.grid.x.spacing),
        time_step: Some(finest.time_step),
        extent: Some(2400.0),
        absorber: Some(PinnedAbsorber::None),
        ..Pins::default()
    };
    let exact = ionized(problem, &chosen(problem, 1e-6, &pins));
    for accuracy in [1e-3, 1e-4, 1e-6] {
        let numerics = chosen(problem, accuracy, &Pins::default());
        let error = (ionized(problem, &numerics) - exact).abs();
        println!(
            "{name}, {accuracy:.0e}: ionized {exact:.7}, error {error:.1e}; {} points of {} bohr, absorber {} bohr",
            numerics.grid.x.points,
            numerics.grid.x.spacing,
            numerics.absorber.width()
        );
        assert!(error < accuracy, "{name}, {accuracy:e}: {error:e}");
    }
}

/// Peaks above this part of the highest are held to the accuracy; what those above a hundredth of it do is printed.
const PEAKS: f64 = 1e-4;

fn electron_yield(problem: &Problem, numerics: &Numerics, axis: EnergyAxis) -> Vec<f64> {
    let (plan, state) = solve(problem, numerics);
    let line = numerics.grid.x;
    let bound = bound_states(&problem.potential, &numerics.grid, 1).unwrap();
    let mut psi = vec![Complex::default(); line.points];
    plan.wave_function(&state, &mut psi);
    let free = without_bound(&psi, &bound.states, line, 0.5 * line.extent());
    let continuum = ScatteringStates::new(&problem.potential, line).unwrap();
    Electrons::new(axis, &ContinuumAmplitude::of(&free, &continuum, momenta_of(axis))).total()
}

/// Every peak above the floor, against spacing and step at least twice finer and a box one and a half times as long.
#[test]
fn electron_peaks_are_as_accurate_as_asked() {
    let soft = |softening| Potential::SoftCoulomb { charge: 1.0, softening };
    let scenarios = [
        ("800 nm, 4e13, a = 1.63", ground(soft(1.63), field(light(800.0, 4e13, 4.0)))),
        ("400 nm, 1e14, a = 1.414", ground(soft(2f64.sqrt()), field(light(400.0, 1e14, 6.0)))),
        (
            "400 nm, 8e13, Gaussian well",
            ground(Potential::GaussianWell { depth: 0.8, width: 1.5 }, field(light(400.0, 8e13, 5.0))),
        ),
    ];
    std::thread::scope(|scope| {
        for (name, problem) in &scenarios {
            scope.spawn(|| judge_peaks(name, problem));
        }
    });
}

fn judge_peaks(name: &str, problem: &Problem) {
    let facts = AtomFacts::new(&problem.potential, &problem.initial).unwrap();
    let axis = EnergyAxis { points: 601, step: 0.002 };
    let energies = Energies { count: axis.points, largest: 1.2 };
    let electrons =
        CountedElectrons { energies, fastest: fastest_electron(problem, &facts).max(energies.largest) };
    let chosen = |accuracy, pins: &Pins| {
        let wish = wish(problem, &facts, pins, accuracy);
        choose_for_electrons(&wish, &electrons, ElectronMethod::ScatteringStates).numerics
    };
    let finest = chosen(1e-6, &Pins::default());
    let spacing = Some(0.5 * finest.grid.x.spacing);
    let extent = Some(1.5 * finest.grid.x.extent());
    let step = chosen(1e-6, &Pins { spacing, extent, ..Pins::default() }).time_step;
    let time_step = Some(step.min(0.5 * finest.time_step));
    let exact =
        electron_yield(problem, &chosen(1e-6, &Pins { spacing, extent, time_step, ..Pins::default() }), axis);
    let highest = exact.iter().copied().fold(0.0, f64::max);
    let is_peak = |i: &usize| {
        exact[*i] > exact[i - 1] && exact[*i] >= exact[i + 1] && exact[*i] > 0.01 * PEAKS * highest
    };
    let peaks: Vec<usize> = (1..axis.points - 1).filter(is_peak).collect();
    assert!(
        peaks.iter().filter(|i| exact[**i] > PEAKS * highest).count() >= 3,
        "{name}: {} peaks",
        peaks.len()
    );
    for accuracy in [1e-3, 1e-4, 1e-6] {
        let found = electron_yield(problem, &chosen(accuracy, &Pins::default()), axis);
        let worst = |floor: f64| {
            let those = peaks.iter().filter(|i| exact[**i] > floor * highest);
            those.map(|&i| (found[i] / exact[i] - 1.0).abs()).fold(0.0, f64::max)
        };
        let (all, worst) = (worst(0.0), worst(PEAKS));
        println!(
            "{name}, {accuracy:.0e}: worst peak {worst:.1e}, of those down to {:.0e} of the highest {all:.1e}",
            0.01 * PEAKS
        );
        assert!(worst < accuracy, "{name}, {accuracy:e}: {worst:e}");
    }
}
