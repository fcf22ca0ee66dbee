//! Checks a statement file with nothing but the file: reads it strictly, works every figure out again from what it
//! carries, holds published data against the library of this program, then hash and signature. The first thing that is
//! not as it should be is the answer.

mod answer;
mod compare;
mod published;
mod series;

pub use answer::{Answer, KeyStanding, Verdict};
pub use series::series;

use super::build::{EXAMPLE, stated};
use super::pick;
use super::seal::{ALGORITHM, PublicKey};
use crate::core::documents::canonical;
use crate::core::documents::statement::{Statement, Unread, read, signed_bytes};
use crate::core::domain::Book;
use crate::core::engine::assess::{PROGRAM, hash};
use compare::{Compared, Look, compare};
use serde::Serialize;
use serde_json::Value;

/// Checks the bytes of a file. `known_keys` are keys that the reader trusts; with none, the file's own key is taken and
/// the verdict says so. `library` is the published data of this program.
pub fn verify(bytes: &[u8], known_keys: &[PublicKey], library: &Book) -> Verdict {
    let (statement, value) = match read(bytes) {
        Ok(read) => read,
        Err(unread) => return Verdict::unread(answer_of(unread)),
    };
    let mut verdict = Verdict::about(&statement);
    let key = PublicKey::from_hex(&statement.signature.public_key);
    verdict.key = match key {
        Some(key) if known_keys.contains(&key) => KeyStanding::Known,
        Some(_) if known_keys.is_empty() => KeyStanding::Unvouched,
        _ => KeyStanding::Foreign,
    };
    let (bytes_again, signed) = match (canonical::bytes(&value), signed_bytes(value)) {
        (Ok(again), Ok(signed)) => (again, signed),
        _ => {
            return verdict.because(Answer::NotWritten {
                pointer: String::new(),
            });
        }
    };
    let found_hash = canonical::hash(&signed);
    let whole = found_hash == statement.hash;
    if let Some(answer) = figures(&statement, library, whole, &mut verdict.notes) {
        return verdict.because(answer);
    }
    if !whole {
        return verdict.because(Answer::Hash {
            stated: statement.hash,
            found: found_hash,
        });
    }
    if let Some(answer) = signature(&statement, key, &signed, verdict.key) {
        return verdict.because(answer);
    }
    if bytes != bytes_again && bytes.strip_suffix(b"\n") != Some(&bytes_again[..]) {
        return verdict.because(Answer::Rewritten);
    }
    verdict
}

fn answer_of(unread: Unread) -> Answer {
    match unread {
        Unread::Problems(problems) => Answer::Unreadable(problems),
        Unread::NewerFormat(found) => Answer::NewerFormat { found },
        Unread::UnknownField(pointer) => Answer::UnknownField { pointer },
        Unread::Unwritten(pointer) => Answer::NotWritten { pointer },
    }
}

fn signature(
    statement: &Statement,
    key: Option<PublicKey>,
    signed: &[u8],
    standing: KeyStanding,
) -> Option<Answer> {
    let signature = &statement.signature;
    let Some(key) = key.filter(|key| signature.algorithm == ALGORITHM && key.id() == signature.key_id) else {
        return Some(Answer::BadKey);
    };
    if !key.signed(signed, &signature.value) {
        return Some(Answer::Signature { key_id: key.id() });
    }
    (standing == KeyStanding::Foreign).then(|| Answer::ForeignKey { key_id: key.id() })
}

