//! What stands in a mask's variables.

use super::mask_layout::Mask;
use super::source::MaskBand;
use crate::netcdf_files::{NetcdfWriter, Samples, WriterError};

/// The fill value of positions and times: the library's own, which every reader knows.
pub(super) const MISSING: f64 = 9.969_209_968_386_869e36;

impl Mask<'_> {
    pub(super) fn fill(&self, writer: &mut NetcdfWriter) -> Result<(), WriterError> {
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
    pub(super) fn misfits(&self) -> Vec<String> {
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
pub(super) fn signed(flags: u32) -> i32 {
    flags.cast_signed()
}

/// NaN as the fill value.
fn filled(values: &[f64]) -> Samples {
    let fill = |&value: &f64| if value.is_finite() { value } else { MISSING };
    Samples::F64(values.iter().map(fill).collect())
}
