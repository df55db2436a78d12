//! Photoelectrons of one run: the energy spectrum, both directions together and apart, and the momentum distribution.

use super::figure::{Across, Band, Comb, Curve, Figure, Mark, Origin, Panel, Trace, Up, draw as draw_figure};
use super::number::significant;
use super::scale::{Kind, Range};
use std::borrow::Cow;

/// Most decades a spectrum is shown over.
const DECADES: f64 = 12.0;

/// An electron spectrum with what is marked in it.
#[derive(Debug, Clone, Copy)]
pub struct ElectronPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Kinetic energy in eV, rising.
    pub energy: &'a [f64],
    /// Probability per eV, both directions together.
    pub both: &'a [f64],
    /// Error bars of `both`; empty where there are none.
    pub errors: &'a [f64],
    /// The same towards negative x; empty where directions were not told apart.
    pub left: &'a [f64],
    /// The same towards positive x; empty where directions were not told apart.
    pub right: &'a [f64],
    /// Where peaks are expected, if anything says so.
    pub peaks: Option<Peaks>,
    /// Footnotes, such as the method.
    pub notes: &'a [String],
}

/// Where absorbing whole photons above threshold leads to: nω + E - Up.
#[derive(Debug, Clone, Copy)]
pub struct Peaks {
    /// ω, eV.
    pub photon: f64,
    /// E of the initial state, negative where it is bound, eV.
    pub level: f64,
    /// Up at the field's peak, eV.
    pub ponderomotive: f64,
}

impl Peaks {
    /// The lowest expected peak above zero.
    fn first(&self) -> f64 {
        (self.level - self.ponderomotive).rem_euclid(self.photon)
    }

    fn marks(&self) -> Vec<Mark> {
        let mark = |multiple: f64, meaning: &str| {
            let at = multiple * self.ponderomotive;
            Mark { at, label: format!("{meaning} {} eV", significant(at, 3)), origin: Origin::Law }
        };
        vec![mark(2.0, "2 Up"), mark(10.0, "10 Up")]
    }
}

/// Draws the spectrum as SVG: both directions together above, with comb and marks; apart below.
pub fn draw(picture: &ElectronPicture<'_>) -> String {
    let curve = |name: &'static str, y| Curve {
        name: Cow::Borrowed(name),
        x: Cow::Borrowed(picture.energy),
        y: Cow::Borrowed(y),
        trace: Trace::Line,
    };
    let band = Band { errors: picture.errors, meaning: "Band: numerical error bars." };
    let together = Panel {
        marks: picture.peaks.map_or_else(Vec::new, |peaks| peaks.marks()),
        band: (!picture.errors.is_empty()).then_some(band),
        comb: picture.peaks.map(|peaks| Comb { first: peaks.first(), step: peaks.photon }),
        ..Panel::new("yield (1/eV)", Up::Decades(DECADES), vec![curve("", picture.both)])
    };
    let apart = [("left", picture.left), ("right", picture.right)];
    let apart: Vec<Curve<'_>> =
        apart.into_iter().filter(|(_, y)| !y.is_empty()).map(|(name, y)| curve(name, y)).collect();
    let mut panels = vec![together];
    if !apart.is_empty() {
        panels.push(Panel::new("left, right (1/eV)", Up::Decades(DECADES), apart));
    }
    let comb =
        picture.peaks.map(|_| "Teeth along the upper edge: nω + E − Up, with the field's peak.".into());
    draw_figure(&Figure {
        title: picture.title,
        across: Across {
            range: Range::of(picture.energy.iter().copied(), Kind::Linear),
            ..Across::linear("kinetic energy (eV)")
        },
        panels,
        notes: comb.into_iter().chain(picture.notes.iter().cloned()).collect(),
    })
}

/// A momentum distribution along one line.
#[derive(Debug, Clone, Copy)]
pub struct MomentumPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Momentum in ħ/bohr, rising, negative towards negative x.
    pub momentum: &'a [f64],
    /// Probability per unit momentum.
    pub density: &'a [f64],
}

/// Draws the distribution as SVG.
pub fn draw_momentum(picture: &MomentumPicture<'_>) -> String {
    let curve = Curve {
        name: Cow::Borrowed(""),
        x: Cow::Borrowed(picture.momentum),
        y: Cow::Borrowed(picture.density),
        trace: Trace::Line,
    };
    draw_figure(&Figure {
        title: picture.title,
        across: Across::linear("momentum (ħ/bohr)"),
        panels: vec![Panel::new("probability density (bohr/ħ)", Up::Decades(DECADES), vec![curve])],
        notes: Vec::new(),
    })
}
