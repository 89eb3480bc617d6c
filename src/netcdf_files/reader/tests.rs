//! Reading back what the writer wrote, through the messages, in a thread instead of a process.

use std::time::Duration;

use super::*;
use crate::netcdf_files::{AttributeValue, FileFormat, NetcdfWriter, VariableDraft};

fn open(path: &Path) -> Result<FileReader, ReadError> {
    FileReader::open(&ReaderProgram::in_process(), path, &ReadLimits::default())
}

#[test]
fn the_index_tells_everything_but_the_values() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.global_attribute("title", "synthetic").unwrap();
    writer.dimension("line", 40).unwrap();
    writer.unlimited_dimension("position").unwrap();
    let draft = VariableDraft::new("inner/v", ValueKind::F32, &["line", "position"])
        .attribute("units", "K")
        .attribute("names", vec!["a".to_owned(), "b".to_owned()])
        .attribute("flag_masks", vec![1_i16, 2])
        .chunks(&[10, 30])
        .deflate(3);
    writer.variable(&draft).unwrap();
    writer.put("inner/v", &[0, 0], &[40, 30], &vec![1.5_f32; 1200].into()).unwrap();
    writer.close().unwrap();

    let reader = open(&path).unwrap();
    let index = reader.index();
    assert_eq!(index.format, FileFormat::Netcdf4);
    assert_eq!(index.global_attribute("title"), Some(&"synthetic".into()));
    let variable = index.variable("/inner/v").unwrap();
    assert_eq!(variable.kind, ValueKind::F32);
    assert_eq!(index.lengths(variable), [40, 30]);
    assert_eq!(index.dimension_names(variable), ["line", "position"]);
    assert!(index.dimensions.iter().any(|dimension| dimension.unlimited));
    assert_eq!(variable.text("units").unwrap(), "K");
    assert_eq!(variable.attribute("names").unwrap().text().unwrap(), "a b");
    assert_eq!(variable.attribute("flag_masks"), Some(&AttributeValue::from(vec![1_i16, 2])));
    assert_eq!(variable.storage.chunks, Some(vec![10, 30]));
    assert_eq!(variable.storage.filters, ["shuffle", "deflate 3"]);
    assert_eq!(variable.storage.missing_filter, None);
}

#[test]
fn blocks_strings_and_big_endian_values_come_back() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("x", 2).unwrap();
    writer.dimension("y", 3).unwrap();
    let mut big = VariableDraft::new("big", ValueKind::I16, &["x", "y"]);
    big.big_endian = true;
    writer.variable(&big).unwrap();
    writer.put_all("big", &vec![1_i16, 2, 3, 4, 5, 6].into()).unwrap();
    writer.variable(&VariableDraft::new("name", ValueKind::Text, &["x"])).unwrap();
    writer.put_all("name", &Samples::Text(vec!["one".into(), "µ".into()])).unwrap();
    writer.close().unwrap();

    let reader = open(&path).unwrap();
    let big = reader.index().variable("big").unwrap();
    assert_eq!(reader.read(big, &[1, 1], &[1, 2]).unwrap(), Samples::I16(vec![5, 6]));
    let name = reader.index().variable("name").unwrap();
    assert_eq!(reader.read_all(name).unwrap(), Samples::Text(vec!["one".into(), "µ".into()]));
    assert_eq!(reader.read(big, &[2, 0], &[0, 3]).unwrap(), Samples::I16(vec![]));
}

#[test]
fn strings_longer_than_an_answer_are_named_so_and_parts_of_them_are_read() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("x", 68).unwrap();
    writer.variable(&VariableDraft::new("long", ValueKind::Text, &["x"])).unwrap();
    writer.put_all("long", &Samples::Text(vec!["s".repeat(1_000_000); 68])).unwrap();
    writer.close().unwrap();

    let reader = open(&path).unwrap();
    let long = reader.index().variable("long").unwrap();
    let error = reader.read_all(long).unwrap_err();
    assert!(matches!(error.fault, ReadFault::BadRequest { .. }), "{error}");
    assert!(error.to_string().contains("larger than 64 MB"), "{error}");
    assert!(!error.fault.ends_the_file());
    assert_eq!(reader.read(long, &[60], &[8]).unwrap().len(), 8, "the reader goes on");
}

