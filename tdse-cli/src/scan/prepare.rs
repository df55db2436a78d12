//! From a configuration to points that are ready to run: atoms tuned, numerics chosen, everything judged.
//!
//! A point runs from its resolved text, read again, so what is computed is what the text says.

use serde_json::Value;
use tdse_core::choose::{AtomFacts, Choice, Electrons, Wish, choose, fastest_electron, map_range, strictest};
use tdse_core::outgoing::MapRange;
use tdse_core::potential::Potential;
use tdse_core::problem::{ElectronMethod, Numerics, PlaneLabel, Problem, Record};
use tdse_core::simulate::Schedule;
use tdse_core::spectrum::EnergyAxis;
use tdse_core::stationary::{ScatteringStates, count_below};

use super::defaults::{self, Scales};
use super::electrons::{self, Asked};
use super::facts::Facts;
use super::levels::{LEVELS, listed};
use super::limits;
use super::objections;
use super::points::{self, Axis, ScanRequest};
use super::run::machine;
use super::source::Source;
use crate::config::complaint::{Complaint, Complaints};
use crate::config::request::{Outputs, Sharing};
use crate::config::resolved::{self, Chosen};
use crate::config::tables::Input;
use crate::config::{self, Files, Library, Request, identity};
use crate::store;

/// Raised whenever result bits change.
pub const NUMERICS_VERSION: u32 = 4;

/// A request whose every point is ready.
#[derive(Clone, Debug)]
pub struct Prepared {
    /// Title.
    pub title: String,
    /// Configuration as written.
    pub input: String,
    /// Overrides from the command line.
    pub overrides: Vec<String>,
    /// Scan axes; none for a single run.
    pub axes: Vec<Axis>,
    /// Lengths of the scan's dimensions.
    pub shape: Vec<usize>,
    /// Points, last dimension fastest.
    pub points: Vec<Point>,
}

/// A point that is ready to run.
#[derive(Clone, Debug)]
pub struct Point {
    /// Values of the scan axes, for people.
    pub label: String,
    /// Hash of what decides its bits, 16 hexadecimal digits.
    pub identity: String,
    /// Resolved configuration.
    pub configuration: String,
    /// What that asks for.
    pub job: Job,
    /// What numerics were chosen from.
    pub facts: AtomFacts,
    /// Why each choice of numerics is what it is.
    pub choice: Choice,
    /// Doubts known before it runs.
    pub doubts: Vec<String>,
}

/// What a resolved configuration asks for.
#[derive(Clone, Debug, PartialEq)]
pub struct Job {
    /// Atom, state and field; in two dimensions the state counts `labels`.
    pub problem: Problem,
    /// Bound states of two dimensions, the lowest first; empty in one.
    pub labels: Vec<PlaneLabel>,
    /// How it is computed.
    pub numerics: Numerics,
    /// What is recorded.
    pub record: Record,
    /// Accuracy asked for.
    pub accuracy: f64,
    /// Way to the electron spectrum, where one is asked for.
    pub electron_method: Option<ElectronMethod>,
    /// What is derived, nothing left open.
    pub outputs: Outputs,
    /// Tables it uses.
    pub inputs: Vec<Input>,
}

impl Job {
    /// Bound states the run needs at least.
    pub fn states(&self) -> usize {
        self.labels.len().max(self.problem.initial.highest() + 1).max(self.record.populations)
    }

    /// Momenta that a map is taken at, where one is: in two dimensions.
    pub fn map_range(&self) -> Option<MapRange> {
        let (_, axis) = self.electrons().filter(|_| self.numerics.grid.dimensions() == 2)?;
        Some(map_range(&self.problem, &self.numerics, electrons::energies(axis)))
    }

    /// Method and energies of the electron spectrum, where one is asked for.
    pub fn electrons(&self) -> Option<(ElectronMethod, EnergyAxis)> {
        let asked = self.outputs.photoelectrons?;
        Some((self.electron_method?, EnergyAxis::up_to(asked.max_energy?, asked.energy_step?)))
    }
}

/// A point on its way.
struct Draft<'a> {
    source: &'a points::Point,
    tree: Value,
    softening: Option<f64>,
    problem: Problem,
    facts: AtomFacts,
    choice: Choice,
    electron_method: Option<ElectronMethod>,
    labels: Vec<PlaneLabel>,
}

impl Draft<'_> {
    fn wish(&self) -> Wish<'_> {
        let request = &self.source.request;
        Wish {
            problem: &self.problem,
            facts: &self.facts,
            pins: &request.pins,
            accuracy: request.accuracy,
            populations: request.record.populations,
            max_photon: request.outputs.harmonics.and_then(|h| h.max_energy),
        }
    }
}

