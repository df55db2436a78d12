//! What a scan costs beyond its physics: wall time per point for files, log and threads, and the memory of gathering.
//!
//! Ten thousand cheap points on all cores. Rounds of bare computing (the same plans and the same derived spectra,
//! nothing written) and of `run` over the same points take turns, so that what else the machine does falls on both;
//! the result is the median of the rounds' differences. A round is long enough that its end, where the disk is waited
//! for, counts little. `TDSE_BENCH_POINTS` makes it smaller.

use std::error::Error;
use std::path::Path;
use std::process::{Command, Stdio};
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::{Duration, Instant};
use std::{env, fs, thread};

use serde_json::json;
use tdse_cli::config::Files;
use tdse_cli::derive;
use tdse_cli::progress::{Reporter, Voice};
use tdse_cli::scan::asked;
use tdse_cli::scan::atoms::Atoms;
use tdse_cli::scan::ledger::{Ledger, Standing};
use tdse_cli::scan::prepare::{Point, Prepared, prepare};
use tdse_cli::scan::run::{self, Retry, Shared, Stop, machine, tasks};
use tdse_cli::scan::source::Source;
use tdse_cli::store::{Folder, Provenance};
use tdse_core::simulate::{Plan, run as propagate};

type Outcome<T> = Result<T, Box<dyn Error>>;

/// Points of a round.
const ROUND: usize = 250;

fn main() -> Outcome<()> {
    let points = env::var("TDSE_BENCH_POINTS").ok().and_then(|text| text.parse().ok()).unwrap_or(10_000);
    let place = tempfile::tempdir()?;
    let out = place.path().join("out");
    let text = configuration(points);
    let config = place.path().join("scan.json");
    fs::write(&config, &text)?;
    let prepared = timed("making the points ready", points, || ready(&config))?;
    let request = asked::request(&prepared).map_err(|error| error.to_string())?;
    let (folder, _) = Folder::claim(&out, &request, &asked::inputs(&prepared))?;
    let reporter = Reporter::new(Voice::Errors, &folder.log())?;
    let mut ledger = Ledger::new(folder, &prepared);
    let stop = Stop::default();
    let jobs = machine::jobs(None);
    let missing = vec![Standing::Missing; points];
    ledger.write(&request, &missing)?;
    let all = tasks(&prepared, &ledger, &missing, None, Retry::Never);
    let shared = Shared {
        prepared: &prepared,
        ledger: &ledger,
        reporter: &reporter,
        stop: &stop,
        atoms: Atoms::new(),
    };
    let mut rounds = Vec::new();
    for (number, round) in all.chunks(ROUND.min(points)).enumerate() {
        let chosen: Vec<&Point> = round.iter().map(|task| &prepared.points[task.points[0]]).collect();
        let bare = || time(round.len(), || bare_points(&chosen, &shared.atoms, jobs));
        let whole = || time(round.len(), || Ok(run::run(&shared, round, jobs, jobs)?));
        // Each goes first in every second round.
        rounds.push(if number % 2 == 0 {
            Round { bare: bare()?, whole: whole()? }
        } else {
            Round { whole: whole()?, bare: bare()? }
        });
    }
    print(&rounds, jobs);
    gathering(&out)
}

/// Phases of a short pulse on a small grid.
fn configuration(points: usize) -> String {
    let tree = json!({
        "title": "Invented for the bench",
        "atom": { "potential": { "kind": "soft_coulomb", "softening": "1.4142135623730951 bohr" } },
        "field": { "pulses": [{
            "wavelength": "800 nm", "intensity": "1e14 W/cm^2", "phase": "0 deg",
            "envelope": { "kind": "sin2", "cycles": 2 }
        }] },
        "numerics": { "spacing": "0.4 bohr", "extent": "307.2 bohr", "time_step": "0.19 au" },
        "outputs": { "harmonics": { "max_energy": "80 eV", "energy_step": "0.2 eV" } },
        "scan": [{
            "parameter": "/field/pulses/0/phase", "name": "cep", "from": "0 deg", "to": "359 deg", "points": points
        }]
    });
    format!("{tree:#}\n")
}

fn ready(config: &Path) -> Outcome<Prepared> {
    let source = Source { text: fs::read_to_string(config)?, files: Files::Stored([].into()) };
    prepare(&source, &[]).map_err(|error| error.to_string().into())
}

