//! The program from outside: what it computes, keeps, refuses, and says.
//!
//! All configurations are invented for these tests, on small grids; what they must show is bit-equality between two
//! ways of asking for the same thing, counted from the folders' logs.

mod checkpoints;
mod continuing;
mod disk;
mod faults;
mod fixture;
mod kills;
mod refining;
mod same_bits;
mod signals;
mod talk;
