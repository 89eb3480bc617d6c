//! A person's own settings: keys, in `radsieve/settings.toml` under the folder for settings.

use std::env;
use std::path::PathBuf;

use anyhow::Context;

use crate::flags::KeySetting;
use crate::system::clean_text;

/// Settings are words: a larger file is a mistake.
const LONGEST: u64 = 1 << 20;

/// The file: under `XDG_CONFIG_HOME`, else under `~/.config` (XDG Base Directory Specification 0.8).
/// A relative path there means nothing, as the specification says.
fn file() -> Option<PathBuf> {
    let absolute =
        |name: &str| env::var_os(name).map(PathBuf::from).filter(|path| path.is_absolute());
    let folder = absolute("XDG_CONFIG_HOME")
        .or_else(|| absolute("HOME").map(|home| home.join(".config")))?;
    Some(folder.join("radsieve").join("settings.toml"))
}

/// The keys that the person has chosen; none where there is no file, or none that can be read.
///
/// # Errors
/// The file is there and makes no sense.
pub fn keys() -> anyhow::Result<Vec<KeySetting>> {
    let Some(path) = file() else { return Ok(Vec::new()) };
    let is_short = std::fs::metadata(&path).is_ok_and(|data| data.len() <= LONGEST);
    let Some(text) = is_short.then(|| std::fs::read_to_string(&path).ok()).flatten() else {
        return Ok(Vec::new());
    };
    let name = clean_text(&path.to_string_lossy());
    KeySetting::parse(&text, "settings.toml")
        .map_err(anyhow::Error::msg)
        .with_context(|| format!("{name} cannot be read as settings; mend it or move it away"))
}
