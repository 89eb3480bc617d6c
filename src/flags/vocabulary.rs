//! The flag vocabulary: one table feeds bits, legend, keys, export and documents.

use serde::{Deserialize, Serialize};

use super::ReviewState;

/// What a flag is about.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Scope {
    /// A footprint, in all bands or in named ones.
    Footprint,
    /// A channel of a band, in the whole granule.
    Channel,
}

/// One kind of flag.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct FlagKind {
    /// The word in `flag_meanings`, ledgers and on the command line.
    pub name: String,
    /// Bit number, 0 to 30: the sign bit of a signed 32-bit mask stays free.
    pub bit: u8,
    /// What it is about; footprint and channel flags number their bits separately.
    pub scope: Scope,
    /// The mark on the screen: a meaning shown by colour also has a sign.
    pub glyph: char,
    /// The letter that chooses it when flagging.
    pub key: char,
    /// One sentence for the legend and the documents.
    pub meaning: String,
    /// Whether a retrieval may not use a footprint that carries it.
    pub excludes: bool,
    /// Whether it comes with the program; otherwise with the campaign.
    pub released: bool,
}

impl FlagKind {
    /// The flag's bit as a mask.
    pub fn mask(&self) -> u32 {
        1 << self.bit
    }
}

/// Bits below this one belong to the program, the others to campaigns.
pub const FIRST_CAMPAIGN_BIT: u8 = 16;
/// The highest bit: 31 would be the sign.
pub const LAST_BIT: u8 = 30;

type Row = (&'static str, u8, Scope, char, char, bool, &'static str);

/// The released flags. A bit, once released, never changes and is never used again.
#[rustfmt::skip]
const RELEASED: &[Row] = &[
    ("cloudy",          0, Scope::Footprint, 'C', 'c', true,  "cloud changes the footprint's radiances"),
    ("thin_cloud",      1, Scope::Footprint, 'T', 't', true,  "thin or partial cloud; says nothing about `cloudy`"),
    ("dust_or_ash",     2, Scope::Footprint, 'D', 'd', true,  "mineral dust or volcanic ash; no warning service"),
    ("so2",             3, Scope::Footprint, 'S', 's', true,  "uncommon sulphur dioxide; no warning service"),
    ("bad_spectrum",    4, Scope::Footprint, 'B', 'b', true,  "spectrum, or that of named bands, not to be trusted"),
    ("bad_geolocation", 5, Scope::Footprint, 'G', 'g', true,  "position, time or angles not to be trusted"),
    ("surface_anomaly", 6, Scope::Footprint, 'A', 'a', false, "an unexpected surface: fire, flood, snow, emissivity"),
    ("unusual",         7, Scope::Footprint, 'U', 'u', false, "a spectrum unlike the others, for no reason known yet"),
    ("doubtful",        8, Scope::Footprint, '?', 'o', false, "the tests are unsure: doubt at or above the cut (0.5)"),
    ("noisy",           0, Scope::Channel,   'N', 'n', false, "noise well above that of its neighbours"),
    ("dead",            1, Scope::Channel,   'X', 'x', false, "no signal"),
    ("popping",         2, Scope::Channel,   'P', 'p', false, "jumps between levels"),
];

/// A flag that a campaign adds in its settings, as written there.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct FlagExtension {
    /// One word: letters, digits, `_`, `-`, `.`, `+`, `@`.
    pub name: String,
    /// Bit 16 to 30; stable for the campaign's life.
    pub bit: u8,
    /// `footprint` (the default) or `channel`.
    #[serde(default = "footprint")]
    pub scope: Scope,
    /// One printable character.
    pub glyph: char,
    /// One letter or digit.
    pub key: char,
    /// One sentence.
    pub meaning: String,
    /// Whether it keeps a footprint from the retrieval.
    #[serde(default)]
    pub excludes: bool,
}

fn footprint() -> Scope {
    Scope::Footprint
}

/// Why a campaign's flag cannot be added.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum VocabularyError {
    /// The name is no single word that CF allows in `flag_meanings`.
    #[error("flag `{0}`: a name is one word of letters, digits and _-.+@, 40 at the most")]
    Name(String),
    /// The bit is outside those that campaigns may use.
    #[error(
        "flag `{name}`: bit {bit} is not free for campaigns; use {FIRST_CAMPAIGN_BIT} to {LAST_BIT}"
    )]
    Bit {
        /// The flag.
        name: String,
        /// Its bit.
        bit: u8,
    },
    /// Name, bit, key or glyph are taken already.
    #[error("flag `{name}`: its {what} is taken by `{other}`; choose another")]
    Clash {
        /// The flag.
        name: String,
        /// Which of its properties.
        what: &'static str,
        /// The flag that has it.
        other: String,
    },
    /// The glyph or the key would not show or could not be typed.
    #[error(
        "flag `{0}`: glyph and key are one printable ASCII character each, the key a letter or digit"
    )]
    Sign(String),
}

/// All flags of a campaign.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Vocabulary {
    kinds: Vec<FlagKind>,
}

