//! Damaged and odd files from outside: a clean message, in time, and nothing left behind.

mod changing_file;
mod corpus;
mod hanging_granule;
mod missing_filter;

use std::path::Path;
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

use hanging_granule::{granule_that_hangs, small_granule};
use radsieve::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft};

/// Long enough for anything that goes well to happen, however busy the machine is.
const PATIENCE: Duration = Duration::from_secs(60);

fn program(arguments: &[&str], file: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_radsieve"));
    command.env_clear().args(arguments).arg(file).stdin(Stdio::null());
    command
}

/// What `describe` made of a file: its exit code and everything it printed.
fn described(file: &Path, limit: &str) -> (Option<i32>, String) {
    let output = program(&["describe", "--reader-limit", limit], file).output().unwrap();
    let mut text = String::from_utf8(output.stdout).unwrap();
    text.push_str(&String::from_utf8(output.stderr).unwrap());
    (output.status.code(), text)
}

/// The error that a file gives; asserts that it ends with 4, names the file and shows no control
/// characters.
fn refused(file: &Path) -> String {
    let (code, text) = described(file, "60");
    assert_eq!(code, Some(4), "{text}");
    let name = file.file_name().unwrap_or(file.as_os_str()).to_string_lossy();
    assert!(text.contains(&radsieve::system::clean_text(&name)), "{text}");
    assert!(text.chars().all(|character| character == '\n' || !character.is_control()), "{text:?}");
    text
}

/// Readers that still run for files in a folder.
fn readers_of(folder: &Path) -> usize {
    let folder = folder.to_string_lossy();
    let command_line = |entry: std::fs::DirEntry| std::fs::read(entry.path().join("cmdline")).ok();
    let lines = std::fs::read_dir("/proc").unwrap().filter_map(Result::ok).filter_map(command_line);
    let is_reader = |line: &Vec<u8>| {
        let line = String::from_utf8_lossy(line);
        line.contains("reader-process") && line.contains(&*folder)
    };
    lines.filter(is_reader).count()
}

fn wait_for_readers(folder: &Path, count: usize) {
    let begun = Instant::now();
    while readers_of(folder) != count {
        assert!(begun.elapsed() < PATIENCE, "{} readers instead of {count}", readers_of(folder));
        std::thread::sleep(Duration::from_millis(2));
    }
}

#[test]
fn a_file_that_hangs_the_library_is_given_up_at_the_limit() {
    let folder = tempfile::tempdir().unwrap();
    let path = granule_that_hangs(folder.path());
    let (code, text) = described(&path, "1");
    assert_eq!(code, Some(4), "{text}");
    assert!(text.contains("was given up after 1 s"), "{text}");
    wait_for_readers(folder.path(), 0);
}

#[test]
fn a_reader_that_hangs_dies_with_its_parent() {
    let folder = tempfile::tempdir().unwrap();
    let path = granule_that_hangs(folder.path());
    let mut parent = program(&["describe", "--reader-limit", "3600"], &path)
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .spawn()
        .unwrap();
    wait_for_readers(folder.path(), 1);
    // `kill` sends SIGKILL, so the parent has no chance to tidy up.
    parent.kill().unwrap();
    parent.wait().unwrap();
    wait_for_readers(folder.path(), 0);
}

#[test]
fn what_is_no_granule_gets_one_clear_error() {
    let folder = tempfile::tempdir().unwrap();
    let written = |name: &str, content: &[u8]| {
        let path = folder.path().join(name);
        std::fs::write(&path, content).unwrap();
        path
    };
    assert!(refused(&written("text.nc", b"line 1\nline 2\n")).contains("neither netCDF nor HDF5"));
    assert!(refused(&written("empty.nc", b"")).contains("is empty"));
    assert!(refused(&folder.path().join("missing.nc")).contains("No such file"));
    assert!(refused(folder.path()).contains("is a folder"));
    assert!(refused(Path::new("/dev/zero")).contains("is a device"));
    assert!(refused(Path::new("https://somewhere.example/synthetic.nc")).contains("address"));
    assert!(refused(&written("synthetic.nc#mode=zarr", b"CDF\x01")).contains("address"));
    assert!(refused(&written("odd\x1b[2Jname.nc", b"text")).contains("neither"));
    assert!(refused(&written("cut.nc", b"\x89HDF\r\n\x1a\n")).contains("damaged"));
    assert!(refused(&written("classic.nc", b"CDF\x01\0\0")).contains("damaged"));
}

