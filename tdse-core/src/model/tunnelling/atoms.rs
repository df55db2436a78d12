//! Rates of atoms in three dimensions.

use std::f64::consts::PI;

use super::gamma::gamma;

/// An electron of an atom in three dimensions.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Orbital {
    /// Ionization energy Ip, hartree.
    pub ionization_energy: f64,
    /// Charge Z of the ion it leaves.
    pub charge: f64,
    /// Angular momentum l.
    pub l: u32,
    /// Its projection on the field, |m| ≤ l.
    pub m: u32,
}

impl Orbital {
    /// κ = √(2 Ip).
    pub fn kappa(&self) -> f64 {
        (2.0 * self.ionization_energy).sqrt()
    }

    /// Effective principal quantum number n* = Z/κ.
    pub fn effective_number(&self) -> f64 {
        self.charge / self.kappa()
    }

    /// |C|² = 2^{2n*}/(n* Γ(n*+l*+1) Γ(n*-l*)) with l* = n* - 1, that is 2^{2n*}/(n* Γ(2n*)); 4 for hydrogen (Ammosov, Delone,
    /// Krainov, Sov. Phys. JETP 64, 1191 (1986), before Stirling's formula, which makes it 4.70).
    pub fn coefficient(&self) -> f64 {
        let n = self.effective_number();
        4.0f64.powf(n) / (n * gamma(2.0 * n))
    }

    /// (2l+1)(l+|m|)!/(2^|m| |m|! (l-|m|)!).
    fn angular_factor(&self) -> f64 {
        let factorial = |n: u32| (1..=n).map(f64::from).product::<f64>();
        let (l, m) = (self.l, self.m);
        f64::from(2 * l + 1) * factorial(l + m) / (2.0f64.powi(m as i32) * factorial(m) * factorial(l - m))
    }

    /// Rate in a static field F > 0, 1/a.u. of time: |C|² f_lm Ip (2κ³/F)^{2n*-|m|-1} exp(-2κ³/3F) (Ammosov, Delone,
    /// Krainov 1986); of hydrogen with Ip = ½ Landau's (4/F) exp(-2/3F) (Landau, Lifshitz, Quantum Mechanics, §77).
    /// Zero without field.
    pub fn static_rate(&self, field: f64) -> f64 {
        if field == 0.0 {
            return 0.0;
        }
        let cube = self.kappa().powi(3);
        let power = 2.0 * self.effective_number() - f64::from(self.m) - 1.0;
        self.coefficient()
            * self.angular_factor()
            * self.ionization_energy
            * (2.0 * cube / field).powf(power)
            * (-2.0 * cube / (3.0 * field)).exp()
    }

    /// [`Self::static_rate`] averaged over a cycle of linearly polarized light of amplitude F in leading order: times
    /// √(3F/(πκ³)) (Perelomov, Popov, Terent'ev, Sov. Phys. JETP 23, 924 (1966)).
    pub fn average_rate(&self, field: f64) -> f64 {
        self.static_rate(field) * (3.0 * field / (PI * self.kappa().powi(3))).sqrt()
    }

    /// Rate averaged over a cycle of linearly polarized light of amplitude F and angular frequency ω, for any Keldysh
    /// parameter γ = κω/F (Perelomov, Popov, Terent'ev 1966, as written by Ilkov, Decker, Chin, J. Phys. B 25, 4005 (1992), from
    /// memory): Ip |C|² f_lm √(6/π) (2κ³/F)^{2n*-|m|-3/2} (1+γ²)^{|m|/2+3/4} A_m exp(-(2κ³/3F) g(γ)), without a Coulomb factor in
    /// γ. Zero without field.
    pub fn ppt_rate(&self, field: f64, frequency: f64) -> f64 {
        if field == 0.0 {
            return 0.0;
        }
        let gamma = self.kappa() * frequency / field;
        let cube = self.kappa().powi(3);
        let m = f64::from(self.m);
        let power = 2.0 * self.effective_number() - m - 1.5;
        let sum = PptSum { gamma, photons: self.ionization_energy / frequency, m: self.m };
        self.ionization_energy
            * self.coefficient()
            * self.angular_factor()
            * (6.0 / PI).sqrt()
            * (2.0 * cube / field).powf(power)
            * (1.0 + gamma * gamma).powf(0.5 * m + 0.75)
            * sum.value()
            * (-2.0 * cube / (3.0 * field) * keldysh_exponent(gamma)).exp()
    }
}

