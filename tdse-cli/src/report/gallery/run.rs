//! Pictures of one run.

use super::super::electrons::{ElectronPicture, MomentumPicture, Peaks};
use super::super::field::FieldPicture;
use super::super::harmonics::HarmonicPicture;
use super::super::lissajous::{Guides, PlanePicture};
use super::super::momentum_map::MomentumMapPicture;
use super::super::populations::PopulationPicture;
use super::super::time_frequency::TimeFrequencyPicture;
use super::super::{electrons, field, harmonics, lissajous, momentum_map, populations, time_frequency};
use super::{Drawn, MAP_DECADES, SPECTRUM, fundamental, remark, rows, slice};
use crate::store::{Contents, Values};

pub(super) fn pictures(contents: &Contents) -> Vec<Drawn> {
    let drawn = [
        spectrum(contents),
        electron_spectrum(contents),
        momenta(contents),
        momenta_of_plane(contents),
        angles(contents),
        laser(contents),
        figure_of_field(contents),
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
    let by_helicity = rows(contents, "harmonics", "helicity_spectrum");
    let errors = rows(contents, "harmonics", "helicity_spectrum_errors");
    let (names, caption) = match by_helicity.len() {
        2 => (["helicity +1", "helicity −1"], " by helicity"),
        _ => ([""; 2], ""),
    };
    let spectra: Vec<(&str, &[f64])> = match by_helicity.len() {
        2 => names.into_iter().zip(by_helicity).collect(),
        _ => vec![("", slice(contents, "harmonics", "spectrum"))],
    };
    Some(Drawn {
        name: "harmonics".into(),
        svg: harmonics::draw(&HarmonicPicture {
            title: &contents.provenance.title,
            photon_energy,
            spectra: &spectra,
            errors: match errors.first() {
                Some(first) => first,
                None if spectra.len() == 1 => slice(contents, "harmonics", "spectrum_errors"),
                None => &[],
            },
            quantity: SPECTRUM,
            fundamental: fundamental(contents),
            cutoff_law: number(contents, "classical_cutoff"),
            measured_cutoff: number(contents, "cutoff_energy"),
            window,
        }),
        caption: format!("Harmonic spectrum of the dipole acceleration{caption}, window {window}."),
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
        caption: match slice(contents, group, "left") {
            [] => "Photoelectron spectrum: all directions together.".into(),
            _ => "Photoelectron spectrum: both directions together, and apart.".into(),
        },
        alternative:
            "Logarithmic electron spectrum against kinetic energy, with 2 Up, 10 Up and the expected peaks \
                      marked; below it the electrons by direction, where there are two."
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

/// A.u. of momentum over charge in V s/m: what turns a vector potential of the file into ħ/bohr.
const VECTOR_POTENTIAL: f64 = tdse_core::units::VECTOR_POTENTIAL_V_S_PER_M;

fn momenta_of_plane(contents: &Contents) -> Option<Drawn> {
    let group = "momentum";
    let density = contents.real(group, "density")?.as_slice()?;
    let momentum_x = slice(contents, group, "momentum_x");
    if momentum_x.is_empty() {
        return None;
    }
    let minus: Vec<Vec<f64>> = rows(contents, "field", "vector_potential")
        .into_iter()
        .map(|row| row.iter().map(|a| -a / VECTOR_POTENTIAL).collect())
        .collect();
    let potential = [0, 1].map(|d| minus.get(d).map_or(&[][..], Vec::as_slice));
    Some(Drawn {
        name: "momentum_map".into(),
        svg: momentum_map::draw(&MomentumMapPicture {
            title: &contents.provenance.title,
            momentum_x,
            momentum_y: slice(contents, group, "momentum_y"),
            density,
            potential,
        }),
        caption: "Momentum distribution of the photoelectrons; the line is −A(t).".into(),
        alternative:
            "Map of the density over both momenta, logarithmic shades, with the curve of minus the vector \
                      potential over it."
                .into(),
    })
}

fn angles(contents: &Contents) -> Option<Drawn> {
    let angle = slice(contents, "photoelectrons", "emission_angle");
    let density = slice(contents, "photoelectrons", "angular_distribution");
    if angle.is_empty() {
        return None;
    }
    // Closed: the first point once more.
    let around = |f: fn(f64) -> f64| -> Vec<f64> {
        let points = angle.iter().zip(density).map(|(a, d)| d * f(*a));
        points.clone().chain(points.take(1)).collect()
    };
    let (x, y) = (around(f64::cos), around(f64::sin));
    let note = "Distance from the centre: probability per radian of a momentum in this direction.";
    Some(Drawn {
        name: "angular_distribution".into(),
        svg: lissajous::draw(&PlanePicture {
            title: &contents.provenance.title,
            across: "towards x (1/rad)",
            up: "towards y (1/rad)",
            x: &x,
            y: &y,
            guides: Guides::Circles,
            notes: &[note.into()],
        }),
        caption: "Angular distribution of the photoelectrons.".into(),
        alternative: "Polar curve: probability per radian against the direction of the momentum.".into(),
    })
}

fn figure_of_field(contents: &Contents) -> Option<Drawn> {
    let components = rows(contents, "field", "electric_field");
    let [x, y] = components[..] else { return None };
    let in_gigavolts = |component: &[f64]| component.iter().map(|e| e * 1e-9).collect::<Vec<f64>>();
    let (x, y) = (in_gigavolts(x), in_gigavolts(y));
    Some(Drawn {
        name: "lissajous".into(),
        svg: lissajous::draw(&PlanePicture {
            title: &contents.provenance.title,
            across: "E along x (GV/m)",
            up: "E along y (GV/m)",
            x: &x,
            y: &y,
            guides: Guides::Cross,
            notes: &[],
        }),
        caption: "Lissajous figure of the electric field.".into(),
        alternative: "Curve that the tip of the electric field draws in the plane.".into(),
    })
}

fn laser(contents: &Contents) -> Option<Drawn> {
    let time = slice(contents, "field", "time");
    if time.is_empty() {
        return None;
    }
    let named = |name: &str| -> Vec<(&str, &[f64])> {
        match rows(contents, "field", name)[..] {
            [x, y] => vec![("along x", x), ("along y", y)],
            _ => vec![("", slice(contents, "field", name))],
        }
    };
    Some(Drawn {
        name: "field".into(),
        svg: field::draw(&FieldPicture {
            title: &contents.provenance.title,
            time,
            electric_field: &named("electric_field"),
            vector_potential: &named("vector_potential"),
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
