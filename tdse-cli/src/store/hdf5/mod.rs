//! The only place that calls the HDF5 library: files, groups, datasets and attributes in the terms of the layout.

mod chunk;
mod memory;
mod scales;
mod terminated;

use std::path::Path;

use hdf5_metno::file::FileCloseDegree;
use hdf5_metno::types::{FixedAscii, FixedUnicode, VarLenAscii, VarLenUnicode};
use hdf5_metno::{Dataset, H5Type, Hyperslab, Location, LocationType, SliceOrIndex};
use ndarray::ArrayD;

use super::table::Kind;
use super::values::Values;

/// The library's account of what failed.
pub(super) type Failure = hdf5_metno::Error;
type Result<T> = std::result::Result<T, Failure>;

/// The first bytes of every HDF5 file (HDF5 File Format Specification 3.0, section II.A).
pub(super) const SIGNATURE: &[u8] = b"\x89HDF\r\n\x1a\n";
/// Longest text of fixed length that is read.
const LONGEST: usize = 256;

/// Whether the array is stored as it is, not compressed.
pub(super) fn is_plain(values: &Values) -> bool {
    match values {
        Values::Real(array) => chunk::shape::<f64>(array.shape()).is_none(),
        Values::Integer(array) => chunk::shape::<i64>(array.shape()).is_none(),
        Values::Text(_) => true,
    }
}

/// The failure in words: those of the operating system where the library quotes it among addresses and sizes.
pub(super) fn reason(failure: &Failure) -> String {
    let whole = failure.to_string();
    let quoted = whole.split_once("error message = '").and_then(|(_, rest)| rest.split_once('\''));
    quoted.map_or_else(|| whole.clone(), |(message, _)| message.to_owned())
}

/// Semi: closing a file that is still in use is an error instead of a broken file.
const CLOSE_DEGREE: FileCloseDegree = FileCloseDegree::Semi;

/// An open file.
pub(super) struct File(hdf5_metno::File);

impl File {
    /// Makes a file, replacing what stands there.
    pub fn create(path: &Path) -> Result<Self> {
        options().create(path).map(Self)
    }

    /// Opens a file for reading.
    pub fn open(path: &Path) -> Result<Self> {
        options().open(path).map(Self)
    }

    /// Makes a file in memory.
    pub fn in_memory() -> Result<Self> {
        memory::create().map(Self)
    }

    /// A file in memory that begins with these bytes, to be changed.
    pub fn of_bytes(bytes: &[u8]) -> Result<Self> {
        memory::open(bytes).map(Self)
    }

    /// Closes a file; its bytes.
    pub fn into_bytes(self) -> Result<Vec<u8>> {
        let bytes = memory::bytes(&self.0)?;
        self.0.close()?;
        Ok(bytes)
    }

    /// The group `/`.
    pub fn root(&self) -> Result<Node> {
        self.0.group("/").map(Node)
    }

    /// Writes everything out and closes; fails if a group or dataset is still open.
    pub fn close(self) -> Result<()> {
        self.0.flush()?;
        self.0.close()
    }
}

/// No lock: files appear by renaming, so nobody reads one that is being written, and some file systems of clusters have
/// no locks.
fn options() -> hdf5_metno::FileBuilder {
    let mut options = hdf5_metno::File::with_options();
    options.with_fapl(|access| access.fclose_degree(CLOSE_DEGREE).file_locking(false));
    options
}

/// A group.
pub(super) struct Node(hdf5_metno::Group);

impl Node {
    /// Makes the group `name`, a path below this one.
    pub fn create(&self, name: &str, class: &str) -> Result<Self> {
        let node = self.0.create_group(name).map(Self)?;
        node.set("NX_class", &Attribute::Text(class))?;
        Ok(node)
    }

    /// Opens the group `name`, a path below this one.
    pub fn open(&self, name: &str) -> Result<Self> {
        self.0.group(name).map(Self)
    }

    /// Whether there is a group or dataset `name` directly in this one.
    pub fn has(&self, name: &str) -> bool {
        self.0.link_exists(name)
    }

    /// Names of the groups and datasets directly in this one.
    pub fn names(&self) -> Result<Vec<String>> {
        self.0.member_names()
    }

    /// Names of the groups directly in this one.
    pub fn groups(&self) -> Result<Vec<String>> {
        self.members(LocationType::Group)
    }

    /// Names of the datasets directly in this one.
    pub fn arrays(&self) -> Result<Vec<String>> {
        self.members(LocationType::Dataset)
    }

