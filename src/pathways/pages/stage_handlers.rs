//! The recipe card at work: showing it, changing its lines, looking up factors, saving, meeting somebody else's save.

use super::backed::{show_card, taken};
use super::card::form::LISTS;
use super::card::{Do, Form, build, merge};
use super::handlers::{REFUSED, Seen, ShowQuery, refused, saved_notice, see, seen};
use super::meeting::{differ, meeting};
use super::stage::{Card, ShowStage, sources, steer};
use super::tried::work_out;
use super::{answers, links};
use crate::app::App;
use crate::core::documents::Pathway;
use crate::core::documents::pathway::{Flow, Intake, Stage};
use crate::core::documents::problem::{Problem, Problems};
use crate::core::domain::StageKind;
use crate::pathways::{self, Expected, PathwayError, Saved, What};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::extract::{Form as Fields, Path, Query};
use crate::web::multipart::Posted;
use answers::see_other;
use axum::http::StatusCode;
use axum::response::{IntoResponse, Response};
use serde::Deserialize;
use serde_json::Value;

fn value_of(stage: &Stage) -> Value {
    serde_json::to_value(stage).unwrap_or(Value::Null)
}

fn stage_of<'p>(pathway: &'p Pathway, key: &str) -> Option<&'p Stage> {
    pathway.stages.iter().find(|stage| stage.key == key)
}

/// The card as stored.
pub(super) async fn show(
    Actor { app, .. }: Actor<CanRead>,
    Path((id, key)): Path<(String, String)>,
    Query(query): Query<ShowQuery>,
) -> Result<Response, Response> {
    let seen = seen(&app, &id, None).await?;
    let Some(stage) = stage_of(&seen.pathway, &key) else {
        return Err(no_stage());
    };
    let (value, typed) = (value_of(stage), Form::default());
    let mut shown = ShowStage::of(&Card {
        ..card(&seen, &key, &value, &typed)
    });
    shown.notice = saved_notice(&app, &seen, query.saved).await;
    show_card(&app, StatusCode::OK, shown).await
}

fn no_stage() -> Response {
    Refusal::from(PathwayError::NotFound(What::Stage)).into_response()
}

fn card<'a>(seen: &'a Seen, key: &'a str, stage: &'a Value, typed: &'a Form) -> Card<'a> {
    Card {
        head: seen.head(),
        pathway: &seen.pathway,
        found: seen.found(),
        tried: None,
        book: &seen.book,
        key,
        stage,
        typed,
        problems: &[],
        refused: false,
        search: None,
        after: None,
    }
}

/// What kind of stage is to be added, and where.
#[derive(Debug, Default, Deserialize)]
#[serde(default)]
pub(super) struct NewStage {
    kind: String,
    name: String,
    after: String,
}

/// The card of a stage that is not stored yet.
pub(super) async fn begin(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Query(query): Query<NewStage>,
) -> Result<Response, Response> {
    let seen = seen(&app, &id, None).await?;
    let taken: Vec<String> = seen
        .pathway
        .stages
        .iter()
        .map(|stage| stage.key.clone())
        .collect();
    let kind = StageKind::from_name(&query.kind).unwrap_or(StageKind::Processing);
    let after = query
        .after
        .parse::<usize>()
        .ok()
        .and_then(|index| seen.pathway.stages.get(index));
    let name = if query.name.trim().is_empty() {
        crate::web::filters::capital(kind.words())
    } else {
        query.name.trim().to_owned()
    };
    let key = build::free_key(&name, "stage", &taken);
    let value = begun(&key, kind, &name, after);
    let typed = Form::default();
    let shown = ShowStage::of(&Card {
        after: after.map(|stage| stage.key.as_str()),
        ..card(&seen, &key, &value, &typed)
    });
    show_card(&app, StatusCode::OK, shown).await
}

