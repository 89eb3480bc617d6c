//! Every way to store values, against the library's own reading.

use hdf5_metno::dataset::FillTime;
use hdf5_metno::file::FileBuilder;
use hdf5_metno::filters::Filter;

use super::{Both, numbers};
use crate::netcdf_files::{FileFormat, NetcdfWriter, Samples, ValueKind, VariableDraft};

/// Lengths that no chunk length divides, large enough for every type to be worth the fast path.
const LENGTHS: [usize; 3] = [43, 61, 101];
const CHUNK: [usize; 3] = [10, 25, 101];
const SMALL_CHUNK: [usize; 3] = [7, 61, 40];

const KINDS: [ValueKind; 10] = [
    ValueKind::I8,
    ValueKind::U8,
    ValueKind::I16,
    ValueKind::U16,
    ValueKind::I32,
    ValueKind::U32,
    ValueKind::I64,
    ValueKind::U64,
    ValueKind::F32,
    ValueKind::F64,
];

fn samples(kind: ValueKind, count: usize) -> Samples {
    let numbers = numbers(count);
    match kind {
        ValueKind::I8 => numbers.map(|n| (n >> 35) as i8).collect::<Vec<_>>().into(),
        ValueKind::U8 => numbers.map(|n| (n >> 35) as u8).collect::<Vec<_>>().into(),
        ValueKind::I16 => numbers.map(|n| (n >> 30) as i16).collect::<Vec<_>>().into(),
        ValueKind::U16 => numbers.map(|n| (n >> 30) as u16).collect::<Vec<_>>().into(),
        ValueKind::I32 => numbers.map(|n| (n >> 20) as i32).collect::<Vec<_>>().into(),
        ValueKind::U32 => numbers.map(|n| (n >> 20) as u32).collect::<Vec<_>>().into(),
        ValueKind::I64 => numbers.map(|n| n as i64).collect::<Vec<_>>().into(),
        ValueKind::U64 => numbers.collect::<Vec<_>>().into(),
        ValueKind::F32 => numbers.map(|n| (n >> 20) as f32).collect::<Vec<_>>().into(),
        _ => numbers.map(|n| n as f64).collect::<Vec<_>>().into(),
    }
}

#[test]
fn every_type_byte_order_and_netcdf_pipeline() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    for (name, length) in ["x", "y", "z"].iter().zip(LENGTHS) {
        writer.dimension(name, length).unwrap();
    }
    let mut names = Vec::new();
    for kind in KINDS {
        for (way, big_endian) in [("plain", false), ("chunks", true), ("deflate", false)]
            .into_iter()
            .chain([("shuffle", false), ("plain", true), ("shuffle", true)])
        {
            let name = format!("{}_{way}_{big_endian}", kind.label());
            let mut draft = VariableDraft::new(&name, kind, &["x", "y", "z"]);
            draft.big_endian = big_endian;
            draft.chunks = (way != "plain").then(|| CHUNK.to_vec());
            draft.deflate = matches!(way, "deflate" | "shuffle").then_some(4);
            draft.shuffle = way == "shuffle";
            writer.variable(&draft).unwrap();
            writer.put_all(&name, &samples(kind, LENGTHS.iter().product())).unwrap();
            names.push(name);
        }
    }
    writer.close().unwrap();
    let both = Both::open(&path);
    for name in names {
        both.assert_all_equal(&name);
    }
}

