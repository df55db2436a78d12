//! A level of the model atom in a static field: the state that only flows out, its energy and width (Siegert, Phys. Rev. 56, 750
//! (1939)).

use num_complex::Complex;

use crate::potential::Potential;
use crate::stationary::StationaryError;

/// A decaying state.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Resonance {
    /// Re E, hartree.
    pub energy: f64,
    /// Γ = -2 Im E, 1/a.u. of time.
    pub width: f64,
}

/// V'/p³ up to which the outgoing wave is that of the local momentum, but for its fourth power.
const SMOOTH: f64 = 5e-4;
/// Step near the atom, in units of the potential's smallest length and at the most, bohr, and how it grows with the distance.
const STEP: (f64, f64, f64) = (0.03, 0.03, 0.015);
/// Largest phase of a step.
const PHASE: f64 = 0.5;
/// e-folds the wave function decays to the side that rises.
const DECAY: f64 = 40.0;
/// Accuracy of the energy, hartree.
const ACCURACY: f64 = 1e-14;
/// Fields on the way from a weak one to the one asked for.
const WAY: i32 = 8;
/// Exponent of the leading-order rate, 2κ³/3F, from which on only the energy's real part is followed.
const DEEP: f64 = 300.0;

/// The level that has energy `level` without field, in a static field `field` (V + field·x, either sign) in one dimension.
///
/// Widths below 1e-14 hartree are lost in rounding.
///
/// # Errors
/// [`StationaryError::NotConverged`].
///
/// # Panics
/// If `field` is zero or `level` is not negative.
pub fn resonance(potential: &Potential, level: f64, field: f64) -> Result<Resonance, StationaryError> {
    let fields: Vec<f64> = (1..=WAY).map(|n| field * f64::from(n) / f64::from(WAY)).collect();
    let followed = resonances(potential, level, &fields)?;
    Ok(followed[followed.len() - 1])
}

/// As [`resonance`] for several fields of one sign and rising strength, the first of them weak: each starts from the one before
/// it, as the shift grows with the square of the field.
///
/// # Errors
/// As [`resonance`].
pub fn resonances(
    potential: &Potential,
    level: f64,
    fields: &[f64],
) -> Result<Vec<Resonance>, StationaryError> {
    let mut last: Option<(f64, Complex<f64>)> = None;
    let mut out = Vec::with_capacity(fields.len());
    for &field in fields {
        assert!(field != 0.0 && level < 0.0, "a bound level and a field, got {level} and {field}");
        let guess = last.map_or(Complex::new(level, 0.0), |(before, energy)| {
            level + (energy - level) * (field / before).powi(2)
        });
        let energy = Siegert::new(potential, level, field).solve(guess)?;
        last = Some((field, energy));
        out.push(Resonance { energy: energy.re, width: (-2.0 * energy.im).max(0.0) });
    }
    Ok(out)
}

/// The two integrations that meet at zero, along y, towards which the electron leaves.
struct Siegert<'a> {
    potential: &'a Potential,
    /// +1 where y = x.
    side: f64,
    strength: f64,
    /// Nodes from the far end to zero: where the field rises, and where it falls.
    nodes: [Vec<f64>; 2],
    /// Whether the barrier is too long for anything but decay.
    deep: bool,
}

impl<'a> Siegert<'a> {
    fn new(potential: &'a Potential, level: f64, field: f64) -> Self {
        let strength = field.abs();
        let depth = -level;
        let deep = 2.0 * (2.0 * depth).powf(1.5) / (3.0 * strength) > DEEP;
        // p³ = F/SMOOTH at the far end downhill, where p² = 2Fy at the least.
        let momentum = (strength / SMOOTH).cbrt();
        let far = if deep { 0.5 * depth } else { 0.5 * momentum * momentum + depth } / strength;
        let mut decay = 0.0;
        let mut up = vec![0.0];
        let mut down = vec![0.0];
        let grown = |y: f64| {
            let length = potential.smallest_length();
            (STEP.0 * length).min(STEP.1) * (1.0 + STEP.2 / STEP.0 * y / length.max(1.0))
        };
        while decay < DECAY {
            let y = up[up.len() - 1];
            let fall = (2.0 * (depth + strength * y)).sqrt();
            let step = grown(y).min(PHASE / fall);
            decay += step * fall;
            up.push(y + step);
        }
        while down[down.len() - 1] < far {
            let y = down[down.len() - 1];
            let fastest = (2.0 * (depth + strength * y)).sqrt();
            down.push(y + grown(y).min(PHASE / fastest));
        }
        up.reverse();
        down.reverse();
        Self {
            potential,
            side: -field.signum(),
            strength,
            nodes: [up.iter().map(|y| -y).collect(), down],
            deep,
        }
    }

