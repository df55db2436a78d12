//! Files in memory, and their bytes, which are those of a file on disk.
#![expect(unsafe_code, reason = "the safe interface has no calls for the bytes of a file in memory")]

use std::ptr;

use hdf5_metno::{File, Result, from_id, h5check, plist::FileAccess, sync::sync};
use hdf5_metno_sys::h5f::{H5F_ACC_RDWR, H5Fget_file_image, H5Fopen};
use hdf5_metno_sys::h5p::H5Pset_file_image;

use super::CLOSE_DEGREE;

/// Such a file grows by so many bytes at a time.
const GROWTH: usize = 64 << 10;

/// What the library calls the file; none is made on disk.
const NAME: &std::ffi::CStr = c"in memory";

/// An empty file.
pub(super) fn create() -> Result<File> {
    let mut options = File::with_options();
    options.with_fapl(|access| access.fclose_degree(CLOSE_DEGREE).core_options(GROWTH, false));
    options.create(NAME.to_string_lossy().as_ref())
}

/// A file that begins with these bytes, to be changed.
pub(super) fn open(bytes: &[u8]) -> Result<File> {
    let access = FileAccess::build().fclose_degree(CLOSE_DEGREE).core_options(GROWTH, false).finish()?;
    let start = bytes.as_ptr().cast_mut().cast();
    // SAFETY: the id belongs to `access`, which lives until the end of this function. Without callbacks of ours the
    // library copies `bytes.len()` bytes from `start` into the list, changes none and keeps no pointer to them. `NAME`
    // ends with a null. `from_id` takes the new file over and closes it once. `sync` holds the library's lock.
    sync(|| unsafe {
        h5check(H5Pset_file_image(access.id(), start, bytes.len()))?;
        from_id(h5check(H5Fopen(NAME.as_ptr(), H5F_ACC_RDWR, access.id()))?)
    })
}

/// The bytes of a file.
pub(super) fn bytes(file: &File) -> Result<Vec<u8>> {
    file.flush()?;
    // SAFETY: the id belongs to `file`, which lives until the end of this function. Without a buffer the library only
    // returns the length. The second call gets a buffer and its true length, and writes at most that many bytes. `sync`
    // holds the library's lock, so that the file does not change in between.
    sync(|| unsafe {
        let length = h5check(H5Fget_file_image(file.id(), ptr::null_mut(), 0))?;
        let mut bytes = vec![0; length.unsigned_abs()];
        h5check(H5Fget_file_image(file.id(), bytes.as_mut_ptr().cast(), bytes.len()))?;
        Ok(bytes)
    })
}
