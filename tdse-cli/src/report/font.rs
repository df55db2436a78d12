//! Widths of texts in DejaVu Sans, the font that pictures are laid out and rasterised with.

use std::sync::OnceLock;
use ttf_parser::Face;

/// Weight of letters.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Weight {
    /// Ordinary text.
    Regular,
    /// Titles.
    Bold,
}

/// Width of a line of text at a font size, in the unit of the size. Letters the font lacks count as one em.
pub fn width(text: &str, size: f64, weight: Weight) -> f64 {
    let face = face(weight);
    let em = f64::from(face.units_per_em());
    let advance = |letter| face.glyph_index(letter).and_then(|glyph| face.glyph_hor_advance(glyph));
    text.chars().map(|letter| advance(letter).map_or(em, f64::from)).sum::<f64>() / em * size
}

/// The text, or its beginning and an ellipsis where it is wider than `room`.
pub fn shorten(text: &str, size: f64, weight: Weight, room: f64) -> String {
    if width(text, size, weight) <= room {
        return text.to_owned();
    }
    let mut kept: Vec<char> = text.chars().collect();
    while !kept.is_empty() {
        kept.pop();
        let shorter = format!("{}…", kept.iter().collect::<String>().trim_end());
        if width(&shorter, size, weight) <= room {
            return shorter;
        }
    }
    "…".into()
}

/// The text in lines no wider than `room`, broken at spaces; what exceeds `most` lines ends in an ellipsis.
pub fn wrap(text: &str, size: f64, weight: Weight, room: f64, most: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in words(text) {
        let longer = lines.last().map(|line| format!("{line} {word}"));
        match longer {
            Some(line) if lines.len() >= most || width(&line, size, weight) <= room => {
                *lines.last_mut().expect("a last line was just read") = line;
            }
            _ => lines.push(word),
        }
    }
    lines.iter().map(|line| shorten(line, size, weight, room)).collect()
}

/// Words, a number kept together with the unit after it.
fn words(text: &str) -> Vec<String> {
    let mut words: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        match words.last_mut() {
            Some(last) if last.parse::<f64>().is_ok() => *last = format!("{last} {word}"),
            _ => words.push(word.to_owned()),
        }
    }
    words
}

fn face(weight: Weight) -> &'static Face<'static> {
    static REGULAR: OnceLock<Face<'static>> = OnceLock::new();
    static BOLD: OnceLock<Face<'static>> = OnceLock::new();
    let parse = |data| Face::parse(data, 0).expect("the embedded font is valid");
    match weight {
        Weight::Regular => REGULAR.get_or_init(|| parse(dejavu::sans::regular())),
        Weight::Bold => BOLD.get_or_init(|| parse(dejavu::sans::bold())),
    }
}
