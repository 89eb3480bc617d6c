//! Makes a file need a filter that nobody has, by changing the number of the one it uses.
//!
//! Source of the layout: HDF5 File Format Specification, version 3, sections IV.A.1.b (object header,
//! version 2) and IV.A.2.l (filter pipeline message, version 2).

/// Shuffle and deflate at level 4, as a pipeline message describes them.
const PIPELINE: [u8; 22] = [
    2, 2, // version, number of filters
    2, 0, 1, 0, 1, 0, 4, 0, 0, 0, // shuffle, optional, one value: 4 bytes
    1, 0, 1, 0, 1, 0, 4, 0, 0, 0, // deflate, optional, one value: level 4
];

/// A filter number below 256 that is not assigned.
const UNASSIGNED: u8 = 7;

/// The same file with the deflate filter replaced by one that does not exist.
pub fn with_another_filter(file: &[u8]) -> Vec<u8> {
    let mut file = file.to_vec();
    let shuffle_only = &PIPELINE[2..8];
    let pipeline = find(&file, &PIPELINE[..2], shuffle_only);
    let deflate = pipeline + 12;
    assert_eq!(file[deflate], 1, "deflate follows shuffle");
    file[deflate] = UNASSIGNED;
    let header = file[..pipeline].windows(4).rposition(|window| window == b"OHDR").unwrap();
    let end = checksum_place(&file, header);
    let checksum = lookup3(&file[header..end]);
    file[end..end + 4].copy_from_slice(&checksum.to_le_bytes());
    file
}

fn find(file: &[u8], version: &[u8], filter: &[u8]) -> usize {
    let wanted: Vec<u8> = version.iter().chain(filter).copied().collect();
    file.windows(wanted.len()).position(|window| window == wanted).unwrap()
}

/// Where the checksum of the object header at `header` stands.
pub fn checksum_place(file: &[u8], header: usize) -> usize {
    header + header_length(&file[header..])
}

/// The length of an object header's first chunk without its checksum.
fn header_length(header: &[u8]) -> usize {
    let flags = header[5];
    let mut at = 6;
    at += if flags & 0x20 != 0 { 16 } else { 0 };
    at += if flags & 0x10 != 0 { 4 } else { 0 };
    let size_bytes = 1 << (flags & 3);
    let size =
        (0..size_bytes).map(|byte| usize::from(header[at + byte]) << (8 * byte)).sum::<usize>();
    at + size_bytes + size
}

/// Bob Jenkins' lookup3 (`hashlittle`, initial value 0), the checksum of HDF5's metadata.
/// Source: burtleburtle.net/bob/c/lookup3.c, public domain.
pub fn lookup3(bytes: &[u8]) -> u32 {
    let start = 0xdead_beef_u32.wrapping_add(bytes.len() as u32);
    let mut state = [start; 3];
    let mut rest = bytes;
    while rest.len() > 12 {
        add(&mut state, &rest[..12]);
        mix(&mut state);
        rest = &rest[12..];
    }
    if rest.is_empty() {
        return state[2];
    }
    add(&mut state, rest);
    finish(&mut state);
    state[2]
}

fn add(state: &mut [u32; 3], bytes: &[u8]) {
    for (place, &byte) in bytes.iter().enumerate() {
        let word = &mut state[place / 4];
        *word = word.wrapping_add(u32::from(byte) << (8 * (place % 4)));
    }
}

fn mix(state: &mut [u32; 3]) {
    let [mut a, mut b, mut c] = *state;
    a = a.wrapping_sub(c) ^ c.rotate_left(4);
    c = c.wrapping_add(b);
    b = b.wrapping_sub(a) ^ a.rotate_left(6);
    a = a.wrapping_add(c);
    c = c.wrapping_sub(b) ^ b.rotate_left(8);
    b = b.wrapping_add(a);
    a = a.wrapping_sub(c) ^ c.rotate_left(16);
    c = c.wrapping_add(b);
    b = b.wrapping_sub(a) ^ a.rotate_left(19);
    a = a.wrapping_add(c);
    c = c.wrapping_sub(b) ^ b.rotate_left(4);
    b = b.wrapping_add(a);
    *state = [a, b, c];
}

fn finish(state: &mut [u32; 3]) {
    let [mut a, mut b, mut c] = *state;
    c = (c ^ b).wrapping_sub(b.rotate_left(14));
    a = (a ^ c).wrapping_sub(c.rotate_left(11));
    b = (b ^ a).wrapping_sub(a.rotate_left(25));
    c = (c ^ b).wrapping_sub(b.rotate_left(16));
    a = (a ^ c).wrapping_sub(c.rotate_left(4));
    b = (b ^ a).wrapping_sub(a.rotate_left(14));
    c = (c ^ b).wrapping_sub(b.rotate_left(24));
    *state = [a, b, c];
}
