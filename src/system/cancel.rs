//! A wish to stop, shared between the one who asks and the one who works, who tells how far it is.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};

/// A flag that long work looks at between its steps, and the count of these steps. Clones share it.
#[derive(Debug, Clone, Default)]
pub struct Cancel(Arc<Shared>);

#[derive(Debug, Default)]
struct Shared {
    wish: AtomicBool,
    expected: AtomicU64,
    done: AtomicU64,
}

impl Cancel {
    /// A flag that nobody has raised yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// Asks the work to stop at its next step; asking twice is harmless.
    pub fn cancel(&self) {
        self.0.wish.store(true, Ordering::Relaxed);
    }

    /// Whether someone has asked to stop.
    pub fn is_cancelled(&self) -> bool {
        self.0.wish.load(Ordering::Relaxed)
    }

    /// The work has so many steps more before it.
    pub fn expect(&self, steps: usize) {
        self.0.expected.fetch_add(steps as u64, Ordering::Relaxed);
    }

    /// So many steps are done.
    pub fn did(&self, steps: usize) {
        self.0.done.fetch_add(steps as u64, Ordering::Relaxed);
    }

    /// The share of the expected steps that is done, 0 to 1; 0 where none are expected.
    pub fn share(&self) -> f64 {
        let expected = self.0.expected.load(Ordering::Relaxed);
        let done = self.0.done.load(Ordering::Relaxed);
        if expected == 0 { 0.0 } else { (done as f64 / expected as f64).min(1.0) }
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

    #[test]
    fn clones_share_how_far_the_work_is() {
        let asked = Cancel::new();
        let working = asked.clone();
        assert_eq!(asked.share(), 0.0);
        working.expect(4);
        working.did(1);
        assert_eq!(asked.share(), 0.25);
        working.did(9);
        assert_eq!(asked.share(), 1.0, "more steps than were expected are no more than all");
    }
}