/// A new stage hands on what it takes, until somebody says otherwise.
fn begun(key: &str, kind: StageKind, name: &str, after: Option<&Stage>) -> Value {
    let Some(after) = after else {
        return build::blank(key, kind.name(), name);
    };
    let flow = Flow {
        price: None,
        note: None,
        carbon_percent_dry: None,
        lhv: None,
        ..after.output.flow.clone()
    };
    let mut output = after.output.clone();
    output.flow.note = None;
    value_of(&Stage {
        key: key.to_owned(),
        kind,
        name: Some(name.to_owned()),
        note: None,
        grown: None,
        output,
        intakes: vec![Intake {
            from: after.key.clone(),
            product: None,
            flow,
        }],
        inputs: Vec::new(),
        co_products: Vec::new(),
        allocation: None,
        stated: None,
        meters: Vec::new(),
        earlier_periods: Vec::new(),
    })
}

/// A posted card: a button changed it, or it is to be saved.
pub(super) async fn save(
    Actor { app, .. }: Actor<CanWrite>,
    Path((id, key)): Path<(String, String)>,
    posted: Posted,
) -> Result<Response, Response> {
    let taken = taken(&app, posted).await.map_err(IntoResponse::into_response)?;
    let mut form = taken.form;
    form.settle_picks();
    let asked = Do::of(form.get("do").unwrap_or("save"));
    let expected = form
        .text("expected")
        .parse::<i64>()
        .ok()
        .filter(|number| *number >= 1);
    let Some(expected) = expected else {
        return Err(Refusal::bad_request(
            "The form does not say which revision it began from. Open the page again.",
        )
        .into_response());
    };
    // The card is read against the revision it began from: that is what was on the page.
    let base = seen(&app, &id, Some(expected)).await?;
    let new = form.text("new") == "yes" && stage_of(&base.pathway, &key).is_none();
    let after = form.text("after").to_owned();
    let stood = match stage_of(&base.pathway, &key) {
        Some(stage) => value_of(stage),
        None if new => {
            let follows = stage_of(&base.pathway, &after);
            let kind = StageKind::from_name(form.text("/kind")).unwrap_or(StageKind::Processing);
            begun(&key, kind, form.text("/name"), follows)
        }
        None => return Err(no_stage()),
    };
    let to_save = steer(&mut form, &asked);
    let shaped = build::shaped(&stood, &form);
    let shown = |problems: &[Problem], refused: bool| {
        let mut page = ShowStage::of(&Card {
            problems,
            refused,
            search: match &asked {
                Do::Search(field) => Some(field),
                _ => None,
            },
            after: new.then_some(after.as_str()),
            ..card(&base, &key, &shaped, &form)
        });
        if asked == Do::Try {
            page.refused_words = "Not worked out";
        }
        page
    };
    if !to_save {
        return show_card(&app, StatusCode::OK, shown(taken.problems.list(), false)).await;
    }
    let (built, mut problems) = build::build(&stood, &form, &sources(&base.pathway, &key));
    for problem in taken.problems.list() {
        problems.add(&problem.pointer, problem.detail.clone(), problem.remedy.clone());
    }
    let stage = match Stage::from_value(&built) {
        Ok(stage) => Some(stage),
        Err(more) => {
            // A figure that could not be read was said already, with the text as typed.
            for problem in more.into_list() {
                if !problems.list().iter().any(|said| said.pointer == problem.pointer) {
                    problems.add(&problem.pointer, problem.detail, problem.remedy);
                }
            }
            None
        }
    };
    let (Some(stage), true) = (stage, problems.is_empty()) else {
        return show_card(&app, REFUSED, shown(problems.list(), true)).await;
    };
    let attached = match taken.attached.as_slice() {
        [] => String::new(),
        ids => format!("{} attached", ids.join(", ")),
    };
    let why = [form.text("why"), &attached]
        .into_iter()
        .find(|why| !why.is_empty())
        .map(|why| why.chars().take(1_000).collect::<String>());
    let (document, place) = with_stage(&base.pathway, stage, new.then_some(after.as_str()));
    if asked == Do::Try {
        let worked = work_out(&app, document.clone()).await;
        return match worked.map_err(IntoResponse::into_response)? {
            Ok(assessment) => {
                let worked = ShowStage::of(&Card {
                    tried: Some(&assessment),
                    after: new.then_some(after.as_str()),
                    ..card(&base, &key, &built, &form)
                });
                show_card(&app, StatusCode::OK, worked).await
            }
            Err(problems) => {
                let own = of_stage(&document, place, problems.into_list());
                show_card(&app, REFUSED, shown(own.list(), true)).await
            }
        };
    }
    match pathways::replace(
        &app,
        base.stored.id,
        document.clone(),
        Expected::Number(expected),
        why,
    )
    .await
    {
        Ok(saved) => Ok(see_other(&after_save(&links::stage(&id, &key), &saved))),
        Err(PathwayError::Problems(problems)) => {
            let own = of_stage(&document, place, problems.into_list());
            show_card(&app, REFUSED, shown(own.list(), true)).await
        }
        Err(PathwayError::Conflict { .. }) => {
            let base_of = if new { Value::Null } else { stood };
            let mine = Typed {
                base: &base,
                stood: &base_of,
                built: &built,
                form: &form,
            };
            met(&app, &id, &key, mine).await
        }
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

fn after_save(href: &str, saved: &Saved) -> String {
    if saved.changed {
        format!("{href}?saved={}", saved.revision)
    } else {
        href.to_owned()
    }
}

/// The document with the stage in its place, and that place. A new stage stands after the one it follows, and those
/// that took from that one take from the new stage.
fn with_stage(pathway: &Pathway, stage: Stage, new_after: Option<&str>) -> (Pathway, usize) {
    let mut document = pathway.clone();
    let key = stage.key.clone();
    match new_after {
        None => {
            for old in document.stages.iter_mut().filter(|old| old.key == key) {
                *old = stage.clone();
            }
        }
        Some(after) => {
            let place = document
                .stages
                .iter()
                .position(|old| old.key == after)
                .map_or(0, |place| place + 1);
            let takes = |intake: &&mut Intake| intake.from == after && intake.product.is_none();
            for old in &mut document.stages {
                for intake in old.intakes.iter_mut().filter(takes) {
                    intake.from.clone_from(&key);
                }
            }
            document.stages.insert(place.min(document.stages.len()), stage);
        }
    }
    let place = document.stages.iter().position(|old| old.key == key).unwrap_or(0);
    (document, place)
}

/// Problems of a document as problems of one stage's card: its own pointers begin at the stage, others name their place.
fn of_stage(document: &Pathway, place: usize, problems: Vec<Problem>) -> Problems {
    let own = format!("/stages/{place}");
    let mut out = Problems::default();
    for problem in problems {
        match problem
            .pointer
            .strip_prefix(&own)
            .filter(|rest| rest.is_empty() || rest.starts_with('/'))
        {
            Some(rest) => out.add(rest, problem.detail, problem.remedy),
            None => {
                let at = links::stage_of(document, &problem.pointer)
                    .map_or("The pathway", |(stage, _)| stage.title());
                out.add("", format!("{at}: {}", problem.detail), problem.remedy);
            }
        }
    }
    out
}

/// A card as somebody typed it, and what it began from.
struct Typed<'t> {
    base: &'t Seen,
    /// The stage it began from; null for a new one.
    stood: &'t Value,
    built: &'t Value,
    form: &'t Form,
}

/// Somebody saved while the card was being filled in: both versions joined, on the new revision, nothing lost.
async fn met(app: &App, id: &str, key: &str, mine: Typed<'_>) -> Result<Response, Response> {
    let uuid = mine.base.stored.id;
    let now = match see(app, uuid, None).await {
        Ok(now) => now,
        Err(error) => return Err(refused(app, id, error).await),
    };
    let meeting = meeting(app, uuid, mine.base.stored.revision, now.stored.revision).await;
    let theirs = stage_of(&now.pathway, key).map_or(Value::Null, value_of);
    let (joined, met) = match &theirs {
        // A stage that is not there (any more) is joined with nothing.
        Value::Null => (mine.built.clone(), Vec::new()),
        theirs => merge::join(mine.stood, theirs, mine.built),
    };
    let typed = joined_form(&now, &theirs, &joined);
    let follows = before(&mine.base.pathway, &now.pathway, key, mine.form.text("after"));
    let mut shown = ShowStage::of(&Card {
        after: theirs.is_null().then_some(follows.as_str()),
        ..card(&now, key, &joined, &typed)
    });
    shown.why = mine.form.text("why").to_owned();
    if met.is_empty() {
        let then = match (theirs.is_null(), mine.stood.is_null()) {
            (true, false) => {
                "The stage was taken out. Yours stands here as a new one: save to bring it back."
            }
            (true, true) => "Your new stage is not saved yet: look it over, then save.",
            (false, _) => "It changed nothing of this stage: look it over, then save.",
        };
        shown.notice = Some(super::Notice {
            what: format!("Not saved: {}.", meeting.what),
            then: then.to_owned(),
            back: None,
        });
    }
    shown.differ = differ(&met);
    shown.meeting = meeting;
    shown.met = met;
    show_card(app, StatusCode::PRECONDITION_FAILED, shown).await
}

/// The stage that a new one is to follow: the one asked for, or the last before it that is still there.
fn before(base: &Pathway, now: &Pathway, key: &str, after: &str) -> String {
    let place = base.stages.iter().position(|stage| stage.key == key);
    let earlier = base
        .stages
        .iter()
        .take(place.unwrap_or(0))
        .rev()
        .map(|stage| stage.key.as_str());
    [after]
        .into_iter()
        .chain(earlier)
        .find(|key| stage_of(now, key).is_some())
        .unwrap_or_default()
        .to_owned()
}

/// The steering fields of a joined card: which item is which in the stage as stored now, and which are new to it.
fn joined_form(now: &Seen, theirs: &Value, joined: &Value) -> Form {
    let mut form = Form::default();
    form.set("expected", now.stored.revision.to_string());
    let same = |a: &Value, b: &Value| {
        ["key", "from", "product"]
            .iter()
            .all(|name| a.get(*name) == b.get(*name))
    };
    for list in LISTS {
        let items = |stage: &'_ Value| {
            stage
                .pointer(list)
                .and_then(Value::as_array)
                .cloned()
                .unwrap_or_default()
        };
        let stand = items(theirs);
        for (index, item) in items(joined).iter().enumerate() {
            match stand.iter().position(|old| same(old, item)) {
                Some(place) => form.set(format!("{list}/{index}/was"), place.to_string()),
                None => form.set(format!("{list}/{index}/as"), super::card::spec::input_as(item)),
            }
        }
    }
    form
}

