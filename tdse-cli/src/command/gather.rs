//! `tdse gather`: one result from the points that exist.

use std::path::Path;

use super::exit::{Exit, Trouble};
use super::output::{data, talk};
use crate::config::Files;
use crate::refine;
use crate::scan::gathering::gather_all;
use crate::scan::ledger::Ledger;
use crate::scan::prepare::prepare;
use crate::scan::run::now;
use crate::scan::source::Source;
use crate::store::{Error, Folder, Request};

/// Gathers what a folder holds, also while others compute.
///
/// # Errors
/// Refused where it is no folder of results.
pub fn gather(dir: &Path) -> Result<Exit, Trouble> {
    let folder = Folder::open(dir).map_err(Trouble::refused)?;
    let request = folder.request().map_err(Trouble::refused)?;
    let ledger = Ledger::open(folder, &request).map_err(Trouble::refused)?;
    let standings = ledger.standings();
    for standing in standings.iter().filter(|standing| !standing.is_final() && !standing.reason().is_empty())
    {
        talk(format!("left out: {}", standing.reason()));
    }
    gather_all(&ledger, &request, &standings, &now(), || true).map_err(Trouble::incomplete)?;
    restore(&ledger, &request).map_err(Trouble::incomplete)?;
    let there = standings.iter().filter(|standing| standing.is_there()).count();
    data(format!("{there} of {} points: {}\n", standings.len(), ledger.folder.result().display()));
    Ok(if there == standings.len() { Exit::Complete } else { Exit::Incomplete })
}

/// Puts error bars back that an earlier result had, where this version still makes the same of the request.
fn restore(ledger: &Ledger, request: &Request) -> Result<(), Error> {
    let root = ledger.folder.root();
    if !root.join("refine").is_dir() {
        return Ok(());
    }
    let files = Files::Stored(ledger.folder.inputs()?);
    let source = Source { text: format!("{:#}\n", request.configuration), files };
    prepare(&source, &[]).map_or(Ok(()), |prepared| refine::restore(root, &prepared, request))
}
