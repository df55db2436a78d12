//! Attributes of null-terminated text of fixed length.
//!
//! A dataset counts as a dimension scale only if its attribute `CLASS` has this type, and the safe interface
//! makes padded or variable-length text only.
#![expect(unsafe_code, reason = "the safe interface cannot make null-terminated text of fixed length")]

use std::ffi::CString;

use hdf5_metno::{Dataset, Datatype, Result, from_id, globals, h5check, sync::sync};
use hdf5_metno_sys::h5a::H5Awrite;
use hdf5_metno_sys::h5t::{H5T_str_t, H5Tcopy, H5Tset_size, H5Tset_strpad};

/// Attaches the text to the dataset. A text with a null inside is an error.
pub(super) fn set(dataset: &Dataset, name: &str, text: &str) -> Result<()> {
    let text = CString::new(text).map_err(|_| format!("{name}: null byte in {text:?}"))?;
    let bytes = text.as_bytes_with_nul();
    let datatype = terminated(bytes.len())?;
    let attribute = dataset.new_attr_builder().empty_as(&datatype).create(name)?;
    // SAFETY: both ids belong to handles that live until the end of this function. The attribute is a scalar of
    // `datatype`, which is exactly `bytes.len()` bytes without pointers, so the library reads that many bytes
    // from `bytes` and keeps none of them. `sync` holds the library's lock.
    sync(|| h5check(unsafe { H5Awrite(attribute.id(), datatype.id(), bytes.as_ptr().cast()) }))?;
    Ok(())
}

/// The datatype of null-terminated ASCII text that takes `size` bytes with its null.
fn terminated(size: usize) -> Result<Datatype> {
    // SAFETY: the three calls take and return plain integers and touch no memory of ours. `H5T_C_S1` opens the
    // library before it is read. The copy is ours to change, as predefined types are not; `from_id` takes it
    // over and closes it once. `sync` holds the library's lock throughout.
    sync(|| unsafe {
        let datatype = from_id::<Datatype>(h5check(H5Tcopy(*globals::H5T_C_S1))?)?;
        h5check(H5Tset_size(datatype.id(), size))?;
        h5check(H5Tset_strpad(datatype.id(), H5T_str_t::H5T_STR_NULLTERM))?;
        Ok(datatype)
    })
}
