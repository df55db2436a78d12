//! Pauses for tests, so that a kill finds a file half written.

use std::env;
use std::sync::OnceLock;
use std::thread::sleep;
use std::time::Duration;

/// Where to pause.
#[derive(Clone, Copy)]
pub(super) enum Place {
    /// Before a file is whole.
    Write,
    /// Before a point is gathered.
    Gather,
}

/// Pauses as long as the environment says, in ms; not at all where it says nothing.
pub(super) fn pause(place: Place) {
    static WRITE: OnceLock<Duration> = OnceLock::new();
    static GATHER: OnceLock<Duration> = OnceLock::new();
    let (length, name) = match place {
        Place::Write => (&WRITE, "TDSE_TEST_PAUSE_WRITE"),
        Place::Gather => (&GATHER, "TDSE_TEST_PAUSE_GATHER"),
    };
    let read = || {
        env::var(name).ok().and_then(|text| text.parse().ok()).map_or(Duration::ZERO, Duration::from_millis)
    };
    let length = length.get_or_init(read);
    if !length.is_zero() {
        sleep(*length);
    }
}
