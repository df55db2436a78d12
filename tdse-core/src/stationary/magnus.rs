//! Integration of the one-dimensional stationary equation ψ'' = 2(V - E)ψ on a mesh made for the potential.

use crate::potential::Potential;

/// √3/6, the offset of the two Gauss points from the middle of an interval of length 1.
const GAUSS: f64 = 0.288_675_134_594_812_9;

/// One interval, walked in either direction: its length, the mean of V over its two Gauss points, and the difference of V between them.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Interval {
    length: f64,
    mean: f64,
    difference: f64,
}

impl Interval {
    pub(crate) fn new(potential: &Potential, from: f64, to: f64) -> Self {
        let (middle, offset) = (0.5 * (from + to), GAUSS * (to - from));
        let first = potential.value(middle - offset);
        let second = potential.value(middle + offset);
        Self { length: (to - from).abs(), mean: 0.5 * (first + second), difference: second - first }
    }

    /// Matrix that carries (ψ, ψ') across at energy `energy`: exp of the fourth-order Magnus operator
    /// (Iserles, Nørsett, Phil. Trans. R. Soc. A 357, 983 (1999), eq. 4.6, for this 2×2 system).
    #[inline]
    pub(crate) fn transfer(&self, energy: f64) -> [[f64; 2]; 2] {
        let h = self.length;
        let f = 2.0 * (self.mean - energy);
        let tilt = GAUSS * h * h * self.difference;
        let square = tilt * tilt + h * h * f;
        let (c, s) = cosh_and_sinc(square);
        [[c - s * tilt, s * h], [s * h * f, c + s * tilt]]
    }

    fn step(&self, [value, slope]: [f64; 2], energy: f64) -> [f64; 2] {
        let [[a, b], [c, d]] = self.transfer(energy);
        [a * value + b * slope, c * value + d * slope]
    }
}

/// cosh √q and sinh √q / √q, for q of either sign.
pub(super) fn cosh_and_sinc(q: f64) -> (f64, f64) {
    if q.abs() < 1e-3 {
        let c = 1.0 + q / 2.0 * (1.0 + q / 12.0 * (1.0 + q / 30.0 * (1.0 + q / 56.0)));
        let s = 1.0 + q / 6.0 * (1.0 + q / 20.0 * (1.0 + q / 42.0 * (1.0 + q / 72.0)));
        (c, s)
    } else if q > 0.0 {
        let root = q.sqrt();
        (root.cosh(), root.sinh() / root)
    } else {
        let root = (-q).sqrt();
        (root.cos(), root.sin() / root)
    }
}

/// Mesh from a far point to a meeting point, intervals in the order of integration.
#[derive(Clone, Debug)]
pub(super) struct Mesh {
    intervals: Vec<Interval>,
    far_value: f64,
}

impl Mesh {
    /// Mesh from `far` to `near` on [`stretched_nodes`].
    pub(super) fn new(potential: &Potential, far: f64, near: f64, fineness: f64) -> Self {
        let nodes = stretched_nodes(potential, far, near, fineness);
        let intervals = nodes.windows(2).map(|pair| Interval::new(potential, pair[0], pair[1])).collect();
        Self { intervals, far_value: potential.value(far) }
    }

    /// Angle θ, tan θ = ψ/ψ', counted on through every node, of the solution that decays outwards,
    /// with derivatives taken along the direction of integration. Rises with `energy`.
    pub(super) fn angle(&self, energy: f64) -> f64 {
        let start = [1.0, (2.0 * (self.far_value - energy)).max(0.0).sqrt()];
        counted_angle(start, &self.intervals, |interval, y| interval.step(y, energy))
    }

    /// ∫√(2(V - E)) over the outer, forbidden part of the mesh: how many e-folds the solution decays there.
    pub(super) fn decay(&self, energy: f64) -> f64 {
        let forbidden = self.intervals.iter().take_while(|i| i.mean > energy);
        forbidden.map(|i| i.length * (2.0 * (i.mean - energy)).sqrt()).sum()
    }
}

/// Angle θ, tan θ = value/slope, after all intervals, counted on through every node of the value.
pub(super) fn counted_angle<I>(
    start: [f64; 2],
    intervals: &[I],
    step: impl Fn(&I, [f64; 2]) -> [f64; 2],
) -> f64 {
    let (mut y, mut nodes) = (start, 0.0);
    for interval in intervals {
        let next = step(interval, y);
        if next[0] * y[0] < 0.0 || (next[0] == 0.0 && y[0] != 0.0) {
            nodes += 1.0;
        }
        let size = next[0].abs() + next[1].abs();
        y = [next[0] / size, next[1] / size];
    }
    let base = y[0].atan2(y[1]);
    std::f64::consts::PI * nodes + if base < 0.0 { base + std::f64::consts::PI } else { base }
}

/// Positions from `far` to `near`, intervals `fineness` times the local length scale L + |x|/8, where L is the potential's
/// smallest length. Halving `fineness` halves every interval.
pub(super) fn stretched_nodes(potential: &Potential, far: f64, near: f64, fineness: f64) -> Vec<f64> {
    let scale = potential.smallest_length();
    let growth = if potential.is_confining() { 0.0 } else { 0.125 };
    // Uniform in s where x = (L/g) (e^{gs} - 1), or x = L s without growth, so that a mesh halves exactly.
    let to_s = |x: f64| {
        let t = if growth == 0.0 { x.abs() / scale } else { (growth * x.abs() / scale).ln_1p() / growth };
        t.copysign(x)
    };
    let to_x = |s: f64| {
        let t = if growth == 0.0 { s.abs() * scale } else { (growth * s.abs()).exp_m1() * scale / growth };
        t.copysign(s)
    };
    let (s_far, s_near) = (to_s(far), to_s(near));
    let count = (((s_near - s_far).abs() / fineness).ceil() as usize).max(1);
    let node = |i: usize| match i {
        0 => far,
        _ if i == count => near,
        _ => to_x(s_far + (s_near - s_far) * i as f64 / count as f64),
    };
    (0..=count).map(node).collect()
}

/// Solution that decays outwards, on given positions that come one after the other from outside to inside;
/// zero beyond `far` (the first position's side), each gap cut into steps of at most `largest_step`.
pub(super) fn decaying_solution(
    potential: &Potential,
    energy: f64,
    far: f64,
    positions: impl Iterator<Item = f64>,
    largest_step: f64,
) -> Vec<[f64; 2]> {
    let rate = (2.0 * (potential.value(far) - energy)).max(0.0).sqrt();
    let (mut at, mut y) = (far, [1e-60, 1e-60 * rate]);
    let mut out = Vec::new();
    let mut inside = false;
    for position in positions {
        let towards = if far < 0.0 { position - at } else { at - position };
        if towards <= 0.0 && !inside {
            out.push([0.0; 2]);
            continue;
        }
        inside = true;
        let count = (towards / largest_step).ceil().max(1.0);
        for i in 0..count as usize {
            let from = at + (position - at) * i as f64 / count;
            let to = at + (position - at) * (i + 1) as f64 / count;
            y = Interval::new(potential, from, to).step(y, energy);
        }
        at = position;
        out.push(y);
    }
    out
}
