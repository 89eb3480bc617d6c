//! Reading the ledgers of a granule: whatever they hold, never a panic, never a silent loss.

use std::collections::BTreeMap;
use std::fmt;
use std::io;
use std::path::{Path, PathBuf};

use super::ledger_line::{Header, HeaderError, read_decision};
use super::ledger_lines::Lines;
use super::{Campaign, Decision, DecisionId, GranuleIdentity};
use crate::system::clean_text;

/// A hundred thousand decisions a day for ten days.
const MOST_DECISIONS: usize = 1_000_000;
/// Two decisions of one name are an accident; many are no ledger of ours.
const MOST_OF_ONE_NAME: usize = 8;
/// After so many problems the rest is only counted.
const MOST_PROBLEMS: usize = 1000;
/// After so many broken lines the rest of a file is only counted.
const MOST_BROKEN: usize = 20;

/// What a problem costs.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Loss {
    /// No decision that anybody was told is kept.
    Nothing,
    /// A decision.
    Line,
    /// A whole file of decisions: flags made without them would mislead.
    File,
    /// A whole file of decisions about footprints that are counted otherwise: none may be added until
    /// the granule is read as it was then.
    OtherFootprints,
}

impl Loss {
    /// Whether a whole file does not count.
    pub fn is_of_a_file(self) -> bool {
        matches!(self, Self::File | Self::OtherFootprints)
    }
}

/// Something in a ledger that could not be taken as it stands.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LedgerProblem {
    /// The file or folder.
    pub path: PathBuf,
    /// The line, counted from 1; 0 if it is about the whole file.
    pub line: u64,
    /// What it is, in words.
    pub what: String,
    /// What is lost by it.
    pub loss: Loss,
}

impl fmt::Display for LedgerProblem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let path = clean_text(&self.path.display().to_string());
        f.write_str(&self.told_of(&path))
    }
}

impl LedgerProblem {
    /// In words that do not depend on where the campaign folder lies, for masks.
    pub fn without_folder(&self) -> String {
        let name = self.path.file_name().unwrap_or_default().to_string_lossy();
        format!("ledger {}", self.told_of(&clean_text(&name)))
    }

    fn told_of(&self, file: &str) -> String {
        match self.line {
            0 => format!("{file}: {}", self.what),
            line => format!("{file}, line {line}: {}", self.what),
        }
    }
}

/// What the ledgers of a granule hold.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct LedgerReading {
    /// All decisions, in the one order in which everybody folds them.
    pub decisions: Vec<Decision>,
    /// What could not be taken.
    pub problems: Vec<LedgerProblem>,
    /// How many ledger files there are.
    pub files: usize,
}

/// Reads all ledgers of a granule. A granule that nobody touched has none: an empty reading.
pub fn read_ledgers(campaign: &Campaign, granule: &GranuleIdentity) -> LedgerReading {
    let mut gathering = Gathering::default();
    match campaign.ledger_folders(granule) {
        Ok(folders) => folders.iter().for_each(|folder| gathering.folder(folder, granule)),
        Err(error) => gathering.problem(campaign.folder(), 0, unreadable(&error), Loss::File),
    }
    gathering.finish()
}

fn unreadable(error: &io::Error) -> String {
    format!("cannot be read: {error}; decisions in it do not count until it can")
}

/// As in `scan_line 14, position 13`.
fn dimensions(granule: &GranuleIdentity) -> String {
    let all = granule.footprints.iter().map(|(name, length)| format!("{name} {length}"));
    all.collect::<Vec<_>>().join(", ")
}

/// As in ` (layout.toml …)`.
fn read_with(granule: &GranuleIdentity) -> String {
    match &granule.read_with[..] {
        [] => " (without a layout file or lending files)".to_owned(),
        files => format!(" ({})", files.join("; ")),
    }
}

#[derive(Default)]
struct Gathering {
    decisions: BTreeMap<DecisionId, Vec<Decision>>,
    count: usize,
    problems: Vec<LedgerProblem>,
    /// Problems beyond those listed.
    unlisted: usize,
    files: usize,
}

impl Gathering {
    fn problem(&mut self, path: &Path, line: u64, what: String, loss: Loss) {
        let what = clean_text(&what);
        if self.problems.len() >= MOST_PROBLEMS && !loss.is_of_a_file() {
            self.unlisted += 1;
            return;
        }
        self.problems.push(LedgerProblem { path: path.to_owned(), line, what, loss });
    }

    fn folder(&mut self, folder: &Path, granule: &GranuleIdentity) {
        let listed = std::fs::read_dir(folder).and_then(Iterator::collect::<io::Result<Vec<_>>>);
        let mut paths: Vec<PathBuf> = match listed {
            Ok(entries) => entries.into_iter().map(|entry| entry.path()).collect(),
            Err(error) => return self.problem(folder, 0, unreadable(&error), Loss::File),
        };
        paths.retain(|path| path.extension().is_some_and(|extension| extension == "jsonl"));
        // The order of a folder's listing is an accident.
        paths.sort();
        for path in paths {
            self.files += 1;
            if let Err(error) = self.file(&path, granule) {
                self.problem(&path, 0, unreadable(&error), Loss::File);
            }
        }
    }

