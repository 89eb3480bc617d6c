//! Blocks, chunks and runs, against the plainest way to count.

use proptest::prelude::*;

use crate::netcdf_files::chunks::grid::Grid;

/// Lengths, chunk lengths, and a block inside.
fn cases() -> impl Strategy<Value = (Vec<usize>, Vec<usize>, Vec<usize>, Vec<usize>)> {
    let axis = (1_usize..9, 1_usize..6).prop_flat_map(|(length, chunk)| {
        (0..length).prop_flat_map(move |start| {
            (1..=length - start).prop_map(move |count| (length, chunk, start, count))
        })
    });
    prop::collection::vec(axis, 1..5).prop_map(|axes| {
        (
            axes.iter().map(|axis| axis.0).collect(),
            axes.iter().map(|axis| axis.1).collect(),
            axes.iter().map(|axis| axis.2).collect(),
            axes.iter().map(|axis| axis.3).collect(),
        )
    })
}

/// The place with that number in a block of the given lengths, counted row by row.
fn place(number: usize, lengths: &[usize]) -> Vec<usize> {
    let mut rest = number;
    let mut place = vec![0; lengths.len()];
    for axis in (0..lengths.len()).rev() {
        place[axis] = rest % lengths[axis];
        rest /= lengths[axis];
    }
    place
}

proptest! {
    /// Each value of a block comes from the chunk and the place in it that hold it, and from nowhere
    /// else; runs rise in both, which the sharing among threads relies on.
    #[test]
    fn pieces_cover_a_block_once_and_from_the_right_places(
        (lengths, chunk, start, count) in cases(),
        clipped in any::<bool>(),
    ) {
        let grid = Grid::new(&lengths, &chunk, clipped).unwrap();
        let mut seen = vec![false; count.iter().product()];
        for piece in grid.pieces(&start, &count) {
            let origin = grid.place(piece.number);
            prop_assert_eq!(grid.number_at(&origin), Some(piece.number));
            prop_assert_eq!(grid.stored_values(piece.number), piece.stored_values);
            let stored: Vec<usize> = (0..lengths.len())
                .map(|axis| match clipped {
                    true => chunk[axis].min(lengths[axis] - origin[axis]),
                    false => chunk[axis],
                })
                .collect();
            let mut last = None;
            for begin in piece.runs.starts() {
                prop_assert!(last.is_none_or(|(c, b)| c < begin.0 && b < begin.1));
                last = Some(begin);
                for step in 0..piece.runs.length {
                    let in_block = place(begin.1 + step, &count);
                    let in_chunk = place(begin.0 + step, &stored);
                    for axis in 0..lengths.len() {
                        prop_assert_eq!(start[axis] + in_block[axis], origin[axis] + in_chunk[axis]);
                    }
                    prop_assert!(!std::mem::replace(&mut seen[begin.1 + step], true));
                }
            }
        }
        prop_assert!(seen.into_iter().all(|seen| seen));
    }

    #[test]
    fn rows_of_chunks_cover_a_block(
        (lengths, chunk, start, count) in cases(),
    ) {
        let grid = Grid::new(&lengths, &chunk, false).unwrap();
        let mut next = start[0];
        for (first, length) in grid.rows(start[0], count[0]) {
            prop_assert_eq!(first, next);
            prop_assert_eq!(first / chunk[0], (first + length - 1) / chunk[0]);
            next += length;
        }
        prop_assert_eq!(next, start[0] + count[0]);
    }
}

#[test]
fn impossible_tilings_are_none() {
    assert!(Grid::new(&[3, 0], &[1, 1], false).is_none());
    assert!(Grid::new(&[3, 1], &[1, 0], false).is_none());
    assert!(Grid::new(&[3], &[1, 1], false).is_none());
    assert!(Grid::new(&[usize::MAX, 2], &[1, 1], false).is_none());
    assert!(Grid::new(&[3, 3], &[usize::MAX, 2], false).is_none());
}

#[test]
fn whole_chunks_make_single_runs() {
    let grid = Grid::new(&[45, 30, 9, 717], &[1, 30, 9, 717], false).unwrap();
    let pieces = grid.pieces(&[7, 0, 0, 0], &[1, 30, 9, 717]);
    assert_eq!(pieces.len(), 1);
    assert_eq!((pieces[0].number, pieces[0].runs.count), (7, 1));
    assert_eq!(pieces[0].runs.length, 30 * 9 * 717);
}
