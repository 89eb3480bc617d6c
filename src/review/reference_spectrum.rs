//! A spectrum out of a file, to compare with: the CSV that `radsieve spectrum` writes, or any with
//! such columns.

use super::Review;
use super::spectrum::BandSpectrum;
use crate::spectral::{ChannelAxis, planck};

/// A channel takes the nearest point of the file that lies no further than this share of the
/// channel's spacing, as with wavenumbers in layer expressions.
const NEAR: f64 = 0.6;

/// Points of a spectrum: wavenumber (cm-1) and radiance (mW m-2 sr-1 (cm-1)-1), ascending.
#[derive(Debug, Clone, PartialEq)]
pub struct ReferenceSpectrum {
    points: Vec<(f64, f64)>,
}

impl ReferenceSpectrum {
    /// Reads CSV with a column `wavenumber_cm-1`, and `bt_K` or one that begins with `radiance` and is
    /// in mW m-2 sr-1 (cm-1)-1. Rows without numbers there are passed over.
    ///
    /// # Errors
    /// In words: which column is missing, or that there are no numbers.
    pub fn from_csv(text: &str) -> Result<Self, String> {
        let mut lines = text.lines().filter(|line| !line.starts_with('#'));
        let head: Vec<&str> = lines.next().unwrap_or_default().split(',').map(str::trim).collect();
        let column = |is: &dyn Fn(&str) -> bool| head.iter().position(|name| is(name));
        let at = column(&|name| name == "wavenumber_cm-1")
            .ok_or("the first line has no column wavenumber_cm-1")?;
        let radiance = column(&|name| name.starts_with("radiance"));
        let temperature = column(&|name| name == "bt_K");
        let value = radiance
            .or(temperature)
            .ok_or("the first line has neither a column bt_K nor one that begins with radiance")?;
        let mut points: Vec<(f64, f64)> = lines
            .filter_map(|line| {
                let cells: Vec<&str> = line.split(',').map(str::trim).collect();
                let number = |column: usize| cells.get(column)?.parse::<f64>().ok();
                let (wavenumber, value) = (number(at)?, number(value)?);
                let radiance = if radiance.is_some() { value } else { planck(wavenumber, value) };
                (wavenumber > 0.0 && radiance.is_finite()).then_some((wavenumber, radiance))
            })
            .collect();
        points.sort_by(|one, next| one.0.total_cmp(&next.0));
        match points.is_empty() {
            true => Err("there is no row with a wavenumber and a value".to_owned()),
            false => Ok(Self { points }),
        }
    }

    /// The radiance nearest to a wavenumber, at most `reach` away from it.
    fn near(&self, wavenumber: f64, reach: f64) -> f64 {
        let above = self.points.partition_point(|point| point.0 < wavenumber);
        let candidates = [above.checked_sub(1), Some(above)].into_iter().flatten();
        let distance = |place: &usize| (self.points[*place].0 - wavenumber).abs();
        candidates
            .filter(|place| *place < self.points.len())
            .filter(|place| distance(place) <= reach)
            .min_by(|one, other| distance(one).total_cmp(&distance(other)))
            .map_or(f64::NAN, |place| self.points[place].1)
    }
}

impl Review {
    /// A reference on the channels of the granule, band by band; missing where the file has no point
    /// near a channel.
    pub fn on_channels(&self, reference: &ReferenceSpectrum) -> Vec<BandSpectrum> {
        let bands = self.granule().bands().iter();
        bands
            .map(|band| {
                let wavenumbers = band.axis.wavenumbers();
                let radiances = (0..wavenumbers.len())
                    .map(|channel| at_channel(reference, &band.axis, channel));
                BandSpectrum::of_radiances(wavenumbers, radiances.collect())
            })
            .collect()
    }
}

fn at_channel(reference: &ReferenceSpectrum, axis: &ChannelAxis, channel: usize) -> f64 {
    let wavenumbers = axis.wavenumbers();
    let here = wavenumbers[channel];
    let neighbours = [channel.checked_sub(1), Some(channel + 1)].into_iter().flatten();
    let spacing = neighbours
        .filter_map(|neighbour| Some((wavenumbers.get(neighbour)? - here).abs()))
        .fold(f64::INFINITY, f64::min);
    // A channel alone has no spacing; one wavenumber is that of many sounders.
    reference.near(here, NEAR * if spacing.is_finite() { spacing } else { 1.0 })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_the_spectrum_command_writes_is_read() {
        let text = "band,wavenumber_cm-1,radiance_mW_m-2_sr-1_(cm-1)-1,bt_K,absorption\n\
                    0,901,61.5,,\n0,900,60.5,280,0\n0,902,,,\n";
        let read = ReferenceSpectrum::from_csv(text).unwrap();
        assert_eq!(read.points, [(900.0, 60.5), (901.0, 61.5)]);
        assert_eq!(read.near(900.4, 0.5), 60.5);
        assert!(read.near(903.0, 0.5).is_nan());
    }

    #[test]
    fn temperatures_will_do_and_what_is_missing_is_named() {
        let read =
            ReferenceSpectrum::from_csv("# ours\nwavenumber_cm-1, bt_K\n900, 280\n").unwrap();
        assert_eq!(read.points, [(900.0, planck(900.0, 280.0))]);
        for (text, words) in [
            ("", "no column wavenumber_cm-1"),
            ("wavenumber_cm-1,x\n", "neither a column bt_K"),
            ("wavenumber_cm-1,bt_K\nfoo,bar\n", "no row"),
        ] {
            assert!(ReferenceSpectrum::from_csv(text).unwrap_err().contains(words), "{text}");
        }
    }

    #[test]
    fn a_channel_takes_a_point_within_its_spacing_alone() {
        let axis = ChannelAxis::new(vec![900.0, 902.0, 904.0]).unwrap();
        let reference = ReferenceSpectrum { points: vec![(901.1, 1.0), (905.3, 2.0)] };
        assert_eq!(at_channel(&reference, &axis, 1), 1.0);
        assert!(at_channel(&reference, &axis, 2).is_nan());
    }
}
