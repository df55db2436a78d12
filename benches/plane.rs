//! The two-dimensional step with everything recorded, beside the bare row transforms it contains, and on two threads.
//!
//! The ratios, not the times, are the result: all sides run in turn. With `TDSE_PEER=1` the same step in numpy with
//! scipy.fft takes its turn too (`benches/plane_peer.py`, with the Python that `TDSE_PYTHON` names).

use std::io::{BufRead, BufReader, Write};
use std::process::{Child, ChildStdin, ChildStdout, Command, Stdio};
use std::time::Instant;

use num_complex::Complex;
use tdse_core::grid::{Grid, Transform};
use tdse_core::outgoing::{MapCollector, MapRange};
use tdse_core::potential::{Potential, PotentialOnGrid};
use tdse_core::problem::{Absorber, Gauge, Numerics, Scheme};
use tdse_core::step::{Drive, Plane};

type C = Complex<f64>;

/// Steps in one measurement.
const STEPS: usize = 3;
const ROUNDS: usize = 15;

fn numerics(points: usize) -> Numerics {
    Numerics {
        grid: Grid::square(points, 0.4),
        time_step: 0.1,
        scheme: Scheme::FourthOrder,
        gauge: Gauge::Length,
        absorber: Absorber::Round { width: 40.0 },
        trailing_time: 0.0,
    }
}

const DRIVE: Drive = Drive {
    field: [0.05, -0.02],
    middle_field: [0.05, -0.02],
    potential_integral: [[0.0; 2]; 2],
    square_integral: [0.0; 2],
};

/// The step's work without everything but its row transforms: 4N pairs of length N.
struct Bare {
    transform: Transform,
    points: usize,
    scratch: Vec<C>,
}

impl Bare {
    fn new(points: usize) -> Self {
        let transform = Transform::new(points);
        let scratch = transform.make_scratch();
        Self { transform, points, scratch }
    }

    /// Seconds per step; the numbers are kept finite in between, outside the measured time.
    fn run(&mut self, plane: &mut [C]) -> f64 {
        let scale = (self.points as f64).powi(-4);
        let mut elapsed = 0.0;
        for _ in 0..STEPS {
            elapsed += seconds(|| {
                for _ in 0..4 {
                    for row in plane.chunks_mut(self.points) {
                        self.transform.forward(row, &mut self.scratch);
                        self.transform.inverse(row, &mut self.scratch);
                    }
                }
            });
            for p in plane.iter_mut() {
                *p *= scale;
            }
        }
        elapsed / STEPS as f64
    }
}

/// The step in numpy, one at a time.
struct Peer {
    process: Child,
    ask: ChildStdin,
    answer: BufReader<ChildStdout>,
}

impl Peer {
    fn start(points: usize) -> Option<Self> {
        std::env::var_os("TDSE_PEER")?;
        let python = std::env::var("TDSE_PYTHON").unwrap_or_else(|_| "python3".into());
        let mut process = Command::new(python)
            .arg(concat!(env!("CARGO_MANIFEST_DIR"), "/../benches/plane_peer.py"))
            .arg(points.to_string())
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .spawn()
            .expect("Python starts");
        let (ask, answer) = (process.stdin.take().unwrap(), process.stdout.take().unwrap());
        Some(Self { process, ask, answer: BufReader::new(answer) })
    }

    /// Seconds for a `what`: a step, or its bare transforms.
    fn takes(&mut self, what: &str) -> f64 {
        writeln!(self.ask, "{what}").expect("the peer listens");
        let mut line = String::new();
        self.answer.read_line(&mut line).expect("the peer answers");
        line.trim().parse().expect("seconds")
    }
}

impl Drop for Peer {
    fn drop(&mut self) {
        _ = self.process.kill();
        _ = self.process.wait();
    }
}

fn seconds(mut work: impl FnMut()) -> f64 {
    let start = Instant::now();
    work();
    start.elapsed().as_secs_f64()
}

fn median(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values[values.len() / 2]
}

fn main() {
    println!("instruction set: {}", tdse_core::step::instruction_set());
    for points in [512, 1024] {
        one_size(points);
    }
    for momenta in [101, 201, 401] {
        one_map(512, momenta);
    }
}

