//! `tdse status`: how far the points of a folder have come. Reads only.

use std::fmt::Write as _;
use std::fs;
use std::path::Path;
use std::time::Duration;

use serde_json::Value;

use super::exit::{Exit, Trouble};
use super::output::data;
use crate::scan::ledger::{Ledger, Standing};
use crate::store::{Folder, may_run};
use crate::text::{Table, duration};

/// Most reasons listed of one kind; `points.csv` has them all.
const MOST: usize = 20;

/// A process elsewhere whose log has said nothing for so long is not counted as running: three checkpoints are overdue.
const SILENCE: Duration = Duration::from_mins(30);

/// Prints how far a folder has come, also while others compute.
///
/// # Errors
/// Refused where it is no folder of results.
pub fn status(dir: &Path) -> Result<Exit, Trouble> {
    let folder = Folder::open(dir).map_err(Trouble::refused)?;
    let request = folder.request().map_err(Trouble::refused)?;
    let ledger = Ledger::open(folder, &request).map_err(Trouble::refused)?;
    let standings = ledger.standings();
    let mut text = if request.title.is_empty() { String::new() } else { format!("{}\n", request.title) };
    text += &counts(&standings).to_string();
    let missing = standings.iter().filter(|standing| !standing.is_final()).count();
    if let Some(pace) = (missing > 0).then(|| Pace::of(&ledger.folder.log())).flatten() {
        let _ = writeln!(text, "{}", pace.left(missing));
    }
    text += &reasons(&ledger, &standings);
    data(text);
    Ok(Exit::Complete)
}

fn counts(standings: &[Standing]) -> Table {
    let mut table = Table::new();
    for word in ["done", "doubtful", "failed", "missing"] {
        let count = standings.iter().filter(|standing| standing.word() == word).count();
        table.row(word, count.to_string(), "", "");
    }
    table
}

fn reasons(ledger: &Ledger, standings: &[Standing]) -> String {
    let mut text = String::new();
    for word in ["failed", "missing", "doubtful"] {
        let found: Vec<(usize, &Standing)> = standings
            .iter()
            .enumerate()
            .filter(|(_, standing)| standing.word() == word && !standing.reason().is_empty())
            .collect();
        for (index, standing) in found.iter().take(MOST) {
            let reason = standing.reason().replace('\n', "; ");
            let _ = writeln!(text, "{word}: point {index} ({}): {reason}", ledger.rows[*index].identity);
        }
        if found.len() > MOST {
            let _ = writeln!(text, "{word}: {} more", found.len() - MOST);
        }
    }
    text
}

/// What the logs say of time.
struct Pace {
    /// Mean time of a point, s.
    seconds: f64,
    /// Points at once of the processes that run.
    running: u64,
}

impl Pace {
    /// From all logs; none before a point is done.
    fn of(folder: &Path) -> Option<Self> {
        let (mut total, mut points, mut running) = (0.0, 0_u32, 0);
        for entry in fs::read_dir(folder).ok()?.flatten() {
            let path = entry.path();
            let text = fs::read_to_string(&path).unwrap_or_default();
            let (mut jobs, mut process) = (0, String::new());
            for event in text.lines().filter_map(|line| serde_json::from_str::<Value>(line).ok()) {
                match event["event"].as_str() {
                    Some("began") => {
                        jobs = event["jobs"].as_u64().unwrap_or(1);
                        event["process"].as_str().unwrap_or_default().clone_into(&mut process);
                    }
                    Some("ended") => jobs = 0,
                    Some("propagated") => {
                        total += event["seconds"].as_f64().unwrap_or(0.0);
                        points += 1;
                    }
                    _ => {}
                }
            }
            if jobs > 0 && may_run(&process, &path, SILENCE) {
                running += jobs;
            }
        }
        (points > 0).then(|| Self { seconds: total / f64::from(points), running })
    }

    fn left(&self, missing: usize) -> String {
        let work = self.seconds * missing as f64;
        match self.running {
            0 => format!("about {} left on one core; nothing is running", duration(work)),
            jobs => format!("about {} left with {jobs} points at once", duration(work / jobs as f64)),
        }
    }
}
