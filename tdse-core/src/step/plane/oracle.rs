//! The step as its formulas say it, with a transform of the whole plane and an exponential at every point: the truth for
//! the fast one.

use super::*;
use crate::grid::Transform;
use crate::potential::Potential;
use crate::problem::Scheme;

const SPACING: [f64; 2] = [0.4, 0.5];

fn numerics(scheme: Scheme, gauge: Gauge, absorber: Absorber) -> Numerics {
    let axis = |points, spacing| Axis { points, spacing };
    Numerics {
        grid: Grid { x: axis(80, SPACING[0]), y: Some(axis(48, SPACING[1])) },
        time_step: 0.1,
        scheme,
        gauge,
        absorber,
        trailing_time: 0.0,
    }
}

const POTENTIAL: Potential = Potential::SoftCoulomb { charge: 1.0, softening: 1.2 };

const DRIVE: Drive = Drive {
    field: [0.07, -0.04],
    middle_field: [0.05, 0.03],
    potential_integral: [[0.011, -0.02], [0.007, 0.015]],
    square_integral: [0.002, 0.001],
};

const ALONG_X: Drive = Drive {
    field: [0.07, 0.0],
    middle_field: [0.05, 0.0],
    potential_integral: [[0.011, 0.0], [0.007, 0.0]],
    square_integral: [0.002, 0.001],
};

const ALONG_Y: Drive = Drive {
    field: [0.0, 0.07],
    middle_field: [0.0, 0.05],
    potential_integral: [[0.0, 0.011], [0.0, 0.007]],
    square_integral: [0.002, 0.001],
};

const MIRRORS: [Option<Mirror>; 5] = [
    None,
    Some(Mirror::Y(Parity::Even)),
    Some(Mirror::Y(Parity::Odd)),
    Some(Mirror::X(Parity::Even)),
    Some(Mirror::X(Parity::Odd)),
];

fn drive_for(mirror: Option<Mirror>) -> Drive {
    match mirror {
        None => DRIVE,
        Some(Mirror::Y(_)) => ALONG_X,
        Some(Mirror::X(_)) => ALONG_Y,
    }
}

/// A vector without its part across the mirror.
fn along(mirror: Option<Mirror>, [x, y]: [f64; 2]) -> [f64; 2] {
    match mirror {
        None => [x, y],
        Some(Mirror::Y(_)) => [x, 0.0],
        Some(Mirror::X(_)) => [0.0, y],
    }
}

/// `at` and its mirror image together.
fn mirrored(at: impl Fn(f64, f64) -> C, mirror: Option<Mirror>, [x, y]: [f64; 2]) -> C {
    match mirror {
        None => at(x, y),
        Some(Mirror::Y(parity)) => at(x, y) + parity.sign() * at(x, -y),
        Some(Mirror::X(parity)) => at(x, y) + parity.sign() * at(-x, y),
    }
}

fn points(grid: Grid) -> Vec<[f64; 2]> {
    grid.y_positions().flat_map(|y| grid.x.positions().map(move |x| [x, y])).collect()
}

/// Off centre; even, odd or neither in y.
fn packet(grid: Grid, mirror: Option<Mirror>) -> Vec<C> {
    let at = |x: f64, y: f64| {
        C::cis(0.7 * x - 0.4 * y) * (-0.1 * (x - 1.0).powi(2) - 0.15 * (y - 0.6).powi(2)).exp()
    };
    points(grid).into_iter().map(|place| mirrored(at, mirror, place)).collect()
}

/// Something at every momentum.
fn noise(grid: Grid, mirror: Option<Mirror>) -> Vec<C> {
    let at = |x: f64, y: f64| C::cis(37.3 * x * x + 51.7 * (y + 0.3).powi(2) + 11.0 * x * y);
    points(grid).into_iter().map(|place| mirrored(at, mirror, place)).collect()
}

fn transformed(psi: &[C], grid: Grid, direction: fn(&Transform, &mut [C], &mut [C])) -> Vec<C> {
    let (nx, ny) = (grid.x.points, grid.y.unwrap().points);
    let mut out = psi.to_vec();
    let (rows, columns) = (Transform::new(nx), Transform::new(ny));
    direction(&rows, &mut out, &mut rows.make_scratch());
    for x in 0..nx {
        let mut column: Vec<C> = (0..ny).map(|y| out[y * nx + x]).collect();
        direction(&columns, &mut column, &mut columns.make_scratch());
        (0..ny).for_each(|y| out[y * nx + x] = column[y]);
    }
    out
}