/// Works everything out again. `whole`: the hash holds, so that dust in the last digits and the words of another version
/// are no matter.
fn figures(statement: &Statement, library: &Book, whole: bool, notes: &mut Vec<String>) -> Option<Answer> {
    if let Some(answer) = published::compare(&statement.data, library, notes) {
        return Some(answer);
    }
    let same_program = statement.program == PROGRAM;
    if !same_program {
        notes.push(format!(
            "The statement was made by version {} of the program, this is {PROGRAM}: figures were compared, wording was not.",
            statement.program
        ));
    }
    let look = Look {
        words: same_program,
        dust: !whole,
    };
    let failed = |text: String| Some(Answer::NotRecomputed { why: text });
    let data = &statement.data;
    let document = &statement.pathway.document;
    match hash(document) {
        Ok(found) if found == statement.pathway.hash => {}
        Ok(found) => {
            return Some(Answer::Pathway {
                stated: statement.pathway.hash.clone(),
                found,
            });
        }
        Err(problems) => return failed(problems_text(&problems)),
    }
    let (book, settings) = match (pick::book(data), pick::settings(data)) {
        (Ok(book), Ok(settings)) => (book, settings),
        (Err(error), _) | (_, Err(error)) => return failed(error),
    };
    let assessment = match pick::again(document, &data.rule_set.id, &book, &settings) {
        Ok(assessment) => assessment,
        Err(super::Refused::Pathway(problems)) => return failed(problems_text(&problems)),
        Err(refused) => return failed(refused.to_string()),
    };
    let stated_assessment = &statement.assessment.document;
    if let Some(answer) = differs("/assessment/document", stated_assessment, &assessment, look) {
        return Some(answer);
    }
    match canonical::bytes(stated_assessment).map(|bytes| canonical::hash(&bytes)) {
        Ok(found) if found == statement.assessment.hash => {}
        Ok(found) => {
            return Some(Answer::Differs {
                pointer: "/assessment/hash".to_owned(),
                stated: statement.assessment.hash.clone(),
                found,
            });
        }
        Err(error) => return failed(error.to_string()),
    }
    let range = statement.figures.uncertainty.range;
    let (figures, words) = match stated(&statement.facts, document, &assessment, data, range) {
        Ok(both) => both,
        Err(refused) => return failed(refused.to_string()),
    };
    differs("/figures", &statement.figures, &figures, look)
        .or_else(|| {
            if look.words {
                differs("/words", &statement.words, &words, look)
            } else {
                None
            }
        })
        .or_else(|| marks(statement))
}

/// What an issued statement says whatever it is about.
fn marks(statement: &Statement) -> Option<Answer> {
    let differs = |pointer: &str, stated: &str, found: &str| {
        (stated != found).then(|| Answer::Differs {
            pointer: pointer.to_owned(),
            stated: stated.to_owned(),
            found: found.to_owned(),
        })
    };
    let example = if statement.pathway.document.example {
        EXAMPLE
    } else {
        ""
    };
    differs(
        "/example",
        statement.example.as_deref().unwrap_or_default(),
        example,
    )
    .or_else(|| differs("/status", &statement.status, "issued"))
    .or_else(|| (statement.submitted_by.id == statement.approved_by.id).then_some(Answer::SamePerson))
}

fn problems_text(problems: &crate::core::documents::Problems) -> String {
    problems
        .list()
        .first()
        .map(ToString::to_string)
        .unwrap_or_default()
}

fn differs<T: Serialize>(at: &str, stated: &T, found: &T, look: Look) -> Option<Answer> {
    let (stated, found) = (
        serde_json::to_value(stated).ok()?,
        serde_json::to_value(found).ok()?,
    );
    match compare(at, &stated, &found, look)? {
        Compared::Value {
            pointer,
            stated,
            found,
        } => Some(Answer::Differs {
            pointer,
            stated: text(&stated),
            found: text(&found),
        }),
        Compared::Order { pointer } => Some(Answer::Reordered { pointer }),
    }
}

fn text(value: &Value) -> String {
    let text = match value {
        Value::Null => "nothing".to_owned(),
        Value::String(text) => format!("\"{text}\""),
        other => String::from_utf8(canonical::bytes(other).unwrap_or_default()).unwrap_or_default(),
    };
    match text.char_indices().nth(200) {
        None => text,
        Some((end, _)) => format!("{}...", text.get(..end).unwrap_or_default()),
    }
}
