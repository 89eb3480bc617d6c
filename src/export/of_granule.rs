//! From an open granule to what a mask takes over from it.

use super::source::{MaskBand, MaskSource};
use crate::flags::GranuleIdentity;
use crate::granule::{Apodisation, Band, Granule, GranuleError, Identity};
use crate::units::SpectralUnit;

impl MaskSource {
    /// What the mask of `granule` takes over. Reads the file for its hash, if nobody has yet.
    ///
    /// # Errors
    /// The file cannot be read, or is not the one that was opened.
    pub fn of(granule: &Granule) -> Result<Self, GranuleError> {
        let Identity { size, hash } = granule.hash()?.clone();
        let grid = granule.footprints();
        let geolocation = granule.geolocation();
        // Not what the cube noticed: that depends on how much of the file has been looked at, and
        // the same decisions are to give the same bytes.
        let problems = granule.problems().iter().map(ToString::to_string).collect();
        Ok(Self {
            name: granule.name(),
            size,
            hash,
            title: granule.title(),
            source: granule.source(),
            history: granule.global_text("history"),
            footprints: grid.names().iter().cloned().zip(grid.lengths().iter().copied()).collect(),
            bands: granule.bands().iter().map(mask_band).collect(),
            latitude: geolocation.latitude.clone(),
            longitude: geolocation.longitude.clone(),
            time: geolocation.time.clone(),
            read_with: granule.read_with()?,
            problems,
        })
    }
}

/// Which granule a ledger is about. Reads the file for its hash, if nobody has yet.
///
/// # Errors
/// The file cannot be read, or is not the one that was opened.
pub fn granule_identity(granule: &Granule) -> Result<GranuleIdentity, GranuleError> {
    let Identity { size, hash } = granule.hash()?.clone();
    let grid = granule.footprints();
    let footprints = grid.names().iter().cloned().zip(grid.lengths().iter().copied()).collect();
    let bands = granule.bands().iter().map(|band| band.name.clone()).collect();
    let read_with = granule.read_with()?;
    Ok(GranuleIdentity { hash, size, name: granule.name(), footprints, bands, read_with })
}

fn mask_band(band: &Band) -> MaskBand {
    let name = band.axis_variable.rsplit('/').next().unwrap_or_default();
    // The mask gives wavenumbers in cm-1; a variable called `wavelength` must not hold them.
    let holds_wavenumbers =
        matches!(band.axis_unit, SpectralUnit::PerCentimetre | SpectralUnit::PerMetre);
    MaskBand {
        name: band.name.clone(),
        dimension: band.dimension.clone(),
        axis_name: (holds_wavenumbers && !name.is_empty()).then(|| name.to_owned()),
        wavenumbers: band.axis.wavenumbers().to_vec(),
        apodisation: (band.apodisation != Apodisation::Unknown)
            .then(|| band.apodisation.label().to_owned()),
    }
}
