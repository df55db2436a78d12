//! The program `tdse`.

fn main() {}
