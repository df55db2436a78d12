//! The commands of the program.

pub mod check;
pub mod states;
