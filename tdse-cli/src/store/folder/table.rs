//! `points.csv`: one row per point, for people, spreadsheets and gathering.

use std::error::Error;

use ndarray::Array1;
use serde::{Deserialize, Serialize};

use super::Request;
use crate::store::axes::ScanAxis;
use crate::store::values::Values;

/// An axis of the scan as `request.json` keeps it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct TableAxis {
    /// Name in results.
    pub name: String,
    /// Words for the label of a plot.
    pub long_name: String,
    /// Unit as the Python library pint reads it; none for words.
    pub units: Option<String>,
    /// The values.
    pub values: AxisValues,
}

/// Values of an axis.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum AxisValues {
    /// Numbers.
    Numbers(Vec<f64>),
    /// Words.
    Words(Vec<String>),
}

impl TableAxis {
    pub(super) fn scan_axis(&self) -> ScanAxis {
        let values = match &self.values {
            AxisValues::Numbers(numbers) => Values::from(Array1::from(numbers.clone())),
            AxisValues::Words(words) => Values::from(Array1::from(words.clone())),
        };
        let Self { name, long_name, units, .. } = self.clone();
        ScanAxis { name, units, long_name, values }
    }

    fn heading(&self) -> String {
        match &self.units {
            Some(units) => format!("{} [{units}]", self.name),
            None => self.name.clone(),
        }
    }

    fn cell(&self, position: usize) -> String {
        match &self.values {
            AxisValues::Numbers(numbers) => numbers[position].to_string(),
            AxisValues::Words(words) => words[position].clone(),
        }
    }

    fn len(&self) -> usize {
        match &self.values {
            AxisValues::Numbers(numbers) => numbers.len(),
            AxisValues::Words(words) => words.len(),
        }
    }
}

/// One point.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Row {
    /// Hash of what decides its bits.
    pub identity: String,
    /// Hash of what is derived from it.
    pub outputs: String,
    /// One of done, doubtful, failed, missing, when the table was written.
    pub status: String,
    /// Its file within the folder.
    pub path: String,
}

const COLUMNS: [&str; 4] = ["identity", "outputs", "status", "path"];

/// The table: index, a column per axis, and the columns of a row.
pub(super) fn text(request: &Request, rows: &[Row]) -> Result<Vec<u8>, Box<dyn Error>> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    let axes = || request.scan.iter().flatten();
    let headings = axes().map(TableAxis::heading);
    writer.write_record(std::iter::once("index".into()).chain(headings).chain(COLUMNS.map(str::to_owned)))?;
    for (index, row) in rows.iter().enumerate() {
        let positions = positions(index, request);
        let dimensions = request.scan.iter().zip(positions);
        let cells = dimensions.flat_map(|(axes, position)| axes.iter().map(move |axis| axis.cell(position)));
        let Row { identity, outputs, status, path } = row.clone();
        writer.write_record(
            std::iter::once(index.to_string()).chain(cells).chain([identity, outputs, status, path]),
        )?;
    }
    Ok(writer.into_inner()?)
}

/// Position along each dimension, the last running fastest.
fn positions(mut index: usize, request: &Request) -> Vec<usize> {
    let mut positions = vec![0; request.scan.len()];
    for (position, axes) in positions.iter_mut().zip(&request.scan).rev() {
        let length = axes.first().map_or(1, TableAxis::len);
        *position = index % length;
        index /= length;
    }
    positions
}

/// The rows of a table.
pub(super) fn rows(text: &[u8]) -> Result<Vec<Row>, Box<dyn Error>> {
    let mut rows = Vec::new();
    for record in csv::Reader::from_reader(text).records() {
        let record = record?;
        let start = record.len().checked_sub(COLUMNS.len()).ok_or("a row is too short")?;
        let cell = |column: usize| record[start + column].to_owned();
        rows.push(Row { identity: cell(0), outputs: cell(1), status: cell(2), path: cell(3) });
    }
    Ok(rows)
}

#[cfg(test)]
mod tests {
    use serde_json::json;

    use super::*;

    #[test]
    fn the_table_names_axes_with_units_and_comes_back() {
        let axis = |name: &str, units: Option<&str>, values| TableAxis {
            name: name.into(),
            long_name: name.into(),
            units: units.map(str::to_owned),
            values,
        };
        let words = AxisValues::Words(vec!["He".into(), "Ar, \"gas\"".into()]);
        let request = Request {
            version: "0".into(),
            numerics_version: 1,
            title: String::new(),
            input: String::new(),
            overrides: Vec::new(),
            configuration: json!({}),
            scan: vec![
                vec![axis("cep", Some("deg"), AxisValues::Numbers(vec![0.0, 22.5]))],
                vec![axis("gas", None, words)],
            ],
        };
        let row = |id: &str| Row {
            identity: id.into(),
            outputs: "0f".into(),
            status: "done".into(),
            path: format!("points/{id}.h5"),
        };
        let rows_in = [row("a"), row("b"), row("c"), row("d")];
        let written = text(&request, &rows_in).expect("a table");
        let lines = String::from_utf8(written.clone()).expect("text");
        assert!(
            lines.starts_with("index,cep [deg],gas,identity,outputs,status,path\n0,0,He,a,0f,done,"),
            "{lines}"
        );
        assert!(lines.contains("\n3,22.5,\"Ar, \"\"gas\"\"\",d,0f,done,"), "{lines}");
        assert_eq!(rows(&written).expect("rows"), rows_in);
        assert_eq!(request.dimensions().len(), 2);
    }
}
