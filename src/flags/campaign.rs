//! The campaign folder: settings, ledgers, places. The archive itself is never written to.

use std::collections::BTreeSet;
use std::io;
use std::path::{Path, PathBuf};

use serde::{Deserialize, Serialize};

use super::ledger_line::Header;
use super::ledger_lines::Lines;
use super::{CampaignSettings, file_name_part};

/// Which granule a ledger is about: its content, not its path.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct GranuleIdentity {
    /// The BLAKE3 hash of the file's bytes, in hexadecimal.
    pub hash: String,
    /// Bytes.
    pub size: u64,
    /// The file's name when the ledger was begun, as a hint for people.
    pub name: String,
    /// The footprint dimensions: name and length, in the file's order.
    pub footprints: Vec<(String, usize)>,
    /// The bands by name: flags limited to bands that are together all of them are flags of the whole
    /// footprint.
    #[serde(default)]
    pub bands: Vec<String>,
    /// The layout file and the lending files that it was read with, in words.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub read_with: Vec<String>,
}

impl GranuleIdentity {
    /// The beginning of the hash: enough to tell the granules of a campaign apart.
    pub fn short(&self) -> &str {
        self.hash.get(..12).unwrap_or(&self.hash)
    }

    /// How many footprints the granule has.
    pub fn footprint_count(&self) -> usize {
        self.footprints.iter().map(|(_, length)| length).product()
    }
}

/// Why a campaign folder cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum CampaignError {
    /// There is no such folder.
    #[error("no campaign folder at {0}: name one with --campaign, or make it by a review")]
    Missing(PathBuf),
    /// It cannot be created or written to.
    #[error(
        "cannot write to the campaign folder {path}: {source}; choose another with --campaign, \
         or ask for the right to write there"
    )]
    Unwritable {
        /// The folder.
        path: PathBuf,
        /// What the system says.
        source: io::Error,
    },
    /// Something in it cannot be read.
    #[error("cannot read {path}: {source}")]
    Unreadable {
        /// The file or folder.
        path: PathBuf,
        /// What the system says.
        source: io::Error,
    },
    /// Decisions about the granule count its footprints otherwise.
    #[error("{0}")]
    OtherFootprints(String),
    /// The settings make no sense.
    #[error("{path}: {what}")]
    Settings {
        /// The settings file.
        path: PathBuf,
        /// What is wrong.
        what: String,
    },
}

/// A campaign folder that is there.
#[derive(Debug, Clone)]
pub struct Campaign {
    folder: PathBuf,
    settings: CampaignSettings,
}

impl Campaign {
    /// Opens a campaign for writing; creates folder and settings where there are none.
    ///
    /// # Errors
    /// The folder cannot be written to, or its settings make no sense.
    pub fn open_or_create(folder: &Path) -> Result<Self, CampaignError> {
        let unwritable = |source| CampaignError::Unwritable { path: folder.to_owned(), source };
        std::fs::create_dir_all(folder.join(LEDGERS)).map_err(unwritable)?;
        // Permission bits do not tell on network file systems: only writing does. The file has no
        // name and is gone when closed.
        drop(tempfile::tempfile_in(folder.join(LEDGERS)).map_err(unwritable)?);
        CampaignSettings::create(folder).map_err(unwritable)?;
        Self::open(folder)
    }

    /// Opens a campaign for writing, or for reading alone where it is there and cannot be written
    /// to; then with the reason.
    ///
    /// # Errors
    /// It can be neither written to nor read, or its settings make no sense.
    pub fn open_as_possible(folder: &Path) -> Result<(Self, Option<CampaignError>), CampaignError> {
        match Self::open_or_create(folder) {
            Ok(campaign) => Ok((campaign, None)),
            Err(unwritable @ CampaignError::Unwritable { .. }) if folder.is_dir() => {
                Ok((Self::open(folder)?, Some(unwritable)))
            }
            Err(error) => Err(error),
        }
    }

