//! The colours of all pictures, chosen by us: dark on white, told apart without colour by dashes, markers and labels.
//!
//! Every curve colour has a contrast of at least 4.5 to 1 against white (WCAG 2.2, criterion 1.4.3) and keeps its
//! distance from the others in the dichromatic simulations of Viénot, Brettel and Mollon (Color Res. Appl. 24, 243
//! (1999)); the tests measure both. The map of [`shade`] runs from paper through sky blue and violet to dark wine in
//! equal steps of the OKLab space (B. Ottosson, "A perceptual color space for image processing" (2020)), its lightness
//! falling throughout, so that it also survives a monochrome print.

use std::sync::OnceLock;

/// Text, axes and marks.
pub const INK: &str = "#1b2330";
/// The rim of a line over a map.
pub const PAPER: &str = "#ffffff";
/// Secondary text.
pub const SOFT: &str = "#566070";
/// Error bands under a curve.
pub const BAND: &str = "#f0c48e";
/// Grid lines.
pub const HAIR: &str = "#dfe3ea";

/// Cells of verdicts: within the full result's error, within the tolerance, different.
pub const VERDICTS: [&str; 3] = ["#1b818c", "#a9d8d3", "#f0c48e"];

/// The marker that stands on points of a curve.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Marker {
    /// A disc.
    Disc,
    /// A square.
    Square,
    /// A triangle standing on its base.
    Triangle,
    /// A square on its corner.
    Diamond,
    /// A triangle standing on its tip.
    Wedge,
    /// An upright bar.
    Bar,
}

/// What tells one curve from another.
#[derive(Debug, Clone, Copy)]
pub struct Style {
    /// Colour as `#rrggbb`.
    pub colour: &'static str,
    /// Dash lengths as SVG writes them; empty for a solid line.
    pub dash: &'static str,
    /// Marker on single points.
    pub marker: Marker,
}

/// The styles in the order curves take them.
pub const STYLES: [Style; 6] = [
    Style { colour: "#14246e", dash: "", marker: Marker::Disc },
    Style { colour: "#b45500", dash: "7 2.5", marker: Marker::Square },
    Style { colour: "#1b818c", dash: "2 2", marker: Marker::Triangle },
    Style { colour: "#8659e8", dash: "9 2.5 2 2.5", marker: Marker::Diamond },
    Style { colour: "#560a14", dash: "4 2", marker: Marker::Wedge },
    Style { colour: "#b01c62", dash: "12 2 2 2 2 2", marker: Marker::Bar },
];

/// The style of the curve with this number; they repeat after the sixth.
pub fn style(number: usize) -> Style {
    STYLES[number % STYLES.len()]
}

/// Outline of a marker around a point, as SVG path data.
pub fn outline(marker: Marker, (x, y): (f64, f64)) -> String {
    let around = |corners: &[(f64, f64)]| {
        let points: Vec<String> =
            corners.iter().map(|(dx, dy)| format!("{:.2} {:.2}", x + dx, y + dy)).collect();
        format!("M{}Z", points.join("L"))
    };
    match marker {
        Marker::Disc => format!("M{:.2} {y:.2}a3.2 3.2 0 1 0 6.4 0a3.2 3.2 0 1 0 -6.4 0Z", x - 3.2),
        Marker::Square => around(&[(-3.0, -3.0), (3.0, -3.0), (3.0, 3.0), (-3.0, 3.0)]),
        Marker::Triangle => around(&[(-3.9, 3.0), (3.9, 3.0), (0.0, -3.9)]),
        Marker::Diamond => around(&[(-3.9, 0.0), (0.0, -3.9), (3.9, 0.0), (0.0, 3.9)]),
        Marker::Wedge => around(&[(-3.9, -3.0), (3.9, -3.0), (0.0, 3.9)]),
        Marker::Bar => around(&[(-1.6, -4.4), (1.6, -4.4), (1.6, 4.4), (-1.6, 4.4)]),
    }
}

/// Steps of the colour map.
pub const SHADES: usize = 64;

/// Colour of step 0 (paper, the smallest) to `SHADES - 1` (dark wine, the largest) as `#rrggbb`.
pub fn shade(step: usize) -> &'static str {
    static MAP: OnceLock<Vec<String>> = OnceLock::new();
    &MAP.get_or_init(colour_map)[step.min(SHADES - 1)]
}

/// The path through OKLab cut into equal lengths.
fn colour_map() -> Vec<String> {
    const FINE: usize = 4096;
    let path: Vec<[f64; 3]> = (0..=FINE).map(|i| station(i as f64 / FINE as f64)).collect();
    let mut length = vec![0.0];
    for pair in path.windows(2) {
        let step = (0..3).map(|c| (pair[1][c] - pair[0][c]).powi(2)).sum::<f64>().sqrt();
        length.push(length[length.len() - 1] + step);
    }
    let whole = length[FINE];
    (0..SHADES)
        .map(|step| {
            let wanted = whole * step as f64 / (SHADES - 1) as f64;
            hexadecimal(path[length.partition_point(|&l| l < wanted).min(FINE)])
        })
        .collect()
}

/// A point of the path, `t` from 0 to 1, as OKLab (L, a, b): lightness falls evenly, hue turns from sea green over
/// blue and violet to red, chroma is largest in the middle.
fn station(t: f64) -> [f64; 3] {
    let hue = (180.0 + 210.0 * t).to_radians();
    let chroma = 0.125 * (std::f64::consts::PI * t).sin().max(0.0).powf(0.8) + 0.05 * t;
    [0.985 - 0.765 * t, chroma * hue.cos(), chroma * hue.sin()]
}

/// OKLab to sRGB (Ottosson 2020; transfer curve of IEC 61966-2-1), clipped to the gamut.
fn hexadecimal([lightness, a, b]: [f64; 3]) -> String {
    let l = (lightness + 0.396_337_777_4 * a + 0.215_803_757_3 * b).powi(3);
    let m = (lightness - 0.105_561_345_8 * a - 0.063_854_172_8 * b).powi(3);
    let s = (lightness - 0.089_484_177_5 * a - 1.291_485_548_0 * b).powi(3);
    let linear = [
        4.076_741_662_1 * l - 3.307_711_591_3 * m + 0.230_969_929_2 * s,
        -1.268_438_004_6 * l + 2.609_757_401_1 * m - 0.341_319_396_5 * s,
        -0.004_196_086_3 * l - 0.703_418_614_7 * m + 1.707_614_701_0 * s,
    ];
    let byte = |c: f64| {
        let c = c.clamp(0.0, 1.0);
        let encoded = if c <= 0.003_130_8 { 12.92 * c } else { 1.055 * c.powf(1.0 / 2.4) - 0.055 };
        (255.0 * encoded).round() as u8
    };
    format!("#{:02x}{:02x}{:02x}", byte(linear[0]), byte(linear[1]), byte(linear[2]))
}
