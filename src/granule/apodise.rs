//! Apodising on request: spectra that are not apodised, and only those.

use super::band::{Apodisation, Band, Quantity};
use super::problem::Problem;
use crate::spectral::Hamming3;

/// The running mean is Hamming's function only on an even grid. Axes stored in single precision
/// differ in their spacings by a few parts in a thousand.
const UNEVEN: f64 = 0.01;

/// Hamming's running mean for a band that it is good for; the channels that it leaves without a
/// value become bad, and the band says that it is apodised. Others stay as they are, with the reason
/// among the problems.
pub fn hamming(band: &mut Band, problems: &mut Vec<Problem>) -> Option<Hamming3> {
    if let Some(reason) = reason_against(band) {
        let what = format!("not apodised as asked: {reason}");
        problems.push(Problem::refused(&what, &band.variable, "its values stay as in the file"));
        return None;
    }
    let mean = Hamming3::new(&band.axis, |channel| !band.bad[channel]);
    for (channel, bad) in band.bad.iter_mut().enumerate() {
        *bad = !mean.has(channel);
    }
    band.apodisation = Apodisation::HammingApplied;
    Some(mean)
}

fn reason_against(band: &Band) -> Option<String> {
    if matches!(band.quantity, Quantity::BrightnessTemperature(_)) {
        return Some("the file holds brightness temperatures, not radiances".into());
    }
    match &band.apodisation {
        Apodisation::None => {}
        Apodisation::Unknown => {
            return Some(
                "whether it is apodised already is unknown; a layout file can say apodisation = \"none\""
                    .into(),
            );
        }
        already => return Some(format!("it is apodised already ({})", already.label())),
    }
    match band.spacing() {
        Some((low, high)) if high - low <= UNEVEN * low => None,
        Some((low, high)) => Some(format!("its channels are {low:.4} to {high:.4} cm-1 apart")),
        None => Some("no two of its channels are neighbours".into()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::TemperatureUnit;

    fn band(apodisation: Apodisation, wavenumbers: &[f64]) -> Band {
        Band::of_wavenumbers(wavenumbers, apodisation)
    }

    const EVEN: [f64; 7] = [700.0, 701.0, 702.0, 900.0, 901.0, 902.0, 903.0];

    #[test]
    fn ends_of_each_stretch_become_guard_channels() {
        let mut band = band(Apodisation::None, &EVEN);
        let mut problems = Vec::new();
        assert!(hamming(&mut band, &mut problems).is_some());
        assert_eq!(band.bad, [true, false, true, true, false, false, true]);
        assert_eq!(band.apodisation, Apodisation::HammingApplied);
        assert!(problems.is_empty());
    }

    #[test]
    fn nothing_is_apodised_twice_nor_where_it_makes_no_sense() {
        let refused = |mut band: Band| {
            let before = band.clone();
            let mut problems = Vec::new();
            assert_eq!(hamming(&mut band, &mut problems), None);
            assert_eq!(band, before);
            problems[0].to_string()
        };
        assert!(refused(band(Apodisation::Hamming, &EVEN)).contains("already (Hamming)"));
        assert!(refused(band(Apodisation::HammingApplied, &EVEN)).contains("already"));
        assert!(refused(band(Apodisation::Unknown, &EVEN)).contains("unknown"));
        assert!(refused(band(Apodisation::None, &[700.0, 701.0, 702.5])).contains("1.5000 cm-1"));
        let mut stored = band(Apodisation::None, &EVEN);
        stored.quantity = Quantity::BrightnessTemperature(TemperatureUnit::Kelvin);
        assert!(refused(stored).contains("brightness temperatures"));
    }
}
