//! Writing a flag mask: the contract that retrieval runs rely on.

use std::collections::BTreeSet;
use std::path::Path;

use super::attributes::write_globals;
use super::channel_axes::{ChannelAxisNames, axis_names, define_axis};
use super::provenance::{Provenance, Record};
use super::source::{MaskBand, MaskSource};
use crate::flags::{FlagKind, ReviewState, Scope};
use crate::netcdf_files::{NetcdfWriter, Samples, ValueKind, VariableDraft, WriterError};
use crate::system::{WriteError, clean_text, write_whole};

/// Why a mask or a list was not written.
#[derive(Debug, thiserror::Error)]
pub enum ExportError {
    /// The mask could not be written.
    #[error(transparent)]
    Mask(#[from] WriteError<WriterError>),
    /// The list could not be written.
    #[error(transparent)]
    List(#[from] WriteError<std::io::Error>),
    /// Flags and granule do not belong together.
    #[error("the flags are of {flags} footprints, the granule has {granule}")]
    Mismatch {
        /// Footprints that the flags are about.
        flags: usize,
        /// Footprints of the granule.
        granule: usize,
    },
}

/// Deflate level: masks are long runs of equal numbers, a higher level gains nothing.
const DEFLATE: u8 = 4;

/// Writes the mask of a granule to `target`, whole or not at all.
///
/// Gives the problems that the mask carries in its attributes: those of the granule, of the
/// ledgers and of flags that do not fit the granule.
///
/// # Errors
/// The file cannot be written, or the flags are of another granule.
pub fn write_mask(
    source: &MaskSource,
    record: &Record<'_>,
    provenance: &Provenance,
    target: &Path,
) -> Result<Vec<String>, ExportError> {
    let (flags, granule) = (record.state.review.len(), source.footprint_count());
    if flags != granule {
        return Err(ExportError::Mismatch { flags, granule });
    }
    let mask = Mask::plan(source, record);
    let mut problems = source.problems.clone();
    problems.extend(provenance.ledger_problems.iter().cloned());
    problems.extend(record.state.problems.iter().cloned());
    problems.extend(mask.misfits());
    let problems: Vec<String> = problems.iter().map(|problem| clean_text(problem)).collect();
    write_whole(target, |temporary| {
        let mut writer = NetcdfWriter::create(temporary)?;
        write_globals(&mut writer, source, record, provenance, &problems)?;
        mask.define(&mut writer)?;
        mask.fill(&mut writer)?;
        writer.close()
    })?;
    Ok(problems)
}

/// The names in the file, settled before anything is written.
struct Mask<'a> {
    source: &'a MaskSource,
    record: &'a Record<'a>,
    axes: Vec<ChannelAxisNames>,
    latitude: String,
    longitude: String,
    time: String,
}

impl<'a> Mask<'a> {
    fn plan(source: &'a MaskSource, record: &'a Record<'a>) -> Self {
        let mut taken: BTreeSet<String> =
            source.footprints.iter().map(|(name, _)| name.clone()).collect();
        // A variable of several dimensions must not be called like one of them.
        let mut coordinate = |name: &str| {
            let mut free = name.to_owned();
            while !taken.insert(free.clone()) {
                free.push_str("_of_footprint");
            }
            free
        };
        let [latitude, longitude, time] = ["latitude", "longitude", "time"].map(&mut coordinate);
        taken.extend(["footprint_flag", "review_state", "usable"].map(str::to_owned));
        let axes = axis_names(&source.bands, &taken);
        Self { source, record, axes, latitude, longitude, time }
    }

    fn footprint_dimensions(&self) -> Vec<&str> {
        self.source.footprints.iter().map(|(name, _)| name.as_str()).collect()
    }

    /// The name of a variable that each band has one of.
    fn band_variable(&self, base: &str, band: &MaskBand) -> String {
        match self.source.bands.len() {
            1 => base.to_owned(),
            _ => format!("{base}_{}", band.name),
        }
    }

    /// Once a flag is limited to a band, every band shows what holds for it.
    fn has_band_flags(&self) -> bool {
        let known = |name: &String| self.source.bands.iter().any(|band| band.name == *name);
        self.record.state.band_flags.keys().any(known)
    }

