//! What models start from: the recorded run, its atom and field, in atomic units.

use std::cell::OnceCell;

use num_complex::Complex;
use tdse_core::field::Field;
use tdse_core::model::strong_field::{DipoleSeries, Ground, Round, Stationary, StrongField};
use tdse_core::problem::{Parity, Symmetry};
use tdse_core::simulate::{Atom, Schedule};
use tdse_core::spectrum::{EnergyAxis, Harmonics, Window, harmonics as transformed};
use tdse_core::stationary::BoundStates;

use super::electronvolts;
use crate::config::request;
use crate::scan::defaults::classical_cutoff;
use crate::scan::prepare::{Job, Point};
use crate::store::Contents;

/// Times the classical cutoff to which models of harmonics reach: the fall behind it is part of the measured cutoff.
const BEYOND: f64 = 1.5;
const FILLED: &str = "defaults are filled in before a point runs";

/// A recorded run as models see it.
pub(super) struct Run<'a> {
    /// What was asked.
    pub job: &'a Job,
    /// The field.
    pub field: &'a Field,
    /// Of the state before the field, or the lowest of several, hartree.
    pub ionization_energy: f64,
    /// Spectrum of the full run, where it is asked for and a pulse gives the photon.
    pub spectrum: Option<Spectrum>,
    initial: Initial<'a>,
    packet: OnceCell<Packet>,
}

/// The state before the field.
pub(super) enum Initial<'a> {
    /// On a line.
    Line(Line<'a>),
    /// On a plane, with one angular momentum.
    Round(Round),
    /// On a plane, with several.
    Mixed,
}

/// A state on a line among the bound states there.
#[derive(Clone, Copy)]
pub(super) struct Line<'a> {
    /// The state, of superpositions the lowest.
    pub ground: Ground<'a>,
    /// All bound states on the grid.
    pub bound: &'a BoundStates,
}

/// Dipole of the strong-field approximation.
pub(super) struct Packet {
    /// The dipole.
    pub series: DipoleSeries,
    /// Up to this photon energy, hartree.
    pub highest: f64,
    /// The acceleration of every component.
    acceleration: Vec<Vec<f64>>,
}

impl Packet {
    fn new(series: DipoleSeries, highest: f64, dimensions: usize) -> Self {
        Self { acceleration: (0..dimensions).map(|d| series.along(d)).collect(), series, highest }
    }

    /// Amplitudes of every component.
    pub fn harmonics(&self, axis: EnergyAxis, window: Window) -> Vec<Harmonics> {
        let schedule = &self.series.schedule;
        self.acceleration.iter().map(|component| transformed(component, schedule, window, axis)).collect()
    }
}

/// Plan of the strong-field approximation.
pub(super) enum Dipole {
    /// All momenta of a line.
    Line(StrongField),
    /// The momentum that returns, in a plane.
    Plane(Stationary),
}

impl Dipole {
    /// Times of the dipole.
    pub fn schedule(&self) -> &Schedule {
        match self {
            Self::Line(plan) => plan.schedule(),
            Self::Plane(plan) => &plan.schedule,
        }
    }

    /// The dipole of an atom whose bound state has probability `survival(t)` left.
    pub fn packet(&self, highest: f64, survival: impl Fn(f64) -> f64) -> Packet {
        match self {
            Self::Line(plan) => Packet::new(plan.dipole_with(survival), highest, 1),
            Self::Plane(plan) => Packet::new(plan.dipole_with(survival), highest, 2),
        }
    }
}

/// Harmonics of the full run.
pub(super) struct Spectrum {
    /// Its axis.
    pub axis: EnergyAxis,
    /// How it was asked for.
    pub wanted: request::Harmonics,
    /// Photon energy of the first pulse, hartree.
    pub photon: f64,
    /// Number of orders.
    pub orders: usize,
    /// Amplitudes of orders 1, 2, … along the major axis of the first pulse.
    pub amplitudes: Vec<Complex<f64>>,
    /// That axis.
    major: [f64; 2],
}

impl Spectrum {
    /// Of the full run, where its series asks for one.
    fn of(job: &Job, contents: &Contents) -> Option<Self> {
        let (wanted, pulse) = job.outputs.harmonics.zip(job.problem.field.pulses.first())?;
        let (numerics, photon) = (&job.numerics, pulse.frequency);
        let orders = wanted.max_order.expect(FILLED) as usize;
        let schedule = Schedule::new(&job.problem.field, numerics.time_step, numerics.trailing_time);
        let recorded = contents.real("dynamics", "dipole_acceleration").expect("a recorded series");
        let flat: Vec<f64> = recorded.iter().copied().collect();
        let components = flat.chunks(schedule.steps + 1);
        let axis = every_order(photon, orders);
        let full: Vec<Harmonics> =
            components.map(|component| transformed(component, &schedule, wanted.window, axis)).collect();
        let spectrum = Self {
            axis: EnergyAxis::up_to(wanted.max_energy.expect(FILLED), wanted.energy_step.expect(FILLED)),
            wanted,
            photon,
            orders,
            amplitudes: Vec::new(),
            major: [pulse.angle.cos(), pulse.angle.sin()],
        };
        Some(Self { amplitudes: spectrum.along_major(&full)[1..].to_vec(), ..spectrum })
    }

