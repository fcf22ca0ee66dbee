//! One revision: what it changed, and what the change did to the net.

use super::verdict::Verdict;
use super::{Head, links};
use crate::core::documents::{Assessment, Pathway};
use crate::core::domain::Book;
use crate::pathways::{Change, Kind};
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use askama::Template;
use serde_json::Value;

/// The page of a revision.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "revision.html")]
pub struct ShowRevision {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision.
    pub head: Head,
    /// Number of the current revision.
    pub current: u64,
    /// Name of the pathway in it.
    pub name: String,
    /// Why it was saved.
    pub why: String,
    /// The answer then.
    pub verdict: Option<String>,
    /// Stages whose figure moved: name, before, after, change.
    pub moved: Vec<Moved>,
    /// The net before and after.
    pub net: Option<(Option<f64>, f64)>,
    /// What differs.
    pub changes: Vec<ChangeRow>,
    /// How many more differ than are shown.
    pub more: usize,
}

/// A stage whose figure moved.
#[derive(Clone, Debug, PartialEq)]
pub struct Moved {
    /// Name of the stage.
    pub name: String,
    /// Before; none where there was no such stage.
    pub before: Option<f64>,
    /// After; none where there is none any more.
    pub after: Option<f64>,
    /// The change.
    pub change: f64,
}

/// One difference.
#[derive(Clone, Debug, PartialEq)]
pub struct ChangeRow {
    /// Stage, or the pathway.
    pub place: String,
    /// Field in words.
    pub field: String,
    /// `changed`, `added`, ...
    pub what: &'static str,
    /// Before.
    pub before: String,
    /// After.
    pub after: String,
}

/// Most differences on a page.
const MOST: usize = 500;

impl ShowRevision {
    /// The page of a revision: the number of the current one and the reason, its document, the assessments before and
    /// after, and the changes.
    pub fn of(
        head: Head,
        (current, why): (u64, String),
        pathway: &Pathway,
        (before, now): (Option<&Assessment>, Option<&Assessment>),
        changes: &[Change],
        book: &Book,
    ) -> ShowRevision {
        let rules = book.rule_sets.get(&pathway.rule_set);
        let frame = Frame::new(
            format!("Revision {} of {}", head.revision, pathway.name),
            Section::Pathways,
            format!(
                "GET /api/v1/pathways/{}/revisions/{}/changes",
                links::segment(&head.id),
                head.revision
            ),
        );
        ShowRevision {
            frame: frame.example(pathway.example),
            current,
            name: pathway.name.clone(),
            why,
            verdict: now.map(|now| Verdict::of(now, rules).text()),
            moved: now.map(|now| moved(before, now)).unwrap_or_default(),
            net: now.map(|now| {
                (
                    before.map(|before| before.net.g_co2e_per_mj),
                    now.net.g_co2e_per_mj,
                )
            }),
            changes: changes
                .iter()
                .take(MOST)
                .map(|change| row(change, pathway))
                .collect(),
            more: changes.len().saturating_sub(MOST),
            head,
        }
    }
}

/// Stages whose figure moved by as much as tables show, largest first.
pub fn moved(before: Option<&Assessment>, now: &Assessment) -> Vec<Moved> {
    let Some(before) = before else { return Vec::new() };
    let find = |list: &Assessment, key: &str| {
        list.stages
            .iter()
            .find(|stage| stage.key == key)
            .map(|stage| stage.g_co2e_per_mj)
    };
    let mut out: Vec<Moved> = now
        .stages
        .iter()
        .map(|stage| {
            let was = find(before, &stage.key);
            Moved {
                name: super::ladder::stage_name(stage),
                before: was,
                after: Some(stage.g_co2e_per_mj),
                change: stage.g_co2e_per_mj - was.unwrap_or(0.0),
            }
        })
        .collect();
    let gone = before
        .stages
        .iter()
        .filter(|stage| find(now, &stage.key).is_none());
    out.extend(gone.map(|stage| Moved {
        name: super::ladder::stage_name(stage),
        before: Some(stage.g_co2e_per_mj),
        after: None,
        change: -stage.g_co2e_per_mj,
    }));
    out.retain(|row| row.change.abs() >= 0.005);
    out.sort_by(|a, b| b.change.abs().total_cmp(&a.change.abs()));
    out
}

fn row(change: &Change, pathway: &Pathway) -> ChangeRow {
    let stage = change.stage.as_deref().map(|key| {
        let stage = pathway.stages.iter().find(|stage| stage.key == key);
        stage.map_or_else(|| key.to_owned(), |stage| stage.title().to_owned())
    });
    ChangeRow {
        place: stage.unwrap_or_else(|| "The pathway".to_owned()),
        field: if change.field.is_empty() {
            "the whole stage".to_owned()
        } else {
            change.field.replace('_', " ").replace('.', ", ")
        },
        what: match change.what {
            Kind::Added => "added",
            Kind::Removed => "taken out",
            Kind::Changed => "changed",
            Kind::Reordered => "another order",
        },
        before: shown(change.before.as_ref()),
        after: shown(change.after.as_ref()),
    }
}

fn shown(value: Option<&Value>) -> String {
    let text = match value {
        None | Some(Value::Null) => return "\u{2013}".to_owned(),
        Some(Value::String(text)) => text.clone(),
        Some(Value::Number(number)) => number
            .as_f64()
            .map_or_else(|| number.to_string(), crate::core::units::rounding::show_all),
        Some(Value::Object(object)) => match (
            object.get("value"),
            object.get("unit"),
            object.get("label").or_else(|| object.get("name")),
        ) {
            (Some(figure), Some(Value::String(unit)), _) => format!("{} {unit}", shown(Some(figure))),
            (_, _, Some(Value::String(name))) => name.clone(),
            _ => Value::Object(object.clone()).to_string(),
        },
        Some(other) => other.to_string(),
    };
    if text.chars().count() > 200 {
        text.chars().take(200).chain("...".chars()).collect()
    } else {
        text
    }
}