    fn members(&self, wanted: LocationType) -> Result<Vec<String>> {
        let mut found = Vec::new();
        for name in self.names()? {
            if self.0.loc_type_by_name(&name)? == wanted {
                found.push(name);
            }
        }
        Ok(found)
    }

    /// Makes the dataset `name` from values.
    pub fn write(&self, name: &str, values: &Values) -> Result<Array> {
        match values {
            Values::Real(array) => self.write_array(name, array),
            Values::Integer(array) => self.write_array(name, array),
            Values::Text(array) => {
                self.0.new_dataset_builder().with_data(&to_hdf5(array)?).create(name).map(Array)
            }
        }
    }

    fn write_array<T: H5Type + Clone>(&self, name: &str, array: &ArrayD<T>) -> Result<Array> {
        let array = array.as_standard_layout();
        let builder = self.0.new_dataset_builder();
        let dataset = match chunk::shape::<T>(array.shape()) {
            Some(chunk) => builder.shuffle().deflate(4).chunk(chunk).with_data(&array).create(name),
            None => builder.with_data(&array).create(name),
        };
        dataset.map(Array)
    }

    /// Writes other values over those of the dataset `name`, a path below this one, of the same shape.
    pub fn overwrite(&self, name: &str, values: &Values) -> Result<()> {
        let dataset = self.0.dataset(name)?;
        match values {
            Values::Real(array) => dataset.write(&array.as_standard_layout()),
            Values::Integer(array) => dataset.write(&array.as_standard_layout()),
            Values::Text(array) => dataset.write(&to_hdf5(array)?),
        }
    }

    /// Makes the dataset `name`, to be filled slab by slab; what is never filled reads as absent.
    pub fn reserve(&self, name: &str, kind: Kind, shape: &[usize]) -> Result<Array> {
        match kind {
            Kind::Real => self.reserve_array(name, f64::NAN, shape),
            Kind::Integer => self.reserve_array(name, -1_i64, shape),
            Kind::Text => self.write(name, &Values::absent(kind, shape)),
        }
    }

    fn reserve_array<T: H5Type>(&self, name: &str, absent: T, shape: &[usize]) -> Result<Array> {
        let builder = self.0.new_dataset_builder().fill_value(absent);
        let dataset = match chunk::shape::<T>(shape) {
            Some(chunk) => builder.shuffle().deflate(4).chunk(chunk).empty::<T>().shape(shape).create(name),
            None => builder.empty::<T>().shape(shape).create(name),
        };
        dataset.map(Array)
    }

    /// Reads the dataset `name`, numbers converted to `kind` where that is possible.
    pub fn read(&self, name: &str, kind: Kind) -> Result<Values> {
        let dataset = self.0.dataset(name)?;
        Ok(match kind {
            Kind::Real => Values::Real(dataset.read_dyn()?),
            Kind::Integer => Values::Integer(dataset.read_dyn()?),
            Kind::Text => Values::Text(dataset.read_dyn::<VarLenUnicode>()?.mapv(|text| text.to_string())),
        })
    }

    /// Makes dimension scales of `scales` and ties the dimensions of `arrays` to them; all lie in this group.
    pub fn attach_scales(&self, scales: &[&str], arrays: &[(&str, Vec<&str>)]) -> Result<()> {
        scales::attach(&self.0, scales, arrays)
    }

    /// Sets an attribute of the group.
    pub fn set(&self, name: &str, value: &Attribute) -> Result<()> {
        set(&self.0, name, value)
    }

    /// Names of the group's attributes.
    pub fn attributes(&self) -> Result<Vec<String>> {
        self.0.attr_names()
    }

    /// Reads an attribute that is one text; none if it is something else.
    pub fn text(&self, name: &str) -> Result<Option<String>> {
        let attribute = self.0.attr(name)?;
        if !attribute.is_scalar() || !attribute.dtype()?.is::<VarLenUnicode>() {
            return Ok(None);
        }
        Ok(Some(attribute.read_scalar::<VarLenUnicode>()?.to_string()))
    }

    /// Reads an attribute of one or more texts; empty if there is no such attribute.
    pub fn texts(&self, name: &str) -> Result<Vec<String>> {
        if !has_attribute(&self.0, name)? {
            return Ok(Vec::new());
        }
        Ok(self.0.attr(name)?.read_raw::<VarLenUnicode>()?.iter().map(ToString::to_string).collect())
    }

    /// Reads an attribute of one or more whole numbers; empty if there is no such attribute.
    pub fn integers(&self, name: &str) -> Result<Vec<i64>> {
        if !has_attribute(&self.0, name)? {
            return Ok(Vec::new());
        }
        self.0.attr(name)?.read_raw()
    }

