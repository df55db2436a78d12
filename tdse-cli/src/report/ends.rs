//! Names of curves at the curves' right ends, moved apart where they would touch.

use super::axes::{Frame, TEXT};
use super::figure::Trace;
use super::font::{Weight, shorten, width};
use super::palette::{Style, outline};
use super::svg::{Anchor, Lettering, Point, Stroke, Svg};

/// Length of the sample of the curve before its name.
const SAMPLE: f64 = 22.0;
const MOST: f64 = 130.0;
const APART: f64 = 15.0;
const GAP: f64 = 6.0;

/// The end of a curve inside the frame.
#[derive(Debug, Clone, Copy)]
pub struct End<'a> {
    /// Where the curve was last inside.
    pub at: Point,
    /// The curve's name.
    pub name: &'a str,
    /// The curve's style.
    pub style: Style,
    /// How the curve is drawn.
    pub trace: Trace,
}

/// Room that names need right of the frame; none where no curve has a name.
pub fn room<'a>(names: impl Iterator<Item = &'a str>) -> f64 {
    let widest = names.map(|name| width(name, TEXT, Weight::Regular)).fold(0.0, f64::max);
    if widest == 0.0 { 0.0 } else { widest.min(MOST) + SAMPLE + 2.0 * GAP + 8.0 }
}

/// Draws the names with a sample of each curve.
pub fn draw(svg: &mut Svg, mut ends: Vec<End<'_>>, frame: Frame) {
    // Curves that leave through the lower edge end at one height: the one that lasts longest stands first.
    let row = |y: f64| (y / 12.0).round();
    ends.sort_by(|a, b| row(a.at.1).total_cmp(&row(b.at.1)).then(b.at.0.total_cmp(&a.at.0)));
    let heights = apart(&ends.iter().map(|e| e.at.1).collect::<Vec<_>>(), frame);
    svg.open("names");
    for (end, y) in ends.iter().zip(heights) {
        let from = frame.right + GAP;
        let to = from + SAMPLE;
        let stroke = Stroke { colour: end.style.colour, width: 1.35, dash: end.style.dash };
        if end.trace != Trace::Points {
            svg.line((from, y), (to, y), stroke);
        }
        if end.trace != Trace::Line {
            svg.shape(&outline(end.style.marker, (f64::midpoint(from, to), y)), end.style.colour);
        }
        let name = shorten(end.name, TEXT, Weight::Regular, MOST);
        let lettering = Lettering { colour: end.style.colour, ..Lettering::new(TEXT, Anchor::Start) };
        svg.text((to + GAP, y + 4.6), &name, lettering);
    }
    svg.close();
}

/// Heights at least a line apart, as close to the rising ones wanted as a pass down and a pass up come.
fn apart(wanted: &[f64], frame: Frame) -> Vec<f64> {
    let gap = APART.min((frame.bottom - frame.top) / wanted.len().max(1) as f64);
    let mut heights = wanted.to_vec();
    let mut least = frame.top;
    for y in &mut heights {
        *y = y.max(least);
        least = *y + gap;
    }
    let mut most = frame.bottom;
    for y in heights.iter_mut().rev() {
        *y = y.min(most);
        most = *y - gap;
    }
    heights
}
