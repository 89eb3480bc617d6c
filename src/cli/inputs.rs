//! Input files as they are named on the command line: files, folders, globs, lists.

use std::collections::HashSet;
use std::ffi::OsString;
use std::io::BufRead;
use std::os::unix::ffi::{OsStrExt, OsStringExt};
use std::path::{Path, PathBuf};
use std::time::Duration;

use anyhow::Context;

use super::exit::UsageError;
use super::expand::expand;
use crate::granule::{ApodiseBy, LayoutFile, LenderPattern, Opening, Within};
use crate::netcdf_files::{ReadLimits, ReaderProgram};
use crate::system::clean_text;

/// Where input files are named.
#[derive(Debug, Clone, Default, clap::Args)]
pub struct Inputs {
    /// Files, folders, globs, or `-` for a list on standard input, one path a line
    #[arg(value_name = "PATHS")]
    pub paths: Vec<PathBuf>,
    /// Read more paths from a file, one a line; `-` is standard input
    #[arg(long, value_name = "FILE")]
    pub files_from: Option<PathBuf>,
}

/// How files are read.
#[derive(Debug, Clone, Default, clap::Args)]
pub struct Reading {
    /// A layout file (TOML) that says which variable is what; `describe --as-layout` prints one
    #[arg(long, value_name = "FILE")]
    pub layout: Option<PathBuf>,
    /// Apodise spectra that are said to be not apodised
    #[arg(long, value_enum, value_name = "HOW")]
    pub apodise: Option<Apodise>,
    /// Seconds after which a file that does not answer is given up
    #[arg(long, hide = true, value_name = "SECONDS", value_parser = seconds)]
    pub reader_limit: Option<Duration>,
    /// Memory that the values of one file may take, as in `800M` or `4G`; most of what is free where
    /// nothing is said. Values beyond it are read again when they are needed
    #[arg(long, value_name = "SIZE", value_parser = size)]
    pub memory: Option<u64>,
    /// A file that lends fields: geolocation, surface temperature, calculated clear-sky spectra, any
    /// variable; may be given several times. For many granules a folder, or a path with {stem} for
    /// the granule's name, as in 'aux/{stem}.aux.nc'
    #[arg(long = "with", value_name = "FILE")]
    pub with: Vec<PathBuf>,
    /// How near a place in such a file must be, where its dimensions are not the granule's
    /// [default: 10km,15min]
    #[arg(long, value_name = "TOLERANCE")]
    pub within: Option<Within>,
}

/// Bytes, with K, M, G or T for powers of 1024 as in batch systems.
fn size(text: &str) -> Result<u64, String> {
    let digits = text.trim_end_matches(|letter: char| !letter.is_ascii_digit());
    let shift = match &text[digits.len()..] {
        "" => 0,
        "K" | "k" => 10,
        "M" | "m" => 20,
        "G" | "g" => 30,
        "T" | "t" => 40,
        _ => return Err("a number and one of K, M, G, T, as in 800M".into()),
    };
    let number: u64 = digits.parse().map_err(|_| "not a number".to_owned())?;
    number.checked_mul(1 << shift).ok_or_else(|| "too large".into())
}

/// The ways of apodising.
#[derive(Debug, Clone, Copy, clap::ValueEnum)]
pub enum Apodise {
    /// Hamming's function, as a running mean over three channels
    Hamming,
}

fn seconds(text: &str) -> Result<Duration, String> {
    let seconds: f64 = text.parse().map_err(|_| "not a number".to_owned())?;
    let limit = Duration::try_from_secs_f64(seconds).map_err(|error| error.to_string())?;
    if limit.is_zero() { Err("must be more than zero".into()) } else { Ok(limit) }
}

impl Reading {
    /// How files are opened.
    ///
    /// # Errors
    /// The layout file cannot be read or makes no sense.
    pub fn opening(&self) -> anyhow::Result<Opening> {
        let mut layout = match &self.layout {
            Some(path) => read_layout(path)?,
            None => LayoutFile::default(),
        };
        if let Some(Apodise::Hamming) = self.apodise {
            layout.apodise = Some(ApodiseBy::Hamming);
        }
        Ok(Opening {
            program: reader_program()?,
            limits: self.limits(),
            layout,
            with: self.lenders()?,
            within: self.within.unwrap_or_default(),
        })
    }

    /// The files that lend; one that is for all granules must be there.
    fn lenders(&self) -> anyhow::Result<Vec<LenderPattern>> {
        let pattern = |path: &PathBuf| {
            let pattern = LenderPattern::new(path.clone());
            if pattern.is_one_file() {
                let shown = clean_text(&path.to_string_lossy());
                std::fs::metadata(path).with_context(|| format!("--with {shown}"))?;
            }
            Ok(pattern)
        };
        self.with.iter().map(pattern).collect()
    }

    /// The limits of the reader processes.
    fn limits(&self) -> ReadLimits {
        let defaults = ReadLimits::default();
        ReadLimits {
            per_request: self.reader_limit.unwrap_or(defaults.per_request),
            values: self.memory,
            ..defaults
        }
    }
}