    /// Reads a text attribute of the dataset `name`; none if it has no such attribute.
    pub fn text_of(&self, name: &str, attribute: &str) -> Result<Option<String>> {
        let dataset = self.0.dataset(name)?;
        if !has_attribute(&dataset, attribute)? {
            return Ok(None);
        }
        Ok(Some(dataset.attr(attribute)?.read_scalar::<VarLenUnicode>()?.to_string()))
    }

    /// The same in whatever form other programs store a text; none where there is no such attribute.
    pub fn any_text_of(&self, name: &str, attribute: &str) -> Option<String> {
        let attribute = self.0.dataset(name).and_then(|dataset| dataset.attr(attribute)).ok()?;
        let varying = attribute.read_scalar::<VarLenUnicode>().map(|text| text.to_string());
        let ascii = || attribute.read_scalar::<VarLenAscii>().map(|text| text.to_string());
        let fixed = || attribute.read_scalar::<FixedAscii<LONGEST>>().map(|text| text.to_string());
        let fixed_unicode = || attribute.read_scalar::<FixedUnicode<LONGEST>>().map(|text| text.to_string());
        varying.or_else(|_| ascii()).or_else(|_| fixed()).or_else(|_| fixed_unicode()).ok()
    }

    /// The element type of the dataset `name`.
    pub fn kind(&self, name: &str) -> Result<Kind> {
        let stored = self.0.dataset(name)?.dtype()?;
        Ok(if stored.is::<VarLenUnicode>() {
            Kind::Text
        } else if stored.is::<i64>() {
            Kind::Integer
        } else {
            Kind::Real
        })
    }
}

/// A dataset.
pub(super) struct Array(Dataset);

impl Array {
    /// Writes the part where the leading dimensions have the given index.
    pub fn fill(&self, index: &[usize], values: &Values) -> Result<()> {
        let rest = values.shape().iter().map(|&length| SliceOrIndex::from(0..length));
        let slab: Vec<_> = index.iter().map(|&i| SliceOrIndex::from(i)).chain(rest).collect();
        let slab = Hyperslab::from(slab);
        match values {
            Values::Real(array) => self.0.write_slice(&array.as_standard_layout(), slab),
            Values::Integer(array) => self.0.write_slice(&array.as_standard_layout(), slab),
            Values::Text(array) => self.0.write_slice(&to_hdf5(array)?, slab),
        }
    }

    /// Sets an attribute of the dataset.
    pub fn set(&self, name: &str, value: &Attribute) -> Result<()> {
        set(&self.0, name, value)
    }
}

/// The value of an attribute.
pub(super) enum Attribute<'a> {
    /// A text.
    Text(&'a str),
    /// A list of texts.
    Texts(&'a [&'a str]),
    /// A whole number.
    Integer(i64),
    /// A list of whole numbers.
    Integers(&'a [i64]),
    /// Positions of dimensions: a number where there is one, else a list.
    Indices(&'a [i32]),
}

fn set(at: &Location, name: &str, value: &Attribute) -> Result<()> {
    let new = at.new_attr_builder();
    match value {
        Attribute::Text(text) => {
            at.new_attr::<VarLenUnicode>().create(name)?.write_scalar(&varying(text)?)?;
        }
        Attribute::Texts(texts) => {
            let texts = texts.iter().map(|text| varying(text)).collect::<Result<Vec<_>>>()?;
            new.with_data(&texts).create(name)?;
        }
        Attribute::Integer(number) => at.new_attr::<i64>().create(name)?.write_scalar(number)?,
        Attribute::Integers(numbers) => drop(new.with_data(*numbers).create(name)?),
        Attribute::Indices([index]) => at.new_attr::<i32>().create(name)?.write_scalar(index)?,
        Attribute::Indices(indices) => drop(new.with_data(*indices).create(name)?),
    }
    Ok(())
}

fn has_attribute(at: &Location, name: &str) -> Result<bool> {
    Ok(at.attr_names()?.iter().any(|known| known == name))
}

fn to_hdf5(texts: &ArrayD<String>) -> Result<ArrayD<VarLenUnicode>> {
    let list = texts.iter().map(|text| varying(text)).collect::<Result<Vec<_>>>()?;
    Ok(ArrayD::from_shape_vec(texts.shape(), list)?)
}

fn varying(text: &str) -> Result<VarLenUnicode> {
    text.parse().map_err(|_| format!("text with a null byte: {text:?}").into())
}
