//! The facts of a pathway: what it is called, what it is made of, for which days and under which rules; and a copy of it
//! to try a change in.

use super::handlers::{REFUSED, refused, seen, why};
use super::new::{Start, field};
use super::{Fault, Head, answers, fault_rows, links};
use crate::core::documents::Pathway;
use crate::core::domain::Book;
use crate::pathways::{self, Expected, PathwayError};
use crate::web::actor::{Actor, CanRead, CanWrite};
use crate::web::extract::{Form, Path};
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use answers::{page, see_other, with_status};
use askama::Template;
use axum::response::{IntoResponse, Response};
use serde::Deserialize;

/// The page of a pathway's facts.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "facts.html")]
pub struct ShowFacts {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision the form began from.
    pub head: Head,
    /// Name of the pathway as stored.
    pub name: String,
    /// What was typed.
    pub typed: Facts,
    /// Feedstocks: id, name.
    pub feedstocks: Vec<(String, String)>,
    /// Rule sets: id, title.
    pub rule_sets: Vec<(String, String)>,
    /// What is wrong.
    pub faults: Vec<Fault>,
    /// True if somebody saved meanwhile.
    pub stale: bool,
}

/// The facts as typed.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(default)]
pub struct Facts {
    /// Those that a pathway also begins with.
    #[serde(flatten)]
    pub start: Start,
    /// What to know about it.
    pub note: String,
    /// Why it is changed.
    pub why: String,
    /// The revision the form began from.
    #[serde(deserialize_with = "number")]
    pub expected: i64,
}

/// A number of a form. A flattened form gives all its fields as text.
fn number<'de, D: serde::Deserializer<'de>>(given: D) -> Result<i64, D::Error> {
    let text = String::deserialize(given)?;
    text.parse().map_err(serde::de::Error::custom)
}

impl Facts {
    /// The facts of a document.
    fn of(pathway: &Pathway, revision: i64) -> Facts {
        Facts {
            start: Start {
                name: pathway.name.clone(),
                feedstock: pathway.feedstock.clone(),
                rule_set: pathway.rule_set.clone(),
                from: pathway.period.from.to_string(),
                to: pathway.period.to.to_string(),
                plant_started: pathway
                    .plant_started
                    .map(|day| day.to_string())
                    .unwrap_or_default(),
            },
            note: pathway.note.clone().unwrap_or_default(),
            why: String::new(),
            expected: revision,
        }
    }

    /// The document with these facts in place of its own.
    fn put_into(&self, pathway: &Pathway, book: &Book) -> Result<Pathway, Vec<Fault>> {
        // The period keeps its kind: the form does not show it.
        let kind = pathway.period.kind;
        let begun = self.start.facts(book, &pathway.materials)?;
        let note = self.note.trim();
        let mut document = Pathway {
            name: begun.name,
            feedstock: begun.feedstock,
            rule_set: begun.rule_set,
            period: begun.period,
            plant_started: begun.plant_started,
            note: (!note.is_empty()).then(|| note.to_owned()),
            ..pathway.clone()
        };
        document.period.kind = kind;
        Ok(document)
    }
}

impl ShowFacts {
    /// The page as typed.
    pub fn of(
        head: Head,
        pathway: &Pathway,
        typed: Facts,
        faults: Vec<Fault>,
        stale: bool,
        book: &Book,
    ) -> ShowFacts {
        let data = format!("GET /api/v1/pathways/{}", head.id);
        let frame = Frame::new(format!("Facts of {}", pathway.name), Section::Pathways, data);
        let mut feedstocks = super::new::feedstocks(book);
        let own = pathway
            .materials
            .iter()
            .map(|material| (material.id.clone(), material.name.clone()));
        feedstocks.extend(own);
        // What the document says stays on the list, whatever it is.
        if !feedstocks.iter().any(|(id, _)| *id == pathway.feedstock) {
            feedstocks.push((pathway.feedstock.clone(), pathway.feedstock.clone()));
        }
        let mut rule_sets = super::new::rule_sets(book);
        if !rule_sets.iter().any(|(id, _)| *id == pathway.rule_set) {
            rule_sets.push((pathway.rule_set.clone(), pathway.rule_set.clone()));
        }
        ShowFacts {
            frame: frame.example(pathway.example),
            name: pathway.name.clone(),
            head,
            typed,
            feedstocks,
            rule_sets,
            faults,
            stale,
        }
    }