    fn define(&self, writer: &mut NetcdfWriter) -> Result<(), WriterError> {
        for (name, length) in &self.source.footprints {
            writer.dimension(name, *length)?;
        }
        for (band, names) in self.source.bands.iter().zip(&self.axes) {
            define_axis(writer, band, names)?;
        }
        self.define_geolocation(writer)?;
        for draft in self.footprint_drafts() {
            writer.variable(&draft)?;
        }
        for (band, names) in self.source.bands.iter().zip(&self.axes) {
            writer.variable(&self.channel_draft(band, names))?;
        }
        Ok(())
    }

    fn define_geolocation(&self, writer: &mut NetcdfWriter) -> Result<(), WriterError> {
        let dimensions = self.footprint_dimensions();
        let draft = |name: &str| {
            // A footprint may have no position: auxiliary coordinates may be missing.
            let fill = 9.969_209_968_386_869e36_f64;
            VariableDraft::new(name, ValueKind::F64, &dimensions).deflate(DEFLATE).fill(fill)
        };
        let degrees = |name: &str, standard: &str, units: &str| {
            draft(name)
                .attribute("standard_name", standard)
                .attribute("long_name", format!("{standard} of the footprint"))
                .attribute("units", units)
        };
        if self.source.latitude.is_some() {
            writer.variable(&degrees(&self.latitude, "latitude", "degrees_north"))?;
        }
        if self.source.longitude.is_some() {
            writer.variable(&degrees(&self.longitude, "longitude", "degrees_east"))?;
        }
        if self.source.time.is_some() {
            let draft = draft(&self.time)
                .attribute("standard_name", "time")
                .attribute("long_name", "time of the footprint")
                .attribute("units", "seconds since 1970-01-01 00:00:00")
                .attribute("calendar", "standard");
            writer.variable(&draft)?;
        }
        Ok(())
    }

    /// The `coordinates` of footprint variables.
    fn coordinates(&self) -> Option<String> {
        let source = self.source;
        let names = [
            source.latitude.as_ref().map(|_| self.latitude.as_str()),
            source.longitude.as_ref().map(|_| self.longitude.as_str()),
            source.time.as_ref().map(|_| self.time.as_str()),
        ];
        let names: Vec<&str> = names.into_iter().flatten().collect();
        (!names.is_empty()).then(|| names.join(" "))
    }

    fn footprint_draft(&self, name: &str, kind: ValueKind, long_name: &str) -> VariableDraft {
        let draft = VariableDraft::new(name, kind, &self.footprint_dimensions())
            .deflate(DEFLATE)
            .attribute("long_name", long_name);
        match self.coordinates() {
            Some(names) => draft.attribute("coordinates", names),
            None => draft,
        }
    }

    fn footprint_drafts(&self) -> Vec<VariableDraft> {
        let flags = |name: &str, long_name: &str| {
            let draft = self.footprint_draft(name, ValueKind::I32, long_name);
            with_masks(draft, &self.record.vocabulary.of_scope(Scope::Footprint))
        };
        let whole = flags("footprint_flag", "flags of the whole footprint")
            .attribute("ancillary_variables", "review_state usable");
        let mut drafts = vec![whole, self.review_draft(), self.usable_draft()];
        if self.has_band_flags() {
            for band in &self.source.bands {
                let name = format!("footprint_flag_{}", band.name);
                let long_name = format!(
                    "flags that hold for the band {}: of the whole footprint, or limited to it",
                    band.name
                );
                drafts.push(flags(&name, &long_name));
            }
        }
        drafts
    }

    fn review_draft(&self) -> VariableDraft {
        let names = ReviewState::ALL.map(ReviewState::name).join(" ");
        let codes = ReviewState::ALL.map(ReviewState::code).to_vec();
        self.footprint_draft("review_state", ValueKind::I8, "who has assessed the footprint")
            .attribute("standard_name", "status_flag")
            .attribute("flag_values", codes)
            .attribute("flag_meanings", names)
    }

    fn usable_draft(&self) -> VariableDraft {
        self.footprint_draft(
            "usable",
            ValueKind::I8,
            "what a retrieval may use by the default rule",
        )
        .attribute("standard_name", "aggregate_quality_flag")
        .attribute("flag_values", vec![0_i8, 1])
        .attribute("flag_meanings", "not_usable usable")
    }

    fn channel_draft(&self, band: &MaskBand, names: &ChannelAxisNames) -> VariableDraft {
        let name = self.band_variable("channel_flag", band);
        let draft = VariableDraft::new(name, ValueKind::I32, &[&names.dimension])
            .deflate(DEFLATE)
            .attribute("long_name", format!("flags of the channels of {}", band.name));
        let draft = with_masks(draft, &self.record.vocabulary.of_scope(Scope::Channel));
        if names.is_coordinate() {
            draft
        } else {
            draft.attribute("coordinates", names.variable.as_str())
        }
    }

