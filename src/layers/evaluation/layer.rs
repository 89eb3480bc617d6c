//! A layer: one number per footprint.

use crate::granule::Channel;
use crate::layers::unit::LayerUnit;

/// What an expression gives: one number per footprint.
#[derive(Debug, Clone)]
pub struct Layer {
    /// The expression as typed.
    pub expression: String,
    /// What the numbers are measured in, as far as that was followed.
    pub unit: LayerUnit,
    /// One per footprint in row-major order; NaN where missing, never infinite.
    pub values: Vec<f64>,
    /// The channels that `bt` and `rad` of one place took, in the order of the text.
    pub channels: Vec<Channel>,
    /// The bands of all channels that it takes, each once.
    pub bands: Vec<usize>,
    /// Footprints, in their order, at which a radiance that the expression uses itself is zero or
    /// less and so has no brightness temperature.
    pub not_positive: Vec<usize>,
    /// What a reader of the numbers should know.
    pub notes: Vec<String>,
}
