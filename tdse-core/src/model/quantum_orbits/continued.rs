//! A field of pulses at complex times.
//!
//! Between the joints of its envelopes A is a sum of exponentials of quadratics, Σ c e^{r s + b s²} with s = t - t_c: sin² and ramps are
//! three exponentials each, a Gaussian less its cut is two, chirp and a Gaussian bend them. Each is entire, so the sum continues from
//! the piece of the real axis that it holds on to all complex times, and integrals do not depend on the way.

use std::f64::consts::{LN_2, PI};

use num_complex::Complex;

use super::NotAnalytic;
use crate::field::{Envelope, Field, GAUSSIAN_CUT, Pulse};
use crate::quadrature::gauss_6;

type C = Complex<f64>;

/// Phase of A² over which six Gauss points integrate to the last digits, rad.
const PHASE: f64 = 1.0;
/// Most such lengths from the real axis to a time: beyond, nothing is found.
const MOST: f64 = 100.0;

/// c e^{r s + b s²}, s = t - t_c.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Wave {
    amplitude: [C; 2],
    centre: f64,
    rate: C,
    bend: C,
}

impl Wave {
    fn at(&self, t: C) -> C {
        let s = t - self.centre;
        ((self.rate + self.bend * s) * s).exp()
    }
}

/// The piece of a field around one time, continued to complex times.
#[derive(Clone, Debug, PartialEq)]
pub struct Continued {
    waves: Vec<Wave>,
    /// Where on the real axis it is the field, a.u. of time.
    interval: [f64; 2],
    squares: Squares,
}

/// Ways to the integrals of A and A².
#[derive(Clone, Debug, PartialEq)]
enum Squares {
    /// In closed form where nothing bends: A² = Σ c e^{r t}.
    Closed(Vec<(C, C)>),
    /// From a table of both along the real axis, at `step` from the interval's start on, and on from there by quadrature.
    Table { step: f64, nodes: Vec<([C; 2], C)> },
}

impl Continued {
    /// The piece of `field` that holds the real time `time`.
    ///
    /// # Errors
    /// [`NotAnalytic::Sampled`].
    pub fn around(field: &Field, time: f64) -> Result<Self, NotAnalytic> {
        if field.sampled.is_some() {
            return Err(NotAnalytic::Sampled);
        }
        let (mut waves, mut interval) = (Vec::new(), [f64::NEG_INFINITY, f64::INFINITY]);
        for pulse in &field.pulses {
            let piece = Piece::of(&pulse.envelope, time - pulse.centre);
            interval = [
                interval[0].max(pulse.centre + piece.interval[0]),
                interval[1].min(pulse.centre + piece.interval[1]),
            ];
            waves.extend(of_pulse(pulse, &piece));
        }
        let squares = if waves.iter().all(|wave| wave.bend == C::default()) {
            // Counted from zero together, products of waves are waves.
            for wave in &mut waves {
                let turned = (-wave.rate * wave.centre).exp();
                wave.amplitude = wave.amplitude.map(|a| a * turned);
                wave.centre = 0.0;
            }
            Squares::Closed(products(&waves))
        } else {
            table(&waves, interval)
        };
        Ok(Self { waves, interval, squares })
    }

    /// The same field with its part across `direction` (a unit vector) multiplied by `part`.
    #[must_use]
    pub fn squeezed(&self, direction: [f64; 2], part: f64) -> Self {
        let [x, y] = direction;
        let mut waves = self.waves.clone();
        for wave in &mut waves {
            let [a, b] = wave.amplitude;
            let (along, across) = (a * x + b * y, (b * x - a * y) * part);
            wave.amplitude = [along * x - across * y, along * y + across * x];
        }
        let squares = match self.squares {
            Squares::Closed(_) => Squares::Closed(products(&waves)),
            Squares::Table { .. } => table(&waves, self.interval),
        };
        Self { waves, interval: self.interval, squares }
    }

    /// First and last real time at which it is the field.
    pub fn interval(&self) -> [f64; 2] {
        self.interval
    }

    /// A.
    pub fn potential(&self, t: C) -> [C; 2] {
        potential(&self.waves, t)
    }

    /// E = -dA/dt.
    pub fn field(&self, t: C) -> [C; 2] {
        self.sum(|wave| -(wave.rate + wave.bend * (t - wave.centre) * 2.0) * wave.at(t))
    }

    /// A primitive of A.
    pub fn integral(&self, t: C) -> [C; 2] {
        match &self.squares {
            Squares::Closed(_) => self.sum(|wave| primitive(wave.rate, t)),
            Squares::Table { step, nodes } => self.tabulated(*step, nodes, t).0,
        }
    }

    /// A primitive of A².
    pub fn square_integral(&self, t: C) -> C {
        match &self.squares {
            Squares::Closed(products) => products.iter().map(|(c, rate)| c * primitive(*rate, t)).sum(),
            Squares::Table { step, nodes } => self.tabulated(*step, nodes, t).1,
        }
    }

    fn sum(&self, part: impl Fn(&Wave) -> C) -> [C; 2] {
        summed(&self.waves, part)
    }

    /// From the node nearest to `t` straight on.
    fn tabulated(&self, step: f64, nodes: &[([C; 2], C)], t: C) -> ([C; 2], C) {
        let place = ((t.re - self.interval[0]) / step).round().clamp(0.0, (nodes.len() - 1) as f64);
        let from = self.interval[0] + place * step;
        let count = ((t - from).norm() / step).ceil().max(1.0);
        if count.is_nan() || count > MOST {
            return ([C::new(f64::NAN, 0.0); 2], C::new(f64::NAN, 0.0));
        }
        let part = (t - from) / count;
        (0..count as usize)
            .fold(nodes[place as usize], |sum, i| advanced(sum, &self.waves, part * i as f64 + from, part))
    }
}

