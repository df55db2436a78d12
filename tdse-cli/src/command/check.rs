//! `tdse check`: what will be computed, in numbers with units; nothing long is computed.

use std::fmt::Write as _;

use tdse_core::choose::Knob;
use tdse_core::field::Pulse;
use tdse_core::problem::{Absorber, ElectronMethod, Gauge, Scheme};
use tdse_core::quantities::{
    barrier_suppression_field, classical_cutoff, field_shape, keldysh_parameter, photons_to_ionize,
    pulse_shape,
};
use tdse_core::units::{
    BOHR_M, ENERGY_TIMES_WAVELENGTH, FIELD_V_PER_M, HARTREE_EV, TIME_FS, VECTOR_POTENTIAL_V_S_PER_M,
    intensity,
};

use crate::scan::cost::{Cost, cost, keeps_mirror, map_share, memory_on_plane};
use crate::scan::prepare::{Job, Point, Prepared};
use crate::text::{Table, bytes, duration, number};

const CAUTION: &str = "Model prediction for one atom. Intense lasers and extreme-ultraviolet light injure; \
                       local rules and the licensed laser safety officer decide.";

/// Text of the check of a whole request.
pub fn text(prepared: &Prepared, cores: usize) -> String {
    let mut out = String::new();
    if !prepared.title.is_empty() {
        let _ = writeln!(out, "{}\n", prepared.title);
    }
    if prepared.points.len() > 1 {
        let _ = writeln!(out, "Scan of {} points", prepared.points.len());
        for axis in &prepared.axes {
            let _ = writeln!(out, "  {}: {} values of {}", axis.name, axis.values.len(), axis.parameter);
        }
        let _ = writeln!(out, "\nFirst point: {}\n", prepared.points[0].label);
    }
    let Some(point) = prepared.points.first() else {
        return out;
    };
    out += &atom(point);
    for (i, pulse) in point.job.problem.field.pulses.iter().enumerate() {
        let _ = writeln!(out, "\nPulse {i}");
        out += &pulse_table(point, pulse);
    }
    out += &whole_field(point);
    out += &numerics(point);
    out += &outputs(point);
    out += &costs(prepared, cores);
    out += &doubts(prepared);
    let _ = writeln!(out, "\n{CAUTION}");
    out
}

fn atom(point: &Point) -> String {
    let facts = &point.facts;
    let mut table = Table::new();
    table.row("initial energy", number(facts.initial_energy * HARTREE_EV), "eV", "grid-free");
    table.row("", number(facts.initial_energy), "hartree", "");
    if let tdse_core::potential::Potential::SoftCoulomb { softening, .. }
    | tdse_core::potential::Potential::Screened { softening, .. } = point.job.problem.potential
    {
        table.row("softening", number(softening), "bohr", "");
    }
    table.row("size", number(facts.reach), "bohr", "where the initial state has decayed by e^-20");
    format!("Atom\n{table}")
}

