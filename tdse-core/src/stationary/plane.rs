//! Bound states of a round atom as a two-dimensional grid represents it, by symmetry.
//!
//! The grid keeps the mirrors x → -x and y → -y exactly, so a state lives on a quarter of the plane in one of four
//! sectors. A state is first found on the part of the grid that it fills, then checked, and where needed improved, on the
//! whole grid.

use nalgebra::DVector;
use num_complex::Complex;

use super::bound::{ITERATIONS, Operator, RESIDUAL, improved};
use super::level::rough_radial_level;
use super::sector::{Quarter, Sector};
use super::{Level, RadialFunction, StationaryError, radial_level};
use crate::grid::{Axis, Grid};
use crate::potential::Potential;
use crate::problem::{Parity, PlaneLabel, Symmetry};

/// Part of the grid a state is first found on, in units of the distance where it has decayed by e⁻²⁰.
const FILLED: f64 = 1.5;

/// A bound state on the plane. It is kept on a quarter of it, which states of angular momentum m and -m share.
#[derive(Clone, Debug, PartialEq)]
pub struct PlaneState {
    /// Which one.
    pub label: PlaneLabel,
    /// Energy of the grid's Hamiltonian, hartree; of R e^{imφ} with m ≠ 0 the mean of its two real parts.
    pub energy: f64,
    /// Real part; ∫|ψ|² = 1, positive towards x → +∞ (or towards the first quadrant).
    real: Quarter,
    /// Imaginary part, where it has one.
    imaginary: Option<Quarter>,
}

impl PlaneState {
    /// A real state.
    pub(super) fn real(label: PlaneLabel, energy: f64, real: Quarter) -> Self {
        Self { label, energy, real, imaginary: None }
    }

    /// ψ at point `i` of the grid, x fastest.
    pub fn at(&self, i: usize) -> Complex<f64> {
        Complex::new(self.real.at(i), self.imaginary.as_ref().map_or(0.0, |imaginary| imaginary.at(i)))
    }

    /// ψ as complex numbers, shape `[ny, nx]`.
    pub fn wave_function(&self) -> Vec<Complex<f64>> {
        (0..self.real.points()).map(|i| self.at(i)).collect()
    }

    /// ⟨state|ψ⟩ over the grid's cells of size `cell`.
    ///
    /// # Panics
    /// If the lengths differ.
    pub fn overlap(&self, psi: &[Complex<f64>], cell: f64) -> Complex<f64> {
        assert_eq!(psi.len(), self.real.points(), "wave function and state have the same length");
        let with =
            |part: &Quarter| psi.iter().enumerate().map(|(i, p)| p * part.at(i)).sum::<Complex<f64>>() * cell;
        with(&self.real) - Complex::<f64>::i() * self.imaginary.as_ref().map_or(Complex::default(), with)
    }
}

/// The bound states of a round `potential` that `labels` name, on a two-dimensional grid.
///
/// # Errors
/// [`StationaryError::NoSuchState`] where one is not bound, [`StationaryError::NotConverged`].
///
/// # Panics
/// If `grid` is not two-dimensional or has odd lengths.
pub fn plane_states(
    potential: &Potential,
    grid: &Grid,
    labels: &[PlaneLabel],
) -> Result<Vec<PlaneState>, StationaryError> {
    let y = grid.y.expect("a plane has two dimensions");
    assert!(grid.x.points.is_multiple_of(2) && y.points.is_multiple_of(2), "even numbers of points");
    let mut found = Found { potential, axes: [grid.x, y], parts: Vec::new() };
    labels.iter().map(|label| found.state(*label)).collect()
}

/// The grid-free level that `label` names.
///
/// # Errors
/// [`StationaryError::NoSuchState`] where it is not bound, [`StationaryError::NotConverged`].
pub fn plane_level(potential: &Potential, label: PlaneLabel) -> Result<Level, StationaryError> {
    let part = match label.symmetry {
        Symmetry::Angular(m) => Part { angular: m.unsigned_abs(), number: label.number, wave: Wave::Cosine },
        Symmetry::Mirror(parity) => nth_of_sector(potential, parity, label.number)?,
    };
    radial_level(potential, part.angular, part.number)
}

