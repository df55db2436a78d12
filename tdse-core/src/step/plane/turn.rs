//! Passes over the plane: groups of lines that fit the cache, dealt out to threads, and lines gathered across an array.

use num_complex::Complex;

type C = Complex<f64>;

/// Lines that are gathered together: their points lie side by side in two cache lines.
pub(super) const GROUP: usize = 8;

/// Runs `work(first line, lines, their sums, lane)` for every group of [`GROUP`] lines of `data`, on as many threads as
/// there are lanes. What a group computes does not depend on who computes it.
pub(super) fn each_group<S: Send, L: Send>(
    data: &mut [C],
    sums: &mut [S],
    lanes: &mut [L],
    first: usize,
    work: &(impl Fn(usize, &mut [C], &mut [S], &mut L) + Sync),
) {
    let line = data.len() / sums.len();
    if lanes.len() == 1 {
        let groups = data.chunks_mut(GROUP * line).zip(sums.chunks_mut(GROUP));
        for (g, (lines, sums)) in groups.enumerate() {
            work(first + g * GROUP, lines, sums, &mut lanes[0]);
        }
        return;
    }
    let (left, right) = lanes.split_at_mut(lanes.len() / 2);
    let groups = sums.len() / GROUP;
    let count = groups * left.len() / (left.len() + right.len()) * GROUP;
    let (data, other_data) = data.split_at_mut(count * line);
    let (sums, other_sums) = sums.split_at_mut(count);
    rayon::join(
        || each_group(data, sums, left, first, work),
        || each_group(other_data, other_sums, right, first + count, work),
    );
}

/// Where the points of a line are kept along y, so that a mirrored line transforms at half its length.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Order {
    /// Place of point j.
    pub(super) place: Vec<usize>,
    /// Sign that point j is kept with.
    pub(super) sign: Vec<f64>,
    /// Whether any sign is negative.
    pub(super) signed: bool,
}

/// Lines first … first + [`GROUP`] across `from` (shape `[order, across]`), each contiguous in `to`.
pub(super) fn gather_columns(from: &[C], to: &mut [C], across: usize, first: usize, order: &Order) {
    let along = order.place.len();
    for (row, (&place, &sign)) in from.chunks_exact(across).zip(order.place.iter().zip(&order.sign)) {
        let points = &row[first..first + GROUP];
        for (b, p) in points.iter().enumerate() {
            to[b * along + place] = if order.signed { p * sign } else { *p };
        }
    }
}

/// The other way: lines that [`gather_columns`] gathered, back to their places.
pub(super) fn scatter_columns(from: &[C], to: &mut [C], across: usize, first: usize, order: &Order) {
    let along = order.place.len();
    for (row, (&place, &sign)) in to.chunks_exact_mut(across).zip(order.place.iter().zip(&order.sign)) {
        for (b, p) in row[first..first + GROUP].iter_mut().enumerate() {
            *p = from[b * along + place] * sign;
        }
    }
}

/// Rows first … first + [`GROUP`] out of the columns in `from` (shape `[columns, order]`), each contiguous in `to`.
pub(super) fn gather_rows(from: &[C], to: &mut [C], first: usize, order: &Order) {
    let along = order.place.len();
    let across = from.len() / along;
    let places: [usize; GROUP] = std::array::from_fn(|b| order.place[first + b]);
    let signs: [f64; GROUP] = std::array::from_fn(|b| order.sign[first + b]);
    for (x, column) in from.chunks_exact(along).enumerate() {
        for b in 0..GROUP {
            let p = column[places[b]];
            to[b * across + x] = if order.signed { p * signs[b] } else { p };
        }
    }
}
