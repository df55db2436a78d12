//! The rules: what an accuracy asks of grid, absorber and step. Every constant is common practice, checked by the tests
//! of the shipped scenarios, with no single source unless one is named.

use std::f64::consts::{FRAC_PI_2, TAU};

use num_complex::Complex;

use super::{Knob, Pins, Reason, Wish};
use crate::absorber::{reflection, width_times_momentum};
use crate::field::{Field, Pulse};
use crate::grid::Grid;
use crate::potential::Potential;
use crate::problem::{Absorber, Gauge, Numerics, Scheme};
use crate::step::resonant_step;

/// Narrowest absorber worth having, bohr.
pub(super) const NARROWEST_ABSORBER: f64 = 20.0;
/// Amplitude that an absorber may reflect of the slowest electrons that count, in units of the accuracy. The harmonic
/// plateau is made by electrons that return, so what is reflected errs it by its own amplitude, however small the plateau
/// is beside the fundamental; such slow ones are a part of them (measured on those of the tests' twenty configurations that have
/// an affordable reference).
const REFLECTED: f64 = 2.0;
/// Momentum, in units of the slowest that comes back, of which it may reflect that much: those that are slower carry less of
/// the plateau (measured there too, and on the shipped scenarios).
const HELD: f64 = 1.5;
/// Digits by which the bound state's momenta are held beyond the accuracy, in e-folds (measured there too).
const SPARE: f64 = 3.0;
/// Shift of the bound state by a kink, in units of J² h⁵, measured on four screened atoms.
const KINK: f64 = 1.1e-3;
/// The same for a round soft core in two dimensions, where yields err by up to 1100 e^{-2kℓ}: a square, as the energy's error is
/// (measured on soft cores of 0.8 and 1.4 bohr, and of charge 2, at spacings from 0.3 to 1.2 bohr; other atoms obey no such law).
const ROUND_SPARE: f64 = 7.0;
/// Samples of a field over which an oscillator's swing is summed: a resonance is seen by any number of them.
const SWING_SAMPLES: usize = 512;
/// Part of the resonant step that is used. In two dimensions it is that of an axis: waves in the corners of the momentum grid
/// resonate at shorter steps, but hold too little to be seen (measured at up to twice their resonance: no difference).
const BELOW_RESONANCE: f64 = 0.9;
/// A box that nothing leaves keeps its outermost sixteenths empty: there the watch looks.
const OUTER: f64 = 8.0 / 7.0;
/// Largest momentum of a classical electron that returns, √(3.1731/2), in units of the vector potential's maximum.
const RETURNING: f64 = 1.2596;
/// Largest momentum of a classical electron after backscattering, in units of the vector potential's maximum:
/// drift √5 (10 Up; Paulus et al., J. Phys. B 27, L703 (1994)) plus quiver 1.
const FASTEST: f64 = 3.24;

/// Distance an electron that stays bound by -Z/r comes within a time: the fall from rest at infinity, E = 0, reversed
/// (textbook), bohr.
fn bound_flight(charge: f64, duration: f64) -> f64 {
    (4.5 * charge * duration * duration).cbrt()
}

/// Accuracy of the ionization probability with the absorber just where electrons that stay bound come, taken to go with the third
/// power of the distance (measured on soft cores: within the accuracies of `tests/probabilities.rs` with half to one and a half
/// orders to spare, and at half the distance 1e-4 for the most ionized).
const BOUND_ACCURACY: f64 = 1e-4;

/// Maxima of the field over all envelopes, free of phases and delays.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Strength {
    /// Σ E0, a.u.
    pub(super) field: f64,
    /// Σ E0/ω, a.u.
    pub(super) vector_potential: f64,
    /// Σ E0/ω², bohr.
    pub(super) quiver: f64,
    /// Highest photon energy, hartree.
    pub(super) photon: f64,
}

