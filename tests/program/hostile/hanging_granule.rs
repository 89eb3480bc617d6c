//! A small granule with string attributes, and the same damaged so that the library hangs.

use std::path::{Path, PathBuf};

use radsieve::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft};

/// A small granule whose attributes are strings, which HDF5 keeps in a heap of their own.
pub fn small_granule(folder: &Path) -> PathBuf {
    let path = folder.join("synthetic.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    let text = |text: &str| vec![text.to_owned()];
    writer.global_attribute("title", text("synthetic: Norrik Plateau")).unwrap();
    writer.dimension("line", 6).unwrap();
    writer.dimension("position", 4).unwrap();
    writer.dimension("nu", 8).unwrap();
    let axis = VariableDraft::new("nu", ValueKind::F64, &["nu"]).attribute("units", text("cm-1"));
    writer.variable(&axis).unwrap();
    let wavenumbers: Vec<f64> = (0..8).map(|n| 900.0 + f64::from(n)).collect();
    writer.put_all("nu", &wavenumbers.into()).unwrap();
    let radiance = VariableDraft::new("radiance", ValueKind::F32, &["line", "position", "nu"])
        .attribute("units", text("mW m-2 sr-1 (cm-1)-1"))
        .attribute("long_name", text("synthetic radiance"))
        .chunks(&[2, 4, 8])
        .deflate(4);
    writer.variable(&radiance).unwrap();
    writer.put_all("radiance", &vec![60.0_f32; 192].into()).unwrap();
    let lat = VariableDraft::new("lat", ValueKind::F32, &["line", "position"])
        .attribute("units", text("degrees_north"));
    writer.variable(&lat).unwrap();
    writer.put_all("lat", &vec![70.0_f32; 24].into()).unwrap();
    writer.close().unwrap();
    path
}

/// A granule in whose heap of strings the library runs in circles: the first object of the heap has
/// no length, so the next one is itself.
pub fn granule_that_hangs(folder: &Path) -> PathBuf {
    let path = small_granule(folder);
    let mut bytes = std::fs::read(&path).unwrap();
    let heap = bytes.windows(4).position(|window| window == b"GCOL").unwrap();
    bytes[heap + 16..heap + 80].fill(0);
    std::fs::write(&path, bytes).unwrap();
    path
}