    /// Opens a campaign for reading; writes nothing.
    ///
    /// # Errors
    /// There is no such folder, or its settings make no sense.
    pub fn open(folder: &Path) -> Result<Self, CampaignError> {
        match std::fs::metadata(folder) {
            Ok(data) if data.is_dir() => {}
            Ok(_) => return Err(CampaignError::Missing(folder.to_owned())),
            Err(error) if error.kind() == io::ErrorKind::NotFound => {
                return Err(CampaignError::Missing(folder.to_owned()));
            }
            Err(source) => {
                return Err(CampaignError::Unreadable { path: folder.to_owned(), source });
            }
        }
        let settings = CampaignSettings::read(folder)?;
        Ok(Self { folder: folder.to_owned(), settings })
    }

    /// The folder.
    pub fn folder(&self) -> &Path {
        &self.folder
    }

    /// The settings as they were when the campaign was opened.
    pub fn settings(&self) -> &CampaignSettings {
        &self.settings
    }

    /// Where the campaign's own rulebook lies, if it has one.
    pub fn rulebook_path(&self) -> PathBuf {
        self.folder.join(RULEBOOK)
    }

    /// The text of the campaign's own rulebook; `None` where it has none.
    ///
    /// # Errors
    /// It is there and cannot be read, or is far too long.
    pub fn rulebook_text(&self) -> Result<Option<String>, CampaignError> {
        let path = self.rulebook_path();
        match std::fs::metadata(&path) {
            Err(error) if error.kind() == io::ErrorKind::NotFound => return Ok(None),
            Err(source) => return Err(CampaignError::Unreadable { path, source }),
            Ok(data) if data.len() > LONGEST_RULEBOOK => {
                let what = "the file is far too long for a rulebook".to_owned();
                return Err(CampaignError::Settings { path, what });
            }
            Ok(_) => {}
        }
        match std::fs::read_to_string(&path) {
            Ok(text) => Ok(Some(text)),
            Err(source) => Err(CampaignError::Unreadable { path, source }),
        }
    }

    /// The stems (as [`file_name_part`] writes them) of all granules that had ledgers when their
    /// ledgers were begun. Costs one look at a folder: no granule and no ledger is opened.
    pub fn ledger_stems(&self) -> BTreeSet<String> {
        let Ok(entries) = std::fs::read_dir(self.folder.join(LEDGERS)) else {
            return BTreeSet::new();
        };
        let names = entries.flatten().map(|entry| entry.file_name().to_string_lossy().into_owned());
        names.filter_map(|name| Some(name.rsplit_once('-')?.0.to_owned())).collect()
    }

    /// Sizes in bytes of the granules whose ledgers were begun under none of these stems: a file of
    /// such a size may be one of them, renamed since. Reads the first line of one ledger each.
    pub fn sizes_under_other_stems(&self, stems: &BTreeSet<String>) -> BTreeSet<u64> {
        let Ok(entries) = std::fs::read_dir(self.folder.join(LEDGERS)) else {
            return BTreeSet::new();
        };
        let others = entries.flatten().filter(|entry| {
            let name = entry.file_name().to_string_lossy().into_owned();
            name.rsplit_once('-').is_some_and(|(stem, _)| !stems.contains(stem))
        });
        others.filter_map(|folder| size_named_in(&folder.path())).collect()
    }

    /// The folders that hold ledgers of a granule, sorted. More than one where the file was renamed
    /// and two people began at the same moment.
    pub(super) fn ledger_folders(&self, granule: &GranuleIdentity) -> io::Result<Vec<PathBuf>> {
        let ending = format!("-{}", file_name_part(granule.short()));
        let mut found = Vec::new();
        match std::fs::read_dir(self.folder.join(LEDGERS)) {
            Err(error) if error.kind() == io::ErrorKind::NotFound => {}
            Err(error) => return Err(error),
            Ok(entries) => {
                for entry in entries {
                    let entry = entry?;
                    if entry.file_name().to_string_lossy().ends_with(&ending) {
                        found.push(entry.path());
                    }
                }
            }
        }
        found.sort();
        Ok(found)
    }

    /// The folder in which a new ledger of a granule belongs: one that is there already, or one
    /// named after the file. It is not created.
    pub(super) fn ledger_folder(&self, granule: &GranuleIdentity) -> io::Result<PathBuf> {
        let first = self.ledger_folders(granule)?.into_iter().next();
        Ok(first.unwrap_or_else(|| {
            let stem = Path::new(&granule.name).file_stem().unwrap_or_default();
            let stem = file_name_part(&stem.to_string_lossy());
            let name = format!("{stem}-{}", file_name_part(granule.short()));
            self.folder.join(LEDGERS).join(name)
        }))
    }
}

