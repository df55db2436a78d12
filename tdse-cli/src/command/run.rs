//! `tdse run`: computes what is missing, gathers, draws.

use std::env;
use std::io::{IsTerminal, stderr};
use std::path::Path;
use std::time::{Duration, Instant};

use super::exit::{Exit, Trouble};
use super::headline::headline;
use super::options::{Effort, RunOptions};
use super::output::data;
use super::report;
use super::verdict;
use crate::progress::{Audience, Counts, Event, Reporter, Wish, voice};
use crate::refine;
use crate::scan::asked;
use crate::scan::gathering::gather_all;
use crate::scan::ledger::{Ledger, Standing};
use crate::scan::prepare::Prepared;
use crate::scan::run::{self, Retry, Shared, Stop, at_once, machine, name, tasks};
use crate::store::{Claim, Folder, Request, process_mark};

/// A request in its folder, ready to be computed.
struct Work<'a> {
    effort: &'a Effort,
    prepared: Prepared,
    request: Request,
    ledger: Ledger,
    reporter: Reporter,
    stop: Stop,
    start_time: String,
}

/// Of the time given by `--within`, what is left to write checkpoints and end: a tenth, at most this much. Points stop
/// within 50 ms, and what waits for the disk is one result and one checkpoint per point at once.
const MARGIN: Duration = Duration::from_secs(20);

/// After a signal, looking at the points once more goes on for so long.
const PATIENCE: Duration = Duration::from_secs(2);

/// Runs, or continues.
///
/// # Errors
/// Refused where the configuration or the folder is; incomplete where the machine does not let it finish.
pub fn run(options: &RunOptions) -> Result<Exit, Trouble> {
    carry_out(options.asked.prepare()?, &options.out, &options.effort)
}

/// The same for a request that is ready.
///
/// # Errors
/// As [`run()`].
pub fn carry_out(prepared: Prepared, out: &Path, effort: &Effort) -> Result<Exit, Trouble> {
    let deadline = effort
        .within
        .and_then(|within| Instant::now().checked_add(within.saturating_sub(MARGIN.min(within / 10))));
    let mut work = Work::begin(prepared, out, effort, deadline)?;
    let Some(before) = work.ledger.standings_while(|| work.stop.signal().is_none()) else {
        return Ok(work.left());
    };
    work.ledger.write(&work.request, &before).map_err(Trouble::refused)?;
    work.compute(&before)?;
    let patience = Instant::now() + PATIENCE;
    let go_on = || work.stop.signal().is_none() || Instant::now() < patience;
    let Some(standings) = work.ledger.standings_after(before, go_on) else { return Ok(work.left()) };
    let counts = work.counts(&standings);
    let signal = work.stop.signal();
    work.reporter.tell(&Event::Ended { counts, signal: signal.map(run::Signal::name) });
    work.ledger.write(&work.request, &standings).map_err(Trouble::incomplete)?;
    if let Some(signal) = signal {
        let there = standings.iter().filter(|standing| standing.is_there()).count();
        let text = format!("{there} of {} points are there; continue with the same command", standings.len());
        work.note(format!("stopped by {}: {text}", signal.name()));
        return Ok(Exit::Stopped(signal));
    }
    let ended = work.finish(&standings);
    match (work.stop.signal(), ended) {
        (Some(signal), Err(trouble)) => Err(Trouble { exit: Exit::Stopped(signal), ..trouble }),
        (_, ended) => ended,
    }
}

impl<'a> Work<'a> {
    /// Judges everything, then takes the folder.
    fn begin(
        prepared: Prepared,
        out: &Path,
        effort: &'a Effort,
        deadline: Option<Instant>,
    ) -> Result<Self, Trouble> {
        let start_time = run::now();
        let request = asked::request(&prepared).map_err(Trouble::refused)?;
        let claimed = Folder::claim(out, &request, &asked::inputs(&prepared));
        let (folder, claim) = claimed.map_err(Trouble::refused)?;
        let audience = if stderr().is_terminal() { Audience::Terminal } else { Audience::Pipe };
        let wish = if effort.quiet { Wish::Quiet } else { Wish::Talk };
        let voice = voice(audience, env::var("TERM").ok().as_deref(), wish);
        let reporter = Reporter::new(voice, &folder.log()).map_err(Trouble::refused)?;
        let stop = Stop::on_signals().map_err(Trouble::refused)?.at(deadline);
        let ledger = Ledger::new(folder, &prepared);
        let work = Self { effort, prepared, request, ledger, reporter, stop, start_time };
        match work.ledger.folder.sweep() {
            0 => {}
            count => work.note(format!("removed {count} unfinished files of processes that are gone")),
        }
        if let Claim::Changed { parts, kept } = claim {
            let parts = if parts.is_empty() { "version".into() } else { parts.join(" and ") };
            let kept = kept.file_name().unwrap_or_default().to_string_lossy();
            work.note(format!(
                "changed {parts}: points that belong are kept, the request before is in {kept}"
            ));
        }
        Ok(work)
    }

    fn note(&self, text: String) {
        self.reporter.tell(&Event::Noted { text });
    }

    /// Leaves at a signal without having looked at all points; `points.csv` stays as it was.
    fn left(&self) -> Exit {
        let Some(signal) = self.stop.signal() else { return Exit::Incomplete };
        self.reporter.tell(&Event::Ended { counts: self.reporter.counts(), signal: Some(signal.name()) });
        self.note(format!("stopped by {}: continue with the same command", signal.name()));
        Exit::Stopped(signal)
    }

    /// Whether the point is asked of this process.
    fn is_own(&self, index: usize) -> bool {
        self.effort.shard.is_none_or(|shard| shard.holds(index))
    }

