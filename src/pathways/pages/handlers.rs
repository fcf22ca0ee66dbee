//! Routes of the pages. A handler fetches, calls one use case, and hands the result to a page; words live in the pages.

use super::home::{Asked, Home};
use super::show::ShowPathway;
use super::workings::ShowWorkings;
use super::{
    Head, Notice, RevisionRow, answers, blend, compare, defaults_handlers, document_handlers,
    factor_handlers, facts, kept, links, notices, stage_handlers,
};
use crate::app::{App, SharedBook};
use crate::clock::day_of;
use crate::core::checks::reasons::Reason;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::nearest;
use crate::core::documents::{Assessment, Pathway};
use crate::core::domain::rule_set::BiogenicCo2;
use crate::pathways::{
    self, Expected, Line, PathwayError, Question, ReasonsDocument, Revision, Sort, Stored, What,
};
use crate::rules::basis;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::extract::{Form, Path, Query};
use answers::{csv, page, see_other};
use axum::Router;
use axum::extract::RawQuery;
use axum::http::StatusCode;
use axum::response::{IntoResponse, Response};
use axum::routing::{get, post};
use serde::Deserialize;
use uuid::Uuid;

/// The routes of the pages of pathways.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/", get(home))
        .route(
            "/pathways",
            get(|| async { see_other("/") }).post(document_handlers::create),
        )
        .route("/pathways.csv", get(home_csv))
        .route("/pathways/new", get(document_handlers::new))
        .route("/pathways/document", post(document_handlers::bring_in))
        .route("/pathways/{id}", get(show))
        .route("/pathways/{id}/workings", get(workings))
        .route("/pathways/{id}/facts", get(facts::show).post(facts::save))
        .route("/pathways/{id}/copy", post(facts::copy))
        .route("/pathways/{id}/archive", post(archive))
        .route("/pathways/{id}/reasons", post(reason))
        .route(
            "/pathways/{id}/defaults",
            get(defaults_handlers::show).post(defaults_handlers::choose),
        )
        .route(
            "/pathways/{id}/document",
            get(document_handlers::show).post(document_handlers::replace),
        )
        .route("/pathways/{id}/new-stage", get(stage_handlers::begin))
        .route(
            "/pathways/{id}/stages/{key}",
            get(stage_handlers::show).post(stage_handlers::save),
        )
        .route("/pathways/{id}/stages/{key}/remove", post(stage_handlers::remove))
        .route(
            "/pathways/{id}/revisions/{number}",
            get(document_handlers::revision),
        )
        .route(
            "/pathways/{id}/revisions/{number}/restore",
            post(document_handlers::restore),
        )
        .route("/pathways/{id}/{file}", get(document_handlers::download))
        .route("/factors/{edition}/{row}", get(factor_handlers::show))
        .route("/calculators/blend", get(blend::show_blend))
        .route("/calculators/blend.csv", get(blend::file))
        .route("/compare", get(compare_page))
        .route("/compare.csv", get(compare_csv))
}

/// A pathway as a page sees it: its document and what came of it.
pub(super) struct Seen {
    pub(super) stored: Stored,
    pub(super) pathway: Pathway,
    pub(super) outcome: Result<Assessment, Problems>,
    /// Published data with the organisation's own rule sets.
    pub(super) book: SharedBook,
}

impl Seen {
    pub(super) fn head(&self) -> Head {
        Head {
            id: self.stored.id.to_string(),
            revision: count(self.stored.revision),
            saved: crate::web::filters::short_day(day_of(self.stored.saved_at)),
            archived: self.stored.archived_at.is_some(),
        }
    }

    pub(super) fn found(&self) -> Option<&Assessment> {
        self.outcome.as_ref().ok()
    }
}

/// A number of a record as pages count.
pub(super) fn count(number: i64) -> u64 {
    u64::try_from(number).unwrap_or(0)
}

