//! Paths as they are typed on the command line.

use std::ffi::OsString;
use std::path::PathBuf;

/// The path that was typed: `~/` at its beginning is the person's own folder, as in a shell.
pub fn typed_path(text: &str) -> PathBuf {
    under(text, std::env::var_os("HOME"))
}

fn under(text: &str, home: Option<OsString>) -> PathBuf {
    let rest = if text == "~" { Some("") } else { text.strip_prefix("~/") };
    match rest.zip(home.filter(|home| !home.is_empty())) {
        Some((rest, home)) => PathBuf::from(home).join(rest.trim_start_matches('/')),
        None => PathBuf::from(text),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_tilde_is_ones_own_folder_where_that_is_known() {
        let home = || Some(OsString::from("/people/ada"));
        for (text, path) in [
            ("~/masks", "/people/ada/masks"),
            ("~", "/people/ada"),
            ("masks/~/x", "masks/~/x"),
            ("~bo/masks", "~bo/masks"),
        ] {
            assert_eq!(under(text, home()), PathBuf::from(path), "{text}");
        }
        assert_eq!(under("~/masks", None), PathBuf::from("~/masks"));
    }
}