    /// What is wrong with a field.
    pub fn wrong(&self, id: &str) -> Vec<&Fault> {
        super::new::wrong(&self.faults, id)
    }
}

/// The facts as stored.
pub(super) async fn show(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
) -> Result<Response, Response> {
    let seen = seen(&app, &id, None).await?;
    let typed = Facts::of(&seen.pathway, seen.stored.revision);
    let shown = ShowFacts::of(seen.head(), &seen.pathway, typed, Vec::new(), false, &seen.book);
    page(&shown).map_err(IntoResponse::into_response)
}

/// Other facts.
pub(super) async fn save(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Form(typed): Form<Facts>,
) -> Result<Response, Response> {
    let now = seen(&app, &id, None).await?;
    let refuse = |typed: Facts, faults: Vec<Fault>, stale: bool| -> Response {
        let shown = ShowFacts::of(now.head(), &now.pathway, typed, faults, stale, &now.book);
        with_status(REFUSED, &shown).unwrap_or_else(IntoResponse::into_response)
    };
    let document = match typed.put_into(&now.pathway, &now.book) {
        Ok(document) => document,
        Err(faults) => return Ok(refuse(typed, faults, false)),
    };
    let why = why(&typed.why);
    let expected = Expected::Number(typed.expected);
    match pathways::replace(&app, now.stored.id, document, expected, why).await {
        Ok(saved) => Ok(see_other(&links::saved(&id, saved.revision))),
        Err(PathwayError::Problems(problems)) => {
            let faults = fault_rows(problems.list(), |pointer| match field(pointer) {
                (None, _) => links::place(&id, &now.pathway, pointer),
                known => known,
            });
            Ok(refuse(typed, faults, false))
        }
        Err(PathwayError::Conflict { .. }) => Ok(refuse(typed, Vec::new(), true)),
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

/// A copy as a pathway of its own: a change can be tried there and compared.
pub(super) async fn copy(
    Actor { app, .. }: Actor<CanWrite>,
    Path(id): Path<String>,
    Form(Nothing {}): Form<Nothing>,
) -> Result<Response, Response> {
    let now = seen(&app, &id, None).await?;
    let (name, revision) = (&now.pathway.name, now.stored.revision);
    let why = format!("Copy of \"{name}\", revision {revision}");
    let document = Pathway {
        name: copy_name(name),
        ..now.pathway.clone()
    };
    match pathways::create(&app, document, Some(why)).await {
        Ok(saved) => Ok(see_other(&links::saved(&saved.id.to_string(), 1))),
        Err(error) => Err(refused(&app, &id, error).await),
    }
}

/// A form without fields of its own.
#[derive(Debug, Deserialize)]
pub(super) struct Nothing {}

fn copy_name(name: &str) -> String {
    // Names have at most 200 letters.
    let kept: String = name.chars().take(180).collect();
    format!("{kept} (copy)")
}

#[cfg(test)]
mod tests {
    use super::super::samples::wheat;
    use super::*;
    use crate::library::book;

    #[test]
    fn the_facts_of_a_document_put_back_change_nothing() {
        let facts = Facts::of(&wheat(), 1);
        assert_eq!(facts.put_into(&wheat(), book()).expect("they hold"), wheat());
    }

    #[test]
    fn a_wrong_day_stands_at_its_field() {
        let mut facts = Facts::of(&wheat(), 1);
        facts.start.to = "soon".into();
        let faults = facts.put_into(&wheat(), book()).expect_err("refused");
        let shown = ShowFacts::of(Head::default(), &wheat(), facts, faults, false, book());
        assert_eq!(shown.wrong("to").len(), 1);
        assert!(shown.wrong("from").is_empty());
    }

    #[test]
    fn copies_of_copies_keep_short() {
        assert_eq!(copy_name("Wheat"), "Wheat (copy)");
        assert!(copy_name(&"x".repeat(200)).chars().count() <= 200);
    }
}
