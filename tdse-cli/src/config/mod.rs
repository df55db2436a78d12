//! From the text of a configuration to a checked [`Request`], and back to text that leaves nothing open.
//!
//! Text → [`syntax`] → [`overrides`] → [`structure`] (against [`mod@schema`]) → [`raw`] → [`validate`] → [`mod@request`];
//! once numerics are chosen, [`mod@resolved`] → [`mod@identity`].

pub mod allowed;
pub mod complaint;
pub mod files;
pub mod identity;
pub mod library;
pub mod models;
pub mod overrides;
pub mod pint;
pub mod pointer;
pub mod quantity;
pub mod raw;
pub mod repair;
pub mod request;
pub mod resolved;
pub mod schema;
pub mod stored;
pub mod structure;
pub mod syntax;
pub mod tables;
pub mod validate;

use serde_json::{Value, json};

pub use complaint::{Complaint, Complaints, Fix};
pub use files::Files;
pub use library::Library;
pub use request::Request;

/// Reads the configuration of one point; `files` is its folder, or what a result keeps.
///
/// # Errors
/// Every fault found, in file order.
pub fn read(text: &str, sets: &[String], files: impl Into<Files>) -> Result<Request, Complaints> {
    let tree = parse(text, sets)?;
    let request = request(&tree, &Library::new(files.into()))?;
    match &request.written.scan {
        Some(axes) if !axes.is_empty() => {
            let complaint = Complaint::new("/scan", tree.get("scan"), "is a scan where one point is wanted");
            Err(complaint.allowed("no axis").fix(Fix::Value(json!([]))).into())
        }
        _ => Ok(request),
    }
}

/// The tree of a configuration with the overrides applied, not judged yet.
///
/// # Errors
/// Text that is no JSON, and overrides that lead nowhere.
pub fn parse(text: &str, sets: &[String]) -> Result<Value, Complaints> {
    let mut tree = syntax::parse(text)?;
    overrides::apply(&mut tree, sets)?;
    Ok(tree)
}

/// Judges the tree of one point.
///
/// # Errors
/// Every fault found, in file order.
pub fn request(tree: &Value, library: &Library) -> Result<Request, Complaints> {
    structure::check(tree)?;
    let written = serde_json::from_value(tree.clone()).map_err(|error| {
        Complaint::new("", None, error.to_string())
            .allowed("what the schema says")
            .fix(Fix::Words(String::new()))
    })?;
    validate::validate(written, tree, library)
}
