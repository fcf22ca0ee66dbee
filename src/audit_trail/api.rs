//! The API of the audit trail: listed a page at a time, and exported whole, so that somebody else can verify it.
#![allow(
    unused_qualifications,
    reason = "utoipa's macro writes the types of queries in full"
)]

use super::{Entry, Export, Question, list};
use crate::app::App;
use crate::store::StoreError;
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::answers::file;
use crate::web::csv::Table;
use crate::web::extract::Query;
use crate::web::paging::{self, Page};
use axum::body::{Body, Bytes};
use axum::extract::OriginalUri;
use axum::response::Response;
use jiff::Timestamp;
use jiff::civil::Date;
use jiff::tz::TimeZone;
use serde::Deserialize;
use tokio::sync::mpsc;
use tokio_stream::wrappers::ReceiverStream;
use utoipa::IntoParams;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

/// The routes of this file.
pub fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(lines))
        .routes(routes!(export_ndjson))
        .routes(routes!(export_csv))
}

/// Which lines.
#[derive(Clone, Debug, Default, Deserialize, IntoParams)]
#[serde(default, deny_unknown_fields)]
#[into_params(parameter_in = Query)]
pub(super) struct Filter {
    /// Kind of what something was done to, such as `pathway`.
    pub(super) thing: Option<String>,
    /// Its id.
    pub(super) id: Option<String>,
    /// Id of the person who did it.
    #[param(format = "uuid")]
    pub(super) person: Option<String>,
    /// What was done, such as `saved`.
    pub(super) did: Option<String>,
    /// From this day (UTC) or moment on.
    #[param(example = "2026-07-01")]
    pub(super) from: Option<String>,
    /// To the end of this day (UTC), or to this moment and not later.
    #[param(example = "2027-06-30")]
    pub(super) to: Option<String>,
}

/// What is wrong with a filter: the name of the field, and a sentence with the way out.
pub(super) struct WrongFilter {
    pub(super) field: &'static str,
    pub(super) words: String,
}

impl Filter {
    /// The question that is asked; a filter that is left empty asks nothing.
    pub(super) fn question(&self) -> Result<Question, WrongFilter> {
        let given = |text: &Option<String>| {
            let text = text.as_deref().map(str::trim).filter(|text| !text.is_empty());
            text.map(str::to_owned)
        };
        let person = match given(&self.person) {
            None => None,
            Some(text) => Some(text.parse().map_err(|_| WrongFilter {
                field: "person",
                words: "\"person\" is not the id of a person. Take it from a line, or leave it out.".into(),
            })?),
        };
        let moment = |field, text: &Option<String>| match given(text) {
            None => Ok(None),
            Some(text) => span(&text).map(Some).ok_or_else(|| WrongFilter {
                field,
                words: format!(
                    "\"{field}\" is not a day or a moment. Give it as 2027-06-30 or as 2027-06-30T12:00:00Z."
                ),
            }),
        };
        let (from, to) = (moment("from", &self.from)?, moment("to", &self.to)?);
        Ok(Question {
            thing: given(&self.thing),
            id: given(&self.id),
            person,
            did: given(&self.did),
            from: from.map(|(begin, _)| begin),
            before: to.map(|(_, end)| end),
            after: None,
            limit: None,
        })
    }
}

/// Where a day or a moment begins, and where what comes after it does; records keep milliseconds.
fn span(text: &str) -> Option<(Timestamp, Timestamp)> {
    if let Ok(day) = text.parse::<Date>()
        && text.len() == 10
    {
        let begin = |day: Date| Some(day.to_zoned_datetime(TimeZone::UTC).ok()?.timestamp());
        return Some((begin(day)?, begin(day.tomorrow().ok()?)?));
    }
    let moment = text.parse::<Timestamp>().ok()?;
    let next = Timestamp::from_millisecond(moment.as_millisecond().checked_add(1)?).ok()?;
    Some((moment, next))
}

/// Which lines, and which page of them.
#[derive(Debug, Deserialize, IntoParams)]
#[serde(deny_unknown_fields)]
#[into_params(parameter_in = Query)]
struct PageOf {
    /// Kind of what something was done to, such as `pathway`.
    thing: Option<String>,
    /// Its id.
    id: Option<String>,
    /// Id of the person who did it.
    #[param(format = "uuid")]
    person: Option<String>,
    /// What was done, such as `saved`.
    did: Option<String>,
    /// From this day (UTC) or moment on.
    #[param(example = "2026-07-01")]
    from: Option<String>,
    /// To the end of this day (UTC), or to this moment and not later.
    #[param(example = "2027-06-30")]
    to: Option<String>,
    /// Entries on the page.
    #[param(minimum = 1, maximum = 200, default = 50)]
    limit: Option<u32>,
    /// `next` of the page before.
    after: Option<String>,
}

fn wrong(filter: WrongFilter) -> Refusal {
    Refusal::bad_request(filter.words)
}

/// Number of a line, as `next` of a page gives it.
pub(super) fn place(after: Option<&str>) -> Result<Option<i64>, Refusal> {
    let number = |text: &str| text.parse::<i64>().ok().filter(|number| *number >= 1);
    match after {
        None | Some("") => Ok(None),
        Some(text) => number(text).map(Some).ok_or_else(|| {
            Refusal::bad_request("\"after\" is not a place in this list. Take it from the page before.")
        }),
    }
}

