//! Whole documents: beginning a pathway, bringing one in, putting another in its place, revisions, downloads.

use super::card::merge;
use super::defaults::ShowDefaults;
use super::handlers::{REFUSED, Seen, count, refused, seen, why};
use super::meeting::{choose, differ, meeting};
use super::new::{NewPathway, ShowDocument, Start};
use super::revision::ShowRevision;
use super::show::ShowPathway;
use super::workings::ShowWorkings;
use super::{Fault, answers, fault_rows, links};
use crate::app::App;
use crate::core::documents::Pathway;
use crate::core::documents::json;
use crate::core::documents::problem::Problem;
use crate::exchange::workbook::{About, write};
use crate::pathways::{self, Expected, PathwayError, What};
use crate::rules::basis;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::extract::{Form, Path, Query};
use crate::web::frame::{Frame, Section};
use crate::web::{Refusal, blocking};
use answers::{csv, file, page, see_other, with_status};
use axum::http::StatusCode;
use axum::response::{IntoResponse, Response};
use serde::Deserialize;
use serde_json::Value;
use std::collections::BTreeMap;

/// What a reader of a workbook should be warned of.
const CAUTIONS: [&str; 2] = [
    "Figures for statutory reporting need verification by an accredited body. A computed saving is not a certificate.",
    "Figures of stills and of CO2 serve accounting only, never the design or running of a plant; local codes and licensed practice come first.",
];

/// The empty form.
pub(super) async fn new(Actor { app, .. }: Actor<CanWrite>) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    page(&NewPathway::of(
        Start::default(),
        Vec::new(),
        String::new(),
        Vec::new(),
        &basis.book,
    ))
}

/// A short chain from a few facts.
pub(super) async fn create(
    Actor { app, .. }: Actor<CanWrite>,
    Form(start): Form<Start>,
) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    let refuse = |start: Start, faults: Vec<Fault>| {
        with_status(
            REFUSED,
            &NewPathway::of(start, faults, String::new(), Vec::new(), &basis.book),
        )
    };
    let document = match start.pathway(&basis.book) {
        Ok(document) => document,
        Err(faults) => return refuse(start, faults),
    };
    match pathways::create(&app, document, Some("Begun with a short chain".to_owned())).await {
        Ok(saved) => Ok(see_other(&links::saved(&saved.id.to_string(), 1))),
        Err(PathwayError::Problems(problems)) => {
            refuse(start, fault_rows(problems.list(), super::new::field))
        }
        Err(error) => Err(error.into()),
    }
}

fn rows(problems: &[Problem]) -> Vec<Fault> {
    fault_rows(problems, |pointer| (None, pointer.to_owned()))
}

/// A document as typed.
#[derive(Debug, Deserialize)]
pub(super) struct Typed {
    document: String,
}

/// A document becomes a pathway.
pub(super) async fn bring_in(
    Actor { app, .. }: Actor<CanWrite>,
    Form(typed): Form<Typed>,
) -> Result<Response, Refusal> {
    let basis = basis(&app).await?;
    let refuse = |document: String, problems: &[Problem]| {
        with_status(
            REFUSED,
            &NewPathway::of(
                Start::default(),
                Vec::new(),
                document,
                rows(problems),
                &basis.book,
            ),
        )
    };
    let document = match Pathway::from_bytes(typed.document.as_bytes()) {
        Ok(document) => document,
        Err(problems) => return refuse(typed.document, problems.list()),
    };
    match pathways::create(&app, document, Some("Brought in as a document".to_owned())).await {
        Ok(saved) => Ok(see_other(&links::saved(&saved.id.to_string(), 1))),
        Err(PathwayError::Problems(problems)) => refuse(typed.document, problems.list()),
        Err(error) => Err(error.into()),
    }
}

fn document_page(seen: &Seen, document: String, why: String, faults: Vec<Fault>) -> ShowDocument {
    let head = seen.head();
    let frame = Frame::new(
        format!("Document of {}", seen.pathway.name),
        Section::Pathways,
        format!("GET /api/v1/pathways/{}", head.id),
    );
    ShowDocument {
        frame: frame.example(seen.pathway.example),
        name: seen.pathway.name.clone(),
        document,
        why,
        document_faults: faults,
        expected: head.revision,
        meeting: None,
        met: Vec::new(),
        differ: String::new(),
        head,
    }
}

