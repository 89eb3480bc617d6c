//! The lines of a ledger file: one header, then one decision each.

use jiff::Timestamp;
use serde::{Deserialize, Serialize};
use serde_json::{Map, Value};

use super::{Act, Author, Decision, DecisionId, GranuleIdentity, Origin};

/// What the first line calls the format.
pub const LEDGER_FORMAT: &str = "radsieve-ledger";
/// The version that this program writes, and the newest that it reads.
pub const LEDGER_VERSION: u32 = 1;

/// The first line.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub(super) struct Header {
    pub(super) format: String,
    pub(super) version: u32,
    /// The writer's name in decision names.
    pub(super) writer: String,
    pub(super) granule: GranuleIdentity,
    pub(super) author: Author,
    /// The version of the program.
    pub(super) program: String,
    pub(super) opened: Timestamp,
}

/// Only what every version of the header has.
#[derive(Deserialize)]
struct AnyHeader {
    format: String,
    version: u32,
}

/// Why a first line is no header for us.
#[derive(Debug, PartialEq, Eq)]
pub(super) enum HeaderError {
    Newer(u32),
    NoLedger,
}

impl Header {
    pub(super) fn parse(line: &[u8]) -> Result<Self, HeaderError> {
        let any: AnyHeader = serde_json::from_slice(line).map_err(|_| HeaderError::NoLedger)?;
        if any.format != LEDGER_FORMAT {
            return Err(HeaderError::NoLedger);
        }
        if any.version > LEDGER_VERSION {
            return Err(HeaderError::Newer(any.version));
        }
        serde_json::from_slice(line).map_err(|_| HeaderError::NoLedger)
    }
}

#[derive(Serialize)]
struct WrittenLine<'a> {
    sequence: u64,
    at: Timestamp,
    #[serde(skip_serializing_if = "Option::is_none")]
    clock: Option<Timestamp>,
    #[serde(skip_serializing_if = "Option::is_none")]
    test: Option<&'a str>,
    #[serde(flatten)]
    act: &'a Act,
    #[serde(skip_serializing_if = "Option::is_none")]
    why: Option<&'a str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    step: Option<&'a str>,
}

/// One line, with its line break.
pub(super) fn write_line<T: Serialize>(value: &T) -> Result<Vec<u8>, serde_json::Error> {
    let mut line = serde_json::to_vec(value)?;
    line.push(b'\n');
    Ok(line)
}

/// The line of a decision, with its line break.
pub(super) fn write_decision(decision: &Decision) -> Result<Vec<u8>, serde_json::Error> {
    write_line(&WrittenLine {
        sequence: decision.id.sequence,
        at: decision.at,
        clock: decision.clock,
        test: match &decision.origin {
            Origin::Person => None,
            Origin::Test(name) => Some(name),
        },
        act: &decision.act,
        why: decision.why.as_deref(),
        step: decision.step.as_deref(),
    })
}

#[derive(Deserialize)]
struct ReadLine {
    sequence: u64,
    at: Timestamp,
    clock: Option<Timestamp>,
    test: Option<String>,
    act: String,
    why: Option<String>,
    step: Option<String>,
    #[serde(flatten)]
    rest: Map<String, Value>,
}

/// Acts of this version, by their names in the file.
const KNOWN: &[&str] = &[
    "flag",
    "withdraw",
    "flag_channels",
    "withdraw_channels",
    "assess",
    "judge",
    "spot_check",
    "revoke",
    "sign_off",
    "set_aside",
    "reopen",
    "comment",
];

/// The decision of a line. An act unknown to this version is a decision whose act is unknown.
///
/// # Errors
/// In words, without the line's own text.
pub(super) fn read_decision(line: &[u8], header: &Header) -> Result<Decision, String> {
    let mut read: ReadLine = serde_json::from_slice(line).map_err(|error| plain(&error))?;
    let act = if KNOWN.contains(&read.act.as_str()) {
        read.rest.insert("act".to_owned(), Value::String(read.act));
        serde_json::from_value(Value::Object(read.rest)).map_err(|error| plain(&error))?
    } else {
        Act::Unknown { kind: read.act }
    };
    Ok(Decision {
        id: DecisionId { writer: header.writer.clone(), sequence: read.sequence },
        at: read.at,
        clock: read.clock,
        person: header.author.person.clone(),
        origin: read.test.map_or(Origin::Person, Origin::Test),
        act,
        why: read.why,
        step: read.step,
    })
}

fn plain(error: &serde_json::Error) -> String {
    match error.classify() {
        serde_json::error::Category::Data => "a field is missing or of the wrong kind".to_owned(),
        _ => format!("no JSON from column {} on", error.column()),
    }
}
