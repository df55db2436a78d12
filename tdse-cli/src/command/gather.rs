//! `tdse gather`: one result from the points that exist.

use std::path::Path;

use super::exit::{Exit, Trouble};
use super::output::{data, talk};
use crate::scan::gathering::gather_all;
use crate::scan::ledger::Ledger;
use crate::scan::run::now;
use crate::store::Folder;

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
    let there = standings.iter().filter(|standing| standing.is_there()).count();
    data(format!("{there} of {} points: {}\n", standings.len(), ledger.folder.result().display()));
    Ok(if there == standings.len() { Exit::Complete } else { Exit::Incomplete })
}
