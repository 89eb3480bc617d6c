//! Neighbours by place in the array.

/// A map of footprints: rows, columns, and the footprint at each place in row-major order.
struct Map {
    rows: usize,
    columns: usize,
    footprints: Vec<u32>,
}

/// The 3x3 box around every footprint, cut off at the edges; and what had to be guessed.
pub fn lists(lengths: &[usize]) -> (Vec<Vec<u32>>, Option<String>) {
    let count = lengths.iter().product();
    let mut lists = vec![Vec::new(); count];
    let (maps, guess) = maps(lengths);
    for map in &maps {
        for row in 0..map.rows {
            for column in 0..map.columns {
                let own = map.footprints[row * map.columns + column];
                lists[own as usize] = map.around(row, column);
            }
        }
    }
    (lists, guess)
}

impl Map {
    fn around(&self, row: usize, column: usize) -> Vec<u32> {
        let mut found = Vec::with_capacity(9);
        for beside_row in row.saturating_sub(1)..(row + 2).min(self.rows) {
            for beside in column.saturating_sub(1)..(column + 2).min(self.columns) {
                found.push(self.footprints[beside_row * self.columns + beside]);
            }
        }
        found
    }
}

/// Two dimensions are a map as they stand. Detectors of a third are laid out as a square where
/// their number is one; otherwise each detector has a map of its own.
fn maps(lengths: &[usize]) -> (Vec<Map>, Option<String>) {
    let (lines, positions) =
        (lengths.first().copied().unwrap_or(0), lengths.get(1).copied().unwrap_or(1));
    let detectors = lengths.iter().skip(2).product::<usize>();
    let footprint = |line: usize, position: usize, detector: usize| {
        ((line * positions + position) * detectors + detector) as u32
    };
    let side = (1..=detectors).take_while(|side| side * side <= detectors).last().unwrap_or(1);
    if side * side == detectors {
        let mut map = Map { rows: lines * side, columns: positions * side, footprints: Vec::new() };
        for row in 0..map.rows {
            for column in 0..map.columns {
                let detector = (row % side) * side + column % side;
                map.footprints.push(footprint(row / side, column / side, detector));
            }
        }
        let guess = (side > 1).then(|| {
            format!("the {detectors} detectors are taken to be {side} rows of {side} in order")
        });
        return (vec![map], guess);
    }
    let maps = (0..detectors)
        .map(|detector| Map {
            rows: lines,
            columns: positions,
            footprints: (0..lines * positions)
                .map(|place| footprint(place / positions, place % positions, detector))
                .collect(),
        })
        .collect();
    let guess = "each detector is compared with itself at the positions around";
    (maps, Some(guess.to_owned()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn boxes_end_at_the_edges() {
        let (lists, guess) = lists(&[3, 4]);
        assert_eq!(lists[0], [0, 1, 4, 5]);
        assert_eq!(lists[5], [0, 1, 2, 4, 5, 6, 8, 9, 10]);
        assert_eq!(lists[3], [2, 3, 6, 7]);
        assert_eq!(guess, None);
    }

    #[test]
    fn nine_detectors_are_a_square() {
        let (lists, guess) = lists(&[1, 2, 9]);
        // Detector 5 of position 0 stands at the right edge of its square, beside position 1.
        assert_eq!(lists[5], [1, 2, 9, 4, 5, 12, 7, 8, 15]);
        assert!(guess.is_some());
    }

    #[test]
    fn five_detectors_are_kept_apart() {
        let (lists, _) = lists(&[2, 2, 5]);
        assert_eq!(lists[3], [3, 8, 13, 18]);
    }

    #[test]
    fn empty_shapes_have_no_neighbours() {
        for lengths in [&[][..], &[0, 5], &[0], &[3, 0, 9]] {
            assert!(lists(lengths).0.len() <= 1, "{lengths:?}");
        }
    }
}
