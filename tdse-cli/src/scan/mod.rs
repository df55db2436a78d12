//! Scans: their points, what each needs before it can run, and the atoms that points share.

pub mod asked;
pub mod atoms;
pub mod axis;
pub mod branches;
pub mod cost;
pub mod defaults;
pub mod electrons;
pub mod facts;
pub mod gathering;
pub mod ledger;
pub mod levels;
pub mod limits;
pub mod objections;
pub mod points;
pub mod prepare;
pub mod run;
pub mod source;
