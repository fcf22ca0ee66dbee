//! Comparison of two to six pathways, stored ones by id, others as documents.

use super::super::{Stored, read, revision};
use super::choice::{StoredChoice, stored, under};
use super::stored::known_rule_set;
use crate::app::{App, Basis};
use crate::core::documents::reader::{Fields, Place};
use crate::core::documents::{Assessment, Pathway, Problems};
use crate::core::evaluate::Options;
use crate::core::levers::compare::{Comparison, LEAST, MOST, Subject, compare};
use crate::rules::basis;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{JsonBody, NoQuery};
use crate::web::{Refusal, blocking};
use axum::Json;
use axum::http::StatusCode;
use serde::Serialize;
use serde_json::Value;
use utoipa::ToSchema;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;
use uuid::Uuid;

/// The route of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new().routes(routes!(compare_pathways))
}

/// What to compare.
#[derive(Debug, Serialize, ToSchema)]
#[allow(
    dead_code,
    reason = "describes the body, which is read by hand so that every problem has its pointer"
)]
struct CompareQuestion {
    /// Two to six pathways; differences are against the first.
    #[schema(min_items = 2, max_items = 6)]
    pathways: Vec<Chosen>,
    /// Evaluate all of them under this rule set instead of their own.
    rule_set: Option<String>,
}

/// A pathway to compare.
#[derive(Debug, Serialize, ToSchema)]
#[serde(untagged)]
#[allow(dead_code, reason = "describes the body")]
enum Chosen {
    /// A stored one, at its current revision.
    Id(Uuid),
    /// A stored one, at a revision.
    Revision(StoredChoice),
    /// A document that need not be stored.
    Document(Box<Pathway>),
}

/// Compare pathways
///
/// The difference by stage, by kind of stage and by term, and every setting in which they are unlike. Stores nothing.
#[utoipa::path(post, path = "/compare", tag = "evaluation",
    request_body(content = CompareQuestion, content_type = "application/json"),
    responses((status = 200, description = "The pathways side by side.", body = Comparison),
        (status = 404, description = "A pathway is not there.", body = crate::web::problem::ProblemDocument,
            content_type = "application/problem+json")))]
async fn compare_pathways(
    Actor { app, .. }: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<Comparison>, Refusal> {
    let (asked, rule_set) = question(&body)?;
    let basis = basis(&app).await?;
    known_rule_set(&basis.book, rule_set.as_deref())?;
    let mut pathways = Vec::with_capacity(asked.len());
    for choice in asked {
        pathways.push(match choice {
            Choice::Document(pathway) => *pathway,
            Choice::Stored(id, None) => document(&read(&app, id).await?)?,
            Choice::Stored(id, Some(number)) => document(&revision(&app, id, number).await?)?,
        });
    }
    Ok(Json(
        blocking::run(move || side_by_side(&app, &basis, &pathways, rule_set.as_deref())).await??,
    ))
}

fn document(stored: &Stored) -> Result<Pathway, Refusal> {
    Pathway::from_bytes(&stored.document).map_err(|_| {
        tracing::error!(pathway = %stored.id, revision = stored.revision, "a stored document cannot be read");
        Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
    })
}

enum Choice {
    Stored(Uuid, Option<i64>),
    Document(Box<Pathway>),
}

/// Reads the question; every problem with its pointer.
fn question(body: &Value) -> Result<(Vec<Choice>, Option<String>), Refusal> {
    let mut problems = Problems::default();
    let at = &Place::ROOT;
    let Some(mut fields) = Fields::open(body, at, &mut problems) else {
        return Err(Refusal::invalid(problems));
    };
    let rule_set = fields.text("rule_set", at, &mut problems);
    let given = match body.get("pathways") {
        Some(Value::Array(items)) => items.len(),
        _ => 0,
    };
    let asked = if given <= MOST {
        fields.list("pathways", at, &mut problems, choice)
    } else {
        Vec::new()
    };
    if given > MOST {
        fields.take("pathways");
    }
    if !(LEAST..=MOST).contains(&given) {
        let remedy = format!("Give {LEAST} to {MOST} ids or documents.");
        problems.add(
            at.field("pathways"),
            format!("{given} pathways cannot be compared."),
            remedy,
        );
    }
    fields.close(at, &mut problems);
    if problems.is_empty() {
        Ok((asked, rule_set))
    } else {
        Err(Refusal::invalid(problems))
    }
}

fn choice(value: &Value, at: &Place<'_>, problems: &mut Problems) -> Option<Choice> {
    if value.get("format").is_some() {
        return match Pathway::from_value(value) {
            Ok(pathway) => Some(Choice::Document(Box::new(pathway))),
            Err(found) => {
                under(&at.to_string(), found, problems);
                None
            }
        };
    }
    let (id, revision) = stored(value, at, problems)?;
    Some(Choice::Stored(id, revision))
}

fn side_by_side(
    app: &App,
    basis: &Basis,
    pathways: &[Pathway],
    rule_set: Option<&str>,
) -> Result<Comparison, Refusal> {
    let mut problems = Problems::default();
    let mut assessed: Vec<Assessment> = Vec::with_capacity(pathways.len());
    for (index, pathway) in pathways.iter().enumerate() {
        let options = Options {
            without_workings: true,
            ..basis.options(rule_set)
        };
        match app.evaluates(pathway, &basis.book, options) {
            Ok(assessment) => assessed.push(assessment),
            Err(found) => under(&format!("/pathways/{index}"), found, &mut problems),
        }
    }
    if !problems.is_empty() {
        return Err(Refusal::invalid(problems));
    }
    let mut subjects = Vec::with_capacity(pathways.len());
    for (pathway, assessment) in pathways.iter().zip(&assessed) {
        let rules = basis.book.rule_sets.get(&assessment.rule_set).ok_or_else(|| {
            tracing::error!(
                rule_set = assessment.rule_set,
                "an assessment names a rule set that is not there"
            );
            Refusal::of(StatusCode::INTERNAL_SERVER_ERROR)
        })?;
        subjects.push(Subject {
            pathway,
            assessment,
            rules,
        });
    }
    unlike(&subjects, rule_set.is_some())?;
    Ok(compare(&subjects))
}

/// Refuses figures that may not be set against each other: other gas weights, or another heating value of the fuel.
fn unlike(subjects: &[Subject<'_>], asked: bool) -> Result<(), Refusal> {
    let Some((first, others)) = subjects.split_first() else {
        return Ok(());
    };
    let mut problems = Problems::default();
    for (index, other) in others.iter().enumerate().filter(|_| !asked) {
        if let Err(why) = first.rules.comparable_with(other.rules) {
            problems.add(
                format!("/pathways/{}", index + 1),
                format!(
                    "{} and {} cannot be compared: {why}.",
                    first.rules.id, other.rules.id
                ),
                "Name one rule set for all in \"rule_set\", or compare pathways under one.",
            );
        }
    }
    if problems.is_empty() {
        Ok(())
    } else {
        Err(Refusal::invalid(problems))
    }
}
