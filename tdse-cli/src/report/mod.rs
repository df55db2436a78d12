//! Pictures (SVG, and PNG of the same drawing) and the self-contained page. Draws only, computes no physics.
//!
//! Every picture is a pure function of plain data in file units: [`harmonics`], [`electrons`], [`field`], [`lissajous`],
//! [`momentum_map`], [`time_frequency`], [`populations`], [`models`], [`verdict`] and [`scan`], built on the line picture
//! [`figure`] and the shaded picture [`map`]. Lines, letters
//! and axes are drawn by a small module of our own ([`svg`], [`axes`]): it measures letters in the very font the PNG
//! uses, so that nothing overlaps, sets true superscripts, and lets a second axis count multiples of the first.
//!
//! Titles and names come from the user and are escaped where they are written. Values that are not finite are gaps,
//! zeros on a logarithmic axis fall off its lower end, and a picture without data says so.

pub mod axes;
pub mod electrons;
mod ends;
pub mod field;
pub mod figure;
pub mod font;
pub mod gallery;
pub mod harmonics;
pub mod lissajous;
pub mod map;
pub mod models;
pub mod momentum_map;
pub mod number;
pub mod page;
pub mod palette;
mod panel;
pub mod parameter;
pub mod png;
pub mod populations;
pub mod scale;
pub mod scan;
mod sheet;
pub mod svg;
pub mod ticks;
pub mod time_frequency;
mod trace;
pub mod verdict;
