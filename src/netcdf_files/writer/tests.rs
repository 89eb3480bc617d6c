//! What is written is read back by the library itself.

use super::*;

fn folder() -> tempfile::TempDir {
    tempfile::tempdir().unwrap()
}

#[test]
fn groups_types_fill_chunks_and_deflate_come_back() {
    let folder = folder();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.global_attribute("title", "a test").unwrap();
    writer.group_attribute("/truth/inner", "note", "deep").unwrap();
    writer.dimension("line", 3).unwrap();
    writer.dimension("position", 4).unwrap();
    writer
        .variable(
            &VariableDraft::new("/truth/flag", ValueKind::I32, &["line", "position"])
                .attribute("flag_masks", vec![1_i32, 2, 4])
                .attribute("scale_factor", 0.5_f32)
                .fill(-1_i32)
                .chunks(&[1, 4])
                .deflate(4),
        )
        .unwrap();
    writer.put("/truth/flag", &[1, 0], &[1, 4], &vec![1, 2, 3, 4].into()).unwrap();
    writer.close().unwrap();

    let file = netcdf::open(&path).unwrap();
    let variable = file.variable("truth/flag").unwrap();
    assert_eq!(
        variable.get_values::<i32, _>(..).unwrap(),
        [-1, -1, -1, -1, 1, 2, 3, 4, -1, -1, -1, -1]
    );
    assert_eq!(variable.chunking().unwrap(), Some(vec![1, 4]));
    assert_eq!(variable.fill_value::<i32>().unwrap(), Some(-1));
    let masks = variable.attribute_value("flag_masks").unwrap().unwrap();
    assert_eq!(masks, netcdf::AttributeValue::Ints(vec![1, 2, 4]));
    let scale = variable.attribute_value("scale_factor").unwrap().unwrap();
    assert_eq!(scale, netcdf::AttributeValue::Float(0.5));
    let note =
        file.group("truth/inner").unwrap().unwrap().attribute_value("note").unwrap().unwrap();
    assert_eq!(note, netcdf::AttributeValue::Str("deep".into()));
}

#[test]
fn an_unlimited_dimension_grows() {
    let folder = folder();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.unlimited_dimension("line").unwrap();
    writer.dimension("position", 2).unwrap();
    writer.variable(&VariableDraft::new("v", ValueKind::F32, &["line", "position"])).unwrap();
    writer.put("v", &[0, 0], &[2, 2], &vec![1.0_f32, 2.0, 3.0, 4.0].into()).unwrap();
    writer.put("v", &[2, 0], &[1, 2], &vec![5.0_f32, 6.0].into()).unwrap();
    writer.close().unwrap();
    let file = netcdf::open(&path).unwrap();
    let values = file.variable("v").unwrap().get_values::<f32, _>(..).unwrap();
    assert_eq!(values, [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]);
}

#[test]
fn strings_and_classic_formats_come_back() {
    let folder = folder();
    let path = folder.path().join("strings.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("band", 2).unwrap();
    writer.variable(&VariableDraft::new("name", ValueKind::Text, &["band"])).unwrap();
    writer.put_all("name", &Samples::Text(vec!["long".into(), "short".into()])).unwrap();
    writer.close().unwrap();
    let file = netcdf::open(&path).unwrap();
    assert_eq!(file.variable("name").unwrap().get_string([1]).unwrap(), "short");

    for format in [FileFormat::Classic, FileFormat::Offset64, FileFormat::Data64] {
        let path = folder.path().join("classic.nc");
        let mut writer = NetcdfWriter::create_as(&path, format).unwrap();
        writer.dimension("x", 2).unwrap();
        writer
            .variable(&VariableDraft::new("v", ValueKind::I16, &["x"]).attribute("units", "K"))
            .unwrap();
        writer.put_all("v", &vec![7_i16, 8].into()).unwrap();
        writer.close().unwrap();
        let values = netcdf::open(&path).unwrap().variable("v").unwrap().get_values::<i16, _>(..);
        assert_eq!(values.unwrap(), [7, 8]);
    }
}

#[test]
fn mistakes_are_errors_that_name_the_variable() {
    let folder = folder();
    let mut writer = NetcdfWriter::create(&folder.path().join("file.nc")).unwrap();
    writer.dimension("x", 2).unwrap();
    assert!(writer.dimension("none", 0).unwrap_err().to_string().contains("none"));
    writer.variable(&VariableDraft::new("v", ValueKind::F32, &["x"])).unwrap();
    let error = writer.put("v", &[0], &[2], &vec![1.0_f32].into()).unwrap_err();
    assert!(error.to_string().contains("`v`"), "{error}");
    assert!(writer.put("w", &[0], &[1], &vec![1.0_f32].into()).is_err());
    let draft = VariableDraft::new("fill", ValueKind::F32, &["x"]).fill(1_i16);
    assert!(writer.variable(&draft).is_err(), "a fill of another type is refused");
    assert!(NetcdfWriter::create(Path::new("/no/such/folder/file.nc")).is_err());
}
