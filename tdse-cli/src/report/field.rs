//! The laser field in time.

use super::figure::{Across, Curve, Figure, Panel, Trace, Up, draw as draw_figure};
use std::borrow::Cow;

/// Field and vector potential along one direction.
#[derive(Debug, Clone, Copy)]
pub struct FieldPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Time in fs.
    pub time: &'a [f64],
    /// Electric field in V/m, one series per direction with the direction's name (empty where there is only one).
    pub electric_field: &'a [(&'a str, &'a [f64])],
    /// Vector potential in V s/m, likewise.
    pub vector_potential: &'a [(&'a str, &'a [f64])],
}

/// Draws the field as SVG: electric field above, vector potential below.
pub fn draw(picture: &FieldPicture<'_>) -> String {
    let panel = |name: &str, unit: &str, series: &[(&'_ str, &'_ [f64])]| {
        let (factor, prefix) = prefix(series);
        let curves = series.iter().map(|(direction, values)| Curve {
            name: Cow::Owned((*direction).to_owned()),
            x: Cow::Borrowed(picture.time),
            y: Cow::Owned(values.iter().map(|v| v * factor).collect()),
            trace: Trace::Line,
        });
        Panel {
            height: 130.0,
            ..Panel::new(format!("{name} ({prefix}{unit})"), Up::Linear, curves.collect())
        }
    };
    draw_figure(&Figure {
        title: picture.title,
        across: Across::linear("time (fs)"),
        panels: vec![
            panel("electric field E", "V/m", picture.electric_field),
            panel("vector potential A", "V·s/m", picture.vector_potential),
        ],
        notes: Vec::new(),
    })
}

/// The SI prefix that brings the largest value between 1 and 1000, and the factor that goes with it.
fn prefix(series: &[(&str, &[f64])]) -> (f64, &'static str) {
    const PREFIXES: [(f64, &str); 11] = [
        (1e-15, "P"),
        (1e-12, "T"),
        (1e-9, "G"),
        (1e-6, "M"),
        (1e-3, "k"),
        (1.0, ""),
        (1e3, "m"),
        (1e6, "µ"),
        (1e9, "n"),
        (1e12, "p"),
        (1e15, "f"),
    ];
    let finite = series.iter().flat_map(|(_, values)| values.iter()).filter(|v| v.is_finite());
    let largest = finite.fold(0.0_f64, |largest, v| largest.max(v.abs()));
    PREFIXES.into_iter().find(|(factor, _)| largest * factor >= 1.0).unwrap_or((1.0, ""))
}
