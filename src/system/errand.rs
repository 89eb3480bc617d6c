//! Work that may hang in the kernel, done by threads that the waiter can give up on.

use std::sync::mpsc::{Receiver, Sender, channel};
use std::sync::{Mutex, PoisonError};
use std::thread;
use std::time::Duration;

type Errand = Box<dyn FnOnce() + Send>;

/// Threads that wait for an errand. As many are started as have been needed at once.
static IDLE: Mutex<Vec<Sender<Errand>>> = Mutex::new(Vec::new());

/// Has `work` done by another thread; nothing if it is not done within `limit`.
///
/// A call into a file system whose server is gone cannot be ended from outside. The thread that is
/// stuck in it stays behind until the call returns, and whoever asked goes on. Where no thread can be
/// started (`ulimit -u`), the work is done here, and no limit holds.
pub fn within<Done: Send + 'static>(
    limit: Duration,
    work: impl FnOnce() -> Done + Send + 'static,
) -> Option<Done> {
    let (answer, done) = channel();
    let errand: Errand = Box::new(move || {
        // Nobody listens any more where it was given up.
        let _ = answer.send(work());
    });
    let waiting = idle().pop();
    let Some(thread) = waiting.or_else(start) else {
        errand();
        return done.try_recv().ok();
    };
    thread.send(errand).ok()?;
    let done = done.recv_timeout(limit).ok()?;
    idle().push(thread);
    Some(done)
}

fn start() -> Option<Sender<Errand>> {
    let (thread, errands): (_, Receiver<Errand>) = channel();
    let work = move || errands.iter().for_each(|errand| errand());
    thread::Builder::new().name("errand".to_owned()).spawn(work).ok()?;
    Some(thread)
}

fn idle() -> std::sync::MutexGuard<'static, Vec<Sender<Errand>>> {
    // Threads are put and taken whole, so a panic elsewhere spoils nothing.
    IDLE.lock().unwrap_or_else(PoisonError::into_inner)
}

#[cfg(test)]
mod tests {
    use super::*;

    const LONG: Duration = Duration::from_secs(60);

    #[test]
    fn what_is_done_in_time_comes_back() {
        let found: Vec<Option<u32>> = (0..20).map(|n| within(LONG, move || n * n)).collect();
        assert_eq!(found, (0..20).map(|n| Some(n * n)).collect::<Vec<_>>());
    }

    #[test]
    fn what_hangs_is_given_up_and_hinders_nobody() {
        let (let_go, hanging) = channel::<()>();
        let stuck = within(Duration::from_millis(1), move || hanging.recv());
        assert!(stuck.is_none());
        assert_eq!(within(LONG, || 7), Some(7));
        drop(let_go);
    }

    #[test]
    fn a_panic_is_no_answer() {
        let quiet = std::panic::catch_unwind(|| within(LONG, || panic!("made for this test")));
        assert!(quiet.is_ok_and(|found: Option<()>| found.is_none()));
        assert_eq!(within(LONG, || 8), Some(8));
    }
}
