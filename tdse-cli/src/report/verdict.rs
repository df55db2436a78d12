//! Where in a scan which model holds: cells coloured by verdict, one panel per model over two parameters, one row per model over
//! one, with the Keldysh parameter as lines or as a second axis.

use super::axes::{Frame, Side, TEXT, TICK, axis, widest, words};
use super::font::{Weight, width};
use super::map::hatched;
use super::number::significant;
use super::palette::{INK, SOFT, VERDICTS};
use super::parameter::{Axis, Band, Values, bands};
use super::scale::{Kind, Range, Scale};
use super::sheet::{EDGE, Sheet, WIDTH};
use super::svg::{Anchor, Lettering, Point, Stroke, Svg};
use super::ticks::{Ticks, ticks};

const ROW: f64 = 34.0;
const PANEL: f64 = 150.0;
const GAP: f64 = 16.0;
const MOST: usize = 200;
/// Part by which Keldysh parameters differ that are the same.
const SAME: f64 = 1e-9;
/// Length from which on a line has a label: a shorter one would be hidden by it.
const LABELLED: f64 = 60.0;
/// Keldysh parameters whose lines are drawn.
const LEVELS: [f64; 7] = [0.25, 0.5, 1.0, 2.0, 4.0, 8.0, 16.0];
/// Words of the legend, in the order of the colours.
const WORDS: [&str; 4] = ["within error", "within tolerance", "different", "none"];

/// Verdicts over a scan.
#[derive(Debug, Clone)]
pub struct VerdictPicture<'a> {
    /// What the picture shows, from the user.
    pub title: &'a str,
    /// The first scanned parameter; of two the one at the left.
    pub first: Axis<'a>,
    /// The second one, drawn below.
    pub second: Option<Axis<'a>>,
    /// Numbers of the verdicts by model, shape [first, second].
    pub models: Vec<(&'a str, &'a [i64])>,
    /// Keldysh parameter, of the same shape.
    pub keldysh: &'a [f64],
}

/// Draws the verdicts as SVG.
pub fn draw(picture: &VerdictPicture<'_>) -> String {
    let mut sheet = Sheet::new(picture.title);
    match picture.second {
        None => rows(&mut sheet, picture),
        Some(second) => panels(&mut sheet, picture, second),
    }
    legend(&mut sheet);
    sheet.finish()
}

/// A row per model.
fn rows(sheet: &mut Sheet, picture: &VerdictPicture<'_>) {
    let names: Vec<String> = picture.models.iter().map(|(name, _)| name.replace('_', " ")).collect();
    let Some((range, bands)) = bands(&picture.first, MOST) else { return };
    let (above, name) = keldysh(picture);
    sheet.names("", &name, WIDTH - EDGE);
    sheet.y += 14.0 + 1.7 * TICK;
    let ticks_left = words(&names, 150.0);
    let frame = Frame {
        left: EDGE + widest(&ticks_left) + 1.7 * TICK,
        right: WIDTH - EDGE - 6.0,
        top: sheet.y,
        bottom: sheet.y + ROW * names.len() as f64,
    };
    for (number, (_, verdicts)) in picture.models.iter().enumerate() {
        let top = frame.top + ROW * number as f64;
        for band in &bands {
            let share = |s: f64| frame.left + s * (frame.right - frame.left);
            let cell = Frame { left: share(band.from), right: share(band.to), top, bottom: top + ROW };
            filled(&mut sheet.svg, cell, verdict(verdicts, &band.members));
        }
    }
    let across = Scale::new(picture.first.kind(), range, frame.left, frame.right);
    axis(
        &mut sheet.svg,
        frame,
        Side::Bottom,
        across,
        &parameter_ticks(&picture.first, range, (frame.right - frame.left, 50.0)),
    );
    axis(&mut sheet.svg, frame, Side::Top, across, &above);
    let half = 0.5 * ROW;
    let span = Range { low: 0.0, high: (names.len() as f64 - 1.0).max(1e-9) };
    let left = Scale::new(Kind::Linear, span, frame.top + half, frame.bottom - half);
    axis(&mut sheet.svg, frame, Side::Left, left, &ticks_left);
    sheet.y = frame.bottom + 20.0;
    sheet.lower_name(&picture.first.label(), frame.right);
}

