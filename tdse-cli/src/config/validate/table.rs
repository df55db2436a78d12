//! Reading the tables that a configuration names.

use std::io::ErrorKind;
use std::sync::Arc;

use serde_json::Value;
use tdse_core::cubic::Cubic;

use super::Check;
use crate::config::complaint::Fix;
use crate::config::library::Table;
use crate::config::pointer::{join, nearest};
use crate::config::stored::Places;
use crate::config::tables::{Input, Layout};

impl Check<'_> {
    /// The curve in the table that the object at `user` names, which is kept among the inputs.
    pub(super) fn table(
        &mut self,
        user: &str,
        file: &str,
        sha256: Option<&String>,
        layout: Layout,
    ) -> Option<Arc<Cubic>> {
        self.curves(user, file, sha256, &[layout])?.into_iter().next()
    }

    /// The same for a table in one of `layouts`: every curve it holds.
    pub(super) fn curves(
        &mut self,
        user: &str,
        file: &str,
        sha256: Option<&String>,
        layouts: &[Layout],
    ) -> Option<Vec<Arc<Cubic>>> {
        let table = match self.library.table(file, layouts) {
            Ok(table) => table,
            Err(error) => {
                self.unreadable(user, file, &error);
                return None;
            }
        };
        self.kept(user, file, sha256, table)
    }

    /// The table in two datasets of the HDF5 file that the object at `user` names; of it the table alone is kept.
    pub(super) fn stored_table(
        &mut self,
        user: &str,
        file: &str,
        places: Places,
        layout: Layout,
    ) -> Option<Arc<Cubic>> {
        match self.library.stored(file, places, layout) {
            Ok(table) => self.kept(user, file, None, table)?.into_iter().next(),
            Err(fault) => {
                // Where the user left the dataset out, the file is to blame.
                let own = join(user, fault.key);
                let place = if self.tree.pointer(&own).is_some() { own } else { join(user, "file") };
                let name = if fault.key == "axis" { places.axis } else { places.dataset };
                let reason = format!("leads to {name} in {file:?}, which {}", fault.reason);
                let fix = Fix::Words("name another dataset, or correct the file".into());
                self.complain(&place, reason, fault.allowed, fix);
                None
            }
        }
    }

    fn kept(
        &mut self,
        user: &str,
        file: &str,
        sha256: Option<&String>,
        table: Table,
    ) -> Option<Vec<Arc<Cubic>>> {
        let input = Input::new(user, file, table.contents);
        if sha256.is_some_and(|wanted| *wanted != input.sha256) {
            self.complain(
                &join(user, "sha256"),
                format!("is not the SHA-256 of {file:?}"),
                "the SHA-256 of the contents, or the key left out",
                Fix::Value(Value::from(input.sha256.as_str())),
            );
        }
        self.inputs.push(input);
        match table.curves {
            Ok(curves) => Some(curves),
            Err(fault) => {
                let fix = Fix::Words(format!("correct line {} of the file", fault.line));
                let reason = format!("has a fault in line {}: {}", fault.line, fault.reason);
                self.complain(&join(user, "file"), reason, fault.allowed, fix);
                None
            }
        }
    }

    fn unreadable(&mut self, user: &str, file: &str, error: &std::io::Error) {
        let tables = self.library.names();
        let near = nearest(file, tables.iter().map(String::as_str));
        let (reason, fix) = match (error.kind(), near) {
            (ErrorKind::NotFound, Some(table)) => ("no such file".into(), Fix::Value(table.into())),
            (ErrorKind::NotFound, None) => ("no such file".into(), Fix::Words("put the file there".into())),
            _ => (error.to_string(), Fix::Words("make it a readable file in UTF-8".into())),
        };
        let allowed = "the path of a CSV file, relative to the configuration's folder";
        self.complain(&join(user, "file"), format!("cannot be read ({reason})"), allowed, fix);
    }
}
