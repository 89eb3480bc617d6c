//! The thread that writes a ledger: it waits for the disk, so that nobody else has to.

use std::io;
use std::path::PathBuf;
use std::sync::mpsc::{Receiver, Sender};

use super::ledger_file::LedgerFile;
use super::ledger_line::Header;
use super::{Decision, LedgerEvent};

/// What the thread is told.
pub(super) enum Order {
    Keep(Box<Decision>),
    Retry,
    Close,
}

/// The thread's side.
pub(super) struct Keeper {
    pub(super) folder: PathBuf,
    pub(super) file_name: String,
    pub(super) header: Header,
    pub(super) file: Option<LedgerFile>,
    pub(super) pending: Vec<Decision>,
    pub(super) report: Sender<LedgerEvent>,
}

impl Keeper {
    pub(super) fn run(mut self, orders: &Receiver<Order>) {
        while let Ok(first) = orders.recv() {
            // One wait for the disk keeps all that has gathered meanwhile.
            let mut close = false;
            for order in std::iter::once(first).chain(orders.try_iter()) {
                match order {
                    Order::Keep(decision) => self.pending.push(*decision),
                    Order::Retry => {}
                    Order::Close => close = true,
                }
            }
            self.keep_pending();
            if close {
                return;
            }
        }
        self.keep_pending();
    }

    fn keep_pending(&mut self) {
        if self.pending.is_empty() {
            return;
        }
        // A report that nobody receives any more is no failure: the writer was dropped.
        match self.write_pending() {
            Ok(()) => {
                for decision in self.pending.drain(..) {
                    let _ = self.report.send(LedgerEvent::Kept(decision.id));
                }
            }
            Err(error) => {
                if let Some(file) = self.file.take() {
                    file.give_up();
                }
                let pending = self.pending.iter().map(|decision| decision.id.clone()).collect();
                let message = failure_message(&error, &self.folder);
                let _ = self.report.send(LedgerEvent::Failed { pending, message });
            }
        }
    }

    fn write_pending(&mut self) -> io::Result<()> {
        let file = match &mut self.file {
            Some(file) => file,
            empty => empty.insert(LedgerFile::create(&self.folder, &self.file_name, &self.header)?),
        };
        file.append(&self.pending)
    }
}

fn failure_message(error: &io::Error, folder: &std::path::Path) -> String {
    let advice = match error.kind() {
        io::ErrorKind::StorageFull | io::ErrorKind::QuotaExceeded => {
            "free some space, then try again"
        }
        io::ErrorKind::FileTooLarge => "raise the limit on file sizes, then try again",
        io::ErrorKind::PermissionDenied | io::ErrorKind::ReadOnlyFilesystem => {
            "make the folder writable, then try again"
        }
        _ => "see that the folder can be reached, then try again",
    };
    format!(
        "{error}: decisions are not yet on the disk, and stay pending while the program runs: \
         {advice}; folder {}",
        folder.display()
    )
}