/// Ticks of the Keldysh parameter along the only axis, and the name of their axis: round values between the points, every point's own
/// where the axis carries words, none where all points have the same.
fn keldysh(picture: &VerdictPicture<'_>) -> (Ticks, String) {
    const NAME: &str = "Keldysh parameter";
    let mut points: Vec<(f64, f64)> =
        picture.first.numbers().into_iter().zip(picture.keldysh.iter().copied()).collect();
    points.retain(|(_, gamma)| gamma.is_finite());
    points.sort_by(|a, b| a.0.total_cmp(&b.0));
    let range = Range::of(points.iter().map(|(_, gamma)| *gamma), Kind::Linear);
    let (Some(range), Some(&(_, first))) = (range, points.first()) else {
        return (Ticks::default(), String::new());
    };
    if points.iter().all(|(_, gamma)| (gamma / first - 1.0).abs() < SAME) {
        return (Ticks::default(), format!("{NAME} {}", significant(first, 3)));
    }
    if let Values::Text(_) = picture.first.values {
        let major = points.into_iter().map(|(at, gamma)| (at, significant(gamma, 2)));
        return (Ticks { major: major.collect(), minor: Vec::new() }, NAME.into());
    }
    let levels = ticks(Kind::Log, range, 8);
    let placed = |level: f64| {
        let between = |pair: &[(f64, f64)]| {
            let share = (level - pair[0].1) / (pair[1].1 - pair[0].1);
            (0.0..=1.0).contains(&share).then(|| pair[0].0 + share * (pair[1].0 - pair[0].0))
        };
        points.windows(2).find_map(between)
    };
    let major = levels.major.iter().filter_map(|(level, label)| Some((placed(*level)?, label.clone())));
    let minor = levels.minor.iter().filter_map(|level| placed(*level));
    (Ticks { major: major.collect(), minor: minor.collect() }, NAME.into())
}

/// A panel per model, two beside each other.
fn panels(sheet: &mut Sheet, picture: &VerdictPicture<'_>, second: Axis<'_>) {
    let (Some((up_range, up)), Some((across_range, across))) =
        (bands(&picture.first, MOST), bands(&second, MOST))
    else {
        return;
    };
    sheet.names(&picture.first.label(), "", WIDTH - EDGE);
    let column = (WIDTH - 2.0 * EDGE - GAP) / 2.0;
    let left_ticks = parameter_ticks(&picture.first, up_range, (PANEL, 28.0));
    let margin = widest(&left_ticks) + 1.7 * TICK;
    for (number, (name, verdicts)) in picture.models.iter().enumerate() {
        let left = EDGE + (number % 2) as f64 * (column + GAP) + margin;
        if number % 2 == 0 {
            sheet.y += 22.0;
        }
        let frame =
            Frame { left, right: left + column - margin, top: sheet.y + 6.0, bottom: sheet.y + 6.0 + PANEL };
        let heading = Lettering { weight: Weight::Bold, ..Lettering::new(TEXT, Anchor::Start) };
        sheet.svg.text((frame.left, frame.top - 6.0), &name.replace('_', " "), heading);
        let grid = Grid { up: &up, across: &across, columns: second.len() };
        cells(&mut sheet.svg, verdicts, &grid, frame);
        let scales = (
            Scale::new(second.kind(), across_range, frame.left, frame.right),
            Scale::new(picture.first.kind(), up_range, frame.bottom, frame.top),
        );
        contours(&mut sheet.svg, picture.keldysh, (&picture.first, &second), scales);
        axis(
            &mut sheet.svg,
            frame,
            Side::Bottom,
            scales.0,
            &parameter_ticks(&second, across_range, (frame.right - frame.left, 50.0)),
        );
        axis(&mut sheet.svg, frame, Side::Left, scales.1, &left_ticks);
        if number % 2 == 1 || number + 1 == picture.models.len() {
            sheet.y = frame.bottom + 20.0;
        }
    }
    sheet.lower_name(&second.label(), WIDTH - EDGE);
}

struct Grid<'a> {
    up: &'a [Band],
    across: &'a [Band],
    columns: usize,
}

fn cells(svg: &mut Svg, verdicts: &[i64], grid: &Grid<'_>, frame: Frame) {
    let (width, height) = (frame.right - frame.left, frame.bottom - frame.top);
    for row in grid.up {
        for column in grid.across {
            let members: Vec<usize> = row
                .members
                .iter()
                .flat_map(|i| column.members.iter().map(move |j| i * grid.columns + j))
                .collect();
            let cell = Frame {
                left: frame.left + column.from * width,
                right: frame.left + column.to * width,
                top: frame.bottom - row.to * height,
                bottom: frame.bottom - row.from * height,
            };
            filled(svg, cell, verdict(verdicts, &members));
        }
    }
}

/// The worst verdict on a cell.
fn verdict(verdicts: &[i64], members: &[usize]) -> Option<usize> {
    let worst = members.iter().filter_map(|&i| verdicts.get(i)).max()?;
    usize::try_from(*worst).ok().filter(|number| *number < VERDICTS.len())
}