    fn file(&mut self, path: &Path, granule: &GranuleIdentity) -> io::Result<()> {
        // A pipe or device of that name would block for ever.
        if !std::fs::metadata(path)?.is_file() {
            self.problem(path, 0, "is no ordinary file".to_owned(), Loss::Nothing);
            return Ok(());
        }
        let mut lines = Lines::new(std::fs::File::open(path)?);
        let Some(header) = self.header(path, &mut lines, granule)? else { return Ok(()) };
        let mut broken = 0;
        while let Some(line) = lines.next()? {
            if self.count >= MOST_DECISIONS {
                self.problem(path, line.number, "too many decisions".to_owned(), Loss::File);
                return Ok(());
            }
            match line.text.map(|text| read_decision(text, &header)) {
                Ok(Ok(decision)) => self.decision(path, line.number, decision),
                Ok(Err(what)) | Err(what) => {
                    let torn = line.torn;
                    broken += 1;
                    if torn {
                        let what = "the last line was cut off while it was being written; it does \
                                    not count";
                        self.problem(path, line.number, what.to_owned(), Loss::Nothing);
                    } else if broken <= MOST_BROKEN {
                        let what = format!("does not count: {what}");
                        self.problem(path, line.number, what, Loss::Line);
                    }
                }
            }
        }
        if broken > MOST_BROKEN {
            let what = format!("{broken} lines in all do not count");
            self.problem(path, 0, what, Loss::Line);
        }
        Ok(())
    }

    fn header(
        &mut self,
        path: &Path,
        lines: &mut Lines,
        granule: &GranuleIdentity,
    ) -> io::Result<Option<Header>> {
        let Some(line) = lines.next()? else {
            let what = "is empty: its writer was stopped before the first decision";
            self.problem(path, 0, what.to_owned(), Loss::Nothing);
            return Ok(None);
        };
        let parsed = line.text.map_err(|_| HeaderError::NoLedger).and_then(Header::parse);
        match parsed {
            Ok(header) if header.granule.hash == granule.hash => {
                return Ok(self.in_this_order(path, &header, granule).then_some(header));
            }
            Ok(_) => {
                let what = "is about another granule; it does not count here";
                self.problem(path, 1, what.to_owned(), Loss::Nothing);
            }
            Err(HeaderError::Newer(version)) => {
                let what = format!(
                    "was written in ledger format {version}, newer than this version reads ({}): \
                     use a newer version of the program",
                    super::LEDGER_VERSION
                );
                self.problem(path, 1, what, Loss::File);
            }
            Err(HeaderError::NoLedger) if line.torn => {
                let what = "was cut off in its first line, before the first decision";
                self.problem(path, 1, what.to_owned(), Loss::Nothing);
            }
            Err(HeaderError::NoLedger) => {
                self.problem(path, 1, "the first line is no ledger header".to_owned(), Loss::File);
            }
        }
        Ok(None)
    }

    /// Whether the ledger counts footprints as the granule does now. A layout file can give them other
    /// dimensions, and then its numbers mean other footprints.
    fn in_this_order(&mut self, path: &Path, header: &Header, granule: &GranuleIdentity) -> bool {
        let then = &header.granule;
        let fits = then.footprints == granule.footprints;
        if !fits {
            let what = format!(
                "decides about footprints over {}, but the granule is read over {}: give the layout \
                 file that it was made with{}",
                dimensions(then),
                dimensions(granule),
                read_with(then)
            );
            self.problem(path, 1, what, Loss::OtherFootprints);
        } else if then.read_with != granule.read_with {
            let what = format!(
                "was made with the granule read otherwise{}; its decisions count",
                read_with(then)
            );
            self.problem(path, 1, what, Loss::Nothing);
        }
        fits
    }

    /// A writer that had to begin a new file writes again what was not known to be kept, and a
    /// folder may hold copies: the same line counts once.
    fn decision(&mut self, path: &Path, line: u64, decision: Decision) {
        let same_name = self.decisions.entry(decision.id.clone()).or_default();
        if same_name.contains(&decision) {
            return;
        }
        if same_name.len() >= MOST_OF_ONE_NAME {
            let what = "does not count: too many decisions have its number".to_owned();
            return self.problem(path, line, what, Loss::Line);
        }
        let doubled = !same_name.is_empty();
        same_name.push(decision);
        self.count += 1;
        if doubled {
            let what = "has the number of another decision by the same writer; both count";
            self.problem(path, line, what.to_owned(), Loss::Nothing);
        }
    }

    fn finish(self) -> LedgerReading {
        let mut decisions: Vec<_> = self.decisions.into_values().flatten().collect();
        decisions.sort_by(|one, other| one.order().cmp(&other.order()));
        let mut problems = self.problems;
        if let (Some(last), true) = (problems.last().cloned(), self.unlisted > 0) {
            let what = format!("and {} more problems of these ledgers", self.unlisted);
            problems.push(LedgerProblem { line: 0, what, loss: Loss::Line, ..last });
        }
        LedgerReading { decisions, problems, files: self.files }
    }
}
