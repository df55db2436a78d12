//! One panel of a line picture: planned (range, ticks, room for names), then drawn.

use super::axes::{Frame, Side, TEXT, TICK, axis, hairlines};
use super::ends::{self, End};
use super::figure::{Above, Band, Comb, Curve, Mark, Origin, Panel, Trace, Up};
use super::font::{Weight, width};
use super::palette::{BAND, INK, STYLES, Style, outline, style};
use super::scale::{Kind, Range, Scale};
use super::sheet::{EDGE, Sheet};
use super::svg::{Anchor, Lettering, Point, Stroke};
use super::ticks::{Ticks, ticks};
use super::trace::{inside, trace};

const CURVE: f64 = 1.35;
const STRIP: f64 = 17.0;
const TOOTH: f64 = 7.0;
/// Teeth closer than this blur.
const CLOSEST_TEETH: f64 = 3.5;

/// What is known of a panel before it is drawn.
#[derive(Debug)]
pub struct Plan {
    kind: Kind,
    range: Option<Range>,
    /// Ticks of the vertical axis.
    pub ticks: Ticks,
    /// Room right of the frame.
    pub right: f64,
}

/// The horizontal axis of a panel.
#[derive(Debug)]
pub struct Layout<'a> {
    /// Values to places.
    pub across: Scale,
    /// Axis above the frame.
    pub above: Option<&'a Above<'a>>,
    /// Ticks below the frame.
    pub below: &'a Ticks,
    /// Name of the lower axis, at the lowest panel only.
    pub below_named: Option<&'a str>,
}

/// Ranges, ticks and margins from what is shown within the horizontal range.
pub fn plan(panel: &Panel<'_>, across: Option<Range>) -> Plan {
    let shown = |&(x, _): &(f64, f64)| across.is_some_and(|r| (r.low..=r.high).contains(&x));
    let points = panel.curves.iter().flat_map(|c| c.x.iter().copied().zip(c.y.iter().copied()));
    let values = points.filter(shown).map(|(_, y)| y);
    let (kind, range) = match panel.up {
        Up::Linear => (Kind::Linear, Range::of(values, Kind::Linear).map(|r| r.padded(0.05))),
        Up::Fixed(kind, range) => {
            (kind, Range::of(values, kind).map(|own| if range.usable(kind) { range } else { own }))
        }
        Up::Decades(decades) => (Kind::Log, Range::above_floor(values, decades)),
    };
    let ticks = range.map_or_else(Ticks::default, |r| ticks(kind, r, (panel.height / 28.0) as usize));
    Plan {
        kind,
        range,
        ticks,
        right: ends::room(panel.curves.iter().map(|c| c.name.as_ref())).max(EDGE + 6.0),
    }
}

/// Draws the panel at the sheet's end, its frame between the two given edges.
pub fn draw(
    sheet: &mut Sheet,
    panel: &Panel<'_>,
    plan: &Plan,
    layout: &Layout<'_>,
    (left, right): (f64, f64),
) {
    sheet.names(&panel.name, layout.above.map_or("", |a| a.0), right);
    sheet.y += if layout.above.is_some() { 17.0 + 1.7 * TICK } else { 12.0 };
    let rows = rows(&panel.marks, layout.across, right);
    let strips = rows.iter().map(|(_, _, row)| row + 1).max().unwrap_or(0);
    let outer = sheet.y;
    let top = outer + strips as f64 * STRIP;
    let frame = Frame { left, right, top, bottom: top + panel.height };
    sheet.y = frame.bottom + 20.0;
    if let Some((_, counts, ticks)) = layout.above {
        axis(&mut sheet.svg, Frame { top: outer, ..frame }, Side::Top, *counts, ticks);
    }
    if let Some(range) = plan.range {
        let up = Scale::new(plan.kind, range, frame.bottom, frame.top);
        hairlines(&mut sheet.svg, frame, up, &plan.ticks);
        marks(sheet, &rows, layout.across, outer, frame);
        if let Some(comb) = panel.comb {
            teeth(sheet, comb, layout.across, frame);
        }
        if let (Some(band), Some(curve)) = (panel.band, panel.curves.first()) {
            sheet.svg.open("band");
            for outline in around(curve, band, (layout.across, up), frame) {
                sheet.svg.patch(&outline, BAND);
            }
            sheet.svg.close();
        }
        curves(sheet, panel, (layout.across, up), frame);
        axis(&mut sheet.svg, frame, Side::Left, up, &plan.ticks);
    } else {
        let middle = (f64::midpoint(left, right), f64::midpoint(frame.top, frame.bottom));
        sheet.svg.text(middle, "no data", Lettering::new(TEXT, Anchor::Middle));
    }
    let below = match layout.below_named {
        Some(_) => layout.below.clone(),
        None => unlabelled(layout.below),
    };
    axis(&mut sheet.svg, frame, Side::Bottom, layout.across, &below);
    match layout.below_named {
        Some(name) => sheet.lower_name(name, right),
        None => sheet.y -= 8.0,
    }
}

