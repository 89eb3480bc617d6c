//! A synthetic granule as a person would have it, made by the program itself.

use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use crate::Size;

/// The program that is measured.
pub const PROGRAM: &str = env!("CARGO_BIN_EXE_radsieve");

/// A granule in a folder that vanishes with it.
pub struct FullSize {
    folder: tempfile::TempDir,
    /// The file.
    pub path: PathBuf,
    /// How often each path is timed.
    pub rounds: usize,
    footprints: usize,
}

impl FullSize {
    /// 45 x 30 x 9 footprints of 717 + 869 + 637 channels; 3 x 4 x 9 for a test run.
    pub fn make(size: Size) -> Result<Self, Box<dyn std::error::Error>> {
        match size {
            Size::Full => Self::of_shape("45x30x9", 45 * 30 * 9, 7),
            Size::Small => Self::of_shape("3x4x9", 3 * 4 * 9, 1),
        }
    }

    /// 135 x 90 footprints of 2378 channels; 6 x 6 for a test run.
    pub fn make_grating(size: Size) -> Result<Self, Box<dyn std::error::Error>> {
        match size {
            Size::Full => Self::of_shape("135x90", 135 * 90, 7),
            Size::Small => Self::of_shape("6x6", 6 * 6, 1),
        }
    }

    fn of_shape(
        shape: &str,
        footprints: usize,
        rounds: usize,
    ) -> Result<Self, Box<dyn std::error::Error>> {
        let folder = tempfile::tempdir()?;
        let status = Command::new(PROGRAM)
            .args(["synth", "--scene", "sea-of-lowen", "--shape", shape, "--out"])
            .arg(folder.path())
            .stdin(Stdio::null())
            .stdout(Stdio::null())
            .stderr(Stdio::null())
            .status()?;
        let file = std::fs::read_dir(folder.path())?.next().filter(|_| status.success());
        let path = file.ok_or("no granule was made")??.path();
        Ok(Self { folder, path, rounds, footprints })
    }

    /// How many footprints it has.
    pub fn footprints(&self) -> usize {
        self.footprints
    }

    /// Where further files may lie.
    pub fn folder(&self) -> &Path {
        self.folder.path()
    }
}
