//! Integration of the radial equation of a round atom in two dimensions, as first-order system in R and rR':
//! R' = (rR')/r, (rR')' = (m²/r + 2r(V - E)) R.
//!
//! With u = √r R this is -u''/2 + ((m² - ¼)/(2r²) + V) u = E u (textbook), whose half-integer centrifugal term is singular
//! for m = 0; in R and rR' nothing is, and over ln r near the centre the regular solution starts as r^m.

use super::magnus::{cosh_and_sinc, counted_angle, stretched_nodes};
use crate::potential::Potential;

/// √3/6 and √3/12: offset of the Gauss points, and the commutator's factor in the fourth-order Magnus operator.
const GAUSS: f64 = 0.288_675_134_594_812_9;
/// Where the regular solution starts, in units of the potential's smallest length.
const CENTRE: f64 = 1e-7;

/// One interval, walked in either direction: the exponent of its transfer matrix, [[d, a], [b, -d]], with
/// b = b₀ - E b₁ and d = d₀ - E d₁.
#[derive(Clone, Copy, Debug)]
struct Interval {
    a: f64,
    b: [f64; 2],
    d: [f64; 2],
    /// Mean V + m²/(2r²), hartree.
    height: f64,
    /// Length in r, bohr.
    length: f64,
}

/// What the integration runs over.
#[derive(Clone, Copy, Debug)]
enum Variable {
    /// ln r.
    Logarithm,
    /// r.
    Radius,
}

impl Interval {
    /// Fourth-order Magnus operator (Iserles, Nørsett, Phil. Trans. R. Soc. A 357, 983 (1999), eq. 4.6).
    fn new(potential: &Potential, m: u32, from: f64, to: f64, variable: Variable) -> Self {
        let (start, end) = match variable {
            Variable::Logarithm => (from.ln(), to.ln()),
            Variable::Radius => (from, to),
        };
        let h = (end - start).abs();
        let square = f64::from(m * m);
        let at = |offset: f64| {
            let s = 0.5 * (start + end) + offset * (end - start);
            // a, b₀, b₁ and V + m²/(2r²).
            match variable {
                Variable::Logarithm => {
                    let r = s.exp();
                    let v = potential.value(r);
                    [1.0, square + 2.0 * r * r * v, 2.0 * r * r, v + 0.5 * square / (r * r)]
                }
                Variable::Radius => {
                    let v = potential.value(s);
                    [1.0 / s, square / s + 2.0 * s * v, 2.0 * s, v + 0.5 * square / (s * s)]
                }
            }
        };
        let (p, q) = (at(-GAUSS), at(GAUSS));
        let commutator = |i: usize| -0.5 * GAUSS * h * h * (p[0] * q[i] - q[0] * p[i]);
        Self {
            a: 0.5 * h * (p[0] + q[0]),
            b: [0.5 * h * (p[1] + q[1]), 0.5 * h * (p[2] + q[2])],
            d: [commutator(1), commutator(2)],
            height: 0.5 * (p[3] + q[3]),
            length: (to - from).abs(),
        }
    }

    fn step(&self, [value, slope]: [f64; 2], energy: f64) -> [f64; 2] {
        let (b, d) = (self.b[0] - energy * self.b[1], self.d[0] - energy * self.d[1]);
        let (c, s) = cosh_and_sinc(d * d + self.a * b);
        [(c + s * d) * value + s * self.a * slope, s * b * value + (c - s * d) * slope]
    }
}

/// Mesh from the centre or from far away to the meeting point, intervals in the order of integration.
#[derive(Clone, Debug)]
pub(super) struct RadialMesh {
    radii: Vec<f64>,
    intervals: Vec<Interval>,
    /// (R, slope) at the start, where the slope is rR' along the direction of integration, as a function of the energy.
    start: Start,
}

#[derive(Clone, Copy, Debug)]
enum Start {
    /// R = r^m.
    Centre { m: f64 },
    /// R = e^{-κr}/√r.
    Far { radius: f64, value: f64 },
}

/// Where both meshes meet: near the centre, further out for a state that the centrifugal force keeps away. Of a table, whose points
/// may be much closer than it changes, where that force, m²/2r², is as large as the well is deep: no electron is further in.
fn meeting_radius(potential: &Potential, m: u32) -> f64 {
    let m = f64::from(m.max(1));
    match potential {
        Potential::Sampled(table) => {
            let wave = (-2.0 * table.lowest()).max(0.0).sqrt().recip();
            (m * wave.max(potential.smallest_length())).min(0.5 * potential.domain().1)
        }
        _ => potential.smallest_length() * m,
    }
}

impl RadialMesh {
    /// From the centre outwards, uniform in ln r.
    pub(super) fn inner(potential: &Potential, m: u32, fineness: f64) -> Self {
        let near = meeting_radius(potential, m);
        let first = CENTRE * potential.smallest_length();
        let count = ((near / first).ln() / fineness).ceil() as usize;
        let node = |i: usize| {
            if i == count { near } else { first * (near / first).powf(i as f64 / count as f64) }
        };
        let radii: Vec<f64> = (0..=count).map(node).collect();
        Self::through(radii, potential, m, Variable::Logarithm, Start::Centre { m: f64::from(m) })
    }

    /// From `far` inwards, intervals growing with the distance.
    pub(super) fn outer(potential: &Potential, m: u32, far: f64, fineness: f64) -> Self {
        let radii = stretched_nodes(potential, far, meeting_radius(potential, m), fineness);
        let start = Start::Far { radius: far, value: potential.value(far) };
        Self::through(radii, potential, m, Variable::Radius, start)
    }

