//! The noise as the file itself tells it.

use super::file_variables::{RADIANCE_UNIT, named};
use super::granule_file::Layout;
use super::instrument::Band;
use super::spectra::Maker;
use crate::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft, WriterError};

/// How the file tells the noise of its channels.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ToldNoise {
    /// One number for each channel.
    Channels,
    /// Numbers for each detector: they differ, and so does the noise itself.
    Detectors,
}

impl ToldNoise {
    /// As it is typed.
    pub fn parse(text: &str) -> Option<Self> {
        [Self::Channels, Self::Detectors].into_iter().find(|kind| kind.label() == text)
    }

    /// As it is typed.
    pub fn label(self) -> &'static str {
        match self {
            Self::Channels => "channels",
            Self::Detectors => "detectors",
        }
    }

    /// Factor on the noise of a detector: from 0.8 on, a fifth more for each of four.
    pub(super) fn factor(self, detector: usize) -> f32 {
        match self {
            Self::Channels => 1.0,
            Self::Detectors => 0.8 + 0.2 * (detector % 4) as f32,
        }
    }

    /// Whether the variable has a dimension for detectors.
    fn of_detectors(self, layout: &Layout) -> bool {
        self == Self::Detectors && layout.names.contains(&"detector")
    }

    pub(super) fn define(
        self,
        file: &mut NetcdfWriter,
        layout: &Layout,
        band: &Band,
    ) -> Result<(), WriterError> {
        let channel = named("channel", band);
        let mut dimensions = vec![channel.as_str()];
        if self.of_detectors(layout) {
            dimensions.insert(0, "detector");
        }
        file.variable(
            &VariableDraft::new(named("nedn", band), ValueKind::F32, &dimensions)
                .attribute("long_name", "noise equivalent radiance")
                .attribute("units", RADIANCE_UNIT),
        )
    }

    pub(super) fn put(
        self,
        file: &mut NetcdfWriter,
        maker: &Maker,
        layout: &Layout,
        band: &Band,
    ) -> Result<(), WriterError> {
        let detectors = if self.of_detectors(layout) { maker.swath.detectors() } else { 1 };
        let of_detector = |detector| band.nedn.iter().map(move |one| one * self.factor(detector));
        let values: Vec<f32> = (0..detectors).flat_map(of_detector).collect();
        file.put_all(&named("nedn", band), &values.into())
    }
}
