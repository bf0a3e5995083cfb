//! What a solve takes of memory, and how it is made to fit.

use super::EigenError;
use super::field::Field;

/// Levels of a slice at most: longer windows are cut, each slice with its own shift.
pub(super) const SLICE: usize = 128;

/// What fits in memory.
pub(super) struct Room {
    /// Columns of a Lanczos basis.
    pub columns: usize,
    /// Levels of a slice.
    pub slice: usize,
    /// Bytes in all.
    pub bytes: u64,
}

/// Fits the basis, and then the slices, into `limit` bytes.
pub(super) fn room<T: Field, const B: usize>(
    n: usize,
    count: usize,
    entries: usize,
    length: usize,
    limit: u64,
    small: bool,
) -> Result<Room, EigenError> {
    let size = size_of::<T>() as u64;
    // Factor; K, M and the shifted matrix with their maps; the levels, inside and handed out.
    let fixed =
        length as u64 * size + entries as u64 * (3 * size + 16) + 2 * (count * n) as u64 * size;
    if small {
        let bytes = fixed + 6 * (n * n) as u64 * size;
        return if bytes > limit {
            Err(EigenError::TooLarge {
                needed: bytes,
                limit,
            })
        } else {
            Ok(Room {
                columns: n,
                slice: count,
                bytes,
            })
        };
    }
    // Slices of equal length; a basis of twice the slice, two vectors a column (x and Mx), and
    // once more of half of them for the combination at a restart.
    let slices = count.div_ceil(SLICE);
    let mut slice = count.div_ceil(slices);
    loop {
        let columns = (2 * slice + 12 * B).min(n / 2).max(6 * B);
        let bytes = fixed + (3 * columns * n) as u64 * size;
        if bytes <= limit {
            return Ok(Room {
                columns,
                slice,
                bytes,
            });
        }
        if slice <= 4 {
            return Err(EigenError::TooLarge {
                needed: bytes,
                limit,
            });
        }
        slice = slice.div_ceil(2);
    }
}
