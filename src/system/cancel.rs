//! A wish to stop, shared between the one who asks and the one who works.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// A flag that long work looks at between its steps. Clones share it.
#[derive(Debug, Clone, Default)]
pub struct Cancel(Arc<AtomicBool>);

impl Cancel {
    /// A flag that nobody has raised yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// Asks the work to stop at its next step; asking twice is harmless.
    pub fn cancel(&self) {
        self.0.store(true, Ordering::Relaxed);
    }

    /// Whether someone has asked to stop.
    pub fn is_cancelled(&self) -> bool {
        self.0.load(Ordering::Relaxed)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn clones_share_the_wish() {
        let asked = Cancel::new();
        let working = asked.clone();
        assert!(!working.is_cancelled());
        asked.cancel();
        assert!(working.is_cancelled());
    }
}