fn unlabelled(ticks: &Ticks) -> Ticks {
    Ticks {
        major: ticks.major.iter().map(|(v, _)| (*v, String::new())).collect(),
        minor: ticks.minor.clone(),
    }
}

fn curves(sheet: &mut Sheet, panel: &Panel<'_>, (across, up): (Scale, Scale), frame: Frame) {
    let mut named = Vec::new();
    for (number, curve) in panel.curves.iter().enumerate() {
        let style = style(number);
        sheet.svg.open("curve");
        one_curve(sheet, curve, style, (across, up), frame);
        sheet.svg.close();
        if let Some(&at) = inside(&curve.x, &curve.y, across, up, frame).last() {
            named.push(End { at, name: curve.name.as_ref(), style, trace: curve.trace });
        }
    }
    if panel.curves.iter().any(|c| !c.name.is_empty()) {
        ends::draw(&mut sheet.svg, named, frame);
    }
}

fn one_curve(sheet: &mut Sheet, curve: &Curve<'_>, style: Style, (across, up): (Scale, Scale), frame: Frame) {
    if curve.trace != Trace::Points {
        let stroke = Stroke { colour: style.colour, width: CURVE, dash: style.dash };
        for piece in trace(&curve.x, &curve.y, across, up, frame) {
            sheet.svg.trace(&piece, stroke);
        }
    }
    if curve.trace != Trace::Line {
        for point in inside(&curve.x, &curve.y, across, up, frame) {
            sheet.svg.shape(&outline(style.marker, point), style.colour);
        }
    }
}

/// A mark with the side its label stands on and the row of the strip it takes.
type Row<'a> = (&'a Mark, Anchor, usize);

/// Labels right of their lines where they fit, else left. Rows are given from the side the labels lean away from, so
/// that a line, which starts at its own label's row, does not cross the labels above.
fn rows(marks: &[Mark], across: Scale, right: f64) -> Vec<Row<'_>> {
    let Range { low, high } = across.range();
    let mut shown: Vec<&Mark> = marks.iter().filter(|m| (low..=high).contains(&m.at)).collect();
    shown.sort_by(|a, b| a.at.total_cmp(&b.at));
    let length = |mark: &Mark| width(&mark.label, TEXT, Weight::Regular) + 16.0;
    let (fitting, leaning): (Vec<&Mark>, Vec<&Mark>) =
        shown.into_iter().partition(|mark| across.place(mark.at) + length(mark) <= right);
    let ordered = leaning.into_iter().rev().map(|m| (m, Anchor::End));
    let ordered = ordered.chain(fitting.into_iter().map(|m| (m, Anchor::Start)));
    let mut taken: Vec<(usize, f64, f64)> = Vec::new();
    let mut rows = Vec::new();
    for (mark, anchor) in ordered {
        let x = across.place(mark.at);
        let (from, to) =
            if anchor == Anchor::Start { (x - 4.0, x + length(mark)) } else { (x - length(mark), x + 4.0) };
        let free = |row: usize| taken.iter().all(|&(r, f, t)| r < row || to < f || t < from);
        let row = (0..=taken.len()).find(|&row| free(row)).unwrap_or(taken.len());
        taken.push((row, from, to));
        rows.push((mark, anchor, row));
    }
    rows
}

