//! Slabs that pass by: read for the moment, held for those who ask soon after, then given up.

use std::collections::VecDeque;
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};

use crate::netcdf_files::Samples;

/// The band and the number of a slab.
type Key = (usize, usize);

/// Locked while the slab is being read, so that nobody reads it a second time meanwhile.
type Place = Arc<Mutex<Option<Arc<Samples>>>>;

/// The slabs that were asked for last, as many as may be held.
#[derive(Debug)]
pub struct PassingSlabs {
    most: u64,
    held: Mutex<VecDeque<Held>>,
}

#[derive(Debug)]
struct Held {
    key: Key,
    bytes: u64,
    place: Place,
}

impl PassingSlabs {
    /// Holds at most so many bytes, or one slab if that is larger.
    pub fn new(most: u64) -> Self {
        Self { most, held: Mutex::default() }
    }

    /// The slab, of `bytes` bytes, by `read` where it is not held.
    pub fn get<Fault>(
        &self,
        key: Key,
        bytes: u64,
        read: impl FnOnce() -> Result<Samples, Fault>,
    ) -> Result<Arc<Samples>, Fault> {
        let place = self.place(key, bytes);
        // A panic while reading leaves the place empty.
        let mut samples = place.lock().unwrap_or_else(PoisonError::into_inner);
        if let Some(samples) = &*samples {
            return Ok(Arc::clone(samples));
        }
        let read = Arc::new(read()?);
        *samples = Some(Arc::clone(&read));
        Ok(read)
    }

    /// The slab, if it is held; never waits for reading.
    pub fn peek(&self, key: Key) -> Option<Arc<Samples>> {
        let place = Arc::clone(&self.held().iter().find(|held| held.key == key)?.place);
        place.try_lock().ok()?.clone()
    }

    /// Bytes of the slabs held.
    pub fn bytes(&self) -> u64 {
        self.held().iter().map(|held| held.bytes).sum()
    }

    /// The place for a slab, which is now the one asked for last; those asked for longest ago give way.
    fn place(&self, key: Key, bytes: u64) -> Place {
        let mut held = self.held();
        let known = held.iter().position(|held| held.key == key).and_then(|at| held.remove(at));
        let newest =
            known.unwrap_or_else(|| Held { key, bytes, place: Arc::new(Mutex::default()) });
        let place = Arc::clone(&newest.place);
        held.push_back(newest);
        let mut all: u64 = held.iter().map(|held| held.bytes).sum();
        while all > self.most && held.len() > 1 {
            all -= held.pop_front().map_or(0, |oldest| oldest.bytes);
        }
        place
    }

    fn held(&self) -> MutexGuard<'_, VecDeque<Held>> {
        // Entries are put and taken whole, so a panic elsewhere spoils nothing.
        self.held.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn get(slabs: &PassingSlabs, number: usize) -> bool {
        let mut read = false;
        let samples = slabs.get((0, number), 4, || {
            read = true;
            Ok::<_, ()>(vec![number as f32].into())
        });
        assert_eq!(*samples.unwrap(), vec![number as f32].into());
        read
    }

    #[test]
    fn what_was_asked_for_longest_ago_gives_way() {
        let slabs = PassingSlabs::new(8);
        assert!(get(&slabs, 1) && get(&slabs, 2));
        assert!(!get(&slabs, 1), "both are held");
        assert!(get(&slabs, 3), "in place of the second");
        assert!(!get(&slabs, 1) && get(&slabs, 2));
        assert!(slabs.bytes() <= 8);
        assert!(slabs.peek((0, 2)).is_some() && slabs.peek((0, 3)).is_none());
    }

    #[test]
    fn one_slab_is_held_however_large_it_is() {
        let slabs = PassingSlabs::new(3);
        assert!(get(&slabs, 1) && !get(&slabs, 1) && get(&slabs, 2));
    }

    #[test]
    fn a_failure_leaves_nothing_behind() {
        let slabs = PassingSlabs::new(8);
        assert_eq!(slabs.get((0, 1), 4, || Err("lost")).unwrap_err(), "lost");
        assert!(slabs.peek((0, 1)).is_none());
        assert!(get(&slabs, 1));
    }

    #[test]
    fn two_that_ask_at_once_have_it_read_once() {
        let slabs = PassingSlabs::new(8);
        let reads = std::sync::atomic::AtomicUsize::new(0);
        std::thread::scope(|scope| {
            for _ in 0..8 {
                scope.spawn(|| {
                    slabs.get((0, 0), 4, || {
                        reads.fetch_add(1, std::sync::atomic::Ordering::Relaxed);
                        Ok::<_, ()>(vec![1.0_f32].into())
                    })
                });
            }
        });
        assert_eq!(reads.into_inner(), 1);
    }
}
