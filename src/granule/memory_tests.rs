//! A granule that does not fit into the memory that its values may take, against one that does.

use std::path::Path;
use std::sync::atomic::{AtomicU64, Ordering};

use super::tests::{File, UNIT, axis, file, put, radiance};
use super::*;
use crate::netcdf_files::{NetcdfWriter, ReadLimits, ReaderProgram};
use crate::system::Cancel;

const LINES: usize = 60;
const POSITIONS: usize = 20;
const CHANNELS: [usize; 2] = [210, 90];

/// 1.4 MB of values in chunks of 5 and of 7 lines.
fn write(writer: &mut NetcdfWriter) {
    writer.dimension("line", LINES).unwrap();
    writer.dimension("position", POSITIONS).unwrap();
    for (band, (channels, rows)) in CHANNELS.into_iter().zip([5, 7]).enumerate() {
        let (nu, name) = (format!("nu_{band}"), format!("radiance_{band}"));
        writer.dimension(&nu, channels).unwrap();
        let first = 700.0 + 1000.0 * band as f64;
        let wavenumbers: Vec<f64> = (0..channels).map(|n| first + 0.5 * n as f64).collect();
        put(writer, axis(&nu, &nu, "cm-1"), wavenumbers);
        // Every 1000th value is a fill that the file does not declare.
        let value = |n: usize| if n % 1000 == 7 { -9999.0 } else { (n % 4093) as f32 };
        let values: Vec<f32> = (0..LINES * POSITIONS * channels).map(value).collect();
        let draft = radiance(&name, &["line", "position", &nu], UNIT);
        put(writer, draft.chunks(&[rows, POSITIONS, channels]).deflate(1), values);
    }
}

fn open_within(path: &Path, bytes: u64) -> Granule {
    let limits = ReadLimits { values: Some(bytes), ..ReadLimits::default() };
    Granule::open(&ReaderProgram::in_process(), path, &limits).unwrap()
}

fn both(budget: u64) -> (File, Granule, Granule) {
    let file = file(write);
    let (whole, part) = (open_within(&file.path, u64::MAX), open_within(&file.path, budget));
    for granule in [&whole, &part] {
        granule.fill(&Cancel::new(), &mut |_| {}).unwrap();
    }
    (file, whole, part)
}

fn channels(granule: &Granule, band: usize, footprints: std::ops::Range<usize>) -> Vec<u64> {
    let mut out = vec![0.0; 3 * footprints.len()];
    granule.channels_over(band, &[0, 17, 80], footprints, None, &mut out).unwrap();
    out.into_iter().map(f64::to_bits).collect()
}

#[test]
fn numbers_are_the_same_and_memory_stays_within_a_seventh() {
    let budget = 200_000;
    let (_file, whole, part) = both(budget);
    assert!(whole.cube().bytes() > 7 * budget);
    assert!(!whole.cube().is_full() && part.cube().is_full());
    assert!(part.cube().held_bytes() > 0, "what fits is kept");
    let all = LINES * POSITIONS;
    let (mut here, mut read) = (Vec::new(), Vec::new());
    for band in 0..2 {
        for piece in [0..all, 0..1, 333..1017, all - 1..all] {
            assert_eq!(channels(&whole, band, piece.clone()), channels(&part, band, piece));
        }
        for footprint in (0..all).rev().step_by(31) {
            whole.values(band, footprint, None, &mut here).unwrap();
            part.values(band, footprint, None, &mut read).unwrap();
            let bits = |values: &[f64]| values.iter().map(|v| v.to_bits()).collect::<Vec<_>>();
            assert_eq!(bits(&here), bits(&read));
            assert_eq!(bits(&here), bits(&part.read_spectrum(band, footprint).unwrap()));
            assert!(part.held_bytes() <= budget);
        }
    }
    let notes = |granule: &Granule| {
        granule.cube().notes().iter().map(ToString::to_string).collect::<Vec<_>>()
    };
    assert_eq!(notes(&whole).len(), 2);
    assert_eq!(notes(&whole), notes(&part), "each value is looked through once");
}

#[test]
fn many_threads_that_ask_at_once_stay_within_the_budget_together() {
    let budget = 300_000;
    let (_file, whole, part) = both(budget);
    let most = AtomicU64::new(0);
    part.at_work(|| {
        use rayon::prelude::*;
        let pieces: Vec<usize> =
            (0..LINES * POSITIONS).step_by(part.footprints_at_once()).collect();
        pieces.into_par_iter().for_each(|start| {
            let end = (start + part.footprints_at_once()).min(LINES * POSITIONS);
            for band in 0..2 {
                let (expected, found) =
                    (channels(&whole, band, start..end), channels(&part, band, start..end));
                assert_eq!(expected, found);
                most.fetch_max(part.held_bytes(), Ordering::Relaxed);
            }
        });
    });
    // A quarter is for the slabs in the threads' hands.
    assert!(most.into_inner() <= budget / 4 * 3);
}

#[test]
fn a_budget_of_nothing_still_works() {
    let (_file, whole, part) = both(0);
    assert_eq!(part.cube().held_bytes(), 0);
    assert_eq!(channels(&whole, 0, 100..140), channels(&part, 0, 100..140));
}

#[test]
fn damage_and_a_wish_to_stop_are_told_and_not_taken_for_missing() {
    let (_file, _, part) = both(100_000);
    let stop = Cancel::new();
    stop.cancel();
    let mut out = vec![0.0; LINES * POSITIONS];
    let cancelled = part.channels_over(0, &[1], 0..LINES * POSITIONS, Some(&stop), &mut out);
    assert!(matches!(cancelled, Err(GranuleError::Cancelled)));
    std::fs::OpenOptions::new().write(true).open(part.path()).unwrap().set_len(5000).unwrap();
    let lost = part.channels_over(0, &[1], 0..LINES * POSITIONS, None, &mut out).unwrap_err();
    assert!(lost.to_string().contains("has changed"), "{lost}");
}

#[test]
fn values_that_are_exactly_as_large_as_the_budget_stay() {
    let file = file(write);
    let all = open_within(&file.path, u64::MAX).cube().bytes();
    for (budget, is_full) in [(all, false), (all - 1, true)] {
        let granule = open_within(&file.path, budget);
        granule.fill(&Cancel::new(), &mut |_| {}).unwrap();
        assert_eq!(granule.cube().is_full(), is_full);
        assert_eq!(granule.cube().is_complete(0) && granule.cube().is_complete(1), !is_full);
    }
}
