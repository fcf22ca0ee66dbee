//! Evidence on the pages of a pathway: what backs a figure, as links; files that come with the card of a stage.

use super::answers::with_status;
use super::card::Form;
use super::stage::{Entry, ShowStage};
use crate::app::App;
use crate::core::documents::Problems;
use crate::evidence::{self, EvidenceLink, Record, attach, receive};
use crate::web::Refusal;
use crate::web::multipart::{FORM_TOKEN, Multipart, Posted};
use crate::web::problem::shown;
use axum::http::StatusCode;
use axum::response::{IntoResponse, Response};
use std::collections::BTreeMap;

/// End of the names of fields that take a file: below the field of the ids that the file adds one to.
const FILE: &str = "/file";
/// End of the names of fields that hold ids of evidence.
const IDS: &str = "/evidence";
/// Ids that a field offers.
const OFFERED: u32 = 200;

/// A posted card: what was typed, with the ids of the files that came with it, and what is wrong with those.
pub(super) struct Taken {
    pub(super) form: Form,
    /// The ids that files were given, in order.
    pub(super) attached: Vec<String>,
    pub(super) problems: Problems,
}

/// Reads a posted card and keeps the files that come with it. Each becomes evidence at once, whatever becomes of the card:
/// a browser cannot send it again by itself.
pub(super) async fn taken(app: &App, posted: Posted) -> Result<Taken, Refusal> {
    let mut parts = match posted {
        Posted::Fields(mut fields) => {
            // Without its file such a field says nothing: scripts send its name alone.
            fields.retain(|(name, _)| !takes_file(name));
            return Ok(Taken {
                form: Form::of(fields),
                attached: Vec::new(),
                problems: Problems::default(),
            });
        }
        Posted::Parts(parts) => parts,
    };
    let (mut fields, mut files, mut problems) = (Vec::new(), Vec::new(), Problems::default());
    while let Some(read) = next(app, &mut parts).await? {
        match read {
            Read::Field(name, text) if name != FORM_TOKEN && !takes_file(&name) => fields.push((name, text)),
            Read::File(ids, id) => files.push((ids, id)),
            Read::Refused(ids, refusal) => {
                for error in refusal.errors() {
                    problems.add(&ids, error.detail.clone(), error.remedy.clone());
                }
            }
            Read::Field(..) | Read::Nothing => {}
        }
    }
    let mut form = Form::of(fields);
    let mut attached = Vec::new();
    for (ids, id) in files {
        let text = match form.text(&ids) {
            "" => id.clone(),
            there => format!("{there}, {id}"),
        };
        form.set(ids, text);
        attached.push(id);
    }
    Ok(Taken {
        form,
        attached,
        problems,
    })
}

fn takes_file(name: &str) -> bool {
    name.strip_suffix(FILE).is_some_and(|ids| ids.ends_with(IDS))
}

/// One part of a posted card.
enum Read {
    /// A field of text: name and text.
    Field(String, String),
    /// A file, kept as evidence: the field of ids that it adds to, its id.
    File(String, String),
    /// A file that could not be kept, and why.
    Refused(String, Refusal),
    /// A field of files that was left alone.
    Nothing,
}

async fn next(app: &App, parts: &mut Multipart) -> Result<Option<Read>, Refusal> {
    let Some(part) = parts.next().await? else {
        return Ok(None);
    };
    let name = part.name().to_owned();
    if part.file_name().is_none() {
        return Ok(Some(Read::Field(name, part.text().await?)));
    }
    let ids = name.strip_suffix(FILE).filter(|ids| ids.ends_with(IDS));
    let Some(ids) = ids.map(str::to_owned) else {
        let words = format!("The card takes no file as \"{}\".", shown(&name));
        return Err(Refusal::bad_request(words));
    };
    let kept = match receive::file(app, part).await {
        Ok(None) => return Ok(Some(Read::Nothing)),
        Ok(Some((arrived, naming))) => attach(app, arrived, naming).await.map_err(Refusal::from),
        Err(refusal) => Err(refusal),
    };
    match kept {
        Ok(attached) => Ok(Some(Read::File(ids, attached.record.id))),
        Err(refusal)
            if [StatusCode::PAYLOAD_TOO_LARGE, StatusCode::UNPROCESSABLE_ENTITY]
                .contains(&refusal.status()) =>
        {
            Ok(Some(Read::Refused(ids, refusal)))
        }
        Err(refusal) => Err(refusal),
    }
}

/// Shows a card with the evidence of its inputs.
pub(super) async fn show_card(
    app: &App,
    status: StatusCode,
    mut card: ShowStage,
) -> Result<Response, Response> {
    let found = async {
        let named: Vec<String> = card.every_entry_mut().flat_map(|entry| ids_in(entry)).collect();
        let records = evidence::among(app, named.iter().map(String::as_str)).await?;
        let newest = evidence::list(app, None, OFFERED).await?;
        Ok((records, newest.records))
    };
    let (records, newest) = found
        .await
        .map_err(|error: evidence::EvidenceError| Refusal::from(error).into_response())?;
    card.put_evidence(&records, &newest);
    with_status(status, &card).map_err(IntoResponse::into_response)
}

/// The ids in the field of an entry that holds them, as stored or as typed.
fn ids_in(entry: &Entry) -> Vec<String> {
    let field = entry
        .rare
        .iter()
        .chain(&entry.below)
        .find(|field| field.name.ends_with(IDS));
    field.map_or_else(Vec::new, |field| {
        let ids = field.text.split([',', ' ']).map(str::trim);
        ids.filter(|id| !id.is_empty()).map(str::to_owned).collect()
    })
}

impl ShowStage {
    /// Puts what backs each input beside it, and offers what there is: the newest records.
    pub fn put_evidence(&mut self, records: &BTreeMap<String, Record>, newest: &[Record]) {
        self.evidence = newest
            .iter()
            .map(|record| (record.id.clone(), record.file_name.clone()))
            .collect();
        for entry in self.every_entry_mut() {
            entry.backed = ids_in(entry)
                .iter()
                .map(|id| match records.get(id) {
                    Some(record) => EvidenceLink::of(record),
                    None => EvidenceLink::unknown(id),
                })
                .collect();
            let fields = entry.rare.iter().chain(&entry.below);
            let field = fields.map(|field| &field.name).find(|name| name.ends_with(IDS));
            entry.file = field.map(|name| format!("{name}{FILE}")).unwrap_or_default();
            // Whoever is told to attach a document finds the way to do so open.
            let here = entry.rare.iter().flat_map(|field| &field.findings);
            entry.rare_open |= entry
                .findings
                .iter()
                .chain(here)
                .any(|finding| finding.id == "E-01");
        }
    }
}