/// g(γ) = (3/2γ)[(1 + 1/2γ²) asinh γ - √(1+γ²)/2γ], 1 - γ²/10 for small γ (Keldysh, Sov. Phys. JETP 20, 1307 (1965)).
pub fn keldysh_exponent(gamma: f64) -> f64 {
    if gamma < 0.03 {
        let square = gamma * gamma;
        return 1.0 - square / 10.0 + 9.0 * square * square / 280.0 - 5.0 * square.powi(3) / 336.0;
    }
    let square = gamma * gamma;
    1.5 / gamma * ((1.0 + 0.5 / square) * gamma.asinh() - (1.0 + square).sqrt() / (2.0 * gamma))
}

/// A_m(γ) = (4/√(3π)) (1/|m|!) γ²/(1+γ²) Σ_{q ≥ ν} e^{-α(q-ν)} w_m(√(β(q-ν))), the sum over photon numbers, ν = Ip/ω (1 + 1/2γ²),
/// α = 2(asinh γ - γ/√(1+γ²)), β = 2γ/√(1+γ²); 1 for γ → 0, m = 0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PptSum {
    /// Keldysh parameter γ.
    pub gamma: f64,
    /// Ip/ω.
    pub photons: f64,
    /// |m|.
    pub m: u32,
}

impl PptSum {
    /// The sum, to rounding.
    pub fn value(&self) -> f64 {
        let square = self.gamma * self.gamma;
        let root = (1.0 + square).sqrt();
        let threshold = self.photons * (1.0 + 0.5 / square);
        // The difference cancels for small γ: 2γ³/3 - 3γ⁵/5 + ….
        let alpha = if self.gamma < 1e-2 {
            self.gamma.powi(3) * (2.0 / 3.0 - 0.6 * square)
        } else {
            2.0 * (self.gamma.asinh() - self.gamma / root)
        };
        let beta = 2.0 * self.gamma / root;
        let excess = threshold.floor() + 1.0 - threshold;
        let term = |q: f64| (-alpha * (excess + q)).exp() * w(self.m, (beta * (excess + q)).sqrt());
        let sum = summed(term, 40.0 / alpha);
        let factorial: f64 = (1..=self.m).map(f64::from).product();
        4.0 / (3.0 * PI).sqrt() / factorial * square / (1.0 + square) * sum
    }
}

/// Σ f(q) over q = 0, 1, … `last`, where f varies slowly but for its first terms: those as they stand, the rest by
/// Euler–Maclaurin's formula, its integral by Simpson's rule over ln q.
fn summed(f: impl Fn(f64) -> f64, last: f64) -> f64 {
    const FIRST: usize = 256;
    const STEP: f64 = 0.02;
    if last < 8.0 * FIRST as f64 {
        return (0..=last.ceil() as usize).map(|q| f(q as f64)).sum();
    }
    let from = FIRST as f64;
    let first: f64 = (0..FIRST).map(|q| f(q as f64)).sum();
    let panels = (((last / from).ln() / (2.0 * STEP)).ceil() as usize).max(1);
    let h = (last / from).ln() / (2 * panels) as f64;
    let at = |i: usize| {
        let q = from * (i as f64 * h).exp();
        q * f(q)
    };
    let integral: f64 =
        (0..panels).map(|i| h / 3.0 * (at(2 * i) + 4.0 * at(2 * i + 1) + at(2 * i + 2))).sum();
    first + integral + 0.5 * f(from) - (f(from + 0.5) - f(from - 0.5)) / 12.0
}

/// w_m(x) = e^{-x²} ∫₀ˣ e^{y²} (x² - y²)^m dy, Dawson's integral for m = 0.
fn w(m: u32, x: f64) -> f64 {
    let square = x * x;
    if x < 6.0 {
        // x^{2m+1} e^{-x²} Σ_k x^{2k}/k! ½B(k+½, m+1): every term is positive.
        let half = f64::from(m) + 1.5;
        let mut term: f64 = (1..=m).map(|j| f64::from(2 * j) / f64::from(2 * j + 1)).product();
        let mut sum = 0.0;
        let mut k = 0.0;
        while term > 1e-17 * sum {
            sum += term;
            term *= square / (k + 1.0) * (k + 0.5) / (k + half);
            k += 1.0;
        }
        return x.powi(2 * m as i32 + 1) * (-square).exp() * sum;
    }
    // (1/2x) Σ_k (2k-1)!!/(2k)!! (m+k)!/x^{2k}, down to its smallest term.
    let mut term: f64 = (1..=m).map(f64::from).product();
    let mut sum = 0.0;
    for k in 0..20 {
        sum += term;
        let k = f64::from(k);
        term *= (2.0 * k + 1.0) / (2.0 * k + 2.0) * (f64::from(m) + k + 1.0) / square;
    }
    sum / (2.0 * x)
}
