//! The sheet a picture is written on from the top: title, rows, notes.

use super::axes::TEXT;
use super::font::{Weight, shorten, wrap};
use super::palette::SOFT;
use super::svg::{Anchor, Lettering, Svg};

/// Width of every picture in user units; as wide as a journal's column (8.5 cm) a unit prints at half a point.
pub const WIDTH: f64 = 480.0;
/// Margin around.
pub const EDGE: f64 = 12.0;

const TITLE: f64 = 15.0;
const NOTE: f64 = 12.0;

/// A picture being written downwards.
#[derive(Debug)]
pub struct Sheet {
    /// What is drawn so far.
    pub svg: Svg,
    /// Where the next row begins.
    pub y: f64,
    title: String,
}

impl Sheet {
    /// A sheet with its title, on at most three lines.
    pub fn new(title: &str) -> Self {
        let mut sheet = Self { svg: Svg::default(), y: EDGE - 4.0, title: title.to_owned() };
        for line in wrap(title, TITLE, Weight::Bold, WIDTH - 2.0 * EDGE, 3) {
            sheet.y += 19.0;
            let lettering = Lettering { weight: Weight::Bold, ..Lettering::new(TITLE, Anchor::Start) };
            sheet.svg.text((EDGE, sheet.y), &line, lettering);
        }
        sheet.y += 5.0;
        sheet
    }

    /// A row with the name of a vertical axis at the left and of an upper axis at the right.
    pub fn names(&mut self, left: &str, right: &str, end: f64) {
        self.y += 18.0;
        let room = WIDTH - 2.0 * EDGE;
        let right = shorten(right, TEXT, Weight::Regular, room / 2.0);
        let left =
            shorten(left, TEXT, Weight::Regular, if right.is_empty() { room } else { room / 2.0 - 12.0 });
        self.svg.text((EDGE, self.y), &left, Lettering::new(TEXT, Anchor::Start));
        self.svg.text((end, self.y), &right, Lettering::new(TEXT, Anchor::End));
    }

    /// A row with the name of the lower axis at its end.
    pub fn lower_name(&mut self, name: &str, end: f64) {
        self.y += 17.0;
        let name = shorten(name, TEXT, Weight::Regular, end - EDGE);
        self.svg.text((end, self.y), &name, Lettering::new(TEXT, Anchor::End));
    }

    /// Footnotes, each on as many lines as it needs up to four.
    pub fn notes(&mut self, notes: &[String]) {
        self.y += 4.0;
        for note in notes {
            for line in wrap(note, NOTE, Weight::Regular, WIDTH - 2.0 * EDGE, 4) {
                self.y += 15.5;
                let lettering = Lettering { colour: SOFT, ..Lettering::new(NOTE, Anchor::Start) };
                self.svg.text((EDGE, self.y), &line, lettering);
            }
        }
    }

    /// The finished SVG.
    pub fn finish(self) -> String {
        self.svg.finish(WIDTH, self.y + EDGE, &self.title)
    }
}