/// What is to be taken out.
#[derive(Debug, Deserialize)]
pub(super) struct Remove {
    expected: i64,
}

/// Takes a stage out; those that took its product take what it took.
pub(super) async fn remove(
    Actor { app, .. }: Actor<CanWrite>,
    Path((id, key)): Path<(String, String)>,
    Fields(form): Fields<Remove>,
) -> Result<Response, Response> {
    let base = seen(&app, &id, Some(form.expected)).await?;
    let Some(gone) = stage_of(&base.pathway, &key) else {
        return Err(no_stage());
    };
    let mut document = base.pathway.clone();
    document.stages.retain(|stage| stage.key != key);
    if let [only] = gone.intakes.as_slice() {
        for intake in document.stages.iter_mut().flat_map(|stage| &mut stage.intakes) {
            if intake.from == key && intake.product.is_none() {
                intake.from.clone_from(&only.from);
                intake.product.clone_from(&only.product);
            }
        }
    }
    let why = Some(
        format!("{} taken out", gone.title())
            .chars()
            .take(1_000)
            .collect(),
    );
    match pathways::replace(
        &app,
        base.stored.id,
        document.clone(),
        Expected::Number(form.expected),
        why,
    )
    .await
    {
        Ok(saved) => Ok(see_other(&after_save(&links::pathway(&id), &saved))),
        Err(PathwayError::Problems(problems)) => {
            let own = of_stage(&document, usize::MAX, problems.into_list());
            let (value, typed) = (value_of(gone), Form::default());
            let shown = ShowStage::of(&Card {
                problems: own.list(),
                refused: true,
                ..card(&base, &key, &value, &typed)
            });
            show_card(&app, REFUSED, shown).await
        }
        Err(error) => Err(refused(&app, &id, error).await),
    }
}