fn pulse_table(point: &Point, pulse: &Pulse) -> String {
    let (ip, up) = (point.facts.ionization_energy(), pulse.ponderomotive_energy());
    let shape = pulse_shape(pulse);
    let nanometres = |photon: f64| ENERGY_TIMES_WAVELENGTH / photon * BOHR_M * 1e9;
    let mut table = Table::new();
    table.row("photon energy", number(pulse.frequency * HARTREE_EV), "eV", "");
    table.row("wavelength", number(nanometres(pulse.frequency)), "nm", "of the carrier");
    table.row("period", number(pulse.period() * TIME_FS), "fs", "");
    table.row(
        "intensity",
        number(intensity(pulse.peak_field)),
        "W/cm^2",
        "cycle average at the envelope's peak",
    );
    table.row("peak field", number(pulse.peak_field * FIELD_V_PER_M * 1e-9), "V/nm", "E0");
    table.row("", number(pulse.peak_field), "au", "");
    let potential = pulse.peak_field / pulse.frequency;
    table.row("vector potential", number(potential), "au", "E0/omega");
    if pulse.ellipticity != 0.0 {
        let share = 1.0 / pulse.ellipticity.hypot(1.0);
        table.row("ellipticity", number(pulse.ellipticity), "", "positive: from x to y, helicity +1");
        table.row("major axis", number(share), "E0", "E0 / sqrt(1 + ellipticity^2), and so for A");
        table.row("minor axis", number(share * pulse.ellipticity.abs()), "E0", "");
    }
    if pulse.angle != 0.0 {
        table.row("angle", number(pulse.angle.to_degrees()), "deg", "of the major axis to x");
    }
    table.row("", number(potential * VECTOR_POTENTIAL_V_S_PER_M), "V s/m", "");
    table.row("quiver amplitude", number(pulse.quiver_amplitude()), "bohr", "E0/omega^2");
    table.row("ponderomotive energy", number(up * HARTREE_EV), "eV", "Up = E0^2/(4 omega^2)");
    if ip > 0.0 {
        let charge = point.job.problem.potential.far_charge();
        table.row("Keldysh parameter", number(keldysh_parameter(ip, up)), "", "sqrt(Ip/2Up)");
        table.row("photons to ionize", number(photons_to_ionize(ip, pulse.frequency)), "", "without field");
        if charge > 0.0 {
            let field = barrier_suppression_field(ip, charge);
            table.row("barrier suppression", number(intensity(field)), "W/cm^2", "field Ip^2/(4Z)");
        }
        if pulse.ellipticity == 0.0 {
            let cutoff = classical_cutoff(ip, up);
            table.row("classical cutoff", number(cutoff * HARTREE_EV), "eV", "Ip + 3.17 Up");
            table.row("", number(cutoff / pulse.frequency), "photons", "");
        }
    }
    table.row("centroid", number(shape.centroid * HARTREE_EV), "eV", "of the power spectrum");
    table.row("", number(nanometres(shape.centroid)), "nm", "");
    table.row("true peak |E|", number(shape.peak * FIELD_V_PER_M * 1e-9), "V/nm", "");
    table.row("", number(shape.peak / pulse.peak_field), "E0", "");
    table.row("duration", number(shape.duration * TIME_FS), "fs", "FWHM of |E|^2 without its carrier");
    table.to_string()
}

/// The sum of all parts, where there is more than one pulse.
fn whole_field(point: &Point) -> String {
    let field = &point.job.problem.field;
    if field.pulses.len() == 1 && field.sampled.is_none() {
        return String::new();
    }
    let shape = field_shape(field);
    if shape.peak == 0.0 {
        return "\nNo field\n".into();
    }
    let mut table = Table::new();
    table.row("true peak |E|", number(shape.peak * FIELD_V_PER_M * 1e-9), "V/nm", "");
    table.row("at", number(shape.peak_time * TIME_FS), "fs", "");
    table.row("largest |A|", number(shape.peak_potential), "au", "");
    table.row("centroid", number(shape.centroid * HARTREE_EV), "eV", "of the power spectrum");
    format!("\nWhole field\n{table}")
}

fn numerics(point: &Point) -> String {
    let numerics = &point.job.numerics;
    let mut table = Table::new();
    for reason in &point.choice.reasons {
        let (name, value, unit) = match reason.knob {
            Knob::Spacing => ("spacing", number(numerics.grid.x.spacing), "bohr"),
            Knob::Extent => ("extent", number(numerics.grid.x.extent()), "bohr"),
            Knob::Absorber => match numerics.absorber {
                Absorber::None => ("absorber", "none".into(), ""),
                Absorber::Smooth { width } => ("absorber", number(width), "bohr per side"),
                Absorber::Round { width } => ("absorber", number(width), "bohr, in a ring"),
            },
            Knob::TimeStep => ("time step", number(numerics.time_step), "au"),
            Knob::Scheme => (
                "scheme",
                match numerics.scheme {
                    Scheme::FourthOrder => "fourth_order".into(),
                    Scheme::Strang => "strang".into(),
                },
                "",
            ),
            Knob::Gauge => (
                "gauge",
                match numerics.gauge {
                    Gauge::Length => "length".into(),
                    Gauge::Velocity => "velocity".into(),
                },
                "",
            ),
            Knob::TrailingTime => ("trailing time", number(numerics.trailing_time * TIME_FS), "fs"),
            Knob::ElectronMethod => {
                ("electron method", point.job.electron_method.map_or("none", ElectronMethod::name).into(), "")
            }
        };
        table.row(name, value, unit, &reason.why);
    }
    format!("\nNumerics\n{table}")
}

