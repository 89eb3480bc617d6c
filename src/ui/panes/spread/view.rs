//! What the Spread is drawn from.

/// Everything the Spread shows.
#[derive(Clone, Copy, Debug)]
pub struct SpreadView<'a> {
    /// What follows the pane's name in the title: the layer, or both.
    pub title: &'a str,
    /// What stands above the picture: counts, and how a threshold does.
    pub words: &'a str,
    /// The picture.
    pub picture: Picture<'a>,
    /// Why there is nothing to show, where there is nothing.
    pub empty: &'a str,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// One layer, or two.
#[derive(Clone, Copy, Debug)]
pub enum Picture<'a> {
    /// How the values of a layer lie.
    Heaps(Heaps<'a>),
    /// Two layers against each other.
    Density(Density<'a>),
}

/// How a footprint counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// With a flag.
    Flagged,
    /// Assessed, and without a flag.
    Clear,
    /// Neither flagged nor assessed.
    Open,
}

/// The values of one layer. Slices stand per footprint; those that are too short tell nothing of the
/// footprints beyond their end.
#[derive(Clone, Copy, Debug)]
pub struct Heaps<'a> {
    /// The values; NaN is missing.
    pub values: &'a [f64],
    /// Their unit; empty for a bare number.
    pub unit: &'a str,
    /// How each footprint counts.
    pub kinds: &'a [Kind],
    /// The footprints that are selected. Empty: none is.
    pub selected: &'a [bool],
    /// From where to where the picture goes.
    pub range: (f64, f64),
    /// The threshold, and whether what lies above it is meant.
    pub threshold: Option<(f64, bool)>,
    /// A proposed threshold.
    pub valley: Option<f64>,
    /// The value under the cursor.
    pub cursor: Option<f64>,
    /// From where to where a brush goes.
    pub brush: Option<(f64, f64)>,
}

/// Two layers against each other.
#[derive(Clone, Copy, Debug)]
pub struct Density<'a> {
    /// The values across and upwards; NaN is missing.
    pub values: [&'a [f64]; 2],
    /// What they are, with their units.
    pub names: [&'a str; 2],
    /// The footprints that are selected. Empty: none is.
    pub selected: &'a [bool],
    /// From where to where the picture goes, across and upwards.
    pub ranges: [(f64, f64); 2],
    /// The values under the cursor of the map.
    pub cursor: Option<(f64, f64)>,
    /// The place that the keys move.
    pub at: Option<(f64, f64)>,
    /// The corners of what is being drawn but for the last, which is `at`.
    pub corners: &'a [(f64, f64)],
}
