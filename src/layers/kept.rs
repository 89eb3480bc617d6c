//! What an evaluation finds out about a granule and the next one need not find out again.

use std::collections::BTreeMap;
use std::sync::{Mutex, OnceLock, PoisonError};

use super::names::{NameError, Values};
use super::neighbours::Neighbours;

/// Neighbours and variables of one granule. To find neighbours takes longer than any layer, and a
/// variable costs a question to the file; both stay the same as long as the granule does.
#[derive(Debug, Default)]
pub struct Kept {
    neighbours: OnceLock<Neighbours>,
    variables: Mutex<BTreeMap<String, Values>>,
}

impl Kept {
    /// The neighbours, found at the first call.
    pub fn neighbours(&self, find: impl FnOnce() -> Neighbours) -> &Neighbours {
        self.neighbours.get_or_init(find)
    }

    /// A variable, read at the first call; one that can't be read is tried again.
    pub(super) fn variable(
        &self,
        name: &str,
        read: impl FnOnce() -> Result<Values, NameError>,
    ) -> Result<Values, NameError> {
        let lock = || self.variables.lock().unwrap_or_else(PoisonError::into_inner);
        if let Some(values) = lock().get(name) {
            return Ok(values.clone());
        }
        let values = read()?;
        lock().insert(name.to_owned(), values.clone());
        Ok(values)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::layers::LayerUnit;

    #[test]
    fn a_variable_is_read_once_and_a_failure_is_tried_again() {
        let kept = Kept::default();
        let mut reads = 0;
        let mut ask = |works: bool| {
            kept.variable("quality", || {
                reads += 1;
                let values = Values { values: vec![1.0], unit: LayerUnit::One };
                if works { Ok(values) } else { Err(NameError::Unreadable("gone".into())) }
            })
        };
        assert!(ask(false).is_err());
        assert!(ask(true).is_ok() && ask(false).is_ok() && ask(true).is_ok());
        assert_eq!(reads, 2);
    }
}
