//! The page of all evidence: a form to attach a file, and the records, newest first.

use crate::evidence::{EvidenceLink, RecordPage};
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;

/// The page of all evidence.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "evidence/list.html")]
pub struct ListEvidence {
    /// Round the page.
    pub frame: Frame,
    /// What was typed into the form and what was wrong with it.
    pub asked: Asked,
    /// The records.
    pub rows: Vec<Row>,
    /// Address of the next page.
    pub next: Option<String>,
}

/// What was typed into the form.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Asked {
    /// The wished id.
    pub id: String,
    /// The note.
    pub note: String,
    /// Why nothing was attached.
    pub wrong: Vec<String>,
}

/// One record in the list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Row {
    /// The record.
    pub link: EvidenceLink,
    /// What it is.
    pub note: String,
    /// True for demonstration data.
    pub example: bool,
    /// How many pathways name it now.
    pub pathways: i64,
}

impl ListEvidence {
    /// A page of the list.
    pub fn of(page: &RecordPage, asked: Asked) -> ListEvidence {
        let rows: Vec<Row> = page
            .records
            .iter()
            .map(|record| Row {
                link: EvidenceLink::of(record),
                note: record.note.clone().unwrap_or_default(),
                example: record.example,
                pathways: record.pathways,
            })
            .collect();
        let example = rows.iter().any(|row| row.example);
        ListEvidence {
            frame: Frame::new("Evidence", Section::Evidence, "GET /api/v1/evidence").partly_example(example),
            asked,
            rows,
            next: page
                .next
                .as_ref()
                .map(|after| format!("/evidence?after={}", links::segment(after))),
        }
    }
}
