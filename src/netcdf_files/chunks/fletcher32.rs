//! The checksum behind a chunk.

/// Sums that can be added up before the 32 bits overflow.
const BLOCK: usize = 360 * 2;

/// Fletcher's checksum of 16-bit words, the most significant byte first, as HDF5 computes it (HDF5
/// File Format Specification, section IV.A.2.l, filter 3; J. G. Fletcher, IEEE Transactions on
/// Communications 30, 247, 1982), starting from zero.
fn fletcher32(bytes: &[u8]) -> u32 {
    let (mut first, mut second) = (0_u32, 0_u32);
    for block in bytes.chunks(BLOCK) {
        let (words, rest) = block.as_chunks::<2>();
        let last = rest.first().map(|&byte| [byte, 0]);
        for word in words.iter().copied().chain(last) {
            first += u32::from(u16::from_be_bytes(word));
            second += first;
        }
        first = fold(first);
        second = fold(second);
    }
    fold(second) << 16 | fold(first)
}

fn fold(sum: u32) -> u32 {
    (sum & 0xffff) + (sum >> 16)
}

/// Whether `checksum` is the one of `bytes`, or the one that HDF5 before 1.6.3 wrote on little-endian
/// machines, with the bytes of both halves swapped.
pub fn holds(bytes: &[u8], checksum: u32) -> bool {
    let right = fletcher32(bytes);
    let [a, b, c, d] = right.to_le_bytes();
    checksum == right || checksum == u32::from_le_bytes([b, a, d, c])
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Two words by hand: first sums 0x0102 and 0x0406, second sums 0x0102 and 0x0508.
    #[test]
    fn two_words_by_hand() {
        assert_eq!(fletcher32(&[1, 2, 3, 4]), 0x0508_0406);
        assert!(holds(&[1, 2, 3, 4], 0x0508_0406));
        assert!(holds(&[1, 2, 3, 4], 0x0805_0604), "as old versions wrote it");
        assert!(!holds(&[1, 2, 3, 5], 0x0508_0406));
    }

    #[test]
    fn an_odd_byte_counts_as_the_upper_half_of_a_word() {
        assert_eq!(fletcher32(&[1, 2, 3]), fletcher32(&[1, 2, 3, 0]));
    }

    #[test]
    fn the_largest_sums_do_not_overflow() {
        // All words are 0xffff, which is zero modulo 0xffff, so both sums fold to 0xffff.
        assert_eq!(fletcher32(&[0xff; 4 * BLOCK]), 0xffff_ffff);
    }
}
