//! Axes and the frame they stand around: ticks outwards, hairlines at the labelled values, names at the axes' ends.

use super::font::{Weight, shorten, width};
use super::palette::{HAIR, INK};
use super::scale::Scale;
use super::sheet::WIDTH;
use super::svg::{Anchor, Lettering, Stroke, Svg};
use super::ticks::Ticks;

/// Size of tick labels and names of axes. At 8.5 cm width a user unit is half a point: this prints at 6.5 pt.
pub const TEXT: f64 = 13.0;
/// Length of a labelled tick.
pub const TICK: f64 = 5.0;

const AXIS: Stroke = Stroke::solid(INK, 1.1);
const MINOR: Stroke = Stroke::solid(INK, 0.8);
const GRID: Stroke = Stroke::solid(HAIR, 0.9);

/// The rectangle that data are drawn in, in user units.
#[derive(Debug, Clone, Copy)]
pub struct Frame {
    /// Left edge.
    pub left: f64,
    /// Right edge.
    pub right: f64,
    /// Upper edge.
    pub top: f64,
    /// Lower edge.
    pub bottom: f64,
}

/// The edge of the frame an axis lies on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Side {
    /// Below.
    Bottom,
    /// Above.
    Top,
    /// At the left.
    Left,
    /// At the right.
    Right,
}

/// Draws the axis line, its ticks and their labels.
pub fn axis(svg: &mut Svg, frame: Frame, side: Side, scale: Scale, ticks: &Ticks) {
    let Frame { left, right, top, bottom } = frame;
    let (from, to, outwards) = match side {
        Side::Bottom => ((left, bottom), (right, bottom), (0.0, TICK)),
        Side::Top => ((left, top), (right, top), (0.0, -TICK)),
        Side::Left => ((left, top), (left, bottom), (-TICK, 0.0)),
        Side::Right => ((right, top), (right, bottom), (TICK, 0.0)),
    };
    svg.open(match side {
        Side::Bottom => "axis bottom",
        Side::Top => "axis top",
        Side::Left => "axis left",
        Side::Right => "axis right",
    });
    svg.line(from, to, AXIS);
    let root = |value: f64| match side {
        Side::Bottom | Side::Top => (scale.place(value), from.1),
        Side::Left | Side::Right => (from.0, scale.place(value)),
    };
    for &value in &ticks.minor {
        let (x, y) = root(value);
        svg.line((x, y), (x + 0.6 * outwards.0, y + 0.6 * outwards.1), MINOR);
    }
    for (value, _) in &ticks.major {
        let (x, y) = root(*value);
        svg.line((x, y), (x + outwards.0, y + outwards.1), AXIS);
    }
    for (value, label) in apart(ticks, side, scale) {
        let (x, y) = root(value);
        let (x, y) = (x + 1.7 * outwards.0, y + 1.7 * outwards.1);
        let half = width(&label, TEXT, Weight::Regular) / 2.0;
        let within = x.clamp(half + 3.0, (WIDTH - half - 3.0).max(half + 3.0));
        match side {
            Side::Bottom => svg.text((within, y + 10.5), &label, Lettering::new(TEXT, Anchor::Middle)),
            Side::Top => svg.text((within, y + 1.0), &label, Lettering::new(TEXT, Anchor::Middle)),
            Side::Left => svg.text((x, y + 4.6), &label, Lettering::new(TEXT, Anchor::End)),
            Side::Right => svg.text((x, y + 4.6), &label, Lettering::new(TEXT, Anchor::Start)),
        }
    }
    svg.close();
}

/// Hairlines across the frame at the labelled values of a vertical axis.
pub fn hairlines(svg: &mut Svg, frame: Frame, scale: Scale, ticks: &Ticks) {
    svg.open("grid");
    for (value, _) in &ticks.major {
        let y = scale.place(*value);
        svg.line((frame.left, y), (frame.right, y), GRID);
    }
    svg.close();
}

/// Width of the widest label.
pub fn widest(ticks: &Ticks) -> f64 {
    ticks.major.iter().map(|(_, label)| width(label, TEXT, Weight::Regular)).fold(0.0, f64::max)
}

/// Ticks at whole numbers that carry words; words wider than `room` are cut.
pub fn words(words: &[String], room: f64) -> Ticks {
    let label = |word: &String| shorten(&word.replace(['\n', '\t'], " "), TEXT, Weight::Regular, room);
    Ticks {
        major: words.iter().enumerate().map(|(i, word)| (i as f64, label(word))).collect(),
        minor: Vec::new(),
    }
}

/// The labels that do not run into the one before.
fn apart(ticks: &Ticks, side: Side, scale: Scale) -> Vec<(f64, String)> {
    let mut taken = f64::NEG_INFINITY;
    let mut kept = ticks.major.clone();
    kept.sort_by(|a, b| scale.place(a.0).total_cmp(&scale.place(b.0)));
    kept.retain(|(value, label)| {
        let half = match side {
            Side::Bottom | Side::Top => width(label, TEXT, Weight::Regular) / 2.0 + 3.5,
            Side::Left | Side::Right => TEXT / 2.0,
        };
        let free = scale.place(*value) - half >= taken;
        if free {
            taken = scale.place(*value) + half;
        }
        free
    });
    kept
}
