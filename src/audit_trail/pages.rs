//! The page of the audit trail: filters as a form, lines in words, the last first.

use super::api::{Filter, WrongFilter, place};
use super::{Entry, Line, Page, Person, Question, head, list, people};
use crate::app::App;
use crate::core::units::rounding;
use crate::web::actor::{Actor, CanRead};
use crate::web::answers::{page, with_status};
use crate::web::extract::Query;
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use crate::web::{Refusal, links};
use askama::Template;
use axum::Router;
use axum::http::StatusCode;
use axum::response::Response;
use axum::routing::get;
use serde::Deserialize;
use serde_json::Value;

/// The route of this file.
pub fn routes() -> Router<App> {
    Router::new().route("/audit-trail", get(show))
}

/// Kinds of things that a person can ask for.
const THINGS: [&str; 8] = [
    "pathway",
    "statement",
    "evidence",
    "consignment",
    "rule_set",
    "check_settings",
    "person",
    "token",
];

/// Deeds that are offered while somebody types.
const DEEDS: [&str; 8] = [
    "created",
    "saved",
    "archived",
    "restored",
    "gave reasons",
    "submitted",
    "issued",
    "withdrawn",
];

/// What is asked for: a filter and a place.
#[derive(Clone, Debug, Default, Deserialize)]
#[serde(default)]
pub(super) struct Asked {
    thing: String,
    id: String,
    person: String,
    did: String,
    from: String,
    to: String,
    after: String,
}

impl Asked {
    fn filter(&self) -> Filter {
        let some = |text: &String| Some(text.clone());
        Filter {
            thing: some(&self.thing),
            id: some(&self.id),
            person: some(&self.person),
            did: some(&self.did),
            from: some(&self.from),
            to: some(&self.to),
        }
    }

    /// The filters as the query of an address, with what follows.
    fn query(&self, more: &str) -> String {
        let pairs = [
            ("thing", &self.thing),
            ("id", &self.id),
            ("person", &self.person),
            ("did", &self.did),
            ("from", &self.from),
            ("to", &self.to),
        ];
        let mut parts: Vec<String> = pairs
            .iter()
            .filter(|(_, text)| !text.trim().is_empty())
            .map(|(name, text)| format!("{name}={}", links::segment(text.trim())))
            .collect();
        parts.extend((!more.is_empty()).then(|| more.to_owned()));
        if parts.is_empty() {
            String::new()
        } else {
            format!("?{}", parts.join("&"))
        }
    }
}

/// A choice of a list: what is sent, what is read, whether it stands.
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// What is sent.
    pub value: String,
    /// What is read.
    pub words: String,
    /// True if it stands.
    pub here: bool,
}

/// A line in words.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// Its number.
    pub number: i64,
    /// Day, UTC.
    pub day: String,
    /// Time of the day, UTC.
    pub time: String,
    /// Name of the person.
    pub who: String,
    /// By what means, and from which address.
    pub way: String,
    /// What was done: `Saved pathway`.
    pub did: String,
    /// Name of what it was done to.
    pub name: String,
    /// Where that is.
    pub href: Option<String>,
    /// Particulars.
    pub more: String,
    /// Why.
    pub why: String,
    /// Its hash, in short.
    pub hash: String,
}

/// The page.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "audit_trail/list.html")]
pub struct ShowTrail {
    /// Round the page.
    pub frame: Frame,
    /// Kinds of things.
    pub things: Vec<Choice>,
    /// People.
    pub people: Vec<Choice>,
    /// Deeds to choose from while typing.
    pub deeds: &'static [&'static str],
    /// What was done, as asked for.
    pub did: String,
    /// First day, as asked for.
    pub from: String,
    /// Last day, as asked for.
    pub to: String,
    /// The one thing asked for: its kind and id; empty for all.
    pub id: String,
    /// What is wrong with the filters: the field and a sentence.
    pub wrong: Option<(&'static str, String)>,
    /// The lines.
    pub rows: Vec<Row>,
    /// True if nothing is asked for and there is nothing.
    pub empty: bool,
    /// Where earlier lines are.
    pub earlier: Option<String>,
    /// Where the last lines are, where these are not the last.
    pub latest: Option<String>,
    /// The filters, as the query of the downloads.
    pub query: String,
    /// Number and hash of the last line of the whole chain.
    pub end: Option<(i64, String)>,
}

