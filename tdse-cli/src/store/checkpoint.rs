//! A run stopped between two steps, on disk: exact bits, for whatever wrote them to go on from.
//!
//! ```text
//! tdse checkpoint
//! {"layout_version":1,"identity":"…","executable":"…","instruction_set":"…","arrays":[["step",1],["psi",2048],…]}
//! the arrays in turn, 8 bytes a number, the lowest byte first
//! SHA-256 (FIPS 180-4) of all bytes before it
//! ```
//!
//! It is no HDF5 file: it belongs to one executable, and workers write theirs at once, which HDF5 cannot.

use std::fs;
use std::path::Path;

use num_complex::Complex;
use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};
use tdse_core::outgoing::Outgoing;
use tdse_core::simulate::{Series, State};

use super::atomic;
use super::error::Error;

const MAGIC: &[u8] = b"tdse checkpoint\n";
const LAYOUT_VERSION: i64 = 1;
const CHECKSUM: usize = 32;
const NUMBER: usize = size_of::<u64>();

/// What must be the same for a run to go on to the same bits.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Origin {
    /// Identity of the point.
    pub identity: String,
    /// Hash of the executable.
    pub executable: String,
    /// Instruction set in use.
    pub instruction_set: String,
}

#[derive(Serialize, Deserialize)]
struct Header {
    layout_version: i64,
    #[serde(flatten)]
    origin: Origin,
    /// Name and length of every array.
    arrays: Vec<(String, usize)>,
}

/// Writes a state to `path`, whole or not at all; the folder is made.
///
/// # Errors
/// Whatever the disk refuses.
pub fn write(path: &Path, origin: &Origin, state: &State) -> Result<(), Error> {
    atomic::make_parent(path)?;
    atomic::write(path, &bytes(origin, state))
}

/// Reads the state at `path`, if it is one to go on from.
///
/// # Errors
/// Anything but a whole checkpoint of the same origin.
pub fn read(path: &Path, origin: &Origin) -> Result<State, Error> {
    let bytes = fs::read(path).map_err(Error::io("read", path))?;
    let damaged = |reason: &str| Error::Damaged { path: path.into(), reason: reason.into() };
    let Some(rest) = bytes.strip_prefix(MAGIC) else {
        return Err(if MAGIC.starts_with(&bytes) {
            damaged(&format!("it ends after {} bytes", bytes.len()))
        } else {
            Error::Foreign { path: path.into(), reason: "it is no checkpoint" }
        });
    };
    let end =
        rest.iter().position(|byte| *byte == b'\n').ok_or_else(|| damaged("its header does not end"))?;
    check_layout(path, &rest[..end])?;
    let (content, checksum) =
        bytes.split_last_chunk::<CHECKSUM>().ok_or_else(|| damaged("it has no checksum"))?;
    if Sha256::digest(content)[..] != checksum[..] {
        return Err(damaged("its checksum does not fit: it was cut short or overwritten"));
    }
    let header: Header = serde_json::from_slice(&rest[..end]).map_err(|error| damaged(&error.to_string()))?;
    check_origin(path, &header.origin, origin)?;
    let numbers = content.get(MAGIC.len() + end + 1..).unwrap_or_default();
    Arrays::parted(&header.arrays, numbers).and_then(|mut arrays| arrays.state()).map_err(|e| damaged(&e))
}

/// A later version may have changed anything but the first two lines.
fn check_layout(path: &Path, header: &[u8]) -> Result<(), Error> {
    #[derive(Deserialize)]
    struct Version {
        layout_version: i64,
    }
    match serde_json::from_slice(header) {
        Ok(Version { layout_version: found }) if found > LAYOUT_VERSION => {
            Err(Error::NewerLayout { path: path.into(), found, known: LAYOUT_VERSION })
        }
        Ok(_) => Ok(()),
        Err(error) => Err(Error::Damaged { path: path.into(), reason: format!("its header: {error}") }),
    }
}

fn check_origin(path: &Path, found: &Origin, here: &Origin) -> Result<(), Error> {
    for (what, found, here) in [
        ("point", &found.identity, &here.identity),
        ("executable", &found.executable, &here.executable),
        ("instruction set", &found.instruction_set, &here.instruction_set),
    ] {
        if found != here {
            let (found, here) = (found.clone(), here.clone());
            return Err(Error::OtherOrigin { path: path.into(), what, found, here });
        }
    }
    Ok(())
}

