//! Reading the trail: filtered, a page at a time, from the end or from the beginning.

use super::Line;
use super::sql::{self, Kept};
use crate::app::App;
use crate::app::who::Sight;
use crate::store::StoreError;
use jiff::Timestamp;
use serde::Serialize;
use utoipa::ToSchema;
use uuid::Uuid;

/// Lines on a page where no limit is asked for.
const USUAL: u32 = 50;
/// Lines of an export that are read at once.
const TOGETHER: i64 = 500;

/// Which lines.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Question {
    /// Kind of what something was done to, such as `pathway`.
    pub thing: Option<String>,
    /// Its public id.
    pub id: Option<String>,
    /// Public id of the person who did it.
    pub person: Option<Uuid>,
    /// What was done, such as `saved`.
    pub did: Option<String>,
    /// Not earlier than this.
    pub from: Option<Timestamp>,
    /// Earlier than this.
    pub before: Option<Timestamp>,
    /// [`Page::next`] of the page before.
    pub after: Option<i64>,
    /// Lines on the page; 50 when left out.
    pub limit: Option<u32>,
}

/// A line with its hash.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Entry {
    /// The line: what is hashed is its canonical form (RFC 8785), without `hash`.
    #[serde(flatten)]
    pub line: Line,
    /// Hash of the line; the next line names it as `previous`.
    pub hash: String,
}

/// A page of the trail.
#[derive(Clone, Debug, PartialEq)]
pub struct Page {
    /// The lines, last first.
    pub entries: Vec<Entry>,
    /// Where the next page begins.
    pub next: Option<i64>,
}

fn entry(kept: Kept) -> Result<Entry, StoreError> {
    let line = serde_json::from_str(&kept.document).map_err(|_| StoreError::Inconsistent {
        table: "audit_line",
        column: "document",
        row: kept.number,
    })?;
    Ok(Entry {
        line,
        hash: kept.hash,
    })
}

/// What whoever asks sees: all, or the lines of the pathways and statements they were invited to.
fn seen(app: &App) -> sql::Seen {
    match &app.who.sight {
        Sight::All => None,
        Sight::Chosen { pathways, statements } => {
            let json = |ids: &std::collections::BTreeSet<Uuid>| {
                serde_json::to_string(ids).unwrap_or_else(|_| "[]".to_owned())
            };
            Some((json(pathways), json(statements)))
        }
    }
}

/// The last lines that fit a question and that whoever asks may see.
///
/// # Errors
/// When the database fails or a line cannot be read.
pub async fn list(app: &App, question: &Question) -> Result<Page, StoreError> {
    let limit = question.limit.unwrap_or(USUAL);
    let below = question.after.unwrap_or(i64::MAX);
    let mut reader = app.store.reader().await?;
    let mut kept = sql::lines(
        &mut reader,
        app.organisation,
        question,
        &seen(app),
        (0, below),
        true,
        i64::from(limit) + 1,
    )
    .await?;
    let shown = usize::try_from(limit).unwrap_or(usize::MAX);
    let more = kept.len() > shown;
    kept.truncate(shown);
    let next = kept.last().filter(|_| more).map(|last| last.number);
    let entries = kept.into_iter().map(entry).collect::<Result<_, _>>()?;
    Ok(Page { entries, next })
}

/// Number and hash of the last line; 0 and nothing where there is none.
///
/// # Errors
/// When the database fails.
pub async fn head(app: &App) -> Result<(i64, String), StoreError> {
    let mut reader = app.store.reader().await?;
    sql::head(&mut reader, app.organisation).await
}

/// Somebody who stands in the trail.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Person {
    /// Public id.
    pub id: Uuid,
    /// Name at their last line.
    pub name: String,
}

/// Whoever stands in the trail, by name; nobody is named to an auditor from outside.
///
/// # Errors
/// When the database fails.
pub async fn people(app: &App) -> Result<Vec<Person>, StoreError> {
    if app.who.sight != Sight::All {
        return Ok(Vec::new());
    }
    let mut reader = app.store.reader().await?;
    let lines = sql::people(&mut reader, app.organisation).await?;
    let person = |text: String| {
        let line: Line = serde_json::from_str(&text).ok()?;
        Some(Person {
            id: line.by.person?,
            name: line.by.name,
        })
    };
    let mut people: Vec<Person> = lines.into_iter().filter_map(person).collect();
    people.sort_by(|a, b| (&a.name, a.id).cmp(&(&b.name, b.id)));
    Ok(people)
}

/// The line that tells who made a revision of a pathway, if it is among the last of it.
///
/// # Errors
/// When the database fails or a line cannot be read.
pub async fn of_revision(app: &App, pathway: Uuid, revision: i64) -> Result<Option<Line>, StoreError> {
    let question = Question {
        thing: Some("pathway".into()),
        id: Some(pathway.to_string()),
        ..Question::default()
    };
    let made = |line: &Line| {
        matches!(line.did.as_str(), "saved" | "created")
            && line.what.get("revision").and_then(serde_json::Value::as_i64) == Some(revision)
    };
    let page = list(app, &question).await?;
    Ok(page.entries.into_iter().map(|entry| entry.line).find(made))
}

/// The whole trail, or the lines of it that fit a question, from the beginning, some at a time.
pub struct Export {
    app: App,
    question: Question,
    after: i64,
    lines: i64,
    /// Number of the last line of the chain when the export began.
    pub number: i64,
    /// Hash of that line.
    pub hash: String,
}

impl Export {
    /// Begins an export: lines that are added later are not in it.
    ///
    /// # Errors
    /// When the database fails.
    pub async fn begin(app: &App, question: Question) -> Result<Export, StoreError> {
        let (number, hash) = head(app).await?;
        Ok(Export {
            app: app.clone(),
            question,
            after: 0,
            lines: 0,
            number,
            hash,
        })
    }

    /// The next lines: canonical text and hash of each; none at the end.
    ///
    /// # Errors
    /// When the database fails.
    pub async fn next(&mut self) -> Result<Vec<(String, String)>, StoreError> {
        let mut reader = self.app.store.reader().await?;
        let kept = sql::lines(
            &mut reader,
            self.app.organisation,
            &self.question,
            &seen(&self.app),
            (self.after, self.number.saturating_add(1)),
            false,
            TOGETHER,
        )
        .await?;
        if let Some(last) = kept.last() {
            self.after = last.number;
        }
        self.lines += i64::try_from(kept.len()).unwrap_or(i64::MAX);
        Ok(kept.into_iter().map(|kept| (kept.document, kept.hash)).collect())
    }

    /// The closing line: how many lines came, and where the chain ended when the export began.
    pub fn close(&self) -> serde_json::Value {
        serde_json::json!({
            "format": "wheelwort.audit-end/1",
            "lines": self.lines,
            "number": self.number,
            "hash": self.hash,
        })
    }
}
