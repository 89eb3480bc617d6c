//! Footprints where a condition holds, worked out beside the keys.

use crate::layers::LayerUnit;
use crate::review::Review;
use crate::system::Cancel;
use crate::ui::overlay::Selection;

use super::Wanted;

/// The footprints, and what has to be said about them.
pub type Found = Result<(Selection, Option<String>), String>;

/// The footprints where a condition holds, with what has been read so far.
///
/// # Errors
/// In one line: no condition, or something that the granule lacks, or it was cancelled.
pub fn where_holds(review: &Review, text: &str, cancel: &Cancel) -> Found {
    let layer = review.layer(text, cancel)?;
    if layer.unit != LayerUnit::Truth {
        return Err(format!("{text} is no condition; compare it, as in {text} > 0"));
    }
    let missing = layer.values.iter().filter(|value| value.is_nan()).count();
    let holds = |value: &f64| *value != 0.0 && !value.is_nan();
    let values = layer.values.iter().enumerate();
    let footprints = values.filter(|(_, value)| holds(value)).map(|(one, _)| one).collect();
    let note = (missing > 0).then(|| format!("{missing} have no value and are left out"));
    let words = Wanted::Condition(text.to_owned()).words();
    Ok((Selection::of(footprints, words), note))
}
