//! Channels by the height at which cloud first changes them.

use std::sync::{Arc, Mutex, PoisonError};

use crate::forward::{self, Atmosphere, Changes, Response, Standard, View, columns};
use crate::granule::Channel;
use crate::layers::Names;
use crate::screening::cloud_height::overcast;
use crate::spectral::planck;

/// Where channels are ranked, cm-1: the wing of the CO2 band at 15 um and the window beside it.
const FROM: f64 = 680.0;
const TO: f64 = 960.0;
/// Beyond this, cm-1, channels see much the same, and fewer are enough.
const WING_END: f64 = 770.0;
/// Distance between channels that are looked at, cm-1, in the wing and beyond.
const APART: (f64, f64) = (0.6, 2.5);
/// An opaque cloud that changes the radiance by this share is the first that counts.
const FIRST_CHANGE: f64 = 0.01;
/// Clouds are looked for between these pressures, hPa, in so many steps.
const PRESSURES: (f64, f64) = (100.0, 1013.0);
const STEPS: usize = 32;
/// Channels from each step: so a rank is the same step in height for every instrument, and limits
/// per rank mean the same.
const FROM_EACH_STEP: usize = 3;

/// A channel and the pressure, hPa, of the lowest opaque cloud that changes it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ranked {
    pub channel: Channel,
    pub pressure: f64,
}

/// Channels with their widths, cm-1, and what was worked out of them.
type Known = (Vec<(Channel, f64)>, Arc<Vec<Ranked>>);

/// Rankings that have been worked out, one for each set of channels.
#[derive(Debug, Default)]
pub struct Rankings(Mutex<Vec<Known>>);

impl Rankings {
    /// The granule's channels in order, the one that cloud must be highest for first.
    pub fn of(&self, names: &dyn Names) -> Arc<Vec<Ranked>> {
        let candidates = apart(&names.channels_between(FROM, TO));
        let ranked = self.pressures(&candidates, names);
        Arc::new(spread_out(&ranked))
    }

    /// The pressure of the lowest cloud that changes each channel, in their order; missing where none
    /// below the stratosphere does.
    pub fn pressures(&self, channels: &[Channel], names: &dyn Names) -> Arc<Vec<Ranked>> {
        let lock = || self.0.lock().unwrap_or_else(PoisonError::into_inner);
        let wanted: Vec<(Channel, f64)> =
            channels.iter().map(|channel| (*channel, width(channel, names))).collect();
        if let Some((_, known)) = lock().iter().find(|(known, _)| *known == wanted) {
            return Arc::clone(known);
        }
        // Worked out while the lock is open: the work is shared among threads, and one that waits for
        // its share may take up another granule, which asks for the same lock.
        let found = lowest_clouds(wanted.iter().map(|(one, width)| (one.wavenumber, *width)));
        let ranked = channels.iter().zip(found);
        let ranked: Vec<Ranked> =
            ranked.map(|(channel, pressure)| Ranked { channel: *channel, pressure }).collect();
        let ranked = Arc::new(ranked);
        lock().push((wanted, Arc::clone(&ranked)));
        ranked
    }
}

/// Channels that keep their distance, ascending in wavenumber.
fn apart(channels: &[Channel]) -> Vec<Channel> {
    let mut sorted = channels.to_vec();
    sorted.sort_by(|one, other| one.wavenumber.total_cmp(&other.wavenumber));
    let mut taken: Vec<Channel> = Vec::new();
    for channel in sorted {
        let distance = if channel.wavenumber < WING_END { APART.0 } else { APART.1 };
        if taken.last().is_none_or(|last| channel.wavenumber - last.wavenumber >= distance) {
            taken.push(channel);
        }
    }
    taken
}

/// How wide a channel is, as far as its neighbours tell, cm-1.
fn width(channel: &Channel, names: &dyn Names) -> f64 {
    let around = names.channels_between(channel.wavenumber - 3.0, channel.wavenumber + 3.0);
    let distances = around
        .iter()
        .map(|one| (one.wavenumber - channel.wavenumber).abs())
        .filter(|distance| *distance > 1e-3);
    distances.fold(2.0, f64::min).max(0.25)
}

/// At most [`FROM_EACH_STEP`] channels of each step of pressure, the highest first.
fn spread_out(channels: &[Ranked]) -> Vec<Ranked> {
    let mut steps: Vec<Vec<Ranked>> = vec![Vec::new(); STEPS];
    let (top, bottom) = PRESSURES;
    for one in channels.iter().filter(|one| (top..=bottom).contains(&one.pressure)) {
        let step = ((one.pressure - top) / (bottom - top) * STEPS as f64) as usize;
        steps[step.min(STEPS - 1)].push(*one);
    }
    let mut out = Vec::new();
    for step in &mut steps {
        step.sort_by(|one, other| one.pressure.total_cmp(&other.pressure));
        let taken = step.len().min(FROM_EACH_STEP);
        out.extend((0..taken).map(|place| step[place * step.len() / taken]));
    }
    out
}