    fn compute(&self, before: &[Standing]) -> Result<(), Trouble> {
        let retry = if self.effort.retry { Retry::Failed } else { Retry::Never };
        let tasks = tasks(&self.prepared, &self.ledger, before, self.effort.shard, retry);
        let threads = machine::jobs(self.effort.jobs);
        let jobs = at_once(threads, &tasks);
        self.reporter.tell(&Event::Began {
            version: env!("CARGO_PKG_VERSION"),
            process: process_mark(),
            points: self.prepared.points.len(),
            jobs,
            steps: tasks.iter().map(|task| task.cost.steps).max().unwrap_or(0),
            work: tasks.iter().filter(|task| task.recorded.is_none()).map(|task| task.cost.seconds).sum(),
            due: tasks.iter().map(|task| task.points.len()).sum(),
        });
        self.remark_on(before, retry);
        let (prepared, ledger, reporter, stop) = (&self.prepared, &self.ledger, &self.reporter, &self.stop);
        let shared = Shared { prepared, ledger, reporter, stop, atoms: crate::scan::atoms::Atoms::new() };
        run::run(&shared, &tasks, jobs, threads).map_err(Trouble::incomplete)
    }

    /// Says what was found before computing starts.
    fn remark_on(&self, before: &[Standing], retry: Retry) {
        let (mut kept, mut failed) = (0, 0);
        for (index, standing) in before.iter().enumerate().filter(|(index, _)| self.is_own(*index)) {
            match standing {
                Standing::Done | Standing::Doubtful(_) => {
                    kept += 1;
                    // Another process on the folder, or one that was killed, may have left it; it does no harm.
                    let _ = self.ledger.folder.forget_checkpoint(&self.ledger.rows[index].identity);
                    self.reporter.tell(&Event::Kept { point: name(&self.prepared, index) });
                }
                Standing::Failed(_) => failed += 1,
                Standing::Unusable(reason) => self.note(format!("computed again: {reason}")),
                Standing::Stale | Standing::Missing => {}
            }
        }
        if kept > 0 {
            self.note(format!("{kept} of {} points are there already", before.len()));
        }
        if failed > 0 && retry == Retry::Never {
            let all = before.len();
            self.note(format!("{failed} of {all} points failed before; --retry computes them again"));
        }
    }

    fn counts(&self, standings: &[Standing]) -> Counts {
        let count =
            |wanted: fn(&Standing) -> bool| standings.iter().filter(|standing| wanted(standing)).count();
        let failed = count(|standing| matches!(standing, Standing::Failed(_)));
        Counts { failed, missing: count(|standing| !standing.is_final()), ..self.reporter.counts() }
    }

    /// Gathers, draws, and says how it ended.
    fn finish(&self, standings: &[Standing]) -> Result<Exit, Trouble> {
        let mut own = standings.iter().enumerate().filter(|(index, _)| self.is_own(*index));
        let exit =
            if own.all(|(_, standing)| standing.is_there()) { Exit::Complete } else { Exit::Incomplete };
        self.remark_on_doubts(standings);
        let all = standings.len();
        let missing = standings.iter().filter(|standing| !standing.is_final()).count();
        if missing > 0 && self.stop.is_due() {
            let why = if self.stop.is_late() { "time is over (--within): " } else { "" };
            self.note(format!("{why}{missing} of {all} points are missing; continue with the same command"));
            return Ok(Exit::Incomplete);
        }
        if self.effort.shard.is_some() && missing > 0 {
            self.note(format!("{missing} of {all} points are left to other shards; the last one gathers"));
            return Ok(exit);
        }
        let start = Instant::now();
        self.reporter.tell(&Event::Gathering);
        let go_on = || !self.stop.is_due();
        gather_all(&self.ledger, &self.request, standings, &self.start_time, go_on)
            .map_err(Trouble::incomplete)?;
        refine::restore(self.ledger.folder.root(), &self.prepared, &self.request)
            .map_err(Trouble::incomplete)?;
        let path = self.ledger.folder.result();
        let seconds = start.elapsed().as_secs_f64();
        self.reporter.tell(&Event::Gathered { path: path.display().to_string(), seconds });
        report::draw(&self.ledger.folder).map_err(Trouble::incomplete)?;
        data(self.ending(standings)?);
        Ok(exit)
    }

    fn remark_on_doubts(&self, standings: &[Standing]) {
        let doubts = standings.iter().filter(|standing| matches!(standing, Standing::Doubtful(_)));
        match (doubts.clone().count(), standings) {
            (0, _) => {}
            (_, [single]) => single.reason().lines().for_each(|doubt| self.note(format!("doubt: {doubt}"))),
            (many, all) => {
                self.note(format!("{many} of {} points are doubtful; tdse status says why", all.len()));
            }
        }
    }

    /// Numbers of a single run; where the result of a scan lies.
    fn ending(&self, standings: &[Standing]) -> Result<String, Trouble> {
        let path = self.ledger.folder.result();
        if let [standing] = standings {
            let numbers = if standing.is_there() {
                headline(&path).map_err(Trouble::incomplete)?
            } else {
                String::new()
            };
            let models = verdict::text(&path).map_err(Trouble::incomplete)?;
            return Ok(format!("{numbers}{models}{}\n", path.display()));
        }
        let there = standings.iter().filter(|standing| standing.is_there()).count();
        let failed = standings.iter().filter(|standing| matches!(standing, Standing::Failed(_))).count();
        let failed = if failed > 0 { format!(", {failed} failed") } else { String::new() };
        let models = verdict::text(&path).map_err(Trouble::incomplete)?;
        Ok(format!("{models}{there} of {} points{failed}: {}\n", standings.len(), path.display()))
    }
}