fn read_layout(path: &Path) -> anyhow::Result<LayoutFile> {
    let shown = clean_text(&path.to_string_lossy());
    let text = std::fs::read_to_string(path)
        .with_context(|| format!("cannot read the layout file {shown}"))?;
    let name = path.file_name().unwrap_or_default().to_string_lossy();
    LayoutFile::parse_named(&name, &text)
        .map_err(|reason| UsageError(format!("layout file {shown}: {reason}")).into())
}

/// This program, which is started again as the reader of a file.
///
/// # Errors
/// The system does not tell where the program lies.
fn reader_program() -> anyhow::Result<ReaderProgram> {
    // The very file that runs, even where another version has taken its name meanwhile.
    let running = Path::new("/proc/self/exe");
    if running.exists() {
        return Ok(ReaderProgram::new(running.to_owned()));
    }
    let program = std::env::current_exe().context("cannot find this program to read files with")?;
    Ok(ReaderProgram::new(program))
}

impl Inputs {
    /// All files named, each once, in the order of the arguments; what comes out of a folder or a
    /// glob is in natural order (`g2` before `g10`).
    ///
    /// # Errors
    /// Nothing is named, a list cannot be read, a glob makes no sense or matches nothing, a folder
    /// holds no such files. A file that does not exist is left for the reader to name.
    pub fn files(&self) -> anyhow::Result<Vec<PathBuf>> {
        let mut stdin = std::io::stdin().lock();
        self.files_with(&mut stdin)
    }

    fn files_with(&self, stdin: &mut impl BufRead) -> anyhow::Result<Vec<PathBuf>> {
        let mut files = Vec::new();
        for path in &self.paths {
            if path.as_os_str() == "-" {
                expand_list(stdin, &mut files)?;
            } else {
                expand(path, &mut files)?;
            }
        }
        match &self.files_from {
            Some(list) if list.as_os_str() == "-" => expand_list(stdin, &mut files)?,
            Some(list) => {
                let file = std::fs::File::open(list)
                    .with_context(|| format!("cannot open the list {}", list.display()))?;
                expand_list(&mut std::io::BufReader::new(file), &mut files)?;
            }
            None => {}
        }
        if files.is_empty() {
            return Err(UsageError("no input files: name files, folders or globs".into()).into());
        }
        // What we wrote ourselves beside the granules comes with every glob. Named alone it stays,
        // and the reader says that it holds no spectra.
        if !files.iter().all(|file| is_own(file)) {
            say_left_out(files.extract_if(.., |file| is_own(file)).collect());
        }
        let mut seen = HashSet::new();
        files.retain(|file| seen.insert(same_file(file)));
        Ok(files)
    }
}

/// Whether a file goes by the name of a mask or a basis of components of ours.
fn is_own(path: &Path) -> bool {
    let ends =
        |ending: &[u8]| path.file_name().is_some_and(|name| name.as_bytes().ends_with(ending));
    ends(b".mask.nc") || ends(b".basis.nc")
}

fn say_left_out(own: Vec<PathBuf>) {
    let Some(first) = own.first().and_then(|path| path.file_name()) else { return };
    let first = clean_text(&first.to_string_lossy());
    match own.len() {
        1 => say!("radsieve: {first} is left out: it goes by the name of a mask or a basis"),
        count => {
            say!("radsieve: {count} files left out by their names as masks or bases: {first}, …");
        }
    }
}

/// Two ways to one file are one file.
fn same_file(path: &Path) -> PathBuf {
    path.canonicalize().unwrap_or_else(|_| path.to_owned())
}

