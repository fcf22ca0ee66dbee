//! The statement on paper: a tagged PDF/A-2a that readers aloud can follow (PDF/UA-1), the same bytes every time.
//!
//! A [`Sheet`] holds ready texts; the template `templates/print/statement.typ` reads them as JSON, so nothing that
//! people typed is ever read as markup. Setting takes some tens of milliseconds: call it off the request threads.

mod bounds;
mod fonts;
mod of_statement;
mod pictures;
mod sheet;
mod text;
mod world;

pub use of_statement::Beside;
pub use pictures::code_text;
pub use sheet::{
    Answer, Chapter, Check, Column, ColumnKind, Day, Fact, Picture, Sheet, Signature, Step, Table, TermRow,
    Terms, Working,
};

use serde_json::{Value, json};
use typst::diag::SourceDiagnostic;
use typst::foundations::{Bytes, Smart};
use typst_layout::PagedDocument;
use typst_pdf::{PdfOptions, PdfStandard, PdfStandards};

/// How many documents back the library remembers what it has worked out. Without an end its memory grows by megabytes
/// a document.
const REMEMBERED: usize = 5;

/// Why there is no paper.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PdfError {
    /// The sheet is not JSON.
    #[error("the sheet cannot be written as JSON: {0}")]
    Sheet(String),
    /// The day is not in the calendar.
    #[error("{0}-{1}-{2} is not a day of the calendar")]
    Day(u16, u8, u8),
    /// The address to check at does not fit into a QR code.
    #[error("the address and hash do not fit into a QR code: {0}; give a shorter public address")]
    Code(String),
    /// The typesetting library could not set the pages.
    #[error("the pages cannot be set: {0}")]
    Pages(String),
    /// The file would not keep to the standards.
    #[error("the file cannot be written to the standards PDF/A-2a and PDF/UA-1: {0}")]
    Standard(String),
}

/// Writes `sheet` as PDF. The same sheet gives the same bytes, on every machine and however many threads there are.
///
/// Characters that the faces lack are printed as a hollow square, and the paper says so. Very long tables and annexes
/// end early and say so too: the statement file is the record, the paper its portrait.
///
/// # Errors
/// [`PdfError`]: a day that is none, an address too long for the QR code; the others are faults of this program.
pub fn write(sheet: &Sheet) -> Result<Vec<u8>, PdfError> {
    let Day { year, month, day } = sheet.day;
    if typst::foundations::Datetime::from_ymd(i32::from(year), month, day).is_none() {
        return Err(PdfError::Day(year, month, day));
    }
    let desk = world::Desk {
        data: Bytes::new(data(sheet)?),
        ladder: Bytes::from_string(sheet.ladder.as_ref().map(pictures::drawing).unwrap_or_default()),
        code: Bytes::from_string(pictures::code(&code_text(&sheet.check, &sheet.hash))?),
        day: sheet.day,
    };
    let set = typst::compile::<PagedDocument>(&desk).output;
    // before looking at the result, so that refusals cannot fill the memory either
    typst::comemo::evict(REMEMBERED);
    let document = set.map_err(|problems| PdfError::Pages(list(&problems)))?;
    let written = typst_pdf::pdf(&document, &options(sheet)?);
    written.map_err(|problems| PdfError::Standard(list(&problems)))
}

/// What the template reads.
fn data(sheet: &Sheet) -> Result<Vec<u8>, PdfError> {
    let fault = |problem: serde_json::Error| PdfError::Sheet(problem.to_string());
    let mut value = serde_json::to_value(bounds::bounded(sheet.clone())).map_err(fault)?;
    // The drawing is a file of its own; without one there is no picture to describe.
    let drawn = sheet.ladder.as_ref().filter(|picture| !picture.svg.is_empty());
    value["ladder"] = match drawn {
        Some(picture) => json!({ "alt": picture.alt }),
        None => Value::Null,
    };
    let lacking = text::clean_all(&mut value, &["hash"]);
    if let Value::Object(fields) = &mut value {
        fields.insert("lacking".to_owned(), json!(lacking));
        fields.insert("code".to_owned(), json!(code_text(&sheet.check, &sheet.hash)));
    }
    serde_json::to_vec(&value).map_err(fault)
}

fn options(sheet: &Sheet) -> Result<PdfOptions, PdfError> {
    let standards = PdfStandards::new(&[PdfStandard::A_2a, PdfStandard::Ua_1])
        .map_err(|problem| PdfError::Standard(problem.message().to_string()))?;
    Ok(PdfOptions {
        ident: Smart::Custom(format!("{} {} {}", sheet.number, sheet.version, sheet.hash)),
        creator: Smart::Custom(Some(format!("Wheelwort {}", sheet.program))),
        standards,
        ..PdfOptions::default()
    })
}

fn list(problems: &[SourceDiagnostic]) -> String {
    let messages: Vec<&str> = problems.iter().map(|problem| problem.message.as_str()).collect();
    messages.join("; ")
}
