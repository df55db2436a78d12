//! What a result is drawn as: which pictures, with which captions, and what the page says beside them.

mod models;
mod run;
mod survey;

use super::page::{self, Page, Quantity};
use crate::store::{Contents, Values, table};

/// One picture of a gallery.
#[derive(Clone, Debug, PartialEq)]
pub struct Drawn {
    /// File name without ending.
    pub name: String,
    /// The drawing.
    pub svg: String,
    /// What stands below it.
    pub caption: String,
    /// What a reader who cannot see it is told.
    pub alternative: String,
}

/// Pictures of a result: of a single run or a point, or of a whole scan.
pub fn pictures(contents: &Contents) -> Vec<Drawn> {
    if contents.scan().is_empty() {
        return run::pictures(contents).into_iter().chain(models::of_run(contents)).collect();
    }
    let of_models = models::of_scan(contents).into_iter().chain(models::branches(contents));
    of_models.chain(survey::pictures(contents)).collect()
}

/// The page with these pictures.
pub fn page(contents: &Contents, pictures: &[Drawn]) -> String {
    let provenance = &contents.provenance;
    let title = if provenance.title.is_empty() { "Result" } else { &provenance.title };
    let shown = pictures.iter().map(|drawn| page::Picture {
        svg: &drawn.svg,
        caption: &drawn.caption,
        alternative: &drawn.alternative,
    });
    page::render(&Page {
        title,
        headline: headline(contents),
        notes: notes(contents),
        pictures: shown.collect(),
        doubts: doubts(contents),
        provenance: vec![
            ("configuration", &provenance.configuration),
            ("program", &provenance.version),
            ("commit", &provenance.commit),
            ("instruction set", &provenance.instruction_set),
            ("started", &provenance.start_time),
            ("ended", &provenance.end_time),
        ],
    })
}

/// What a scan's page leaves to the pages of its points.
fn notes(contents: &Contents) -> Vec<String> {
    let each = "`tdse report DIR --point N` draws one point with its field, spectrum and time-frequency map";
    match contents.scan().len() {
        0 => Vec::new(),
        1 => vec![format!("{each}.")],
        2 => vec![format!("Maps of every number of the summary; {each}.")],
        n => vec![format!("A scan over {n} dimensions is not drawn as a whole; {each}.")],
    }
}

/// Numbers of a single run, and those that are the same at all points of a scan; the others are pictures.
fn headline(contents: &Contents) -> Vec<Quantity<'_>> {
    let number = |name: &str| shared(slice(contents, "summary", name));
    summary_numbers()
        .filter_map(|(name, long_name, units)| {
            let value = number(name)?;
            Some(Quantity { name: long_name, value, unit: units, error: number(&format!("{name}_errors")) })
        })
        .collect()
}

/// The one value that all points with a value have.
fn shared(values: &[f64]) -> Option<f64> {
    let first = values.iter().copied().find(|value| !value.is_nan())?;
    values.iter().all(|value| value.is_nan() || *value == first).then_some(first)
}

/// Names, meanings and units of the real numbers of the summary; the unit of a pure number is empty.
fn summary_numbers() -> impl Iterator<Item = (&'static str, &'static str, &'static str)> {
    let group = table::group("summary").expect("the layout has a summary");
    group
        .datasets
        .iter()
        .filter(|dataset| dataset.kind == table::Kind::Real)
        .map(|dataset| (dataset.name, dataset.long_name, dataset.unit()))
}

/// Every different reason of the points, once.
fn doubts(contents: &Contents) -> Vec<String> {
    let Some(Values::Text(reasons)) = contents.get("summary", "reason") else {
        return Vec::new();
    };
    let mut said: Vec<String> = Vec::new();
    for line in reasons.iter().flat_map(|reason| reason.lines()) {
        if !said.iter().any(|known| known == line) {
            said.push(line.to_owned());
        }
    }
    said
}

/// A dataset as a slice; empty where it is not there.
fn slice<'a>(contents: &'a Contents, group: &str, name: &str) -> &'a [f64] {
    contents.real(group, name).and_then(|array| array.as_slice()).unwrap_or_default()
}

/// Rows of an array of two dimensions; empty where it is not there or has another number of them.
fn rows<'a>(contents: &'a Contents, group: &str, name: &str) -> Vec<&'a [f64]> {
    match contents.real(group, name).map(|array| (array.shape(), array.as_slice())) {
        Some(([_, length], Some(flat))) => flat.chunks(*length).collect(),
        _ => Vec::new(),
    }
}

/// A remark of a group.
fn remark<'a>(contents: &'a Contents, group: &str, name: &str) -> &'a str {
    let found = contents.groups().find(|(path, _)| *path == group);
    found.and_then(|(_, group)| group.attributes.get(name)).map_or("", String::as_str)
}

/// Energy of one photon of the first pulse, eV, from the two coordinates of the spectrum.
fn fundamental(contents: &Contents) -> Option<f64> {
    let (energy, order) =
        (slice(contents, "harmonics", "photon_energy"), slice(contents, "harmonics", "harmonic_order"));
    let last = order.last().copied().filter(|order| *order > 0.0)?;
    Some(energy.last()? / last)
}

/// Decades shown of maps.
const MAP_DECADES: f64 = 6.0;
/// Name of the spectrum on axes.
const SPECTRUM: &str = "|a(ω)|² (a.u.)";