/// Grid-free levels of angular momentum m and -m by rising energy, m ≥ 0 first: the `count` lowest at least, degenerate
/// partners included; fewer where fewer are bound.
///
/// # Errors
/// [`StationaryError::NotConverged`].
pub fn lowest_plane_levels(
    potential: &Potential,
    count: usize,
) -> Result<Vec<(PlaneLabel, Level)>, StationaryError> {
    let mut found: Vec<(PlaneLabel, Level)> = Vec::new();
    for m in 0.. {
        let before = found.len();
        for number in 0..count {
            let level = match radial_level(potential, m, number) {
                Ok(level) => level,
                Err(StationaryError::NoSuchState { .. }) => break,
                Err(error) => return Err(error),
            };
            // Levels of one m rise, and so do the lowest of every m.
            if found.len() >= count && found.iter().filter(|f| f.1.energy <= level.energy).count() >= count {
                break;
            }
            let signs = if m == 0 { &[1][..] } else { &[1, -1] };
            found.extend(
                signs
                    .iter()
                    .map(|sign| (PlaneLabel { symmetry: Symmetry::Angular(sign * m as i32), number }, level)),
            );
        }
        if found.len() == before {
            break;
        }
    }
    found.sort_by(|a, b| a.1.energy.total_cmp(&b.1.energy));
    let last = found.get(count.saturating_sub(1)).map_or(f64::INFINITY, |f| f.1.energy);
    found.retain(|f| f.1.energy <= last);
    Ok(found)
}

/// Real states found so far, which several labels may name.
struct Found<'a> {
    potential: &'a Potential,
    axes: [Axis; 2],
    parts: Vec<(Part, f64, Quarter)>,
}

impl Found<'_> {
    fn state(&mut self, label: PlaneLabel) -> Result<PlaneState, StationaryError> {
        let (m, number) = match label.symmetry {
            Symmetry::Angular(m) => (m, label.number),
            Symmetry::Mirror(parity) => {
                let (energy, real) = self.part(nth_of_sector(self.potential, parity, label.number)?)?;
                return Ok(PlaneState::real(label, energy, real));
            }
        };
        let part = |wave| Part { angular: m.unsigned_abs(), number, wave };
        let (energy, real) = self.part(part(Wave::Cosine))?;
        if m == 0 {
            return Ok(PlaneState::real(label, energy, real));
        }
        let (other, imaginary) = self.part(part(Wave::Sine))?;
        let scale = 0.5f64.sqrt();
        Ok(PlaneState {
            label,
            energy: 0.5 * (energy + other),
            real: real.times(scale),
            imaginary: Some(imaginary.times(scale * f64::from(m.signum()))),
        })
    }

    fn part(&mut self, part: Part) -> Result<(f64, Quarter), StationaryError> {
        if let Some((_, energy, quarter)) = self.parts.iter().find(|found| found.0 == part) {
            return Ok((*energy, quarter.clone()));
        }
        let (energy, quarter) = real_state(self.potential, self.axes, part)?;
        self.parts.push((part, energy, quarter.clone()));
        Ok((energy, quarter))
    }
}

/// cos mφ or sin mφ.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Wave {
    Cosine,
    Sine,
}

/// R(r) cos mφ or R(r) sin mφ, with `number` nodes of R.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Part {
    angular: u32,
    number: usize,
    wave: Wave,
}

impl Part {
    fn parity(&self) -> [Parity; 2] {
        use Parity::{Even, Odd};
        match (self.wave, self.angular.is_multiple_of(2)) {
            (Wave::Cosine, true) => [Even, Even],
            (Wave::Cosine, false) => [Odd, Even],
            (Wave::Sine, true) => [Odd, Odd],
            (Wave::Sine, false) => [Even, Odd],
        }
    }

    fn value(&self, radial: &RadialFunction, x: f64, y: f64) -> f64 {
        let angle = f64::from(self.angular) * y.atan2(x);
        radial.value(x.hypot(y)) * if self.wave == Wave::Cosine { angle.cos() } else { angle.sin() }
    }

    /// The same wave at the next angular momentum of the sector.
    fn next(&self) -> Self {
        Self { angular: self.angular + 2, number: 0, ..*self }
    }
}

/// First angular momentum of a sector.
fn first_of(parity: [Parity; 2]) -> Part {
    use Parity::{Even, Odd};
    let (angular, wave) = match parity {
        [Even, Even] => (0, Wave::Cosine),
        [Odd, Even] => (1, Wave::Cosine),
        [Odd, Odd] => (2, Wave::Sine),
        [Even, Odd] => (1, Wave::Sine),
    };
    Part { angular, number: 0, wave }
}

