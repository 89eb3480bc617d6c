//! One ledger file being written: created exclusively, then only appended to.

use std::fs::{File, OpenOptions};
use std::io::{self, Write};
use std::path::{Path, PathBuf};

use super::Decision;
use super::ledger_line::{Header, write_decision, write_line};
use crate::system::{make_folder, sync_folder};

/// More files of one writer for one granule than any trouble makes.
const MOST_FILES: u32 = 10_000;

pub(super) struct LedgerFile {
    file: File,
    path: PathBuf,
    kept: u64,
}

impl LedgerFile {
    /// Creates `<name>.jsonl`, or `<name>.2.jsonl` and so on if that is taken, with its header.
    pub(super) fn create(folder: &Path, name: &str, header: &Header) -> io::Result<Self> {
        make_folder(folder)?;
        let (file, path) = create_new(folder, name)?;
        let mut ledger = Self { file, path, kept: 0 };
        let line = write_line(header)?;
        let written = ledger.file.write_all(&line).and_then(|()| sync_folder(folder));
        match written {
            Ok(()) => Ok(ledger),
            Err(error) => {
                ledger.give_up();
                Err(error)
            }
        }
    }

    /// Appends decisions and waits until the disk has them.
    pub(super) fn append(&mut self, decisions: &[Decision]) -> io::Result<()> {
        let mut lines = Vec::new();
        for decision in decisions {
            lines.extend(write_decision(decision)?);
        }
        self.file.write_all(&lines)?;
        self.file.sync_data()?;
        self.kept += decisions.len() as u64;
        Ok(())
    }

    /// After a failure nobody knows which bytes the disk has, so the file is left as it is and a
    /// new one begun. One that holds no kept decision is removed: it only puzzles people.
    pub(super) fn give_up(self) {
        if self.kept == 0 {
            // It stays, as a file without decisions, where even removing fails.
            let _ = std::fs::remove_file(&self.path);
        }
    }
}

fn create_new(folder: &Path, name: &str) -> io::Result<(File, PathBuf)> {
    for number in 1..MOST_FILES {
        let path = match number {
            1 => folder.join(format!("{name}.jsonl")),
            more => folder.join(format!("{name}.{more}.jsonl")),
        };
        match OpenOptions::new().append(true).create_new(true).open(&path) {
            Ok(file) => return Ok((file, path)),
            Err(error) if error.kind() == io::ErrorKind::AlreadyExists => {}
            Err(error) => return Err(error),
        }
    }
    Err(io::Error::new(io::ErrorKind::AlreadyExists, "too many ledger files of this name"))
}
