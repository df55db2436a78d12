//! The picture of a quantity over two axes: shaded cells, a bar that explains the shades, hatching where a value is
//! missing. Cells are vector shapes joined along rows, so that the picture stays sharp and small.

use super::axes::{Frame, Side, TEXT, TICK, axis, widest, words};
use super::font::{Weight, width};
use super::palette::{HAIR, INK, PAPER, SHADES, SOFT, shade};
use super::parameter::{Axis, Band, Values, bands};
use super::scale::{Kind, Range, Scale};
use super::sheet::{EDGE, Sheet, WIDTH};
use super::svg::{Anchor, Lettering, Point, Stroke, Svg};
use super::ticks::{Ticks, ticks};
use super::trace::{inside, trace};
use std::fmt::Write as _;

/// Most cells along a row and a column; finer data are averaged.
const MOST: (usize, usize) = (240, 160);
const HEIGHT: f64 = 270.0;
const BAR: f64 = 13.0;

/// A quantity over two axes.
#[derive(Debug, Clone)]
pub struct Map<'a> {
    /// What the picture shows, from the user.
    pub title: &'a str,
    /// The axis below.
    pub across: Axis<'a>,
    /// The axis at the left.
    pub up: Axis<'a>,
    /// Values of shape [up, across], the last index fastest; NaN is missing.
    pub values: &'a [f64],
    /// Name of the quantity with unit.
    pub name: String,
    /// How values become shades.
    pub shading: Shading,
    /// Footnotes.
    pub notes: Vec<String>,
}

/// How values become shades.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shading {
    /// Evenly.
    Linear,
    /// By their logarithm, from their own floor up, at most so many decades.
    Decades(f64),
}

/// A line over a map, in the values of its axes.
#[derive(Debug, Clone, Copy)]
pub struct Over<'a> {
    /// Values along the axis below.
    pub x: &'a [f64],
    /// Values along the axis at the left.
    pub y: &'a [f64],
}