fn kinetic(psi: &mut Vec<C>, numerics: &Numerics, duration: f64, a: [f64; 2], a2: f64) {
    let grid = numerics.grid;
    let mut out = transformed(psi, grid, Transform::forward);
    let momenta: Vec<[f64; 2]> =
        grid.y.unwrap().momenta().flat_map(|ky| grid.x.momenta().map(move |kx| [kx, ky])).collect();
    let length = numerics.gauge == Gauge::Length;
    for (p, [kx, ky]) in out.iter_mut().zip(momenta) {
        let shift = if length { 0.0 } else { kx * a[0] + ky * a[1] + 0.5 * a2 };
        *p *= C::cis(-(0.5 * (kx * kx + ky * ky) * duration + shift)) / grid.len() as f64;
    }
    *psi = transformed(&out, grid, Transform::inverse);
}

fn local(psi: &mut [C], numerics: &Numerics, duration: f64, e: [f64; 2], correction: f64) {
    let e = if numerics.gauge == Gauge::Length { e } else { [0.0; 2] };
    for (p, [x, y]) in psi.iter_mut().zip(points(numerics.grid)) {
        let r = x.hypot(y);
        let (v, slope) = POTENTIAL.value_and_slope(r);
        let square = (slope * x / r + e[0]).powi(2) + (slope * y / r + e[1]).powi(2);
        *p *= C::cis(-duration * (v + x * e[0] + y * e[1] - correction * square));
    }
}

fn plain_step(numerics: &Numerics, drive: &Drive, psi: &mut Vec<C>) {
    let tau = numerics.time_step;
    let outer = if numerics.scheme == Scheme::FourthOrder { 1.0 / 6.0 } else { 0.5 };
    local(psi, numerics, 2.0 * outer * tau, drive.field, 0.0);
    for (p, w) in psi.iter_mut().zip(absorber::on_grid(&numerics.grid, numerics.absorber)) {
        *p *= (-tau * w).exp();
    }
    let [a, b] = drive.potential_integral;
    let [a2, b2] = drive.square_integral;
    match numerics.scheme {
        Scheme::FourthOrder => {
            kinetic(psi, numerics, 0.5 * tau, a, a2);
            local(psi, numerics, 2.0 / 3.0 * tau, drive.middle_field, tau * tau / 48.0);
            kinetic(psi, numerics, 0.5 * tau, b, b2);
        }
        Scheme::Strang => kinetic(psi, numerics, tau, [a[0] + b[0], a[1] + b[1]], a2 + b2),
    }
}

fn top(psi: &[C], grid: Grid) -> f64 {
    let transform = transformed(psi, grid, Transform::forward);
    let total: f64 = transform.iter().map(C::norm_sqr).sum();
    let norm: f64 = psi.iter().map(C::norm_sqr).sum::<f64>() * grid.cell();
    let part = |axis: Axis, of: &dyn Fn(usize) -> usize| {
        let limit = 0.75 * axis.largest_momentum() * (1.0 + 1e-9);
        let at_top = |i: &usize| {
            let k = axis.momentum(of(*i));
            // The upper quarter holds +3/4 of the largest momentum, and not -3/4.
            k > limit || k < -limit || (k - limit).abs() < 1e-6
        };
        (0..psi.len()).filter(at_top).map(|i| transform[i].norm_sqr()).sum::<f64>() / total * norm
    };
    let nx = grid.x.points;
    part(grid.x, &|i| i % nx).max(part(grid.y.unwrap(), &|i| i / nx))
}

#[test]
fn the_step_is_what_its_formulas_say_for_any_number_of_threads() {
    let absorbers = [Absorber::None, Absorber::Smooth { width: 5.0 }, Absorber::Round { width: 5.0 }];
    for scheme in [Scheme::FourthOrder, Scheme::Strang] {
        for gauge in [Gauge::Length, Gauge::Velocity] {
            for absorber in absorbers {
                for mirror in MIRRORS {
                    one_case(&numerics(scheme, gauge, absorber), mirror);
                }
            }
        }
    }
}