/// Reads a configuration and makes every point of it ready.
///
/// # Errors
/// Every complaint about the file, the scan, or any point.
pub fn prepare(source: &Source, sets: &[String]) -> Result<Prepared, Complaints> {
    let ScanRequest { axes, shape, points } =
        points::read_scan(&source.text, sets, source.files.clone(), store::is_reserved_name)?;
    let mut facts = Facts::new();
    let mut drafts = Vec::with_capacity(points.len());
    let mut found = Vec::new();
    for point in &points {
        match draft(point, &mut facts) {
            Ok(draft) => drafts.push(draft),
            Err(complaints) => found.extend(complaints.0.into_iter().map(|c| located(c, point))),
        }
    }
    choose_electrons(&mut drafts);
    share(&mut drafts);
    for draft in &mut drafts {
        let listed = list_states(draft, &mut facts);
        found.extend(listed.map(|complaint| located(complaint, draft.source)));
    }
    found.extend(drafts.iter().filter_map(|draft| Some(located(impossible(draft)?, draft.source))));
    let mut doubts = Vec::with_capacity(drafts.len());
    for draft in &drafts {
        let (complaints, doubt) =
            objections::sort(&draft.source.request, &draft.tree, &draft.choice.findings);
        found.extend(complaints.into_iter().map(|c| located(c, draft.source)));
        doubts.push(doubt);
    }
    if !found.is_empty() {
        return Err(Complaints(found));
    }
    let scales: Vec<Scales> = drafts.iter().map(scales).collect();
    let title = points.first().map(|point| point.request.title.clone()).unwrap_or_default();
    let free = machine::free_memory();
    let ready = drafts.into_iter().zip(doubts).map(|(draft, doubts)| finish(draft, doubts, &scales, free));
    Ok(Prepared {
        title,
        input: source.text.clone(),
        overrides: sets.to_vec(),
        axes,
        shape,
        points: ready.collect::<Result<_, _>>()?,
    })
}

/// Adds the point's values to a complaint, where there is a scan.
fn located(mut complaint: Complaint, point: &points::Point) -> Complaint {
    if !point.label.is_empty() {
        complaint.point = Some(point.label.clone());
    }
    complaint
}

/// Tunes the atom and chooses the numerics of one point.
fn draft<'a>(point: &'a points::Point, facts: &mut Facts) -> Result<Draft<'a>, Complaints> {
    let request = &point.request;
    let tree: Value = serde_json::from_str(&point.text).unwrap_or_default();
    let complain = |error| Complaints::from(objections::stationary(request, &tree, &error));
    let softening = facts.softening(&request.atom).map_err(complain)?;
    let potential = request.atom.potential.with_softening(softening.unwrap_or_default());
    let found = facts.of(&potential, &request.atom).map_err(complain)?;
    let problem = Problem { potential, initial: request.atom.initial.clone(), field: request.field.clone() };
    let max_photon = request.outputs.harmonics.and_then(|h| h.max_energy);
    let (pins, accuracy) = (&request.pins, request.accuracy);
    let populations = request.record.populations;
    let wish = Wish { problem: &problem, facts: &found, pins, accuracy, populations, max_photon };
    let choice = choose(&wish);
    let (electron_method, labels) = (None, Vec::new());
    Ok(Draft { source: point, tree, softening, problem, facts: found, choice, electron_method, labels })
}

/// Lists the states of an atom of two dimensions, now that its box is known; a complaint where some are not there.
fn list_states(draft: &mut Draft, facts: &mut Facts) -> Option<Complaint> {
    let request = &draft.source.request;
    if request.atom.dimensions == 1 {
        return None;
    }
    let (potential, asked) = (&draft.problem.potential, request.record.populations);
    let levels = match facts.levels(potential, asked.max(LEVELS)) {
        Ok(levels) => levels,
        Err(error) => return Some(objections::stationary(request, &draft.tree, &error)),
    };
    let half = 0.5 * draft.choice.numerics.grid.x.extent();
    let listed = listed(&levels, half, &request.atom.labels, &request.atom.initial);
    draft.problem.initial = listed.initial;
    draft.labels = listed.labels;
    (asked > listed.lowest).then(|| objections::populations(&draft.tree, listed.lowest))
}

/// Gives the points that ask for electrons their method, and numerics for it.
fn choose_electrons(drafts: &mut [Draft]) {
    let scales: Vec<Scales> = drafts.iter().map(scales).collect();
    let asking: Vec<usize> = (0..drafts.len())
        .filter(|&index| drafts[index].source.request.outputs.photoelectrons.is_some())
        .collect();
    let asked = asking.iter().filter_map(|&index| {
        let (draft, request) = (&drafts[index], &drafts[index].source.request);
        let wanted = request.outputs.photoelectrons?;
        let filled = defaults::filled(wanted, &scales);
        let axis = EnergyAxis::up_to(filled.max_energy?, filled.energy_step?);
        let fastest = scales[index].electrons.max(wanted.max_energy.unwrap_or_default());
        let electrons = Electrons { energies: electrons::energies(axis), fastest };
        Some(Asked { wish: draft.wish(), electrons, pinned: request.electron_method })
    });
    let chosen = electrons::choose_all(&asked.collect::<Vec<_>>());
    for (index, (method, choice)) in asking.into_iter().zip(chosen) {
        drafts[index].electron_method = Some(method);
        drafts[index].choice = choice;
    }
}