    fn fill(&self, writer: &mut NetcdfWriter) -> Result<(), WriterError> {
        let state = self.record.state;
        for (band, names) in self.source.bands.iter().zip(&self.axes) {
            writer.put_all(&names.variable, &Samples::F64(band.wavenumbers.clone()))?;
            let flags = self.channel_flags(band);
            writer.put_all(&self.band_variable("channel_flag", band), &Samples::I32(flags))?;
            if self.has_band_flags() {
                let name = format!("footprint_flag_{}", band.name);
                writer.put_all(&name, &Samples::I32(self.flags_in(band)))?;
            }
        }
        if let Some(values) = &self.source.latitude {
            writer.put_all(&self.latitude, &filled(values))?;
        }
        if let Some(values) = &self.source.longitude {
            writer.put_all(&self.longitude, &filled(values))?;
        }
        if let Some(values) = &self.source.time {
            writer.put_all(&self.time, &filled(values))?;
        }
        let whole = state.footprint_flags.iter().map(|&flags| signed(flags)).collect();
        writer.put_all("footprint_flag", &Samples::I32(whole))?;
        let review = state.review.iter().map(|state| state.code()).collect();
        writer.put_all("review_state", &Samples::I8(review))?;
        let usable = |at| i8::from(state.usable(at, self.record.vocabulary));
        let usable = (0..state.review.len()).map(usable).collect();
        writer.put_all("usable", &Samples::I8(usable))
    }

    fn flags_in(&self, band: &MaskBand) -> Vec<i32> {
        let state = self.record.state;
        let limited = state.band_flags.get(&band.name);
        let both = |(at, &whole): (usize, &u32)| {
            signed(whole | limited.and_then(|flags| flags.get(at)).copied().unwrap_or(0))
        };
        state.footprint_flags.iter().enumerate().map(both).collect()
    }

    fn channel_flags(&self, band: &MaskBand) -> Vec<i32> {
        let mut flags = vec![0; band.wavenumbers.len()];
        for (&index, channel) in
            self.record.state.channel_flags.get(&band.name).into_iter().flatten()
        {
            if let Some(place) = flags.get_mut(index) {
                *place = signed(channel.flags);
            }
        }
        flags
    }

    /// Bands and channels of the ledgers that the granule does not have.
    fn misfits(&self) -> Vec<String> {
        let state = self.record.state;
        let find = |name: &str| self.source.bands.iter().find(|band| band.name == name);
        let mut misfits = Vec::new();
        for name in state.band_flags.keys().chain(state.channel_flags.keys()) {
            if find(name).is_none() {
                misfits
                    .push(format!("flags for the band `{name}`, which the granule does not have"));
            }
        }
        for (name, channels) in &state.channel_flags {
            let Some(band) = find(name) else { continue };
            for (&index, channel) in channels.iter().filter(|(_, channel)| channel.flags != 0) {
                let there = band.wavenumbers.get(index);
                // A ledger line carries the digits of the wavenumber; 1e-6 cm-1 is far below any
                // channel spacing.
                if there.is_none_or(|there| (there - channel.wavenumber).abs() > 1e-6) {
                    misfits.push(format!(
                        "channel {index} of `{name}` is flagged as {} cm-1, which it is not",
                        channel.wavenumber
                    ));
                }
            }
        }
        misfits
    }
}

/// Bits as a signed integer: the vocabulary leaves the sign bit free.
fn signed(flags: u32) -> i32 {
    flags.cast_signed()
}

fn with_masks(draft: VariableDraft, kinds: &[&FlagKind]) -> VariableDraft {
    let masks: Vec<i32> = kinds.iter().map(|kind| signed(kind.mask())).collect();
    let names: Vec<&str> = kinds.iter().map(|kind| kind.name.as_str()).collect();
    draft
        .attribute("standard_name", "quality_flag")
        .attribute("flag_masks", masks)
        .attribute("flag_meanings", names.join(" "))
}

/// NaN as the fill value, which every reader knows.
fn filled(values: &[f64]) -> Samples {
    let fill = |&value: &f64| if value.is_finite() { value } else { 9.969_209_968_386_869e36 };
    Samples::F64(values.iter().map(fill).collect())
}