fn expand_list(list: &mut impl BufRead, files: &mut Vec<PathBuf>) -> anyhow::Result<()> {
    for (number, line) in list.split(b'\n').enumerate() {
        let mut line = line.context("cannot read the list of files")?;
        // Some editors begin a text file with a byte-order mark.
        if number == 0 && line.starts_with(b"\xef\xbb\xbf") {
            line.drain(..3);
        }
        if line.last() == Some(&b'\r') {
            line.pop();
        }
        if !line.iter().all(u8::is_ascii_whitespace) {
            expand(Path::new(&OsString::from_vec(line)), files)?;
        }
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn folder(names: &[&str]) -> tempfile::TempDir {
        let folder = tempfile::tempdir().unwrap();
        for name in names {
            let path = folder.path().join(name);
            std::fs::create_dir_all(path.parent().unwrap()).unwrap();
            std::fs::write(path, b"").unwrap();
        }
        folder
    }

    fn expanded(paths: &[PathBuf], stdin: &str) -> anyhow::Result<Vec<String>> {
        let inputs = Inputs { paths: paths.to_vec(), files_from: None };
        let files = inputs.files_with(&mut stdin.as_bytes())?;
        let name = |file: &PathBuf| file.file_name().unwrap().to_str().unwrap().to_owned();
        Ok(files.iter().map(name).collect())
    }

    #[test]
    fn sizes_are_read_as_batch_systems_write_them() {
        assert_eq!(size("800"), Ok(800));
        assert_eq!(size("2K"), Ok(2048));
        assert_eq!(size("4G"), Ok(4 << 30));
        for bad in ["", "G", "4 G", "4GB", "-1", "1.5G", "99999999999T"] {
            assert!(size(bad).is_err(), "{bad}");
        }
    }

    #[test]
    fn a_folder_gives_its_granules_in_natural_order() {
        let folder = folder(&["g10.nc", "g2.nc", "g02b.NC", "notes.txt", ".hidden.nc", "in/g1.nc"]);
        let found = expanded(&[folder.path().to_owned()], "").unwrap();
        assert_eq!(found, ["g2.nc", "g02b.NC", "g10.nc"]);
    }

    #[test]
    fn a_link_to_nowhere_in_a_folder_is_not_passed_over() {
        let folder = folder(&["g1.nc"]);
        std::os::unix::fs::symlink("/no/g2.nc", folder.path().join("g2.nc")).unwrap();
        assert_eq!(expanded(&[folder.path().to_owned()], "").unwrap(), ["g1.nc", "g2.nc"]);
    }

    #[test]
    fn masks_beside_their_granules_are_no_granules() {
        let folder = folder(&["a.nc", "a.mask.nc", "b-0f3.mask.nc", "501+2_0f3.basis.nc"]);
        assert_eq!(expanded(&[folder.path().to_owned()], "").unwrap(), ["a.nc"]);
        let both = ["a.nc", "a.mask.nc"].map(|name| folder.path().join(name));
        assert_eq!(expanded(&both, "").unwrap(), ["a.nc"]);
        assert_eq!(expanded(&both[1..], "").unwrap(), ["a.mask.nc"]);
    }

    #[test]
    fn globs_are_expanded_where_the_shell_did_not() {
        let folder = folder(&["a/g1.nc", "b/g2.nc", "b/g3.h5", "b/deep/g4.nc"]);
        let found = |pattern: &str| expanded(&[folder.path().join(pattern)], "");
        assert_eq!(found("*/g?.nc").unwrap(), ["g1.nc", "g2.nc"]);
        assert_eq!(found("**/*.nc").unwrap(), ["g1.nc", "g4.nc", "g2.nc"]);
        assert!(found("*.nc").unwrap_err().to_string().contains("matches no file"));
        assert_eq!(found("b//./*.nc").unwrap(), ["g2.nc"]);
        assert!(found("[").unwrap_err().downcast_ref::<UsageError>().is_some());
    }

    #[test]
    fn globs_go_below_odd_folders_pass_by_hidden_files_and_tell_of_links_to_nowhere() {
        use std::ffi::OsStr;
        let folder = folder(&["br[1]/g1.nc", "a/.hidden.nc", "a/g2.nc"]);
        let found = |pattern: &str| expanded(&[folder.path().join(pattern)], "");
        assert_eq!(found("br[1]/*.nc").unwrap(), ["g1.nc"]);
        assert_eq!(found("a/*.nc").unwrap(), ["g2.nc"]);
        assert_eq!(found("a/.*.nc").unwrap(), [".hidden.nc"]);
        std::os::unix::fs::symlink("/no/g3.nc", folder.path().join("a/g3.nc")).unwrap();
        assert_eq!(found("a/*.nc").unwrap(), ["g2.nc", "g3.nc"]);
        let odd = folder.path().join(OsStr::from_bytes(b"o\xff"));
        std::fs::create_dir(&odd).unwrap();
        std::fs::write(odd.join("g4.nc"), b"").unwrap();
        assert_eq!(expanded(&[odd.join("*.nc")], "").unwrap(), ["g4.nc"]);
    }

    #[test]
    fn a_file_with_a_wildcard_in_its_name_is_itself() {
        let folder = folder(&["g[1].nc", "g1.nc"]);
        assert_eq!(expanded(&[folder.path().join("g[1].nc")], "").unwrap(), ["g[1].nc"]);
    }

    #[test]
    fn each_file_comes_once_in_the_order_named() {
        let folder = folder(&["g1.nc", "g2.nc"]);
        let path = |name: &str| folder.path().join(name);
        let found =
            expanded(&[path("g2.nc"), folder.path().to_owned(), path("./g2.nc")], "").unwrap();
        assert_eq!(found, ["g2.nc", "g1.nc"]);
    }

    #[test]
    fn a_list_on_standard_input_may_have_blank_lines() {
        let found = expanded(&["-".into()], "\u{feff}/no/a.nc\r\n\n  \n/no/b.nc").unwrap();
        assert_eq!(found, ["a.nc", "b.nc"]);
    }

    #[test]
    fn naming_nothing_is_wrong_usage() {
        let empty = folder(&[]);
        for paths in [vec![], vec![empty.path().to_owned()]] {
            let error = expanded(&paths, "").unwrap_err();
            assert!(error.downcast_ref::<UsageError>().is_some(), "{error}");
        }
    }
}