fn outputs(point: &Point) -> String {
    let outputs = &point.job.outputs;
    let mut table = Table::new();
    let ev = |energy: Option<f64>| number(energy.unwrap_or_default() * HARTREE_EV);
    let fs = |time: Option<f64>| number(time.unwrap_or_default() * TIME_FS);
    if let Some(harmonics) = &outputs.harmonics {
        let note =
            format!("in steps of {} eV, window {}", ev(harmonics.energy_step), harmonics.window.name());
        table.row("harmonics up to", ev(harmonics.max_energy), "eV", &note);
    }
    if let Some(map) = &outputs.time_frequency {
        let note = format!("window {} fs, every {} fs", fs(map.window_length), fs(map.time_step));
        table.row("time-frequency up to", ev(map.max_energy), "eV", &note);
    }
    if let Some(electrons) = &outputs.photoelectrons {
        let energies = point.job.electrons().map_or(0, |(_, axis)| axis.points);
        let directions = if point.job.map_range().is_some() { "" } else { " to each side" };
        let note = format!("in steps of {} eV, {energies} energies{directions}", ev(electrons.energy_step));
        table.row("electrons up to", ev(electrons.max_energy), "eV", &note);
    }
    if let Some(range) = point.job.map_range() {
        let (count, work) = (2 * range.last() + 1, map_share(&point.job));
        let note = format!("{count} x {count} momenta; collecting takes {} of the propagation", number(work));
        table.row("momenta every", number(range.spacing), "/ bohr", &note);
    }
    if point.job.record.populations > 0 {
        table.row("populations of", point.job.record.populations.to_string(), "states", "");
    }
    for model in outputs.models.iter().flat_map(|models| &models.asked) {
        table.row("model", model.name(), "", "");
    }
    format!("\nOutputs\n{table}")
}

fn costs(prepared: &Prepared, cores: usize) -> String {
    let all: Vec<Cost> = prepared.points.iter().map(|point| cost(&point.job)).collect();
    let seconds: f64 = all.iter().map(|c| c.seconds).sum();
    let largest = all.iter().map(|c| c.bytes).max().unwrap_or_default();
    let mut table = Table::new();
    if let [one] = all[..] {
        let job = &prepared.points[0].job;
        let note = match job.numerics.grid.y {
            Some(y) if keeps_mirror(job) => {
                format!("{} x {}, half of them kept by the mirror", job.numerics.grid.x.points, y.points)
            }
            Some(y) => format!("{} x {}", job.numerics.grid.x.points, y.points),
            None => String::new(),
        };
        table.row("grid points", one.points.to_string(), "", &note);
        table.row("steps", one.steps.to_string(), "", "");
    }
    let together = cores.min(all.len()).max(1);
    table.row("memory", bytes(largest * together as u64), "", &format!("{together} point(s) at once"));
    match &prepared.points[..] {
        [point] if point.job.numerics.grid.dimensions() == 2 => shares(&point.job, &mut table),
        _ => {}
    }
    // A plane shares its steps among the cores that have no point of their own.
    let is_plane = |point: &Point| point.job.numerics.grid.dimensions() == 2;
    let busy = if prepared.points.iter().all(is_plane) { cores.max(1) } else { together };
    table.row("time", duration(seconds / busy as f64), "", &format!("estimated, on {busy} core(s)"));
    format!("\nCost\n{table}")
}

/// What the memory of a plane is for: what changes in wave functions of the whole grid, and what does not.
fn shares(job: &Job, table: &mut Table) {
    let memory = memory_on_plane(job);
    let one = 16 * job.numerics.grid.len();
    let beside = |part: usize| format!("{:.2} wave functions of the whole grid", part as f64 / one as f64);
    let moving = memory.wave_function + memory.workspace;
    table.row("  the step", bytes(moving as u64), "", &beside(moving));
    if memory.map > 0 {
        table.row("  momentum map", bytes(memory.map as u64), "", &beside(memory.map));
    }
    table.row(
        "  static tables",
        bytes(memory.tables as u64),
        "",
        "factors of the step, potential, absorber, field",
    );
    let note = format!("static too: {}, on a quarter of the plane, and the initial one", job.labels.len());
    table.row("  bound states", bytes(memory.states as u64), "", &note);
}

fn doubts(prepared: &Prepared) -> String {
    let mut out = String::new();
    let mut said: Vec<&str> = Vec::new();
    for doubt in prepared.points.iter().flat_map(|point| &point.doubts) {
        if !said.contains(&doubt.as_str()) {
            said.push(doubt);
        }
    }
    if said.is_empty() {
        return "\nDoubts: none\n".into();
    }
    let _ = writeln!(out, "\nDoubts");
    for doubt in said {
        let _ = writeln!(out, "  {doubt}");
    }
    out
}
