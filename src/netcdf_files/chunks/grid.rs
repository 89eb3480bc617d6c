//! How chunks tile a variable, and which parts of them make up a block.

/// The tiling of a variable by chunks. Numbers and places count row by row, slowest dimension first.
#[derive(Debug, Clone, PartialEq)]
pub struct Grid {
    lengths: Vec<usize>,
    chunk: Vec<usize>,
    counts: Vec<usize>,
    chunks: usize,
    chunk_values: usize,
    clipped: bool,
}

/// The part of one chunk that lies in a block.
#[derive(Debug, Clone, PartialEq)]
pub struct Piece {
    /// The chunk's number.
    pub number: usize,
    /// How many values the chunk holds as it is stored.
    pub stored_values: usize,
    /// The runs of values that are neighbours both in the chunk and in the block.
    pub runs: Runs,
}

/// Runs of equal length: where each one begins in the chunk, and where in the block.
#[derive(Debug, Clone, PartialEq)]
pub struct Runs {
    /// Values of a run.
    pub length: usize,
    /// How many runs there are.
    pub count: usize,
    chunk_start: usize,
    block_start: usize,
    /// The dimensions that are stepped through: length, stride in the chunk, stride in the block.
    outer: Vec<(usize, usize, usize)>,
}

impl Grid {
    /// The tiling; none where lengths are zero, do not match, or multiply to more than there is.
    /// With `clipped`, chunks at the far edges are stored without the places beyond the edge.
    pub fn new(lengths: &[usize], chunk: &[usize], clipped: bool) -> Option<Self> {
        if lengths.len() != chunk.len() || lengths.contains(&0) || chunk.contains(&0) {
            return None;
        }
        // Strides are computed from these without further checks.
        product(lengths)?.checked_mul(8)?;
        let counts: Vec<usize> =
            lengths.iter().zip(chunk).map(|(&length, &chunk)| length.div_ceil(chunk)).collect();
        Some(Self {
            chunks: product(&counts)?,
            chunk_values: product(chunk)?,
            lengths: lengths.to_vec(),
            chunk: chunk.to_vec(),
            counts,
            clipped,
        })
    }

    /// How many chunks tile the variable.
    pub fn chunks(&self) -> usize {
        self.chunks
    }

    /// How many values a whole chunk holds.
    pub fn chunk_values(&self) -> usize {
        self.chunk_values
    }

    /// How many values the chunk with that number holds as it is stored.
    pub fn stored_values(&self, number: usize) -> usize {
        self.stored_lengths(&self.coordinates(number)).iter().product()
    }

    /// The place of a chunk's first value, for messages.
    pub fn place(&self, number: usize) -> Vec<usize> {
        let coordinates = self.coordinates(number);
        coordinates.iter().zip(&self.chunk).map(|(&place, &chunk)| place * chunk).collect()
    }

    /// The number of the chunk whose first value lies at `place`; none where no chunk begins.
    pub fn number_at(&self, place: &[usize]) -> Option<usize> {
        if place.len() != self.chunk.len() {
            return None;
        }
        let mut number = 0;
        for (axis, &place) in place.iter().enumerate() {
            if place % self.chunk[axis] != 0 || place >= self.lengths[axis] {
                return None;
            }
            number = number * self.counts[axis] + place / self.chunk[axis];
        }
        Some(number)
    }

    fn coordinates(&self, number: usize) -> Vec<usize> {
        let mut rest = number;
        let mut coordinates = vec![0; self.counts.len()];
        for axis in (0..self.counts.len()).rev() {
            coordinates[axis] = rest % self.counts[axis];
            rest /= self.counts[axis];
        }
        coordinates
    }

    fn stored_lengths(&self, coordinates: &[usize]) -> Vec<usize> {
        if !self.clipped {
            return self.chunk.clone();
        }
        let clipped = |(axis, &place): (usize, &usize)| {
            (self.lengths[axis] - place * self.chunk[axis]).min(self.chunk[axis])
        };
        coordinates.iter().enumerate().map(clipped).collect()
    }

    /// The rows of chunks, along the slowest dimension, that a block touches: for each one the part
    /// of the block that it covers along that dimension. The block must lie inside the variable.
    pub fn rows(&self, start: usize, count: usize) -> Vec<(usize, usize)> {
        let chunk = self.chunk[0];
        let mut rows = Vec::new();
        let (mut from, end) = (start, start + count);
        while from < end {
            let to = end.min((from / chunk + 1) * chunk);
            rows.push((from, to - from));
            from = to;
        }
        rows
    }

    /// The pieces that make up a block, which lies inside the variable and is not empty.
    pub fn pieces(&self, start: &[usize], count: &[usize]) -> Vec<Piece> {
        let first: Vec<usize> = start.iter().zip(&self.chunk).map(|(s, c)| s / c).collect();
        let last: Vec<usize> = (0..start.len())
            .map(|axis| (start[axis] + count[axis] - 1) / self.chunk[axis])
            .collect();
        let mut pieces = Vec::new();
        let mut coordinates = first.clone();
        loop {
            pieces.push(self.piece(&coordinates, start, count));
            // The next chunk, counting like an odometer.
            let turning = (0..first.len()).rev().find(|&axis| coordinates[axis] < last[axis]);
            let Some(axis) = turning else { return pieces };
            coordinates[axis] += 1;
            coordinates[axis + 1..].copy_from_slice(&first[axis + 1..]);
        }
    }

    fn piece(&self, coordinates: &[usize], start: &[usize], count: &[usize]) -> Piece {
        let stored = self.stored_lengths(coordinates);
        let mut runs =
            Runs { length: 1, count: 1, chunk_start: 0, block_start: 0, outer: Vec::new() };
        let (mut chunk_stride, mut block_stride) = (1, 1);
        // From the fastest dimension outwards; runs grow as long as they are whole on both sides.
        for axis in (0..start.len()).rev() {
            let origin = coordinates[axis] * self.chunk[axis];
            let from = start[axis].max(origin);
            let to = (start[axis] + count[axis]).min(origin + stored[axis]);
            runs.chunk_start += (from - origin) * chunk_stride;
            runs.block_start += (from - start[axis]) * block_stride;
            if chunk_stride == runs.length && block_stride == runs.length {
                runs.length *= to - from;
            } else {
                runs.count *= to - from;
                runs.outer.push((to - from, chunk_stride, block_stride));
            }
            chunk_stride *= stored[axis];
            block_stride *= count[axis];
        }
        let number = coordinates
            .iter()
            .zip(&self.counts)
            .fold(0, |number, (&place, &count)| number * count + place);
        Piece { number, stored_values: chunk_stride, runs }
    }
}

impl Runs {
    /// Where each run begins, in the chunk and in the block, in rising order of both.
    pub fn starts(&self) -> impl Iterator<Item = (usize, usize)> {
        (0..self.count).map(|number| {
            let (mut rest, mut in_chunk, mut in_block) =
                (number, self.chunk_start, self.block_start);
            for &(length, chunk_stride, block_stride) in &self.outer {
                in_chunk += rest % length * chunk_stride;
                in_block += rest % length * block_stride;
                rest /= length;
            }
            (in_chunk, in_block)
        })
    }
}

fn product(lengths: &[usize]) -> Option<usize> {
    lengths.iter().try_fold(1_usize, |product, &length| product.checked_mul(length))
}