impl Strength {
    pub(super) fn of(field: &Field) -> Self {
        let mut sum = Self { field: 0.0, vector_potential: 0.0, quiver: 0.0, photon: 0.0 };
        for pulse in &field.pulses {
            sum.field += pulse.peak_field;
            sum.vector_potential += pulse.peak_field / pulse.frequency;
            sum.quiver += pulse.quiver_amplitude();
            let chirped = pulse.frequency + pulse.chirp.abs() * pulse.envelope.half_length();
            sum.photon = sum.photon.max(chirped);
        }
        if let Some(sampled) = &field.sampled {
            sum.add_table(sampled);
        }
        sum
    }

    /// A/α of the whole field: its frequency where there is one pulse, hartree; never zero.
    pub(super) fn frequency(&self) -> f64 {
        if self.quiver > 0.0 { self.vector_potential / self.quiver } else { 1.0 }
    }

    /// Largest |E| and |A| of a table, and the largest excursion ∫A from the middle of its range.
    fn add_table(&mut self, sampled: &crate::field::SampledField) {
        let alone = Field { pulses: Vec::new(), sampled: Some(sampled.clone()) };
        let (start, end) = alone.interval();
        let count = 4096;
        let h = (end - start) / f64::from(count);
        let (mut field, mut potential) = (0.0f64, 0.0f64);
        let (mut place, mut low, mut high) = ([0.0f64; 2], [0.0f64; 2], [0.0f64; 2]);
        for i in 0..=count {
            let (a, e) = alone.potential_and_field(start + f64::from(i) * h);
            (field, potential) = (field.max(e[0].hypot(e[1])), potential.max(a[0].hypot(a[1])));
            for d in 0..2 {
                place[d] += a[d] * h;
                (low[d], high[d]) = (low[d].min(place[d]), high[d].max(place[d]));
            }
        }
        self.field += field;
        self.vector_potential += potential;
        self.quiver += 0.5 * (high[0] - low[0]).hypot(high[1] - low[1]);
        self.photon = self.photon.max(if potential > 0.0 { field / potential } else { 0.0 });
    }
}

/// What the accuracy asks for, before ladders and pins.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Needs {
    /// Largest spacing, bohr.
    pub(super) spacing: f64,
    /// Momentum the grid must hold, 1/bohr.
    pub(super) momentum: f64,
    /// Distance from zero the atom and its returning electrons take, bohr.
    pub(super) atom_reach: f64,
    /// Distance the fastest electrons come in the whole run, bohr: needed without an absorber.
    pub(super) flight: f64,
    /// Absorber's width per side, bohr; zero where none is needed.
    pub(super) absorber_width: f64,
    /// Half of the box within an absorber, for the harmonics, bohr.
    inner: f64,
    /// Distance that bound electrons come, where ionization is asked for, bohr.
    diffuse: f64,
    /// Momentum of the slowest electrons that count, [`HELD`] times that of those that go to the absorber and back within the
    /// run, 1/bohr.
    pub(super) slowest: f64,
    /// Binding energy, hartree.
    pub(super) binding: f64,
    /// Frequency of small oscillations at the bottom of the potential, hartree.
    pub(super) stiffness: f64,
    /// Largest photon energy to resolve in time, hartree.
    pub(super) photon: f64,
    /// How fast the potential changes for the fastest electron that returns, hartree: its momentum √(2·3.17 Up) over the
    /// analytic length.
    passing: f64,
    /// Whether anything can leave.
    leaves: bool,
    accuracy: f64,
    strength: Strength,
}

