//! Values that a method works out from several layers at once, such as the height of a cloud.

use super::syntax::Expression;
use super::unit::LayerUnit;

/// What a retrieval works on.
#[derive(Debug, Clone)]
pub struct Input {
    /// The layer.
    pub layer: Expression,
    /// Whether nothing can be done without it; else it may be lacking.
    pub needed: bool,
}

/// A method that makes several values from several layers. Its results are names that expressions
/// can use; what it takes is gathered together with everything else.
pub trait Retrieval: Sync {
    /// Names and units of what comes out.
    fn outputs(&self) -> &[(&'static str, LayerUnit)];

    /// The layers that it works on; none of them may use what comes out of a retrieval.
    fn inputs(&self) -> &[Input];

    /// What a reader of the results should know.
    fn note(&self) -> String;

    /// Works: `lengths` are those of the footprint dimensions, `inputs` one column for each input,
    /// `None` where the file lacks it. One column for each output comes back; NaN where missing.
    fn run(&self, lengths: &[usize], inputs: &[Option<&[f64]>]) -> Vec<Vec<f64>>;
}
