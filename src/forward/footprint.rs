//! One footprint's radiances: columns of air mixed with its surface, clouds, dust and sunlight.

use super::atmosphere::Atmosphere;
use super::columns::{Channel, Column, View, columns};
use super::exponential::exp;
use super::particles::Particles;
use super::surface::Surface;
use crate::spectral::constants::{C1, C2};
use crate::spectral::planck;

/// A layer of particles over part of the footprint.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Cover {
    /// What it is made of.
    pub particles: Particles,
    /// Height of its top, km.
    pub height: f64,
    /// Share of the footprint that it covers, 0 to 1.
    pub amount: f64,
    /// Vertical absorption optical depth at 909 cm-1 (961 cm-1 for dust).
    pub optical_depth: f64,
    /// How much of an opaque layer's scattering above 2000 cm-1 is counted: 1 all of it, 0 for a
    /// layer that only absorbs.
    pub scattering: f64,
}

/// What one footprint looks at.
#[derive(Debug, Clone, PartialEq)]
pub struct Footprint {
    /// Place among the atmospheres of the scenery: 0 the first, 1 the second, in between mixed.
    pub air: f64,
    /// View zenith angle at the ground, degrees.
    pub view_zenith: f64,
    /// Sun's zenith angle, degrees.
    pub sun_zenith: f64,
    /// Surface temperature, K.
    pub surface_temperature: f64,
    /// Kinds of ground and their shares, which sum to one.
    pub ground: Vec<(Surface, f64)>,
    /// Factor on what the ground lacks to a black body: 1 as tabulated.
    pub reflectivity_factor: f64,
    /// Layers of particles, ascending in height.
    pub covers: Vec<Cover>,
}

/// Columns for the atmospheres and view angles of a whole scene, mixed per footprint.
#[derive(Debug)]
pub struct Scenery {
    wavenumbers: Vec<f64>,
    /// `c1 nu^3`, `c2 nu` and the sun's irradiance per channel.
    planck_scale: Vec<f32>,
    planck_rate: Vec<f32>,
    sunlight: Vec<f32>,
    airs: Vec<Atmosphere>,
    view: View,
    /// By atmosphere, then by view angle.
    columns: Vec<Vec<Column>>,
    /// Emissivity by surface, then by view angle.
    emissivities: Vec<(Surface, Vec<Vec<f32>>)>,
    /// Absorption ratio and emissivity of an opaque layer.
    particles: Vec<(Particles, Vec<f32>, Vec<f32>)>,
}

/// The sun seen from the Earth: a black body of 5777 K over this solid angle, sr.
const SUN_TEMPERATURE: f64 = 5777.0;
const SUN_SOLID_ANGLE: f64 = 6.8e-5;
/// Below this wavenumber sunlight is lost in what the Earth emits, cm-1.
const SUN_FROM: f64 = 2000.0;

const SURFACES: [Surface; 5] =
    [Surface::Sea, Surface::Desert, Surface::Soil, Surface::Vegetation, Surface::Snow];
const PARTICLES: [Particles; 7] = [
    Particles::SmallDroplets,
    Particles::Droplets,
    Particles::SmallIce,
    Particles::Ice,
    Particles::LargeIce,
    Particles::Dust,
    Particles::Ash,
];

impl Scenery {
    /// Computes the columns of every atmosphere; the slow part, seconds for thousands of channels.
    ///
    /// `airs` are mixed linearly in their order; `view` lists the angles between which footprints
    /// are interpolated linearly in the secant.
    pub fn new(airs: Vec<Atmosphere>, channels: &[Channel], view: View) -> Scenery {
        let wavenumbers: Vec<f64> = channels.iter().map(|channel| channel.wavenumber).collect();
        let per_channel =
            |value: &dyn Fn(f64) -> f64| wavenumbers.iter().map(|nu| value(*nu) as f32).collect();
        let emissivities = SURFACES
            .into_iter()
            .map(|surface| {
                let by_angle = view
                    .zenith_angles
                    .iter()
                    .map(|angle| per_channel(&|nu| surface.emissivity(nu, *angle)))
                    .collect();
                (surface, by_angle)
            })
            .collect();
        let particles = PARTICLES
            .into_iter()
            .map(|kind| {
                let ratio = per_channel(&|nu| kind.ratio(nu));
                (kind, ratio, per_channel(&|nu| kind.thick_emissivity(nu)))
            })
            .collect();
        Scenery {
            planck_scale: per_channel(&|nu| C1 * nu.powi(3)),
            planck_rate: per_channel(&|nu| C2 * nu),
            sunlight: per_channel(&sunlight),
            columns: airs.iter().map(|air| columns(air, channels, &view)).collect(),
            emissivities,
            particles,
            wavenumbers,
            airs,
            view,
        }
    }

