//! The same work by netCDF4 and numpy, where a Python that has them is installed.

use std::path::Path;
use std::process::{Command, Stdio};
use std::time::Duration;

const SCRIPT: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/benches/ratios/python_side.py");

/// A Python that has netCDF4 and numpy.
pub struct Python(String);

impl Python {
    /// The one that `RADSIEVE_PYTHON` names, or the first of the usual names that has them.
    pub fn find() -> Option<Self> {
        let named = std::env::var("RADSIEVE_PYTHON").ok();
        let mut names = named.into_iter().chain(["python3", "python"].map(str::to_owned));
        let has_both = |name: &String| {
            Command::new(name)
                .args(["-c", "import netCDF4, numpy"])
                .stderr(Stdio::null())
                .status()
                .is_ok_and(|status| status.success())
        };
        names.find(has_both).map(Self)
    }

    /// Reads all radiances of a file: the shortest time.
    pub fn read(&self, file: &Path, rounds: usize) -> Result<Duration, String> {
        Ok(self.times(&["read", &file.to_string_lossy(), &rounds.to_string()])?[0])
    }

    /// Writes a table of temperatures: the shortest times of the whole, and of the numbers alone.
    pub fn tabulate(
        &self,
        file: &Path,
        table: &Path,
        rounds: usize,
        wavenumbers: &[f64],
    ) -> Result<[Duration; 2], String> {
        let wavenumbers = wavenumbers.iter().map(f64::to_string);
        let mut arguments = vec![
            "tabulate".to_owned(),
            file.to_string_lossy().into_owned(),
            table.to_string_lossy().into_owned(),
            rounds.to_string(),
        ];
        arguments.extend(wavenumbers);
        let arguments: Vec<&str> = arguments.iter().map(String::as_str).collect();
        let times = self.times(&arguments)?;
        match times[..] {
            [whole, numbers] => Ok([whole, numbers]),
            _ => Err("two times were expected".to_owned()),
        }
    }

    fn times(&self, arguments: &[&str]) -> Result<Vec<Duration>, String> {
        let output = Command::new(&self.0).arg(SCRIPT).args(arguments).output();
        let output = output.map_err(|error| error.to_string())?;
        if !output.status.success() {
            return Err(String::from_utf8_lossy(&output.stderr).into_owned());
        }
        let seconds = |line: &str| line.trim().parse().map(Duration::from_secs_f64);
        let times: Result<Vec<Duration>, _> =
            String::from_utf8_lossy(&output.stdout).lines().map(seconds).collect();
        times.ok().filter(|times| !times.is_empty()).ok_or_else(|| "no time came back".to_owned())
    }
}
