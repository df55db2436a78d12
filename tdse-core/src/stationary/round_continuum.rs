//! Continuum of a round atom in two dimensions, one angular momentum at a time.
//!
//! ψ = R(r) e^{imφ}/√2π with R → √(2/πr) cos(kr + (Z/k) ln 2kr - |m|π/2 - π/4 + δ), so that ∫ψ_k* ψ_k' d²r = δ(k - k'). Without a
//! Coulomb tail R = √k (cos δ J_m(kr) - sin δ Y_m(kr)) where the potential has vanished (textbook).

use std::f64::consts::PI;

use num_complex::Complex;

use super::radial::{RadialFunction, RadialMesh};
use super::scattering::{NoContinuum, Side, free_from};
use super::tail::{Tail, Wave};
use crate::potential::Potential;

/// Longest interval of integration, bohr and in units of 1/k.
const LONGEST: (f64, f64) = (0.04, 0.1);

/// Continuum of one angular momentum ±m, up to a momentum.
#[derive(Clone, Debug)]
pub struct RoundContinuum {
    m: u32,
    mesh: RadialMesh,
    tail: Tail,
    end: f64,
    fastest: f64,
}

/// One state.
#[derive(Clone, Debug)]
pub struct RoundWave {
    /// R, up to where the atom ends.
    pub radial: RadialFunction,
    /// δ, rad.
    pub phase: f64,
}

impl RoundContinuum {
    /// Prepares momenta up to `fastest`, 1/bohr, with R at least up to `reach` bohr.
    ///
    /// # Errors
    /// [`NoContinuum`].
    pub fn new(potential: &Potential, m: u32, fastest: f64, reach: f64) -> Result<Self, NoContinuum> {
        if potential.is_confining() {
            return Err(NoContinuum::Confining);
        }
        let tail = Tail::with_angular_momentum(potential, m);
        let end = free_from(potential, tail, Side::Right, reach)?;
        let mesh = RadialMesh::outward(potential, m, end, LONGEST.0.min(LONGEST.1 / fastest));
        Ok(Self { m, mesh, tail, end, fastest })
    }

    /// The state at momentum `k`.
    ///
    /// # Panics
    /// If `k` is not positive or above the largest momentum.
    pub fn wave(&self, k: f64) -> RoundWave {
        assert!(k > 0.0 && k <= self.fastest * (1.0 + 1e-9), "0 < k <= {}, got {k}", self.fastest);
        let (r, solution) = (self.end, self.mesh.solution(0.5 * k * k));
        let [_, value, slope] = solution[solution.len() - 1];
        let turn = if self.tail.is_free() {
            self.beside_bessel(k, value, slope / r)
        } else {
            let (u, du) = (r.sqrt() * value, (0.5 * value + slope) / r.sqrt());
            let Wave { value: w, slope: dw } = self.tail.wave(k, r);
            // u = c w + c* w* with the Wronskian w* w' - w w*' = 2ik.
            let c = (du * w.conj() - u * dw.conj()) / Complex::new(0.0, 2.0 * k);
            2.0 * c * Complex::cis(0.5 * PI * f64::from(self.m) + 0.25 * PI)
        };
        let scale = (2.0 / PI).sqrt() / turn.norm();
        let nodes = solution.into_iter().map(|[r, value, slope]| [r, value * scale, slope / r * scale]);
        RoundWave { radial: RadialFunction::through(nodes.collect(), self.m), phase: turn.arg() }
    }

    /// Amplitude and phase of u against √(kr) (J cos δ - Y sin δ) √(π/2), by the Wronskian J Y' - J' Y = 2/(πx).
    fn beside_bessel(&self, k: f64, value: f64, slope: f64) -> Complex<f64> {
        let (x, m) = (k * self.end, self.m as i32);
        let [j, dj] = [libm::jn(m, x), 0.5 * (libm::jn(m - 1, x) - libm::jn(m + 1, x))];
        let [y, dy] = [libm::yn(m, x), 0.5 * (libm::yn(m - 1, x) - libm::yn(m + 1, x))];
        let half = 0.5 * PI * self.end;
        let (cosine, sine) = (half * (k * value * dy - slope * y), half * (k * value * dj - slope * j));
        // √(2/πk) is what J has at large distances.
        Complex::new(cosine, sine) * (2.0 / (PI * k)).sqrt()
    }
}
