//! Slabs of a cube: filled by several threads, told in order, joined without a seam.

use super::tests::{UNIT, axis, file, filled, open, opened, plain, put, radiance};
use super::*;
use crate::netcdf_files::VariableDraft;
use crate::system::Cancel;

#[test]
fn the_cube_says_what_is_not_here_yet() {
    let granule = opened(plain);
    let cube = granule.cube();
    let mut column = vec![0.0; 6];
    assert_eq!(cube.channel(0, 1, &mut column), Presence::NotYet);
    assert!(column.iter().all(|value| value.is_nan()));
    let mut seen = Vec::new();
    granule.fill(&Cancel::new(), &mut |progress| seen.push(progress)).unwrap();
    assert_eq!(seen.last(), Some(&Progress { done: 1, total: 1 }));
    assert!(cube.is_complete(0));
    assert_eq!(cube.channel(0, 1, &mut column), Presence::Here);
    assert_eq!(column, [1.0, 11.0, 21.0, 101.0, 111.0, 121.0]);
    let mut spectrum = Vec::new();
    assert_eq!(cube.values(0, 4, &mut spectrum), Presence::Here);
    assert_eq!(spectrum, [110.0, 111.0, 112.0]);
}

#[test]
fn many_slabs_are_filled_by_several_threads_and_told_in_order() {
    let channels = 500;
    let value = |line: usize, position: usize, channel: usize| {
        (1000 * line + 10 * position) as f32 + channel as f32 / 1000.0
    };
    let file = file(|writer| {
        for (name, length) in [("line", 40), ("position", 30), ("nu", channels)] {
            writer.dimension(name, length).unwrap();
        }
        let wavenumbers: Vec<f64> = (0..channels).map(|n| 900.0 + n as f64).collect();
        put(writer, axis("nu", "nu", "cm-1"), wavenumbers);
        let draft = radiance("radiance", &["line", "position", "nu"], UNIT);
        let places = (0..40).flat_map(|line| (0..30).map(move |position| (line, position)));
        let values: Vec<f32> = places
            .flat_map(|(line, position)| (0..channels).map(move |n| value(line, position, n)))
            .collect();
        put(writer, draft.chunks(&[4, 10, 300]).deflate(1), values);
    });
    let granule = open(&file.path).unwrap();
    let slabs = granule.cube().slabs(0);
    assert!(slabs > 1);
    let mut seen = Vec::new();
    granule.fill(&Cancel::new(), &mut |progress| seen.push(progress.done)).unwrap();
    assert_eq!(seen, (1..=slabs).collect::<Vec<_>>());
    let cube = granule.cube();
    let mut spectrum = Vec::new();
    for footprint in [0, 29, 30, 601, 1199] {
        assert_eq!(cube.values(0, footprint, &mut spectrum), Presence::Here);
        let expected: Vec<f64> = (0..channels)
            .map(|channel| f64::from(value(footprint / 30, footprint % 30, channel)))
            .collect();
        assert_eq!(spectrum, expected);
    }
}

#[test]
fn filling_stops_when_it_is_asked_to() {
    let granule = opened(plain);
    let cancel = Cancel::new();
    cancel.cancel();
    let result = granule.fill(&cancel, &mut |_| {});
    assert!(matches!(result, Err(GranuleError::Cancelled)));
    assert!(!granule.cube().is_complete(0));
}

#[test]
fn the_spectral_axis_may_stand_first_or_in_the_middle() {
    for dimensions in
        [["nu", "line", "position"], ["line", "nu", "position"], ["position", "nu", "line"]]
    {
        let lengths = dimensions.map(|name| match name {
            "line" => 2,
            "position" => 3,
            _ => 4,
        });
        let granule = opened(|writer| {
            for (name, length) in [("line", 2), ("position", 3), ("nu", 4)] {
                writer.dimension(name, length).unwrap();
            }
            put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0, 902.0, 903.0]);
            // Each value tells its place: 100 line + 10 position + channel.
            let values: Vec<f32> = (0..24)
                .map(|number| {
                    let mut rest = number;
                    let mut value = 0;
                    for (name, length) in dimensions.iter().zip(lengths).rev() {
                        let worth = match *name {
                            "line" => 100,
                            "position" => 10,
                            _ => 1,
                        };
                        value += rest % length * worth;
                        rest /= length;
                    }
                    value as f32
                })
                .collect();
            put(writer, radiance("radiance", &dimensions, UNIT), values);
        });
        let place =
            |name: &str| granule.footprints().names().iter().position(|own| own == name).unwrap();
        let mut position = vec![0; 2];
        position[place("line")] = 1;
        position[place("position")] = 2;
        let footprint = granule.footprints().number(&position).unwrap();
        let expected = [120.0, 121.0, 122.0, 123.0];
        assert_eq!(granule.read_spectrum(0, footprint).unwrap(), expected, "{dimensions:?}");
        let mut spectrum = Vec::new();
        filled(&granule).values(0, footprint, &mut spectrum);
        assert_eq!(spectrum, expected, "{dimensions:?}");
    }
}

