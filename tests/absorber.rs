//! Reflection of the absorber, measured with packets, against the published potential's exact reflection.

mod support;

use num_complex::Complex;
use support::*;
use tdse_core::absorber::{C, DELTA, reflection, shape, slowest_momentum};
use tdse_core::field::Field;
use tdse_core::grid::{Transform, good_length};
use tdse_core::problem::{Absorber, Numerics};
use tdse_core::simulate::run;

/// R(k/k_min) at δ = 0.2 of the potential of Manolopoulos, J. Chem. Phys. 117, 9552 (2002): an independent integration
/// handed to the project.
const PUBLISHED: [(f64, f64); 4] =
    [(0.5, 0.1429), (1.0, 0.005_837_048), (2.0, 4.271_642e-5), (5.0, 1.333_604e-7)];

/// y(x) of that paper, eq. (2.24): the oracle is checked with it.
fn published_shape(x: f64) -> f64 {
    let a = 1.0 - 16.0 / C.powi(3);
    let b = (1.0 - 17.0 / C.powi(3)) / (C * C);
    a * x - b * x.powi(3) + 4.0 / (C - x).powi(2) - 4.0 / (C + x).powi(2)
}

/// Reflection at k = `ratio` k_min by the stationary equation, integrated here from the singular end outwards by
/// fourth-order Runge–Kutta in u = 2δ k_min (r - r1).
fn exact_reflection(ratio: f64, delta: f64, shape: impl Fn(f64) -> f64) -> f64 {
    // ψ'' = -[κ² + i y(u) g] ψ with κ = k/(2δ k_min), g = 1/(4δ²): from (k²/2 + iW)ψ = -ψ''/2.
    let (kappa, g) = (ratio / (2.0 * delta), 1.0 / (4.0 * delta * delta));
    let force = |u: f64| -(Complex::new(kappa * kappa, shape(u) * g));
    // Near the end y → 4/(c-u)², ψ ~ s^p with p² - p + 4ig = 0, Re p > 0.
    let p = 0.5 + (Complex::new(0.25, -4.0 * g)).sqrt();
    let mut u = C - 1e-3;
    let (mut psi, mut slope) = (Complex::new(1.0, 0.0), -p / (C - u));
    let steps = 400_000;
    let h = -u / f64::from(steps);
    // Steps in proportion to the distance from the end would do; uniform ones are fine enough and simpler.
    for _ in 0..steps {
        let f = |u: f64, y: [Complex<f64>; 2]| [y[1], force(u) * y[0]];
        let y = [psi, slope];
        let add = |y: [Complex<f64>; 2], d: [Complex<f64>; 2], h: f64| [y[0] + d[0] * h, y[1] + d[1] * h];
        let a = f(u, y);
        let b = f(u + 0.5 * h, add(y, a, 0.5 * h));
        let c = f(u + 0.5 * h, add(y, b, 0.5 * h));
        let d = f(u + h, add(y, c, h));
        psi += (a[0] + 2.0 * b[0] + 2.0 * c[0] + d[0]) * (h / 6.0);
        slope += (a[1] + 2.0 * b[1] + 2.0 * c[1] + d[1]) * (h / 6.0);
        u += h;
        let size = psi.norm() + slope.norm();
        psi /= size;
        slope /= size;
    }
    // e^{iκu} + r e^{-iκu} at u = 0.
    let i = Complex::new(0.0, kappa);
    ((i * psi - slope) / (i * psi + slope)).norm_sqr()
}

#[test]
fn the_oracle_has_the_published_reflection() {
    for (ratio, published) in PUBLISHED {
        let found = exact_reflection(ratio, 0.2, published_shape);
        assert!((found / published - 1.0).abs() < 2e-4, "k/k_min = {ratio}: {found:e} against {published:e}");
    }
}

fn momentum_density(numerics: &Numerics, psi: &[Complex<f64>]) -> Vec<f64> {
    let transform = Transform::new(numerics.grid.x.points);
    let mut copy = psi.to_vec();
    transform.forward(&mut copy, &mut transform.make_scratch());
    copy.iter().map(Complex::norm_sqr).collect()
}

#[test]
fn packets_are_reflected_as_the_stationary_equation_says() {
    let width = 20.0;
    let slowest = slowest_momentum(width);
    for ratio in [0.5, 0.7, 1.0, 1.5, 2.0, 3.5] {
        let momentum = ratio * slowest;
        // Narrow in momentum, so that its own backward part, e^{-8σ²k²}, stays far below the reflection.
        let sigma = 6.0f64.max(4.0 / momentum);
        let inner = 8.0 * sigma;
        let mut numerics = numerics(0, 0.2, 0.15 / ratio.max(1.0));
        numerics.grid.x.points = good_length(((5.0 * inner + 2.0 * width) / 0.2) as usize);
        numerics.absorber = Absorber::Smooth { width };
        let edge = 0.5 * numerics.grid.x.extent() - width;
        numerics.trailing_time = 3.0 * inner / momentum;
        let start: Vec<_> = positions(&numerics)
            .into_iter()
            .map(|x| x - edge + inner)
            .map(|u| Complex::cis(momentum * u) * (-(u / (2.0 * sigma)).powi(2)).exp())
            .collect();
        let points = numerics.grid.x.points;
        let atom = bare_atom(vec![0.0; points], vec![0.0; points]);
        let plan = plan_from(start.clone(), atom, &Field::default(), &numerics);
        let end = final_wave(&plan, &run(&plan));
        let (before, after) = (momentum_density(&numerics, &start), momentum_density(&numerics, &end));
        // The component nearest the packet's momentum; its mirror image is what came back.
        let m = (momentum / numerics.grid.x.momentum(1)).round() as usize;
        let (found, exact) = (
            after[points - m] / before[m],
            exact_reflection(numerics.grid.x.momentum(m) / slowest, DELTA, shape),
        );
        println!("k = {ratio} k_min: reflected {found:e}, exact {exact:e}, ratio {:.4}", found / exact);
        assert!((found / exact - 1.0).abs() < 0.05, "k = {ratio} k_min: {found:e} against {exact:e}");
    }
}

/// The envelope that numerics are chosen by is one: no momentum from k w = 10 on is reflected more.
#[test]
fn the_reflection_is_below_its_envelope() {
    let slowest = slowest_momentum(1.0);
    for product in [10.0, 12.0, 16.5, 26.0, 47.0] {
        let (found, bound) = (exact_reflection(product / slowest, DELTA, shape), reflection(product, 1.0));
        println!("k w = {product}: {found:.1e}, envelope {bound:.1e}");
        assert!(found < bound, "k w = {product}: {found:e} above {bound:e}");
    }
}
