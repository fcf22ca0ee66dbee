//! The page of one piece of evidence: the file, its hash, who attached it, and every figure it backs.

use crate::evidence::link::{day_words, size_words};
use crate::evidence::{Record, Use};
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;

/// The page of one piece of evidence.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "evidence/show.html")]
pub struct ShowEvidence {
    /// Round the page.
    pub frame: Frame,
    /// Id.
    pub id: String,
    /// Name of the file.
    pub file_name: String,
    /// Address of the file.
    pub href: String,
    /// Size in words.
    pub size: String,
    /// Media type as declared.
    pub media_type: String,
    /// The whole hash, without its kind.
    pub hash: String,
    /// Who attached it.
    pub by: String,
    /// The day, in words.
    pub day: String,
    /// What it is.
    pub note: String,
    /// What it backs.
    pub uses: Vec<UseRow>,
}

/// A figure that it backs.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UseRow {
    /// Name of the pathway.
    pub pathway: String,
    /// Its address.
    pub href: String,
    /// Stage and input, in words.
    pub place: String,
    /// Where that stands.
    pub at: String,
    /// The revision, and whether it is the current one.
    pub revision: i64,
    /// What is to be said of it.
    pub state: &'static str,
}

impl ShowEvidence {
    /// The page of a record.
    pub fn of(record: &Record, uses: &[Use]) -> ShowEvidence {
        let address = links::evidence(&record.id);
        ShowEvidence {
            frame: Frame::new(
                format!("{}, {}", record.id, record.file_name),
                Section::Evidence,
                format!("GET /api/v1{address}"),
            )
            .example(record.example),
            href: format!("{address}/file"),
            id: record.id.clone(),
            file_name: record.file_name.clone(),
            size: size_words(record.size),
            media_type: record.media_type.clone(),
            hash: record.hash.trim_start_matches("sha256:").to_owned(),
            by: record.attached_by.clone(),
            day: day_words(record),
            note: record.note.clone().unwrap_or_default(),
            uses: uses.iter().map(UseRow::of).collect(),
        }
    }
}

impl UseRow {
    fn of(found: &Use) -> UseRow {
        let id = found.pathway.to_string();
        let part = match &found.input {
            Some(key) => found.input_label.as_deref().unwrap_or(key),
            None if found.pointer.contains("/meters/") => "a meter",
            None if found.pointer.starts_with("/audits/") => "an audit",
            None => "as the supplier states",
        };
        let place = match (&found.stage_name, &found.stage) {
            (Some(stage), _) | (None, Some(stage)) => format!("{stage}, {part}"),
            (None, None) => part.to_owned(),
        };
        let href = links::pathway(&id);
        let at = match (&found.stage, &found.input) {
            // An older revision has no card of its own; its page tells what it changed.
            _ if !found.current => format!("{href}/revisions/{}", found.revision),
            (Some(stage), Some(input)) => format!("{href}/stages/{}#input-{input}", links::segment(stage)),
            (Some(stage), None) => format!("{href}/stages/{}", links::segment(stage)),
            (None, _) => href.clone(),
        };
        UseRow {
            pathway: found.pathway_name.clone(),
            href,
            place,
            at,
            revision: found.revision,
            state: match (found.current, found.archived) {
                (_, true) => "archived",
                (true, false) => "",
                (false, false) => "no longer",
            },
        }
    }
}