impl Needs {
    pub(super) fn of(wish: &Wish) -> Self {
        let potential = &wish.problem.potential;
        let strength = Strength::of(&wish.problem.field);
        let digits = -wish.accuracy.ln();
        let (start, end) = wish.problem.field.interval();
        let duration = end - start + wish.pins.trailing_time.unwrap_or(0.0);
        let confined = potential.is_confining();
        let depth = if confined { wish.facts.highest_energy } else { -potential.value(bottom(potential)) };
        let free = (2.0 * (strength.photon + wish.facts.highest_energy).max(0.0)).sqrt();
        let fastest = FASTEST * strength.vector_potential + free;
        let swing = if confined { swing(&wish.problem.field, stiffness(potential)) } else { 0.0 };
        let analytic = wish.facts.analytic_length;
        let in_well = (2.0 * depth.max(0.0)).sqrt();
        let at_rest = match (wish.facts.dimensions, potential) {
            (2, Potential::SoftCoulomb { .. }) => in_well.max(0.5 * (digits + ROUND_SPARE) / analytic),
            _ => in_well + (digits + SPARE) / analytic,
        };
        let momentum = at_rest.max(fastest + 0.4 * digits / analytic) + swing;
        let stiffness = stiffness(potential);
        let kink = match wish.facts.dimensions {
            1 => {
                // Yields go with the ionization energy as e^{-4κ/E0} does, or as the phase of an electron that returns, within a
                // period in what counts (measured on the longest wave of the tests' twenty configurations), or of the whole run.
                let period = TAU / strength.frequency();
                let kappa = (2.0 * wish.facts.ionization_energy()).max(0.0).sqrt();
                let sensitivity = (4.0 * kappa / strength.field).max(period).min(duration).max(1.0);
                kink_spacing(potential, wish.accuracy / sensitivity)
            }
            _ => cusp_spacing(potential, wish.accuracy),
        };
        let momentum = momentum.max(std::f64::consts::PI / kink);
        // The wave function outside decays by e^{-20} at the level's reach; the accuracy asks for a part of that.
        let bound = wish.facts.reach * (digits / 20.0).min(1.0) + swing / stiffness.max(1e-3);
        let atom_reach = bound.max(2.0 * strength.quiver) + strength.quiver + 20.0;
        // Photons that do not ionize one by one do so together, and leave up to one of them in excess.
        let excess = strength.photon + wish.facts.highest_energy;
        let leaving = (2.0 * if excess > 0.0 { excess } else { strength.photon }).sqrt();
        let flight = OUTER * (bound + (strength.vector_potential * 2.0 + leaving) * duration + 20.0);
        // What comes back went twice through the inner box: the wider that is, the faster it was, and the narrower the
        // absorber may be.
        let product = width_times_momentum((REFLECTED * wish.accuracy).powi(2));
        // Where ionization is asked for, the absorber shall take nothing that is bound; a plane of that size would be too dear.
        let diffuse = if wish.populations == 0 || wish.facts.dimensions == 2 {
            0.0
        } else {
            bound_flight(potential.far_charge(), duration) * (BOUND_ACCURACY / wish.accuracy).cbrt()
                + strength.quiver
        };
        let inner = atom_reach.max((0.5 * product * duration).sqrt());
        let roomy = if wish.pins.extent.is_none() { inner.max(diffuse) } else { inner };
        let slowest = HELD * 2.0 * roomy / duration;
        let width = (product / slowest).max(NARROWEST_ABSORBER);
        let needs_absorber =
            !confined && strength.field > 0.0 && flight.max(atom_reach) > inner.max(diffuse) + width;
        Self {
            spacing: std::f64::consts::PI / momentum,
            momentum,
            atom_reach,
            flight,
            absorber_width: if needs_absorber { width } else { 0.0 },
            inner,
            diffuse,
            slowest,
            binding: wish.facts.ionization_energy(),
            stiffness,
            photon: wish.max_photon.unwrap_or(0.0).max(strength.photon),
            passing: if confined { 0.0 } else { RETURNING * strength.vector_potential / analytic },
            leaves: !confined && strength.field > 0.0,
            accuracy: wish.accuracy,
            strength,
        }
    }

    /// Half the box without its absorber, bohr.
    pub(super) fn inner(&self, absorber: Absorber) -> f64 {
        match absorber {
            Absorber::None => self.closed(),
            Absorber::Smooth { .. } | Absorber::Round { .. } => self.inner.max(self.diffuse),
        }
    }

    /// What of it is not only for probabilities.
    pub(super) fn without_diffuse(&self, absorber: Absorber) -> f64 {
        match absorber {
            Absorber::None => self.closed(),
            Absorber::Smooth { .. } | Absorber::Round { .. } => self.inner,
        }
    }

    /// Half of a box without absorber, bohr.
    fn closed(&self) -> f64 {
        if self.leaves { self.flight.max(self.atom_reach) } else { self.atom_reach }
    }