/// The size of the granule that the ledgers in a folder are about, by the first header that can be
/// read.
fn size_named_in(folder: &Path) -> Option<u64> {
    let files = std::fs::read_dir(folder).ok()?.flatten();
    let header = |file: std::fs::DirEntry| {
        let mut lines = Lines::new(std::fs::File::open(file.path()).ok()?);
        let line = lines.next().ok()??;
        Header::parse(line.text.ok()?).ok()
    };
    files.filter_map(header).map(|header| header.granule.size).next()
}

/// The folder of the ledgers in the campaign folder.
const LEDGERS: &str = "ledgers";
/// The campaign's own rulebook in the campaign folder.
const RULEBOOK: &str = "rulebook.toml";
/// A rulebook is words and tables; a larger file is a mistake.
const LONGEST_RULEBOOK: u64 = 4 << 20;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_folder_is_made_on_first_need_and_found_again() {
        let dir = tempfile::tempdir().unwrap();
        let folder = dir.path().join("a/b");
        assert!(matches!(Campaign::open(&folder), Err(CampaignError::Missing(_))));
        let campaign = Campaign::open_or_create(&folder).unwrap();
        assert!(folder.join(SETTINGS).exists());
        assert_eq!(campaign.settings(), &CampaignSettings::default());
        std::fs::write(folder.join(SETTINGS), "title = 'kept'").unwrap();
        let again = Campaign::open_or_create(&folder).unwrap();
        assert_eq!(again.settings().title.as_deref(), Some("kept"));
        let names = std::fs::read_dir(folder.join(LEDGERS)).unwrap().count();
        assert_eq!(names, 0, "the trial of writing leaves nothing behind");
    }

    #[test]
    fn a_folder_that_cannot_be_written_says_what_to_do() {
        let dir = tempfile::tempdir().unwrap();
        let file = dir.path().join("file");
        std::fs::write(&file, "").unwrap();
        let error = Campaign::open_or_create(&file.join("campaign")).unwrap_err();
        assert!(error.to_string().contains("choose another with --campaign"), "{error}");
        assert!(matches!(Campaign::open(&file), Err(CampaignError::Missing(_))));
    }

    #[test]
    fn a_campaign_that_cannot_be_written_to_can_be_looked_at() {
        let dir = tempfile::tempdir().unwrap();
        // Rights do not stop everybody; a file in the way does.
        std::fs::write(dir.path().join(LEDGERS), "").unwrap();
        let (campaign, why) = Campaign::open_as_possible(dir.path()).unwrap();
        assert!(matches!(why, Some(CampaignError::Unwritable { .. })));
        assert_eq!(campaign.settings(), &CampaignSettings::default());
        assert!(Campaign::open_as_possible(&dir.path().join("none/ledgers")).unwrap().1.is_none());
        std::fs::write(dir.path().join("file"), "").unwrap();
        assert!(Campaign::open_as_possible(&dir.path().join("file/campaign")).is_err());
    }

    #[test]
    fn a_renamed_granule_keeps_its_ledger_folder() {
        let dir = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(dir.path()).unwrap();
        let mut granule = GranuleIdentity {
            hash: "0123456789abcdef".to_owned(),
            size: 3,
            name: "lowen_001.nc".to_owned(),
            footprints: vec![("line".to_owned(), 3)],
            bands: Vec::new(),
            read_with: Vec::new(),
        };
        let folder = campaign.ledger_folder(&granule).unwrap();
        assert!(folder.ends_with("ledgers/lowen_001-0123456789ab"), "{folder:?}");
        std::fs::create_dir(&folder).unwrap();
        assert_eq!(campaign.ledger_stems().into_iter().collect::<Vec<_>>(), ["lowen_001"]);
        granule.name = "renamed.nc".to_owned();
        assert_eq!(campaign.ledger_folder(&granule).unwrap(), folder);
    }

    const SETTINGS: &str = super::super::SETTINGS_FILE;
}