fn summed(waves: &[Wave], part: impl Fn(&Wave) -> C) -> [C; 2] {
    waves.iter().fold([C::default(); 2], |[x, y], wave| {
        let value = part(wave);
        [x + wave.amplitude[0] * value, y + wave.amplitude[1] * value]
    })
}

fn potential(waves: &[Wave], t: C) -> [C; 2] {
    summed(waves, |wave| wave.at(t))
}

/// ∫e^{rt} dt.
fn primitive(rate: C, t: C) -> C {
    if rate.norm() < 1e-12 { t } else { (rate * t).exp() / rate }
}

/// A·A as a sum of waves, those that belong to both orders of a pair together.
fn products(waves: &[Wave]) -> Vec<(C, C)> {
    let pairs = (0..waves.len()).flat_map(|i| (0..=i).map(move |j| (i, j)));
    pairs
        .map(|(i, j)| {
            let (a, b) = (&waves[i], &waves[j]);
            let both = if i == j { 1.0 } else { 2.0 };
            let product = a.amplitude[0] * b.amplitude[0] + a.amplitude[1] * b.amplitude[1];
            (product * both, a.rate + b.rate)
        })
        .collect()
}

fn table(waves: &[Wave], [start, end]: [f64; 2]) -> Squares {
    let fastest = waves.iter().map(|wave| {
        let farthest = (start - wave.centre).abs().max((end - wave.centre).abs());
        wave.rate.norm() + 2.0 * wave.bend.norm() * farthest
    });
    let fastest = 2.0 * fastest.fold(0.0, f64::max);
    let count = ((end - start) * fastest / PHASE).ceil().max(1.0);
    let step = (end - start) / count;
    let mut nodes = vec![([C::default(); 2], C::default())];
    for i in 0..count as usize {
        let from = C::from(start + i as f64 * step);
        nodes.push(advanced(nodes[i], waves, from, C::from(step)));
    }
    Squares::Table { step, nodes }
}

/// ∫A and ∫A² carried on from `from` by `part`.
fn advanced(sum: ([C; 2], C), waves: &[Wave], from: C, part: C) -> ([C; 2], C) {
    gauss_6().fold(sum, |([x, y], square), (node, weight)| {
        let [ax, ay] = potential(waves, from + part * node);
        let weight = part * weight;
        ([x + ax * weight, y + ay * weight], square + (ax * ax + ay * ay) * weight)
    })
}

/// One analytic piece of an envelope: f = Σ weight e^{rate τ + bend τ²} within `interval`.
struct Piece {
    interval: [f64; 2],
    parts: Vec<(C, C, f64)>,
}

impl Piece {
    fn of(envelope: &Envelope, tau: f64) -> Self {
        let half = envelope.half_length();
        let side = tau.signum();
        if tau.abs() > half {
            let interval = if side > 0.0 { [half, f64::INFINITY] } else { [f64::NEG_INFINITY, -half] };
            return Self { interval, parts: Vec::new() };
        }
        let constant = |weight: f64| (C::from(weight), C::default(), 0.0);
        let whole = [-half, half];
        match *envelope {
            Envelope::Sin2 { duration } => {
                Self { interval: whole, parts: raised_cosine(0.0, 2.0 * PI / duration) }
            }
            Envelope::Gaussian { fwhm } => {
                let scale = 1.0 / (1.0 - GAUSSIAN_CUT);
                let bell = (C::from(scale), C::default(), -2.0 * LN_2 / (fwhm * fwhm));
                Self { interval: whole, parts: vec![bell, constant(-GAUSSIAN_CUT * scale)] }
            }
            Envelope::FlatTop { plateau, .. } if tau.abs() <= 0.5 * plateau => {
                Self { interval: [-0.5 * plateau, 0.5 * plateau], parts: vec![constant(1.0)] }
            }
            Envelope::FlatTop { ramp, plateau } => {
                let ends = [side * 0.5 * plateau, side * half];
                let interval = [ends[0].min(ends[1]), ends[0].max(ends[1])];
                Self { interval, parts: raised_cosine(side * 0.5 * plateau, PI / ramp) }
            }
        }
    }
}

/// cos²(q(τ - top)/2) = ½ + ¼e^{iq(τ - top)} + ¼e^{-iq(τ - top)}.
fn raised_cosine(top: f64, q: f64) -> Vec<(C, C, f64)> {
    let turning = |q: f64| (0.25 * C::cis(-q * top), C::new(0.0, q), 0.0);
    vec![(C::from(0.5), C::default(), 0.0), turning(q), turning(-q)]
}

/// A of one pulse, see [`Pulse`]: every part of its envelope times either half of sine and cosine.
fn of_pulse(pulse: &Pulse, piece: &Piece) -> Vec<Wave> {
    let a = pulse.peak_field / pulse.frequency / (1.0 + pulse.ellipticity.powi(2)).sqrt();
    let (sin, cos) = pulse.angle.sin_cos();
    let half = |sign: f64| {
        let phase = 0.5 * a * C::cis(sign * pulse.phase);
        let (major, minor) = (phase * C::new(0.0, sign), phase * pulse.ellipticity);
        let amplitude = [major * cos - minor * sin, major * sin + minor * cos];
        piece.parts.iter().map(move |&(weight, rate, bend)| Wave {
            amplitude: amplitude.map(|part| part * weight),
            centre: pulse.centre,
            rate: rate + C::new(0.0, sign * pulse.frequency),
            bend: C::new(bend, 0.5 * sign * pulse.chirp),
        })
    };
    half(1.0).chain(half(-1.0)).collect()
}