#[test]
fn slabs_of_several_rows_join_without_a_seam() {
    // 40 lines of 50 positions and 3000 channels are 24 MB: several slabs, of whole chunks.
    let (lines, positions, channels) = (40, 50, 3000);
    let granule = opened(|writer| {
        writer.dimension("line", lines).unwrap();
        writer.dimension("position", positions).unwrap();
        writer.dimension("nu", channels).unwrap();
        let wavenumbers: Vec<f64> = (0..channels).map(|n| 700.0 + 0.25 * n as f64).collect();
        put(writer, axis("nu", "nu", "cm-1"), wavenumbers);
        let draft = radiance("radiance", &["line", "position", "nu"], UNIT);
        let values: Vec<f32> = (0..lines * positions * channels).map(|n| n as f32).collect();
        put(writer, draft.chunks(&[3, positions, channels]), values);
    });
    let cube = filled(&granule);
    assert!(cube.slabs(0) > 1);
    assert_eq!(cube.footprints_of(0, 0).len() % (3 * positions), 0, "slabs hold whole chunks");
    let mut column = vec![0.0; lines * positions];
    cube.channel(0, 17, &mut column);
    let expected: Vec<f64> = (0..lines * positions)
        .map(|footprint| f64::from((footprint * channels + 17) as f32))
        .collect();
    assert_eq!(column, expected);
    let last = cube.slab_of(0, lines * positions - 1);
    assert_eq!(last, cube.slabs(0) - 1);
}

#[test]
fn bands_of_three_footprint_dimensions_keep_their_order() {
    let granule = opened(|writer| {
        for (name, length) in
            [("line", 2), ("position", 2), ("detector", 3), ("nu_lw", 2), ("nu_sw", 3)]
        {
            writer.dimension(name, length).unwrap();
        }
        let named = |draft: VariableDraft, name: &str| draft.attribute("standard_name", name);
        let central = "sensor_band_central_radiation_wavenumber";
        put(writer, named(axis("nu_lw", "nu_lw", "cm-1"), central), vec![700.0, 701.0]);
        put(
            writer,
            named(axis("nu_sw", "nu_sw", "m-1"), central),
            vec![220_000.0, 220_100.0, 220_200.0],
        );
        let name = "toa_outgoing_radiance_per_unit_wavenumber";
        let footprints = ["line", "position", "detector"];
        let lw = radiance("rad_lw", &[footprints[0], footprints[1], footprints[2], "nu_lw"], UNIT);
        let sw = radiance("rad_sw", &[footprints[0], footprints[1], footprints[2], "nu_sw"], UNIT);
        put(writer, named(lw, name).attribute("apodization", "Hamming"), vec![50.0_f32; 24]);
        put(writer, named(sw, name).attribute("comment", "unapodised"), vec![0.5_f32; 36]);
        let noise = radiance("nedn_lw", &["detector", "nu_lw"], UNIT);
        put(writer, noise, vec![0.1_f32; 6]);
    });
    let names: Vec<&str> = granule.bands().iter().map(|band| band.name.as_str()).collect();
    assert_eq!(names, ["lw", "sw"]);
    assert_eq!(granule.footprints().lengths(), [2, 2, 3]);
    assert_eq!(granule.bands()[0].apodisation, Apodisation::Hamming);
    assert_eq!(granule.bands()[1].apodisation, Apodisation::None);
    assert_eq!(granule.bands()[1].range(), (2200.0, 2202.0));
    assert_eq!(
        granule.channel_near(2201.2).unwrap(),
        Channel { band: 1, index: 1, wavenumber: 2201.0 }
    );
}
