//! Curves in the plane with the same scale both ways: the figure that a field draws, and a distribution over angles.

use super::axes::{Frame, Side, TEXT, TICK, axis, hairlines, widest};
use super::palette::{HAIR, style};
use super::scale::{Kind, Range, Scale};
use super::sheet::{EDGE, Sheet, WIDTH};
use super::svg::{Anchor, Lettering, Stroke};
use super::ticks::ticks;
use super::trace::trace;

/// Room between the farthest point and the frame, as a part of the former.
const ROOM: f64 = 0.06;
/// Points of a circle.
const CIRCLE: usize = 180;

/// A curve in the plane.
#[derive(Debug, Clone, Copy)]
pub struct PlanePicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Name of the horizontal axis with unit.
    pub across: &'a str,
    /// Name of the vertical axis with unit.
    pub up: &'a str,
    /// The points.
    pub x: &'a [f64],
    /// The points.
    pub y: &'a [f64],
    /// What lies behind the curve.
    pub guides: Guides,
    /// Footnotes.
    pub notes: &'a [String],
}

/// What lies behind a curve.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Guides {
    /// Lines through zero.
    Cross,
    /// Circles at the values that the axes name.
    Circles,
}

/// Draws the curve as SVG.
pub fn draw(picture: &PlanePicture<'_>) -> String {
    let mut sheet = Sheet::new(picture.title);
    sheet.names(picture.up, "", WIDTH - EDGE);
    sheet.y += 12.0;
    let finite = picture.x.iter().chain(picture.y).map(|v| v.abs()).filter(|v| v.is_finite());
    let farthest = finite.fold(0.0, f64::max) * (1.0 + ROOM);
    let range = Range { low: -farthest, high: farthest };
    if !range.usable(Kind::Linear) {
        sheet.y += 40.0;
        let middle = (WIDTH / 2.0, sheet.y);
        sheet.svg.text(middle, "no data", Lettering::new(TEXT, Anchor::Middle));
        return sheet.finish();
    }
    let marks = ticks(Kind::Linear, range, 8);
    let (left, right) = (EDGE + widest(&marks) + 1.7 * TICK, WIDTH - EDGE - 10.0);
    let frame = Frame { left, right, top: sheet.y, bottom: sheet.y + right - left };
    let across = Scale::new(Kind::Linear, range, frame.left, frame.right);
    let up = Scale::new(Kind::Linear, range, frame.bottom, frame.top);
    match picture.guides {
        Guides::Cross => hairlines(&mut sheet.svg, frame, up, &marks),
        Guides::Circles => {
            sheet.svg.open("grid");
            for (radius, _) in marks.major.iter().filter(|(radius, _)| *radius > 0.0) {
                let points: Vec<(f64, f64)> = (0..=CIRCLE)
                    .map(|n| std::f64::consts::TAU * n as f64 / CIRCLE as f64)
                    .map(|angle| (across.place(radius * angle.cos()), up.place(radius * angle.sin())))
                    .collect();
                sheet.svg.trace(&points, Stroke::solid(HAIR, 0.9));
            }
            sheet.svg.close();
        }
    }
    sheet.svg.open("zero");
    sheet.svg.line((frame.left, up.place(0.0)), (frame.right, up.place(0.0)), Stroke::solid(HAIR, 1.2));
    sheet.svg.line(
        (across.place(0.0), frame.top),
        (across.place(0.0), frame.bottom),
        Stroke::solid(HAIR, 1.2),
    );
    sheet.svg.close();
    sheet.svg.open("curve");
    for piece in trace(picture.x, picture.y, across, up, frame) {
        sheet.svg.trace(&piece, Stroke::solid(style(0).colour, 1.35));
    }
    sheet.svg.close();
    axis(&mut sheet.svg, frame, Side::Bottom, across, &marks);
    axis(&mut sheet.svg, frame, Side::Left, up, &marks);
    sheet.y = frame.bottom + 20.0;
    sheet.lower_name(picture.across, frame.right);
    sheet.notes(picture.notes);
    sheet.finish()
}
