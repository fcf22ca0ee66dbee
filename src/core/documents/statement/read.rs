//! Reads a statement file: its shape alone, strictly. What its figures are worth is for `core::statement` to find out.

use super::{
    AssessmentPart, Data, EvidenceFile, FAMILY, FORMAT, Figures, PathwayPart, Person, Previous, ReasonGiven,
    Signature, Statement, StatementFacts, Superseded, Words,
};
use crate::core::documents::assessment::Assessment;
use crate::core::documents::pathway::Pathway;
use crate::core::documents::pointer;
use crate::core::documents::problem::{Problem, Problems};
use crate::core::documents::reader::{Fields, Place, is_unknown_field, object};
use crate::core::documents::{canonical, json};
use jiff::Timestamp;
use serde::de::DeserializeOwned;
use serde_json::Value;

/// Why a file could not be read as a statement.
#[derive(Clone, Debug, PartialEq)]
pub enum Unread {
    /// No JSON, or no statement.
    Problems(Problems),
    /// A statement of a later format.
    NewerFormat(String),
    /// A statement of this format with a field that the format does not have.
    UnknownField(String),
    /// Something is there and cannot be part of a statement, such as `null`: its pointer.
    Unwritten(String),
}

/// Reads the bytes of a file. Gives the statement with its JSON as it stood in the file.
///
/// # Errors
/// Why it is no statement of this format.
pub fn read(bytes: &[u8]) -> Result<(Statement, Value), Unread> {
    let value = json::parse(bytes).map_err(Unread::Problems)?;
    let statement = from_value(&value)?;
    let again = serde_json::to_value(&statement).map_err(|error| unwritable(&error))?;
    match difference(&value, &again, String::new()) {
        None => Ok((statement, value)),
        Some(Odd::Unknown(pointer)) => Err(Unread::UnknownField(pointer)),
        Some(Odd::Other(pointer)) => Err(Unread::Unwritten(pointer)),
    }
}

fn unwritable(error: &serde_json::Error) -> Unread {
    let problem = Problem {
        pointer: String::new(),
        detail: format!("The statement cannot be written as JSON: {error}."),
        remedy: "Ask its issuer for the original.".to_owned(),
    };
    Unread::Problems(problem.into())
}

fn from_value(value: &Value) -> Result<Statement, Unread> {
    match value.get("format").and_then(Value::as_str) {
        Some(FORMAT) => {}
        Some(newer)
            if newer
                .strip_prefix(FAMILY)
                .is_some_and(|version| version.parse::<u32>().is_ok_and(|v| v > 1)) =>
        {
            return Err(Unread::NewerFormat(newer.to_owned()));
        }
        other => {
            let mut problems = Problems::default();
            let detail = match other {
                Some(other) => format!("\"{other}\" is not the format of a statement."),
                None => "The file does not say what it is.".to_owned(),
            };
            problems.add("/format", detail, format!("A statement says \"{FORMAT}\"."));
            return Err(Unread::Problems(problems));
        }
    }
    let mut problems = Problems::default();
    let read = object(value, &Place::ROOT, &mut problems, statement);
    match read {
        Some(statement) if problems.is_empty() => Ok(statement),
        _ => match problems.list().iter().find(|problem| is_unknown_field(problem)) {
            Some(unknown) if problems.list().iter().all(is_unknown_field) => {
                Err(Unread::UnknownField(unknown.pointer.clone()))
            }
            _ => Err(Unread::Problems(problems)),
        },
    }
}

