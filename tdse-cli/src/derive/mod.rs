//! From recorded series to the contents of a result, in the units of its files.
//!
//! [`record()`] puts in what was propagated, [`derive()`] what follows from it. Deriving reads the recorded arrays as a file
//! holds them, so a result derived anew has the same bits as one derived at once.

mod doubts;
mod electrons;
pub mod models;
mod plane;
mod recorded;
mod spectra;

pub use models::models;
pub use recorded::{Finished, record};
pub use spectra::derive;

use ndarray::Array2;
use tdse_core::units::{FIELD_V_PER_M, HARTREE_EV, TIME_FS, VECTOR_POTENTIAL_V_S_PER_M};

use crate::store::Values;

/// One component as a series, two as `[component, time]`.
fn components(vectors: impl ExactSizeIterator<Item = [f64; 2]> + Clone, dimensions: usize) -> Values {
    if dimensions == 1 {
        return vectors.map(|v| v[0]).collect::<Vec<f64>>().into();
    }
    let length = vectors.len();
    let flat = [0, 1].into_iter().flat_map(|d| vectors.clone().map(move |v| v[d])).collect();
    Array2::from_shape_vec((2, length), flat).expect("two rows").into()
}

/// hartree → eV.
fn electronvolts(value: f64) -> f64 {
    value * HARTREE_EV
}

/// a.u. of time → fs.
fn femtoseconds(value: f64) -> f64 {
    value * TIME_FS
}

/// a.u. of field → V/m.
fn volts_per_metre(value: f64) -> f64 {
    value * FIELD_V_PER_M
}

/// a.u. of vector potential → V s/m.
fn volt_seconds_per_metre(value: f64) -> f64 {
    value * VECTOR_POTENTIAL_V_S_PER_M
}
