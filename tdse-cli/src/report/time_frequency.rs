//! When which photon energies are emitted.

use super::map::{Map, Shading, draw_under};
use super::parameter::{Axis, Values};

/// A time–frequency map.
#[derive(Debug, Clone, Copy)]
pub struct TimeFrequencyPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Time in fs.
    pub time: &'a [f64],
    /// Photon energy in eV.
    pub photon_energy: &'a [f64],
    /// Intensity of shape [photon energy, time], time fastest.
    pub intensity: &'a [f64],
    /// Name of the intensity with unit.
    pub quantity: &'a str,
    /// Most decades shown.
    pub decades: f64,
    /// What the map was made with, such as the width of its window.
    pub window: &'a str,
}

/// Draws the map as SVG with logarithmic shades.
pub fn draw(picture: &TimeFrequencyPicture<'_>) -> String {
    draw_under(&map(picture), &[])
}

/// The same under classical returns, fs and eV.
pub fn draw_with_returns(picture: &TimeFrequencyPicture<'_>, returns: &[(f64, f64)]) -> String {
    let mut map = map(picture);
    map.notes.push(
        "Dots: first returns of classical electrons, ionization energy plus energy at the return.".into(),
    );
    draw_under(&map, returns)
}

fn map<'a>(picture: &TimeFrequencyPicture<'a>) -> Map<'a> {
    Map {
        title: picture.title,
        across: Axis { name: "time", unit: "fs", values: Values::Linear(picture.time) },
        up: Axis { name: "photon energy", unit: "eV", values: Values::Linear(picture.photon_energy) },
        values: picture.intensity,
        name: picture.quantity.to_owned(),
        shading: Shading::Decades(picture.decades),
        notes: vec![format!("Window: {}.", picture.window)],
    }
}
