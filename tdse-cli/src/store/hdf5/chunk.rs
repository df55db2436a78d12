//! Which arrays are compressed, and in pieces of what shape.

/// Arrays up to this many bytes are stored as they are: compressing them costs more time than it saves space.
const SMALL: usize = 64 << 10;
/// A piece is at most this many bytes, a quarter of the library's smallest cache for pieces.
const PIECE: usize = 256 << 10;

/// The shape of the pieces, or none for a small array.
///
/// Whole rows of the last dimensions as far as they fit, so that the part of one point of a scan lies together.
pub(super) fn shape<T>(array: &[usize]) -> Option<Vec<usize>> {
    if array.iter().product::<usize>() * size_of::<T>() <= SMALL {
        return None;
    }
    let mut room = PIECE / size_of::<T>();
    let mut piece: Vec<_> = array
        .iter()
        .rev()
        .map(|&length| {
            let taken = length.min(room).max(1);
            room /= taken;
            taken
        })
        .collect();
    piece.reverse();
    Some(piece)
}