fn statement(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Option<Statement> {
    let format = fields.required_text("format", at, problems);
    let example = fields.text("example", at, problems);
    let statement_no = fields.required_text("statement_no", at, problems);
    let version = typed::<u32>(fields, "version", at, problems);
    let supersedes = optional::<Vec<Superseded>>(fields, "supersedes", at, problems);
    let previous = optional::<Previous>(fields, "previous", at, problems);
    let status = fields.required_text("status", at, problems);
    let issued_at = typed::<Timestamp>(fields, "issued_at", at, problems);
    for name in ["valid_from", "valid_to", "keep_until"] {
        fields.need(name, at, problems);
    }
    let valid_from = fields.day("valid_from", at, problems);
    let valid_to = fields.day("valid_to", at, problems);
    let keep_until = fields.day("keep_until", at, problems);
    let program = fields.required_text("program", at, problems);
    let submitted_by = typed::<Person>(fields, "submitted_by", at, problems);
    let approved_by = typed::<Person>(fields, "approved_by", at, problems);
    fields.need("facts", at, problems);
    let facts = fields.part("facts", at, problems, StatementFacts::at);
    fields.need("pathway", at, problems);
    let pathway = fields.part("pathway", at, problems, |value, at, problems| {
        object(value, at, problems, pathway)
    });
    fields.need("assessment", at, problems);
    let assessment = fields.part("assessment", at, problems, |value, at, problems| {
        object(value, at, problems, |fields, at, problems| {
            let hash = fields.required_text("hash", at, problems);
            let document = typed::<Assessment>(fields, "document", at, problems);
            Some(AssessmentPart {
                hash: hash?,
                document: document?,
            })
        })
    });
    let reasons = optional::<Vec<ReasonGiven>>(fields, "reasons", at, problems);
    let evidence = optional::<Vec<EvidenceFile>>(fields, "evidence", at, problems);
    let data = typed::<Data>(fields, "data", at, problems);
    let figures = typed::<Figures>(fields, "figures", at, problems);
    let words = typed::<Words>(fields, "words", at, problems);
    let hash = fields.required_text("hash", at, problems);
    let signature = typed::<Signature>(fields, "signature", at, problems);
    Some(Statement {
        format: format?,
        example,
        statement_no: statement_no?,
        version: version?,
        supersedes: supersedes.unwrap_or_default(),
        previous,
        status: status?,
        issued_at: issued_at?,
        valid_from: valid_from?,
        valid_to: valid_to?,
        keep_until: keep_until?,
        program: program?,
        submitted_by: submitted_by?,
        approved_by: approved_by?,
        facts: facts?,
        pathway: pathway?,
        assessment: assessment?,
        reasons: reasons.unwrap_or_default(),
        evidence: evidence.unwrap_or_default(),
        data: data?,
        figures: figures?,
        words: words?,
        hash: hash?,
        signature: signature?,
    })
}

fn pathway(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Option<PathwayPart> {
    let id = fields.required_text("id", at, problems);
    let revision = typed::<u32>(fields, "revision", at, problems);
    let hash = fields.required_text("hash", at, problems);
    fields.need("document", at, problems);
    let document = fields.part(
        "document",
        at,
        problems,
        |value, at, problems| match Pathway::from_value(value) {
            Ok(pathway) => Some(pathway),
            Err(found) => {
                for problem in found.into_list() {
                    problems.add(format!("{at}{}", problem.pointer), problem.detail, problem.remedy);
                }
                None
            }
        },
    );
    Some(PathwayPart {
        id: id?,
        revision: revision?,
        hash: hash?,
        document: document?,
    })
}

/// A required part whose shape is that of its type.
fn typed<T: DeserializeOwned>(
    fields: &mut Fields,
    name: &'static str,
    at: &Place,
    problems: &mut Problems,
) -> Option<T> {
    fields.need(name, at, problems);
    optional(fields, name, at, problems)
}

fn optional<T: DeserializeOwned>(
    fields: &mut Fields,
    name: &'static str,
    at: &Place,
    problems: &mut Problems,
) -> Option<T> {
    fields.part(name, at, problems, |value, at, problems| {
        match T::deserialize(value) {
            Ok(read) => Some(read),
            Err(error) => {
                let detail = format!("This is no part of a statement: {error}.");
                problems.add(at, detail, "Ask its issuer for the original.");
                None
            }
        }
    })
}

/// The first thing that stands in the file and would not be written back.
enum Odd {
    Unknown(String),
    Other(String),
}

fn difference(file: &Value, ours: &Value, pointer: String) -> Option<Odd> {
    match (file, ours) {
        (Value::Object(file), Value::Object(ours)) => {
            for (name, value) in file {
                let step = pointer::step(name);
                let here = format!("{pointer}/{step}");
                let Some(written) = ours.get(name) else {
                    return Some(match value.is_null() {
                        true => Odd::Other(here),
                        false => Odd::Unknown(here),
                    });
                };
                if let Some(odd) = difference(value, written, here) {
                    return Some(odd);
                }
            }
            let lost = ours.keys().find(|name| !file.contains_key(*name))?;
            Some(Odd::Other(format!("{pointer}/{lost}")))
        }
        (Value::Array(file), Value::Array(ours)) if file.len() == ours.len() => file
            .iter()
            .zip(ours)
            .enumerate()
            .find_map(|(index, (file, ours))| difference(file, ours, format!("{pointer}/{index}"))),
        (file, ours) => {
            let same = match (canonical::bytes(file), canonical::bytes(ours)) {
                (Ok(file), Ok(ours)) => file == ours,
                _ => false,
            };
            (!same).then_some(Odd::Other(pointer))
        }
    }
}