#[test]
fn large_variables_come_the_same_by_chunks_and_by_the_reader() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("line", 300).unwrap();
    writer.dimension("position", 500).unwrap();
    let draft = VariableDraft::new("g/v", ValueKind::F32, &["line", "position"]);
    writer.variable(&draft.chunks(&[40, 500]).deflate(1)).unwrap();
    let values: Vec<f32> = (0..150_000).map(|number| number as f32).collect();
    writer.put_all("g/v", &values.clone().into()).unwrap();
    writer.close().unwrap();

    let reader = open(&path).unwrap();
    let variable = reader.index().variable("g/v").unwrap();
    let table = reader.chunk_table(variable, "v", false).unwrap().unwrap();
    assert_eq!((table.chunk, table.lengths), (vec![40, 500], vec![300, 500]));
    assert_eq!(reader.read_all(variable).unwrap(), Samples::F32(values.clone()));
    let row = reader.read(variable, &[123, 0], &[1, 500]).unwrap();
    assert_eq!(row, Samples::F32(values[61_500..62_000].to_vec()));
    let request = Request::Read { path: "g/v".into(), start: vec![123, 0], count: vec![1, 500] };
    let asked = reader
        .ask(&request, "v", false, |reply, input| take_values(reply, input, ValueKind::F32, 500));
    assert_eq!(asked.unwrap(), row);
    let text = Variable { path: "no/such".into(), ..variable.clone() };
    assert_eq!(reader.chunk_table(&text, "v", false).unwrap(), None);
}

#[test]
fn a_raised_wish_to_stop_asks_the_reader_nothing() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("x", 2).unwrap();
    writer.variable(&VariableDraft::new("v", ValueKind::F64, &["x"])).unwrap();
    writer.close().unwrap();
    let reader = open(&path).unwrap();
    let cancel = Cancel::new();
    cancel.cancel();
    let demand = Demand { cancel: Some(&cancel), ..Demand::default() };
    let variable = reader.index().variable("v").unwrap();
    let error = reader.read_on_demand(variable, &[0], &[2], demand).unwrap_err();
    assert!(matches!(error.fault, ReadFault::Cancelled { .. }), "{error}");
}

#[test]
fn classic_formats_are_read() {
    let folder = tempfile::tempdir().unwrap();
    for format in [FileFormat::Classic, FileFormat::Offset64, FileFormat::Data64] {
        let path = folder.path().join(format!("{format:?}.nc"));
        let mut writer = NetcdfWriter::create_as(&path, format).unwrap();
        writer.dimension("x", 2).unwrap();
        writer.variable(&VariableDraft::new("v", ValueKind::F64, &["x"])).unwrap();
        writer.put_all("v", &vec![0.5, 2.5].into()).unwrap();
        writer.close().unwrap();
        let reader = open(&path).unwrap();
        assert_eq!(reader.index().format, format);
        let variable = reader.index().variable("v").unwrap();
        assert_eq!(reader.read_all(variable).unwrap(), Samples::F64(vec![0.5, 2.5]));
    }
}

#[test]
fn a_block_outside_of_the_variable_is_refused_without_asking() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("x", 2).unwrap();
    writer.variable(&VariableDraft::new("v", ValueKind::F64, &["x"])).unwrap();
    writer.close().unwrap();
    let reader = open(&path).unwrap();
    let variable = reader.index().variable("v").unwrap();
    for (start, count) in [(vec![1], vec![2]), (vec![usize::MAX], vec![2]), (vec![], vec![])] {
        let error = reader.read(variable, &start, &count).unwrap_err();
        assert!(matches!(error.fault, ReadFault::BadRequest { .. }), "{error}");
    }
}

#[test]
fn a_file_that_changes_is_noticed() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    NetcdfWriter::create(&path).unwrap().close().unwrap();
    let reader = open(&path).unwrap();
    reader.check_unchanged().unwrap();
    std::fs::write(&path, b"shorter").unwrap();
    assert!(matches!(reader.check_unchanged().unwrap_err().fault, ReadFault::Changed));
    std::fs::remove_file(&path).unwrap();
    assert!(matches!(reader.check_unchanged().unwrap_err().fault, ReadFault::Unreadable(_)));
}

#[test]
fn a_program_that_is_no_reader_is_an_error_that_names_the_file() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    NetcdfWriter::create(&path).unwrap().close().unwrap();
    let open = |program: &str| {
        FileReader::open(&ReaderProgram::new(program), &path, &ReadLimits::default())
    };
    let error = open("/no/such/program").unwrap_err();
    assert!(matches!(error.fault, ReadFault::NoReader(_)));
    let error = open("/bin/false").unwrap_err();
    assert!(error.to_string().contains("file.nc"), "{error}");
    assert!(matches!(error.fault, ReadFault::Died { .. }), "{error}");
}

#[test]
fn a_reader_that_stays_silent_is_given_up() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    NetcdfWriter::create(&path).unwrap().close().unwrap();
    let silent = folder.path().join("silent");
    std::fs::write(&silent, "#!/bin/sh\nexec sleep 600\n").unwrap();
    let mut mode = std::fs::metadata(&silent).unwrap().permissions();
    std::os::unix::fs::PermissionsExt::set_mode(&mut mode, 0o755);
    std::fs::set_permissions(&silent, mode).unwrap();
    let limits = ReadLimits { per_request: Duration::from_millis(50), ..ReadLimits::default() };
    let error = FileReader::open(&ReaderProgram::new(silent), &path, &limits).unwrap_err();
    assert!(matches!(error.fault, ReadFault::TimedOut { .. }), "{error}");
}
