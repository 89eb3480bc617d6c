//! Ways to damage a file, each settled by a number.

use rand::{RngExt, SeedableRng};
use rand_chacha::ChaCha8Rng;

use crate::hostile::missing_filter::{checksum_place, lookup3};

/// What stands at the beginning of HDF5's own structures (HDF5 File Format Specification, version 3,
/// section III and IV.A).
const SIGNATURES: [&[u8; 4]; 17] = [
    b"OHDR", b"OCHK", b"TREE", b"SNOD", b"HEAP", b"GCOL", b"FRHP", b"FHDB", b"FHIB", b"FADB",
    b"FAHD", b"EAHD", b"EAIB", b"EADB", b"BTHD", b"BTLF", b"BTIN",
];

/// Bytes behind a signature, and at the beginning of a file, that are headers rather than values.
const HEADER: usize = 256;

/// Damage number `seed` done to a file, and what it is in words.
pub fn damaged(file: &[u8], seed: u64) -> (String, Vec<u8>) {
    let mut random = ChaCha8Rng::seed_from_u64(seed);
    let mut bytes = file.to_vec();
    let all = 0..file.len();
    let what = match seed % 9 {
        0 => cut(&mut bytes, &mut random),
        1 => flip(&mut bytes, &headers(file), "headers", &mut random),
        2 => flip(&mut bytes, std::slice::from_ref(&all), "all of it", &mut random),
        3 => overwrite(&mut bytes, std::slice::from_ref(&all), 0, &mut random),
        4 => overwrite(&mut bytes, &headers(file), 0xff, &mut random),
        5 => shift(&mut bytes, &mut random),
        6 => change_checked(&mut bytes, &mut random),
        7 => copy(&mut bytes, &mut random),
        _ => number(&mut bytes, &headers(file), &mut random),
    };
    (format!("damage {seed}: {what}"), bytes)
}

/// Where the headers of a file are.
fn headers(file: &[u8]) -> Vec<std::ops::Range<usize>> {
    let begins = |place: &usize| SIGNATURES.iter().any(|sign| file[*place..].starts_with(*sign));
    let places = [0].into_iter().chain((0..file.len()).filter(begins));
    places.map(|place| place..(place + HEADER).min(file.len())).collect()
}

fn place_in(ranges: &[std::ops::Range<usize>], random: &mut ChaCha8Rng) -> usize {
    let range = ranges[random.random_range(0..ranges.len())].clone();
    random.random_range(range)
}

/// Files are cut at any length, as often near their beginning as elsewhere.
fn cut(bytes: &mut Vec<u8>, random: &mut ChaCha8Rng) -> String {
    let most = if random.random() { bytes.len() } else { 4096.min(bytes.len()) };
    bytes.truncate(random.random_range(1..most));
    format!("cut to {} bytes", bytes.len())
}

fn flip(
    bytes: &mut [u8],
    ranges: &[std::ops::Range<usize>],
    where_: &str,
    random: &mut ChaCha8Rng,
) -> String {
    let flips = random.random_range(1..=8);
    for _ in 0..flips {
        bytes[place_in(ranges, random)] ^= 1 << random.random_range(0..8);
    }
    format!("{flips} flipped bits in {where_}")
}

fn overwrite(
    bytes: &mut [u8],
    ranges: &[std::ops::Range<usize>],
    value: u8,
    random: &mut ChaCha8Rng,
) -> String {
    let place = place_in(ranges, random);
    let end = (place + [4, 16, 64, 512, 4096][random.random_range(0..5)]).min(bytes.len());
    bytes[place..end].fill(value);
    format!("{value} from {place} to {end}")
}

/// Bytes lost, or put in between: all behind them stands elsewhere.
fn shift(bytes: &mut Vec<u8>, random: &mut ChaCha8Rng) -> String {
    let place = random.random_range(0..bytes.len());
    let count = random.random_range(1..600);
    if random.random() {
        let end = (place + count).min(bytes.len());
        bytes.drain(place..end);
        format!("{} bytes lost at {place}", end - place)
    } else {
        bytes.splice(place..place, std::iter::repeat_n(0xa5, count));
        format!("{count} bytes put in at {place}")
    }
}

/// A byte of an object header changed and its checksum made right again, so that the library takes
/// it; where a file has no such header, a byte of its own header.
fn change_checked(bytes: &mut [u8], random: &mut ChaCha8Rng) -> String {
    let is_header = |place: &usize| bytes[*place..].starts_with(b"OHDR");
    let places: Vec<usize> = (0..bytes.len()).filter(is_header).collect();
    if places.is_empty() {
        let place = random.random_range(4..HEADER);
        bytes[place] = random.random();
        return format!("another byte at {place}");
    }
    let header = places[random.random_range(0..places.len())];
    let end = checksum_place(bytes, header);
    let place = random.random_range(header + 8..end);
    bytes[place] = random.random();
    let checksum = lookup3(&bytes[header..end]);
    bytes[end..end + 4].copy_from_slice(&checksum.to_le_bytes());
    format!("another byte at {place} under a right checksum")
}

/// A stretch of the file that stands in the place of another one, as a lost write leaves it.
fn copy(bytes: &mut [u8], random: &mut ChaCha8Rng) -> String {
    let length = random.random_range(8..2048).min(bytes.len() / 2);
    let from = random.random_range(0..bytes.len() - length);
    let to = random.random_range(0..bytes.len() - length);
    bytes.copy_within(from..from + length, to);
    format!("{length} bytes from {from} copied to {to}")
}

/// A number in a header made one that overflows, or that is next to doing so.
fn number(bytes: &mut [u8], ranges: &[std::ops::Range<usize>], random: &mut ChaCha8Rng) -> String {
    const NUMBERS: [u64; 6] = [0, 1, u32::MAX as u64, i32::MAX as u64, u64::MAX, i64::MAX as u64];
    let number = NUMBERS[random.random_range(0..NUMBERS.len())];
    let size = if random.random() { 4 } else { 8 };
    let place = place_in(ranges, random).min(bytes.len() - size) & !3;
    // Classic files store the most significant byte first, HDF5 the least.
    let number =
        if bytes.starts_with(b"CDF") { number.to_be_bytes() } else { number.to_le_bytes() };
    bytes[place..place + size].copy_from_slice(&number[..size]);
    format!("a monstrous number at {place}")
}
