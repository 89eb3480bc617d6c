//! Which variables a mask has: names, dimensions, attributes.

use std::collections::BTreeSet;

use super::channel_axes::{ChannelAxisNames, axis_names, define_axis};
use super::mask_values::{MISSING, signed};
use super::provenance::Record;
use super::source::{MaskBand, MaskSource};
use crate::flags::{FlagKind, ReviewState, Scope};
use crate::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft, WriterError};

/// Deflate level: masks are long runs of equal numbers, a higher level gains nothing.
const DEFLATE: u8 = 4;

/// The names in the file, settled before anything is written.
pub(super) struct Mask<'a> {
    pub(super) source: &'a MaskSource,
    pub(super) record: &'a Record<'a>,
    pub(super) axes: Vec<ChannelAxisNames>,
    pub(super) latitude: String,
    pub(super) longitude: String,
    pub(super) time: String,
}

impl<'a> Mask<'a> {
    pub(super) fn plan(source: &'a MaskSource, record: &'a Record<'a>) -> Self {
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
    pub(super) fn band_variable(&self, base: &str, band: &MaskBand) -> String {
        match self.source.bands.len() {
            1 => base.to_owned(),
            _ => format!("{base}_{}", band.name),
        }
    }

    /// Once a flag is limited to a band, every band shows what holds for it.
    pub(super) fn has_band_flags(&self) -> bool {
        let known = |name: &String| self.source.bands.iter().any(|band| band.name == *name);
        self.record.state.band_flags.keys().any(known)
    }

    pub(super) fn define(&self, writer: &mut NetcdfWriter) -> Result<(), WriterError> {
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
            VariableDraft::new(name, ValueKind::F64, &dimensions).deflate(DEFLATE).fill(MISSING)
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
}

fn with_masks(draft: VariableDraft, kinds: &[&FlagKind]) -> VariableDraft {
    let masks: Vec<i32> = kinds.iter().map(|kind| signed(kind.mask())).collect();
    let names: Vec<&str> = kinds.iter().map(|kind| kind.name.as_str()).collect();
    draft
        .attribute("standard_name", "quality_flag")
        .attribute("flag_masks", masks)
        .attribute("flag_meanings", names.join(" "))
}
