//! Granules larger than the memory that their values may take: the same answers in less memory.

use std::io::Read;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use radsieve::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft};
use tempfile::TempDir;

fn radsieve(folder: &Path, arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_radsieve"));
    command.env_clear().current_dir(folder).args(arguments).stdin(Stdio::null());
    command
        .env("RADSIEVE_NOW", "2026-03-01T12:00:00Z")
        .env("RADSIEVE_PERSON", "tester")
        .env("RAYON_NUM_THREADS", "2");
    command
}

/// What a command prints on both streams, the one behind the other.
fn run(folder: &Path, arguments: &[&str]) -> Vec<u8> {
    let output = radsieve(folder, arguments).output().unwrap();
    let words = String::from_utf8_lossy(&output.stderr);
    assert_eq!(output.status.code(), Some(0), "{arguments:?}: {words}");
    [output.stdout, output.stderr].concat()
}

/// A synthetic granule of 540 x 2223 values, 4.8 MB.
fn synthetic() -> (TempDir, String) {
    let folder = tempfile::tempdir().unwrap();
    let made = ["synth", "--scene", "strait-of-pell", "--shape", "12x5x9", "--out", "."];
    run(folder.path(), &made);
    let mut files = std::fs::read_dir(folder.path()).unwrap();
    let name = files.next().unwrap().unwrap().file_name().into_string().unwrap();
    (folder, name)
}

/// Less than a sixth of the synthetic granule.
const LITTLE: &str = "800K";

#[test]
fn layers_and_spectra_have_the_same_bytes_in_little_memory() {
    let (folder, file) = synthetic();
    let layers = ["bt(900)", "bt(700..830)", "bt(900) - bt(2500)", "sd3(bt(1231))"];
    let tabulate: Vec<&str> = ["tabulate", &file, "--layer", "share_missing(650..2760)"]
        .into_iter()
        .chain(layers.iter().flat_map(|layer| ["--layer", layer]))
        .collect();
    let spectrum = ["spectrum", &file, "--at", "7,3,2"];
    for arguments in [tabulate.as_slice(), &spectrum] {
        let all = run(folder.path(), arguments);
        for memory in [LITTLE, "1K"] {
            let little = run(folder.path(), &[arguments, &["--memory", memory]].concat());
            assert!(all == little, "{arguments:?} differs in {memory}");
        }
    }
}

#[test]
fn screening_and_masks_have_the_same_bytes_in_little_memory() {
    let (folder, file) = synthetic();
    let answers = [None, Some(LITTLE)].map(|memory| {
        let campaign = memory.map_or("in_all", |_| "in_little");
        let common = ["--campaign", campaign];
        let memory: Vec<&str> = memory.map_or(Vec::new(), |memory| vec!["--memory", memory]);
        let with = |words: &[&str]| run(folder.path(), &[words, &common, &memory].concat());
        let screened = with(&["screen", &file, "--json"]);
        let explained = with(&["screen", &file, "--explain", "7,3,2"]);
        let masks = format!("masks_{campaign}");
        with(&["export", &file, "--out", &masks]);
        let mask = std::fs::read_dir(folder.path().join(&masks)).unwrap().next().unwrap().unwrap();
        (screened, explained, std::fs::read(mask.path()).unwrap())
    });
    assert!(answers[0].0 == answers[1].0, "the screening differs");
    assert!(answers[0].1 == answers[1].1, "the evidence differs");
    assert!(answers[0].2 == answers[1].2, "the mask differs");
}

/// 96 MB of values in three bands, soon written: 3000 footprints and 8000 channels.
fn large(folder: &Path) -> PathBuf {
    let path = folder.join("synthetic_large.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("line", 60).unwrap();
    writer.dimension("position", 50).unwrap();
    for (band, channels) in [3000, 2500, 2500].into_iter().enumerate() {
        let (nu, name) = (format!("nu_{band}"), format!("radiance_{band}"));
        writer.dimension(&nu, channels).unwrap();
        let axis = VariableDraft::new(&nu, ValueKind::F64, &[&nu]).attribute("units", "cm-1");
        writer.variable(&axis).unwrap();
        let first = 650.0 + 700.0 * band as f64;
        let wavenumbers: Vec<f64> = (0..channels).map(|n| first + 0.25 * n as f64).collect();
        writer.put_all(&nu, &wavenumbers.into()).unwrap();
        let draft = VariableDraft::new(&name, ValueKind::F32, &["line", "position", &nu])
            .attribute("units", "mW m-2 sr-1 (cm-1)-1")
            .chunks(&[1, 50, channels])
            .deflate(1);
        writer.variable(&draft).unwrap();
        writer.put_all(&name, &vec![20.0_f32; 3000 * channels].into()).unwrap();
    }
    writer.close().unwrap();
    path
}

/// The most memory that a process has had so far, in MB: proc(5).
fn peak_megabytes(process: u32) -> u64 {
    let status = std::fs::read_to_string(format!("/proc/{process}/status")).unwrap();
    let line = status.lines().find_map(|line| line.strip_prefix("VmHWM:")).unwrap();
    line.trim().trim_end_matches(" kB").parse::<u64>().unwrap() / 1024
}

#[test]
fn a_process_stays_far_smaller_than_the_values_that_it_goes_through() {
    let folder = tempfile::tempdir().unwrap();
    let file = large(folder.path());
    let arguments = [
        "tabulate",
        file.to_str().unwrap(),
        "--memory",
        "12M",
        "--layer",
        "bt(900)",
        "--layer",
        "bt(1500)-bt(2200)",
        "--layer",
        "rad(700..800)",
    ];
    let mut child = radsieve(folder.path(), &arguments).stdout(Stdio::piped()).spawn().unwrap();
    let mut output = child.stdout.take().unwrap();
    // It has gone through all values when the first row comes, and then waits: a pipe holds less than
    // the whole table.
    output.read_exact(&mut [0]).unwrap();
    let peak = peak_megabytes(child.id());
    let mut rest = Vec::new();
    output.read_to_end(&mut rest).unwrap();
    assert!(child.wait().unwrap().success());
    assert!(rest.len() > 1 << 16, "{}", rest.len());
    // What the program itself takes, and its threads, is 20 to 30 MB.
    assert!(peak < 60, "{peak} MB for 96 MB of values");
}
