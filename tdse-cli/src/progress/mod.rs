//! The one place that talks while points are computed: a bar, lines or nothing, and always the log.

mod event;
mod log;
mod pace;

use std::path::Path;
use std::sync::{Mutex, MutexGuard, PoisonError};
use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

pub use event::{Counts, Event, PointName};
use log::Log;
use pace::Pace;

use crate::command::output::talk;
use crate::store::Error;
use crate::text::duration;

/// How much is said.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Voice {
    /// A bar that moves.
    Bar,
    /// A line per point.
    Lines,
    /// Errors only.
    Errors,
}

/// Who listens on stderr.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Audience {
    /// A person at a terminal.
    Terminal,
    /// A file or another program.
    Pipe,
}

/// Whether talk is wanted at all.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Wish {
    /// As usual.
    Talk,
    /// Errors only.
    Quiet,
}

/// How much to say to whom. A terminal that cannot move its cursor (`TERM=dumb`) gets lines.
pub fn voice(audience: Audience, terminal: Option<&str>, wish: Wish) -> Voice {
    match (wish, audience, terminal) {
        (Wish::Quiet, _, _) => Voice::Errors,
        (Wish::Talk, Audience::Terminal, Some(name)) if name != "dumb" => Voice::Bar,
        (Wish::Talk, _, _) => Voice::Lines,
    }
}

/// Turns events into talk and lines of the log; shared by all threads.
#[derive(Debug)]
pub struct Reporter {
    voice: Voice,
    bar: ProgressBar,
    state: Mutex<Ledger>,
}

#[derive(Debug)]
struct Ledger {
    log: Log,
    pace: Pace,
    points: usize,
    due: usize,
    finished: usize,
    counts: Counts,
}

impl Reporter {
    /// A reporter whose log goes into a new file in `folder`.
    ///
    /// # Errors
    /// If the log cannot be made.
    pub fn new(voice: Voice, folder: &Path) -> Result<Self, Error> {
        let log = Log::create(folder)?;
        let counts = Counts::default();
        let state = Ledger { log, pace: Pace::default(), points: 0, due: 0, finished: 0, counts };
        Ok(Self { voice, bar: ProgressBar::hidden(), state: Mutex::new(state) })
    }

    fn state(&self) -> MutexGuard<'_, Ledger> {
        self.state.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// What was counted so far.
    pub fn counts(&self) -> Counts {
        self.state().counts
    }

    /// Takes an event.
    pub fn tell(&self, event: &Event) {
        let mut state = self.state();
        if !matches!(event, Event::Advanced { .. }) {
            state.log.write(event);
        }
        match event {
            Event::Began { points, jobs, steps, work, due, .. } => {
                (state.points, state.due) = (*points, *due);
                state.pace = Pace::new(*work, *jobs);
                self.show_bar(&state, *steps);
            }
            Event::Noted { text } => self.say(text),
            Event::Kept { .. } => state.counts.kept += 1,
            Event::Advanced { step } => {
                if state.points == 1 {
                    self.bar.set_position(*step as u64);
                }
            }
            Event::Propagated { point, seconds, estimate } => {
                state.counts.propagated += 1;
                state.pace.took(*estimate, *seconds);
                self.finished(&mut state, point, &format!("done in {}", duration(*seconds)));
            }
            Event::Derived { point, seconds } => {
                state.counts.derived += 1;
                self.finished(&mut state, point, &format!("derived anew in {}", duration(*seconds)));
            }
            Event::Failed { point, reason } => {
                state.counts.failed += 1;
                if self.voice != Voice::Lines {
                    self.error(&format!("{}failed: {reason}", named(point)));
                }
                self.finished(&mut state, point, &format!("failed: {reason}"));
            }
            Event::Refused { point, reason } => self.error(&format!("{}{reason}", named(point))),
            Event::Started { .. }
            | Event::Continued { .. }
            | Event::Checkpointed { .. }
            | Event::Writing { .. }
            | Event::Gathering
            | Event::Gathered { .. } => {}
            Event::Ended { .. } => self.bar.finish_and_clear(),
        }
    }

    fn show_bar(&self, state: &Ledger, steps: usize) {
        if self.voice != Voice::Bar || state.due == 0 {
            return;
        }
        let single = state.points == 1;
        let (length, tail) =
            if single { (steps, "steps, about {eta} left") } else { (state.due, "points{msg}") };
        let template = format!("{{wide_bar}} {{pos}} of {{len}} {tail}");
        self.bar.set_length(length as u64);
        self.bar.set_style(
            ProgressStyle::with_template(&template).unwrap_or_else(|_| ProgressStyle::default_bar()),
        );
        self.bar.set_draw_target(ProgressDrawTarget::stderr());
        self.bar.enable_steady_tick(Duration::from_millis(200));
    }

    fn finished(&self, state: &mut Ledger, point: &PointName, how: &str) {
        state.finished += 1;
        let left = state.due.saturating_sub(state.finished);
        let time = match state.pace.left() {
            Some(seconds) if left > 0 => format!(", about {} left", duration(seconds)),
            _ => String::new(),
        };
        match self.voice {
            Voice::Errors => {}
            Voice::Lines => talk(format!("{}/{}: {}{how}{time}", state.finished, state.due, named(point))),
            Voice::Bar if state.points == 1 => {}
            Voice::Bar => {
                self.bar.set_position(state.finished as u64);
                let failed = state.counts.failed;
                let failed = if failed > 0 { format!(", {failed} failed") } else { String::new() };
                self.bar.set_message(format!(", {left} to go{failed}{time}"));
            }
        }
    }

    fn say(&self, line: &str) {
        if self.voice != Voice::Errors {
            self.error(line);
        }
    }

    /// Errors are said whoever listens.
    fn error(&self, line: &str) {
        if self.voice == Voice::Bar {
            self.bar.suspend(|| talk(line));
        } else {
            talk(line);
        }
    }
}

/// The values of the point's axes before what is said of it; nothing where there are none.
fn named(point: &PointName) -> String {
    if point.label.is_empty() { String::new() } else { format!("{}: ", point.label) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_bar_is_drawn_on_terminals_only() {
        use Audience::{Pipe, Terminal};
        assert_eq!(voice(Terminal, Some("xterm"), Wish::Talk), Voice::Bar);
        assert_eq!(voice(Terminal, Some("dumb"), Wish::Talk), Voice::Lines);
        assert_eq!(voice(Terminal, None, Wish::Talk), Voice::Lines);
        assert_eq!(voice(Pipe, Some("xterm"), Wish::Talk), Voice::Lines);
        assert_eq!(voice(Terminal, Some("xterm"), Wish::Quiet), Voice::Errors);
        assert_eq!(voice(Pipe, None, Wish::Quiet), Voice::Errors);
    }
}
