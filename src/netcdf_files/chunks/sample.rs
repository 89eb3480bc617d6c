//! From bytes to numbers, straight into place.

use super::filters::Undone;

/// A number that a file stores.
pub trait Sample: Copy + Default + Send + Sync {
    /// Copies values from `first` on into `out`. There are enough values from there on.
    fn copy(source: &Source<'_>, first: usize, out: &mut [Self]);

    /// The value of its bytes, least significant first; the default where they are too few.
    fn from_little_endian(bytes: &[u8]) -> Self;
}

/// Where values are copied from.
#[derive(Debug, Clone, Copy)]
pub enum Source<'a> {
    /// One value for all places, least significant byte first.
    Fill(&'a [u8]),
    /// A chunk's bytes.
    Chunk {
        /// The bytes.
        undone: Undone<'a>,
        /// Whether the most significant byte comes first.
        big_endian: bool,
    },
}

/// Joins the byte planes of one range of values. The slices are of equal length, and stand in the
/// order of significance, least first.
macro_rules! join_planes {
    ($out:ident, $planes:ident, 1) => {
        for (out, &a) in $out.iter_mut().zip($planes[0]) {
            *out = Self::from_le_bytes([a]);
        }
    };
    ($out:ident, $planes:ident, 2) => {
        let [a, b] = $planes;
        for ((out, &a), &b) in $out.iter_mut().zip(a).zip(b) {
            *out = Self::from_le_bytes([a, b]);
        }
    };
    ($out:ident, $planes:ident, 4) => {
        let [a, b, c, d] = $planes;
        for ((((out, &a), &b), &c), &d) in $out.iter_mut().zip(a).zip(b).zip(c).zip(d) {
            *out = Self::from_le_bytes([a, b, c, d]);
        }
    };
    ($out:ident, $planes:ident, 8) => {
        let [a, b, c, d, e, f, g, h] = $planes;
        let lower = a.iter().zip(b).zip(c).zip(d);
        let upper = e.iter().zip(f).zip(g).zip(h);
        for ((out, (((&a, &b), &c), &d)), (((&e, &f), &g), &h)) in
            $out.iter_mut().zip(lower).zip(upper)
        {
            *out = Self::from_le_bytes([a, b, c, d, e, f, g, h]);
        }
    };
}

macro_rules! sample {
    ($($number:ty: $size:tt),*) => {$(
        impl Sample for $number {
            fn copy(source: &Source<'_>, first: usize, out: &mut [Self]) {
                const SIZE: usize = $size;
                match *source {
                    Source::Fill(value) => out.fill(Self::from_little_endian(value)),
                    Source::Chunk { undone: Undone::Plain(bytes), big_endian } => {
                        let (values, _) = bytes.as_chunks::<SIZE>();
                        let values = out.iter_mut().zip(&values[first..]);
                        if big_endian {
                            values.for_each(|(out, &bytes)| *out = Self::from_be_bytes(bytes));
                        } else {
                            values.for_each(|(out, &bytes)| *out = Self::from_le_bytes(bytes));
                        }
                    }
                    Source::Chunk { undone: Undone::Planes(bytes), big_endian } => {
                        let values = bytes.len() / SIZE;
                        let plane = |number: usize| {
                            let begin = number * values + first;
                            &bytes[begin..begin + out.len()]
                        };
                        let mut planes: [&[u8]; SIZE] = std::array::from_fn(plane);
                        if big_endian {
                            planes.reverse();
                        }
                        join_planes!(out, planes, $size);
                    }
                }
            }

            fn from_little_endian(bytes: &[u8]) -> Self {
                bytes.first_chunk().map_or(Self::default(), |&bytes| Self::from_le_bytes(bytes))
            }
        }
    )*};
}
sample!(i8: 1, u8: 1, i16: 2, u16: 2, i32: 4, u32: 4, i64: 8, u64: 8, f32: 4, f64: 8);

#[cfg(test)]
mod tests {
    use super::*;

    fn chunk(undone: Undone<'_>, big_endian: bool) -> Source<'_> {
        Source::Chunk { undone, big_endian }
    }

    #[test]
    fn bytes_in_either_order_become_numbers() {
        let bytes = [1, 2, 3, 4];
        let mut out = [0_u16];
        u16::copy(&chunk(Undone::Plain(&bytes), false), 1, &mut out);
        assert_eq!(out, [0x0403]);
        u16::copy(&chunk(Undone::Plain(&bytes), true), 1, &mut out);
        assert_eq!(out, [0x0304]);
    }

    #[test]
    fn planes_are_joined_for_every_size_and_order() {
        // Plane n holds the bytes n, n + 16, n + 32 of three values.
        let planes: Vec<u8> = (0..8).flat_map(|plane| [plane, plane + 16, plane + 32]).collect();
        let mut out = [0_u64; 2];
        u64::copy(&chunk(Undone::Planes(&planes), false), 1, &mut out);
        assert_eq!(out, [0x1716_1514_1312_1110, 0x2726_2524_2322_2120]);
        u64::copy(&chunk(Undone::Planes(&planes), true), 1, &mut out);
        assert_eq!(out, [0x1011_1213_1415_1617, 0x2021_2223_2425_2627]);
        let mut out = [0_i32; 3];
        i32::copy(&chunk(Undone::Planes(&planes[..12]), true), 0, &mut out);
        assert_eq!(out, [0x0001_0203, 0x1011_1213, 0x2021_2223]);
        let mut out = [0_u16; 1];
        u16::copy(&chunk(Undone::Planes(&planes[..6]), false), 2, &mut out);
        assert_eq!(out, [0x2120]);
        let mut out = [0_i8; 2];
        i8::copy(&chunk(Undone::Planes(&planes[..3]), true), 1, &mut out);
        assert_eq!(out, [16, 32]);
    }

    #[test]
    fn a_fill_value_stands_in_all_places() {
        let mut out = [0.0_f32; 2];
        f32::copy(&Source::Fill(&1.5_f32.to_le_bytes()), 7, &mut out);
        assert_eq!(out, [1.5, 1.5]);
    }
}
