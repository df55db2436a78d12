//! Error bars: a request repeated with finer numerics as an ordinary scan, and what comes out put beside its numbers.
//!
//! [`Plan`] turns a request into that scan, [`attach()`] puts the bars into the result.

mod attach;
mod bars;
mod models;
mod plan;

pub use attach::{Bar, attach, folder, restore};
pub use models::{ModelPlan, Spread, attach_models, models_folder};
pub use plan::{Plan, Repeated};
