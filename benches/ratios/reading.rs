//! Reading all spectra of a granule: chunks decoded here, against the netCDF library in process.

use std::hint::black_box;
use std::path::{Path, PathBuf};

use radsieve::granule::Granule;
use radsieve::netcdf_files::{
    NetcdfWriter, ReadLimits, ReaderProgram, ValueKind, VariableDraft, WriterError,
};
use radsieve::system::Cancel;

use crate::python::Python;
use crate::table::Section;
use crate::{Size, stopwatch};

/// Names and lengths of the footprint dimensions, and the number of channels of each band.
struct Shape {
    name: &'static str,
    footprints: Vec<(&'static str, usize)>,
    bands: Vec<usize>,
}

/// The two shapes of a full-size granule; small ones of the same form for a test run.
fn shapes(size: Size) -> Vec<Shape> {
    let part = |full: usize, small: usize| if size == Size::Full { full } else { small };
    let (line, position) = (part(45, 3), part(30, 4));
    vec![
        Shape {
            name: "three bands",
            footprints: vec![("line", line), ("position", position), ("detector", 9)],
            bands: [717, 869, 637].map(|channels| part(channels, 30)).to_vec(),
        },
        Shape {
            name: "one band",
            footprints: vec![("line", part(135, 3)), ("position", part(90, 4))],
            bands: vec![part(2378, 30)],
        },
    ]
}

/// The reading of both shapes, with chunks of whole spectra and with those that the library chooses.
pub fn sections(
    size: Size,
    python: Option<&Python>,
) -> Result<Vec<Section>, Box<dyn std::error::Error>> {
    let folder = tempfile::tempdir()?;
    let mut sections = Vec::new();
    for (number, shape) in shapes(size).iter().enumerate() {
        for whole_spectra in [true, false] {
            let path = folder.path().join(format!("synthetic_{number}_{whole_spectra}.nc"));
            write(&path, shape, whole_spectra)?;
            sections.push(section(&path, shape, whole_spectra, size, python)?);
        }
    }
    Ok(sections)
}

fn section(
    path: &Path,
    shape: &Shape,
    whole_spectra: bool,
    size: Size,
    python: Option<&Python>,
) -> Result<Section, Box<dyn std::error::Error>> {
    let program = ReaderProgram::new(PathBuf::from(env!("CARGO_BIN_EXE_radsieve")));
    let open = || Granule::open(&program, path, &ReadLimits::default());
    let all = 0..shape.bands.len();
    let fill = |granule: &Granule, bands: std::ops::Range<usize>| {
        granule.fill_bands(bands, &Cancel::new(), &mut |_| {})
    };
    // Memory is looked at first, before anything else has taken some.
    let before = resident_megabytes();
    let granule = open()?;
    fill(&granule, all.clone())?;
    let after = resident_megabytes();
    let values = granule.cube().bytes();
    assert_same(path, &granule, shape)?;
    drop(granule);

    let rounds = if size == Size::Full { 7 } else { 1 };
    let by_library = processor_milliseconds(rounds, || drop(black_box(library(path))));
    let by_chunks =
        processor_milliseconds(rounds, || drop(black_box(open().map(|g| fill(&g, all.clone())))));
    let mut rows = stopwatch::shortest(
        rounds,
        vec![
            ("netCDF library in process, all values", Box::new(|| drop(black_box(library(path))))),
            (
                "reader process, all values",
                Box::new(|| drop(black_box(open().map(|g| fill(&g, all.clone()))))),
            ),
            (
                "reader process, first band",
                Box::new(|| drop(black_box(open().map(|g| fill(&g, 0..1))))),
            ),
            (
                "reader process, one spectrum",
                Box::new(|| drop(black_box(open().map(|g| g.read_spectrum(0, 1))))),
            ),
            ("reader process, opening only", Box::new(|| drop(black_box(open())))),
        ],
    );
    if let Some(python) = python {
        rows.insert(1, ("netCDF4 and numpy, all values", python.read(path, rounds)?));
    }
    let chunks = if whole_spectra { "chunks of whole spectra" } else { "the library's chunks" };
    Ok(Section {
        title: format!("Open a granule and read its values: {}, {chunks}", shape.name),
        rows,
        notes: vec![
            format!(
                "{:.1} MB of values, {:.1} MB in the file",
                values as f64 / 1e6,
                std::fs::metadata(path)?.len() as f64 / 1e6
            ),
            format!(
                "processor time {by_library:.0} ms by the library, {by_chunks:.0} ms by the reader process and \
                 all threads here"
            ),
            format!("resident memory {before:.0} MB before, {after:.0} MB with all values"),
            if python.is_some() { String::new() } else { crate::NO_PYTHON.to_owned() },
        ],
    })
}

/// All values by the library alone, in this process.
pub fn library(path: &Path) -> netcdf::Result<Vec<Vec<f32>>> {
    let file = netcdf::open(path)?;
    let bands = file.variables().filter(|variable| variable.name().starts_with("radiance"));
    bands.map(|band| band.get_values(..)).collect()
}

/// What is measured is worth nothing if it is not the same.
fn assert_same(
    path: &Path,
    granule: &Granule,
    shape: &Shape,
) -> Result<(), Box<dyn std::error::Error>> {
    let mut spectrum = Vec::new();
    for (band, values) in library(path)?.iter().enumerate() {
        let channels = shape.bands[band];
        for footprint in (0..granule.footprints().count()).step_by(7) {
            granule.cube().values(band, footprint, &mut spectrum);
            let begin = footprint * channels;
            let expected = values[begin..begin + channels].iter().map(|&value| f64::from(value));
            assert!(spectrum.iter().copied().eq(expected), "footprint {footprint} differs");
        }
    }
    Ok(())
}

/// Resident memory of this process.
fn resident_megabytes() -> f64 {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find_map(|line| line.strip_prefix("VmRSS:"));
    let kilobytes = line.and_then(|line| line.trim().trim_end_matches(" kB").parse().ok());
    kilobytes.unwrap_or(f64::NAN) / 1024.0
}

/// Time that processors spend on one run, over all threads and ended children: unlike the time on the
/// clock it hardly depends on what else the machine does.
pub fn processor_milliseconds(rounds: usize, mut run: impl FnMut()) -> f64 {
    let before = processor_ticks();
    (0..rounds).for_each(|_| run());
    // A tick is 10 ms, whatever the kernel's own clock.
    10.0 * (processor_ticks() - before) / rounds as f64
}

/// The process's own time and its children's, fields 14 to 17 of the kernel's line on it.
fn processor_ticks() -> f64 {
    let line = std::fs::read_to_string("/proc/self/stat").unwrap_or_default();
    let behind_name = line.rsplit(')').next().unwrap_or_default();
    let fields = behind_name.split_whitespace().skip(11).take(4);
    fields.filter_map(|field| field.parse::<f64>().ok()).sum()
}

fn write(path: &Path, shape: &Shape, whole_spectra: bool) -> Result<(), WriterError> {
    let mut writer = NetcdfWriter::create(path)?;
    writer.global_attribute("title", "Synthetic values for timing, no data for science")?;
    for &(name, length) in &shape.footprints {
        writer.dimension(name, length)?;
    }
    let mut noise = Noise(1);
    for (band, &channels) in shape.bands.iter().enumerate() {
        let (spectral, name) = (format!("wavenumber_{band}"), format!("radiance_{band}"));
        writer.dimension(&spectral, channels)?;
        let axis = VariableDraft::new(&spectral, ValueKind::F64, &[&spectral]);
        writer.variable(&axis.attribute("units", "cm-1"))?;
        let first = 650.0 + 550.0 * band as f64;
        let wavenumbers: Vec<f64> =
            (0..channels).map(|channel| first + 0.625 * channel as f64).collect();
        writer.put_all(&spectral, &wavenumbers.into())?;

        let names = shape.footprints.iter().map(|(name, _)| *name);
        let dimensions: Vec<&str> = names.chain([spectral.as_str()]).collect();
        let mut draft = VariableDraft::new(&name, ValueKind::F32, &dimensions)
            .attribute("units", "mW m-2 sr-1 (cm-1)-1")
            .deflate(4);
        if whole_spectra {
            let mut chunk: Vec<usize> =
                shape.footprints.iter().map(|(_, length)| *length).chain([channels]).collect();
            chunk[0] = 1;
            draft = draft.chunks(&chunk);
        }
        writer.variable(&draft)?;
        let footprints: usize = shape.footprints.iter().map(|(_, length)| length).product();
        let values: Vec<f32> = (0..footprints)
            .flat_map(|footprint| (0..channels).map(move |channel| (footprint, channel)))
            .map(|(footprint, channel)| smooth(footprint, channel) + 0.2 * noise.next())
            .collect();
        writer.put_all(&name, &values.into())?;
    }
    writer.close()
}

/// A spectrum of window, absorption band and lines, that changes slowly over the footprints.
fn smooth(footprint: usize, channel: usize) -> f32 {
    let (footprint, channel) = (footprint as f32, channel as f32);
    let scene = 1.0 + 0.3 * (footprint / 97.0).sin() * (footprint / 1013.0).cos();
    let band = 1.0 - 0.6 * (-((channel - 200.0) / 90.0).powi(2)).exp();
    let lines = 1.0 + 0.1 * (channel / 3.1).sin();
    90.0 * scene * band * lines
}

/// Numbers of mean 0 and deviation 1, nearly Gaussian: sums of four uniform ones (the generator is
/// Knuth's MMIX, The Art of Computer Programming 2, section 3.3.4).
struct Noise(u64);

impl Noise {
    fn next(&mut self) -> f32 {
        let sum: f32 = (0..4).map(|_| self.uniform()).sum();
        // Four uniform numbers have the variance 4 / 12.
        (sum - 2.0) * 3.0_f32.sqrt()
    }

    fn uniform(&mut self) -> f32 {
        self.0 =
            self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 40) as f32 / (1 << 24) as f32
    }
}