/// What the chosen box does not hold, or the atom does not let go.
fn impossible(draft: &Draft) -> Option<Complaint> {
    if draft.choice.numerics.grid.dimensions() == 2 {
        return None;
    }
    let (potential, axis) = (&draft.problem.potential, draft.choice.numerics.grid.x);
    let (asked, half) = (draft.source.request.record.populations, 0.5 * axis.extent());
    if asked > 1 && !potential.is_confining() && half < 1e6 {
        let bound = count_below(potential, 0.0, half);
        if asked > bound {
            return Some(objections::populations(&draft.tree, bound));
        }
    }
    // Only a table can end where waves are not free.
    let is_table = matches!(potential, Potential::Sampled(_)) && draft.electron_method.is_some();
    is_table
        .then(|| ScatteringStates::new(potential, axis).err())
        .flatten()
        .map(|error| objections::no_continuum(&draft.tree, &error))
}

/// Where the configuration asks for it, gives all points of one way to electrons the strictest numerics.
fn share(drafts: &mut [Draft]) {
    if drafts.first().is_some_and(|draft| draft.source.request.sharing == Sharing::Common) {
        let methods = [None, Some(ElectronMethod::ScatteringStates), Some(ElectronMethod::OutgoingAmplitude)];
        let kinds = methods.into_iter().flat_map(|method| [(method, 1), (method, 2)]);
        for kind in kinds {
            let of = |draft: &Draft| (draft.electron_method, draft.choice.numerics.grid.dimensions());
            let alike = || drafts.iter().filter(|draft| of(draft) == kind);
            let all: Vec<Numerics> = alike().map(|draft| draft.choice.numerics.clone()).collect();
            if all.is_empty() {
                continue;
            }
            let common = strictest(&all);
            for draft in drafts.iter_mut().filter(|draft| of(draft) == kind) {
                draft.choice.numerics = common.clone();
            }
        }
    }
}

fn scales(draft: &Draft) -> Scales {
    let (field, numerics) = (&draft.problem.field, &draft.choice.numerics);
    let schedule = Schedule::new(field, numerics.time_step, numerics.trailing_time);
    let length = schedule.time_step * schedule.steps as f64;
    let photon = field.pulses.first().map_or(20.0 * std::f64::consts::PI / length, |pulse| pulse.frequency);
    Scales {
        cutoff: defaults::classical_cutoff(field, draft.facts.ionization_energy(), photon),
        photon,
        length,
        resolved: std::f64::consts::PI / numerics.time_step,
        electrons: fastest_electron(&draft.problem, &draft.facts),
        duration: field.interval().1 - field.interval().0 + numerics.trailing_time,
    }
}

/// Writes the resolved text and reads it again.
fn finish(
    draft: Draft,
    doubts: Vec<String>,
    scales: &[Scales],
    free: Option<u64>,
) -> Result<Point, Complaints> {
    let request = &draft.source.request;
    let outputs = defaults::fill(&request.outputs, scales);
    let chosen = Chosen {
        softening: draft.softening,
        numerics: &draft.choice.numerics,
        electron_method: draft.electron_method,
        outputs: &outputs,
    };
    let tree = resolved::resolved(request, &chosen);
    let stored = request.inputs.iter().map(|i| (i.name.clone(), i.contents.to_string())).collect();
    let read = config::request(&tree, &Library::new(Files::Stored(stored)))?;
    let job = job(&read, &draft);
    if let Some(complaint) = limits::objection(&job, &draft.tree, free) {
        return Err(located(complaint, draft.source).into());
    }
    Ok(Point {
        label: draft.source.label.clone(),
        identity: identity::identity(&tree, job.record, NUMERICS_VERSION),
        configuration: resolved::text(&tree),
        job,
        facts: draft.facts,
        choice: draft.choice,
        doubts,
    })
}

/// The job of a resolved request; its numerics are all pinned, so they are the chosen ones.
fn job(request: &Request, draft: &Draft) -> Job {
    Job {
        problem: Problem {
            potential: request.atom.potential.with_softening(0.0),
            initial: draft.problem.initial.clone(),
            field: request.field.clone(),
        },
        labels: draft.labels.clone(),
        numerics: draft.choice.numerics.clone(),
        record: request.record,
        accuracy: request.accuracy,
        electron_method: request.electron_method,
        outputs: request.outputs.clone(),
        inputs: request.inputs.clone(),
    }
}
