//! Files of `tdse run` opened by the Python libraries that users have, in a throw-away environment.
//!
//! Source of truth: h5py, xarray (h5netcdf and netCDF4), nexusformat and pint themselves, at the versions of
//! `tests/python/requirements.txt`. Skipped only where `TDSE_SKIP_PYTHON` is set.

use std::error::Error;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::Mutex;
use std::{env, fs, io};

use sha2::{Digest, Sha256};

/// Every simpler model without a file.
const MODELS: &str = r#"/models={"three_step": {}, "strong_field": {}, "quantum_orbits": {}, "tunnelling": {}, "perturbation": {},
    "recombination": {}}"#;

type Outcome<T> = Result<T, Box<dyn Error>>;

#[test]
fn python_opens_every_file_of_a_run() -> Outcome<()> {
    if skipped()? {
        return Ok(());
    }
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("..");
    let scratch = tempfile::tempdir()?;
    let out = scratch.path().join("out");
    let config = root.join("configs/quickstart.json");
    let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
    run(program.arg("run").arg(config).arg("--out").arg(&out).args(["--set", MODELS]))?;

    let points = point_files(&out.join("points"))?;
    assert!(!points.is_empty(), "the run left no point file");
    let python = python_with(&root.join("tests/python/requirements.txt"))?;
    let script = root.join("tests/python/open_everywhere.py");
    run(Command::new(python).arg(script).arg(out.join("result.h5")).args(points))?;
    Ok(())
}

/// A small scan over two axes (invented), gathered: every group opens, and points are found by the values of the axes.
#[test]
fn xarray_selects_from_a_scan_by_value() -> Outcome<()> {
    if skipped()? {
        return Ok(());
    }
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("..");
    let scratch = tempfile::tempdir()?;
    let out = scratch.path().join("out");
    let scan = r#"/scan=[
        {"parameter": "/field/pulses/0/intensity", "name": "intensity", "values": ["2e13 W/cm^2", "4e13 W/cm^2"]},
        {"parameter": "/field/pulses/0/phase", "name": "cep", "from": "0 deg", "to": "180 deg", "points": 3}
    ]"#;
    let mut program = Command::new(env!("CARGO_BIN_EXE_tdse"));
    program.arg("run").arg(root.join("configs/quickstart.json")).arg("--out").arg(&out);
    let electrons = r#"/outputs/photoelectrons={"max_energy": "20 eV", "energy_step": "0.2 eV"}"#;
    let sets = [scan, "/field/pulses/0/envelope/cycles=2", electrons, MODELS];
    run(program.args(sets.iter().flat_map(|set| ["--set", set])))?;
    let python = python_with(&root.join("tests/python/requirements.txt"))?;
    let result = out.join("result.h5");
    let scripts = root.join("tests/python");
    run(Command::new(&python).arg(scripts.join("select_by_value.py")).arg(&result))?;
    let points = point_files(&out.join("points"))?;
    run(Command::new(&python).arg(scripts.join("open_everywhere.py")).arg(&result).args(points))?;
    Ok(())
}

/// Whether the user asked to leave these tests out, which is said.
fn skipped() -> io::Result<bool> {
    let asked = env::var_os("TDSE_SKIP_PYTHON").is_some();
    if asked {
        // Straight to stderr: what the test harness captures, nobody sees.
        writeln!(io::stderr(), "tests/python.rs: SKIPPED, because TDSE_SKIP_PYTHON is set")?;
    }
    Ok(asked)
}

/// Every `DIR/xx/<id>.h5`.
fn point_files(dir: &Path) -> Outcome<Vec<PathBuf>> {
    let mut files = Vec::new();
    for shelf in fs::read_dir(dir).map_err(|error| format!("{}: {error}", dir.display()))? {
        for file in fs::read_dir(shelf?.path())? {
            files.push(file?.path());
        }
    }
    files.retain(|file| file.extension().is_some_and(|extension| extension == "h5"));
    Ok(files)
}

/// A Python that has the given requirements. Made once for each text of them and each version of Python; a half-made
/// one has no `ready` mark and is made anew.
fn python_with(requirements: &Path) -> Outcome<PathBuf> {
    // Tests run at the same time; one makes the environment, the others wait.
    static MAKING: Mutex<()> = Mutex::new(());
    let _making = MAKING.lock();
    let version = run(Command::new("python3").arg("--version"))?;
    let hash = Sha256::new().chain_update(version).chain_update(fs::read(requirements)?).finalize();
    let home = Path::new(env!("CARGO_TARGET_TMPDIR")).join(format!("python-{:.16}", format!("{hash:x}")));
    let (python, ready) = (home.join("bin/python"), home.join("ready"));
    if !ready.exists() {
        run(Command::new("python3").args(["-m", "venv", "--clear"]).arg(&home))?;
        let install = ["-m", "pip", "install", "--quiet", "--disable-pip-version-check", "--requirement"];
        run(Command::new(&python).args(install).arg(requirements))?;
        fs::write(ready, "")?;
    }
    Ok(python)
}

/// Standard output of a command that must succeed; all its output in the failure.
fn run(command: &mut Command) -> Outcome<Vec<u8>> {
    let output = command.output().map_err(|error| format!("{command:?}: {error}"))?;
    assert!(
        output.status.success(),
        "{command:?}\n{}\n{}{}",
        output.status,
        String::from_utf8_lossy(&output.stdout),
        String::from_utf8_lossy(&output.stderr)
    );
    Ok(output.stdout)
}
