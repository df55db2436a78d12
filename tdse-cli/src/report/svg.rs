//! A small writer of SVG 1.1: escaped text, strokes and shapes, no identifiers (so that pictures can share a page).

use super::font::Weight;
use super::palette::INK;
use std::fmt::Write as _;

/// Font families in order of preference; the first is the one the PNG is drawn with, the second has nearly its widths.
const FAMILIES: &str = "DejaVu Sans, Verdana, sans-serif";

/// A point in the picture, in user units from the upper left corner.
pub type Point = (f64, f64);

/// Colour, width and dashes of a line.
#[derive(Debug, Clone, Copy)]
pub struct Stroke {
    /// Colour as `#rrggbb`.
    pub colour: &'static str,
    /// Width in user units.
    pub width: f64,
    /// Dash lengths as SVG writes them; empty for a solid line.
    pub dash: &'static str,
}

impl Stroke {
    /// A solid line.
    pub const fn solid(colour: &'static str, width: f64) -> Self {
        Self { colour, width, dash: "" }
    }
}

/// Which part of a text stands at its point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    /// The text begins there.
    Start,
    /// The text is centred there.
    Middle,
    /// The text ends there.
    End,
}

/// How a text is set.
#[derive(Debug, Clone, Copy)]
pub struct Lettering {
    /// Size in user units.
    pub size: f64,
    /// Weight of the letters.
    pub weight: Weight,
    /// Which part of the text stands at its point.
    pub anchor: Anchor,
    /// Colour as `#rrggbb`.
    pub colour: &'static str,
}

impl Lettering {
    /// Regular letters in ink.
    pub const fn new(size: f64, anchor: Anchor) -> Self {
        Self { size, weight: Weight::Regular, anchor, colour: INK }
    }
}

/// An SVG document being written.
#[derive(Debug, Default)]
pub struct Svg {
    body: String,
}

impl Svg {
    /// Opens a group with a class; close it with [`Svg::close`].
    pub fn open(&mut self, class: &str) {
        let _ = writeln!(self.body, r#"<g class="{}">"#, escape(class));
    }

    /// Closes the group opened last.
    pub fn close(&mut self) {
        self.body.push_str("</g>\n");
    }

    /// A straight line.
    pub fn line(&mut self, from: Point, to: Point, stroke: Stroke) {
        self.trace(&[from, to], stroke);
    }

    /// A line through the points.
    pub fn trace(&mut self, points: &[Point], stroke: Stroke) {
        let mut data = String::with_capacity(points.len() * 13);
        for (x, y) in points {
            let _ = write!(data, "{} {} ", short(*x), short(*y));
        }
        let _ = write!(
            self.body,
            r#"<polyline fill="none" stroke="{}" stroke-width="{}" stroke-linejoin="round""#,
            stroke.colour, stroke.width
        );
        if !stroke.dash.is_empty() {
            let _ = write!(self.body, r#" stroke-dasharray="{}""#, stroke.dash);
        }
        let _ = writeln!(self.body, r#" points="{}"/>"#, data.trim_end());
    }

    /// A closed shape given by path data, filled, with a thin white edge where it lies on a line.
    pub fn shape(&mut self, data: &str, fill: &str) {
        let _ =
            writeln!(self.body, r##"<path fill="{fill}" stroke="#ffffff" stroke-width="0.6" d="{data}"/>"##);
    }

    /// A filled patch without an edge.
    pub fn patch(&mut self, outline: &[Point], fill: &str) {
        let data: Vec<String> = outline.iter().map(|(x, y)| format!("{} {}", short(*x), short(*y))).collect();
        let _ = writeln!(self.body, r#"<path fill="{fill}" d="M{}Z"/>"#, data.join("L"));
    }

    /// Cells of one colour, given by path data in cell units inside [`Svg::open_cells`].
    pub fn cells(&mut self, data: &str, fill: &str) {
        let _ = writeln!(self.body, r#"<path fill="{fill}" d="{data}"/>"#);
    }

    /// Opens a group of cells drawn without anti-aliasing, so that neighbours show no seam.
    pub fn open_cells(&mut self, class: &str) {
        let _ = writeln!(self.body, r#"<g class="{}" shape-rendering="crispEdges">"#, escape(class));
    }

    /// A filled rectangle between two opposite corners.
    pub fn rectangle(&mut self, corner: Point, opposite: Point, fill: &str) {
        let (x, width) = (corner.0.min(opposite.0), (opposite.0 - corner.0).abs());
        let (y, height) = (corner.1.min(opposite.1), (opposite.1 - corner.1).abs());
        let _ = writeln!(
            self.body,
            r#"<rect x="{}" y="{}" width="{}" height="{}" fill="{fill}"/>"#,
            short(x),
            short(y),
            short(width),
            short(height)
        );
    }

    /// A line of text, escaped.
    pub fn text(&mut self, at: Point, text: &str, lettering: Lettering) {
        let anchor = match lettering.anchor {
            Anchor::Start => "start",
            Anchor::Middle => "middle",
            Anchor::End => "end",
        };
        let weight = match lettering.weight {
            Weight::Regular => "",
            Weight::Bold => r#" font-weight="bold""#,
        };
        let _ = writeln!(
            self.body,
            r#"<text x="{}" y="{}" font-size="{}" text-anchor="{anchor}" fill="{}"{weight}>{}</text>"#,
            short(at.0),
            short(at.1),
            lettering.size,
            lettering.colour,
            escape(text)
        );
    }

    /// The finished document on white, `width` by `height` user units; the title serves readers that cannot see it.
    pub fn finish(self, width: f64, height: f64, title: &str) -> String {
        let (width, height) = (width.ceil(), height.ceil());
        let title = escape(title);
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{width}\" height=\"{height}\" \
             viewBox=\"0 0 {width} {height}\" font-family=\"{FAMILIES}\" role=\"img\">\n<title>{title}</title>\n\
             <rect width=\"{width}\" height=\"{height}\" fill=\"#ffffff\"/>\n{}</svg>\n",
            self.body
        )
    }
}

/// Text made safe inside XML elements and attributes; characters that XML 1.0 forbids are shown as `U+FFFD`.
pub fn escape(text: &str) -> String {
    let mut safe = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            '&' => safe.push_str("&amp;"),
            '<' => safe.push_str("&lt;"),
            '>' => safe.push_str("&gt;"),
            '"' => safe.push_str("&quot;"),
            '\'' => safe.push_str("&#39;"),
            '\t' | '\n' | '\r' => safe.push(' '),
            '\0'..'\u{20}' | '\u{fffe}' | '\u{ffff}' => safe.push('\u{fffd}'),
            _ => safe.push(letter),
        }
    }
    safe
}

/// A coordinate to a hundredth of a user unit, without trailing zeros.
fn short(value: f64) -> String {
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".into() } else { text.into() }
}
