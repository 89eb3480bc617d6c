//! A small granule for tests of commands: black bodies whose temperature is known.
//!
//! Synthetic throughout; the radiances come from the Planck function alone.

use std::path::Path;

use radsieve::netcdf_files::{NetcdfWriter, Samples, ValueKind, VariableDraft};
use radsieve::spectral::planck;

/// What to write.
#[derive(Clone)]
pub struct PlainGranule {
    /// Scan lines, positions, detectors.
    pub lengths: [usize; 3],
    /// Wavenumbers of each band, cm-1.
    pub bands: Vec<(&'static str, Vec<f64>)>,
    /// Whether BT in K is stored in place of radiance.
    pub temperatures: bool,
    /// Whether latitude and longitude are given.
    pub geolocated: bool,
    /// Radiance at a wavenumber and footprint.
    pub radiance: fn(wavenumber: f64, footprint: usize) -> f64,
}

/// The temperature of a footprint of the plain granule, K.
pub fn temperature(footprint: usize) -> f64 {
    200.0 + 0.25 * footprint as f64
}

impl PlainGranule {
    /// 4 x 5 x 9 footprints; two bands that overlap from 905 to 910 cm-1 half a channel apart.
    pub fn new() -> Self {
        Self {
            lengths: [4, 5, 9],
            bands: vec![
                ("longwave", (0..=110).map(|step| 800.0 + f64::from(step)).collect()),
                ("midwave", (0..=300).map(|step| 905.5 + 1.25 * f64::from(step)).collect()),
            ],
            temperatures: false,
            geolocated: true,
            radiance: |wavenumber, footprint| planck(wavenumber, temperature(footprint)),
        }
    }

    /// Writes the file.
    pub fn write(&self, path: &Path) {
        let mut writer = NetcdfWriter::create(path).unwrap();
        writer.global_attribute("title", "synthetic test granule, no data for science").unwrap();
        let dimensions = ["scan_line", "position", "detector"];
        for (name, length) in dimensions.iter().zip(self.lengths) {
            writer.dimension(name, length).unwrap();
        }
        if self.geolocated {
            self.write_places(&mut writer);
        }
        for (name, wavenumbers) in &self.bands {
            self.write_band(&mut writer, name, wavenumbers);
        }
        let quality: Vec<i8> = (0..self.footprints()).map(|number| (number % 3) as i8).collect();
        let draft = VariableDraft::new("scene_quality", ValueKind::I8, &dimensions)
            .attribute("long_name", "quality of the scene")
            .fill(Samples::I8(vec![2]));
        writer.variable(&draft).unwrap();
        writer.put_all("scene_quality", &Samples::I8(quality)).unwrap();
        writer.close().unwrap();
    }

    /// Writes a file of two footprints over two dimensions, without places on the ground.
    pub fn write_flat(&self, path: &Path) {
        let mut writer = NetcdfWriter::create(path).unwrap();
        let wavenumbers = &self.bands[0].1;
        for (name, length) in [("line", 1), ("place", 2), ("channel", wavenumbers.len())] {
            writer.dimension(name, length).unwrap();
        }
        let axis =
            VariableDraft::new("channel", ValueKind::F64, &["channel"]).attribute("units", "cm-1");
        writer.variable(&axis).unwrap();
        writer.put_all("channel", &Samples::F64(wavenumbers.clone())).unwrap();
        let band = VariableDraft::new("radiance", ValueKind::F64, &["line", "place", "channel"])
            .attribute("units", "mW m-2 sr-1 (cm-1)-1");
        writer.variable(&band).unwrap();
        let of = |footprint| wavenumbers.iter().map(move |nu| (self.radiance)(*nu, footprint));
        writer.put_all("radiance", &Samples::F64((0..2).flat_map(of).collect())).unwrap();
        writer.close().unwrap();
    }

    /// How many footprints there are.
    pub fn footprints(&self) -> usize {
        self.lengths.iter().product()
    }

    fn write_places(&self, writer: &mut NetcdfWriter) {
        let dimensions = ["scan_line", "position", "detector"];
        let [_, positions, detectors] = self.lengths;
        // Detectors three in a row, 0.1 degrees apart, clusters 0.3 degrees: a square grid.
        let row = |number: usize| number / detectors / positions * 3 + number % detectors / 3;
        let column = |number: usize| number / detectors % positions * 3 + number % detectors % 3;
        for (name, unit, standard, place) in [
            ("latitude", "degrees_north", "latitude", &row as &dyn Fn(usize) -> usize),
            ("longitude", "degrees_east", "longitude", &column),
        ] {
            let draft = VariableDraft::new(name, ValueKind::F64, &dimensions)
                .attribute("units", unit)
                .attribute("standard_name", standard);
            writer.variable(&draft).unwrap();
            let values = (0..self.footprints()).map(|number| 0.1 * place(number) as f64).collect();
            writer.put_all(name, &Samples::F64(values)).unwrap();
        }
    }

    fn write_band(&self, writer: &mut NetcdfWriter, name: &str, wavenumbers: &[f64]) {
        let axis = format!("wavenumber_{name}");
        writer.dimension(&axis, wavenumbers.len()).unwrap();
        let draft = VariableDraft::new(&axis, ValueKind::F64, &[&axis])
            .attribute("units", "cm-1")
            .attribute("standard_name", "sensor_band_central_radiation_wavenumber");
        writer.variable(&draft).unwrap();
        writer.put_all(&axis, &Samples::F64(wavenumbers.to_vec())).unwrap();
        let (variable, unit, standard) = if self.temperatures {
            (format!("bt_{name}"), "K", "toa_brightness_temperature")
        } else {
            let standard = "toa_outgoing_radiance_per_unit_wavenumber";
            (format!("radiance_{name}"), "mW m-2 sr-1 (cm-1)-1", standard)
        };
        let dimensions = ["scan_line", "position", "detector", &axis];
        let draft = VariableDraft::new(&variable, ValueKind::F64, &dimensions)
            .attribute("units", unit)
            .attribute("standard_name", standard)
            .fill(Samples::F64(vec![-9999.0]));
        writer.variable(&draft).unwrap();
        let mut values = Vec::new();
        for footprint in 0..self.footprints() {
            values.extend(wavenumbers.iter().map(|wavenumber| {
                let radiance = (self.radiance)(*wavenumber, footprint);
                let stored = if self.temperatures { temperature(footprint) } else { radiance };
                if stored.is_nan() { -9999.0 } else { stored }
            }));
        }
        writer.put_all(&variable, &Samples::F64(values)).unwrap();
    }
}