/// One sample of the momentum map beside one step; it is taken every few steps (`MapCollector::interval`).
fn one_map(points: usize, momenta: usize) {
    let numerics = numerics(points);
    let potential = Potential::SoftCoulomb { charge: 1.0, softening: 0.8 };
    let plane = Plane::new(&PotentialOnGrid::sample(&potential, &numerics.grid), &numerics, None);
    let largest = 2.0;
    let range = MapRange { largest, spacing: 2.0 * largest / (momenta - 1) as f64 };
    let collector = MapCollector::new(&numerics, range, &[DRIVE; 3], &[[0.0; 2]; 3]);
    let (mut map, mut scratch, mut work) =
        (collector.start(), collector.make_scratch(), plane.make_workspace(1));
    let mut psi = vec![C::new(1.0 / points as f64, 0.0); points * points];
    let ratios = (0..ROUNDS).map(|_| {
        let step = seconds(|| (0..STEPS).for_each(|_| _ = plane.step(&mut psi, &DRIVE, &mut work)));
        let row = |j: usize, out: &mut [C]| out.copy_from_slice(&psi[j * points..(j + 1) * points]);
        let sample = seconds(|| (0..STEPS).for_each(|_| collector.collect(&mut map, row, 1, &mut scratch)));
        sample / step
    });
    println!(
        "N = {points}: a sample of a map of {momenta} x {momenta} momenta up to {largest:.2} / bohr takes {:.2} of a step; one every {} steps",
        median(ratios.collect()),
        collector.interval()
    );
}

fn one_size(points: usize) {
    let numerics = numerics(points);
    let potential = Potential::SoftCoulomb { charge: 1.0, softening: 0.8 };
    let plane = Plane::new(&PotentialOnGrid::sample(&potential, &numerics.grid), &numerics, None);
    let (start_x, spacing) = (numerics.grid.x.position(0), 0.4);
    let gauss = |i: usize| (start_x + spacing * i as f64).powi(2) / -8.0;
    let mut psi: Vec<C> =
        (0..points * points).map(|i| C::new((gauss(i % points) + gauss(i / points)).exp(), 0.0)).collect();
    let (mut alone, mut shared) = (plane.make_workspace(1), plane.make_workspace(2));
    let mut bare = Bare::new(points);
    let mut pair = [Bare::new(points), Bare::new(points)];
    let mut planes = [psi.clone(), psi.clone()];
    let (mut one, mut two, mut rows, mut both) = (vec![], vec![], vec![], vec![]);
    let (mut peer, mut numpy, mut scipy) = (Peer::start(points), vec![], vec![]);
    if let Some(peer) = &mut peer {
        peer.takes("step");
    }
    for _ in 0..ROUNDS {
        numpy.extend(peer.as_mut().map(|peer| peer.takes("step")));
        scipy.extend(peer.as_mut().map(|peer| peer.takes("bare")));
        let mut steps = |work: &mut _| {
            seconds(|| (0..STEPS).for_each(|_| _ = plane.step(&mut psi, &DRIVE, work))) / STEPS as f64
        };
        one.push(steps(&mut alone));
        two.push(steps(&mut shared));
        rows.push(bare.run(&mut planes[0]));
        let [a, b] = &mut planes;
        let [first, second] = &mut pair;
        let (a, b) = rayon::join(|| first.run(a), || second.run(b));
        both.push(0.5 * (a + b));
    }
    let ratio = |a: &[f64], b: &[f64]| median(a.iter().zip(b).map(|(a, b)| a / b).collect());
    // What two copies of the bare loop gain on two threads: twice the work in `both`.
    let (gain, bare_gain) = (ratio(&one, &two), 2.0 * ratio(&rows, &both));
    println!(
        "N = {points}: step {:.2} ms; step / bare row pairs = {:.3}; two threads gain {gain:.3}, two copies of the bare loop \
         {bare_gain:.3}, ratio {:.3} (medians of {ROUNDS})",
        median(one.clone()) * 1e3,
        ratio(&one, &rows),
        gain / bare_gain
    );
    if peer.is_some() {
        println!(
            "N = {points}: numpy with scipy.fft takes {:.2} times as long; its bare transforms {:.2} times the bare row pairs, and its \
             step {:.2} times those",
            ratio(&numpy, &one),
            ratio(&scipy, &rows),
            ratio(&numpy, &scipy)
        );
    }
}
