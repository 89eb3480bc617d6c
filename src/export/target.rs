//! Under which name a mask or list goes: equal stems never overwrite each other, and no input is
//! ever written to.

use std::collections::HashMap;
use std::path::{Path, PathBuf};

use super::source::MaskSource;
use crate::netcdf_files::{FileReader, ReadLimits, ReaderProgram};
use crate::system::{FileStamp, Placing};

/// How much of a hash goes into a name.
const SHORT: usize = 8;

/// Whose an existing file is.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Owner {
    /// An earlier export of the granule with this hash.
    Granule(String),
    /// An earlier export that does not tell, such as an empty list.
    Unknown,
    /// No export, as far as can be seen: left alone.
    Other,
}

/// A name was chosen.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Chosen {
    /// Where to write.
    pub path: PathBuf,
    /// Over an earlier export of the same granule, or where nothing stands.
    pub placing: Placing,
    /// Why it is not the plain name, if so.
    pub note: Option<String>,
}

/// Why there is no name.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error(
    "{0} is one of the inputs or none of our files, and is not overwritten; choose another --out"
)]
pub struct NoTarget(PathBuf);

/// The names of one run.
#[derive(Debug)]
pub struct Targets {
    folder: PathBuf,
    ending: &'static str,
    inputs: Vec<FileStamp>,
    /// Which input each name went to.
    taken: HashMap<PathBuf, PathBuf>,
}

impl Targets {
    /// Names `<stem><ending>` in `folder` for a run over `inputs`.
    pub fn new(folder: &Path, ending: &'static str, inputs: &[PathBuf]) -> Self {
        let inputs = inputs.iter().filter_map(|path| FileStamp::of(path).ok()).collect();
        Self { folder: folder.to_owned(), ending, inputs, taken: HashMap::new() }
    }

    /// The name for the granule at `input`. `owner` looks at a file that is there already.
    ///
    /// # Errors
    /// All names in question are inputs or files of somebody else.
    pub fn choose(
        &mut self,
        input: &Path,
        source: &MaskSource,
        owner: impl Fn(&Path) -> Owner,
    ) -> Result<Chosen, NoTarget> {
        let stem = Path::new(&source.name).file_stem().unwrap_or_default().to_string_lossy();
        let content = source.hash.get(..SHORT).unwrap_or(&source.hash);
        // Copies of one granule differ by their folders alone.
        let place = blake3::hash(input.as_os_str().as_encoded_bytes()).to_hex();
        let names = [
            stem.to_string(),
            format!("{stem}-{content}"),
            format!("{stem}-{content}-{}", &place[..SHORT]),
        ];
        let mut why = None;
        for name in &names {
            let path = self.folder.join(format!("{name}{}", self.ending));
            // Asked first: what comes between then is found by placing, not replaced.
            let there = std::fs::symlink_metadata(&path).is_ok();
            match self.obstacle(&path, input, source, &owner) {
                None => {
                    self.taken.insert(path.clone(), input.to_owned());
                    let shown = path.file_name().unwrap_or_default().to_string_lossy();
                    let note = why.map(|why| format!("{why}; written as {shown}"));
                    let placing = if there { Placing::Over } else { Placing::New };
                    return Ok(Chosen { path, placing, note });
                }
                Some(obstacle) => why = why.or(Some(obstacle)),
            }
        }
        Err(NoTarget(self.folder.join(format!("{stem}{}", self.ending))))
    }

    /// Why `path` cannot be used for the granule at `input`.
    fn obstacle(
        &self,
        path: &Path,
        input: &Path,
        source: &MaskSource,
        owner: impl Fn(&Path) -> Owner,
    ) -> Option<String> {
        let shown = path.file_name().unwrap_or_default().to_string_lossy();
        if let Some(other) = self.taken.get(path).filter(|other| *other != input) {
            return Some(format!("{shown} is of {}", other.display()));
        }
        let stamp = FileStamp::of(path).ok()?;
        if self.inputs.contains(&stamp) {
            return Some(format!("{shown} is an input"));
        }
        match owner(path) {
            Owner::Granule(hash) if hash == source.hash => None,
            Owner::Granule(_) => Some(format!("{shown} is there, of another granule")),
            Owner::Unknown => None,
            Owner::Other => Some(format!("{shown} is there and is not an export of this program")),
        }
    }
}

