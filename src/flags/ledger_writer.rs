//! Writing one person's decisions about one granule, on a thread of its own.
//!
//! The keys never wait for a disk: `append` gives the finished decision back at once, and the
//! thread reports when it is kept.

use std::sync::atomic::{AtomicU32, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, channel};
use std::time::Duration;

use jiff::{SignedDuration, Timestamp};

use super::ledger_keeper::{Keeper, Order};
use super::ledger_line::{Header, LEDGER_FORMAT, LEDGER_VERSION};
use super::{
    Act, Author, Campaign, CampaignError, Decision, DecisionId, GranuleIdentity, Origin,
    file_name_part,
};
use crate::system::Deadline;

/// Numbers the writers of this process.
static WRITERS: AtomicU32 = AtomicU32::new(1);

/// What the thread reports.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum LedgerEvent {
    /// The disk has the decision.
    Kept(DecisionId),
    /// The disk does not have these decisions; they stay pending. The message says what to do.
    Failed {
        /// All that are pending now, oldest first.
        pending: Vec<DecisionId>,
        /// What went wrong and what helps.
        message: String,
    },
}

/// Decisions that were not on the disk when the writer was closed.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{pending} decisions are not on the disk: {message}")]
pub struct NotKept {
    /// How many.
    pub pending: usize,
    /// Why.
    pub message: String,
}

/// Writes decisions of one author about one granule.
///
/// The file is created at the first decision. Dropping the writer lets the thread finish what it
/// has; [`LedgerWriter::close`] waits for it.
pub struct LedgerWriter {
    name: String,
    person: String,
    sequence: u64,
    /// The latest time of any decision seen; new ones are later.
    latest: Option<Timestamp>,
    orders: Sender<Order>,
    events: Receiver<LedgerEvent>,
    pending: Vec<DecisionId>,
    last_failure: Option<String>,
    step: Option<String>,
}

impl LedgerWriter {
    /// Begins to write; creates no file yet.
    ///
    /// # Errors
    /// The campaign folder cannot be read, or the system has no more threads.
    pub fn start(
        campaign: &Campaign,
        granule: &GranuleIdentity,
        author: &Author,
        program: &str,
        now: Timestamp,
    ) -> Result<Self, CampaignError> {
        let unreadable =
            |source| CampaignError::Unreadable { path: campaign.folder().to_owned(), source };
        let folder = campaign.ledger_folder(granule).map_err(unreadable)?;
        let number = WRITERS.fetch_add(1, Ordering::Relaxed);
        let file_name = format!(
            "{}-{}-{}-{number}",
            file_name_part(&author.person),
            file_name_part(&author.host),
            author.process
        );
        // Containers share host names and process numbers; they do not share a nanosecond.
        let name = format!("{file_name}-{now}");
        let header = Header {
            format: LEDGER_FORMAT.to_owned(),
            version: LEDGER_VERSION,
            writer: name.clone(),
            granule: granule.clone(),
            author: author.clone(),
            program: program.to_owned(),
            opened: now,
        };
        let (orders, incoming) = channel();
        let (report, events) = channel();
        let keeper = Keeper { folder, file_name, header, file: None, pending: Vec::new(), report };
        std::thread::Builder::new()
            .name("ledger".to_owned())
            .spawn(move || keeper.run(&incoming))
            .map_err(unreadable)?;
        Ok(Self {
            name,
            person: author.person.clone(),
            sequence: 0,
            latest: None,
            orders,
            events,
            pending: Vec::new(),
            last_failure: None,
            step: None,
        })
    }

    /// Tells the writer of decisions that are already there (from the ledgers read), so that its
    /// own come after them in the order of all, whatever the clocks of other hosts say.
    pub fn saw(&mut self, decisions: &[Decision]) {
        self.latest = self.latest.max(decisions.iter().map(|decision| decision.at).max());
    }

    /// What is decided from now on is a part of this step, or of none.
    pub fn in_step(&mut self, step: Option<String>) {
        self.step = step;
    }

    /// Decides: gives the decision its name and time, and hands it to the thread. It is pending
    /// until [`LedgerEvent::Kept`] names it.
    pub fn append(
        &mut self,
        origin: Origin,
        act: Act,
        why: Option<String>,
        now: Timestamp,
    ) -> Decision {
        let at = match self.latest {
            Some(latest) if now <= latest => {
                latest.checked_add(SignedDuration::from_nanos(1)).unwrap_or(latest)
            }
            _ => now,
        };
        self.latest = Some(at);
        self.sequence += 1;
        let id = DecisionId { writer: self.name.clone(), sequence: self.sequence };
        let clock = (at != now).then_some(now);
        let person = self.person.clone();
        let step = self.step.clone();
        let decision = Decision { id, at, clock, person, origin, act, why, step };
        self.pending.push(decision.id.clone());
        // The thread ends only when told to, and then `close` has taken the writer away.
        let _ = self.orders.send(Order::Keep(Box::new(decision.clone())));
        decision
    }

    /// What the thread has reported since the last call; never waits.
    pub fn try_events(&mut self) -> Vec<LedgerEvent> {
        let events: Vec<_> = self.events.try_iter().collect();
        events.iter().for_each(|event| self.note(event));
        events
    }

    /// The next report, waiting for it up to `limit`.
    pub fn wait_event(&mut self, limit: Duration) -> Option<LedgerEvent> {
        let event = self.events.recv_timeout(limit).ok()?;
        self.note(&event);
        Some(event)
    }

    fn note(&mut self, event: &LedgerEvent) {
        match event {
            LedgerEvent::Kept(id) => self.pending.retain(|pending| pending != id),
            LedgerEvent::Failed { message, .. } => self.last_failure = Some(message.clone()),
        }
    }

    /// The decisions not yet known to be on the disk, oldest first.
    pub fn pending(&self) -> &[DecisionId] {
        &self.pending
    }

    /// Tries again to write what is pending.
    pub fn retry(&self) {
        let _ = self.orders.send(Order::Retry);
    }

    /// Tries once more to write what is pending and waits for it, up to `limit`.
    ///
    /// # Errors
    /// Decisions that are still not on the disk then.
    pub fn close(mut self, limit: Duration) -> Result<(), NotKept> {
        let _ = self.orders.send(Order::Close);
        let deadline = Deadline::after(limit);
        loop {
            match self.events.recv_timeout(deadline.left()) {
                Ok(event) => self.note(&event),
                // The thread hangs up when it is done with all it could do.
                Err(RecvTimeoutError::Disconnected) => break,
                Err(RecvTimeoutError::Timeout) => {
                    self.last_failure
                        .get_or_insert_with(|| "the disk did not answer in time".to_owned());
                    break;
                }
            }
        }
        if self.pending.is_empty() {
            return Ok(());
        }
        let message = self.last_failure.unwrap_or_else(|| "the writer ended".to_owned());
        Err(NotKept { pending: self.pending.len(), message })
    }
}
