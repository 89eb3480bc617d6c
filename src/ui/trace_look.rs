//! What the Trace shows beside the spectrum under the cursor, and in which quantity.

use crate::review::{BandSpectrum, ManySpectra, Spectrum};

use super::bench::Bench;

/// What is plotted against the wavenumber.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum TraceQuantity {
    /// Brightness temperature, K.
    #[default]
    Temperature,
    /// Radiance, mW m-2 sr-1 (cm-1)-1.
    Radiance,
    /// The absorption spectrum, `1 - L / B(T_window)`.
    Absorption,
}

impl TraceQuantity {
    const ALL: [TraceQuantity; 3] =
        [TraceQuantity::Temperature, TraceQuantity::Radiance, TraceQuantity::Absorption];

    /// The next, round and round.
    pub fn next(self) -> TraceQuantity {
        let here = Self::ALL.iter().position(|one| *one == self).unwrap_or(0);
        Self::ALL[(here + 1) % Self::ALL.len()]
    }

    /// Its name on the screen and in places that are kept.
    pub fn name(self) -> &'static str {
        match self {
            TraceQuantity::Temperature => "BT",
            TraceQuantity::Radiance => "radiance",
            TraceQuantity::Absorption => "absorption",
        }
    }

    /// The quantity of this name.
    pub fn named(name: &str) -> Option<TraceQuantity> {
        Self::ALL.into_iter().find(|one| one.name() == name)
    }
}

/// What spectra are shown as differences to.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Reference {
    /// The mean of the granule.
    Mean,
    /// The footprint pinned with this letter.
    Pin(char),
    /// The spectrum out of a file.
    File,
    /// What a model calculated for each footprint under a clear sky.
    Calculated,
}

/// A spectrum out of a file.
#[derive(Debug, Clone)]
pub struct ReferenceFile {
    /// The file's name, cleaned.
    pub name: String,
    /// Its values on the granule's channels.
    pub bands: Vec<BandSpectrum>,
}

/// How the spectra of a selection lie.
#[derive(Debug, Clone)]
pub struct Envelope {
    /// The selection in words.
    pub words: String,
    /// Its spectra.
    pub spectra: ManySpectra,
}

/// What stands beside a footprint's spectrum.
#[derive(Debug)]
pub struct Beside {
    /// The footprint.
    pub footprint: usize,
    /// The noise of its channels, band by band: a standard deviation in the band's own quantity; none
    /// where the file gives none.
    pub noise: Vec<Option<Vec<f64>>>,
    /// What a model calculated for it, if anything.
    pub calculated: Option<Spectrum>,
}

/// All of that.
#[derive(Debug, Default)]
pub struct TraceLook {
    /// What is plotted.
    pub quantity: TraceQuantity,
    /// What spectra are shown as differences to; none shows them as they are.
    pub reference: Option<Reference>,
    /// The granule's mean, once it was asked for.
    pub mean: Option<ManySpectra>,
    /// A spectrum out of a file.
    pub file: Option<ReferenceFile>,
    /// The envelope of a selection.
    pub envelope: Option<Envelope>,
    /// Temperatures of Planck curves in the view of radiances, K.
    pub planck: Vec<f64>,
    /// Whether noise bars are shown.
    pub bars: bool,
    /// What stands beside a spectrum: that under the cursor, once it is there.
    pub beside: Option<Beside>,
    /// The wavenumbers that the layer on show is made from, cm-1.
    pub used: Vec<f64>,
}

/// Planck curves of the temperatures of clouds and surfaces, K.
pub const USUAL_PLANCK: [f64; 5] = [220.0, 240.0, 260.0, 280.0, 300.0];

impl Bench {
    /// The reference's spectrum, if it is there.
    pub fn reference_bands(&self) -> Option<&[BandSpectrum]> {
        let look = &self.look;
        match look.reference? {
            Reference::Mean => look.mean.as_ref().map(|mean| mean.mean.as_slice()),
            Reference::Pin(letter) => {
                let pin = self.pins.iter().find(|pin| pin.letter == letter)?;
                pin.spectrum.as_ref().map(|spectrum| spectrum.bands.as_slice())
            }
            Reference::File => look.file.as_ref().map(|file| file.bands.as_slice()),
            Reference::Calculated => {
                let beside = look.beside.as_ref().filter(|one| one.footprint == self.cursor)?;
                beside.calculated.as_ref().map(|spectrum| spectrum.bands.as_slice())
            }
        }
    }

    /// The reference after the one in use, of those that there are; none after the last.
    pub fn next_reference(&self) -> Option<Reference> {
        let mut all = vec![Reference::Mean];
        all.extend(self.pins.iter().map(|pin| Reference::Pin(pin.letter)));
        all.extend(self.look.file.iter().map(|_| Reference::File));
        all.extend(self.has_calculated().then_some(Reference::Calculated));
        match self.look.reference {
            None => all.first().copied(),
            Some(here) => {
                let place = all.iter().position(|one| *one == here)?;
                all.get(place + 1).copied()
            }
        }
    }

    /// Differences to a pin that was taken off end: another pin of its letter is another spectrum.
    pub fn drop_lost_reference(&mut self) {
        if let Some(Reference::Pin(letter)) = self.look.reference
            && !self.pins.iter().any(|pin| pin.letter == letter)
        {
            self.look.reference = None;
        }
    }

    /// Whether a model's spectra are there for any band.
    pub fn has_calculated(&self) -> bool {
        let granule = self.review.granule();
        (0..granule.bands().len()).any(|band| granule.calculated(band).is_some())
    }

    /// Whether the file gives the noise of any band.
    pub fn has_noise(&self) -> bool {
        self.review.granule().bands().iter().any(|band| band.noise.is_some())
    }

    /// The reference in words.
    pub fn reference_words(&self) -> Option<String> {
        Some(match self.look.reference? {
            Reference::Mean => "the granule's mean".to_owned(),
            Reference::Pin(letter) => format!("pin {letter}"),
            Reference::Calculated => "the calculated clear sky".to_owned(),
            Reference::File => {
                self.look.file.as_ref().map_or_else(String::new, |file| file.name.clone())
            }
        })
    }
}
