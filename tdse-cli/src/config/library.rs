//! Tables that are read once, however many points of a scan use them.

use std::cell::RefCell;
use std::collections::BTreeMap;
use std::io;
use std::sync::Arc;

use tdse_core::cubic::Cubic;

use super::files::Files;
use super::stored::{self, Places, StoredFault};
use super::tables::{self, Layout, TableFault};
use crate::store::is_hdf5;

/// The files of a configuration, and the tables read from them so far.
#[derive(Debug)]
pub struct Library {
    files: Files,
    read: RefCell<BTreeMap<(String, &'static str), Table>>,
}

/// A table: its text, and the curves through it.
#[derive(Clone, Debug)]
pub struct Table {
    /// Contents of the file.
    pub contents: Arc<str>,
    /// One curve for every column but the first, atomic units.
    pub curves: Result<Vec<Arc<Cubic>>, TableFault>,
}

impl Library {
    /// A library of these files, nothing read yet.
    pub fn new(files: Files) -> Self {
        Self { files, read: RefCell::default() }
    }

    /// The table in `file`, in one of `layouts`.
    ///
    /// # Errors
    /// If the file cannot be read; faults of what it holds are told by [`Table::curves`].
    pub fn table(&self, file: &str, layouts: &[Layout]) -> io::Result<Table> {
        let key = (file.to_owned(), layouts[0].header);
        if let Some(table) = self.read.borrow().get(&key) {
            return Ok(table.clone());
        }
        let contents: Arc<str> = self.files.contents(file)?.into();
        let curves = tables::read(&contents, layouts);
        let table = Table { contents, curves };
        self.read.borrow_mut().insert(key, table.clone());
        Ok(table)
    }

    /// The table in two datasets of the HDF5 file `file`.
    ///
    /// # Errors
    /// The first fault found.
    pub fn stored(&self, file: &str, places: Places, layout: Layout) -> Result<Table, StoredFault> {
        let key = ([file, places.axis, places.dataset].join("\n"), layout.header);
        if let Some(table) = self.read.borrow().get(&key) {
            return Ok(table.clone());
        }
        let path = self.files.path(file).unwrap_or_default();
        let contents: Arc<str> = stored::text(&path, places, layout)?.into();
        let curves = tables::read(&contents, &[layout]);
        let table = Table { contents, curves };
        self.read.borrow_mut().insert(key, table.clone());
        Ok(table)
    }

    /// Whether `file` is there and an HDF5 file.
    pub fn is_hdf5(&self, file: &str) -> bool {
        self.files.path(file).is_some_and(|path| is_hdf5(&path))
    }

    /// Names of the tables there are.
    pub fn names(&self) -> Vec<String> {
        self.files.tables()
    }
}