/// State `number` of a sector by rising energy.
fn nth_of_sector(potential: &Potential, parity: [Parity; 2], number: usize) -> Result<Part, StationaryError> {
    let mut found: Vec<(f64, Part)> = Vec::new();
    let mut part = first_of(parity);
    loop {
        let before = found.len();
        // Of this angular momentum no more than `number` + 1 can count.
        for n in 0..=number {
            match radial_level(potential, part.angular, n) {
                Ok(level) => found.push((level.energy, Part { number: n, ..part })),
                Err(StationaryError::NoSuchState { .. }) => break,
                Err(error) => return Err(error),
            }
        }
        found.sort_by(|a, b| a.0.total_cmp(&b.0));
        let last = found.get(number).map(|f| f.0);
        part = part.next();
        match (last, radial_level(potential, part.angular, 0)) {
            (Some(energy), Ok(level)) if level.energy <= energy => {}
            (Some(_), _) => return Ok(found[number].1),
            (None, Err(_)) if found.len() == before => {
                return Err(StationaryError::NoSuchState { number, bound: found.len() });
            }
            (None, _) => {}
        }
    }
}

/// Energy and values, normalised, of one real state.
fn real_state(potential: &Potential, axes: [Axis; 2], part: Part) -> Result<(f64, Quarter), StationaryError> {
    let level = radial_level(potential, part.angular, part.number)?;
    let below = not_above(potential, part, level.energy, level.reach)?;
    let crop = |axis: Axis| {
        let points = 2 * (FILLED * level.reach / axis.spacing).ceil() as usize + 2;
        Axis { points: points.min(axis.points), ..axis }
    };
    let cropped = round(potential, axes.map(crop), part);
    let sample = |(part, radial): &(Part, RadialFunction)| cropped.sample(|x, y| part.value(radial, x, y));
    let guesses: Vec<DVector<f64>> = below.iter().map(sample).collect();
    let wanted = guesses[0].clone();
    let (states, energies, _) = improved(&cropped, guesses, ITERATIONS);
    let at = nearest(&states, &wanted);
    let whole = round(potential, axes, part);
    let mut psi = whole.padded(&cropped, &states[at]);
    let mut energy = energies[at];
    let mut residual = whole.residual(&psi, energy);
    if residual > whole.accepted() {
        let start = states.iter().map(|s| whole.padded(&cropped, s)).collect();
        let (better, energies, _) = improved(&whole, start, ITERATIONS);
        let at = nearest(&better, &psi);
        (psi, energy) = (better[at].clone(), energies[at]);
        residual = whole.residual(&psi, energy);
    }
    if residual > whole.accepted() || residual.is_nan() {
        return Err(StationaryError::NotConverged {
            what: "a bound state on the plane",
            reached: residual,
            wanted: RESIDUAL,
            unit: "hartree",
        });
    }
    let sign = whole.padded(&cropped, &wanted).dot(&psi).signum();
    Ok((energy, whole.normalised(&(psi * sign))))
}

/// The sector of a state of a round atom.
fn round(potential: &Potential, axes: [Axis; 2], part: Part) -> Sector {
    let at = |axis: Axis, i: usize| (i as f64 + 0.5) * axis.spacing;
    Sector::new(axes, part.parity(), |i, j| potential.value(at(axes[0], i).hypot(at(axes[1], j))))
}

/// The state wanted first, then every other state of its sector that is not above it.
fn not_above(
    potential: &Potential,
    part: Part,
    energy: f64,
    reach: f64,
) -> Result<Vec<(Part, RadialFunction)>, StationaryError> {
    let radial = |p: Part| Ok((p, rough_radial_level(potential, p.angular, p.number, FILLED * reach)?.1));
    let mut all = vec![radial(part)?];
    let mut other = first_of(part.parity());
    loop {
        for number in 0.. {
            let candidate = Part { number, ..other };
            match radial_level(potential, other.angular, number) {
                Ok(level) if level.energy <= energy + 1e-6 * energy.abs() => {
                    if candidate != part {
                        all.push(radial(candidate)?);
                    }
                }
                Ok(_) | Err(StationaryError::NoSuchState { .. }) if number > 0 => break,
                Ok(_) | Err(StationaryError::NoSuchState { .. }) => return Ok(all),
                Err(error) => return Err(error),
            }
        }
        other = other.next();
    }
}

fn nearest(states: &[DVector<f64>], wanted: &DVector<f64>) -> usize {
    let overlap = |i: &usize| states[*i].dot(wanted).abs();
    (0..states.len()).max_by(|i, j| overlap(i).total_cmp(&overlap(j))).unwrap_or(0)
}