#[test]
fn a_pipe_is_refused_without_waiting_for_a_writer() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("pipe.nc");
    let mode = rustix::fs::Mode::RUSR | rustix::fs::Mode::WUSR;
    rustix::fs::mknodat(rustix::fs::CWD, &path, rustix::fs::FileType::Fifo, mode, 0).unwrap();
    assert!(refused(&path).contains("is a pipe"));
}

#[test]
fn a_file_that_may_not_be_read_is_named() {
    use std::os::unix::fs::PermissionsExt;
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("closed.nc");
    std::fs::write(&path, b"text").unwrap();
    std::fs::set_permissions(&path, PermissionsExt::from_mode(0o000)).unwrap();
    let error = refused(&path);
    // The superuser may read everything, and then sees that it is text.
    let may_read = std::fs::File::open(&path).is_ok();
    assert!(error.contains(if may_read { "neither" } else { "ermission denied" }), "{error}");
}

#[test]
fn a_missing_filter_is_named_with_the_way_to_repack() {
    let folder = tempfile::tempdir().unwrap();
    let path = small_granule(folder.path());
    let bytes = missing_filter::with_another_filter(&std::fs::read(&path).unwrap());
    std::fs::write(&path, bytes).unwrap();
    let error = refused(&path);
    assert!(error.contains("HDF5 filter 7"), "{error}");
    assert!(error.contains("nccopy") && error.contains("h5repack"), "{error}");
}

#[test]
fn a_file_larger_than_memory_on_paper_only_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("sparse.nc");
    let mut writer = NetcdfWriter::create(&path).unwrap();
    writer.dimension("line", 1 << 30).unwrap();
    writer.dimension("position", 1 << 20).unwrap();
    writer.dimension("nu", 2).unwrap();
    let axis = VariableDraft::new("nu", ValueKind::F64, &["nu"]).attribute("units", "cm-1");
    writer.variable(&axis).unwrap();
    writer.put_all("nu", &vec![900.0, 901.0].into()).unwrap();
    let radiance = VariableDraft::new("radiance", ValueKind::F32, &["line", "position", "nu"])
        .attribute("units", "mW m-2 sr-1 (cm-1)-1")
        .chunks(&[1, 1024, 2]);
    writer.variable(&radiance).unwrap();
    writer.close().unwrap();
    assert!(refused(&path).contains("footprints"));
}

/// Whether the kernel can shut a process into one file.
fn kernel_has_landlock() -> bool {
    use landlock::{AccessFs, CompatLevel, Compatible, Ruleset, RulesetAttr};
    Ruleset::default()
        .set_compatibility(CompatLevel::HardRequirement)
        .handle_access(AccessFs::ReadFile)
        .and_then(Ruleset::create)
        .is_ok()
}

#[test]
#[allow(clippy::print_stderr)] // A check that is skipped says so.
fn a_link_into_another_file_is_not_followed() {
    let folder = tempfile::tempdir().unwrap();
    let path = small_granule(folder.path());
    let other = folder.path().join("other.nc");
    let mut writer = NetcdfWriter::create(&other).unwrap();
    writer.dimension("line", 6).unwrap();
    writer.variable(&VariableDraft::new("secret", ValueKind::F32, &["line"])).unwrap();
    writer.close().unwrap();
    let file = hdf5_metno::File::open_rw(&path).unwrap();
    file.link_external(other.to_str().unwrap(), "/secret", "linked").unwrap();
    assert!(file.dataset("linked").is_ok(), "without a sandbox the link leads into the other file");
    drop(file);
    if kernel_has_landlock() {
        assert!(refused(&path).contains("HDF error"));
    } else {
        eprintln!("skipped: this kernel has no Landlock");
    }
}
