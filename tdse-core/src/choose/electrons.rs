//! Numerics for an electron spectrum, on top of the common rules: the box that nothing leaves, or the absorber that is far
//! enough away, and what either costs. Constants are common practice, checked by the tests of the shipped scenarios.

use std::f64::consts::PI;

use super::plane;
use super::rules::{Strength, points_of};
use super::{AtomFacts, Choice, Finding, Knob, PinnedAbsorber, Verdict, Wish, choose, ladder};
use crate::absorber::slowest_momentum;
use crate::outgoing::{TailLeft, sampling_interval, tail_left};
use crate::problem::{ElectronMethod, Numerics, Problem};

/// Work of projecting on one scattering state, per grid point (benches/electrons.rs), in units of the propagation's per
/// point, binary logarithm of the number of points, and step.
const PROJECTION: f64 = 16.0;
/// Work of making the wave that one momentum is collected with, per grid point, in the same units.
const WAVE: f64 = 50.0;
/// Work of one overlap with it, per point of the wave, in the same units.
const OVERLAP: f64 = 1.0;
/// Largest relative amplitude of false sidebands that the Coulomb tail beyond a chosen absorber may make.
const SIDEBAND: f64 = 0.02;
/// Largest shift by the same tail, in photons.
const SHIFT: f64 = 0.01;
/// Largest energy of a classical electron after backscattering and some beyond, in units of Up (10.007: Paulus et al.,
/// J. Phys. B 27, L703 (1994)).
const BACKSCATTERED: f64 = 12.0;

/// Energies that a spectrum is written at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Energies {
    /// How many.
    pub count: usize,
    /// The last one, hartree.
    pub largest: f64,
}

impl Energies {
    /// Momentum of the last one, 1/bohr.
    pub(super) fn momentum(self) -> f64 {
        (2.0 * self.largest).sqrt()
    }
}

/// What is asked of an electron spectrum.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Electrons {
    /// Energies it is written at.
    pub energies: Energies,
    /// Energy of the fastest electrons that matter, hartree; see [`fastest_electron`].
    pub fastest: f64,
}

/// Energy up to which electrons matter, hartree: 12 Up, or one photon in the field of the others, and a photon more.
pub fn fastest_electron(problem: &Problem, facts: &AtomFacts) -> f64 {
    let strength = Strength::of(&problem.field);
    let potential = strength.vector_potential;
    let free = (2.0 * (strength.photon + facts.highest_energy).max(0.0)).sqrt();
    (0.25 * BACKSCATTERED * potential * potential).max(0.5 * (potential + free).powi(2)) + strength.photon
}

/// Numerics for an electron spectrum by this method; what the user did not pin is chosen.
///
/// In two dimensions the amplitude is mapped, and what is still in the box at the field's end flies on until it is out: a trailing
/// time that the other rules do not look at, since what comes back by then makes no harmonics.
pub fn choose_for_electrons(wish: &Wish, electrons: &Electrons, method: ElectronMethod) -> Choice {
    let strength = Strength::of(&wish.problem.field);
    let plane = wish.facts.dimensions == 2;
    let mut pins = *wish.pins;
    if plane {
        pins.trailing_time = None;
    }
    if pins.absorber.is_none() {
        pins.absorber = Some(match method {
            ElectronMethod::ScatteringStates => PinnedAbsorber::None,
            ElectronMethod::OutgoingAmplitude if plane => PinnedAbsorber::Round,
            ElectronMethod::OutgoingAmplitude => PinnedAbsorber::Smooth,
        });
    }
    let plain = choose(&Wish { pins: &pins, ..*wish });
    let held = electrons.energies.momentum() + strength.vector_potential;
    let is_finer = PI / held < plain.numerics.grid.x.spacing;
    pins.spacing = pins.spacing.or_else(|| is_finer.then(|| ladder::at_most(PI / held)));
    let half = match method {
        ElectronMethod::ScatteringStates => flight(wish, electrons, &strength),
        ElectronMethod::OutgoingAmplitude => quiet(wish.problem, &strength) + plain.numerics.absorber.width(),
    };
    let half = half.max(0.5 * plain.numerics.grid.x.extent());
    pins.extent.get_or_insert(2.0 * half);
    let mut choice = choose(&Wish { pins: &pins, ..*wish });
    choice.findings.extend(unresolved(electrons.energies, &choice.numerics));
    for reason in &mut choice.reasons {
        let own = match reason.knob {
            Knob::Spacing if wish.pins.spacing.is_none() && is_finer => {
                format!(
                    "momenta up to {held:.2} / bohr, of the fastest electrons of the spectrum in the field"
                )
            }
            Knob::Extent if wish.pins.extent.is_none() => extent_reason(&choice.numerics, electrons),
            Knob::Absorber if wish.pins.absorber.is_none() && method == ElectronMethod::ScatteringStates => {
                "none: nothing comes near the edge".into()
            }
            Knob::Absorber if wish.pins.absorber.is_none() => absorber_reason(wish.problem, &choice.numerics),
            _ => continue,
        };
        reason.why = own;
    }
    if plane {
        plane::fly_out(wish, method, electrons.energies, &mut choice);
    }
    choice
}

