//! How norm and bound states fare in time.

use super::figure::{Across, Curve, Figure, Panel, Trace, Up, draw as draw_figure};
use super::scale::{Kind, Range};
use std::borrow::Cow;

/// Most states that a reader can follow.
const MOST: usize = 5;
/// Decades shown on a logarithmic axis.
const DECADES: f64 = 8.0;
/// An even axis shows a single line where no other state rises above this share of the largest.
const FAINT: f64 = 0.05;

/// Populations and norm.
#[derive(Debug, Clone, Copy)]
pub struct PopulationPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Time in fs.
    pub time: &'a [f64],
    /// Norm; empty where it is not known.
    pub norm: &'a [f64],
    /// States with their names.
    pub states: &'a [(&'a str, &'a [f64])],
}

/// Draws norm and the most populated states as SVG, each named at its end.
pub fn draw(picture: &PopulationPicture<'_>) -> String {
    let mut states: Vec<(&str, &[f64], f64)> =
        picture.states.iter().map(|&(name, values)| (name, values, peak(values))).collect();
    states.sort_by(|a, b| b.2.total_cmp(&a.2));
    let largest = states.first().map_or(0.0, |state| state.2);
    let faint = states.get(1).is_some_and(|state| state.2 > 0.0 && state.2 < FAINT * largest);
    let up =
        if faint { Up::Decades(DECADES) } else { Up::Fixed(Kind::Linear, Range { low: 0.0, high: 1.05 }) };
    states.truncate(MOST);
    if faint {
        states.retain(|state| state.2 > largest * 10_f64.powf(-DECADES));
    }
    let shown = states.len();
    let norm = Some(("norm", picture.norm)).filter(|(_, values)| !values.is_empty());
    let series = norm.into_iter().chain(states.into_iter().map(|(name, values, _)| (name, values)));
    let curves = series.map(|(name, values)| Curve {
        name: Cow::Borrowed(name),
        x: Cow::Borrowed(picture.time),
        y: Cow::Borrowed(values),
        trace: Trace::Line,
    });
    let notes = match picture.states.len() {
        all if all == shown => Vec::new(),
        all => vec![format!("{shown} of {all} states are shown, the most populated.")],
    };
    draw_figure(&Figure {
        title: picture.title,
        across: Across::linear("time (fs)"),
        panels: vec![Panel::new("population", up, curves.collect())],
        notes,
    })
}

fn peak(values: &[f64]) -> f64 {
    values.iter().copied().filter(|v| v.is_finite()).fold(0.0, f64::max)
}
