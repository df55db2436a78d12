//! Scans: many points from one configuration.

mod axis;
pub mod points;
