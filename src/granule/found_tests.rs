//! What is found without a layout file: parts in sibling groups, noise, bad channels, odd axes.

use super::tests::{Opened, UNIT, axis, file, has_problem, open, opened, plain, put, radiance};
use super::*;
use crate::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft};

#[test]
fn axis_and_geolocation_of_sibling_groups_are_taken_by_name_and_length() {
    let granule = opened(|writer| {
        for (name, length) in [("data/line", 2), ("data/position", 2), ("data/channel", 3)] {
            writer.dimension(name, length).unwrap();
        }
        for (name, length) in [("geo/line", 2), ("geo/position", 2), ("geo/channel", 4)] {
            writer.dimension(name, length).unwrap();
        }
        writer.dimension("spectral/channel", 3).unwrap();
        // Of another length: not this one's axis.
        put(writer, axis("geo/wavenumber", "channel", "cm-1"), vec![700.0, 701.0, 702.0, 703.0]);
        put(writer, axis("spectral/wavenumber", "channel", "cm-1"), vec![900.0, 901.0, 902.0]);
        let draft = radiance("data/radiance", &["line", "position", "channel"], UNIT);
        put(writer, draft, vec![1.0_f32; 12]);
        let latitude = VariableDraft::new("geo/lat", ValueKind::F64, &["line", "position"])
            .attribute("standard_name", "latitude")
            .attribute("units", "degrees_north");
        put(writer, latitude, vec![1.0, 2.0, 3.0, 4.0]);
    });
    assert_eq!(granule.bands()[0].axis_variable, "spectral/wavenumber");
    assert_eq!(granule.geolocation().latitude.as_deref(), Some(&[1.0, 2.0, 3.0, 4.0][..]));
    assert!(has_problem(&granule, "guess: `spectral/wavenumber` is taken for its spectral axis"));
    assert!(has_problem(&granule, "guess: `geo/lat` is laid over the footprints"));
}

#[test]
fn a_list_of_footprints_needs_one_dimension() {
    let granule = opened(|writer| {
        for (name, length) in [("observation", 4), ("nu", 2)] {
            writer.dimension(name, length).unwrap();
        }
        put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0]);
        let values: Vec<f32> = (0..8).map(|value| value as f32).collect();
        put(writer, radiance("radiance", &["nu", "observation"], UNIT), values);
        let longitude = VariableDraft::new("lon", ValueKind::F64, &["observation"])
            .attribute("units", "degrees_east");
        put(writer, longitude, vec![10.0, 20.0, 30.0, 40.0]);
    });
    assert_eq!(granule.footprints().names(), ["observation"]);
    assert_eq!(granule.read_spectrum(0, 3).unwrap(), [3.0, 7.0]);
    assert_eq!(granule.geolocation().longitude.as_ref().unwrap()[2], 30.0);
}

#[test]
fn bands_may_descend_overlap_and_be_unevenly_spaced() {
    let granule = opened(|writer| {
        for (name, length) in [("line", 2), ("nu_one", 4), ("nu_two", 3)] {
            writer.dimension(name, length).unwrap();
        }
        put(writer, axis("nu_one", "nu_one", "cm-1"), vec![903.0, 902.0, 901.0, 900.0]);
        put(writer, axis("nu_two", "nu_two", "cm-1"), vec![901.7, 902.9, 904.3]);
        put(writer, radiance("rad_one", &["line", "nu_one"], UNIT), vec![1.0_f32; 8]);
        put(writer, radiance("rad_two", &["line", "nu_two"], UNIT), vec![2.0_f32; 6]);
    });
    let near = |wavenumber| {
        let channel = granule.channel_near(wavenumber).unwrap();
        (channel.band, channel.index)
    };
    // The closer channel of either band.
    assert_eq!(
        [near(900.1), near(901.8), near(902.1), near(904.0)],
        [(0, 3), (1, 0), (0, 1), (1, 2)]
    );
    let between: Vec<f64> =
        granule.channels_between(901.5, 903.0).iter().map(|one| one.wavenumber).collect();
    assert_eq!(between, [901.7, 902.0, 902.9, 903.0]);
}

#[test]
fn a_unit_that_cannot_be_used_is_refused_with_what_would_be_accepted() {
    let file = super::tests::file(|writer| {
        for (name, length) in [("line", 2), ("nu", 2)] {
            writer.dimension(name, length).unwrap();
        }
        put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0]);
        put(writer, radiance("radiance", &["line", "nu"], "counts"), vec![1.0_f32; 4]);
    });
    let error = open(&file.path).unwrap_err().to_string();
    assert!(error.contains("\"counts\""), "{error}");
    assert!(error.contains(UNIT), "{error}");
}

/// A granule of 2 lines, 2 detectors and 3 channels with an axis for each detector.
fn by_detector(writer: &mut NetcdfWriter, axis: &[f64]) {
    for (name, length) in [("line", 2), ("detector", 2), ("nu", 3)] {
        writer.dimension(name, length).unwrap();
    }
    let places = VariableDraft::new("wavenumber", ValueKind::F64, &["detector", "nu"]);
    put(writer, places.attribute("units", "cm-1"), axis.to_vec());
    let values: Vec<f32> = (0..12_u8).map(f32::from).collect();
    put(writer, radiance("radiance", &["line", "detector", "nu"], UNIT), values);
}

