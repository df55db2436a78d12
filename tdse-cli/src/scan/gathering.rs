//! Gathers the points of a folder into one result.

use super::ledger::{Ledger, Standing};
use super::run::{now, origin, spelled};
use super::{branches, points};
use crate::derive::models::branches::put;
use crate::store::{self, Error, Gathering, Point, Provenance, Request, gather_while, read_groups};

/// Writes `result.h5` from the points that exist, and what follows from all of them together; `start_time` is that of the whole
/// calculation.
///
/// # Errors
/// As [`gather_while`].
pub fn gather_all(
    ledger: &Ledger,
    request: &Request,
    standings: &[Standing],
    start_time: &str,
    go_on: impl Fn() -> bool,
) -> Result<(), Error> {
    let points = ledger.gatherable(standings);
    let provenance = provenance(ledger, request, &points, start_time)?;
    let scan = request.dimensions();
    let gathering = Gathering { provenance: &provenance, scan: &scan, points: &points };
    let result = ledger.folder.result();
    gather_while(&result, gathering, go_on)?;
    // A request that was taken up once has sound axes.
    let axes = points::read_axes(&request.configuration, |_| false).map(|(axes, _)| axes).unwrap_or_default();
    let Ok(Some(look)) = branches::look(&request.configuration, &axes) else { return Ok(()) };
    let mut contents = store::read(&result)?;
    put(&mut contents, &look);
    store::write(&result, &contents)
}

/// A scan runs again from its request; a single run from its point.
fn provenance(
    ledger: &Ledger,
    request: &Request,
    points: &[Point],
    start_time: &str,
) -> Result<Provenance, store::Error> {
    if let (true, [Point::File(path)]) = (request.scan.is_empty(), points) {
        let found = read_groups(path, &[])?.provenance;
        return Ok(Provenance {
            title: request.title.clone(),
            input: request.input.clone(),
            overrides: spelled(&request.overrides),
            ..found
        });
    }
    Ok(Provenance {
        title: request.title.clone(),
        start_time: start_time.into(),
        end_time: now(),
        input: request.input.clone(),
        overrides: spelled(&request.overrides),
        configuration: format!("{:#}\n", request.configuration),
        inputs: ledger.folder.inputs()?,
        ..origin()
    })
}