fn one_case(numerics: &Numerics, mirror: Option<Mirror>) {
    let case = format!("{:?}, {:?}, {:?}, {mirror:?}", numerics.scheme, numerics.gauge, numerics.absorber);
    let grid = numerics.grid;
    let plane = Plane::new(&PotentialOnGrid::sample(&POTENTIAL, &grid), numerics, mirror);
    let drive = drive_for(mirror);
    let before = packet(grid, mirror);
    let mut plain = before.clone();
    plain_step(numerics, &drive, &mut plain);
    let mut bits: Option<(Vec<C>, Moments)> = None;
    for threads in [1, 2, 3] {
        let mut fast = plane.folded(&before);
        let mut work = plane.make_workspace(threads);
        let nan = C::new(f64::NAN, f64::NAN);
        work.turned.fill(nan);
        work.lanes.iter_mut().for_each(|lane| lane.scratch.fill(nan));
        let moments = plane.step(&mut fast, &drive, &mut work);
        let found = bits.get_or_insert_with(|| (fast.clone(), moments));
        assert_eq!((&found.0, found.1), (&fast, moments), "{case}: {threads} threads, other bits");
    }
    let (kept, moments) = bits.unwrap();
    let mut whole = vec![C::default(); grid.len()];
    plane.unfold(&kept, &mut whole);
    for (a, b) in whole.iter().zip(&plain) {
        assert!((a - b).norm() < 1e-13, "{case}: {a} against {b}");
    }
    let places = points(grid);
    let sum = |f: &dyn Fn(f64, f64) -> f64| -> f64 {
        before.iter().zip(&places).map(|(p, [x, y])| p.norm_sqr() * f(*x, *y)).sum::<f64>() * grid.cell()
    };
    let slope = |x: f64, y: f64| POTENTIAL.value_and_slope(x.hypot(y)).1 / x.hypot(y);
    let close = |found: f64, expected: f64, what: &str| {
        assert!((found - expected).abs() < 1e-12, "{case}: {what} {found} against {expected}");
    };
    close(moments.norm, sum(&|_, _| 1.0), "norm");
    close(moments.gradient[0], sum(&|x, y| slope(x, y) * x), "force along x");
    close(moments.gradient[1], sum(&|x, y| slope(x, y) * y), "force along y");
    let half = [40.0 * SPACING[0], 24.0 * SPACING[1]];
    let at_edge = |x: f64, y: f64| match numerics.absorber {
        Absorber::None => x.abs() > half[0] * 7.0 / 8.0 || y.abs() > half[1] * 7.0 / 8.0,
        Absorber::Smooth { width } => x.abs() > half[0] - width || y.abs() > half[1] - width,
        Absorber::Round { width } => x.hypot(y) > half[1] - width,
    };
    close(moments.edge, sum(&|x, y| f64::from(u8::from(at_edge(x, y)))), "edge");
    // The step takes the top after its opening factor; without a step it is that of ψ itself.
    let mut work = plane.make_workspace(2);
    let still = plane.moments_of(&plane.folded(&before), &mut work);
    assert_eq!((still.norm, still.gradient, still.edge), (moments.norm, moments.gradient, moments.edge));
    let noise = noise(grid, mirror);
    let (found, expected) = (plane.moments_of(&plane.folded(&noise), &mut work).top, top(&noise, grid));
    assert!(
        expected > 10.0 && (found / expected - 1.0).abs() < 1e-12,
        "{case}: top {found} against {expected}"
    );
    // Closing undoes opening.
    let mut psi = plane.folded(&before);
    plane.open(&mut psi, drive.field);
    let vector_potential = along(mirror, [0.3, 0.2]);
    let closed = plane.closed(&psi, drive.field, vector_potential, &mut work).to_vec();
    plane.unfold(&closed, &mut whole);
    for ((a, b), [x, y]) in whole.iter().zip(&before).zip(&places) {
        let turn = if numerics.gauge == Gauge::Velocity { 1.0 } else { 0.0 };
        let expected = b * C::cis(turn * (vector_potential[0] * x + vector_potential[1] * y));
        assert!((a - expected).norm() < 1e-13, "{case}: closed {a} against {expected}");
    }
    // Overlaps of the part kept are those of the whole.
    let other = packet(grid, None);
    let found = plane.overlap(|i| other[i], &plane.folded(&before));
    let expected: C = other.iter().zip(&before).map(|(f, p)| f.conj() * p).sum();
    assert!((found - expected).norm() < 1e-11, "{case}: overlap {found} against {expected}");
}

