//! Runs jobs on threads and sends their answers as events.

use std::collections::HashMap;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;
use std::sync::mpsc::{Receiver, Sender, channel};
use std::thread;

use super::app::Outside;
use super::event::Event;
use super::jobs::{Answer, Job};
use super::work;

/// Starts jobs. The newest request wins: of the jobs of one lane that wait, only the last is done.
pub struct Runner {
    outside: Arc<Outside>,
    events: Sender<Event>,
    lanes: HashMap<Lane, Sender<Job>>,
}

/// What waits for what.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
enum Lane {
    /// Layers: the newest is done, after the one under way.
    Layer,
    /// Indices, likewise.
    Indices,
    /// Spectra, likewise.
    Spectrum,
    /// Tests, likewise.
    Screen,
    /// What the Trace shows beside the spectrum, likewise.
    Trace,
    /// What stands beside a spectrum, likewise.
    Beside,
    /// Sums over granules, likewise; the older one is cancelled.
    Along,
    /// Everything in its turn.
    InTurn,
    /// A thread of its own at once: may hang on a file until the reader's limit.
    Alone,
}

fn lane_of(job: &Job) -> Lane {
    match job {
        Job::Layer { .. } => Lane::Layer,
        Job::Indices { .. } => Lane::Indices,
        Job::Spectrum { .. } => Lane::Spectrum,
        Job::Trace { .. } => Lane::Trace,
        Job::Beside { .. } => Lane::Beside,
        Job::Along { .. } => Lane::Along,
        Job::Screen { .. } => Lane::Screen,
        Job::Standing { .. } | Job::SignOff { .. } => Lane::InTurn,
        Job::Across { .. } => Lane::Alone,
        Job::Open { .. } | Job::Fill { .. } | Job::Record { .. } | Job::Quality { .. } => {
            Lane::Alone
        }
        Job::Pinned { .. } | Job::Reread { .. } | Job::Select { .. } => Lane::Alone,
        Job::Against { .. } | Job::Adopt { .. } | Job::Alike { .. } => Lane::Alone,
        Job::Measure { .. } => Lane::Alone,
        Job::Keep { .. } | Job::Export { .. } => Lane::Alone,
    }
}

impl Runner {
    /// A runner whose answers go to `events`.
    pub fn new(outside: Arc<Outside>, events: Sender<Event>) -> Runner {
        Runner { outside, events, lanes: HashMap::new() }
    }

    /// Starts a job.
    pub fn start(&mut self, job: Job) {
        let lane = lane_of(&job);
        if lane == Lane::Alone {
            let (outside, events) = (Arc::clone(&self.outside), self.events.clone());
            spawn(move || perform(&job, &outside, &events));
            return;
        }
        let queue = self.lanes.entry(lane).or_insert_with(|| {
            let (queue, jobs) = channel();
            let (outside, events) = (Arc::clone(&self.outside), self.events.clone());
            spawn(move || work_in_lane(lane, &jobs, &outside, &events));
            queue
        });
        // The thread lives as long as its queue.
        let _ = queue.send(job);
    }
}

fn spawn(work: impl FnOnce() + Send + 'static) {
    // Without threads nothing can be read; the keys work on, and the answer is missing.
    let _ = thread::Builder::new().name("job".to_owned()).spawn(work);
}

fn work_in_lane(lane: Lane, jobs: &Receiver<Job>, outside: &Outside, events: &Sender<Event>) {
    while let Ok(mut job) = jobs.recv() {
        if lane != Lane::InTurn {
            while let Ok(newer) = jobs.try_recv() {
                job = newer;
            }
        }
        perform(&job, outside, events);
    }
}

fn perform(job: &Job, outside: &Outside, events: &Sender<Event>) {
    let send = |answer: Answer| {
        // Nobody listens any more once the program is about to end.
        let _ = events.send(Event::Answer(answer));
    };
    let done = catch_unwind(AssertUnwindSafe(|| work::perform(job, outside, &send)));
    if done.is_err() {
        // A fault of the program; the screen goes on, and the person is told.
        if let Some(answer) = work::failed(job, "a fault in the program; please report it") {
            send(answer);
        }
    }
}