fn marks(sheet: &mut Sheet, rows: &[Row<'_>], across: Scale, outer: f64, frame: Frame) {
    sheet.svg.open("marks");
    for &(mark, _, row) in rows {
        let (x, top) = (across.place(mark.at), outer + row as f64 * STRIP + 4.0);
        match mark.origin {
            Origin::Law => {
                let stroke = Stroke { colour: STYLES[1].colour, width: 1.3, dash: "5 3" };
                sheet.svg.line((x, top), (x, frame.bottom), stroke);
            }
            Origin::Measured => {
                sheet.svg.line((x, top), (x, frame.bottom), Stroke::solid(STYLES[4].colour, 1.1));
                let tip = format!("M{:.2} {top:.2}h8l-4 7Z", x - 4.0);
                sheet.svg.shape(&tip, STYLES[4].colour);
            }
        }
    }
    for &(mark, anchor, row) in rows {
        let x = across.place(mark.at) + if anchor == Anchor::Start { 7.0 } else { -7.0 };
        let y = outer + row as f64 * STRIP + 14.0;
        let far =
            x + width(&mark.label, TEXT, Weight::Regular) * if anchor == Anchor::Start { 1.0 } else { -1.0 };
        sheet.svg.rectangle((x, y - 11.0), (far, y + 3.0), "#ffffff");
        sheet.svg.text((x, y), &mark.label, Lettering { colour: INK, ..Lettering::new(TEXT, anchor) });
    }
    sheet.svg.close();
}

fn teeth(sheet: &mut Sheet, comb: Comb, across: Scale, frame: Frame) {
    let Range { low, high } = across.range();
    let apart = (across.place(low + comb.step) - across.place(low)).abs();
    if !(comb.step > 0.0 && apart >= CLOSEST_TEETH) {
        return;
    }
    sheet.svg.open("comb");
    let lowest = ((low - comb.first) / comb.step).ceil() as i64;
    let highest = ((high - comb.first) / comb.step).floor() as i64;
    for number in lowest..=highest {
        let x = across.place(comb.first + number as f64 * comb.step);
        sheet.svg.line((x, frame.top), (x, frame.top + TOOTH), Stroke::solid(STYLES[1].colour, 1.0));
    }
    sheet.svg.close();
}

/// Outlines of a band: one for every stretch where there are bars, there along the upper edge and back along the lower.
/// What reaches beyond the frame, on a logarithmic axis also below zero, ends at its edge.
fn around(curve: &Curve<'_>, band: Band<'_>, (across, up): (Scale, Scale), frame: Frame) -> Vec<Vec<Point>> {
    let height = |value: f64| match up.place(value) {
        place if place.is_finite() => place.clamp(frame.top, frame.bottom),
        _ => frame.bottom,
    };
    let places: Vec<Option<[f64; 3]>> = curve
        .x
        .iter()
        .zip(curve.y.iter().zip(band.errors))
        .map(|(&x, (&y, &error))| {
            let x = across.place(x);
            let shown = (y + error).is_finite() && (frame.left..=frame.right).contains(&x);
            shown.then(|| [x, height(y + error), height(y - error)])
        })
        .collect();
    let stretches = places.chunk_by(|a, b| a.is_some() == b.is_some());
    let outline = |stretch: &[Option<[f64; 3]>]| {
        let columns = columns(stretch.iter().flatten().copied());
        let upper = columns.iter().map(|column| (column[0], column[1]));
        upper.chain(columns.iter().rev().map(|column| (column[0], column[2]))).collect()
    };
    stretches.filter(|stretch| stretch.len() > 1 && stretch[0].is_some()).map(outline).collect()
}

/// Places closer than half a unit joined: the highest upper and the lowest lower edge of them.
fn columns(places: impl Iterator<Item = [f64; 3]>) -> Vec<[f64; 3]> {
    let mut joined: Vec<[f64; 3]> = Vec::new();
    for [x, high, low] in places {
        match joined.last_mut() {
            Some(last) if (x - last[0]).abs() < 0.5 => {
                (last[1], last[2]) = (last[1].min(high), last[2].max(low));
            }
            _ => joined.push([x, high, low]),
        }
    }
    joined
}
