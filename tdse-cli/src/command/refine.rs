//! `tdse refine`: a run or scan, repeated with finer numerics or on other model atoms, and its numbers with bars.

use std::fmt::Write as _;
use std::fs;
use std::path::Path;

use super::exit::{Exit, Trouble};
use super::options::RefineOptions;
use super::output::data;
use super::report;
use super::run::carry_out;
use super::verdict;
use crate::refine::{self, Bar, ModelPlan, Plan, Spread};
use crate::scan::asked;
use crate::scan::ledger::Ledger;
use crate::scan::prepare::{Prepared, prepare};
use crate::scan::source::Source;
use crate::store::Folder;
use crate::text::{Table, number, with_bar};

/// Runs, repeats, and puts the bars in; continues where an earlier call stopped.
///
/// # Errors
/// As `run`.
pub fn refine(options: &RefineOptions) -> Result<Exit, Trouble> {
    let (out, effort) = (&options.run.out, &options.run.effort);
    let prepared = options.run.asked.prepare()?;
    let request = asked::request(&prepared).map_err(Trouble::refused)?;
    let models = options.model_atoms.then(|| ModelPlan::new(&prepared, &request)).transpose();
    let models = models.map_err(Trouble::refused)?;
    let plan = Plan::new(&prepared, &request);
    let source = models.as_ref().map_or_else(|| plan.source(), ModelPlan::source);
    let repeated = ready(&source)?;
    let place = if models.is_some() { refine::models_folder(out) } else { refine::folder(out) };
    let whole = carry_out(prepared.clone(), out, effort)?;
    if whole != Exit::Complete {
        return Ok(whole);
    }
    lend(&prepared, out, &repeated, &place)?;
    let whole = carry_out(repeated, &place, effort)?;
    if whole != Exit::Complete {
        return Ok(whole);
    }
    if ![out, &place].iter().all(|folder| folder.join("result.h5").is_file()) {
        // Other shards are not through; the last one puts the bars in.
        return Ok(Exit::Complete);
    }
    let text = if let Some(models) = &models {
        spread(&prepared, &refine::attach_models(out, models).map_err(Trouble::incomplete)?)
    } else {
        let bars = refine::attach(out, &plan).map_err(Trouble::incomplete)?.unwrap_or_default();
        judged(&prepared, &plan, &bars)
    };
    report::draw(&Folder::open(out).map_err(Trouble::incomplete)?).map_err(Trouble::incomplete)?;
    let result = out.join("result.h5");
    // Said once more: now differences can be smaller than a bar.
    let models = verdict::text(&result).map_err(Trouble::incomplete)?;
    data(format!("{text}{models}{}\n", result.display()));
    Ok(Exit::Complete)
}

fn ready(source: &Source) -> Result<Prepared, Trouble> {
    prepare(source, &[]).map_err(|complaints| {
        Trouble::refused(format!("the repeated runs cannot be made ready:\n{complaints}"))
    })
}

/// Gives the repeated scan the files of points it shares with the request; where the file system cannot, they are
/// computed again.
fn lend(prepared: &Prepared, out: &Path, repeated: &Prepared, place: &Path) -> Result<(), Trouble> {
    let request = asked::request(repeated).map_err(Trouble::refused)?;
    let (folder, _) = Folder::claim(place, &request, &asked::inputs(repeated)).map_err(Trouble::refused)?;
    let own = Ledger::new(Folder::open(out).map_err(Trouble::refused)?, prepared);
    let other = Ledger::new(folder, repeated);
    for (index, row) in other.rows.iter().enumerate() {
        let Some(known) = own.rows.iter().position(|own| own.identity == row.identity) else { continue };
        let path = other.path(index);
        if !path.exists() && other.folder.make_room(&path).is_ok() {
            let _ = fs::hard_link(own.path(known), path);
        }
    }
    Ok(())
}

fn judged(prepared: &Prepared, plan: &Plan, bars: &[Bar]) -> String {
    let mut text = String::new();
    for repeated in &plan.repeated {
        let mut table = Table::new();
        for bar in bars.iter().filter(|bar| bar.point == repeated.index) {
            let limit = bar.limiting.map_or(String::new(), |cause| format!("limited by {}", cause.word()));
            let value = match bar.value {
                Some(value) => with_bar(value, bar.error),
                None => format!("{:.1e}", bar.error),
            };
            table.row(bar.name, value, bar.unit, &limit);
        }
        let _ = write!(text, "{}{table}", heading(prepared, repeated.index));
    }
    text
}

fn spread(prepared: &Prepared, spreads: &[Spread]) -> String {
    let mut text =
        String::from("The same field on model atoms of the same ionization energy (no numerical error):\n");
    for spread in spreads {
        let mut table = Table::new();
        for (model, value) in &spread.values {
            table.row(model, number(*value), spread.unit, "");
        }
        let factor =
            spread.factor().map_or(String::new(), |factor| format!(", within a factor {}", number(factor)));
        let _ = write!(text, "{}{}{factor}\n{table}", heading(prepared, spread.point), spread.name);
    }
    text
}

/// Which point of a scan; nothing for a single run.
fn heading(prepared: &Prepared, index: usize) -> String {
    let label = &prepared.points[index].label;
    if label.is_empty() { String::new() } else { format!("point {index} ({label})\n") }
}