/// For channels by wavenumber and width (cm-1) the pressure, hPa, of the lowest opaque cloud that
/// changes the radiance of the US Standard Atmosphere by [`FIRST_CHANGE`], straight down: linear in
/// pressure between levels, missing where none does.
fn lowest_clouds(channels: impl Iterator<Item = (f64, f64)>) -> Vec<f64> {
    let channels: Vec<forward::Channel> = channels
        .map(|(wavenumber, width)| forward::Channel {
            wavenumber,
            response: Response::Box { width },
        })
        .collect();
    let air = Atmosphere::new(Standard::UsStandard, &Changes::default());
    let levels: Vec<_> =
        air.levels().iter().take_while(|level| level.pressure >= PRESSURES.0).collect();
    let view = View {
        zenith_angles: vec![0.0],
        sun_zenith: None,
        cloud_heights: levels.iter().skip(1).map(|level| level.height).collect(),
    };
    let temperatures: Vec<f64> = levels.iter().map(|level| level.temperature).collect();
    let columns = columns(&air, &channels, &view);
    let Some(column) = columns.first() else { return Vec::new() };
    let lowest = |place: usize| {
        let above = column.above.iter().map(|above| f64::from(above.transmittance[place]));
        let passes = f64::from(column.transmittance[place]);
        let transmittances: Vec<f64> = std::iter::once(passes).chain(above).collect();
        let wavenumber = channels[place].wavenumber;
        let taken = overcast(wavenumber, &temperatures, &transmittances, 0.0);
        let clear =
            f64::from(column.emission[place]) + passes * planck(wavenumber, temperatures[0]);
        let share = |level: usize| (taken[level] / clear).abs();
        let level = (1..taken.len()).find(|level| share(*level) > FIRST_CHANGE)?;
        let between = (FIRST_CHANGE - share(level - 1)) / (share(level) - share(level - 1));
        let (low, high) = (levels[level - 1].pressure, levels[level].pressure);
        Some(low + between * (high - low))
    };
    (0..channels.len()).map(|place| lowest(place).unwrap_or(f64::NAN)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(index: usize, wavenumber: f64, pressure: f64) -> Ranked {
        Ranked { channel: Channel { band: 0, index, wavenumber }, pressure }
    }

    /// The line wing of CO2 weakens from 700 to 760 cm-1, so what is seen lies ever lower; the window
    /// sees the ground. The order of 14.2, 13.7, 13.3 um is that of [Menzel et al. 1983]; 14.0 um is
    /// left out, for between its lines as little as at 13.7 um lies above the lowest cloud that shows.
    #[test]
    fn channels_see_ever_lower_towards_the_window() {
        let places = [704.4, 733.3, 751.3, 831.0, 900.3];
        let found = lowest_clouds(places.iter().map(|place| (*place, 4.7)));
        assert!(found.windows(2).all(|pair| pair[0] < pair[1]), "{found:?}");
        // The window takes 1 % within a few hundred metres of the ground: 1.6 % per K at 900 cm-1 and
        // 6.5 K per km make it 0.1 km, 1001 hPa, a little more for the air's own veil.
        assert!((990.0..1010.0).contains(&found[4]), "{}", found[4]);
        // In the Q branch nothing below 100 hPa is seen.
        assert!(lowest_clouds([(667.4, 0.6)].into_iter())[0].is_nan());
    }

    #[test]
    fn every_step_of_height_gives_as_many() {
        let many: Vec<Ranked> =
            (0..900).map(|at_| at(at_, 700.0 + at_ as f64, 110.0 + at_ as f64)).collect();
        let ranked = spread_out(&many);
        assert_eq!(ranked.len(), STEPS * FROM_EACH_STEP);
        assert!(ranked.windows(2).all(|pair| pair[0].pressure < pair[1].pressure));
        let few = spread_out(&[at(0, 900.0, 1000.0), at(1, 901.0, f64::NAN), at(2, 704.0, 300.0)]);
        assert_eq!(few.iter().map(|one| one.channel.index).collect::<Vec<_>>(), [2, 0]);
    }

    #[test]
    fn channels_keep_their_distance() {
        let channels: Vec<Channel> = (0..1120)
            .map(|index| Channel { band: 0, index, wavenumber: 680.0 + 0.25 * index as f64 })
            .collect();
        let taken = apart(&channels);
        // 0.75 cm-1 in the wing, 2.5 cm-1 beyond.
        assert_eq!(taken.iter().filter(|one| one.wavenumber < 770.0).count(), 120);
        assert_eq!(taken.iter().filter(|one| one.wavenumber >= 770.0).count(), 76);
    }
}