/// The audit trail
///
/// Who did what, when, from where and why; the last line first. Each line names the hash of the one before. Auditors from
/// outside see the lines of what they were invited to.
#[utoipa::path(get, path = "/audit-trail", tag = "audit trail", params(PageOf),
    responses((status = 200, description = "A page of lines.", body = Page<Entry>,
        headers(("Link" = String, description = "`rel=\"next\"`: the next page, if there is one.")))))]
async fn lines(
    Actor { app, .. }: Actor<CanRead>,
    OriginalUri(uri): OriginalUri,
    Query(ask): Query<PageOf>,
) -> Result<Response, Refusal> {
    let filter = Filter {
        thing: ask.thing,
        id: ask.id,
        person: ask.person,
        did: ask.did,
        from: ask.from,
        to: ask.to,
    };
    let question = Question {
        after: place(ask.after.as_deref())?,
        limit: Some(paging::limit(ask.limit)?),
        ..filter.question().map_err(wrong)?
    };
    let page = list(&app, &question).await?;
    Ok(Page {
        items: page.entries,
        next: page.next.map(|next| next.to_string()),
    }
    .answer(&uri))
}

/// The audit trail as lines of JSON
///
/// From the first line on. Each line of the file is the canonical form (RFC 8785) of a line of the trail, without the line
/// end exactly the bytes that are hashed (SHA-256): without filters, `previous` of each line is the hash of the line above
/// it, numbers go up by one, and the closing line (`wheelwort.audit-end/1`) carries number and hash of the last line of the
/// chain and says how many lines came. A file without it broke off. Keep number and hash: they show later whether the
/// chain was cut.
#[utoipa::path(get, path = "/audit-trail.ndjson", tag = "audit trail", params(Filter),
    responses((status = 200, description = "A `Line` on each line, then the closing line.", body = String,
        content_type = "application/x-ndjson")))]
async fn export_ndjson(
    Actor { app, .. }: Actor<CanRead>,
    Query(filter): Query<Filter>,
) -> Result<Response, Refusal> {
    let export = Export::begin(&app, filter.question().map_err(wrong)?).await?;
    let body = sent(export, String::new(), |lines| {
        lines.into_iter().map(|(text, _)| text + "\n").collect()
    });
    Ok(file("audit-trail.ndjson", "application/x-ndjson", body))
}

const COLUMNS: [&str; 13] = [
    "number", "at", "by", "person", "via", "label", "from", "did", "thing", "id", "what", "reason", "hash",
];

/// The audit trail as a table
///
/// From the first line on. Texts that a spreadsheet would take for a formula begin with an apostrophe: verify the chain from
/// the lines of JSON, not from here.
#[utoipa::path(get, path = "/audit-trail.csv", tag = "audit trail", params(Filter),
    responses((status = 200, description = "A table.", body = String, content_type = "text/csv; charset=utf-8")))]
async fn export_csv(
    Actor { app, .. }: Actor<CanRead>,
    Query(filter): Query<Filter>,
) -> Result<Response, Refusal> {
    let export = Export::begin(&app, filter.question().map_err(wrong)?).await?;
    let body = sent(export, Table::new(&COLUMNS).csv(), |lines| {
        table(&lines).csv_rows()
    });
    Ok(file("audit-trail.csv", "text/csv; charset=utf-8", body))
}

fn table(lines: &[(String, String)]) -> Table {
    let mut table = Table::new(&COLUMNS);
    for (text, hash) in lines {
        let Ok(line) = serde_json::from_str::<super::Line>(text) else {
            continue;
        };
        let texts = [
            line.number.to_string(),
            line.at.to_string(),
            line.by.name,
            line.by.person.map(|id| id.to_string()).unwrap_or_default(),
            line.by.via,
            line.by.label,
            line.by.from,
            line.did,
            line.thing,
            line.id,
            line.what.to_string(),
            line.reason.unwrap_or_default(),
            hash.clone(),
        ];
        table.rows.push(texts.map(Into::into).into());
    }
    table
}

/// An export as a body that is read while it is sent; NDJSON ends with the closing line.
fn sent(
    mut export: Export,
    head: String,
    shape: impl Fn(Vec<(String, String)>) -> String + Send + 'static,
) -> Body {
    let (pieces, body) = mpsc::channel::<Result<Bytes, StoreError>>(4);
    let is_table = !head.is_empty();
    tokio::spawn(async move {
        if is_table && pieces.send(Ok(head.into())).await.is_err() {
            return;
        }
        loop {
            let piece = match export.next().await {
                Ok(lines) if lines.is_empty() => break,
                Ok(lines) => Ok(Bytes::from(shape(lines))),
                Err(error) => {
                    tracing::error!(%error, "an export of the audit trail broke off");
                    Err(error)
                }
            };
            let broken = piece.is_err();
            if pieces.send(piece).await.is_err() || broken {
                return;
            }
        }
        if !is_table {
            let _ = pieces.send(Ok(format!("{}\n", export.close()).into())).await;
        }
    });
    Body::from_stream(ReceiverStream::new(body))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn days_and_moments_are_read() {
        let (begin, end) = span("2027-06-30").expect("a day");
        assert_eq!(begin.to_string(), "2027-06-30T00:00:00Z");
        assert_eq!(end.to_string(), "2027-07-01T00:00:00Z");
        let (begin, end) = span("2027-06-30T12:00:00+02:00").expect("a moment");
        assert_eq!(begin.to_string(), "2027-06-30T10:00:00Z");
        assert_eq!(end.as_millisecond() - begin.as_millisecond(), 1);
        for wrong in ["", "30.6.2027", "2027-02-30", "2027-06-30T12:00", "9999-12-31"] {
            assert!(span(wrong).is_none(), "{wrong}");
        }
    }
}
