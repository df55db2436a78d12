//! Pictures of one run.

use super::super::electrons::{ElectronPicture, MomentumPicture, Peaks};
use super::super::field::FieldPicture;
use super::super::harmonics::HarmonicPicture;
use super::super::populations::PopulationPicture;
use super::super::time_frequency::TimeFrequencyPicture;
use super::super::{electrons, field, harmonics, populations, time_frequency};
use super::{Drawn, MAP_DECADES, SPECTRUM, fundamental, remark, slice};
use crate::store::{Contents, Values};

pub(super) fn pictures(contents: &Contents) -> Vec<Drawn> {
    let drawn = [
        spectrum(contents),
        electron_spectrum(contents),
        momenta(contents),
        laser(contents),
        map(contents),
        motion(contents),
    ];
    drawn.into_iter().flatten().collect()
}

/// A number of the summary that is there.
fn number(contents: &Contents, name: &str) -> Option<f64> {
    slice(contents, "summary", name).first().copied().filter(|v| v.is_finite())
}

fn spectrum(contents: &Contents) -> Option<Drawn> {
    let photon_energy = slice(contents, "harmonics", "photon_energy");
    if photon_energy.is_empty() {
        return None;
    }
    let window = remark(contents, "harmonics", "window");
    Some(Drawn {
        name: "harmonics".into(),
        svg: harmonics::draw(&HarmonicPicture {
            title: &contents.provenance.title,
            photon_energy,
            spectrum: slice(contents, "harmonics", "spectrum"),
            errors: slice(contents, "harmonics", "spectrum_errors"),
            quantity: SPECTRUM,
            fundamental: fundamental(contents),
            cutoff_law: number(contents, "classical_cutoff"),
            measured_cutoff: number(contents, "cutoff_energy"),
            window,
        }),
        caption: format!("Harmonic spectrum of the dipole acceleration, window {window}."),
        alternative:
            "Logarithmic spectrum against photon energy, with the classical and the measured cutoff marked."
                .into(),
    })
}

fn electron_spectrum(contents: &Contents) -> Option<Drawn> {
    let group = "photoelectrons";
    let energy = slice(contents, group, "energy");
    if energy.is_empty() {
        return None;
    }
    let peaks = || {
        Some(Peaks {
            photon: number(contents, "first_photon_energy").filter(|photon| *photon > 0.0)?,
            level: number(contents, "initial_energy")?,
            ponderomotive: number(contents, "ponderomotive_energy")?,
        })
    };
    let method = remark(contents, group, "method");
    let notes = if method.is_empty() { Vec::new() } else { vec![format!("Method: {method}.")] };
    Some(Drawn {
        name: group.into(),
        svg: electrons::draw(&ElectronPicture {
            title: &contents.provenance.title,
            energy,
            both: slice(contents, group, "yield"),
            errors: slice(contents, group, "yield_errors"),
            left: slice(contents, group, "left"),
            right: slice(contents, group, "right"),
            peaks: peaks(),
            notes: &notes,
        }),
        caption: "Photoelectron spectrum: both directions together, and apart.".into(),
        alternative:
            "Logarithmic electron spectrum against kinetic energy, with 2 Up, 10 Up and the expected peaks \
                      marked; below it the electrons to the left and to the right."
                .into(),
    })
}

fn momenta(contents: &Contents) -> Option<Drawn> {
    let momentum = slice(contents, "momentum", "momentum");
    if momentum.is_empty() {
        return None;
    }
    Some(Drawn {
        name: "momentum".into(),
        svg: electrons::draw_momentum(&MomentumPicture {
            title: &contents.provenance.title,
            momentum,
            density: slice(contents, "momentum", "density"),
        }),
        caption: "Momentum distribution of the photoelectrons.".into(),
        alternative: "Logarithmic probability density against momentum.".into(),
    })
}

fn laser(contents: &Contents) -> Option<Drawn> {
    let time = slice(contents, "field", "time");
    if time.is_empty() {
        return None;
    }
    Some(Drawn {
        name: "field".into(),
        svg: field::draw(&FieldPicture {
            title: &contents.provenance.title,
            time,
            electric_field: &[("", slice(contents, "field", "electric_field"))],
            vector_potential: &[("", slice(contents, "field", "vector_potential"))],
        }),
        caption: "Electric field and vector potential.".into(),
        alternative: "Electric field above, vector potential below, against time.".into(),
    })
}

fn map(contents: &Contents) -> Option<Drawn> {
    let group = "time_frequency";
    let (time, photon_energy) = (slice(contents, group, "time"), slice(contents, group, "photon_energy"));
    let intensity = contents.real(group, "intensity")?;
    // The picture wants the energy first, the file has the time first.
    let turned: Vec<f64> = intensity.t().iter().copied().collect();
    let window = remark(contents, group, "window");
    Some(Drawn {
        name: "time_frequency".into(),
        svg: time_frequency::draw(&TimeFrequencyPicture {
            title: &contents.provenance.title,
            time,
            photon_energy,
            intensity: &turned,
            quantity: SPECTRUM,
            decades: MAP_DECADES,
            window,
        }),
        caption: "When each photon energy is emitted: Gabor transform of the dipole acceleration.".into(),
        alternative: "Map of the emission over time and photon energy, logarithmic shades.".into(),
    })
}

/// Norm and populations; the norm is thinned to the populations' times.
fn motion(contents: &Contents) -> Option<Drawn> {
    let all = slice(contents, "dynamics", "time");
    let norm = slice(contents, "dynamics", "norm");
    let time = match slice(contents, "populations", "time") {
        [] => all,
        times => times,
    };
    if time.is_empty() {
        return None;
    }
    let at = |t: f64| norm.get(all.partition_point(|x| *x < t)).or(norm.last()).copied().unwrap_or(f64::NAN);
    let thinned: Vec<f64> = time.iter().map(|&t| at(t)).collect();
    let rows = contents.real("populations", "populations");
    let names: Vec<String> = match contents.get("populations", "state") {
        Some(Values::Integer(numbers)) => numbers.iter().map(|n| format!("state {n}")).collect(),
        _ => Vec::new(),
    };
    let rows: Vec<Vec<f64>> = rows
        .map(|rows| rows.outer_iter().map(|row| row.iter().copied().collect()).collect())
        .unwrap_or_default();
    let mut states: Vec<(&str, &[f64])> =
        names.iter().map(String::as_str).zip(rows.iter().map(Vec::as_slice)).collect();
    if states.is_empty() {
        states.push(("initial state", slice(contents, "populations", "initial_population")));
    }
    Some(Drawn {
        name: "populations".into(),
        svg: populations::draw(&PopulationPicture {
            title: &contents.provenance.title,
            time,
            norm: &thinned,
            states: &states,
        }),
        caption:
            "Norm in the box and populations of field-free bound states (length gauge while the field is on)."
                .into(),
        alternative: "Norm and populations against time.".into(),
    })
}
