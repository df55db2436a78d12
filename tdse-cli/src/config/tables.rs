//! CSV tables: a header with units, `#` comments, rising first column, at least four rows.

use std::path::Path;
use std::sync::Arc;

use csv::{ReaderBuilder, StringRecord, Trim};
use sha2::{Digest, Sha256};
use tdse_core::cubic::Cubic;
use tdse_core::units::{Quantity, TIME_FS};

use super::allowed::either;
use super::files::INPUTS;

/// A table kept with a result.
#[derive(Clone, Debug, PartialEq)]
pub struct Input {
    /// JSON Pointer to the object that names the file.
    pub user: String,
    /// Name in the result: the file's own, with the start of its hash.
    pub name: String,
    /// The whole text.
    pub contents: Arc<str>,
    /// SHA-256 of the contents, hexadecimal.
    pub sha256: String,
}

impl Input {
    /// Names and hashes the contents of `file`, which the object at `user` names.
    pub fn new(user: &str, file: &str, contents: Arc<str>) -> Self {
        let sha256 = format!("{:x}", Sha256::digest(contents.as_bytes()));
        let mark = format!("-{}", &sha256[..8]);
        let stem = Path::new(file).file_stem().map_or("table".into(), |stem| stem.to_string_lossy());
        let stem = stem.strip_suffix(&mark).unwrap_or(&stem);
        Self { user: user.into(), name: format!("{stem}{mark}.csv"), contents, sha256 }
    }

    /// How a resolved configuration refers to it.
    pub fn reference(&self) -> String {
        format!("{INPUTS}{}", self.name)
    }
}

/// What a column holds.
#[derive(Clone, Copy, Debug)]
pub struct Column {
    /// Name in the header.
    pub name: &'static str,
    /// What its unit may be.
    pub measure: Measure,
}

/// Units that a column may have.
#[derive(Clone, Copy, Debug)]
pub enum Measure {
    /// Those of a quantity.
    Of(Quantity),
    /// These, with the factor to the one that results of reading are in.
    Fixed(&'static [(&'static str, f64)]),
}

impl Measure {
    fn symbols(self) -> Vec<&'static str> {
        match self {
            Self::Of(quantity) => quantity.units().iter().map(|unit| unit.symbol).collect(),
            Self::Fixed(units) => units.iter().map(|(symbol, _)| *symbol).collect(),
        }
    }

    /// Factor from the unit with this symbol to the one that results of reading are in.
    fn factor(self, symbol: &str) -> Option<f64> {
        match self {
            Self::Of(quantity) => quantity.unit(symbol).map(|unit| unit.factor),
            Self::Fixed(units) => units.iter().find(|(known, _)| *known == symbol).map(|(_, factor)| *factor),
        }
    }
}

/// What a table holds.
#[derive(Clone, Copy, Debug)]
pub struct Layout {
    /// The rising column and those interpolated.
    pub columns: &'static [Column],
    /// An example of the header.
    pub header: &'static str,
    /// The units of that header as HDF5 files spell them.
    pub units: &'static [&'static str],
}

/// Electric field along x over time.
pub const FIELD: Layout = Layout {
    columns: &[
        Column { name: "time", measure: Measure::Of(Quantity::Time) },
        Column { name: "electric_field", measure: Measure::Of(Quantity::ElectricField) },
    ],
    header: "time [fs],electric_field [V/m]",
    units: &["fs", "V/m"],
};

/// Electric field along x and y over time.
pub const PLANE_FIELD: Layout = Layout {
    columns: &[
        Column { name: "time", measure: Measure::Of(Quantity::Time) },
        Column { name: "electric_field_x", measure: Measure::Of(Quantity::ElectricField) },
        Column { name: "electric_field_y", measure: Measure::Of(Quantity::ElectricField) },
    ],
    header: "time [fs],electric_field_x [V/m],electric_field_y [V/m]",
    units: &["fs", "V/m", "V/m"],
};

/// Potential energy over position.
pub const POTENTIAL: Layout = Layout {
    columns: &[
        Column { name: "position", measure: Measure::Of(Quantity::Length) },
        Column { name: "potential", measure: Measure::Of(Quantity::Energy) },
    ],
    header: "position [bohr],potential [eV]",
    units: &["bohr", "eV"],
};

/// A harmonic spectrum |a(ω)|² over photon energy.
pub const SPECTRUM: Layout = Layout {
    columns: &[
        Column { name: "photon_energy", measure: Measure::Of(Quantity::Energy) },
        Column { name: "spectrum", measure: Measure::Fixed(&[("au", 1.0)]) },
    ],
    header: "photon_energy [eV],spectrum [au]",
    units: &["eV", "bohr**2 / atomic_unit_of_time**2"],
};

/// An electron spectrum over kinetic energy.
pub const YIELD: Layout = Layout {
    columns: &[
        Column { name: "energy", measure: Measure::Of(Quantity::Energy) },
        Column { name: "yield", measure: Measure::Fixed(&[("1/eV", 1.0)]) },
    ],
    header: "energy [eV],yield [1/eV]",
    units: &["eV", "1 / eV"],
};

const RATE: Column = Column { name: "rate", measure: Measure::Fixed(&[("1/fs", TIME_FS), ("au", 1.0)]) };

/// Ionization rate over the strength of a static field.
pub const RATE_OVER_FIELD: Layout = Layout {
    columns: &[Column { name: "electric_field", measure: Measure::Of(Quantity::ElectricField) }, RATE],
    header: "electric_field [V/m],rate [1/fs]",
    units: &["V/m", "1 / fs"],
};