fn pretty(pathway: &Pathway) -> String {
    serde_json::to_string_pretty(pathway).unwrap_or_default()
}

/// The document as stored.
pub(super) async fn show(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
) -> Result<Response, Response> {
    let seen = seen(&app, &id, None).await?;
    page(&document_page(
        &seen,
        pretty(&seen.pathway),
        String::new(),
        Vec::new(),
    ))
    .map_err(IntoResponse::into_response)
}

/// Another document in its place.
pub(super) async fn replace(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Form(pairs): Form<Vec<(String, String)>>,
) -> Result<Response, Response> {
    let now = seen(&app, &id, None).await?;
    let fields: BTreeMap<String, String> = pairs.into_iter().collect();
    let text = |name: &str| fields.get(name).cloned().unwrap_or_default();
    let expected = text("expected").parse::<i64>().unwrap_or(0);
    let refuse = |document: String, problems: &[Problem]| -> Response {
        let mut shown = document_page(&now, document, text("why"), rows(problems));
        // Saved on top of what it began from: whoever saved meanwhile is still met.
        shown.expected = count(expected);
        with_status(REFUSED, &shown).unwrap_or_else(IntoResponse::into_response)
    };
    let typed = text("document");
    let mut value = match json::parse(typed.as_bytes()) {
        Ok(value) => value,
        Err(problems) => return Ok(refuse(typed, problems.list())),
    };
    let unmet = choose(&mut value, &fields);
    let document = match Pathway::from_value(&value) {
        Ok(document) => document,
        Err(problems) => return Ok(refuse(typed, problems.list())),
    };
    if !unmet.is_empty() {
        return Ok(refuse(pretty(&document), unmet.list()));
    }
    let why = why(&text("why"));
    let saved = pathways::replace(
        &app,
        now.stored.id,
        document.clone(),
        Expected::Number(expected),
        why,
    );
    match saved.await {
        Ok(saved) => Ok(see_other(&links::saved(&id, saved.revision))),
        Err(PathwayError::Problems(problems)) => Ok(refuse(pretty(&document), problems.list())),
        Err(PathwayError::Conflict { .. }) => met(&app, &id, expected, &document, text("why")).await,
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

/// Somebody saved while the document was being changed: both versions joined, each field to choose.
async fn met(app: &App, id: &str, expected: i64, mine: &Pathway, why: String) -> Result<Response, Response> {
    let now = seen(app, id, None).await?;
    let base = if (1..=now.stored.current_revision).contains(&expected) {
        json_of(&seen(app, id, Some(expected)).await?.pathway)
    } else {
        Value::Null
    };
    let (joined, met) = merge::join(&base, &json_of(&now.pathway), &json_of(mine));
    // Two halves that hold may not hold together; then the joined text is shown all the same.
    let text = Pathway::from_value(&joined).map_or_else(
        |_| serde_json::to_string_pretty(&joined).unwrap_or_default(),
        |joined| pretty(&joined),
    );
    let mut shown = document_page(&now, text, why, Vec::new());
    shown.meeting = Some(meeting(app, now.stored.id, expected, now.stored.revision).await);
    shown.differ = differ(&met);
    shown.met = met;
    with_status(StatusCode::PRECONDITION_FAILED, &shown).map_err(IntoResponse::into_response)
}

fn json_of(pathway: &Pathway) -> Value {
    serde_json::to_value(pathway).unwrap_or(Value::Null)
}

/// What a revision changed.
pub(super) async fn revision(
    Actor { app, .. }: Actor<CanRead>,
    Path((id, number)): Path<(String, i64)>,
) -> Result<Response, Response> {
    let one = seen(&app, &id, Some(number)).await?;
    let before = if number > 1 {
        Some(seen(&app, &id, Some(number - 1)).await?)
    } else {
        None
    };
    let changes = match pathways::changes(&app, one.stored.id, number).await {
        Ok(changes) => changes,
        Err(error) => return Err(refused(&app, &id, error).await),
    };
    // The first revision adds everything: that is no change to read.
    let changes = if number > 1 { changes } else { Vec::new() };
    let why = one.stored.reason.clone().unwrap_or_default();
    let shown = ShowRevision::of(
        one.head(),
        (count(one.stored.current_revision), why),
        &one.pathway,
        (before.as_ref().and_then(Seen::found), one.found()),
        &changes,
        &one.book,
    );
    page(&shown).map_err(IntoResponse::into_response)
}

/// Which revision is current, to the person who asks.
#[derive(Debug, Deserialize)]
pub(super) struct Restore {
    expected: i64,
}

/// The document of an earlier revision becomes the next one.
pub(super) async fn restore(
    Actor { app, .. }: Actor<CanWrite>,
    Path((id, number)): Path<(String, i64)>,
    Form(form): Form<Restore>,
) -> Result<Response, Response> {
    let old = seen(&app, &id, Some(number)).await?;
    let why = Some(format!("Back to revision {number}"));
    match pathways::replace(
        &app,
        old.stored.id,
        old.pathway,
        Expected::Number(form.expected),
        why,
    )
    .await
    {
        Ok(saved) => Ok(see_other(&links::saved(&id, saved.revision))),
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

/// Which revision to download.
#[derive(Debug, Default, Deserialize)]
#[serde(default)]
pub(super) struct Which {
    revision: Option<i64>,
}

/// The assessment as a workbook whose formulas lead from the amounts to the net.
async fn workbook(seen: Seen, base: &str) -> Result<Response, Response> {
    let made = blocking::run(move || {
        let Ok(found) = &seen.outcome else {
            return Ok(Vec::new());
        };
        let about = About {
            made_at: seen.stored.saved_at,
            issuer: None,
            statement: None,
            cautions: &CAUTIONS.map(str::to_owned),
        };
        write(&seen.pathway, found, &seen.book, &about)
    })
    .await
    .map_err(IntoResponse::into_response)?;
    match made {
        Ok(bytes) => Ok(file(
            &format!("{base}.xlsx"),
            "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
            bytes,
        )),
        Err(error) => {
            tracing::warn!(%error, "a workbook could not be made");
            let detail = format!("There is no workbook of it: {error}.");
            Err(Refusal::of(StatusCode::CONFLICT).detail(detail).into_response())
        }
    }
}

/// Documents and tables as files.
pub(super) async fn download(
    Actor { app, .. }: Actor<CanRead>,
    Path((id, name)): Path<(String, String)>,
    Query(which): Query<Which>,
) -> Result<Response, Response> {
    const KNOWN: [&str; 9] = [
        "document.json",
        "assessment.json",
        "stages.csv",
        "terms.csv",
        "carbon.csv",
        "checks.csv",
        "workings.csv",
        "defaults.csv",
        "workbook.xlsx",
    ];
    if !KNOWN.contains(&name.as_str()) {
        return Err(Refusal::of(StatusCode::NOT_FOUND).into_response());
    }
    let seen = seen(&app, &id, which.revision).await?;
    let base = format!(
        "{}-revision-{}",
        super::card::build::free_key(&seen.pathway.name, "pathway", &[]),
        seen.stored.revision
    );
    if name == "document.json" {
        return Ok(file(
            &format!("{base}.json"),
            "application/json",
            pretty(&seen.pathway),
        ));
    }
    let Ok(found) = &seen.outcome else {
        return Err(Refusal::from(PathwayError::NotFound(What::Revision))
            .detail("The pathway cannot be worked out, so there is no such table.")
            .into_response());
    };
    if name == "assessment.json" {
        let text = serde_json::to_string_pretty(found).unwrap_or_default();
        return Ok(file(&format!("{base}-assessment.json"), "application/json", text));
    }
    if name == "workbook.xlsx" {
        return workbook(seen, &base).await;
    }
    let table = if name == "workings.csv" {
        ShowWorkings::of(seen.head(), &seen.pathway, found, &seen.book, false).table()
    } else if name == "defaults.csv" {
        let table = super::defaults_handlers::table_of(&app, &id, &seen).await?;
        ShowDefaults::of(seen.head(), &seen.pathway, &table, &seen.book).table()
    } else {
        let shown = ShowPathway::of(
            seen.head(),
            &seen.pathway,
            Ok(found),
            &seen.book,
            Vec::new(),
            false,
        );
        let Some(result) = shown.result else {
            return Err(Refusal::of(StatusCode::NOT_FOUND).into_response());
        };
        match name.as_str() {
            "stages.csv" => result.ladder.table(),
            "terms.csv" => result.terms_table(),
            "carbon.csv" => result.carbon.table(),
            _ => result.checks_table(),
        }
    };
    Ok(csv(&format!("{base}-{}", name.trim_end_matches(".csv")), &table))
}
