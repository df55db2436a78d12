//! Options of the commands.

use std::num::NonZeroUsize;
use std::path::PathBuf;
use std::time::Duration;

use clap::Args;
use tdse_core::units::{HARTREE_EV, Quantity};

use super::exit::Trouble;
use crate::config::quantity;
use crate::scan::prepare::{Prepared, prepare};
use crate::scan::run::Shard;
use crate::scan::source::source;

/// A configuration with changes.
#[derive(Debug, Args)]
pub struct Asked {
    /// Configuration in JSON, or the .h5 file of a result, which runs again
    #[arg(value_name = "CONFIG")]
    pub config: PathBuf,
    /// Change one place of the configuration (repeatable), as in --set '/field/pulses/0/phase=90 deg'
    #[arg(long = "set", value_name = "POINTER=VALUE")]
    pub sets: Vec<String>,
}

impl Asked {
    /// Reads and judges it, every point of it.
    ///
    /// # Errors
    /// Refused with one line per complaint.
    pub fn prepare(&self) -> Result<Prepared, Trouble> {
        let source = source(&self.config).map_err(Trouble::refused)?;
        prepare(&source, &self.sets).map_err(Trouble::refused)
    }
}

/// What to print of an atom.
#[derive(Debug, Args)]
pub struct StatesOptions {
    /// Of what configuration.
    #[command(flatten)]
    pub asked: Asked,
    /// Print the continuum up to this energy instead, as comma-separated values: transmission, reflection, phases, delay,
    /// and dipole matrix elements with the initial state; as in --continuum "40 eV"
    #[arg(long, value_name = "MAX_ENERGY", value_parser = energy, allow_hyphen_values = true)]
    pub continuum: Option<f64>,
}

/// An energy above zero, hartree.
fn energy(text: &str) -> Result<f64, String> {
    let parsed = quantity::parse(Quantity::Energy, text).map(|parsed| parsed.value()).ok();
    let allowed =
        "allowed: an energy above 0 eV, up to 100 keV, as a number, a space and a unit; try \"40 eV\"";
    parsed.filter(|energy| *energy > 0.0 && *energy <= 1e5 / HARTREE_EV).ok_or_else(|| allowed.into())
}

/// A folder of results.
#[derive(Debug, Args)]
pub struct Place {
    /// Folder that `tdse run` filled
    #[arg(value_name = "DIR")]
    pub dir: PathBuf,
}

/// What `run` takes.
#[derive(Debug, Args)]
pub struct RunOptions {
    /// What to compute.
    #[command(flatten)]
    pub asked: Asked,
    /// Folder for the results; made where it is absent, continued where it holds the same request
    #[arg(long, value_name = "DIR")]
    pub out: PathBuf,
    /// How to go about it.
    #[command(flatten)]
    pub effort: Effort,
}

/// How a request is carried out.
#[derive(Debug, Args)]
pub struct Effort {
    /// Points computed at once [default: the cores of the batch job, else of the machine]
    #[arg(long, value_name = "N", value_parser = jobs)]
    pub jobs: Option<NonZeroUsize>,
    /// Take only every N-th point, beginning with the K-th
    #[arg(long, value_name = "K/N", value_parser = shard)]
    pub shard: Option<Shard>,
    /// Stop before this much time has passed, with checkpoints, as in --within "2 h" (units: s, min, h, d)
    #[arg(long, value_name = "TIME", value_parser = time, allow_hyphen_values = true)]
    pub within: Option<Duration>,
    /// Compute failed points again
    #[arg(long)]
    pub retry: bool,
    /// Say nothing but errors
    #[arg(long)]
    pub quiet: bool,
}

/// What `refine` takes.
#[derive(Debug, Args)]
pub struct RefineOptions {
    /// What to compute, and how.
    #[command(flatten)]
    pub run: RunOptions,
    /// Repeat with other model atoms of the same ionization energy instead, and give the spread
    #[arg(long)]
    pub model_atoms: bool,
}

fn jobs(text: &str) -> Result<NonZeroUsize, String> {
    text.parse().map_err(|_| "allowed: a whole number, at least 1".into())
}

fn shard(text: &str) -> Result<Shard, String> {
    let parts = text.split_once('/').and_then(|(k, n)| Some((k.parse().ok()?, n.parse().ok()?)));
    parts.and_then(|(k, n)| Shard::new(k, n)).ok_or_else(|| "allowed: K/N with 1 <= K <= N".into())
}

/// A number, a space and a unit of time.
fn time(text: &str) -> Result<Duration, String> {
    let parsed = text.trim().split_once(' ').and_then(|(number, unit)| {
        let seconds = match unit.trim_start() {
            "s" => 1.0,
            "min" => 60.0,
            "h" => 3600.0,
            "d" => 86_400.0,
            _ => return None,
        };
        Some(quantity::number(number)? * seconds)
    });
    let duration = parsed.filter(|seconds| *seconds > 0.0).map(Duration::try_from_secs_f64);
    duration
        .and_then(Result::ok)
        .ok_or_else(|| "allowed: a positive number, a space, and s, min, h or d; try \"2 h\"".into())
}
