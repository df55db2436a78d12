//! Pictures of a scan: how spectra and numbers move with one or two parameters. Missing points are NaN.

use super::figure::{Across, Curve, Figure, Panel, Trace, Up, draw as draw_figure};
use super::map::{Map, Shading, draw as draw_map};
use super::parameter::{Axis, Values, bands};
use std::borrow::Cow;

/// A spectrum against one scanned parameter.
#[derive(Debug, Clone, Copy)]
pub struct SpectrumScan<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// The scanned parameter.
    pub parameter: Axis<'a>,
    /// Energy in eV, with its name.
    pub energy: Axis<'a>,
    /// Spectra of shape [parameter, energy]; a missing point is NaN throughout.
    pub spectrum: &'a [f64],
    /// Name of the spectrum with unit.
    pub quantity: &'a str,
    /// Most decades shown.
    pub decades: f64,
}

/// Draws the spectra as a map: energy below, parameter at the left, missing points hatched and counted in the title.
pub fn spectrum(scan: &SpectrumScan<'_>) -> String {
    let points = scan.spectrum.chunks(scan.energy.len().max(1));
    let missing = points.filter(|point| point.iter().all(|v| v.is_nan())).count();
    draw_map(&Map {
        title: &counted(scan.title, missing, scan.parameter.len()),
        across: scan.energy,
        up: scan.parameter,
        values: scan.spectrum,
        name: scan.quantity.to_owned(),
        shading: Shading::Decades(scan.decades),
        notes: Vec::new(),
    })
}

/// Numbers against one scanned parameter.
#[derive(Debug, Clone, Copy)]
pub struct NumberScan<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// The scanned parameter.
    pub parameter: Axis<'a>,
    /// Series over the parameter with their names; a name may be empty where there is one.
    pub series: &'a [(&'a str, &'a [f64])],
    /// Name of the numbers with unit.
    pub quantity: &'a str,
    /// How the vertical axis is spread.
    pub up: Up,
}

/// Draws the numbers as marked lines (as markers alone over words). Missing points are left out, the line is broken
/// there, and the title counts them; a note counts those that lack this number alone.
pub fn numbers(scan: &NumberScan<'_>) -> String {
    let mut order: Vec<(usize, f64)> = scan.parameter.numbers().into_iter().enumerate().collect();
    order.sort_by(|a, b| a.1.total_cmp(&b.1));
    let (trace, words) = match scan.parameter.values {
        Values::Text(words) => (Trace::Points, words),
        _ => (Trace::Marked, &[][..]),
    };
    let curves = scan.series.iter().map(|(name, values)| {
        let (x, y): (Vec<f64>, Vec<f64>) =
            order.iter().map(|&(i, x)| (x, values.get(i).copied().unwrap_or(f64::NAN))).unzip();
        Curve { name: Cow::Borrowed(name), x: Cow::Owned(x), y: Cow::Owned(y), trace }
    });
    let whole = scan.parameter.len();
    let is_missing = |values: &[f64], i: usize| values.get(i).is_none_or(|v| v.is_nan());
    let absent = |i: &usize| scan.series.iter().all(|(_, values)| is_missing(values, *i));
    let missing = (0..whole).filter(absent).count();
    let notes = scan.series.iter().filter_map(|(name, values)| {
        let more = (0..whole).filter(|&i| is_missing(values, i)).count() - missing;
        let of = if name.is_empty() { String::new() } else { format!("{name}: ") };
        (more > 0).then(|| format!("{of}{more} of {whole} points have no such number, left out."))
    });
    draw_figure(&Figure {
        title: &counted(scan.title, missing, whole),
        across: Across {
            kind: scan.parameter.kind(),
            words,
            range: bands(&scan.parameter, whole).map(|(range, _)| range),
            ..Across::linear(scan.parameter.label())
        },
        notes: notes.collect(),
        panels: vec![Panel::new(scan.quantity, scan.up, curves.collect())],
    })
}

/// A number against two scanned parameters.
#[derive(Debug, Clone, Copy)]
pub struct NumberMap<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// The first scanned parameter, drawn at the left.
    pub first: Axis<'a>,
    /// The second, drawn below.
    pub second: Axis<'a>,
    /// Numbers of shape [first, second].
    pub numbers: &'a [f64],
    /// Name of the number with unit.
    pub quantity: &'a str,
    /// How numbers become shades.
    pub shading: Shading,
}

/// Draws the number as a map, missing points hatched and counted in the title.
pub fn number_map(scan: &NumberMap<'_>) -> String {
    let missing = scan.numbers.iter().filter(|v| v.is_nan()).count();
    draw_map(&Map {
        title: &counted(scan.title, missing, scan.numbers.len()),
        across: scan.second,
        up: scan.first,
        values: scan.numbers,
        name: scan.quantity.to_owned(),
        shading: scan.shading,
        notes: Vec::new(),
    })
}

fn counted(title: &str, missing: usize, whole: usize) -> String {
    if missing == 0 { title.to_owned() } else { format!("{title} ({missing} of {whole} points missing)") }
}