#[test]
fn an_axis_for_each_detector_is_one_where_all_agree_and_refused_where_not() {
    let same = [900.0, 901.0, 902.0, 900.0, 901.0, 902.0];
    let granule = opened(|writer| by_detector(writer, &same));
    assert_eq!(granule.bands()[0].axis.wavenumbers(), [900.0, 901.0, 902.0]);
    assert_eq!(granule.footprints().names(), ["line", "detector"]);
    assert!(has_problem(&granule, "the same along detector"));
    let shifted = [900.0, 901.0, 902.0, 900.5, 901.5, 902.5];
    let file = file(|writer| by_detector(writer, &shifted));
    let error = open(&file.path).unwrap_err().to_string();
    assert!(error.contains("`wavenumber` differs by up to 0.5 along detector"), "{error}");
}

#[test]
fn an_axis_by_first_value_and_step_is_found_and_told_as_a_guess() {
    let write = |writer: &mut NetcdfWriter, attributes: bool| {
        writer.dimension("line", 2).unwrap();
        writer.dimension("spectral_sample", 4).unwrap();
        let mut band = radiance("radiance", &["line", "spectral_sample"], UNIT);
        if attributes {
            band = band.attribute("wavenumber_start", 64_500.0).attribute("wavenumber_step", 25.0);
        } else {
            let number = |name: &str| {
                VariableDraft::new(name, ValueKind::F64, &[]).attribute("units", "cm-1")
            };
            put(writer, number("first_wavenumber"), vec![645.0]);
            put(writer, number("delta_wavenumber"), vec![0.25]);
        }
        put(writer, band, vec![1.0_f32; 8]);
    };
    for attributes in [true, false] {
        let granule = opened(|writer| write(writer, attributes));
        let band = &granule.bands()[0];
        assert_eq!(band.axis.wavenumbers(), [645.0, 645.25, 645.5, 645.75], "{attributes}");
        assert!(band.axis_variable.is_empty() && band.axis_steps.is_some());
        assert!(has_problem(&granule, "guess: its spectral axis is taken along"));
    }
}

#[test]
fn a_stations_place_is_that_of_all_its_spectra() {
    let number = |name: &str, units: &str| {
        VariableDraft::new(name, ValueKind::F64, &[]).attribute("units", units)
    };
    let granule = opened(|writer| {
        plain(writer);
        put(writer, number("station_latitude", "degrees_north"), vec![51.5]);
        put(writer, number("station_longitude", "degrees_east"), vec![12.0]);
        put(writer, number("land", "1"), vec![1.0]);
    });
    assert_eq!(granule.geolocation().latitude.as_deref(), Some(&[51.5; 6][..]));
    assert_eq!(granule.geolocation().longitude.as_deref(), Some(&[12.0; 6][..]));
    assert_eq!(granule.geolocation().land_fraction, None);
    assert!(has_problem(&granule, "`station_latitude` has one value, taken for all footprints"));
}

/// The plain granule with one more variable.
fn with(draft: VariableDraft, values: Vec<f32>) -> Opened {
    opened(|writer| {
        plain(writer);
        put(writer, draft, values);
    })
}

#[test]
fn noise_by_channel_is_found_and_brought_to_the_working_unit() {
    // 1 W m-2 sr-1 (m-1)-1 is 100 W m-2 sr-1 (cm-1)-1, 1e5 of the working unit.
    let granule = with(radiance("nedn", &["nu"], "W m-2 sr-1 (m-1)-1"), vec![1e-5, 2e-5, 3e-5]);
    let noise = granule.bands()[0].noise.clone().unwrap();
    assert_eq!((noise.variable.as_str(), noise.along.len()), ("nedn", 0));
    assert!(has_problem(&granule, "guess: `nedn` is taken for its noise by name"));
    for footprint in [0, 5] {
        let values = granule.noise(0, footprint).unwrap().unwrap();
        for (value, expected) in values.iter().zip([1.0, 2.0, 3.0]) {
            // Stored in single precision.
            assert!((value - expected).abs() < 1e-6, "{values:?}");
        }
    }
}

#[test]
fn noise_by_detector_is_that_of_the_footprint() {
    let draft = radiance("s", &["nu", "position"], UNIT)
        .attribute("standard_name", "toa_outgoing_radiance_per_unit_wavenumber standard_error");
    let granule = with(draft, (0..9).map(|value| value as f32).collect());
    assert_eq!(granule.bands()[0].noise.as_ref().unwrap().along, [1]);
    // Line 1, position 2: the third of each channel's three.
    assert_eq!(granule.noise(0, 5).unwrap().unwrap(), [2.0, 5.0, 8.0]);
    assert!(!has_problem(&granule, "taken for its noise"));
}