    fn value(&self, y: f64) -> f64 {
        self.potential.value(self.side * y) - self.strength * y
    }

    /// Mismatch of the logarithmic slopes at zero, and the root where it vanishes (secant method).
    fn solve(&self, guess: Complex<f64>) -> Result<Complex<f64>, StationaryError> {
        let mut old = guess * 1.0001;
        let mut at_old = self.mismatch(old);
        let mut new = guess;
        for _ in 0..60 {
            let at_new = self.mismatch(new);
            let change = at_new * (new - old) / (at_new - at_old);
            (old, at_old) = (new, at_new);
            new -= change;
            if change.norm() < ACCURACY || at_new == Complex::default() {
                return Ok(new);
            }
        }
        let reached = (new - old).norm();
        if reached < 1e3 * ACCURACY {
            return Ok(new);
        }
        Err(StationaryError::NotConverged {
            what: "a level in a static field",
            reached,
            wanted: ACCURACY,
            unit: "hartree",
        })
    }

    fn mismatch(&self, energy: Complex<f64>) -> Complex<f64> {
        let decaying = |y: f64| [Complex::new(1.0, 0.0), (2.0 * (self.value(y) - energy)).sqrt()];
        let [up, down] = &self.nodes;
        let [f, df] = self.carried(decaying(up[0]), up, energy);
        let start = if self.deep { decaying(down[0]) } else { self.outgoing(down[0], energy) };
        let [g, dg] = self.carried(start, down, energy);
        // Slopes are those along the way, so the second one is minus the one along y.
        df * g + f * dg
    }

    /// (ψ, -ψ') of q^{-1/2} e^{i∫q dy}, the slope towards smaller y, where q² = p² - q''/2q + ¾(q'/q)² (Milne, Phys. Rev. 35, 863
    /// (1930)): with p² = 2(E - U) all but linear this far out, q = p + ⅝F²/p⁵.
    fn outgoing(&self, y: f64, energy: Complex<f64>) -> [Complex<f64>; 2] {
        let p = (2.0 * (energy - self.value(y))).sqrt();
        let force = self.strength - self.side * self.potential.value_and_slope(self.side * y).1;
        let small = (force / p.powi(3)).powi(2);
        let q = p * (1.0 + 0.625 * small);
        let rate = force / p * (1.0 - 3.125 * small); // q'
        let slope = Complex::<f64>::i() * q - rate / q * 0.5;
        [Complex::new(1.0, 0.0), -slope]
    }

    /// (ψ, ψ') carried along `nodes`, slopes along the way, rescaled where it grows large.
    fn carried(&self, mut y: [Complex<f64>; 2], nodes: &[f64], energy: Complex<f64>) -> [Complex<f64>; 2] {
        for pair in nodes.windows(2) {
            let (middle, length) = (0.5 * (pair[0] + pair[1]), pair[1] - pair[0]);
            let offset = 0.288_675_134_594_812_9 * length;
            let at = [self.value(middle - offset), self.value(middle + offset)];
            y = transfer(y, length.abs(), at, energy);
            let size = y[0].norm_sqr() + y[1].norm_sqr();
            if size > 1e100 {
                y = y.map(|v| v * 1e-50);
            }
        }
        let size = y[0].norm() + y[1].norm();
        y.map(|v| v / size)
    }
}

/// The fourth-order Magnus step of the bound levels (Iserles, Nørsett, Phil. Trans. R. Soc. A 357, 983 (1999), eq. 4.6) at a
/// complex energy, V given at the two Gauss points.
fn transfer(
    [value, slope]: [Complex<f64>; 2],
    h: f64,
    [first, second]: [f64; 2],
    energy: Complex<f64>,
) -> [Complex<f64>; 2] {
    let f = 2.0 * (0.5 * (first + second) - energy);
    let tilt = 0.288_675_134_594_812_9 * h * h * (second - first);
    let q = tilt * tilt + h * h * f;
    let (c, s) = if q.norm() < 1e-3 {
        (
            1.0 + q / 2.0 * (1.0 + q / 12.0 * (1.0 + q / 30.0)),
            1.0 + q / 6.0 * (1.0 + q / 20.0 * (1.0 + q / 42.0)),
        )
    } else {
        let root = q.sqrt();
        let (rising, falling) = (root.exp(), (-root).exp());
        (0.5 * (rising + falling), 0.5 * (rising - falling) / root)
    };
    [(c - s * tilt) * value + s * h * slope, s * h * f * value + (c + s * tilt) * slope]
}
