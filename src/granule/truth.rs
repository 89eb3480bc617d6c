//! The truth of a synthetic granule: what its maker knows, and no instrument would tell.

use crate::netcdf_files::Variable;

/// The group that holds it.
const GROUP: &str = "truth";

/// Whether a variable is part of it. Nothing may be found there that layers or tests are to use by
/// themselves: they would look well by knowing the answer. Whoever asks for it by name gets it.
pub fn is_truth(variable: &Variable) -> bool {
    variable.path.split('/').rev().skip(1).any(|group| group == GROUP)
}