/// Whose the netCDF file at `path` is.
pub fn mask_owner(program: &ReaderProgram, path: &Path) -> Owner {
    let Ok(reader) = FileReader::open(program, path, &ReadLimits::default()) else {
        return Owner::Other;
    };
    let hash = reader.index().global_attribute("granule_blake3").and_then(|value| value.text());
    match hash {
        Some(hash) if reader.index().variable("footprint_flag").is_some() => Owner::Granule(hash),
        _ => Owner::Other,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::mask_tests::source;

    fn granule(name: &str, hash: &str) -> MaskSource {
        MaskSource { name: name.to_owned(), hash: hash.repeat(8), ..source() }
    }

    fn owner_is_written_inside(path: &Path) -> Owner {
        match std::fs::read_to_string(path).unwrap().as_str() {
            "" => Owner::Other,
            hash => Owner::Granule(hash.to_owned()),
        }
    }

    struct Run {
        dir: tempfile::TempDir,
        targets: Targets,
    }

    impl Run {
        fn new() -> Self {
            let dir = tempfile::tempdir().unwrap();
            let targets = Targets::new(dir.path(), ".mask.nc", &[dir.path().join("in.mask.nc")]);
            Self { dir, targets }
        }

        /// The file name, and whether a note goes with it.
        fn choose(&mut self, input: &str, name: &str, hash: &str) -> (String, bool) {
            let source = granule(name, hash);
            let chosen =
                self.targets.choose(Path::new(input), &source, owner_is_written_inside).unwrap();
            std::fs::write(&chosen.path, &source.hash).unwrap();
            let name = chosen.path.file_name().unwrap().to_string_lossy().into_owned();
            (name, chosen.note.is_some())
        }
    }

    #[test]
    fn the_second_of_equal_stems_gets_a_hash_and_a_note() {
        let mut run = Run::new();
        assert_eq!(run.choose("a/g.nc", "g.nc", "aa"), ("g.mask.nc".to_owned(), false));
        assert_eq!(run.choose("b/g.nc", "g.nc", "bb"), ("g-bbbbbbbb.mask.nc".to_owned(), true));
        assert_eq!(run.choose("a/h.nc", "h.nc", "cc"), ("h.mask.nc".to_owned(), false));
    }

    #[test]
    fn copies_of_one_granule_each_get_a_mask() {
        let mut run = Run::new();
        let mut names: Vec<_> =
            ["a", "b", "c"].map(|f| run.choose(&format!("{f}/g.nc"), "g.nc", "aa").0).to_vec();
        names.dedup();
        assert_eq!(names.len(), 3);
    }

    #[test]
    fn a_later_run_finds_its_own_masks_again() {
        let mut run = Run::new();
        let first = [run.choose("a/g.nc", "g.nc", "aa"), run.choose("b/g.nc", "g.nc", "bb")];
        run.targets = Targets::new(run.dir.path(), ".mask.nc", &[]);
        assert_eq!(run.choose("b/g.nc", "g.nc", "bb"), first[1]);
        assert_eq!(run.choose("a/g.nc", "g.nc", "aa"), first[0]);
    }

    #[test]
    fn files_of_others_and_inputs_are_left_alone() {
        let mut run = Run::new();
        std::fs::write(run.dir.path().join("g.mask.nc"), "").unwrap();
        assert_eq!(run.choose("a/g.nc", "g.nc", "aa"), ("g-aaaaaaaa.mask.nc".to_owned(), true));
        let input = run.dir.path().join("in.mask.nc");
        std::fs::write(&input, granule("in.nc", "aa").hash).unwrap();
        run.targets = Targets::new(run.dir.path(), ".mask.nc", &[input]);
        assert_eq!(run.choose("a/in.nc", "in.nc", "aa"), ("in-aaaaaaaa.mask.nc".to_owned(), true));
    }

    #[test]
    fn no_name_is_left_only_if_all_are_of_others() {
        let run = Run::new();
        let source = granule("g.nc", "aa");
        let mut targets = run.targets;
        let refused = (0..4).find_map(|_| {
            let chosen = targets.choose(Path::new("g.nc"), &source, owner_is_written_inside);
            chosen.map(|chosen| std::fs::write(chosen.path, "").unwrap()).err()
        });
        assert!(refused.unwrap().to_string().contains("choose another --out"));
    }
}