/// Work of a run and of its electrons, in units of the propagation's per point, binary logarithm of the number of points,
/// and step: `[propagation, electrons]`.
pub fn electron_work(
    problem: &Problem,
    numerics: &Numerics,
    energies: Energies,
    method: ElectronMethod,
) -> [f64; 2] {
    let (start, end) = problem.field.interval();
    let steps = ((end - start + numerics.trailing_time) / numerics.time_step).max(1.0);
    let (points, momenta) = (numerics.grid.len() as f64, energies.count as f64);
    let propagation = steps * points * points.log2();
    if numerics.grid.dimensions() == 2 {
        return [propagation, plane::map_work(problem, numerics, energies) * propagation];
    }
    let projection = PROJECTION * momenta * points;
    let electrons = match method {
        ElectronMethod::ScatteringStates => projection,
        ElectronMethod::OutgoingAmplitude => {
            let interval = sampling_interval(energies.momentum(), numerics.time_step) as f64;
            let overlaps = OVERLAP * momenta * wave_points(problem, numerics) * steps / interval;
            projection + WAVE * momenta * points + overlaps
        }
    };
    [propagation, electrons]
}

/// Memory that electrons need beside a run, bytes.
pub fn electron_bytes(
    problem: &Problem,
    numerics: &Numerics,
    energies: Energies,
    method: ElectronMethod,
) -> f64 {
    if numerics.grid.dimensions() == 2 {
        return plane::map_bytes(problem, numerics, energies);
    }
    // Intervals of 24 bytes, a few per point, and amplitudes; waves of 16 bytes per point.
    let mesh = 200.0 * numerics.grid.len() as f64 + 100.0 * energies.count as f64;
    match method {
        ElectronMethod::ScatteringStates => mesh,
        ElectronMethod::OutgoingAmplitude => {
            mesh + 16.0 * energies.count as f64 * wave_points(problem, numerics)
        }
    }
}

/// What the ion's pull beyond the absorber leaves uncorrected in a spectrum by `outgoing_amplitude`.
pub fn tail_of(problem: &Problem, numerics: &Numerics) -> TailLeft {
    let strength = Strength::of(&problem.field);
    let inner = 0.5 * numerics.grid.x.extent() - numerics.absorber.width();
    tail_left(problem.potential.far_charge(), inner, strength.frequency(), strength.quiver)
}

/// How far from zero the fastest electrons come, bohr.
fn flight(wish: &Wish, electrons: &Electrons, strength: &Strength) -> f64 {
    let (start, end) = wish.problem.field.interval();
    let duration = end - start + wish.pins.trailing_time.unwrap_or(0.0);
    wish.facts.reach + (2.0 * electrons.fastest).sqrt() * duration + strength.quiver + 20.0
}

/// Distance of the absorber at which the ion's pull beyond it is weak enough, bohr.
pub(super) fn quiet(problem: &Problem, strength: &Strength) -> f64 {
    let at_one = tail_left(problem.potential.far_charge(), 1.0, strength.frequency(), strength.quiver);
    (at_one.sideband / SIDEBAND).sqrt().max((at_one.shift / (SHIFT * strength.frequency())).cbrt())
}

/// Points of the waves of both sides that a sample overlaps with.
fn wave_points(problem: &Problem, numerics: &Numerics) -> f64 {
    let (width, half) = (numerics.absorber.width(), 0.5 * numerics.grid.x.extent());
    let quiver = Strength::of(&problem.field).quiver.min(0.5 * (half - width).max(0.0));
    2.0 * (width + 2.0 * quiver) / numerics.grid.x.spacing
}

/// A spacing at which the fastest electrons of the axis are not on the grid.
pub(super) fn unresolved(energies: Energies, numerics: &Numerics) -> Option<Finding> {
    let (held, wanted) = (numerics.grid.x.largest_momentum(), energies.momentum());
    (held < wanted).then(|| Finding {
        knob: Some(Knob::Spacing),
        verdict: Verdict::Inadequate,
        reason: format!(
            "holds momenta up to {held:.2} / bohr where the fastest electrons of the spectrum have {wanted:.2} / bohr"
        ),
        allowed: format!("at most {:.4} bohr, or a lower max_energy of the electrons", PI / wanted),
        passes: ladder::at_most(PI / wanted),
    })
}

fn extent_reason(numerics: &Numerics, electrons: &Electrons) -> String {
    let (half, points) = (0.5 * numerics.grid.x.extent(), points_of(&numerics.grid));
    match numerics.absorber.width() {
        0.0 => format!(
            "nothing leaves: electrons of {:.2} hartree come up to {half:.0} bohr far in the whole run; {points}",
            electrons.fastest
        ),
        width => format!(
            "{:.0} bohr to each side for the bound state, returning electrons, and the ion's pull to become weak, and the \
             absorber, {width:.0} bohr; {points}",
            half - width
        ),
    }
}

fn absorber_reason(problem: &Problem, numerics: &Numerics) -> String {
    let slowest = slowest_momentum(numerics.absorber.width());
    let pull = match (numerics.grid.dimensions(), problem.potential.far_charge()) {
        (2, 0.0) => "the ion has no Coulomb tail beyond it".into(),
        (2, _) => {
            "the ion's pull beyond it shifts none of them, but may change how many there are at an energy"
                .into()
        }
        _ => {
            let left = tail_of(problem, numerics);
            format!(
                "the ion's pull beyond it is corrected for, but for a shift of {:.1e} hartree and sidebands of relative amplitude {:.1e}",
                left.shift, left.sideband
            )
        }
    };
    format!("lets out electrons faster than {slowest:.3} / bohr cleanly; {pull}")
}
