//! Outgoing wave far from the atom: a plane wave, or in a Coulomb tail the phase–amplitude form of the WKB wave.

use num_complex::Complex;

use crate::potential::Potential;
use crate::quadrature::gauss_6;

/// V = -Z/√(r²+a²) + (m² - ¼)/2r² far from the atom; Z = 0 for a short-range potential, and no centrifugal term in one dimension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Tail {
    charge: f64,
    softening: f64,
    /// m² - ¼.
    centrifugal: f64,
}

/// Value and outward slope of a wave at one point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Wave {
    pub(super) value: Complex<f64>,
    pub(super) slope: Complex<f64>,
}

impl Tail {
    pub(super) fn of(potential: &Potential) -> Self {
        match *potential {
            Potential::SoftCoulomb { charge, softening } => Self { charge, softening, centrifugal: 0.0 },
            _ => Self { charge: 0.0, softening: 0.0, centrifugal: 0.0 },
        }
    }

    /// Of √r R at angular momentum ±`m` in two dimensions.
    pub(super) fn with_angular_momentum(potential: &Potential, m: u32) -> Self {
        Self { centrifugal: f64::from(m * m) - 0.25, ..Self::of(potential) }
    }

    /// Whether no charge pulls.
    pub(super) fn is_free(&self) -> bool {
        self.charge == 0.0
    }

    /// Distance from which the wave is good to 1e-9 at every momentum: its expansion parameter, V'/p³, is largest at
    /// threshold, 1/√(8Zr), and enters in its eighth power; the softening must be small as well.
    pub(super) fn reach(&self) -> f64 {
        if self.charge == 0.0 { 0.0 } else { (300.0 / self.charge).max(20.0 * self.softening) }
    }

    /// √(k/q) e^{iθ}, θ' = q, θ → kr + (Z/k) ln 2kr: the outgoing wave of unit flux k at distance `r`.
    pub(super) fn wave(&self, momentum: f64, r: f64) -> Wave {
        let k = momentum;
        let [q, slope, ..] = self.local_momentum(k, r).0;
        let value = Complex::from_polar((k / q).sqrt(), self.phase(k, r));
        Wave { value, slope: value * Complex::new(-0.5 * slope / q, q) }
    }

    /// θ: in closed form for p² = k² + 2Z/r, and what q differs from that p integrated from r to infinity.
    fn phase(&self, k: f64, r: f64) -> f64 {
        if self.charge == 0.0 {
            return k * r;
        }
        let eta = self.charge / k;
        let pure = |r: f64| (k * k + 2.0 * self.charge / r).sqrt();
        let p = pure(r);
        let closed = r * p - eta + eta * (k * r + eta + r * p).ln();
        // ∫ (p - q) dr over u, where r₀/r = u² - c and p = √(2Z/r₀) u, so that no root is left: c = k² r₀/2Z.
        let c = 0.5 * k * k * r / self.charge;
        let (first, last) = (c.sqrt(), (1.0 + c).sqrt());
        let rest: f64 = gauss_6()
            .map(|(at, weight)| {
                let u = first + (last - first) * at;
                let s = (u - first) * (u + first);
                let difference = pure(r / s) - self.local_momentum(k, r / s).0[0];
                weight * (last - first) * difference * r / (s * s) * 2.0 * u
            })
            .sum();
        closed + rest
    }

    /// q with q² = p² - q''/(2q) + 3(q'/2q)² (Milne, Phys. Rev. 35, 863 (1930)), by three substitutions from q = p
    /// on, each of which costs two orders of the Taylor series about `r`.
    fn local_momentum(&self, k: f64, r: f64) -> Taylor {
        let distance =
            Taylor([r * r + self.softening * self.softening, 2.0 * r, 1.0, 0.0, 0.0, 0.0, 0.0, 0.0]);
        let mut square = Taylor([2.0 * self.charge, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]).over(distance.sqrt());
        square.0[0] += k * k;
        if self.centrifugal != 0.0 {
            // 1/r² = (1/r₀²) Σ (n + 1) (-(r - r₀)/r₀)ⁿ
            for (n, s) in square.0.iter_mut().enumerate() {
                *s -= self.centrifugal * (n + 1) as f64 * (-1.0 / r).powi(n as i32) / (r * r);
            }
        }
        let mut q = square.sqrt();
        if self.charge == 0.0 {
            return q;
        }
        for _ in 0..3 {
            let first = q.derivative();
            let rate = first.over(q);
            let bend = first.derivative().over(q);
            let mut next = square;
            for (n, b) in next.0.iter_mut().zip(bend.0) {
                *n -= 0.5 * b;
            }
            for (n, r) in next.0.iter_mut().zip(rate.times(rate).0) {
                *n += 0.75 * r;
            }
            q = next.sqrt();
        }
        q
    }
}

/// Coefficients c_n of Σ c_n (r - r₀)ⁿ, n < 8.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Taylor([f64; 8]);

impl Taylor {
    fn times(self, other: Self) -> Self {
        let mut out = [0.0; 8];
        for (n, o) in out.iter_mut().enumerate() {
            *o = (0..=n).map(|i| self.0[i] * other.0[n - i]).sum();
        }
        Self(out)
    }

    fn over(self, other: Self) -> Self {
        let mut out = [0.0; 8];
        for n in 0..8 {
            let known: f64 = (0..n).map(|i| out[i] * other.0[n - i]).sum();
            out[n] = (self.0[n] - known) / other.0[0];
        }
        Self(out)
    }

    fn sqrt(self) -> Self {
        let mut out = [0.0; 8];
        out[0] = self.0[0].sqrt();
        for n in 1..8 {
            let known: f64 = (1..n).map(|i| out[i] * out[n - i]).sum();
            out[n] = (self.0[n] - known) / (2.0 * out[0]);
        }
        Self(out)
    }

    /// The last coefficient is lost.
    fn derivative(self) -> Self {
        let mut out = [0.0; 8];
        for n in 1..8 {
            out[n - 1] = n as f64 * self.0[n];
        }
        Self(out)
    }
}
