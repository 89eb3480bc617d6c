//! What a reader process that has been taken over might answer: any bytes at all. Each function takes
//! some as far as the parent would; it must end without a panic, whatever they are.
//!
//! For property tests here and for the fuzz targets in `tests/fuzz`; no part of the program.

use std::path::Path;

use super::chunks::any_chunk;
use super::messages::{Reply, receive};

/// A message from the reader; an index that is taken is gone through.
pub fn answer(body: &[u8]) {
    let Ok(length) = u32::try_from(body.len()) else { return };
    let mut frame = length.to_le_bytes().to_vec();
    frame.extend(body);
    if let Ok(Reply::Index(index)) = receive::<Reply>(&mut frame.as_slice())
        && index.fault().is_none()
    {
        for variable in &index.variables {
            assert_eq!(index.lengths(variable).len(), index.dimension_names(variable).len());
        }
    }
}

/// A chunk table; one that is taken is used, on a file of zeros.
pub fn chunk_table(bytes: &[u8]) {
    any_chunk::table(bytes, Path::new("/dev/zero"));
}

/// How a chunk is stored (six bytes), and the chunk.
pub fn chunk(bytes: &[u8]) {
    any_chunk::undone(bytes);
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn any_bytes_are_borne(bytes in prop::collection::vec(any::<u8>(), 0..300)) {
            answer(&bytes);
            chunk_table(&bytes);
            chunk(&bytes);
        }

        #[test]
        fn a_table_with_some_other_bytes_is_borne(
            changes in prop::collection::vec((any::<prop::sample::Index>(), any::<u8>()), 0..6),
        ) {
            let mut bytes = any_chunk::sound_table();
            for (place, byte) in &changes {
                let place = place.index(bytes.len());
                bytes[place] = *byte;
            }
            chunk_table(&bytes);
        }
    }

    #[test]
    fn a_sound_table_is_used() {
        assert!(any_chunk::table(&any_chunk::sound_table(), Path::new("/dev/zero")));
    }
}
