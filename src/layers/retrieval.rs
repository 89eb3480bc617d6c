//! Values that a method works out from several layers at once, such as the height of a cloud.

use super::names::Names;
use super::syntax::Expression;
use super::unit::LayerUnit;
use crate::granule::Channel;

/// What a retrieval works on.
#[derive(Debug, Clone)]
pub struct Input {
    /// The layer.
    pub layer: Expression,
    /// Whether nothing can be done without it; else it may be lacking.
    pub needed: bool,
}

/// What came out.
#[derive(Debug, Clone, Default)]
pub struct Retrieved {
    /// One column for each output, or for each function; NaN where missing.
    pub columns: Vec<Vec<f64>>,
    /// What a reader of the numbers should know.
    pub notes: Vec<String>,
}

/// A method that makes several values from several layers. Its results are names that expressions
/// can use; what it takes is gathered together with everything else.
pub trait Retrieval: Sync {
    /// Names and units of what comes out.
    fn outputs(&self) -> &[(&'static str, LayerUnit)];

    /// Names and units of what comes out for one channel, as functions of its place.
    fn functions(&self) -> &[(&'static str, LayerUnit)] {
        &[]
    }

    /// The layers that it works on, for its outputs or, where a channel is given, for its functions;
    /// none of them may use what comes out of a retrieval. The first that is needed and can't be had
    /// is what the reader is told of.
    fn inputs(&self, names: &dyn Names, channel: Option<&Channel>) -> Vec<Input>;

    /// Works: `inputs` holds one column for each input, `None` where the file lacks it.
    fn run(
        &self,
        names: &dyn Names,
        inputs: &[Option<&[f64]>],
        channel: Option<&Channel>,
    ) -> Retrieved;
}
