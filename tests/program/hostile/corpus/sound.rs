//! Sound granules, stored in all the ways that damage is tried on.

use std::path::Path;

use hdf5_metno::filters::Filter;
use hdf5_metno::types::VarLenUnicode;
use radsieve::netcdf_files::{FileFormat, NetcdfWriter, Samples, ValueKind, VariableDraft};
use radsieve::spectral::planck;

use crate::hostile::hanging_granule::small_granule;

/// Lines, positions, channels: enough bytes for the program to decode the chunks itself.
const LENGTHS: [usize; 3] = [12, 8, 720];

/// A way to store a granule.
struct Way {
    name: &'static str,
    format: FileFormat,
    group: &'static str,
    unlimited: bool,
    kind: ValueKind,
    chunks: Option<[usize; 3]>,
    deflate: Option<u8>,
    big_endian: bool,
}

const PLAIN: Way = Way {
    name: "contiguous",
    format: FileFormat::Netcdf4,
    group: "",
    unlimited: false,
    kind: ValueKind::F32,
    chunks: None,
    deflate: None,
    big_endian: false,
};

const WAYS: [Way; 7] = [
    PLAIN,
    Way { name: "deflated", chunks: Some([4, 8, 720]), deflate: Some(4), ..PLAIN },
    Way { name: "many chunks", chunks: Some([1, 3, 100]), big_endian: true, ..PLAIN },
    Way {
        name: "group, unlimited",
        group: "data/spectra/",
        unlimited: true,
        kind: ValueKind::F64,
        chunks: Some([5, 5, 144]),
        deflate: Some(1),
        ..PLAIN
    },
    Way { name: "classic", format: FileFormat::Classic, unlimited: true, ..PLAIN },
    Way { name: "64-bit offset", format: FileFormat::Offset64, ..PLAIN },
    Way { name: "64-bit data", format: FileFormat::Data64, kind: ValueKind::F64, ..PLAIN },
];

/// Sound files: their names and bytes.
pub fn files(folder: &Path) -> Vec<(&'static str, Vec<u8>)> {
    let path = folder.join("sound.nc");
    let mut files: Vec<_> = WAYS
        .iter()
        .map(|way| {
            write(way, &path);
            (way.name, std::fs::read(&path).unwrap())
        })
        .collect();
    files.push(("checksums", with_checksums(&path)));
    files.push(("strings", std::fs::read(small_granule(folder)).unwrap()));
    files
}

/// Wavenumbers, cm-1.
fn wavenumbers() -> Vec<f64> {
    (0..LENGTHS[2]).map(|channel| 800.0 + 0.25 * channel as f64).collect()
}

fn radiances() -> Vec<f64> {
    let spectrum = |footprint: usize| {
        let temperature = 220.0 + 0.7 * footprint as f64;
        wavenumbers().into_iter().map(move |nu| planck(nu, temperature))
    };
    (0..LENGTHS[0] * LENGTHS[1]).flat_map(spectrum).collect()
}

fn write(way: &Way, path: &Path) {
    let mut writer = NetcdfWriter::create_as(path, way.format).unwrap();
    writer.global_attribute("title", "synthetic: Ketter Desert").unwrap();
    let at = |name: &str| format!("{}{name}", way.group);
    match way.unlimited {
        true => writer.unlimited_dimension(&at("line")).unwrap(),
        false => writer.dimension(&at("line"), LENGTHS[0]).unwrap(),
    }
    writer.dimension(&at("position"), LENGTHS[1]).unwrap();
    writer.dimension(&at("nu"), LENGTHS[2]).unwrap();
    let axis = VariableDraft::new(at("nu"), ValueKind::F64, &["nu"]).attribute("units", "cm-1");
    let mut radiance = VariableDraft::new(at("radiance"), way.kind, &["line", "position", "nu"])
        .attribute("units", "mW m-2 sr-1 (cm-1)-1")
        .attribute("long_name", "synthetic radiance");
    radiance.chunks = way.chunks.map(|chunks| chunks.to_vec());
    radiance.deflate = way.deflate;
    radiance.shuffle = way.deflate.is_some();
    radiance.big_endian = way.big_endian;
    let latitude = VariableDraft::new(at("lat"), ValueKind::F32, &["line", "position"])
        .attribute("units", "degrees_north");
    for draft in [&axis, &radiance, &latitude] {
        writer.variable(draft).unwrap();
    }
    writer.put_all(&at("nu"), &wavenumbers().into()).unwrap();
    let values: Samples = match way.kind {
        ValueKind::F32 => radiances().iter().map(|&value| value as f32).collect::<Vec<_>>().into(),
        _ => radiances().into(),
    };
    writer.put(&at("radiance"), &[0; 3], &LENGTHS, &values).unwrap();
    let latitudes = vec![20.0_f32; LENGTHS[0] * LENGTHS[1]];
    writer.put(&at("lat"), &[0; 2], &LENGTHS[..2], &latitudes.into()).unwrap();
    writer.close().unwrap();
}

/// A granule straight from HDF5, without named dimensions, each chunk with a checksum behind it.
pub fn with_checksums(path: &Path) -> Vec<u8> {
    let file = hdf5_metno::File::create(path).unwrap();
    let axis = file.new_dataset_builder().with_data(&wavenumbers()).create("wavenumber").unwrap();
    let values: Vec<f32> = radiances().into_iter().map(|value| value as f32).collect();
    let filters = [Filter::Shuffle, Filter::Deflate(4), Filter::Fletcher32];
    let builder = file.new_dataset_builder().set_filters(&filters).chunk([4, 8, 720]);
    let radiance = builder.empty::<f32>().shape(LENGTHS).create("radiance").unwrap();
    radiance.as_writer().write_raw(&values).unwrap();
    for (data, unit) in [(&axis, "cm-1"), (&radiance, "mW m-2 sr-1 (cm-1)-1")] {
        let unit: VarLenUnicode = unit.parse().unwrap();
        let attribute = data.new_attr::<VarLenUnicode>().create("units").unwrap();
        attribute.write_scalar(&unit).unwrap();
    }
    drop((axis, radiance));
    file.close().unwrap();
    std::fs::read(path).unwrap()
}