#[test]
fn every_order_of_filters_and_partial_chunks_in_two_dimensions() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    let (shuffle, deflate, check) = (Filter::Shuffle, Filter::Deflate(1), Filter::Fletcher32);
    let pipelines: [&[Filter]; 9] = [
        &[],
        std::slice::from_ref(&shuffle),
        std::slice::from_ref(&deflate),
        std::slice::from_ref(&check),
        &[shuffle.clone(), deflate.clone()],
        &[deflate.clone(), check.clone()],
        // The order in which the netCDF library puts them.
        &[check.clone(), shuffle.clone(), deflate.clone()],
        &[shuffle.clone(), deflate.clone(), check.clone()],
        &[shuffle.clone(), check.clone(), deflate.clone()],
    ];
    let file = hdf5_metno::File::create(&path).unwrap();
    let numbers: Vec<u64> = numbers(LENGTHS.iter().product()).collect();
    let as_shorts: Vec<i16> = numbers.iter().map(|&number| (number >> 30) as i16).collect();
    let as_doubles: Vec<f64> = numbers.iter().map(|&number| number as f64).collect();
    let as_bytes: Vec<u8> = numbers.iter().map(|&number| (number >> 35) as u8).collect();
    for (number, pipeline) in pipelines.iter().enumerate() {
        let builder = || file.new_dataset_builder().set_filters(pipeline).chunk(SMALL_CHUNK);
        let name = |kind: &str| format!("{kind}_{number}");
        let shorts = builder().empty::<i16>().shape(LENGTHS).create(&*name("short")).unwrap();
        shorts.as_writer().write_raw(&as_shorts).unwrap();
        let doubles = builder().empty::<f64>().shape(LENGTHS).create(&*name("double")).unwrap();
        doubles.as_writer().write_raw(&as_doubles).unwrap();
        let bytes = builder().empty::<u8>().shape(LENGTHS).create(&*name("byte")).unwrap();
        bytes.as_writer().write_raw(&as_bytes).unwrap();
    }
    file.close().unwrap();
    let both = Both::open(&path);
    for number in 0..pipelines.len() {
        for kind in ["short", "double", "byte"] {
            both.assert_all_equal(&format!("{kind}_{number}"));
        }
    }
}

#[test]
fn chunks_that_were_never_written_hold_the_fill_value() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.unlimited_dimension("x").unwrap();
    writer.dimension("y", LENGTHS[1]).unwrap();
    writer.dimension("z", LENGTHS[2]).unwrap();
    let dimensions = ["x", "y", "z"];
    let own = VariableDraft::new("own", ValueKind::F32, &dimensions).fill(-999.5_f32);
    let standard = VariableDraft::new("standard", ValueKind::I32, &dimensions);
    let mut big = VariableDraft::new("big", ValueKind::I16, &dimensions).fill(0x0102_i16);
    big.big_endian = true;
    for draft in [own, standard, big] {
        writer.variable(&draft.chunks(&CHUNK).deflate(2)).unwrap();
    }
    let block = samples(ValueKind::F32, 5 * 20 * 101);
    for start in [0, 38] {
        writer.put("own", &[start, 10, 0], &[5, 20, 101], &block).unwrap();
    }
    writer.put("standard", &[42, 0, 0], &[1, 1, 1], &vec![7_i32].into()).unwrap();
    writer.put("big", &[42, 60, 100], &[1, 1, 1], &vec![7_i16].into()).unwrap();
    writer.close().unwrap();
    let both = Both::open(&path);
    for name in ["own", "standard", "big"] {
        both.assert_all_equal(name);
    }
    let corner = both.fast_read("own", &[20, 0, 0], &[1, 1, 2], Default::default());
    assert_eq!(corner.unwrap(), Some(Samples::F32(vec![-999.5; 2])));
}

#[test]
fn what_is_not_settled_is_left_to_the_library() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    let file = hdf5_metno::File::create(&path).unwrap();
    let builder = || file.new_dataset_builder().chunk(CHUNK);
    // Unwritten chunks without a fill value, filters of other kinds, a type with holes, no values.
    let never = builder().fill_time(FillTime::Never).empty::<f32>().shape(LENGTHS);
    never.create("never").unwrap();
    let packed = builder().scale_offset(hdf5_metno::filters::ScaleOffset::Integer(0));
    let packed = packed.empty::<i32>().shape(LENGTHS).create("packed").unwrap();
    packed.as_writer().write_raw(&vec![5_i32; LENGTHS.iter().product()]).unwrap();
    let alone = file.new_dataset_builder().empty::<f64>().shape(LENGTHS);
    alone.create("unwritten").unwrap();
    file.close().unwrap();
    let both = Both::open(&path);
    for name in ["never", "packed", "unwritten"] {
        both.assert_left_to_library(name);
    }
}

