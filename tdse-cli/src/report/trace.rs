//! A series of values as lines inside a frame: thinned to what the eye can see, broken at gaps, cut at the edges.

use super::axes::Frame;
use super::scale::Scale;
use super::svg::Point;

/// Columns per user unit that keep their own extremes: a column prints at an eighth of a point.
const COLUMNS: f64 = 4.0;

/// Pieces of the line through the points `(x, y)`; a value that is not a number is a gap.
pub fn trace(x: &[f64], y: &[f64], across: Scale, up: Scale, frame: Frame) -> Vec<Vec<Point>> {
    let placed = x.iter().zip(y).map(|(&x, &y)| (across.place(x), up.place(y)));
    let runs = runs(placed);
    runs.iter().flat_map(|run| cut(&thinned(run), frame)).collect()
}

/// The points that lie inside the frame.
pub fn inside(x: &[f64], y: &[f64], across: Scale, up: Scale, frame: Frame) -> Vec<Point> {
    let placed = x.iter().zip(y).map(|(&x, &y)| (across.place(x), up.place(y)));
    placed
        .filter(|&(x, y)| {
            x >= frame.left - 0.01
                && x <= frame.right + 0.01
                && y >= frame.top - 0.01
                && y <= frame.bottom + 0.01
        })
        .collect()
}

fn runs(points: impl Iterator<Item = Point>) -> Vec<Vec<Point>> {
    let mut runs = vec![Vec::new()];
    for point in points {
        if point.0.is_finite() && point.1.is_finite() {
            runs.last_mut().expect("never empty").push(point);
        } else if !runs.last().expect("never empty").is_empty() {
            runs.push(Vec::new());
        }
    }
    runs
}

/// First, lowest, highest and last point of every column, where columns hold more than that.
fn thinned(run: &[Point]) -> Vec<Point> {
    let rising = run.windows(2).all(|pair| pair[0].0 <= pair[1].0);
    let Some((first, last)) = run.first().zip(run.last()) else { return Vec::new() };
    if !rising || (run.len() as f64) < 4.0 * COLUMNS * (last.0 - first.0) {
        return run.to_vec();
    }
    let column = |point: &Point| (point.0 * COLUMNS).floor();
    run.chunk_by(|a, b| column(a) == column(b)).flat_map(extremes).collect()
}

fn extremes(points: &[Point]) -> Vec<Point> {
    let by_height = |a: &&usize, b: &&usize| points[**a].1.total_cmp(&points[**b].1);
    let numbers: Vec<usize> = (0..points.len()).collect();
    let mut kept = vec![0, points.len() - 1];
    kept.extend(numbers.iter().min_by(by_height));
    kept.extend(numbers.iter().max_by(by_height));
    kept.sort_unstable();
    kept.dedup();
    kept.into_iter().map(|i| points[i]).collect()
}

/// The parts of the line that lie inside the frame (Liang and Barsky, ACM Trans. Graph. 3, 1 (1984)).
fn cut(run: &[Point], frame: Frame) -> Vec<Vec<Point>> {
    let mut pieces: Vec<Vec<Point>> = Vec::new();
    for pair in run.windows(2) {
        let Some((from, to)) = visible(pair[0], pair[1], frame) else { continue };
        match pieces.last_mut() {
            Some(piece) if piece.last() == Some(&from) => piece.push(to),
            _ => pieces.push(vec![from, to]),
        }
    }
    pieces
}

fn visible(a: Point, b: Point, frame: Frame) -> Option<(Point, Point)> {
    let (dx, dy) = (b.0 - a.0, b.1 - a.1);
    let edges =
        [(-dx, a.0 - frame.left), (dx, frame.right - a.0), (-dy, a.1 - frame.top), (dy, frame.bottom - a.1)];
    let (mut enter, mut leave) = (0.0_f64, 1.0_f64);
    for (towards, room) in edges {
        if towards == 0.0 {
            if room < 0.0 {
                return None;
            }
        } else if towards < 0.0 {
            enter = enter.max(room / towards);
        } else {
            leave = leave.min(room / towards);
        }
    }
    let at = |t: f64| (a.0 + t * dx, a.1 + t * dy);
    let start = if enter > 0.0 { at(enter) } else { a };
    let stop = if leave < 1.0 { at(leave) } else { b };
    (enter <= leave).then_some((start, stop))
}