#[test]
fn noise_in_kelvin_is_brought_to_radiance_at_its_scene() {
    // Source: dB/dT at 900 cm-1, worked with 50 digits and rounded to 6.
    for (draft, slope) in [
        (radiance("nedt", &["nu"], "K"), 1.43443),
        (radiance("nedt", &["nu"], "K").attribute("long_name", "NEdT at 250 K"), 1.02434),
        (radiance("nedt", &["nu"], "K").attribute("reference_temperature", 220.0), 0.649002),
    ] {
        let guessed = slope == 1.43443;
        let granule = with(draft, vec![0.5, 0.5, -1.0]);
        assert_eq!(has_problem(&granule, "taken as 280 K"), guessed);
        let values = granule.noise(0, 3).unwrap().unwrap();
        assert!((values[0] / (0.5 * slope) - 1.0).abs() < 1e-5, "{values:?}");
        assert!(values[2].is_nan(), "no standard deviation is below zero");
    }
}

#[test]
fn noise_of_temperatures_is_that_of_the_footprints_own_scene() {
    let granule = |name: &'static str, units: &'static str, noise: f32| {
        opened(move |writer| {
            writer.dimension("line", 2).unwrap();
            writer.dimension("nu", 1).unwrap();
            put(writer, axis("nu", "nu", "cm-1"), vec![2500.0]);
            let band = radiance("bt", &["line", "nu"], "K");
            put(
                writer,
                band.attribute("standard_name", "toa_brightness_temperature"),
                vec![280.0_f32, 220.0],
            );
            let draft = radiance(name, &["nu"], units);
            put(writer, draft.attribute("long_name", "noise at 280 K"), vec![noise]);
        })
    };
    // Source: 0.1 K at 280 K near 2500 cm-1 is 2.05 K at 220 K, worked with 50 digits; dB/dT there is
    // 0.0225073 and 0.00109707. Stored in single precision.
    let given = granule("nedt", "K", 0.1);
    assert!((given.noise(0, 0).unwrap().unwrap()[0] - 0.1).abs() < 1e-7);
    assert!((given.noise(0, 1).unwrap().unwrap()[0] - 2.05).abs() < 0.005);
    let given = granule("nedn", UNIT, 0.01);
    assert!((given.noise(0, 1).unwrap().unwrap()[0] * 0.00109707 / 0.01 - 1.0).abs() < 1e-5);
}

#[test]
fn noise_that_cannot_be_used_is_named_and_noise_of_other_shapes_is_none() {
    let granule = with(radiance("nedr", &["nu"], "counts"), vec![0.1; 3]);
    assert_eq!(granule.bands()[0].noise, None);
    assert!(has_problem(&granule, "its noise `nedr` cannot be used"));
    let granule = with(radiance("noise", &["line", "position"], UNIT), vec![0.1; 6]);
    assert_eq!(granule.noise(0, 0).unwrap(), None);
}

/// The plain granule with a flag variable over its channels.
fn with_channel_flags(writer: &mut NetcdfWriter) {
    plain(writer);
    let flags = VariableDraft::new("channel_quality", ValueKind::I8, &["nu"])
        .attribute("_Unsigned", "true")
        .attribute("flag_masks", vec![1_i8, -128])
        .attribute("flag_meanings", "noisy dead");
    put(writer, flags, vec![1_i8, -128, 0]);
}

#[test]
fn channels_that_the_file_gives_up_are_in_no_layer() {
    let granule = opened(with_channel_flags);
    assert_eq!(granule.bands()[0].bad, [false, true, false]);
    assert!(has_problem(&granule, "`channel_quality` gives up 1 of its 3 channels as bad"));
    assert_eq!(granule.channels_between(890.0, 910.0).len(), 2);
}

#[test]
fn flags_of_footprints_decode_to_their_meanings_whatever_their_sign() {
    let granule = opened(|writer| {
        plain(writer);
        let flags = VariableDraft::new("scene_flag", ValueKind::I8, &["line", "position"])
            .attribute("_Unsigned", "true")
            .attribute("flag_values", vec![0_i8, 7, -56])
            .attribute("flag_meanings", "good twilight stray_light");
        put(writer, flags, vec![0_i8, 7, -56, 3, 0, 0]);
    });
    let values = granule.read_variable("scene_flag").unwrap();
    assert_eq!(values[..4], [0.0, 7.0, 200.0, 3.0]);
    let flags = granule.variable("scene_flag").unwrap();
    assert_eq!(flags.role, VariableRole::Quality);
    let meanings = |value: f64| flags.meanings_of(value);
    assert_eq!(meanings(values[2]), ["stray_light"]);
    assert!(meanings(values[3]).is_empty());
}

#[test]
fn the_truth_of_a_synthetic_granule_is_not_taken_for_what_an_instrument_tells() {
    let granule = opened(|writer| {
        plain(writer);
        put(writer, radiance("/truth/nedn", &["nu"], UNIT), vec![0.1_f32; 3]);
        let flags = VariableDraft::new("/truth/channel_defects", ValueKind::I8, &["nu"])
            .attribute("flag_masks", vec![1_i8, 2])
            .attribute("flag_meanings", "noisy dead");
        put(writer, flags, vec![1_i8, 2, 0]);
    });
    assert_eq!(granule.bands()[0].noise, None);
    assert_eq!(granule.bands()[0].bad, [false; 3]);
}