/// The same plans and spectra, nothing written.
fn bare_points(points: &[&Point], atoms: &Atoms, jobs: usize) -> Outcome<()> {
    let next = AtomicUsize::new(0);
    let work = || -> Result<(), String> {
        while let Some(point) = points.get(next.fetch_add(1, Ordering::Relaxed)) {
            let job = &point.job;
            let atom = atoms.get(job).map_err(|error| error.to_string())?;
            let plan = Plan::new(&job.problem, atom.clone(), &job.numerics, job.record);
            let plan = plan.map_err(|error| error.to_string())?;
            let state = propagate(&plan);
            let finished = derive::Finished {
                point,
                atom: &atom,
                plan: &plan,
                state: &state,
                continuum: None,
                round: None,
            };
            let mut contents = derive::record(&finished, Provenance::default());
            derive::derive(point, &mut contents);
            std::hint::black_box(&contents);
        }
        Ok(())
    };
    thread::scope(|scope| {
        let workers: Vec<_> = (0..jobs).map(|_| scope.spawn(work)).collect();
        workers.into_iter().try_for_each(|worker| worker.join().map_err(|_| "a panic".to_owned())?)
    })?;
    Ok(())
}

/// What a point took in a round, ms.
#[derive(Clone, Copy)]
struct Took {
    wall: f64,
    cores: f64,
}

/// A round of bare computing, and one of `run` over the same points.
struct Round {
    bare: Took,
    whole: Took,
}

fn time(points: usize, work: impl FnOnce() -> Outcome<()>) -> Outcome<Took> {
    let (start, used) = (Instant::now(), cores_time()?);
    work()?;
    let each = |seconds: f64| seconds * 1e3 / points as f64;
    Ok(Took { wall: each(start.elapsed().as_secs_f64()), cores: each(cores_time()? - used) })
}

fn print(rounds: &[Round], jobs: usize) {
    let median = |value: fn(&Round) -> f64| {
        let mut values: Vec<f64> = rounds.iter().map(value).collect();
        values.sort_by(f64::total_cmp);
        values[values.len() / 2]
    };
    println!("medians of {} rounds, {jobs} points at once, ms a point:", rounds.len());
    println!("  wall time: bare {:.3}, whole {:.3}", median(|r| r.bare.wall), median(|r| r.whole.wall));
    println!("  all cores: bare {:.3}, whole {:.3}", median(|r| r.bare.cores), median(|r| r.whole.cores));
    println!(
        "  added: {:.3} of wall time, {:.3} of all cores",
        median(|r| r.whole.wall - r.bare.wall),
        median(|r| r.whole.cores - r.bare.cores)
    );
}

/// Time that the cores have worked for this process, s: fields 14 and 15 of proc(5)'s stat, in ticks of 10 ms.
fn cores_time() -> Outcome<f64> {
    let text = fs::read_to_string("/proc/self/stat")?;
    let fields: Vec<&str> = text.rsplit(')').next().unwrap_or_default().split_whitespace().collect();
    Ok((fields[11].parse::<f64>()? + fields[12].parse::<f64>()?) / 100.0)
}

fn timed<T>(what: &str, points: usize, work: impl FnOnce() -> Outcome<T>) -> Outcome<T> {
    let start = Instant::now();
    let done = work()?;
    let seconds = start.elapsed().as_secs_f64();
    println!("{what}: {:.3} ms a point", seconds * 1e3 / points as f64);
    Ok(done)
}

/// Gathers in a process of its own, and reads the most memory it had (proc(5), VmHWM).
fn gathering(out: &Path) -> Outcome<()> {
    let start = Instant::now();
    let mut child =
        Command::new(env!("CARGO_BIN_EXE_tdse")).arg("gather").arg(out).stdout(Stdio::null()).spawn()?;
    let status = format!("/proc/{}/status", child.id());
    let mut most = 0.0;
    while child.try_wait()?.is_none() {
        let text = fs::read_to_string(&status).unwrap_or_default();
        let line = text.lines().find_map(|line| line.strip_prefix("VmHWM:"));
        if let Some(kilobytes) = line.and_then(|line| line.trim().strip_suffix("kB")) {
            most = f64::max(most, kilobytes.trim().parse::<f64>()? / 1e3);
        }
        thread::sleep(Duration::from_millis(10));
    }
    println!("gathering: {:.1} s, {most:.0} MB of memory at most", start.elapsed().as_secs_f64());
    Ok(())
}