    /// From the centre to `far`, near the centre uniform in ln r and then in r, in intervals of `longest` or less.
    pub(super) fn outward(potential: &Potential, m: u32, far: f64, longest: f64) -> Self {
        let mut mesh = Self::inner(potential, m, 1.0 / 32.0);
        let near = meeting_radius(potential, m);
        let count = ((far - near) / longest).ceil().max(1.0) as usize;
        let radii = (0..=count).map(|i| near + (far - near) * i as f64 / count as f64).collect();
        let outside = Self::through(radii, potential, m, Variable::Radius, mesh.start);
        mesh.radii.extend(&outside.radii[1..]);
        mesh.intervals.extend(outside.intervals);
        mesh
    }

    fn through(radii: Vec<f64>, potential: &Potential, m: u32, variable: Variable, start: Start) -> Self {
        let intervals =
            radii.windows(2).map(|pair| Interval::new(potential, m, pair[0], pair[1], variable)).collect();
        Self { radii, intervals, start }
    }

    fn first(&self, energy: f64) -> [f64; 2] {
        match self.start {
            Start::Centre { m } => [1.0, m],
            Start::Far { radius, value } => [1.0, 0.5 + radius * (2.0 * (value - energy)).max(0.0).sqrt()],
        }
    }

    /// Angle θ, tan θ = R over its slope along the integration, counted on through every node; rises with `energy`.
    pub(super) fn angle(&self, energy: f64) -> f64 {
        counted_angle(self.first(energy), &self.intervals, |interval, y| interval.step(y, energy))
    }

    /// ∫√(2(V + m²/2r² - E)) over the outer, forbidden part of the mesh.
    pub(super) fn decay(&self, energy: f64) -> f64 {
        let forbidden = self.intervals.iter().take_while(|i| i.height > energy);
        forbidden.map(|i| i.length * (2.0 * (i.height - energy)).sqrt()).sum()
    }

    /// (r, R, slope along the integration) at every node, R rescaled on the way so that it neither over- nor underflows.
    pub(super) fn solution(&self, energy: f64) -> Vec<[f64; 3]> {
        let mut y = self.first(energy);
        let mut out = vec![[self.radii[0], y[0], y[1]]];
        for (interval, r) in self.intervals.iter().zip(&self.radii[1..]) {
            y = interval.step(y, energy);
            if y[0].abs() + y[1].abs() > 1e100 {
                y = y.map(|v| v * 1e-100);
                for o in &mut out {
                    (o[1], o[2]) = (o[1] * 1e-100, o[2] * 1e-100);
                }
            }
            out.push([*r, y[0], y[1]]);
        }
        out
    }
}

/// R(r) of one level on a mesh, joined by cubic Hermite pieces: to 1e-6 or so of its largest value.
#[derive(Clone, Debug)]
pub struct RadialFunction {
    /// (r, R, R'), rising r.
    nodes: Vec<[f64; 3]>,
    m: i32,
}

impl RadialFunction {
    /// The solution at `energy` with decaying end at `far`, with ∫R² r dr = 1, positive far out.
    pub(super) fn new(potential: &Potential, m: u32, energy: f64, far: f64) -> Self {
        let fineness = 1.0 / 32.0;
        let inner = RadialMesh::inner(potential, m, fineness).solution(energy);
        let outer = RadialMesh::outer(potential, m, far, fineness).solution(energy);
        let (i, o) = (inner[inner.len() - 1], outer[outer.len() - 1]);
        // Scaled to agree in (R, rR') as well as they can.
        let scale = (i[1] * o[1] - i[2] * o[2]) / (i[1] * i[1] + i[2] * i[2]);
        let inner = inner[..inner.len() - 1].iter().map(|n| [n[0], n[1] * scale, n[2] * scale / n[0]]);
        let mut nodes: Vec<[f64; 3]> =
            inner.chain(outer.iter().rev().map(|n| [n[0], n[1], -n[2] / n[0]])).collect();
        let norm: f64 = nodes
            .windows(2)
            .map(|p| 0.5 * (p[1][0] - p[0][0]) * (p[0][0] * p[0][1].powi(2) + p[1][0] * p[1][1].powi(2)))
            .sum();
        for n in &mut nodes {
            n[1] /= norm.sqrt();
            n[2] /= norm.sqrt();
        }
        Self { nodes, m: m as i32 }
    }

    /// R through nodes (r, R, R') of rising r, of angular momentum ±`m`.
    pub(super) fn through(nodes: Vec<[f64; 3]>, m: u32) -> Self {
        Self { nodes, m: m as i32 }
    }

    /// R at radius `r`; zero beyond the far end.
    pub fn value(&self, r: f64) -> f64 {
        let i = self.nodes.partition_point(|n| n[0] <= r);
        if i == 0 {
            return self.nodes[0][1] * (r / self.nodes[0][0]).powi(self.m);
        }
        if i == self.nodes.len() {
            return 0.0;
        }
        let ([r0, f0, g0], [r1, f1, g1]) = (self.nodes[i - 1], self.nodes[i]);
        let h = r1 - r0;
        let t = (r - r0) / h;
        let u = 1.0 - t;
        u * u * ((1.0 + 2.0 * t) * f0 + t * h * g0) + t * t * ((1.0 + 2.0 * u) * f1 - u * h * g1)
    }
}
