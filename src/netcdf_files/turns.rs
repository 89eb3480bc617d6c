//! Whose turn it is to ask the reader: the person's question before the background's.

use std::sync::{Condvar, Mutex, MutexGuard, PoisonError};

/// One reader, many askers: an urgent question waits only for the question under way.
#[derive(Debug, Default)]
pub struct Turns {
    state: Mutex<State>,
    changed: Condvar,
}

#[derive(Debug, Default)]
struct State {
    busy: bool,
    urgent: usize,
}

/// The right to ask, until it is dropped.
#[derive(Debug)]
pub struct Turn<'a>(&'a Turns);

impl Turns {
    /// Waits for the reader to be free; an urgent asker goes before all others.
    pub fn take(&self, urgent: bool) -> Turn<'_> {
        let mut state = self.lock();
        state.urgent += usize::from(urgent);
        while state.busy || (!urgent && state.urgent > 0) {
            state = self.changed.wait(state).unwrap_or_else(PoisonError::into_inner);
        }
        state.urgent -= usize::from(urgent);
        state.busy = true;
        Turn(self)
    }

    fn lock(&self) -> MutexGuard<'_, State> {
        // The state is two plain numbers that are changed together, so a panic elsewhere spoils nothing.
        self.state.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

impl Drop for Turn<'_> {
    fn drop(&mut self) {
        self.0.lock().busy = false;
        self.0.changed.notify_all();
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::sync::mpsc;

    /// The number of urgent askers that wait.
    fn wait_until(turns: &Turns, urgent: usize) {
        while turns.lock().urgent != urgent {
            std::thread::yield_now();
        }
    }

    #[test]
    fn an_urgent_asker_overtakes() {
        let turns = Turns::default();
        let (send, receive) = mpsc::channel();
        let ask = |urgent, name: &'static str| {
            let _turn = turns.take(urgent);
            send.send(name).unwrap();
        };
        std::thread::scope(|scope| {
            let first = turns.take(false);
            scope.spawn(|| ask(true, "urgent"));
            wait_until(&turns, 1);
            scope.spawn(|| ask(false, "patient"));
            drop(first);
        });
        let order: Vec<_> = receive.try_iter().collect();
        assert_eq!(order, ["urgent", "patient"]);
    }
}
