//! The batch runner: everything that touches the outside world (JSON, HDF5, terminal, pictures, signals, time).
//!
//! The physics lives in [`tdse_core`]; this crate turns one configuration file into checked, self-describing results.

pub mod command;
pub mod config;
pub mod derive;
pub mod progress;
pub mod refine;
pub mod report;
pub mod scan;
pub mod store;
pub mod text;