    /// Amplitudes along the major axis of the first pulse.
    pub fn along_major(&self, found: &[Harmonics]) -> Vec<Complex<f64>> {
        let along = |i: usize| found.iter().zip(self.major).map(|(h, part)| h.amplitude[i] * part).sum();
        (0..found[0].amplitude.len()).map(along).collect()
    }
}

/// Axis of the orders themselves, from 0 on.
pub(super) fn every_order(photon: f64, orders: usize) -> EnergyAxis {
    EnergyAxis { step: photon, points: orders + 1 }
}

impl<'a> Run<'a> {
    /// Of a point and what it recorded.
    pub fn new(point: &'a Point, atom: &'a Atom, contents: &Contents) -> Self {
        let job = &point.job;
        let number = job.problem.initial.lowest();
        let (initial, energy) = match atom.plane.get(number) {
            None => {
                let energy = atom.bound.energies[number];
                let state = &atom.bound.states[number];
                let ground = Ground { axis: job.numerics.grid.x, state, ionization_energy: -energy };
                (Initial::Line(Line { ground, bound: &atom.bound }), energy)
            }
            Some(state) => match state.label.symmetry {
                Symmetry::Angular(m) => {
                    let number = state.label.number;
                    let round = Round { m, number, ionization_energy: -state.energy };
                    (Initial::Round(round), state.energy)
                }
                // The lowest state that is even both ways is the ground state, which is round.
                Symmetry::Mirror([Parity::Even, Parity::Even]) if state.label.number == 0 => {
                    let round = Round { m: 0, number: 0, ionization_energy: -state.energy };
                    (Initial::Round(round), state.energy)
                }
                Symmetry::Mirror(_) => (Initial::Mixed, state.energy),
            },
        };
        Self {
            job,
            field: &job.problem.field,
            ionization_energy: -energy,
            spectrum: Spectrum::of(job, contents),
            initial,
            packet: OnceCell::new(),
        }
    }

    /// Number of dimensions.
    pub fn dimensions(&self) -> usize {
        self.job.numerics.grid.dimensions()
    }

    /// The state before the field, on a line.
    ///
    /// # Errors
    /// That it is on a plane.
    pub fn line(&self) -> Result<Line<'a>, String> {
        match &self.initial {
            Initial::Line(line) => Ok(*line),
            Initial::Round(_) | Initial::Mixed => Err("this model needs one dimension".into()),
        }
    }

    /// The state before the field, on a plane.
    ///
    /// # Errors
    /// That it has no angular momentum.
    pub fn round(&self) -> Result<Round, String> {
        match &self.initial {
            Initial::Round(round) => Ok(*round),
            Initial::Line(_) | Initial::Mixed => {
                Err("this model needs a state of one angular momentum".into())
            }
        }
    }

    /// Axis of the electron spectrum, where one is asked for.
    pub fn electron_axis(&self) -> Option<EnergyAxis> {
        self.job.electrons().map(|(_, axis)| axis)
    }

    /// Photon energy up to which the strong-field approximation is computed, hartree: well beyond the classical cutoff of this very
    /// point, within the axis that all points share.
    pub fn highest(&self, axis: EnergyAxis) -> f64 {
        let fastest = self.field.pulses.iter().map(|pulse| pulse.frequency).fold(0.0, f64::max);
        let classical = classical_cutoff(self.field, self.ionization_energy, fastest);
        (BEYOND * classical).min(axis.step * (axis.points - 1) as f64)
    }

    /// The strong-field approximation up to an energy.
    ///
    /// # Errors
    /// Where the atom has no matrix elements.
    pub fn strong_field(&self, highest: f64) -> Result<Dipole, String> {
        let trailing = self.job.numerics.trailing_time;
        if let Initial::Line(line) = &self.initial {
            return Ok(Dipole::Line(StrongField::new(&line.ground, self.field, highest, trailing)));
        }
        let potential = &self.job.problem.potential;
        let plan = Stationary::on_plane(potential, self.round()?, self.field, highest, trailing);
        Ok(Dipole::Plane(plan.map_err(|error| error.to_string())?))
    }

    /// Its undepleted dipole, made once; of a run that writes harmonics.
    ///
    /// # Errors
    /// As [`Self::strong_field`].
    pub fn packet(&self) -> Result<&Packet, String> {
        if self.packet.get().is_none() {
            let highest = self.spectrum.as_ref().map_or(0.0, |full| self.highest(full.axis));
            let made = self.strong_field(highest)?.packet(highest, |_| 1.0);
            return Ok(self.packet.get_or_init(|| made));
        }
        Ok(self.packet.get().expect("made before"))
    }

    /// √(Ip/2Up) with the ponderomotive energy that the summary states.
    pub fn keldysh_parameter(&self, contents: &Contents) -> f64 {
        let up = contents.real("summary", "ponderomotive_energy").and_then(|array| array.first().copied());
        let ip = electronvolts(self.ionization_energy);
        tdse_core::quantities::keldysh_parameter(ip, up.unwrap_or(f64::NAN))
    }
}
