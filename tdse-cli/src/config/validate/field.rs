//! `field`.

use serde_json::json;
use tdse_core::field::{Envelope, Field, Pulse, SampledField};
use tdse_core::units::{Quantity, angular_frequency, peak_field};

use super::Check;
use crate::config::complaint::Fix;
use crate::config::quantity::{digits, rounded};
use crate::config::{raw, tables};

/// The field as far as it is sound; complaints tell the rest.
pub(super) fn field(check: &mut Check, field: &raw::Field, dimensions: u32) -> Field {
    if field.pulses.is_empty() && field.sampled.is_none() {
        let fix = Fix::Value(json!([raw::example_pulse()]));
        check.complain("/field/pulses", "holds no pulse, and no field is sampled", "at least one pulse", fix);
    }
    let mut pulses = Vec::new();
    for (i, raw) in field.pulses.iter().enumerate() {
        let place = format!("/field/pulses/{i}");
        if dimensions == 1 {
            on_the_line(check, raw, &place);
        }
        pulses.extend(pulse(check, raw, &place));
    }
    let sampled = field.sampled.as_ref().and_then(|raw| sampled(check, raw, dimensions));
    Field { pulses, sampled }
}

/// One column is the field along x, two are both components.
fn sampled(check: &mut Check, raw: &raw::Sampled, dimensions: u32) -> Option<SampledField> {
    const PLACE: &str = "/field/sampled";
    let layouts = [tables::FIELD, tables::PLANE_FIELD];
    let mut components = check.curves(PLACE, &raw.file, raw.sha256.as_ref(), &layouts)?.into_iter();
    let components = [components.next(), components.next()];
    if dimensions == 1 && components[1].is_some() {
        let fix = Fix::Elsewhere { place: "/atom/dimensions".into(), value: json!(2) };
        let allowed = format!("the header {} in one dimension", tables::FIELD.header);
        let reason = "has a component along y, which needs two dimensions";
        check.complain(&format!("{PLACE}/file"), reason, allowed, fix);
        return None;
    }
    Some(SampledField { components })
}

fn on_the_line(check: &mut Check, pulse: &raw::Pulse, place: &str) {
    if pulse.ellipticity != 0.0 {
        let place = format!("{place}/ellipticity");
        check.complain(&place, "needs two dimensions", "0 in one dimension", Fix::Value(json!(0)));
    }
    if pulse.angle.value() != 0.0 {
        let place = format!("{place}/angle");
        check.complain(&place, "needs two dimensions", "0 deg in one dimension", Fix::Value(json!("0 deg")));
    }
}

fn pulse(check: &mut Check, raw: &raw::Pulse, place: &str) -> Option<Pulse> {
    check.exactly_one(place, ["wavelength", "photon_energy"]);
    check.exactly_one(place, ["intensity", "peak_field"]);
    if matches!(raw.envelope, raw::Envelope::Sin2 { .. }) {
        check.exactly_one(&format!("{place}/envelope"), ["cycles", "duration"]);
    }
    let from_wavelength = raw.wavelength.as_ref().map(|length| angular_frequency(length.value()));
    let frequency = from_wavelength.or(raw.photon_energy.as_ref().map(raw::Energy::value))?;
    let from_intensity = raw.intensity.as_ref().map(|intensity| peak_field(intensity.value()));
    let peak_field = from_intensity.or(raw.peak_field.as_ref().map(raw::ElectricField::value))?;
    let pulse = Pulse {
        frequency,
        peak_field,
        envelope: envelope(check, raw, frequency, place)?,
        phase: raw.phase.value(),
        centre: raw.delay.value(),
        chirp: raw.chirp.value(),
        ellipticity: raw.ellipticity,
        angle: raw.angle.value(),
    };
    frequency_stays_positive(check, &pulse, place);
    Some(pulse)
}

fn envelope(check: &mut Check, raw: &raw::Pulse, frequency: f64, place: &str) -> Option<Envelope> {
    let period = std::f64::consts::TAU / frequency;
    match &raw.envelope {
        raw::Envelope::Sin2 { cycles: Some(cycles), .. } => {
            Some(Envelope::Sin2 { duration: cycles * period })
        }
        raw::Envelope::Sin2 { duration: Some(duration), .. } => {
            at_least_a_cycle(check, duration, period, &format!("{place}/envelope/duration"));
            Some(Envelope::Sin2 { duration: duration.value() })
        }
        raw::Envelope::Sin2 { .. } => None,
        raw::Envelope::Gaussian { fwhm, .. } => Some(Envelope::Gaussian { fwhm: fwhm.value() }),
        raw::Envelope::FlatTop { ramp_cycles, plateau_cycles, .. } => {
            Some(Envelope::FlatTop { ramp: ramp_cycles * period, plateau: plateau_cycles * period })
        }
    }
}

fn at_least_a_cycle(check: &mut Check, duration: &raw::Time, period: f64, place: &str) {
    if duration.value() < period {
        let fs = period / Quantity::Time.units()[0].factor;
        let text = |cycles: f64| format!("{} fs", digits(rounded(cycles * fs, 4)));
        let allowed = format!("at least one cycle, {}", text(1.0));
        check.complain(place, "is shorter than a cycle", allowed, Fix::Value(json!(text(6.0))));
    }
}

/// The instantaneous frequency ω + bτ must not pass through zero within the envelope.
fn frequency_stays_positive(check: &mut Check, pulse: &Pulse, place: &str) {
    let limit = pulse.frequency / pulse.envelope.half_length();
    if pulse.chirp.abs() >= limit {
        let unit = Quantity::Chirp.units()[0];
        let text = |share: f64| {
            let chirp = pulse.chirp.signum() * share * limit / unit.factor;
            format!("{} {}", digits(rounded(chirp, 3)), unit.symbol)
        };
        let reason = "makes the instantaneous frequency negative within the envelope";
        let allowed = format!("a chirp between 0 and {}", text(1.0));
        check.complain(&format!("{place}/chirp"), reason, allowed, Fix::Value(json!(text(0.5))));
    }
}
