//! The campaign's settings file.

use std::collections::BTreeMap;
use std::io::Write;
use std::path::Path;

use super::{CampaignError, FlagExtension, KeySetting, QualityMap, SignOffLimits, Vocabulary};

/// The settings file's name in the campaign folder.
pub const SETTINGS_FILE: &str = "campaign.toml";

/// Settings are words, not data: a larger file is a mistake.
const LONGEST: u64 = 1 << 20;

/// What a new campaign starts with.
const FIRST_SETTINGS: &str = r#"# Settings of this campaign. See docs/flags.md of the program.
format = 1

# A title for masks and reports:
# title = "Sea of Lowen, first look"

# Flags of this campaign's own, beside the released ones. A bit (16 to 30), once used in a mask,
# should keep its meaning for the campaign's life.
# [[flag]]
# name = "sun_glint"          # one word
# bit = 16
# scope = "footprint"         # or "channel"
# glyph = "L"                 # its mark on the screen
# key = "l"                   # the letter that chooses it
# meaning = "sunlight mirrored by the sea raises the short-wave channels"
# excludes = false            # true: keeps the footprint from the retrieval

# The producer's word on quality comes before any test: one line for each bit or code of the
# granules' flag variables. `radsieve describe FILE --as-quality-map` prints them.
# [quality.scene_quality]
# calibration_degraded = "reject"               # flagged bad_spectrum, no test looks at it
# position_lost = "reject as bad_geolocation"   # flagged otherwise
# daylight = "ignore"
# moon_near = "show"

# Granules within these limits are offered for signing off together (shares from 0 to 1).
# [sign_off]
# doubt = 0.02                # in doubt
# not_assessed = 0.02
# bad_spectra = 0.01
# flagged_channels = 20       # a number of channels
# spot_error = 0.2            # upper limit of what spot checks leave possible

# Keys of the review, by the names of docs/keys.md. A person's own settings come after these.
# [keys]
# undo = "U"
# redo = ["Ctrl-Y", "F5"]
"#;

/// The settings of a campaign.
#[derive(Debug, Clone, PartialEq)]
pub struct CampaignSettings {
    /// A title for masks and reports.
    pub title: Option<String>,
    /// The released flags and the campaign's own.
    pub vocabulary: Vocabulary,
    /// What is made of the producer's word on quality.
    pub quality: QualityMap,
    /// Within which limits granules are offered for signing off together.
    pub sign_off: SignOffLimits,
    /// Keys of this campaign's own.
    pub keys: Vec<KeySetting>,
    /// Settings that this version does not know, in words.
    pub problems: Vec<String>,
}

impl Default for CampaignSettings {
    fn default() -> Self {
        Self {
            title: None,
            vocabulary: Vocabulary::released(),
            quality: QualityMap::default(),
            sign_off: SignOffLimits::default(),
            keys: Vec::new(),
            problems: Vec::new(),
        }
    }
}

#[derive(serde::Deserialize)]
struct Typed {
    #[serde(default = "first_format")]
    format: u32,
    title: Option<String>,
    #[serde(default)]
    flag: Vec<FlagExtension>,
    #[serde(default)]
    quality: BTreeMap<String, BTreeMap<String, String>>,
    #[serde(default)]
    sign_off: SignOffLimits,
    #[serde(flatten)]
    unknown: toml::Table,
}

fn first_format() -> u32 {
    1
}