/// What is drawn over a map.
#[derive(Debug, Clone, Copy)]
enum Marks<'a> {
    None,
    Line(Over<'a>),
    Dots(&'a [Point]),
}

/// How high the frame is.
#[derive(Debug, Clone, Copy)]
enum Height {
    /// So many user units.
    Fixed(f64),
    /// As the axis at the left is to the one below.
    ToScale,
}

/// Draws the map as SVG.
pub fn draw(map: &Map<'_>) -> String {
    draw_whole(map, Height::Fixed(HEIGHT), Marks::None)
}

/// Draws the map with dots over it at points (across, up).
pub fn draw_under(map: &Map<'_>, dots: &[Point]) -> String {
    draw_whole(map, Height::Fixed(HEIGHT), Marks::Dots(dots))
}

/// Draws the map with the same scale along both axes, which are even, and a line over it.
pub fn draw_square(map: &Map<'_>, over: Option<Over<'_>>) -> String {
    draw_whole(map, Height::ToScale, over.map_or(Marks::None, Marks::Line))
}

fn draw_whole(map: &Map<'_>, height: Height, marks: Marks<'_>) -> String {
    let mut sheet = Sheet::new(map.title);
    sheet.names(&map.up.label(), &map.name, WIDTH - EDGE);
    sheet.y += 12.0;
    let planned = bands(&map.across, MOST.0).zip(bands(&map.up, MOST.1)).zip(shades(map));
    if let Some(((across, up), shades)) = planned {
        let frame = shaded(&mut sheet, map, (&across, &up), shades, height);
        let below = Scale::new(map.across.kind(), across.0, frame.left, frame.right);
        let left = Scale::new(map.up.kind(), up.0, frame.bottom, frame.top);
        match marks {
            Marks::None => {}
            Marks::Line(over) => line_over(&mut sheet.svg, over, (below, left), frame),
            Marks::Dots(dots) => dotted(&mut sheet.svg, dots, (below, left), frame),
        }
        sheet.y = frame.bottom + 20.0;
        sheet.lower_name(&map.across.label(), frame.right);
    } else {
        let middle = (WIDTH / 2.0, sheet.y + 0.5 * HEIGHT);
        sheet.svg.text(middle, "no data", Lettering::new(TEXT, Anchor::Middle));
        sheet.y += HEIGHT + 20.0;
        sheet.lower_name(&map.across.label(), WIDTH - EDGE);
    }
    sheet.notes(&map.notes);
    sheet.finish()
}

type Bands = (Range, Vec<Band>);

fn shades(map: &Map<'_>) -> Option<Scale> {
    let values = map.values.iter().copied();
    let (kind, range) = match map.shading {
        Shading::Linear => (Kind::Linear, Range::of(values, Kind::Linear)?),
        Shading::Decades(decades) => (Kind::Log, Range::above_floor(values, decades)?),
    };
    Some(Scale::new(kind, range, 0.0, 1.0))
}

/// A line with a pale rim, so that it is seen on every shade.
fn line_over(svg: &mut Svg, over: Over<'_>, (across, up): (Scale, Scale), frame: Frame) {
    let pieces = trace(over.x, over.y, across, up, frame);
    svg.open("over");
    for stroke in [Stroke::solid(PAPER, 3.4), Stroke::solid(INK, 1.3)] {
        for piece in &pieces {
            svg.trace(piece, stroke);
        }
    }
    svg.close();
}

fn shaded(
    sheet: &mut Sheet,
    map: &Map<'_>,
    (across, up): (&Bands, &Bands),
    shades: Scale,
    height: Height,
) -> Frame {
    let kind = if matches!(map.shading, Shading::Linear) { Kind::Linear } else { Kind::Log };
    let bar_ticks = ticks(kind, shades.range(), 8);
    let up_ticks = axis_ticks(&map.up, up.0, 8, 110.0);
    let left = EDGE + widest(&up_ticks) + 1.7 * TICK;
    let right = WIDTH - EDGE - widest(&bar_ticks) - 1.7 * TICK - BAR - 14.0;
    let length = |range: &Range| range.high - range.low;
    let height = match height {
        Height::Fixed(height) => height,
        Height::ToScale => (right - left) * length(&up.0) / length(&across.0),
    };
    let frame = Frame { left, right, top: sheet.y, bottom: sheet.y + height };
    sheet.svg.rectangle((frame.left, frame.top), (frame.right, frame.bottom), shade(0));
    let rows: Vec<Row> = up.1.iter().map(|band| row(map, band, &across.1, shades)).collect();
    cells(&mut sheet.svg, &rows, frame);
    hatching(&mut sheet.svg, &rows, frame);
    let below = Scale::new(map.across.kind(), across.0, frame.left, frame.right);
    let left = Scale::new(map.up.kind(), up.0, frame.bottom, frame.top);
    let room = (frame.right - frame.left) / map.across.len().max(1) as f64 - 8.0;
    let sample = super::number::at_step(across.0.high, (across.0.high - across.0.low) / 5.0);
    let wanted = ((frame.right - frame.left) / (width(&sample, TEXT, Weight::Regular) + 18.0)) as usize;
    let across_ticks = axis_ticks(&map.across, across.0, wanted, room);
    axis(&mut sheet.svg, frame, Side::Bottom, below, &across_ticks);
    axis(&mut sheet.svg, frame, Side::Left, left, &up_ticks);
    let bar = Frame { left: frame.right + 14.0, right: frame.right + 14.0 + BAR, ..frame };
    colour_bar(&mut sheet.svg, bar, Scale::new(kind, shades.range(), bar.bottom, bar.top), &bar_ticks);
    frame
}

/// Small dots that stand out on every shade.
fn dotted(svg: &mut Svg, dots: &[Point], (across, up): (Scale, Scale), frame: Frame) {
    const RADIUS: f64 = 1.5;
    if dots.is_empty() {
        return;
    }
    svg.open("dots");
    let (x, y): (Vec<f64>, Vec<f64>) = dots.iter().copied().unzip();
    for (x, y) in inside(&x, &y, across, up, frame) {
        let (from, width) = (x - RADIUS, 2.0 * RADIUS);
        svg.shape(
            &format!(
                "M{from:.2} {y:.2}a{RADIUS} {RADIUS} 0 1 0 {width} 0a{RADIUS} {RADIUS} 0 1 0 -{width} 0Z"
            ),
            INK,
        );
    }
    svg.close();
}

fn axis_ticks(axis: &Axis<'_>, range: Range, wanted: usize, room: f64) -> Ticks {
    match axis.values {
        Values::Text(list) => words(list, room),
        _ => ticks(axis.kind(), range, wanted),
    }
}

fn colour_bar(svg: &mut Svg, bar: Frame, scale: Scale, ticks: &Ticks) {
    let step = (bar.bottom - bar.top) / SHADES as f64;
    svg.open_cells("bar");
    for number in 0..SHADES {
        let bottom = bar.bottom - number as f64 * step;
        svg.rectangle((bar.left, bottom), (bar.right, bar.top.max(bottom - step - 0.4)), shade(number));
    }
    svg.close();
    let corners =
        [(bar.right, bar.top), (bar.left, bar.top), (bar.left, bar.bottom), (bar.right, bar.bottom)];
    svg.trace(&corners, Stroke::solid(SOFT, 0.7));
    axis(svg, bar, Side::Right, scale, ticks);
}

/// Stretches of one shade along a row; `None` is missing. All numbers are shares of the frame.
#[derive(Debug)]
struct Row {
    from: f64,
    to: f64,
    runs: Vec<Run>,
}

#[derive(Debug, Clone, Copy, PartialEq)]
struct Run {
    from: f64,
    to: f64,
    shade: Option<usize>,
}

fn row(map: &Map<'_>, up: &Band, across: &[Band], shades: Scale) -> Row {
    let mut runs: Vec<Run> = Vec::new();
    for band in across {
        let shade = mean(map, &up.members, &band.members).map(|value| {
            (shades.share(value).clamp(0.0, 1.0) * SHADES as f64).min(SHADES as f64 - 1.0) as usize
        });
        match runs.last_mut() {
            Some(run) if run.shade == shade => run.to = band.to,
            _ => runs.push(Run { from: band.from, to: band.to, shade }),
        }
    }
    Row { from: up.from, to: up.to, runs }
}

/// Mean of the values on a cell that are there.
fn mean(map: &Map<'_>, up: &[usize], across: &[usize]) -> Option<f64> {
    let at = |i: usize, j: usize| map.values.get(i * map.across.len() + j).copied().filter(|v| v.is_finite());
    let present = up.iter().flat_map(|&i| across.iter().filter_map(move |&j| at(i, j)));
    let (sum, count) = present.fold((0.0, 0.0), |(sum, count), value| (sum + value, count + 1.0));
    (count > 0.0).then(|| sum / count)
}

/// Corners of a stretch of a row in the picture: left, right, top, bottom.
fn corners(row: &Row, run: &Run, frame: Frame) -> Frame {
    let (width, height) = (frame.right - frame.left, frame.bottom - frame.top);
    Frame {
        left: frame.left + run.from * width,
        right: frame.left + run.to * width,
        top: frame.bottom - row.to * height,
        bottom: frame.bottom - row.from * height,
    }
}

/// One path per shade. Cells overlap their neighbours a little, so that no printer shows a seam.
fn cells(svg: &mut Svg, rows: &[Row], frame: Frame) {
    let mut paths = vec![String::new(); SHADES];
    for row in rows {
        for run in &row.runs {
            let Some(shade) = run.shade.filter(|&shade| shade > 0) else { continue };
            let Frame { left, right, top, bottom } = corners(row, run, frame);
            let (right, bottom) = ((right + 0.25).min(frame.right), (bottom + 0.25).min(frame.bottom));
            let _ = write!(paths[shade], "M{left:.1} {top:.1}H{right:.1}V{bottom:.1}H{left:.1}Z");
        }
    }
    svg.open_cells("cells");
    for (number, path) in paths.iter().enumerate().filter(|(_, path)| !path.is_empty()) {
        svg.cells(path, shade(number));
    }
    svg.close();
}

/// Slanted lines over the cells without a value, continuous over neighbours.
fn hatching(svg: &mut Svg, rows: &[Row], frame: Frame) {
    svg.open("missing");
    for row in rows {
        for run in row.runs.iter().filter(|run| run.shade.is_none()) {
            hatched(svg, corners(row, run, frame));
        }
    }
    svg.close();
}

/// A place without a value.
pub(super) fn hatched(svg: &mut Svg, hole: Frame) {
    const APART: f64 = 7.0;
    svg.rectangle((hole.left, hole.top), (hole.right, hole.bottom), HAIR);
    // The lines x + y = const, every APART, within the hole.
    let first = ((hole.left + hole.top) / APART).ceil() as i64;
    let last = ((hole.right + hole.bottom) / APART).floor() as i64;
    for number in first..=last {
        let sum = number as f64 * APART;
        let (from, to) = (hole.left.max(sum - hole.bottom), hole.right.min(sum - hole.top));
        svg.line((from, sum - from), (to, sum - to), Stroke::solid(SOFT, 0.8));
    }
}
