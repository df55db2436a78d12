//! When to stop: at a signal (the second stops at once), at a time, or where nothing more can be written.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};
use std::time::Instant;
use std::{fs, io};

use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM};
use signal_hook::flag;

/// A signal that asks to stop.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Signal {
    /// SIGHUP.
    HangUp,
    /// SIGINT.
    Interrupt,
    /// SIGTERM.
    Terminate,
}

impl Signal {
    const ALL: [Self; 3] = [Self::HangUp, Self::Interrupt, Self::Terminate];

    fn number(self) -> i32 {
        match self {
            Self::HangUp => SIGHUP,
            Self::Interrupt => SIGINT,
            Self::Terminate => SIGTERM,
        }
    }

    /// Exit status of a process that it stopped, 128 + its number.
    pub fn exit_status(self) -> u8 {
        128 + self.number() as u8
    }

    /// Its name.
    pub fn name(self) -> &'static str {
        match self {
            Self::HangUp => "SIGHUP",
            Self::Interrupt => "SIGINT",
            Self::Terminate => "SIGTERM",
        }
    }
}

/// Whether to stop; cheap to ask.
#[derive(Debug, Default)]
pub struct Stop {
    /// Number of the signal that came; zero for none.
    came: Arc<AtomicUsize>,
    /// Set where nothing more can be written.
    hopeless: AtomicBool,
    /// Time is over then.
    deadline: Option<Instant>,
}

impl Stop {
    /// Listens to signals. A signal that the process was started to ignore (`nohup`) stays ignored.
    pub fn on_signals() -> io::Result<Self> {
        let stop = Self::default();
        let ignored = ignored_signals();
        let second = Arc::new(AtomicBool::new(false));
        for signal in Signal::ALL.into_iter().filter(|signal| ignored >> (signal.number() - 1) & 1 == 0) {
            // In this order: the first signal finds the flag still down.
            let status = i32::from(signal.exit_status());
            flag::register_conditional_shutdown(signal.number(), status, second.clone())?;
            flag::register(signal.number(), second.clone())?;
            flag::register_usize(signal.number(), stop.came.clone(), signal.number() as usize)?;
        }
        Ok(stop)
    }

    /// The signal that came.
    pub fn signal(&self) -> Option<Signal> {
        let came = self.came.load(Ordering::Relaxed);
        Signal::ALL.into_iter().find(|signal| signal.number() as usize == came)
    }

    /// The same, and at a time.
    #[must_use]
    pub fn at(self, deadline: Option<Instant>) -> Self {
        Self { deadline, ..self }
    }

    /// Whether time is over.
    pub fn is_late(&self) -> bool {
        self.deadline.is_some_and(|deadline| Instant::now() >= deadline)
    }

    /// Says that to go on is of no use.
    pub fn give_up(&self) {
        self.hopeless.store(true, Ordering::Relaxed);
    }

    /// Whether to stop, for whatever reason.
    pub fn is_due(&self) -> bool {
        self.came.load(Ordering::Relaxed) != 0 || self.hopeless.load(Ordering::Relaxed) || self.is_late()
    }
}

/// The mask of ignored signals as proc(5) gives it, bit n - 1 for signal n; none where it is not known.
fn ignored_signals() -> u64 {
    let status = fs::read_to_string("/proc/self/status").unwrap_or_default();
    let mask = status.lines().find_map(|line| line.strip_prefix("SigIgn:"));
    mask.and_then(|mask| u64::from_str_radix(mask.trim(), 16).ok()).unwrap_or(0)
}
