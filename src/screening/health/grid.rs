//! The footprints as an instrument sees them: scan lines, positions, detectors.

use crate::granule::FootprintGrid;

/// Lines x positions x detectors. One dimension is taken for lines, two for lines and positions;
/// a third is taken for detectors.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct ScanGrid {
    /// Scan lines.
    pub lines: usize,
    /// Positions in a line.
    pub positions: usize,
    /// Detectors at a position; 1 where the file has no dimension for them.
    pub detectors: usize,
}

impl ScanGrid {
    /// That of a granule.
    pub fn of(footprints: &FootprintGrid) -> Self {
        let lengths = footprints.lengths();
        let length = |place: usize| lengths.get(place).copied().unwrap_or(1);
        Self { lines: length(0), positions: length(1), detectors: length(2) }
    }

    /// How many footprints.
    pub fn count(&self) -> usize {
        self.lines * self.positions * self.detectors
    }

    /// Footprints of a line.
    pub fn row_length(&self) -> usize {
        self.positions * self.detectors
    }

    /// The line of a footprint.
    pub fn line(&self, footprint: usize) -> usize {
        footprint / self.row_length().max(1)
    }

    /// The detector of a footprint.
    pub fn detector(&self, footprint: usize) -> usize {
        footprint % self.detectors.max(1)
    }

    /// Footprints of one detector.
    pub fn of_detector(&self, detector: usize) -> impl Iterator<Item = usize> + use<> {
        (detector..self.count()).step_by(self.detectors.max(1))
    }

    /// About `most` footprints over the whole granule, as pairs that one detector saw one after the
    /// other: side by side in a line, or in two lines where a line has one position.
    pub fn pairs(&self, most: usize) -> Vec<(usize, usize)> {
        let (apart, places) = match self.positions {
            0 | 1 => (self.row_length(), self.lines / 2),
            positions => (self.detectors, self.lines * (positions / 2)),
        };
        let total = places * self.detectors;
        let step = (2 * total / most.max(1)).max(1);
        let in_line = (self.positions.max(2) / 2 * self.detectors).max(1);
        let pair = |number: usize| {
            let (place, detector) = (number / self.detectors, number % self.detectors);
            let first = match self.positions {
                0 | 1 => 2 * place * self.row_length(),
                positions => {
                    let (line, half) = (place / (positions / 2), place % (positions / 2));
                    (line * positions + 2 * half) * self.detectors
                }
            };
            (first + detector, first + detector + apart)
        };
        // Each line begins one further, or only some of the detectors would be seen.
        let taken = |number: &usize| (number % in_line + number / in_line).is_multiple_of(step);
        (0..total).filter(taken).map(pair).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pairs_lie_side_by_side_and_everywhere() {
        for (lines, positions, detectors) in [(45, 30, 9), (135, 90, 1), (21, 20, 4), (3, 5, 9)] {
            let grid = ScanGrid { lines, positions, detectors };
            let pairs = grid.pairs(1200);
            assert!(pairs.len() <= 1200, "{}", pairs.len());
            assert!(pairs.len() >= 600.min(grid.count() / 2 - 30));
            let (mut seen_lines, mut seen_detectors) = (vec![0; lines], vec![0; detectors]);
            for (one, other) in pairs {
                assert_eq!(other - one, detectors);
                assert_eq!(grid.line(one), grid.line(other));
                seen_lines[grid.line(one)] += 1;
                seen_detectors[grid.detector(one)] += 1;
            }
            assert!(seen_lines.iter().all(|seen| *seen > 0), "{seen_lines:?}");
            assert!(seen_detectors.iter().all(|seen| *seen > 0), "{seen_detectors:?}");
        }
    }

    #[test]
    fn a_line_of_one_position_is_paired_with_the_next() {
        let grid = ScanGrid { lines: 5, positions: 1, detectors: 2 };
        assert_eq!(grid.pairs(100), [(0, 2), (1, 3), (4, 6), (5, 7)]);
    }
}
