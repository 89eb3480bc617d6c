//! The intervals of the spectrum that cloud height looks at.

/// Intervals, cm-1: four in the wing of the CO2 band at 15 um, a window last. Each of the four spans
/// three CO2 lines, which lie 1.56 cm-1 apart, and no Q branch. Centres are those of [Menzel et al.
/// 1983] and [Wylie & Menzel 1999]: 14.2, 14.0, 13.7, 13.3 um.
pub const INTERVALS: [(f64, f64); 5] =
    [(702.0, 706.7), (713.0, 717.7), (731.0, 735.7), (749.0, 753.7), (899.0, 903.7)];

/// The place of the window among them.
pub const WINDOW: usize = 4;

/// Pairs of the four, the more opaque one first. The second and the third are none: between their lines
/// they see equally deep, so that their ratio hardly changes with height.
pub const PAIRS: [(usize, usize); 4] = [(0, 1), (0, 2), (1, 3), (2, 3)];

/// The middle of an interval, cm-1.
pub fn middle(interval: usize) -> f64 {
    let (low, high) = INTERVALS[interval];
    0.5 * (low + high)
}

/// How wide an interval is, cm-1.
pub fn width(interval: usize) -> f64 {
    let (low, high) = INTERVALS[interval];
    high - low
}