fn bytes(origin: &Origin, state: &State) -> Vec<u8> {
    let arrays = arrays(state);
    let header = Header {
        layout_version: LAYOUT_VERSION,
        origin: origin.clone(),
        arrays: arrays.iter().map(|(name, numbers)| ((*name).into(), numbers.len())).collect(),
    };
    let mut bytes = MAGIC.to_vec();
    // A header of texts and numbers always has a JSON text.
    bytes.extend(serde_json::to_vec(&header).unwrap_or_default());
    bytes.push(b'\n');
    bytes.reserve(arrays.iter().map(|(_, numbers)| numbers.len() * NUMBER).sum::<usize>() + CHECKSUM);
    for (_, numbers) in &arrays {
        bytes.extend(numbers.iter().flat_map(|number| number.to_le_bytes()));
    }
    let checksum = Sha256::digest(&bytes);
    bytes.extend(checksum);
    bytes
}

/// Everything that a state holds. The patterns name every field, so that a forgotten one does not compile.
fn arrays(state: &State) -> [(&'static str, Vec<u64>); 14] {
    let State { psi, step, series, outgoing } = state;
    let Series {
        gradient,
        norm,
        edge,
        top,
        population_steps,
        initial_population,
        populations,
        local_error,
        free_energy,
    } = series;
    let none = Outgoing::default();
    let Outgoing { left, right, map } = outgoing.as_ref().unwrap_or(&none);
    let complex =
        |numbers: &[Complex<f64>]| numbers.iter().flat_map(|p| [p.re.to_bits(), p.im.to_bits()]).collect();
    let bits = |numbers: &[f64]| numbers.iter().map(|number| number.to_bits()).collect();
    [
        ("step", vec![*step as u64]),
        ("psi", complex(psi)),
        ("gradient", bits(gradient.as_flattened())),
        ("norm", bits(norm)),
        ("edge", bits(edge)),
        ("top", bits(top)),
        ("population_steps", population_steps.iter().map(|step| *step as u64).collect()),
        ("initial_population", bits(initial_population)),
        ("populations", bits(populations)),
        ("local_error", bits(local_error)),
        ("free_energy", bits(free_energy)),
        // Empty where nothing outgoing is collected.
        ("outgoing_left", complex(left)),
        ("outgoing_right", complex(right)),
        ("outgoing_map", complex(map)),
    ]
}

/// Arrays that were read, in the order of [`arrays()`].
struct Arrays(std::vec::IntoIter<(String, Vec<u64>)>);

impl Arrays {
    fn parted(lengths: &[(String, usize)], mut bytes: &[u8]) -> Result<Self, String> {
        let mut arrays = Vec::new();
        for (name, length) in lengths {
            let length = length.checked_mul(NUMBER).filter(|length| *length <= bytes.len());
            let (numbers, rest) = bytes.split_at(length.ok_or_else(|| format!("{name} is cut short"))?);
            let (numbers, _) = numbers.as_chunks::<NUMBER>();
            arrays.push((name.clone(), numbers.iter().map(|number| u64::from_le_bytes(*number)).collect()));
            bytes = rest;
        }
        Ok(Self(arrays.into_iter()))
    }

    fn take(&mut self, wanted: &str) -> Result<Vec<u64>, String> {
        match self.0.next() {
            Some((name, numbers)) if name == wanted => Ok(numbers),
            _ => Err(format!("it has no {wanted}")),
        }
    }

    fn reals(&mut self, wanted: &str) -> Result<Vec<f64>, String> {
        Ok(self.take(wanted)?.into_iter().map(f64::from_bits).collect())
    }

    fn pairs(&mut self, wanted: &str) -> Result<Vec<[f64; 2]>, String> {
        Ok(self.reals(wanted)?.as_chunks().0.to_vec())
    }

    fn state(&mut self) -> Result<State, String> {
        let step = self.take("step")?.first().copied().unwrap_or_default() as usize;
        let psi = self.complex("psi")?;
        let series = Series {
            gradient: self.pairs("gradient")?,
            norm: self.reals("norm")?,
            edge: self.reals("edge")?,
            top: self.reals("top")?,
            population_steps: self.take("population_steps")?.into_iter().map(|step| step as usize).collect(),
            initial_population: self.reals("initial_population")?,
            populations: self.reals("populations")?,
            local_error: self.reals("local_error")?,
            free_energy: self.reals("free_energy")?,
        };
        let (left, right) = (self.complex("outgoing_left")?, self.complex("outgoing_right")?);
        let map = self.complex("outgoing_map")?;
        let none = left.is_empty() && map.is_empty();
        let outgoing = if none { None } else { Some(Outgoing { left, right, map }) };
        Ok(State { psi, step, series, outgoing })
    }

    fn complex(&mut self, wanted: &str) -> Result<Vec<Complex<f64>>, String> {
        Ok(self.pairs(wanted)?.into_iter().map(|[re, im]| Complex::new(re, im)).collect())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn origin() -> Origin {
        Origin { identity: "ab12".into(), executable: "0f".into(), instruction_set: "any".into() }
    }

    /// Numbers whose bits are easily lost: both zeros, a subnormal, one with a payload that is no number.
    fn state() -> State {
        let odd = [-0.0, 5e-324, f64::from_bits(0x7ff8_0000_0000_0001), 0.1];
        State {
            psi: vec![Complex::new(odd[0], odd[1]), Complex::new(odd[2], odd[3])],
            step: 3,
            series: Series {
                gradient: vec![[0.25, -0.0]; 3],
                norm: odd[..3].to_vec(),
                edge: vec![0.0; 3],
                top: vec![1e-300; 3],
                population_steps: vec![0, 2],
                initial_population: vec![1.0, odd[3]],
                populations: vec![1.0, 0.0, 0.5, 0.25],
                local_error: vec![1e-9, -0.0],
                free_energy: vec![-0.5],
            },
            outgoing: Some(Outgoing {
                left: vec![Complex::new(odd[1], odd[0])],
                right: vec![Complex::new(0.5, odd[3])],
                map: vec![Complex::new(odd[3], odd[2])],
            }),
        }
    }

    #[test]
    fn every_bit_comes_back() {
        let place = tempfile::tempdir().expect("a folder");
        let path = place.path().join("checkpoints/ab12.checkpoint");
        write(&path, &origin(), &state()).expect("written");
        assert_eq!(arrays(&read(&path, &origin()).expect("read")), arrays(&state()));
    }

    #[test]
    fn every_byte_counts_and_every_length() {
        let place = tempfile::tempdir().expect("a folder");
        let path = place.path().join("ab12.checkpoint");
        let whole = bytes(&origin(), &state());
        for at in 0..whole.len() {
            let mut changed = whole.clone();
            changed[at] ^= 0x10;
            fs::write(&path, &changed).expect("written");
            let error = read(&path, &origin()).expect_err("damaged").to_string();
            assert!(error.contains("ab12.checkpoint"), "{error}");
            fs::write(&path, &whole[..at]).expect("written");
            let error = read(&path, &origin()).expect_err("cut short").to_string();
            assert!(error.contains("ab12.checkpoint is damaged: "), "byte {at}: {error}");
        }
    }

    #[test]
    fn what_it_is_not_is_said() {
        let place = tempfile::tempdir().expect("a folder");
        let path = place.path().join("ab12.checkpoint");
        let said = |bytes: &[u8]| {
            fs::write(&path, bytes).expect("written");
            let error = read(&path, &origin()).expect_err("refused").to_string();
            error.replace(&path.display().to_string(), "IT")
        };
        let from = |origin: &Origin| said(&bytes(origin, &state()));
        assert_eq!(said(b"no result"), "IT was not written by this program: it is no checkpoint");
        assert_eq!(said(b"tdse check"), "IT is damaged: it ends after 10 bytes");
        assert_eq!(
            said(b"tdse checkpoint\n{\"layout_version\":2,\"all\":\"new\"}\n"),
            "IT has layout version 2, written by a later version of this program; this one reads up to 1"
        );
        assert_eq!(
            from(&Origin { identity: "cd34".into(), ..origin() }),
            "IT cannot be continued: it is of the point cd34, not ab12"
        );
        assert_eq!(
            from(&Origin { executable: "1f".into(), ..origin() }),
            "IT cannot be continued: it is of the executable 1f, not 0f"
        );
        assert_eq!(
            from(&Origin { instruction_set: "other".into(), ..origin() }),
            "IT cannot be continued: it is of the instruction set other, not any"
        );
    }
}