    /// Channel centres in the order given, cm-1.
    pub fn wavenumbers(&self) -> &[f64] {
        &self.wavenumbers
    }

    /// Air temperature at a height (km) for a place among the atmospheres, K.
    pub fn air_temperature(&self, air: f64, height: f64) -> f64 {
        let (low, high, share) = between(self.airs.len(), air);
        let at = |index: usize| self.airs[index].temperature_at(height);
        at(low) * (1.0 - share) + at(high) * share
    }

    /// Pressure at a height (km) for a place among the atmospheres, hPa.
    pub fn pressure(&self, air: f64, height: f64) -> f64 {
        let (low, high, share) = between(self.airs.len(), air);
        let at = |index: usize| self.airs[index].pressure_at(height);
        at(low) * (1.0 - share) + at(high) * share
    }

    /// Noise-free radiances of a footprint, mW m-2 sr-1 (cm-1)-1, one per channel.
    pub fn radiances(&self, footprint: &Footprint) -> Vec<f32> {
        let mix = self.mix(footprint);
        let cosine = footprint.sun_zenith.to_radians().cos().max(0.0) as f32;
        let mut radiance = self.clear(footprint, &mix, cosine);
        for cover in &footprint.covers {
            self.cover(footprint, cover, &mix, cosine, &mut radiance);
        }
        radiance
    }

    /// Which columns count how much.
    fn mix(&self, footprint: &Footprint) -> Mix {
        let (low, high, share) = between(self.columns.len(), footprint.air);
        let (near, far, slope) = self.angles(footprint.view_zenith);
        let weight = |air: f64, angle: f64| (air * angle) as f32;
        Mix {
            corners: [
                (low, near, weight(1.0 - share, 1.0 - slope)),
                (low, far, weight(1.0 - share, slope)),
                (high, near, weight(share, 1.0 - slope)),
                (high, far, weight(share, slope)),
            ],
            angles: [(near, (1.0 - slope) as f32), (far, slope as f32)],
            secant: (1.0 / footprint.view_zenith.to_radians().cos()) as f32,
        }
    }

    fn angles(&self, zenith: f64) -> (usize, usize, f64) {
        let secant = |angle: f64| 1.0 / angle.to_radians().cos();
        let angles = &self.view.zenith_angles;
        let far = angles.partition_point(|angle| *angle < zenith).min(angles.len() - 1);
        let near = far.saturating_sub(1);
        if near == far {
            return (far, far, 0.0);
        }
        let (low, high) = (secant(angles[near]), secant(angles[far]));
        (near, far, ((secant(zenith) - low) / (high - low)).clamp(0.0, 1.0))
    }

    fn blend(&self, mix: &Mix, part: impl Fn(&Column) -> &[f32]) -> Vec<f32> {
        let [a, b, c, d] = mix.corners.map(|(air, angle, _)| part(&self.columns[air][angle]));
        let [wa, wb, wc, wd] = mix.corners.map(|(_, _, weight)| weight);
        a.iter()
            .zip(b)
            .zip(c.iter().zip(d))
            .map(|((a, b), (c, d))| wa * a + wb * b + wc * c + wd * d)
            .collect()
    }

    fn clear(&self, footprint: &Footprint, mix: &Mix, cosine: f32) -> Vec<f32> {
        let mut radiance = self.blend(mix, |column| &column.emission);
        let transmittance = self.blend(mix, |column| &column.transmittance);
        let sky = self.blend(mix, |column| &column.sky);
        let emissivity = self.emissivity(footprint, mix);
        for (i, radiance) in radiance.iter_mut().enumerate() {
            let ground = self.planck(i, footprint.surface_temperature as f32);
            *radiance += transmittance[i] * emissivity[i] * ground + (1.0 - emissivity[i]) * sky[i];
        }
        if self.view.sun_zenith.is_some() && cosine > 0.0 {
            let sun = self.blend(mix, |column| &column.sun);
            for (i, radiance) in radiance.iter_mut().enumerate() {
                *radiance += (1.0 - emissivity[i]) * lambert(self.sunlight[i], cosine) * sun[i];
            }
        }
        radiance
    }

    fn emissivity(&self, footprint: &Footprint, mix: &Mix) -> Vec<f32> {
        let mut emissivity = vec![0.0f32; self.wavenumbers.len()];
        for (surface, share) in &footprint.ground {
            let Some((_, by_angle)) = self.emissivities.iter().find(|(kind, _)| kind == surface)
            else {
                continue;
            };
            for (angle, weight) in mix.angles {
                let weight = weight * *share as f32;
                for (sum, value) in emissivity.iter_mut().zip(&by_angle[angle]) {
                    *sum += weight * value;
                }
            }
        }
        let factor = footprint.reflectivity_factor as f32;
        for value in &mut emissivity {
            *value = (1.0 - factor * (1.0 - *value)).clamp(0.0, 1.0);
        }
        emissivity
    }