impl ShowTrail {
    fn of(
        asked: &Asked,
        found: Result<Page, WrongFilter>,
        people: &[Person],
        (number, hash): (i64, String),
    ) -> ShowTrail {
        let (entries, next, wrong) = match found {
            Ok(found) => (found.entries, found.next, None),
            Err(wrong) => (Vec::new(), None, Some((wrong.field, wrong.words))),
        };
        let query = asked.query("");
        let choice = |value: &str, words: &str, asked: &str| Choice {
            value: value.to_owned(),
            words: words.to_owned(),
            here: value == asked.trim(),
        };
        let mut things: Vec<Choice> = THINGS
            .iter()
            .map(|thing| choice(thing, &thing.replace('_', " "), &asked.thing))
            .collect();
        let other = asked.thing.trim();
        if !other.is_empty() && !THINGS.contains(&other) {
            things.push(choice(other, other, other));
        }
        ShowTrail {
            frame: Frame::new(
                "Audit trail",
                Section::AuditTrail,
                format!("GET /api/v1/audit-trail{query}"),
            ),
            things,
            people: people
                .iter()
                .map(|person| choice(&person.id.to_string(), &person.name, &asked.person))
                .collect(),
            deeds: &DEEDS,
            did: asked.did.clone(),
            from: asked.from.clone(),
            to: asked.to.clone(),
            id: asked.id.clone(),
            wrong,
            empty: number == 0,
            rows: entries.iter().map(row).collect(),
            earlier: next.map(|next| format!("/audit-trail{}", asked.query(&format!("after={next}")))),
            latest: (!asked.after.is_empty()).then(|| format!("/audit-trail{query}")),
            query,
            end: (number > 0).then_some((number, hash)),
        }
    }
}

fn row(entry: &Entry) -> Row {
    let line = &entry.line;
    let what = |name: &str| line.what.get(name).and_then(Value::as_str);
    let thing = line.thing.replace('_', " ");
    let short: String = line.id.chars().take(8).collect();
    let name = what("name")
        .or_else(|| what("title"))
        .map_or(short, str::to_owned);
    Row {
        number: line.number,
        day: line.at.strftime("%-d %b %Y").to_string(),
        time: line.at.strftime("%H:%M:%S").to_string(),
        who: line.by.name.clone(),
        way: way(line),
        did: format!("{} {thing}", filters::capital(&line.did)),
        name,
        href: href(line),
        more: particulars(&line.what),
        why: line.reason.clone().unwrap_or_default(),
        hash: entry.hash.chars().skip("sha256:".len()).take(12).collect(),
    }
}

/// By what means somebody came in, and from where.
fn way(line: &Line) -> String {
    let by = &line.by;
    let means = match by.via.as_str() {
        "session" => "signed in".to_owned(),
        "token" if by.label.is_empty() => "token".to_owned(),
        "token" => format!("token \u{201c}{}\u{201d}", by.label),
        "command" => "on this machine".to_owned(),
        other => other.to_owned(),
    };
    if by.from.is_empty() {
        means
    } else {
        format!("{means}, {}", by.from)
    }
}

/// The page of what a line is about.
fn href(line: &Line) -> Option<String> {
    if line.id.is_empty() {
        return None;
    }
    match line.thing.as_str() {
        "pathway" => Some(links::pathway(&line.id)),
        "rule_set" => Some(links::rule_set(&line.id)),
        "statement" => Some(format!("/statements/{}", links::segment(&line.id))),
        _ => None,
    }
}

/// Particulars in words; hashes stay in the data.
fn particulars(what: &Value) -> String {
    let Some(fields) = what.as_object() else {
        return String::new();
    };
    let mut out = Vec::new();
    for (name, value) in fields {
        match (name.as_str(), value) {
            ("name" | "title" | "hash" | "before", _) | (_, Value::Null) => {}
            ("revision", revision) => out.insert(0, format!("revision {revision}")),
            ("net_g_co2e_per_mj", net) => {
                let net = net.as_f64().map(|net| rounding::show(net, 2));
                out.extend(net.map(|net| format!("net {net} g CO2e/MJ")));
            }
            (name, Value::String(text)) => out.push(format!("{}: {text}", name.replace('_', " "))),
            (name, Value::Number(number)) => {
                let shown = number
                    .as_f64()
                    .map_or_else(|| number.to_string(), rounding::show_all);
                out.push(format!("{}: {shown}", name.replace('_', " ")));
            }
            (name, Value::Array(items)) => {
                let texts: Vec<String> = items
                    .iter()
                    .map(|item| item.as_str().map_or_else(|| item.to_string(), str::to_owned))
                    .collect();
                out.push(format!("{}: {}", name.replace('_', " "), texts.join(", ")));
            }
            (name, other) => out.push(format!("{}: {other}", name.replace('_', " "))),
        }
    }
    let text = out.join(", ");
    if text.chars().count() > 300 {
        text.chars().take(300).chain("...".chars()).collect()
    } else {
        text
    }
}

/// The last lines that fit.
async fn show(Actor { app, .. }: Actor<CanRead>, Query(asked): Query<Asked>) -> Result<Response, Refusal> {
    let end = head(&app).await?;
    let people = people(&app).await?;
    let question = match asked.filter().question() {
        Ok(question) => question,
        Err(wrong) => {
            let shown = ShowTrail::of(&asked, Err(wrong), &people, end);
            return with_status(StatusCode::UNPROCESSABLE_ENTITY, &shown);
        }
    };
    let question = Question {
        after: place(Some(&asked.after))?,
        ..question
    };
    let found = list(&app, &question).await?;
    page(&ShowTrail::of(&asked, Ok(found), &people, end))
}

#[cfg(test)]
#[path = "pages_tests.rs"]
mod tests;