/// Reads a pathway, its current revision or another, and its assessment.
pub(super) async fn see(app: &App, id: Uuid, revision: Option<i64>) -> Result<Seen, PathwayError> {
    let stored = match revision {
        Some(number) => pathways::revision(app, id, number).await?,
        None => pathways::read(app, id).await?,
    };
    let pathway = Pathway::from_bytes(&stored.document)?;
    let book = basis(app).await?.book.clone();
    let outcome = match pathways::assessment(app, id, Some(stored.revision), None).await {
        Ok(made) => match serde_json::from_slice(&made.bytes) {
            Ok(assessment) => Ok(assessment),
            Err(error) => return Err(PathwayError::defect("read an assessment", error)),
        },
        Err(PathwayError::Problems(problems)) => Err(problems),
        Err(error) => return Err(error),
    };
    Ok(Seen {
        stored,
        pathway,
        outcome,
        book,
    })
}

/// The pathway of an address, its current revision or another; or the page that says why not.
pub(super) async fn seen(app: &App, id: &str, revision: Option<i64>) -> Result<Seen, Response> {
    let uuid = id_of(app, id).await?;
    match see(app, uuid, revision).await {
        Ok(seen) => Ok(seen),
        Err(error) => Err(refused(app, id, error).await),
    }
}

/// The reason of a save as somebody typed it; none where nothing was.
pub(super) fn why(typed: &str) -> Option<String> {
    let typed = typed.trim();
    (!typed.is_empty()).then(|| typed.chars().take(MOST_WHY).collect())
}

/// Letters of a reason that are kept.
const MOST_WHY: usize = 1_000;

/// The id of an address, or the page that says what is nearest to it.
pub(super) async fn id_of(app: &App, text: &str) -> Result<Uuid, Response> {
    match text.parse::<Uuid>() {
        Ok(id) if text.len() == 36 => Ok(id),
        _ => Err(not_here(app, text).await),
    }
}

/// A refusal of a use case; a pathway that is not there gets the page with the nearest name.
pub(super) async fn refused(app: &App, asked: &str, error: PathwayError) -> Response {
    match error {
        PathwayError::NotFound(What::Pathway) => not_here(app, asked).await,
        other => Refusal::from(other).into_response(),
    }
}

async fn not_here(app: &App, asked: &str) -> Response {
    let lines = lines(app, false).await.unwrap_or_default();
    let slugs: Vec<(String, &Line)> = lines.iter().map(|line| (slug(&line.name), line)).collect();
    let wanted = slug(asked);
    let near = nearest(&wanted, slugs.iter().map(|(slug, _)| slug.as_str()))
        .and_then(|near| slugs.iter().find(|(slug, _)| slug == near));
    let near = near.map(|(_, line)| (links::pathway(&line.id.to_string()), line.name.as_str()));
    answers::no_pathway(asked, near)
}

fn slug(name: &str) -> String {
    super::card::build::free_key(name, "", &[])
}

/// Most lines that pages sort and filter.
const MOST_LINES: usize = 1_000;

pub(super) async fn lines(app: &App, archived: bool) -> Result<Vec<Line>, PathwayError> {
    let mut out = Vec::new();
    let mut question = Question {
        archived,
        limit: Some(200),
        sort: Sort::Updated,
        ..Question::default()
    };
    while out.len() < MOST_LINES {
        let page = pathways::list(app, &question).await?;
        out.extend(page.lines);
        match page.next {
            Some(next) => question.after = Some(next),
            None => break,
        }
    }
    Ok(out)
}

/// What the list is asked for.
#[derive(Debug, Default, Deserialize)]
#[serde(default)]
struct HomeQuery {
    q: String,
    feedstock: String,
    state: String,
    sort: String,
    examples: Option<u64>,
}

async fn home_view(app: &App, query: HomeQuery) -> Result<Home, Refusal> {
    let mut all = lines(app, false).await?;
    all.extend(lines(app, true).await?);
    let asked = Asked {
        q: query.q,
        feedstock: query.feedstock,
        state: query.state,
        sort: query.sort,
    };
    let basis = basis(app).await?;
    let mut home = Home::of(&all, &basis.book, asked);
    home.notice = query.examples.map(notices::examples);
    Ok(home)
}

async fn home(
    Actor { app, .. }: Actor<CanRead>,
    Query(query): Query<HomeQuery>,
) -> Result<Response, Refusal> {
    page(&home_view(&app, query).await?)
}

async fn home_csv(
    Actor { app, .. }: Actor<CanRead>,
    Query(query): Query<HomeQuery>,
) -> Result<Response, Refusal> {
    Ok(csv("pathways", &home_view(&app, query).await?.table()))
}