    /// Lays a cover over what is seen so far:
    /// `R = (1 - N) Rbelow + N [E + T e B(Tc) + (1 - a) (Rbelow - E)]`, E and T the emission and
    /// transmittance of the air above, a the share absorbed or scattered, e the share emitted.
    fn cover(
        &self,
        footprint: &Footprint,
        cover: &Cover,
        mix: &Mix,
        cosine: f32,
        radiance: &mut [f32],
    ) {
        let Some((_, ratio, thick)) = self.particles.iter().find(|(k, ..)| *k == cover.particles)
        else {
            return;
        };
        let temperature = self.air_temperature(footprint.air, cover.height) as f32;
        let (emission, transmittance) = self.above(mix, cover.height);
        let amount = cover.amount as f32;
        let depth = cover.optical_depth as f32 * mix.secant;
        let scattering = cover.scattering as f32;
        let sun_secant = if cosine > 0.0 { 1.0 / cosine.max(0.1) } else { 0.0 };
        for (i, radiance) in radiance.iter_mut().enumerate() {
            let absorbed = 1.0 - exp(-depth * ratio[i]);
            let scattered = scattering * (1.0 - thick[i]);
            let mut covered = emission[i]
                + transmittance[i] * absorbed * (1.0 - scattered) * self.planck(i, temperature)
                + (1.0 - absorbed) * (*radiance - emission[i]);
            if sun_secant > 0.0 && self.sunlight[i] > 0.0 {
                // The way down is as clear as the way up, in proportion to the secants.
                let both_ways = transmittance[i].max(0.0).powf(1.0 + sun_secant / mix.secant);
                covered += absorbed * scattered * lambert(self.sunlight[i], cosine) * both_ways;
            }
            *radiance = (1.0 - amount) * *radiance + amount * covered;
        }
    }

    /// Emission and transmittance of the air above a height, between the heights computed.
    fn above(&self, mix: &Mix, height: f64) -> (Vec<f32>, Vec<f32>) {
        let heights = &self.view.cloud_heights;
        let upper = heights.partition_point(|rung| *rung < height);
        let at = |rung: Option<usize>| match rung.filter(|rung| *rung < heights.len()) {
            Some(rung) => (
                self.blend(mix, |column| &column.above[rung].emission),
                self.blend(mix, |column| &column.above[rung].transmittance),
            ),
            None => (
                self.blend(mix, |column| &column.emission),
                self.blend(mix, |column| &column.transmittance),
            ),
        };
        if upper >= heights.len() {
            return at(heights.len().checked_sub(1));
        }
        let below = upper.checked_sub(1);
        let base = below.map_or(0.0, |rung| heights[rung]);
        let share = ((height - base) / (heights[upper] - base)).clamp(0.0, 1.0) as f32;
        let (mut emission, mut transmittance) = at(below);
        let (high_emission, high_transmittance) = at(Some(upper));
        for (low, high) in
            [(&mut emission, &high_emission), (&mut transmittance, &high_transmittance)]
        {
            for (value, high) in low.iter_mut().zip(high) {
                *value += share * (high - *value);
            }
        }
        (emission, transmittance)
    }

    /// Planck radiance of a channel in f32: 3e-6 of its value, far below any noise.
    fn planck(&self, channel: usize, temperature: f32) -> f32 {
        let boltzmann = exp(-self.planck_rate[channel] / temperature);
        self.planck_scale[channel] * boltzmann / (1.0 - boltzmann)
    }
}

struct Mix {
    /// Atmosphere, angle, weight.
    corners: [(usize, usize, f32); 4],
    angles: [(usize, f32); 2],
    secant: f32,
}

/// Neighbours among `count` nodes of a place, and the share of the second.
fn between(count: usize, place: f64) -> (usize, usize, f64) {
    let last = count.saturating_sub(1);
    let place = place.clamp(0.0, last as f64);
    let low = (place.floor() as usize).min(last);
    (low, (low + 1).min(last), place - low as f64)
}

fn sunlight(wavenumber: f64) -> f64 {
    if wavenumber < SUN_FROM { 0.0 } else { planck(wavenumber, SUN_TEMPERATURE) * SUN_SOLID_ANGLE }
}

/// What a white diffuse surface sends back.
fn lambert(irradiance: f32, cosine: f32) -> f32 {
    irradiance * cosine / std::f32::consts::PI
}

#[cfg(test)]
mod tests;