impl CampaignSettings {
    /// Reads settings from the text of `campaign.toml`.
    ///
    /// # Errors
    /// In words: what is wrong and where.
    pub fn parse(text: &str) -> Result<Self, String> {
        let typed: Typed = toml::from_str(text).map_err(|error| error.to_string())?;
        if typed.format != 1 {
            return Err(format!(
                "settings format {} is newer than this version reads (1): use a newer version",
                typed.format
            ));
        }
        let vocabulary =
            Vocabulary::with_extensions(&typed.flag).map_err(|error| error.to_string())?;
        let quality = QualityMap::read(typed.quality, &vocabulary)?;
        let sign_off = typed.sign_off.checked()?;
        let keys = KeySetting::parse(text, SETTINGS_FILE)?;
        let unknown = typed.unknown.keys().filter(|key| *key != "keys");
        let problems = unknown.map(|key| format!("unknown setting `{key}` in {SETTINGS_FILE}"));
        Ok(Self {
            title: typed.title,
            vocabulary,
            quality,
            sign_off,
            keys,
            problems: problems.collect(),
        })
    }

    /// Reads the settings of a campaign folder; a folder without the file has the defaults.
    pub(super) fn read(folder: &Path) -> Result<Self, CampaignError> {
        let path = folder.join(SETTINGS_FILE);
        let unreadable = |source| CampaignError::Unreadable { path: path.clone(), source };
        match std::fs::metadata(&path) {
            Ok(data) if data.len() > LONGEST => {
                return Err(CampaignError::Settings {
                    path,
                    what: "the file is far too long for settings".to_owned(),
                });
            }
            Ok(_) => {}
            Err(error) if error.kind() == std::io::ErrorKind::NotFound => {
                return Ok(Self::default());
            }
            Err(error) => return Err(unreadable(error)),
        }
        let text = std::fs::read_to_string(&path).map_err(unreadable)?;
        Self::parse(&text).map_err(|what| CampaignError::Settings { path: path.clone(), what })
    }

    /// Writes the first settings, unless there are some.
    pub(super) fn create(folder: &Path) -> std::io::Result<()> {
        let path = folder.join(SETTINGS_FILE);
        match std::fs::OpenOptions::new().write(true).create_new(true).open(path) {
            Ok(mut file) => file.write_all(FIRST_SETTINGS.as_bytes()),
            // Two people start at the same moment: the other's file is as good as ours.
            Err(error) if error.kind() == std::io::ErrorKind::AlreadyExists => Ok(()),
            Err(error) => Err(error),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_first_settings_are_the_defaults() {
        assert_eq!(CampaignSettings::parse(FIRST_SETTINGS), Ok(CampaignSettings::default()));
    }

    /// What the comments show as an example must work when the signs are taken away.
    #[test]
    fn the_example_in_the_comments_works() {
        let example: String = FIRST_SETTINGS
            .lines()
            .map(|line| match line.strip_prefix("# ") {
                Some(code) if code.contains('=') || code.starts_with('[') => format!("{code}\n"),
                Some(_) => String::new(),
                None => format!("{line}\n"),
            })
            .collect();
        let settings = CampaignSettings::parse(&example).unwrap();
        assert_eq!(settings.vocabulary.by_name("sun_glint").unwrap().bit, 16);
        assert_eq!(settings.title.as_deref(), Some("Sea of Lowen, first look"));
        assert_eq!(settings.keys.len(), 2);
    }

    #[test]
    fn mistakes_are_named() {
        let wrong = |text: &str| CampaignSettings::parse(text).unwrap_err();
        assert!(wrong("format = 2").contains("newer"));
        assert!(wrong("format = ").contains("line 1"));
        let clash = "[[flag]]\nname='x'\nbit=3\nglyph='Q'\nkey='q'\nmeaning=''";
        assert!(wrong(clash).contains("bit 3"));
        let unknown = CampaignSettings::parse("colour = 'blue'").unwrap();
        assert_eq!(unknown.problems, ["unknown setting `colour` in campaign.toml"]);
    }

    /// The document's example of a campaign's own flag is read as it stands.
    #[test]
    fn the_example_in_the_document_works() {
        let document = include_str!("../../docs/flags.md");
        let example = document.split("```toml\n").nth(1).unwrap().split("```").next().unwrap();
        let settings = CampaignSettings::parse(example).unwrap();
        assert_eq!(settings.vocabulary.by_name("sun_glint").unwrap().key, 'l');
    }
}
