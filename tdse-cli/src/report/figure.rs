//! The line picture that all others of lines are built on: panels above each other over one horizontal axis, curves
//! named at their ends, vertical marks with labels, a second horizontal axis, notes.

use super::axes::{TEXT, TICK, widest, words};
use super::font::{Weight, width};
use super::panel::{self, Layout};
use super::scale::{Kind, Range, Scale};
use super::sheet::{EDGE, Sheet, WIDTH};
use super::ticks::{Ticks, odd, ticks};
use std::borrow::Cow;

/// A picture of lines.
#[derive(Debug, Clone)]
pub struct Figure<'a> {
    /// What the picture shows, from the user.
    pub title: &'a str,
    /// The axis all panels share.
    pub across: Across<'a>,
    /// Panels from the top.
    pub panels: Vec<Panel<'a>>,
    /// Footnotes.
    pub notes: Vec<String>,
}

/// The horizontal axis.
#[derive(Debug, Clone)]
pub struct Across<'a> {
    /// Name with unit.
    pub name: String,
    /// How values are spread.
    pub kind: Kind,
    /// Ends; from the curves where absent.
    pub range: Option<Range>,
    /// Words that stand at 0, 1, 2, … in place of numbers.
    pub words: &'a [String],
    /// Odd multiples of a unit marked above.
    pub multiples: Option<Multiples<'a>>,
}

impl Across<'_> {
    /// An even axis that takes its ends from the curves.
    pub fn linear(name: impl Into<String>) -> Self {
        Self { name: name.into(), kind: Kind::Linear, range: None, words: &[], multiples: None }
    }
}

/// A second horizontal axis that counts multiples of a value of the first.
#[derive(Debug, Clone, Copy)]
pub struct Multiples<'a> {
    /// Name of the count.
    pub name: &'a str,
    /// The value counted, on the first axis.
    pub unit: f64,
}

/// One system of axes.
#[derive(Debug, Clone)]
pub struct Panel<'a> {
    /// Name of the vertical axis with unit.
    pub name: String,
    /// How the vertical axis spreads values and where it ends.
    pub up: Up,
    /// Height of the frame in user units.
    pub height: f64,
    /// Curves; each is named at its end where there are several.
    pub curves: Vec<Curve<'a>>,
    /// Vertical lines.
    pub marks: Vec<Mark>,
    /// Teeth along the frame's upper edge.
    pub comb: Option<Comb>,
    /// Error bars of the first curve.
    pub band: Option<Band<'a>>,
}

impl<'a> Panel<'a> {
    /// A panel of ordinary height without marks.
    pub fn new(name: impl Into<String>, up: Up, curves: Vec<Curve<'a>>) -> Self {
        Self { name: name.into(), up, height: 230.0, curves, marks: Vec::new(), comb: None, band: None }
    }
}

/// The vertical axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Up {
    /// Even, with the curves' ends.
    Linear,
    /// With given ends.
    Fixed(Kind, Range),
    /// Logarithmic, from the curves' floor up, at most so many decades.
    Decades(f64),
}

/// A series drawn as line or points.
#[derive(Debug, Clone)]
pub struct Curve<'a> {
    /// Name at the curve's end.
    pub name: Cow<'a, str>,
    /// Values along the horizontal axis.
    pub x: Cow<'a, [f64]>,
    /// Values along the vertical axis; NaN is a gap.
    pub y: Cow<'a, [f64]>,
    /// How it is drawn.
    pub trace: Trace,
}

/// How a curve is drawn.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Trace {
    /// A line.
    Line,
    /// A line with a marker on every point.
    Marked,
    /// Markers alone.
    Points,
}

/// A vertical line with a label.
#[derive(Debug, Clone)]
pub struct Mark {
    /// Where it stands on the horizontal axis.
    pub at: f64,
    /// What it means.
    pub label: String,
    /// Where the value comes from, which sets how it is drawn.
    pub origin: Origin,
}

/// Values at equal distances, without end: drawn as teeth where they can be told apart.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Comb {
    /// One of them.
    pub first: f64,
    /// Their distance.
    pub step: f64,
}

/// Error bars of a curve, drawn as a band around it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Band<'a> {
    /// Bars in the unit of the curve; NaN where there is none.
    pub errors: &'a [f64],
    /// What the band means, for a footnote.
    pub meaning: &'a str,
}

/// Where a marked value comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Origin {
    /// From a formula: a dashed line.
    Law,
    /// From the data shown: a solid line with a tip.
    Measured,
}

/// Draws the picture as SVG.
pub fn draw(figure: &Figure<'_>) -> String {
    let mut sheet = Sheet::new(figure.title);
    let range = across_range(figure);
    let plans: Vec<panel::Plan> = figure.panels.iter().map(|p| panel::plan(p, range)).collect();
    let left = EDGE + TICK * 1.7 + plans.iter().map(|p| widest(&p.ticks)).fold(18.0, f64::max);
    let right = WIDTH - plans.iter().map(|p| p.right).fold(EDGE, f64::max);
    let across = Scale::new(figure.across.kind, range.unwrap_or(Range { low: 0.0, high: 1.0 }), left, right);
    let (below, above) = horizontal_ticks(figure, range, across, right - left);
    let bottom_panel = plans.len().saturating_sub(1);
    for (number, (panel, plan)) in figure.panels.iter().zip(&plans).enumerate() {
        let layout = Layout {
            across,
            above: (number == 0).then_some(above.as_ref()).flatten(),
            below: &below,
            below_named: (number == bottom_panel).then_some(figure.across.name.as_str()),
        };
        panel::draw(&mut sheet, panel, plan, &layout, (left, right));
    }
    let bands = figure.panels.iter().filter_map(|panel| panel.band.map(|band| band.meaning.to_owned()));
    sheet.notes(&bands.chain(figure.notes.iter().cloned()).collect::<Vec<_>>());
    sheet.finish()
}

/// Labelled multiples: name of the count, scale in counts, ticks.
pub type Above<'a> = (&'a str, Scale, Ticks);

fn horizontal_ticks<'a>(
    figure: &Figure<'a>,
    range: Option<Range>,
    across: Scale,
    length: f64,
) -> (Ticks, Option<Above<'a>>) {
    let Some(range) = range else { return (Ticks::default(), None) };
    let below = if figure.across.words.is_empty() {
        ticks(figure.across.kind, range, wanted(range, length))
    } else {
        words(figure.across.words, length / figure.across.words.len() as f64 - 8.0)
    };
    let above = figure.across.multiples.and_then(|m| {
        let counts = Range { low: range.low / m.unit, high: range.high / m.unit };
        let scale = Scale::new(figure.across.kind, counts, across.place(range.low), across.place(range.high));
        let counted = counts.usable(figure.across.kind) && counts.high >= 1.0;
        counted.then(|| (m.name, scale, odd(counts, wanted(counts, length))))
    });
    (below, above)
}

/// How many labels fit beside each other.
fn wanted(range: Range, length: f64) -> usize {
    let sample = super::number::at_step(range.high, (range.high - range.low) / 5.0);
    (length / (width(&sample, TEXT, Weight::Regular) + 24.0)).clamp(2.0, 10.0) as usize
}

fn across_range(figure: &Figure<'_>) -> Option<Range> {
    if !figure.across.words.is_empty() {
        return Some(Range { low: -0.5, high: figure.across.words.len() as f64 - 0.5 });
    }
    let values = figure.panels.iter().flat_map(|p| &p.curves).flat_map(|c| c.x.iter().copied());
    figure
        .across
        .range
        .filter(|r| r.usable(figure.across.kind))
        .or_else(|| Range::of(values, figure.across.kind))
}
