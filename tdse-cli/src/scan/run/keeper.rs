//! Keeps a point in flight on disk, so that another process can go on from there.

use std::env;
use std::fs::File;
use std::io;
use std::path::PathBuf;
use std::sync::OnceLock;
use std::time::{Duration, Instant};

use sha2::{Digest, Sha256};
use tdse_core::simulate::{Plan, State};

use super::Shared;
use crate::progress::Event;
use crate::store::checkpoint;

/// Between two checkpoints of a point.
const INTERVAL: Duration = Duration::from_mins(10);

/// Steps between two checkpoints, for tests.
const HOOK: &str = "TDSE_TEST_CHECKPOINT_EVERY";

/// When a checkpoint is due.
#[derive(Clone, Copy, Debug)]
enum Rhythm {
    /// So long after the last one.
    Time(Duration),
    /// At every multiple of this many steps.
    Steps(usize),
}

impl Rhythm {
    fn chosen() -> Self {
        let steps = env::var(HOOK).ok().and_then(|text| text.parse().ok()).filter(|steps| *steps > 0);
        steps.map_or(Self::Time(INTERVAL), Self::Steps)
    }
}

/// Keeps one point.
pub struct Keeper<'a> {
    shared: &'a Shared<'a>,
    index: usize,
    path: PathBuf,
    rhythm: Rhythm,
    last: Instant,
}

impl<'a> Keeper<'a> {
    /// For the point with this index.
    pub fn new(shared: &'a Shared, index: usize) -> Self {
        let path = shared.ledger.folder.checkpoint(&shared.prepared.points[index].identity);
        Self { shared, index, path, rhythm: Rhythm::chosen(), last: Instant::now() }
    }

    /// The state to go on from: the checkpoint's, where there is one of this point by this executable; else the first.
    pub fn start(&self, plan: &Plan) -> State {
        let first = plan.initial_state();
        if !self.path.exists() {
            return first;
        }
        let found = checkpoint::read(&self.path, &self.origin()).map_err(|error| error.to_string());
        match found.and_then(|state| fitting(state, &first, plan)) {
            Ok(state) => {
                let (point, step) = (self.shared.name(self.index), state.step);
                self.shared.reporter.tell(&Event::Continued { point, step });
                state
            }
            Err(reason) => {
                self.shared
                    .reporter
                    .tell(&Event::Noted { text: format!("computed from the start: {reason}") });
                first
            }
        }
    }

    /// Of so many steps, those until the next checkpoint.
    pub fn limited(&self, state: &State, steps: usize) -> usize {
        match self.rhythm {
            Rhythm::Time(_) => steps,
            Rhythm::Steps(every) => steps.min(every - state.step % every),
        }
    }

    /// Writes a checkpoint when it is time.
    pub fn keep_in_time(&mut self, state: &State) {
        let due = match self.rhythm {
            Rhythm::Time(interval) => self.last.elapsed() >= interval,
            Rhythm::Steps(every) => state.step.is_multiple_of(every),
        };
        if due {
            self.keep(state);
            self.last = Instant::now();
        }
    }

    /// Writes a checkpoint; nothing is worth keeping before the first step. Where the disk refuses, the run goes on
    /// without: the point is not lost yet.
    pub fn keep(&self, state: &State) {
        if state.step == 0 {
            return;
        }
        let point = self.shared.name(self.index);
        let event = match checkpoint::write(&self.path, &self.origin(), state) {
            Ok(()) => Event::Checkpointed { point, step: state.step },
            Err(error) => Event::Refused { point, reason: error.to_string() },
        };
        self.shared.reporter.tell(&event);
    }

    fn origin(&self) -> checkpoint::Origin {
        checkpoint::Origin {
            identity: self.shared.prepared.points[self.index].identity.clone(),
            executable: executable().into(),
            instruction_set: tdse_core::step::instruction_set().into(),
        }
    }
}

/// The state, if it is one of this plan.
fn fitting(state: State, first: &State, plan: &Plan) -> Result<State, String> {
    let lengths = |state: &State| {
        let outgoing = state
            .outgoing
            .as_ref()
            .map(|outgoing| [outgoing.left.len(), outgoing.right.len(), outgoing.map.len()]);
        (state.psi.len(), outgoing)
    };
    let (samples, steps) = (state.series.norm.len(), plan.schedule().steps);
    if lengths(&state) == lengths(first) && state.step <= steps && samples.wrapping_sub(state.step) <= 1 {
        return Ok(state);
    }
    Err(format!(
        "a checkpoint of lengths {:?}, {} steps and {samples} samples does not fit lengths {:?} and {steps} steps",
        lengths(&state),
        state.step,
        lengths(first)
    ))
}

/// First 16 hexadecimal digits of the SHA-256 of this executable; the process's own number where it cannot be read, so
/// that no other process takes its checkpoints.
fn executable() -> &'static str {
    static HASH: OnceLock<String> = OnceLock::new();
    HASH.get_or_init(|| {
        // The kernel's own link leads to the running one, also where another has taken its place since.
        let running = File::open("/proc/self/exe").or_else(|_| File::open(env::current_exe()?));
        let mut hash = Sha256::new();
        match running.and_then(|mut file| io::copy(&mut file, &mut hash)) {
            Ok(_) => format!("{:x}", hash.finalize())[..16].to_owned(),
            Err(_) => format!("of process {}", std::process::id()),
        }
    })
}
