//! `outputs`.

use serde_json::json;
use tdse_core::problem::Record;
use tdse_core::spectrum::Window;

use super::Check;
use crate::config::complaint::Fix;
use crate::config::raw::{self, Energy, Time};
use crate::config::request::{Harmonics, Outputs, Photoelectrons, TimeFrequency};

/// More points than this on an energy axis are a slip of the pen (a limit of our own).
const MOST_POINTS: f64 = 1e6;

/// What is derived, and what must be recorded for it.
pub(super) fn outputs(check: &mut Check, outputs: &raw::Outputs) -> (Outputs, Record) {
    if let Some(harmonics) = &outputs.harmonics {
        energy_axis(
            check,
            "/outputs/harmonics",
            harmonics.max_energy.as_ref(),
            harmonics.energy_step.as_ref(),
        );
    }
    if let Some(map) = &outputs.time_frequency {
        energy_axis(check, "/outputs/time_frequency", map.max_energy.as_ref(), map.energy_step.as_ref());
    }
    if let Some(electrons) = &outputs.photoelectrons {
        let (max_energy, step) = (electrons.max_energy.as_ref(), electrons.energy_step.as_ref());
        energy_axis(check, "/outputs/photoelectrons", max_energy, step);
    }
    let record = Record { populations: outputs.populations.as_ref().map_or(0, |p| p.states as usize) };
    let derived = Outputs {
        harmonics: outputs.harmonics.as_ref().map(harmonics),
        time_frequency: outputs.time_frequency.as_ref().map(time_frequency),
        photoelectrons: outputs.photoelectrons.as_ref().map(|raw| Photoelectrons {
            max_energy: raw.max_energy.as_ref().map(Energy::value),
            energy_step: raw.energy_step.as_ref().map(Energy::value),
        }),
        models: None,
    };
    (derived, record)
}

fn energy_axis(check: &mut Check, place: &str, max_energy: Option<&Energy>, energy_step: Option<&Energy>) {
    let (Some(max_energy), Some(step)) = (max_energy, energy_step) else {
        return;
    };
    let points = max_energy.value() / step.value();
    if !(1.0..=MOST_POINTS).contains(&points) {
        let reason = format!("does not fit max_energy {:?}", max_energy.0);
        let (number, unit) = max_energy.0.split_once(' ').unwrap_or(("1", "au"));
        let step = number.parse::<f64>().map_or(1.0, |number| number / 1000.0);
        let fix = Fix::Value(json!(format!("{step} {}", unit.trim_start())));
        let allowed = "a step that divides the axis into 1 to 1000000 parts";
        check.complain(&format!("{place}/energy_step"), reason, allowed, fix);
    }
}

fn harmonics(raw: &raw::Harmonics) -> Harmonics {
    Harmonics {
        max_energy: raw.max_energy.as_ref().map(Energy::value),
        energy_step: raw.energy_step.as_ref().map(Energy::value),
        max_order: raw.max_order,
        window: window(&raw.window),
    }
}

fn window(raw: &raw::Window) -> Window {
    match raw {
        raw::Window::None { .. } => Window::None,
        raw::Window::Hann { .. } => Window::Hann,
        raw::Window::Blackman { .. } => Window::Blackman,
        raw::Window::Taper { length, .. } => Window::Taper { length: length.value() },
    }
}

fn time_frequency(raw: &raw::TimeFrequency) -> TimeFrequency {
    TimeFrequency {
        window_length: raw.window_length.as_ref().map(Time::value),
        max_energy: raw.max_energy.as_ref().map(Energy::value),
        energy_step: raw.energy_step.as_ref().map(Energy::value),
        time_step: raw.time_step.as_ref().map(Time::value),
    }
}
