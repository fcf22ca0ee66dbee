//! The rule set document (`wheelwort.rule_set/1`): a calculation rule of one's own, as JSON or TOML. Reading checks shape and
//! meaning and notes every problem with its pointer; the canonical bytes are what is stored and hashed.

mod check;
mod read;
mod toml_text;

use super::problem::Problems;
use super::{canonical, json};
use crate::core::domain::{Book, RuleSet};
use serde::Serialize;
use serde_json::Value;

pub use check::{FIGURES, LIMITS, check, gap};

/// The format name that every rule set document carries.
pub const FORMAT: &str = "wheelwort.rule_set/1";

/// A rule set as a document.
#[derive(Clone, Copy, Debug, Serialize)]
pub struct Document<'r> {
    /// Always `wheelwort.rule_set/1`.
    pub format: &'static str,
    /// The rule set.
    #[serde(flatten)]
    pub rule_set: &'r RuleSet,
}

impl<'r> Document<'r> {
    /// A rule set as a document.
    pub fn of(rule_set: &'r RuleSet) -> Document<'r> {
        Document {
            format: FORMAT,
            rule_set,
        }
    }
}

/// Reads an own rule set from JSON. `book` tells which weights, editions, methods and materials there are.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn from_json(bytes: &[u8], book: &Book) -> Result<RuleSet, Problems> {
    from_value(&json::parse(bytes)?, book)
}

/// Reads an own rule set from TOML: the same fields under the same names.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn from_toml(text: &str, book: &Book) -> Result<RuleSet, Problems> {
    from_value(&toml_text::value(text)?, book)
}

/// The JSON value of a TOML text, for reading with [`from_value`].
///
/// # Errors
/// One problem with the line, for a text that is no TOML.
pub fn value_of_toml(text: &str) -> Result<Value, Problems> {
    toml_text::value(text)
}

/// A rule set as TOML, which [`from_toml`] reads back the same.
///
/// # Errors
/// When it cannot be written, which a rule set that was read always can.
pub fn toml_of(set: &RuleSet) -> Result<String, toml::ser::Error> {
    toml::to_string_pretty(&Document::of(set))
}

/// Reads an own rule set from a JSON value.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn from_value(value: &Value, book: &Book) -> Result<RuleSet, Problems> {
    let mut problems = Problems::default();
    let set = shape(value, &mut problems);
    if let Some(set) = &set {
        check::own(set, book, &mut problems);
        check(set, book, &mut problems);
    }
    match set {
        Some(set) if problems.is_empty() => Ok(set),
        _ => Err(problems),
    }
}

/// Reads the shape of a rule set document alone: fields, numbers, words and days. None where a field that must be there is
/// not; whatever is wrong is noted.
pub fn shape(value: &Value, problems: &mut Problems) -> Option<RuleSet> {
    read::rule_set(value, problems)
}

/// The canonical bytes of a rule set document (RFC 8785).
///
/// # Errors
/// When a figure is not finite, which a rule set that was read cannot hold.
pub fn canonical_bytes(set: &RuleSet) -> Result<Vec<u8>, serde_json::Error> {
    canonical::bytes(&Document::of(set))
}
