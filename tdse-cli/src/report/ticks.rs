//! Where an axis is marked, and what stands there.

use super::number::{at_step, power_of_ten};
use super::scale::{Kind, Range};

/// Marks of an axis.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Ticks {
    /// Values with their labels.
    pub major: Vec<(f64, String)>,
    /// Values marked without label.
    pub minor: Vec<f64>,
}

/// Ticks for an axis of this kind, about `wanted` of them labelled.
pub fn ticks(kind: Kind, range: Range, wanted: usize) -> Ticks {
    let decades = range.high.log10() - range.low.log10();
    match kind {
        Kind::Linear => linear(range, wanted),
        Kind::Degrees => degrees(range, wanted),
        Kind::Log if decades < 0.8 => linear(range, wanted),
        Kind::Log if decades < 2.0 => within_decades(range),
        Kind::Log => by_decades(range, wanted),
    }
}

/// Multiples of 1, 2, 4 or 5 times a power of ten.
fn linear(range: Range, wanted: usize) -> Ticks {
    let step = smallest_step(range, wanted, &[(1.0, 5), (2.0, 4), (5.0, 5)]);
    let major = multiples(range, step.0).into_iter().map(|v| (v, at_step(v, step.0))).collect();
    Ticks { major, minor: multiples(range, step.0 / f64::from(step.1)) }
}

/// Multiples of 15, 30, 45, 60, 90, 180 degrees; decimal steps where these are too coarse or too fine.
fn degrees(range: Range, wanted: usize) -> Ticks {
    let least = (range.high - range.low) / wanted.max(1) as f64;
    let steps = [(15.0, 3.0), (30.0, 2.0), (45.0, 3.0), (60.0, 4.0), (90.0, 3.0), (180.0, 4.0)];
    match steps.into_iter().find(|(step, _)| *step >= least * (1.0 - 1e-9)) {
        Some((step, parts)) if least > 10.0 => Ticks {
            major: multiples(range, step).into_iter().map(|v| (v, at_step(v, 1.0))).collect(),
            minor: multiples(range, step / parts),
        },
        _ => linear(range, wanted),
    }
}

/// Odd whole numbers, where the harmonics of a symmetric atom stand: 1, 11, 21, … or 1, 5, 9, ….
pub fn odd(range: Range, wanted: usize) -> Ticks {
    let (step, parts) = smallest_step(range, wanted, &[(1.0, 5), (2.0, 2), (4.0, 2)]);
    if step < 2.0 {
        return linear(range, wanted);
    }
    let from_one = Range { low: range.low - 1.0, high: range.high - 1.0 };
    let shifted = |step| multiples(from_one, step).into_iter().map(|v| v + 1.0);
    let major = shifted(step).map(|v| (v, at_step(v, 1.0))).collect();
    Ticks { major, minor: shifted((step / f64::from(parts)).max(2.0)).collect() }
}

/// The smallest step, one of the `stems` times a power of ten, that gives at most `wanted` intervals, and its parts.
fn smallest_step(range: Range, wanted: usize, stems: &[(f64, u32)]) -> (f64, u32) {
    let least = (range.high - range.low) / wanted.max(1) as f64;
    let power = 10_f64.powf(least.log10().floor());
    let next = [(stems[0].0 * 10.0, stems[0].1)];
    let candidates = stems.iter().chain(&next).map(|&(stem, parts)| (stem * power, parts));
    candidates.clone().find(|(step, _)| *step >= least * (1.0 - 1e-9)).unwrap_or((10.0 * power, 5))
}

fn multiples(range: Range, step: f64) -> Vec<f64> {
    let (first, last) = ((range.low / step - 1e-9).ceil(), (range.high / step + 1e-9).floor());
    let count = (last - first + 1.0).clamp(0.0, 1000.0) as usize;
    (0..count).map(|i| (first + i as f64) * step).collect()
}

/// Powers of ten, every one or every few.
fn by_decades(range: Range, wanted: usize) -> Ticks {
    let (first, last) = exponents(range);
    let length = (range.high.log10().floor() - range.low.log10().ceil()).max(0.0);
    let stride = [1, 2, 3, 4, 5, 10, 20, 50, 100]
        .into_iter()
        .find(|&stride| length / f64::from(stride) <= wanted.max(1) as f64)
        .unwrap_or(200);
    let inside = |v: &f64| (range.low * (1.0 - 1e-9)..=range.high * (1.0 + 1e-9)).contains(v);
    let powers = (first..=last).filter(|e| e.rem_euclid(stride) == 0);
    let major = powers.map(|e| (10_f64.powi(e), power_of_ten(e))).filter(|(v, _)| inside(v)).collect();
    let parts: &[i32] = if stride == 1 && length <= 3.0 { &[2, 3, 4, 5, 6, 7, 8, 9] } else { &[1] };
    let minor = (first..=last).flat_map(|e| parts.iter().map(move |&part| f64::from(part) * 10_f64.powi(e)));
    Ticks { major, minor: minor.filter(inside).collect() }
}

/// 1, 2 and 5 times powers of ten.
fn within_decades(range: Range) -> Ticks {
    let (first, last) = exponents(range);
    let mut ticks = Ticks::default();
    for exponent in first..=last {
        let power = 10_f64.powi(exponent);
        for part in 1..10 {
            let value = f64::from(part) * power;
            if !(range.low..=range.high).contains(&value) {
                continue;
            }
            match part {
                1 if !(-3..5).contains(&exponent) => ticks.major.push((value, power_of_ten(exponent))),
                1 | 2 | 5 => ticks.major.push((value, at_step(value, value))),
                _ => ticks.minor.push(value),
            }
        }
    }
    ticks
}

fn exponents(range: Range) -> (i32, i32) {
    (range.low.log10().floor() as i32, range.high.log10().ceil() as i32)
}