/// How a pathway is to be shown.
#[derive(Debug, Default, Deserialize)]
#[serde(default)]
pub(super) struct ShowQuery {
    pub(super) carbon: String,
    pub(super) saved: Option<i64>,
    pub(super) open: String,
}

async fn show(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    Query(query): Query<ShowQuery>,
) -> Result<Response, Response> {
    let uuid = id_of(&app, &id).await?;
    // What a save did is told once; every other page of a revision is the same until something changes.
    if query.saved.is_some() {
        let shown = made(&app, uuid, &id, &query).await?;
        return page(&shown).map_err(IntoResponse::into_response);
    }
    let view = match query.carbon.as_str() {
        "in-line" => "show in line",
        "apart" => "show apart",
        _ => "show",
    };
    kept::page(&app, uuid, view, made(&app, uuid, &id, &query)).await
}

async fn made(app: &App, uuid: Uuid, id: &str, query: &ShowQuery) -> Result<ShowPathway, Response> {
    let seen = match see(app, uuid, None).await {
        Ok(seen) => seen,
        Err(error) => return Err(refused(app, id, error).await),
    };
    let rows = match pathways::revisions(app, uuid).await {
        Ok(rows) => rows,
        Err(error) => return Err(refused(app, id, error).await),
    };
    // The rule set says where the crop's carbon stands; the address can ask for the other.
    let in_line = match query.carbon.as_str() {
        "in-line" => true,
        "apart" => false,
        _ => seen
            .found()
            .is_some_and(|found| found.carbon.presentation == BiogenicCo2::InLine),
    };
    let head = seen.head();
    let rows = revision_rows(&head, &rows);
    let mut shown = ShowPathway::of(
        head,
        &seen.pathway,
        seen.outcome.as_ref(),
        &seen.book,
        rows,
        in_line,
    );
    shown.notice = saved_notice(app, &seen, query.saved).await;
    Ok(shown)
}

/// Told after a save, by the number in the address: what the current revision did to the net.
pub(super) async fn saved_notice(app: &App, seen: &Seen, saved: Option<i64>) -> Option<Notice> {
    let number = saved.filter(|number| *number == seen.stored.revision)?;
    let before = if number > 1 {
        see(app, seen.stored.id, Some(number - 1)).await.ok()
    } else {
        None
    };
    Some(notices::saved(
        &seen.head(),
        seen.found(),
        before.as_ref().and_then(Seen::found),
    ))
}

fn revision_rows(head: &Head, rows: &[Revision]) -> Vec<RevisionRow> {
    let net = |number: i64| {
        let row = rows.iter().find(|row| row.number == number)?;
        row.assessment.as_ref().map(|summary| summary.net_g_co2e_per_mj)
    };
    let mut out: Vec<RevisionRow> = rows
        .iter()
        .map(|row| RevisionRow {
            number: count(row.number),
            href: format!("{}/revisions/{}", head.href(), row.number),
            saved: crate::web::filters::short_day(day_of(row.saved_at)),
            why: row.reason.clone().unwrap_or_default(),
            net: net(row.number),
            change: net(row.number)
                .zip(net(row.number - 1))
                .map(|(now, before)| now - before),
        })
        .collect();
    out.sort_by_key(|row| std::cmp::Reverse(row.number));
    out
}

async fn workings(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
    Query(query): Query<ShowQuery>,
) -> Result<Response, Response> {
    let uuid = id_of(&app, &id).await?;
    let open = query.open == "all";
    let view = if open { "workings open" } else { "workings" };
    kept::page(&app, uuid, view, async {
        let seen = match see(&app, uuid, None).await {
            Ok(seen) => seen,
            Err(error) => return Err(refused(&app, &id, error).await),
        };
        match &seen.outcome {
            Ok(found) => Ok(ShowWorkings::of(
                seen.head(),
                &seen.pathway,
                found,
                &seen.book,
                open,
            )),
            Err(_) => Err(see_other(&links::pathway(&id))),
        }
    })
    .await
}

/// What is to become of a pathway.
#[derive(Debug, Deserialize)]
struct Archive {
    expected: i64,
    archived: String,
}