    /// Longest time step for a scheme on a grid that holds momenta up to `largest`.
    pub(super) fn time_step(&self, scheme: Scheme, largest: f64) -> f64 {
        let resonance = BELOW_RESONANCE * resonant_step(largest, self.binding);
        let accurate = self.accurate_step(scheme);
        let sampled =
            if self.photon > 0.0 { std::f64::consts::PI / (2.0 * self.photon) } else { f64::INFINITY };
        resonance.min(accurate).min(sampled)
    }

    /// Step at which the largest error of a harmonic yield of the plateau, measured as (τΩ)⁴ and 3 (τΩ)² with Ω the fastest
    /// change an electron sees, is four tenths of the accuracy.
    fn accurate_step(&self, scheme: Scheme) -> f64 {
        let (accuracy, fastest) = (0.4 * self.accuracy, self.stiffness.max(self.passing));
        match scheme {
            Scheme::FourthOrder => accuracy.powf(0.25) / fastest,
            Scheme::Strang => (accuracy / 3.0).sqrt() / fastest,
        }
    }

    pub(super) fn reasons(&self, pins: &Pins, numerics: &Numerics) -> Vec<Reason> {
        let reason = |knob, pinned: bool, why: String| Reason {
            knob,
            why: if pinned { "pinned by the configuration".into() } else { why },
        };
        vec![
            reason(
                Knob::Spacing,
                pins.spacing.is_some(),
                format!(
                    "momenta up to {:.2} / bohr: the bound state, and electrons of up to {FASTEST} times the largest \
                     vector potential {:.3} a.u.",
                    self.momentum, self.strength.vector_potential
                ),
            ),
            reason(Knob::Extent, pins.extent.is_some(), self.extent_reason(numerics)),
            reason(Knob::Absorber, pins.absorber.is_some(), self.absorber_reason(numerics.absorber)),
            reason(
                Knob::TimeStep,
                pins.time_step.is_some(),
                format!(
                    "below the splitting's resonance at {:.4} a.u. (2 pi / (k_max^2/2 + Ip)), and {:.4} a.u. for the \
                     accuracy asked (error constant measured on the faster of the atom's stiffness {:.3} hartree and the passing of \
                     returning electrons {:.3} hartree)",
                    resonant_step(numerics.grid.largest_along_axis(), self.binding),
                    self.accurate_step(numerics.scheme),
                    self.stiffness,
                    self.passing
                ),
            ),
            reason(
                Knob::Scheme,
                pins.scheme.is_some(),
                "fourth order: about a tenth of the work of second order at equal error".into(),
            ),
            reason(
                Knob::Gauge,
                pins.gauge.is_some(),
                match numerics.gauge {
                    Gauge::Length => "length: no momentum shift, moments of the field-free atom".into(),
                    Gauge::Velocity => "velocity".into(),
                },
            ),
            reason(
                Knob::TrailingTime,
                pins.trailing_time.is_some(),
                "none: the window, not the run, brings the acceleration to zero".into(),
            ),
        ]
    }

    fn absorber_reason(&self, absorber: Absorber) -> String {
        match absorber {
            Absorber::None => "none: nothing comes back from the edge".into(),
            Absorber::Smooth { width } | Absorber::Round { width } => format!(
                "reflects {:.1e} of electrons 1.5 times as fast as the slowest that come back within the run, {:.3} / bohr, and less above \
                 (even form of Gonzalez-Lezana, Rackham, Manolopoulos 2004)",
                reflection(self.slowest, width),
                self.slowest
            ),
        }
    }

    fn extent_reason(&self, numerics: &Numerics) -> String {
        let points = points_of(&numerics.grid);
        match numerics.absorber {
            Absorber::None if self.leaves => {
                format!("nothing leaves: the fastest electrons come {:.0} bohr far; {points}", self.flight)
            }
            Absorber::None => {
                format!("the bound state, {:.0} bohr to each side; {points}", self.atom_reach)
            }
            Absorber::Smooth { .. } | Absorber::Round { .. } if self.diffuse > self.inner => format!(
                "{:.0} bohr to each side: electrons that stay bound come that far within the run, and ionization is asked for; {points}",
                self.diffuse
            ),
            Absorber::Smooth { width } | Absorber::Round { width } => format!(
                "{:.0} bohr to each side: bound state and returning electrons take {:.0} bohr (quiver amplitude {:.1} bohr), \
                 and what the absorber of {width:.0} bohr reflects shall come back late; {points}",
                self.inner, self.atom_reach, self.strength.quiver
            ),
        }
    }
}

