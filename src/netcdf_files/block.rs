//! Places in a block of values.

/// Where the value with the given number lies, in a block that is read row by row.
pub fn place_in_block(number: usize, start: &[usize], count: &[usize]) -> Vec<usize> {
    let mut rest = number;
    let mut place = start.to_vec();
    for axis in (0..count.len()).rev() {
        place[axis] += rest % count[axis];
        rest /= count[axis];
    }
    place
}
