//! Radiance to brightness temperature, over as many values as a full-size granule has.

use std::cell::RefCell;
use std::hint::black_box;

use radsieve::spectral::fast::SpectrumInverse;
use radsieve::spectral::{brightness_temperature_or_nan, planck};
use rayon::prelude::*;

use crate::table::Section;
use crate::{Size, stopwatch};

/// Three bands as an interferometer has them: 2223 channels of 0.625 cm-1.
fn wavenumbers() -> Vec<f64> {
    let band = |first: f64, count: u32| (0..count).map(move |step| first + 0.625 * f64::from(step));
    band(648.75, 717).chain(band(1208.75, 869)).chain(band(2153.75, 637)).collect()
}

/// Black bodies of 180 to 330 K, one per footprint.
fn radiances(wavenumbers: &[f64], footprints: usize) -> Vec<f32> {
    let temperature = |footprint: usize| 180.0 + 150.0 * footprint as f64 / footprints as f64;
    (0..footprints)
        .flat_map(|footprint| {
            wavenumbers
                .iter()
                .map(move |wavenumber| planck(*wavenumber, temperature(footprint)) as f32)
        })
        .collect()
}

/// The path that decides, value by value.
fn exact(wavenumbers: &[f64], radiances: &[f32], temperatures: &mut [f32]) {
    let channels = wavenumbers.len();
    for (radiances, temperatures) in
        radiances.chunks(channels).zip(temperatures.chunks_mut(channels))
    {
        for ((radiance, temperature), wavenumber) in
            radiances.iter().zip(temperatures).zip(wavenumbers)
        {
            *temperature = brightness_temperature_or_nan(*wavenumber, f64::from(*radiance)) as f32;
        }
    }
}

/// Footprints that one task takes: large enough to be worth handing over, small enough to share out.
const FOOTPRINTS_PER_TASK: usize = 135;

/// The section's table.
pub fn section(size: Size) -> Section {
    let (footprints, rounds) = match size {
        Size::Full => (45 * 30 * 9, 5),
        Size::Small => (9, 1),
    };
    let wavenumbers = wavenumbers();
    let radiances = radiances(&wavenumbers, footprints);
    let inverse = SpectrumInverse::new(&wavenumbers);
    // One buffer for all: fresh memory costs more than what is measured.
    let temperatures = RefCell::new(vec![0.0f32; radiances.len()]);
    let task = FOOTPRINTS_PER_TASK * wavenumbers.len();
    let rows = stopwatch::shortest(
        rounds,
        vec![
            (
                "f64, value by value, one thread",
                Box::new(|| {
                    exact(&wavenumbers, &radiances, black_box(&mut temperatures.borrow_mut()))
                }),
            ),
            (
                "f32, vectors, one thread",
                Box::new(|| {
                    inverse.brightness_temperatures(
                        &radiances,
                        black_box(&mut temperatures.borrow_mut()),
                    );
                }),
            ),
            (
                "f32, vectors, all threads",
                Box::new(|| {
                    temperatures
                        .borrow_mut()
                        .par_chunks_mut(task)
                        .zip(radiances.par_chunks(task))
                        .for_each(|(out, radiances)| {
                            inverse.brightness_temperatures(radiances, out)
                        });
                }),
            ),
            (
                "memory copy, one thread: the limit",
                Box::new(|| black_box(&mut temperatures.borrow_mut()).copy_from_slice(&radiances)),
            ),
        ],
    );
    let notes = vec![
        format!("{} threads", rayon::current_num_threads()),
        format!("worst difference {:.1e} K", worst_difference(&wavenumbers, &radiances, &inverse)),
    ];
    Section { title: format!("inverse Planck function, {} values", radiances.len()), rows, notes }
}

fn worst_difference(wavenumbers: &[f64], radiances: &[f32], inverse: &SpectrumInverse) -> f64 {
    let channels = wavenumbers.len();
    let mut fast = vec![0.0f32; channels];
    let mut worst = 0.0f64;
    for spectrum in radiances.chunks(channels) {
        inverse.brightness_temperatures(spectrum, &mut fast);
        for ((radiance, fast), wavenumber) in spectrum.iter().zip(&fast).zip(wavenumbers) {
            let exact = brightness_temperature_or_nan(*wavenumber, f64::from(*radiance));
            worst = worst.max((exact - f64::from(*fast)).abs());
        }
    }
    worst
}
