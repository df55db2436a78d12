//! The same picture as PNG.

use resvg::{tiny_skia, usvg};
use std::sync::{Arc, OnceLock};

/// Pixels per user unit.
pub const SCALE: f32 = 2.0;

/// Why a picture could not be rasterised.
#[derive(Debug)]
pub enum Error {
    /// The text is no SVG.
    Svg(usvg::Error),
    /// The picture has no area, or more than memory holds.
    Size {
        /// Width in user units.
        width: f32,
        /// Height in user units.
        height: f32,
    },
    /// The pixels could not be encoded.
    Encoding(String),
}

impl std::fmt::Display for Error {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::Svg(reason) => write!(f, "the picture is not valid SVG: {reason}"),
            Self::Size { width, height } => {
                write!(f, "a picture of {width} by {height} units cannot be rasterised")
            }
            Self::Encoding(reason) => write!(f, "the picture could not be encoded as PNG: {reason}"),
        }
    }
}

impl std::error::Error for Error {}

/// Rasterises an SVG with the embedded DejaVu Sans, two pixels per user unit, and encodes it as PNG.
pub fn from_svg(svg: &str) -> Result<Vec<u8>, Error> {
    let options =
        usvg::Options { fontdb: fonts(), font_family: "DejaVu Sans".into(), ..usvg::Options::default() };
    let tree = usvg::Tree::from_str(svg, &options).map_err(Error::Svg)?;
    let (width, height) = (tree.size().width(), tree.size().height());
    let pixels = |length: f32| (length * SCALE).round() as u32;
    let mut canvas =
        tiny_skia::Pixmap::new(pixels(width), pixels(height)).ok_or(Error::Size { width, height })?;
    resvg::render(&tree, tiny_skia::Transform::from_scale(SCALE, SCALE), &mut canvas.as_mut());
    canvas.encode_png().map_err(|reason| Error::Encoding(reason.to_string()))
}

/// The embedded fonts, the same on every machine.
pub fn fonts() -> Arc<usvg::fontdb::Database> {
    static FONTS: OnceLock<Arc<usvg::fontdb::Database>> = OnceLock::new();
    let load = || {
        let mut fonts = usvg::fontdb::Database::new();
        fonts.load_font_data(dejavu::sans::regular().to_vec());
        fonts.load_font_data(dejavu::sans::bold().to_vec());
        Arc::new(fonts)
    };
    FONTS.get_or_init(load).clone()
}