/// How many points a grid has, in words.
pub(super) fn points_of(grid: &Grid) -> String {
    match grid.y {
        None => format!("{} points", grid.x.points),
        Some(y) => format!("{} by {} points", grid.x.points, y.points),
    }
}

/// Largest momentum that a field gives to an oscillator of this frequency, |∫E e^{iΩt} dt| up to any time, whatever its
/// pulses' phases, 1/bohr. (Exact for a harmonic potential: its packets follow the classical path.)
fn swing(field: &Field, frequency: f64) -> f64 {
    let quadratures = |pulse: &Pulse| [0.0, FRAC_PI_2].map(|phase| Pulse { phase, ..*pulse });
    let of = |parts: &[Field]| {
        let (start, end) = parts[0].interval();
        let step = (end - start) / SWING_SAMPLES as f64;
        let mut sums = vec![[Complex::<f64>::default(); 2]; parts.len()];
        let mut largest = 0.0f64;
        for i in 0..SWING_SAMPLES {
            let t = start + (i as f64 + 0.5) * step;
            for (sum, part) in sums.iter_mut().zip(parts) {
                let [x, y] = part.electric_field(t);
                sum[0] += Complex::cis(frequency * t) * x * step;
                sum[1] += Complex::cis(frequency * t) * y * step;
            }
            largest = largest.max(sums.iter().flatten().map(Complex::norm_sqr).sum());
        }
        largest.sqrt()
    };
    let pulses = field
        .pulses
        .iter()
        .map(|pulse| of(&quadratures(pulse).map(|pulse| Field { pulses: vec![pulse], sampled: None })));
    let table = field.sampled.iter().map(|s| of(&[Field { pulses: Vec::new(), sampled: Some(s.clone()) }]));
    pulses.chain(table).sum()
}

/// Position of the lowest potential energy, bohr.
pub(super) fn bottom(potential: &Potential) -> f64 {
    match potential {
        Potential::Sampled(table) => {
            let (x, v) = table.points();
            (0..v.len()).min_by(|&i, &j| v[i].total_cmp(&v[j])).map_or(0.0, |i| x[i])
        }
        _ => 0.0,
    }
}

/// Spacing at which a kink shifts the bound state, by 1.1e-3 J² h⁵ for a jump J of V' (measured: second order in what
/// the grid lacks), by no more than half of `energy`, hartree.
fn kink_spacing(potential: &Potential, energy: f64) -> f64 {
    let jump = potential.kink();
    if jump == 0.0 { f64::INFINITY } else { (0.5 * energy / (KINK * jump * jump)).powf(0.2) }
}

/// Spacing at which the error of a cusp of the plane, held to be 4 J h⁴ for a jump J of V', meets the accuracy: no more than
/// a safe guess.
fn cusp_spacing(potential: &Potential, accuracy: f64) -> f64 {
    let jump = potential.kink();
    if jump == 0.0 { f64::INFINITY } else { (accuracy / (4.0 * jump)).powf(0.25) }
}

/// √V'' at the bottom, hartree.
fn stiffness(potential: &Potential) -> f64 {
    match potential {
        Potential::SoftCoulomb { charge, softening } | Potential::Screened { charge, softening, .. } => {
            (charge / softening.powi(3)).sqrt()
        }
        Potential::PoschlTeller { lambda, width } => (lambda * (lambda + 1.0)).sqrt() / (width * width),
        Potential::GaussianWell { depth, width } => depth.sqrt() / width,
        Potential::Harmonic { frequency } => *frequency,
        Potential::Sampled(table) => {
            // Along the radius of a plane a table may begin at its lowest point.
            let (x, h) = (bottom(potential).max(table.domain().0 + table.spacing()), table.spacing());
            ((potential.value_and_slope(x + h).1 - potential.value_and_slope(x - h).1) / (2.0 * h))
                .abs()
                .sqrt()
        }
    }
    .max(0.05)
}