#[test]
fn small_variables_and_classic_files_are_left_to_the_library() {
    let folder = tempfile::tempdir().unwrap();
    for (format, length) in [(FileFormat::Netcdf4, 1000), (FileFormat::Offset64, 1_000_000)] {
        let path = folder.path().join(format!("{format:?}.nc"));
        let mut writer = NetcdfWriter::create_as(&path, format).unwrap();
        writer.dimension("x", length).unwrap();
        writer.variable(&VariableDraft::new("v", ValueKind::F32, &["x"])).unwrap();
        writer.put_all("v", &samples(ValueKind::F32, length)).unwrap();
        writer.close().unwrap();
        Both::open(&path).assert_left_to_library("v");
    }
}

#[test]
fn addresses_count_from_the_beginning_of_the_file_behind_a_user_block() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    let mut builder = FileBuilder::new();
    builder.with_fcpl(|plan| plan.userblock(1024));
    let file = builder.create(&path).unwrap();
    let values: Vec<f32> = numbers(LENGTHS.iter().product()).map(|n| n as f32).collect();
    for name in ["chunks", "plain"] {
        let mut builder = file.new_dataset_builder();
        if name == "chunks" {
            builder = builder.chunk(CHUNK).shuffle().deflate(1);
        }
        let data = builder.empty::<f32>().shape(LENGTHS).create(name).unwrap();
        data.as_writer().write_raw(&values).unwrap();
    }
    file.close().unwrap();
    let both = Both::open(&path);
    both.assert_all_equal("chunks");
    both.assert_all_equal("plain");
}

#[test]
fn newer_chunk_indices_are_followed() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.h5");
    let mut builder = FileBuilder::new();
    builder.with_fapl(|plan| plan.libver_latest());
    let file = builder.create(&path).unwrap();
    let values: Vec<f32> = numbers(LENGTHS.iter().product()).map(|n| n as f32).collect();
    let write = |name: &str, builder: hdf5_metno::DatasetBuilder, growing: usize| {
        let extents: Vec<hdf5_metno::Extent> = LENGTHS
            .iter()
            .enumerate()
            .map(|(axis, &length)| match axis < growing {
                true => hdf5_metno::Extent::resizable(length),
                false => hdf5_metno::Extent::fixed(length),
            })
            .collect();
        let data = builder.empty::<f32>().shape(extents).create(name).unwrap();
        data.as_writer().write_raw(&values).unwrap();
    };
    let packed = || file.new_dataset_builder().shuffle().deflate(1);
    write("single", packed().chunk(LENGTHS), 0);
    write("fixed_array", packed().chunk(CHUNK), 0);
    write("extensible_array", packed().chunk(CHUNK), 1);
    write("second_tree", packed().chunk(CHUNK), 2);
    let early = file.new_dataset_builder().chunk(CHUNK);
    write("implicit", early.alloc_time(Some(hdf5_metno::dataset::AllocTime::Early)), 0);
    write("plain_array", file.new_dataset_builder().chunk(CHUNK), 0);
    file.close().unwrap();
    let both = Both::open(&path);
    for name in
        ["single", "fixed_array", "extensible_array", "second_tree", "implicit", "plain_array"]
    {
        both.assert_all_equal(name);
    }
}

/// A variable that has the name of a dimension without being its coordinate is stored under another
/// name, beside a dimension scale of the plain name with the same type and length.
#[test]
fn a_variable_is_not_mistaken_for_the_dimension_of_its_name() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("file.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    let length = 100_000;
    writer.dimension("g/line", length).unwrap();
    writer.dimension("g/position", length).unwrap();
    let draft = VariableDraft::new("g/line", ValueKind::F32, &["position"]);
    writer.variable(&draft.chunks(&[1000]).deflate(1)).unwrap();
    writer.put_all("g/line", &samples(ValueKind::F32, length)).unwrap();
    writer.close().unwrap();
    Both::open(&path).assert_all_equal("g/line");
}
