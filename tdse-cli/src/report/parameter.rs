//! An axis with values of its own: a scanned parameter, a time, an energy.

use super::scale::{Kind, Range, shown};

/// Name, unit and values of an axis.
#[derive(Debug, Clone, Copy)]
pub struct Axis<'a> {
    /// Name as people read it.
    pub name: &'a str,
    /// Unit; empty where there is none.
    pub unit: &'a str,
    /// Values in any order.
    pub values: Values<'a>,
}

/// Values of an axis and how they are spread.
#[derive(Debug, Clone, Copy)]
pub enum Values<'a> {
    /// Evenly.
    Linear(&'a [f64]),
    /// By their logarithm; evenly where one is not positive.
    Log(&'a [f64]),
    /// Words at equal distances, in their own order.
    Text(&'a [String]),
}

impl Axis<'_> {
    /// Name with unit.
    pub fn label(&self) -> String {
        if self.unit.is_empty() { self.name.to_owned() } else { format!("{} ({})", self.name, self.unit) }
    }

    /// Number of values.
    pub fn len(&self) -> usize {
        match self.values {
            Values::Linear(values) | Values::Log(values) => values.len(),
            Values::Text(words) => words.len(),
        }
    }

    /// Whether there is no value.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// How the values are spread; the unit `deg` is marked at parts of the circle.
    pub fn kind(&self) -> Kind {
        match self.values {
            Values::Log(values) if values.iter().all(|&v| v > 0.0) => Kind::Log,
            _ if self.unit == "deg" => Kind::Degrees,
            _ => Kind::Linear,
        }
    }

    /// Values as numbers; words are 0, 1, 2, ….
    pub fn numbers(&self) -> Vec<f64> {
        match self.values {
            Values::Linear(values) | Values::Log(values) => values.to_vec(),
            Values::Text(words) => (0..words.len()).map(|i| i as f64).collect(),
        }
    }
}

/// A stretch of an axis, as shares of its length, with the values that fall on it.
#[derive(Debug, Clone, PartialEq)]
pub struct Band {
    /// Where it begins.
    pub from: f64,
    /// Where it ends.
    pub to: f64,
    /// Numbers of the values on it.
    pub members: Vec<usize>,
}

/// The axis cut into at most about `most` bands, each value standing in the middle of its own cell before cells are
/// joined, and the range from the first cell's edge to the last one's. Values that no axis can show take no part.
pub fn bands(axis: &Axis<'_>, most: usize) -> Option<(Range, Vec<Band>)> {
    let kind = axis.kind();
    let numbers = axis.numbers();
    let spread = |v: f64| if kind == Kind::Log { v.ln() } else { v };
    let mut places: Vec<(f64, usize)> =
        numbers.into_iter().zip(0..).filter(|&(v, _)| shown(v, kind)).map(|(v, i)| (spread(v), i)).collect();
    places.sort_by(|a, b| a.0.total_cmp(&b.0));
    let edges = edges(&places, kind)?;
    let (low, high) = (edges[0], edges[edges.len() - 1]);
    let share = |edge: f64| (edge - low) / (high - low);
    let size = places.len().div_ceil(most.max(1));
    let numbers: Vec<usize> = (0..places.len()).collect();
    let band = |chunk: &[usize]| Band {
        from: share(edges[chunk[0]]),
        to: share(edges[chunk[chunk.len() - 1] + 1]),
        members: chunk.iter().map(|&i| places[i].1).collect(),
    };
    let back = |v: f64| if kind == Kind::Log { v.exp() } else { v };
    Some((Range { low: back(low), high: back(high) }, numbers.chunks(size).map(band).collect()))
}

fn edges(places: &[(f64, usize)], kind: Kind) -> Option<Vec<f64>> {
    let (first, last) = (places.first()?.0, places.last()?.0);
    let size = if kind == Kind::Log { 1.0 } else { first.abs().max(last.abs()) };
    if last - first <= (1e-12 * size).max(1e-300) {
        let half = if size <= 1e-300 { 0.5 } else { 0.5 * size };
        let count = places.len() as f64;
        return Some((0..=places.len()).map(|i| first + half * (2.0 * i as f64 / count - 1.0)).collect());
    }
    let inner: Vec<f64> = places.windows(2).map(|pair| f64::midpoint(pair[0].0, pair[1].0)).collect();
    let mut edges = vec![2.0 * first - inner[0]];
    edges.extend(&inner);
    edges.push(2.0 * last - inner[inner.len() - 1]);
    if kind == Kind::Log {
        // A cell's edge may lie beyond what `exp` can reach.
        for edge in &mut edges {
            *edge = edge.clamp(-692.0, 692.0);
        }
    }
    Some(edges)
}