/// Ionization rate averaged over a cycle, over the intensity.
pub const RATE_OVER_INTENSITY: Layout = Layout {
    columns: &[Column { name: "intensity", measure: Measure::Of(Quantity::Intensity) }, RATE],
    header: "intensity [W/cm^2],rate [1/fs]",
    units: &["W/cm**2", "1 / fs"],
};

/// What is wrong with a table, where, and what belongs there.
#[derive(Clone, Debug, PartialEq)]
pub struct TableFault {
    /// Line in the file, from 1.
    pub line: u64,
    /// What is wrong, with the text concerned.
    pub reason: String,
    /// What may stand there.
    pub allowed: String,
}

/// Reads a table in atomic units: a curve for every column but the first. Of several layouts the first that is as wide as the
/// header is taken.
///
/// # Errors
/// The first fault from the top.
///
/// # Panics
/// Without a layout.
pub fn read(contents: &str, layouts: &[Layout]) -> Result<Vec<Arc<Cubic>>, TableFault> {
    let source = Source { contents };
    let mut reader = ReaderBuilder::new()
        .comment(Some(b'#'))
        .trim(Trim::All)
        .flexible(true)
        .has_headers(false)
        .from_reader(contents.as_bytes());
    let mut records = reader.records();
    let header = records.next().ok_or_else(|| source.too_short(layouts[0].header))?;
    let header = source.record(header)?;
    let widths: Vec<usize> = layouts.iter().map(|layout| layout.columns.len()).collect();
    source.width(&header, &widths)?;
    let layout = layouts.iter().find(|layout| layout.columns.len() == header.len()).unwrap_or(&layouts[0]);
    let factors = source.units(&header, layout)?;
    let mut columns = vec![Vec::new(); factors.len()];
    for record in records {
        let record = source.record(record)?;
        let row = source.row(&record, &factors)?;
        if columns[0].last().is_some_and(|before| row[0] <= *before) {
            return Err(source.fault(&record, format!("{:?} does not rise", &record[0]), "rising values"));
        }
        for (column, value) in columns.iter_mut().zip(row) {
            column.push(value);
        }
    }
    if columns[0].len() < 4 {
        return Err(source.too_short("at least 4 rows of numbers"));
    }
    let curve = |y: &Vec<f64>| Arc::new(Cubic::new(columns[0].clone(), y.clone()));
    Ok(columns[1..].iter().map(curve).collect())
}

/// The text of a table, for faults by line.
struct Source<'a> {
    contents: &'a str,
}

impl Source<'_> {
    /// Factors to atomic units of all columns.
    fn units(&self, header: &StringRecord, layout: &Layout) -> Result<Vec<f64>, TableFault> {
        let factor = |(i, column): (usize, &Column)| {
            let unit = header[i].strip_suffix(']').and_then(|cell| cell.split_once('['));
            let unit = unit.filter(|(name, _)| name.trim() == column.name);
            let factor = unit.and_then(|(_, symbol)| column.measure.factor(symbol.trim()));
            let symbols = column.measure.symbols();
            let reason = format!("{:?} is not {} and its unit", &header[i], column.name);
            let allowed = format!("a header such as {}, with the unit {}", layout.header, either(&symbols));
            factor.ok_or_else(|| self.fault(header, reason, allowed))
        };
        layout.columns.iter().enumerate().map(factor).collect()
    }

    /// The values of a row in atomic units.
    fn row(&self, record: &StringRecord, factors: &[f64]) -> Result<Vec<f64>, TableFault> {
        self.width(record, &[factors.len()])?;
        let value = |(text, factor): (&str, &f64)| {
            let value =
                text.parse().ok().map(|number: f64| number * factor).filter(|value| value.is_finite());
            let reason = || format!("{text:?} is not a number");
            value.ok_or_else(|| self.fault(record, reason(), "a finite number such as 0.5"))
        };
        record.iter().zip(factors).map(value).collect()
    }

    fn width(&self, record: &StringRecord, wanted: &[usize]) -> Result<(), TableFault> {
        if wanted.contains(&record.len()) {
            return Ok(());
        }
        let reason = format!("{:?} has {} columns", &record[0], record.len());
        let allowed = match wanted {
            [2] => "two columns",
            [3] => "three columns",
            // Of the layouts only that of a field has two widths.
            _ => "two columns, or in two dimensions three",
        };
        Err(self.fault(record, reason, format!("{allowed}, parted by a comma")))
    }

    fn record(&self, record: csv::Result<StringRecord>) -> Result<StringRecord, TableFault> {
        record.map_err(|error| TableFault {
            line: self.line(error.position()),
            reason: error.to_string(),
            allowed: "comma-separated values (RFC 4180)".into(),
        })
    }

    fn fault(&self, record: &StringRecord, reason: String, allowed: impl Into<String>) -> TableFault {
        TableFault { line: self.line(record.position()), reason, allowed: allowed.into() }
    }

    fn too_short(&self, wanted: &str) -> TableFault {
        let line = self.contents.lines().count() as u64;
        TableFault { line, reason: "is the end".into(), allowed: wanted.into() }
    }

    /// Line of a record. The reader's position stands before the line ends, comments and empty lines that it skips.
    fn line(&self, position: Option<&csv::Position>) -> u64 {
        let mut start = position.map_or(0, |position| position.byte() as usize);
        while let Some(rest) = self.contents.get(start..) {
            match rest.as_bytes().first() {
                Some(b'\r' | b'\n') => start += 1,
                Some(b'#') => start += rest.find('\n').unwrap_or(rest.len()),
                _ => break,
            }
        }
        1 + self.contents.bytes().take(start).filter(|byte| *byte == b'\n').count() as u64
    }
}