/// A cell in its colour; a cross in those that differ, so that colour is not needed.
fn filled(svg: &mut Svg, cell: Frame, verdict: Option<usize>) {
    let Some(number) = verdict else {
        hatched(svg, cell);
        return;
    };
    svg.rectangle((cell.left, cell.top), (cell.right + 0.2, cell.bottom + 0.2), VERDICTS[number]);
    if number == 2 {
        let middle = (f64::midpoint(cell.left, cell.right), f64::midpoint(cell.top, cell.bottom));
        let arm = 0.22 * (cell.right - cell.left).min(cell.bottom - cell.top).min(18.0);
        for side in [-1.0, 1.0] {
            let ends = [-arm, arm].map(|d| (middle.0 + d, middle.1 + side * d));
            svg.line(ends[0], ends[1], Stroke::solid(SOFT, 0.9));
        }
    }
}

/// Lines of equal Keldysh parameter between the points, by marching squares (Lorensen, Cline, Comput. Graph. 21, 163 (1987), in two
/// dimensions), each labelled once.
fn contours(svg: &mut Svg, values: &[f64], (up, across): (&Axis<'_>, &Axis<'_>), scales: (Scale, Scale)) {
    let (rows, columns) = (up.numbers(), across.numbers());
    let corner = |i: usize, j: usize| {
        let place = (scales.0.place(columns[j]), scales.1.place(rows[i]));
        (place, values.get(i * columns.len() + j).copied().unwrap_or(f64::NAN).ln())
    };
    svg.open("contours");
    let mut labels: Vec<(Point, String)> = Vec::new();
    for level in LEVELS {
        let (mut middle, mut length) = (Vec::new(), 0.0);
        for i in 0..rows.len().saturating_sub(1) {
            for j in 0..columns.len().saturating_sub(1) {
                let around = [corner(i, j), corner(i, j + 1), corner(i + 1, j + 1), corner(i + 1, j)];
                let crossed: Vec<Point> =
                    (0..4).filter_map(|k| crossing(around[k], around[(k + 1) % 4], level.ln())).collect();
                for ends in crossed.chunks_exact(2) {
                    svg.line(ends[0], ends[1], Stroke::solid(INK, 1.1));
                    length += (ends[1].0 - ends[0].0).hypot(ends[1].1 - ends[0].1);
                    middle.push((f64::midpoint(ends[0].0, ends[1].0), f64::midpoint(ends[0].1, ends[1].1)));
                }
            }
        }
        middle.sort_by(|a, b| a.0.total_cmp(&b.0));
        let label = middle.get(middle.len() / 2).map(|&at| (at, format!("γ = {level}")));
        labels.extend(label.filter(|_| length > LABELLED));
    }
    for ((x, y), label) in labels {
        let half = width(&label, 11.0, Weight::Regular) / 2.0 + 2.0;
        svg.rectangle((x - half, y - 7.0), (x + half, y + 6.0), "#ffffff");
        svg.text((x, y + 3.8), &label, Lettering::new(11.0, Anchor::Middle));
    }
    svg.close();
}

/// Where a line of one level crosses an edge.
fn crossing((from, low): (Point, f64), (to, high): (Point, f64), level: f64) -> Option<Point> {
    let share = (level - low) / (high - low);
    let crosses = (low < level) != (high < level) && share.is_finite();
    crosses.then_some((from.0 + share * (to.0 - from.0), from.1 + share * (to.1 - from.1)))
}

/// Ticks on an axis so long, about so far apart.
fn parameter_ticks(axis: &Axis<'_>, range: Range, (length, apart): (f64, f64)) -> Ticks {
    match axis.values {
        Values::Text(list) => words(list, length / axis.len().max(1) as f64 - 8.0),
        _ => ticks(axis.kind(), range, (length / apart) as usize),
    }
}

fn legend(sheet: &mut Sheet) {
    sheet.y += 14.0;
    let mut x = EDGE;
    for (number, word) in WORDS.iter().enumerate() {
        let swatch = Frame { left: x, right: x + 18.0, top: sheet.y, bottom: sheet.y + 14.0 };
        filled(&mut sheet.svg, swatch, (number < VERDICTS.len()).then_some(number));
        sheet.svg.text((x + 23.0, sheet.y + 11.5), word, Lettering::new(12.0, Anchor::Start));
        x += 23.0 + width(word, 12.0, Weight::Regular) + 16.0;
    }
    sheet.y += 16.0;
    sheet
        .notes(&["Within error: within the full result's own error bars, which `tdse refine` gives.".into()]);
}
