//! Simpler models beside the full result of one run.

use super::figure::{Across, Curve, Figure, Mark, Multiples, Origin, Panel, Trace, Up, draw as draw_figure};
use super::number::significant;
use super::scale::{Kind, Range};
use std::borrow::Cow;

/// Decades of spectra, of ratios and of ionization that are shown at most.
const DECADES: [f64; 3] = [14.0, 8.0, 8.0];
const LOWER: f64 = 130.0;

/// Values of a model with its name.
pub type Named<'a> = (&'a str, &'a [f64]);

/// Harmonic spectra laid over each other, and the ratio of yields below.
#[derive(Debug, Clone)]
pub struct SpectraPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Photon energy in eV, rising.
    pub photon_energy: &'a [f64],
    /// The full result, then the models.
    pub spectra: Vec<Named<'a>>,
    /// Name of the spectrum with unit.
    pub quantity: &'a str,
    /// Photon energy of the first pulse in eV.
    pub fundamental: f64,
    /// Yields by order from 1 on, in the order of `spectra`.
    pub yields: Vec<&'a [f64]>,
    /// The full result's measured cutoff, eV.
    pub measured_cutoff: Option<f64>,
}

/// Draws the spectra as SVG.
pub fn draw_spectra(picture: &SpectraPicture<'_>) -> String {
    let spectra = picture.spectra.iter().map(|(name, values)| Curve {
        name: Cow::Borrowed(*name),
        x: Cow::Borrowed(picture.photon_energy),
        y: Cow::Borrowed(*values),
        trace: Trace::Line,
    });
    let full = picture.yields.first().copied().unwrap_or_default();
    let orders: Vec<f64> = (1..=full.len()).map(|order| order as f64 * picture.fundamental).collect();
    let ratios = picture.spectra.iter().zip(&picture.yields).map(|((name, _), yields)| Curve {
        name: Cow::Borrowed(*name),
        x: Cow::Owned(orders.clone()),
        y: Cow::Owned(yields.iter().zip(full).map(|(model, full)| model / full).collect()),
        trace: Trace::Line,
    });
    let mark = |at: f64| Mark {
        at,
        label: format!("cutoff measured {} eV", significant(at, 4)),
        origin: Origin::Measured,
    };
    let upper = Panel {
        marks: picture.measured_cutoff.map(mark).into_iter().collect(),
        ..Panel::new(picture.quantity, Up::Decades(DECADES[0]), spectra.collect())
    };
    let below = Panel {
        height: LOWER,
        ..Panel::new("yield, model / full", Up::Decades(DECADES[1]), ratios.collect())
    };
    draw_figure(&Figure {
        title: picture.title,
        across: Across {
            range: Range::of(picture.photon_energy.iter().copied(), Kind::Linear),
            multiples: Some(Multiples { name: "harmonic order", unit: picture.fundamental }),
            ..Across::linear("photon energy (eV)")
        },
        panels: vec![upper, below],
        notes: vec![
            "Below: energy radiated within half a photon of every order, model over full result.".into(),
        ],
    })
}

/// Ionization in time.
#[derive(Debug, Clone)]
pub struct IonizationPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Time in fs.
    pub time: &'a [f64],
    /// One minus the initial population of the full run, then the rates.
    pub probabilities: Vec<Named<'a>>,
    /// What the full run says after the field.
    pub after: Option<f64>,
}

/// Draws ionization in time as SVG.
pub fn draw_ionization(picture: &IonizationPicture<'_>) -> String {
    let curves = picture.probabilities.iter().map(|(name, values)| Curve {
        name: Cow::Borrowed(*name),
        x: Cow::Borrowed(picture.time),
        y: Cow::Borrowed(*values),
        trace: Trace::Line,
    });
    let mut notes = vec![
        "Full: one minus the population of the initial state, in length gauge; while the field is on it also holds what the field \
         bends for a moment."
            .to_owned(),
    ];
    notes.extend(picture.after.map(|p| format!("Ionization after the field: {}.", significant(p, 4))));
    draw_figure(&Figure {
        title: picture.title,
        across: Across::linear("time (fs)"),
        panels: vec![Panel::new("ionization probability", Up::Decades(DECADES[2]), curves.collect())],
        notes,
    })
}

/// Phase slopes of both kinds of paths at one intensity.
#[derive(Debug, Clone)]
pub struct BranchPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Harmonic orders.
    pub orders: &'a [f64],
    /// Slopes of the full result, short and long, rad cm²/W.
    pub full: [&'a [f64]; 2],
    /// Slopes of the quantum orbits.
    pub orbits: [&'a [f64]; 2],
    /// Where in the scan, in words.
    pub place: &'a str,
}

/// Unit of the slopes that are drawn, rad cm²/W.
const SLOPE: f64 = 1e-14;

/// Draws the slopes as SVG.
pub fn draw_branches(picture: &BranchPicture<'_>) -> String {
    let named = [
        ("orbit, short", picture.orbits[0], Trace::Line),
        ("orbit, long", picture.orbits[1], Trace::Line),
        ("full, short", picture.full[0], Trace::Points),
        ("full, long", picture.full[1], Trace::Points),
    ];
    let curves = named.map(|(name, slopes, trace)| {
        let known = picture.orders.iter().zip(slopes).filter(|(_, slope)| slope.is_finite());
        let (x, y): (Vec<f64>, Vec<f64>) = known.map(|(&order, slope)| (order, slope / SLOPE)).unzip();
        Curve { name: Cow::Borrowed(name), x: Cow::Owned(x), y: Cow::Owned(y), trace }
    });
    draw_figure(&Figure {
        title: picture.title,
        across: Across::linear("harmonic order"),
        panels: vec![Panel::new("phase slope (10⁻¹⁴ rad cm²/W)", Up::Linear, curves.into())],
        notes: vec![format!(
            "{}. Where short and long are not told apart, as in the cutoff, both stand at one slope.",
            picture.place
        )],
    })
}
