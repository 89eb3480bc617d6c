//! A moment after which waiting is given up, on the monotonic clock.

use std::time::{Duration, Instant};

/// A moment in the near future. Setting the wall clock does not move it.
#[derive(Debug, Clone, Copy)]
pub struct Deadline(Instant);

impl Deadline {
    /// The moment `limit` from now.
    pub fn after(limit: Duration) -> Self {
        let now = Instant::now();
        // A limit too long for the clock is as good as the longest one that it can hold.
        Self(now.checked_add(limit).unwrap_or(now + Duration::from_secs(86_400 * 365)))
    }

    /// Whether the moment is over.
    pub fn passed(&self) -> bool {
        self.left().is_zero()
    }

    /// The time left, zero when the moment is over.
    pub fn left(&self) -> Duration {
        self.0.saturating_duration_since(Instant::now())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_zero_limit_has_passed_and_a_long_one_has_not() {
        assert!(Deadline::after(Duration::ZERO).passed());
        assert!(!Deadline::after(Duration::MAX).passed());
    }
}