/// The step with everything written out, from a ψ that is not open to one that is not.
fn closed_step(numerics: &Numerics, drive: &Drive, next: [f64; 2], psi: &mut Vec<C>) {
    let outer = if numerics.scheme == Scheme::FourthOrder { 1.0 / 6.0 } else { 0.5 };
    // plain_step opens with the factors of two neighbouring steps.
    local(psi, numerics, -outer * numerics.time_step, drive.field, 0.0);
    plain_step(numerics, drive, psi);
    local(psi, numerics, outer * numerics.time_step, next, 0.0);
}

/// Oracle: one step and two halves of it, written out, and their difference.
#[test]
fn a_doubled_step_differs_from_its_halves_as_the_formulas_say() {
    for scheme in [Scheme::FourthOrder, Scheme::Strang] {
        for gauge in [Gauge::Length, Gauge::Velocity] {
            for mirror in MIRRORS {
                doubled_case(scheme, gauge, mirror);
            }
        }
    }
}

fn doubled_case(scheme: Scheme, gauge: Gauge, mirror: Option<Mirror>) {
    let case = format!("{scheme:?}, {gauge:?}, {mirror:?}");
    let without = Numerics { time_step: 0.2, ..numerics(scheme, gauge, Absorber::None) };
    let numerics = Numerics { absorber: Absorber::Round { width: 5.0 }, ..without.clone() };
    let grid = numerics.grid;
    let atom = PotentialOnGrid::sample(&POTENTIAL, &grid);
    let plane = Plane::new(&atom, &numerics, mirror);
    let whole = drive_for(mirror);
    let half = |field, [first, second]: [[f64; 2]; 2]| Drive {
        field: along(mirror, field),
        middle_field: along(mirror, [0.06, 0.01]),
        potential_integral: [along(mirror, first), along(mirror, second)],
        square_integral: [0.0007, 0.0004],
    };
    let integrals = [[0.004, -0.01], [0.006, 0.008]];
    let halves = [half(whole.field, integrals), half([0.05, 0.012], integrals)];
    let next = along(mirror, [0.03, 0.02]);
    let before = packet(grid, mirror);
    let (mut one, mut two) = (before.clone(), before.clone());
    closed_step(&without, &whole, next, &mut one);
    let half = Numerics { time_step: 0.1, ..without };
    closed_step(&half, &halves[0], halves[1].field, &mut two);
    closed_step(&half, &halves[1], next, &mut two);
    let norm: f64 = one.iter().map(C::norm_sqr).sum();
    let overlap: C = two.iter().zip(&one).map(|(t, o)| t.conj() * o).sum();
    let factor = overlap / norm;
    let rest: f64 = two.iter().zip(&one).map(|(t, o)| (o - factor * t).norm_sqr()).sum();
    let expected = (rest / norm).sqrt();
    let mut psi = plane.folded(&before);
    plane.open(&mut psi, whole.field);
    let mut work = plane.make_workspace(2);
    work.turned.fill(C::new(f64::NAN, f64::NAN));
    let drives = Doubled { whole: &whole, halves: &halves, next };
    let found = plane.doubled(&plane.doubling(), &atom.values, &psi, &drives, &mut work);
    assert!(expected > 1e-5, "{case}: {expected}");
    assert!((found - expected).abs() < 1e-11, "{case}: local error {found} against {expected}");
    // The energy, in length gauge.
    let potential = along(mirror, [0.3, 0.2]);
    let mut kicked = before.clone();
    if gauge == Gauge::Velocity {
        let turn = points(grid).into_iter().map(|[x, y]| C::cis(potential[0] * x + potential[1] * y));
        kicked.iter_mut().zip(turn).for_each(|(p, turn)| *p *= turn);
    }
    let spectrum = transformed(&kicked, grid, Transform::forward);
    let momenta = grid.y.unwrap().momenta().flat_map(|ky| grid.x.momenta().map(move |kx| kx * kx + ky * ky));
    let kinetic: f64 = spectrum.iter().zip(momenta).map(|(p, k2)| p.norm_sqr() * 0.5 * k2).sum();
    let still: f64 = kicked.iter().zip(&atom.values).map(|(p, v)| p.norm_sqr() * v).sum();
    let expected = (kinetic / grid.len() as f64 + still) * grid.cell();
    let found = plane.energy(&atom.values, &psi, [whole.field, potential], &mut work);
    assert!((found / expected - 1.0).abs() < 1e-12, "{case}: energy {found} against {expected}");
}