impl Vocabulary {
    /// The flags that come with the program.
    pub fn released() -> Self {
        Self { kinds: RELEASED.iter().map(released_kind).collect() }
    }

    /// The released flags and a campaign's own.
    ///
    /// # Errors
    /// The first extension that clashes or that CF or the screen could not show.
    pub fn with_extensions(extensions: &[FlagExtension]) -> Result<Self, VocabularyError> {
        let mut vocabulary = Self::released();
        for extension in extensions {
            vocabulary.add(extension)?;
        }
        Ok(vocabulary)
    }

    fn add(&mut self, extension: &FlagExtension) -> Result<(), VocabularyError> {
        check_alone(extension)?;
        for kind in &self.kinds {
            if let Some(what) = clash(extension, kind) {
                return Err(VocabularyError::Clash {
                    name: extension.name.clone(),
                    what,
                    other: kind.name.clone(),
                });
            }
        }
        self.kinds.push(FlagKind {
            name: extension.name.clone(),
            bit: extension.bit,
            scope: extension.scope,
            glyph: extension.glyph,
            key: extension.key,
            meaning: extension.meaning.clone(),
            excludes: extension.excludes,
            released: false,
        });
        Ok(())
    }

    /// All flags, released ones first.
    pub fn kinds(&self) -> &[FlagKind] {
        &self.kinds
    }

    /// The flags of one scope, by bit.
    pub fn of_scope(&self, scope: Scope) -> Vec<&FlagKind> {
        let mut kinds: Vec<_> = self.kinds.iter().filter(|kind| kind.scope == scope).collect();
        kinds.sort_by_key(|kind| kind.bit);
        kinds
    }

    /// A flag by its name.
    pub fn by_name(&self, name: &str) -> Option<&FlagKind> {
        self.kinds.iter().find(|kind| kind.name == name)
    }

    /// A flag by its key letter.
    pub fn by_key(&self, scope: Scope, key: char) -> Option<&FlagKind> {
        self.kinds.iter().find(|kind| kind.scope == scope && kind.key == key)
    }

    /// The footprint flags that keep a footprint from the retrieval, as a mask.
    pub fn excluding_mask(&self) -> u32 {
        let excluding = |kind: &&FlagKind| kind.scope == Scope::Footprint && kind.excludes;
        self.kinds.iter().filter(excluding).fold(0, |mask, kind| mask | kind.mask())
    }

    /// The default rule of what a retrieval may use: assessed, and no excluding flag.
    /// A footprint that nothing assessed is not usable.
    pub fn usable(&self, flags: u32, review: ReviewState) -> bool {
        review != ReviewState::NotAssessed && flags & self.excluding_mask() == 0
    }

    /// The names of the footprint flags set in `flags`, by bit.
    pub fn names(&self, scope: Scope, flags: u32) -> Vec<&str> {
        let set = |kind: &&FlagKind| flags & kind.mask() != 0;
        self.of_scope(scope).into_iter().filter(set).map(|kind| kind.name.as_str()).collect()
    }
}

fn released_kind(&(name, bit, scope, glyph, key, excludes, meaning): &Row) -> FlagKind {
    FlagKind {
        name: name.to_owned(),
        bit,
        scope,
        glyph,
        key,
        meaning: meaning.to_owned(),
        excludes,
        released: true,
    }
}

fn check_alone(extension: &FlagExtension) -> Result<(), VocabularyError> {
    let name = &extension.name;
    // The characters that CF allows in a word of flag_meanings (section 3.5).
    let word = |c: char| c.is_ascii_alphanumeric() || "_-.+@".contains(c);
    if name.is_empty() || name.len() > 40 || !name.chars().all(word) {
        return Err(VocabularyError::Name(name.chars().take(40).collect()));
    }
    if !(FIRST_CAMPAIGN_BIT..=LAST_BIT).contains(&extension.bit) {
        return Err(VocabularyError::Bit { name: name.clone(), bit: extension.bit });
    }
    if !extension.glyph.is_ascii_graphic() || !extension.key.is_ascii_alphanumeric() {
        return Err(VocabularyError::Sign(name.clone()));
    }
    Ok(())
}

