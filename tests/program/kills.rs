//! SIGKILL again and again, wherever it lands: at the end every point is there once, to the same bits.
//!
//! `TDSE_KILLS` sets how often (12 where it is not set); where the kills landed is counted from the logs.

use std::collections::BTreeSet;
use std::env;
use std::fs;
use std::io::{Write, stderr};
use std::process::{Child, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};

use serde_json::{Value, json};

use crate::fixture::{Place, assert_same_bits, files, phases};

const POINTS: usize = 64;

/// Where a kill is to land.
#[derive(Clone, Copy, Debug)]
enum Aim {
    Flight,
    Write,
    Gather,
}

impl Aim {
    /// The event after which it is time, and how long after at most, ms.
    fn moment(self) -> (&'static str, u64) {
        match self {
            Self::Flight => ("started", 60),
            Self::Write => ("writing", 20),
            Self::Gather => ("gathering", 300),
        }
    }
}

/// Where kills landed; one may count twice.
#[derive(Clone, Copy, Debug, Default)]
struct Landed {
    kills: usize,
    flight: usize,
    write: usize,
    gather: usize,
}

impl Landed {
    /// Adds a kill, from the log of the process.
    fn count(&mut self, log: &[Value]) {
        let named = |kinds: &[&str]| -> BTreeSet<String> {
            let of_kind = log.iter().filter(|line| kinds.iter().any(|kind| line["event"] == **kind));
            of_kind.filter_map(|line| line["identity"].as_str().map(str::to_owned)).collect()
        };
        let done = named(&["propagated", "failed"]);
        let writing = named(&["writing"]);
        let is_there = |kind: &str| log.iter().any(|line| line["event"] == kind);
        self.kills += 1;
        self.flight += usize::from(
            named(&["started"]).iter().any(|point| !writing.contains(point) && !done.contains(point)),
        );
        self.write += usize::from(writing.difference(&done).next().is_some());
        self.gather += usize::from(is_there("gathering") && !is_there("gathered"));
    }
}

/// Numbers without a pattern, the same every time: xorshift, Marsaglia, J. Stat. Softw. 8 (14), 1 (2003).
struct Chance(u64);

impl Chance {
    fn below(&mut self, limit: u64) -> u64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        self.0 % limit
    }
}

/// Lines of the log of one process.
fn log(place: &Place, process: u32) -> Vec<Value> {
    let own = format!("-{process}.jsonl");
    let logs = files(&place.path("out/log"));
    let text = logs.iter().filter(|path| path.to_string_lossy().ends_with(&own));
    let text: String = text.map(|path| fs::read_to_string(path).unwrap_or_default()).collect();
    text.lines().filter_map(|line| serde_json::from_str(line).ok()).collect()
}

/// Starts the scan and kills it where it is to be; whether it was still alive then.
fn kill(place: &Place, aim: Aim, chance: &mut Chance, landed: &mut Landed) -> bool {
    let (event, most) = aim.moment();
    let mut command = place.command("run scan.json --out out --quiet --jobs 2");
    command.env("TDSE_TEST_PAUSE_WRITE", "25").env("TDSE_TEST_PAUSE_GATHER", "5");
    command.env("TDSE_TEST_CHECKPOINT_EVERY", ["none", "7", "50"][chance.below(3) as usize]);
    let mut child = command.stdout(Stdio::null()).stderr(Stdio::null()).spawn().expect("the program starts");
    let process = child.id();
    let is_alive = |child: &mut Child| child.try_wait().expect("a state").is_none();
    let start = Instant::now();
    while is_alive(&mut child) && !log(place, process).iter().any(|line| line["event"] == event) {
        assert!(start.elapsed() < Duration::from_mins(2), "no {event} within two minutes");
        sleep(Duration::from_millis(1));
    }
    sleep(Duration::from_millis(chance.below(most)));
    let alive = is_alive(&mut child);
    child.kill().expect("killed");
    child.wait().expect("gone");
    if alive {
        landed.count(&log(place, process));
    }
    alive
}

#[test]
fn kills_lose_nothing() {
    let kills: usize = env::var("TDSE_KILLS").ok().and_then(|text| text.parse().ok()).unwrap_or(12);
    let (writes, gathers) = (kills.div_ceil(6), kills.div_ceil(12));
    let place = Place::new();
    let mut scan = phases("0 deg", "180 deg", POINTS);
    scan["numerics"] = json!({ "spacing": "0.2 bohr", "extent": "400 bohr" });
    place.write("scan.json", &scan);
    place.tdse("run scan.json --out whole").with(0);
    let (mut chance, mut landed) = (Chance(0x5eed), Landed::default());
    let every = (kills - gathers) / writes;
    for number in 0..kills - gathers {
        let aim = if number % every == every - 1 { Aim::Write } else { Aim::Flight };
        assert!(kill(&place, aim, &mut chance, &mut landed), "it ended after {landed:?}");
    }
    for _ in 0..gathers {
        assert!(kill(&place, Aim::Gather, &mut chance, &mut landed), "it ended after {landed:?}");
    }
    let left = files(&place.path("out"))
        .iter()
        .filter(|path| path.extension().is_some_and(|e| e == "partial"))
        .count();
    place.tdse("run scan.json --out out").with(0);
    let _ =
        writeln!(stderr(), "kills_lose_nothing: {landed:?}, unfinished files before the last run: {left}");
    assert_eq!(landed.kills, kills);
    assert!(landed.flight * 4 >= kills * 3, "{landed:?}");
    assert!(landed.write * 10 >= kills && landed.gather * 20 >= kills, "{landed:?}");
    assert_eq!(place.counts("out"), [0, 0, POINTS, 0], "the last kill came when all points were there");
    let points: BTreeSet<_> = files(&place.path("out/points")).into_iter().collect();
    assert_eq!(points, (0..POINTS).map(|index| place.point("out", index)).collect());
    assert_same_bits(&place.path("whole/result.h5"), &place.path("out/result.h5"));
}