async fn archive(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Form(form): Form<Archive>,
) -> Result<Response, Response> {
    let uuid = id_of(&app, &id).await?;
    let expected = Expected::Number(form.expected);
    let done = if form.archived == "yes" {
        pathways::archive(&app, uuid, expected).await
    } else {
        pathways::restore(&app, uuid, expected).await
    };
    match done {
        Ok(()) => Ok(see_other(&links::pathway(&id))),
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

#[derive(Deserialize)]
struct ReasonForm {
    id: String,
    #[serde(default)]
    stage: String,
    #[serde(default)]
    field: String,
    #[serde(default)]
    text: String,
}

/// Keeps the written reason for one warning, in place of an earlier one; an empty text takes it out.
async fn reason(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Form(form): Form<ReasonForm>,
) -> Result<Response, Response> {
    let uuid = id_of(&app, &id).await?;
    let kept = match pathways::reasons(&app, uuid).await {
        Ok(kept) => kept,
        Err(error) => return Err(refused(&app, &id, error).await),
    };
    let same =
        |reason: &Reason| reason.id == form.id && reason.stage == form.stage && reason.field == form.field;
    let mut list: Vec<Reason> = kept.reasons.into_iter().filter(|reason| !same(reason)).collect();
    let text = form.text.trim();
    if !text.is_empty() {
        list.push(Reason {
            id: form.id.clone(),
            stage: form.stage.clone(),
            field: form.field.clone(),
            text: text.to_owned(),
            who: None,
            when: None,
        });
    }
    let document = ReasonsDocument { reasons: list };
    match pathways::put_reasons(&app, uuid, document, Expected::Hash(kept.hash)).await {
        Ok(_) => Ok(see_other(&format!("{}#checks", links::pathway(&id)))),
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

async fn comparison(app: &App, query: Option<&str>) -> Result<compare::Compare, Response> {
    let (ids, more) = compare::ids(query.unwrap_or_default());
    let lines = lines(app, false)
        .await
        .map_err(|error| Refusal::from(error).into_response())?;
    let choices = lines
        .iter()
        .filter(|line| line.assessment.is_some())
        .map(|line| {
            let id = line.id.to_string();
            let chosen = ids.contains(&id);
            (id, line.name.clone(), chosen)
        })
        .collect();
    if more {
        return Ok(compare::Compare::ask(
            "Six stand side by side at most. Take some out of the list.",
            choices,
        ));
    }
    if ids.len() < crate::core::levers::compare::LEAST {
        return Ok(compare::Compare::ask(
            "Choose two to six pathways; the first is what the others are compared with.",
            choices,
        ));
    }
    let mut seen = Vec::with_capacity(ids.len());
    for id in &ids {
        let uuid = id_of(app, id).await?;
        match see(app, uuid, None).await {
            Ok(one) => seen.push((id, one)),
            Err(error) => return Err(refused(app, id, error).await),
        }
    }
    let without = seen.iter().find(|(_, one)| one.outcome.is_err());
    if let Some((_, one)) = without {
        let words = format!(
            "{} cannot be worked out yet, so it cannot be compared.",
            one.pathway.name
        );
        return Ok(compare::Compare::ask(words, choices));
    }
    let picked: Vec<compare::Picked> = seen
        .iter()
        .filter_map(|(id, one)| {
            Some(compare::Picked {
                id,
                pathway: &one.pathway,
                found: one.found()?,
            })
        })
        .collect();
    let basis = basis(app)
        .await
        .map_err(|error| Refusal::from(error).into_response())?;
    Ok(compare::Compare::of(&picked, &basis.book, choices))
}

async fn compare_page(
    Actor { app, .. }: Actor<CanRead>,
    RawQuery(query): RawQuery,
) -> Result<Response, Response> {
    page(&comparison(&app, query.as_deref()).await?).map_err(IntoResponse::into_response)
}

async fn compare_csv(
    Actor { app, .. }: Actor<CanRead>,
    RawQuery(query): RawQuery,
) -> Result<Response, Response> {
    let found = comparison(&app, query.as_deref()).await?;
    if found.columns.is_empty() {
        return Err(Refusal::bad_request("Name two to six pathways: /compare.csv?ids=a,b").into_response());
    }
    Ok(csv("comparison", &found.table()))
}

/// The status of a page whose form was refused.
pub(super) const REFUSED: StatusCode = StatusCode::UNPROCESSABLE_ENTITY;
