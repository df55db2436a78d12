//! Where electrons go: the density over two momenta, and the curve that the vector potential draws over it.

use super::map::{Map, Over, Shading, draw_square};
use super::parameter::{Axis, Values};

/// Most decades shown.
const DECADES: f64 = 4.0;

/// A momentum map.
#[derive(Debug, Clone, Copy)]
pub struct MomentumMapPicture<'a> {
    /// Title from the user.
    pub title: &'a str,
    /// Momenta along x in ħ/bohr.
    pub momentum_x: &'a [f64],
    /// Momenta along y in ħ/bohr.
    pub momentum_y: &'a [f64],
    /// Density of shape [y, x], x fastest.
    pub density: &'a [f64],
    /// −A(t) along x and y, ħ/bohr; empty where it is not known.
    pub potential: [&'a [f64]; 2],
}

/// Draws the map as SVG with logarithmic shades, the same scale both ways.
pub fn draw(picture: &MomentumMapPicture<'_>) -> String {
    let [x, y] = picture.potential;
    let over = (!x.is_empty()).then_some(Over { x, y });
    let note = "Line: −A(t), the momentum of an electron that is set free at rest at time t.";
    draw_square(
        &Map {
            title: picture.title,
            across: Axis {
                name: "momentum along x",
                unit: "ħ/bohr",
                values: Values::Linear(picture.momentum_x),
            },
            up: Axis { name: "along y", unit: "ħ/bohr", values: Values::Linear(picture.momentum_y) },
            values: picture.density,
            name: "density (bohr²/ħ²)".into(),
            shading: Shading::Decades(DECADES),
            notes: over.iter().map(|_| note.to_owned()).collect(),
        },
        over,
    )
}