fn clash(extension: &FlagExtension, kind: &FlagKind) -> Option<&'static str> {
    // A name stands for one flag in both scopes, or a ledger line could be read in two ways.
    if extension.name == kind.name {
        return Some("name");
    }
    if extension.scope != kind.scope {
        return None;
    }
    if extension.bit == kind.bit {
        Some("bit")
    } else if extension.key == kind.key {
        Some("key")
    } else if extension.glyph == kind.glyph {
        Some("glyph")
    } else {
        None
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn extension(name: &str, bit: u8, glyph: char, key: char) -> FlagExtension {
        FlagExtension {
            name: name.to_owned(),
            bit,
            scope: Scope::Footprint,
            glyph,
            key,
            meaning: "sun glint".to_owned(),
            excludes: true,
        }
    }

    /// Masks are kept for years: this list only ever grows.
    #[test]
    fn a_released_bit_never_changes() {
        let vocabulary = Vocabulary::released();
        let bits = |scope| {
            let kinds = vocabulary.of_scope(scope);
            kinds.iter().map(|kind| (kind.bit, kind.name.clone())).collect::<Vec<_>>()
        };
        let named = |names: &[&str]| {
            names.iter().enumerate().map(|(i, n)| (i as u8, n.to_string())).collect::<Vec<_>>()
        };
        let footprint = [
            "cloudy",
            "thin_cloud",
            "dust_or_ash",
            "so2",
            "bad_spectrum",
            "bad_geolocation",
            "surface_anomaly",
            "unusual",
            "doubtful",
        ];
        assert_eq!(bits(Scope::Footprint), named(&footprint));
        assert_eq!(bits(Scope::Channel), named(&["noisy", "dead", "popping"]));
    }

    #[test]
    fn the_default_rule_excludes_the_six_named_flags() {
        let vocabulary = Vocabulary::released();
        assert_eq!(
            vocabulary.names(Scope::Footprint, vocabulary.excluding_mask()),
            ["cloudy", "thin_cloud", "dust_or_ash", "so2", "bad_spectrum", "bad_geolocation"]
        );
        let unusual = vocabulary.by_name("unusual").unwrap().mask();
        let cloudy = vocabulary.by_name("cloudy").unwrap().mask();
        assert!(vocabulary.usable(unusual, ReviewState::AssessedByTest));
        assert!(vocabulary.usable(0, ReviewState::DecidedByPerson));
        assert!(!vocabulary.usable(0, ReviewState::NotAssessed));
        assert!(!vocabulary.usable(cloudy | unusual, ReviewState::DecidedByPerson));
    }

    #[test]
    fn released_flags_clash_with_none_of_each_other() {
        let kinds = Vocabulary::released().kinds;
        for (at, one) in kinds.iter().enumerate() {
            for other in &kinds[at + 1..] {
                assert_ne!(one.name, other.name);
                if one.scope == other.scope {
                    assert!(one.bit != other.bit && one.key != other.key, "{one:?} {other:?}");
                    assert_ne!(one.glyph, other.glyph);
                }
            }
        }
    }

    #[test]
    fn a_campaign_adds_flags_with_bits_of_its_own() {
        let vocabulary = Vocabulary::with_extensions(&[extension("glint", 16, 'L', 'l')]).unwrap();
        let glint = vocabulary.by_name("glint").unwrap();
        assert_eq!((glint.mask(), glint.released), (1 << 16, false));
        assert!(!vocabulary.usable(glint.mask(), ReviewState::DecidedByPerson));
        assert_eq!(vocabulary.by_key(Scope::Footprint, 'l').unwrap().name, "glint");
    }

    #[test]
    fn a_clash_names_both_flags() {
        let refused = |one: FlagExtension| {
            let taken = extension("glint", 16, 'L', 'l');
            Vocabulary::with_extensions(&[taken, one]).unwrap_err().to_string()
        };
        assert!(refused(extension("cloudy", 17, 'Q', 'q')).contains("name is taken by `cloudy`"));
        assert!(refused(extension("haze", 16, 'Q', 'q')).contains("bit is taken by `glint`"));
        assert!(refused(extension("haze", 17, 'L', 'q')).contains("glyph is taken by `glint`"));
        assert!(refused(extension("haze", 17, 'Q', 'c')).contains("key is taken by `cloudy`"));
        assert!(refused(extension("haze", 3, 'Q', 'q')).contains("bit 3 is not free"));
        assert!(refused(extension("haze", 31, 'Q', 'q')).contains("bit 31 is not free"));
        assert!(refused(extension("two words", 17, 'Q', 'q')).contains("one word"));
        assert!(refused(extension("haze", 17, '\u{7}', 'q')).contains("printable"));
    }

    /// The document's tables are this table.
    #[test]
    fn the_document_shows_the_vocabulary() {
        let document = include_str!("../../docs/flags.md");
        let rows: Vec<&str> = document.lines().filter(|line| is_flag_row(line)).collect();
        let kinds = Vocabulary::released().kinds;
        let expected: Vec<String> = kinds.iter().map(row).collect();
        assert_eq!(rows, expected);
    }

    /// Flag rows begin with a name and a bit; other tables of the document do not.
    fn is_flag_row(line: &str) -> bool {
        let mut cells = line.split(" | ");
        line.starts_with("| `") && cells.nth(1).is_some_and(|cell| cell.parse::<u8>().is_ok())
    }

    fn row(kind: &FlagKind) -> String {
        let FlagKind { name, bit, glyph, key, meaning, .. } = kind;
        let usable = match (kind.scope, kind.excludes) {
            (Scope::Channel, _) => "",
            (Scope::Footprint, true) => " no |",
            (Scope::Footprint, false) => " yes |",
        };
        let mask = kind.mask();
        format!("| `{name}` | {bit} | {mask} | `{glyph}` | `{key}` |{usable} {meaning} |")
    }
}
