//! The harmonic spectrum of one run.

use super::figure::{
    Across, Band, Curve, Figure, Mark, Multiples, Origin, Panel, Trace, Up, draw as draw_figure,
};
use super::number::significant;
use super::scale::{Kind, Range};
use std::borrow::Cow;

/// Most decades a spectrum is shown over: what double precision can hold.
const DECADES: f64 = 14.0;

/// A harmonic spectrum with what is marked in it.
#[derive(Debug, Clone, Copy)]
pub struct HarmonicPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Photon energy in eV, rising.
    pub photon_energy: &'a [f64],
    /// Spectra in the unit that `quantity` names, each with its name; empty where there is only one.
    pub spectra: &'a [(&'a str, &'a [f64])],
    /// Error bars of the first spectrum; empty where there are none.
    pub errors: &'a [f64],
    /// Name of the spectrum with unit, such as `|a(ω)|² (a.u.)`.
    pub quantity: &'a str,
    /// Photon energy of the first pulse in eV, which the harmonic order counts.
    pub fundamental: Option<f64>,
    /// Cutoff energy by the classical law, in eV.
    pub cutoff_law: Option<f64>,
    /// Cutoff energy found from the spectrum, in eV.
    pub measured_cutoff: Option<f64>,
    /// Name of the window the acceleration was transformed with.
    pub window: &'a str,
}

/// Draws the spectrum as SVG: logarithmic, photon energy below, harmonic order above.
pub fn draw(picture: &HarmonicPicture<'_>) -> String {
    let curves = picture.spectra.iter().map(|(name, spectrum)| Curve {
        name: Cow::Borrowed(*name),
        x: Cow::Borrowed(picture.photon_energy),
        y: Cow::Borrowed(*spectrum),
        trace: Trace::Line,
    });
    let marks = [
        (picture.cutoff_law, "cutoff law", Origin::Law),
        (picture.measured_cutoff, "cutoff measured", Origin::Measured),
    ];
    let marks = marks.into_iter().filter_map(|(energy, name, origin)| {
        energy.map(|at| Mark { at, label: format!("{name} {} eV", significant(at, 4)), origin })
    });
    let band = Band { errors: picture.errors, meaning: "Band: numerical error bars." };
    let panel = Panel {
        marks: marks.collect(),
        band: (!picture.errors.is_empty()).then_some(band),
        ..Panel::new(picture.quantity, Up::Decades(DECADES), curves.collect())
    };
    draw_figure(&Figure {
        title: picture.title,
        across: Across {
            range: Range::of(picture.photon_energy.iter().copied(), Kind::Linear),
            multiples: picture.fundamental.map(|unit| Multiples { name: "harmonic order", unit }),
            ..Across::linear("photon energy (eV)")
        },
        panels: vec![panel],
        notes: vec![format!("Window: {}.", picture.window)],
    })
}
