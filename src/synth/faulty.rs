//! An instrument with everything wrong that can be wrong.

use super::defects::Defect;
use super::instrument::Instrument;
use super::swath::Swath;

/// One defect of every kind, as far as the instrument has bands and detectors for them.
pub fn every_kind(instrument: &Instrument, swath: &Swath) -> Vec<Defect> {
    let last_band = instrument.bands.len() - 1;
    let middle_band = last_band.min(1);
    let (lines, positions) = (swath.lines, swath.positions);
    let mut defects = Vec::new();
    if swath.detectors() >= 4 {
        defects.push(Defect::Shift { band: 0, detector: 3, ppm: 25.0 });
        defects.push(Defect::NoisyDetector { band: middle_band, detector: 0, factor: 3.0 });
        defects.push(Defect::Striping { band: middle_band, detector: 2, kelvin: 0.7 });
        defects.push(Defect::DeadDetector { band: last_band, detector: 1 });
    }
    let ringing = ((lines * 3 / 4, 2), (lines * 3 / 4 + 1, positions / 2));
    let lost = ((lines / 2, positions / 2), (lines / 2 + 1, positions - 1));
    defects.extend([
        Defect::PoppingChannel {
            wavenumber: 724.5,
            noises: 14.0,
            first: lines / 4,
            last: lines / 2,
        },
        Defect::NoisyChannel { wavenumber: 699.0, factor: 6.0 },
        Defect::DeadChannel { wavenumber: 1322.0 },
        Defect::Ringing { band: 0, first: ringing.0, last: ringing.1, noises: 3.0 },
        Defect::Spikes { count: 14, noises: 15.0 },
        Defect::LostLine { line: lines - 2 },
        Defect::RepeatedLine { line: 4.min(lines - 1) },
        Defect::BandLost { band: 0, first: lost.0, last: lost.1 },
        Defect::Fill { count: 9 },
    ]);
    defects
}
