//! The SQL of the list: one text for each order, each going on after the last line of the page before.

use super::{Question, Sort};
use crate::app::PROGRAM;
use crate::core::documents::canonical;
use crate::pathways::sql::{SummaryRow, fold};
use crate::store::{Connection, OrganisationId, StoreError};

macro_rules! listed {
    ($further:literal, $order:literal) => {
        concat!(
            "SELECT p.id, p.public_id, p.name, p.name_folded, p.feedstock, p.rule_set AS pathway_rule_set, p.example, ",
            "p.created_at, p.updated_at, p.archived_at, r.id AS revision_id, r.number, r.hash, r.rule_set, ",
            "a.hash AS assessment_hash, a.net, a.saving, a.thresholds, a.blocks, a.warnings, a.infos, ",
            "EXISTS (SELECT 1 FROM reasons g WHERE g.pathway_id = p.id AND g.organisation_id = p.organisation_id) AS reasoned ",
            "FROM pathway p ",
            "JOIN revision r ON r.pathway_id = p.id AND r.number = p.current_revision ",
            "AND r.organisation_id = p.organisation_id ",
            "LEFT JOIN assessment a ON a.organisation_id = p.organisation_id AND a.revision_id = r.id ",
            "AND a.rule_set = r.rule_set AND a.program = $2 AND a.settings = $11 ",
            "WHERE p.organisation_id = $1 AND (p.archived_at IS NOT NULL) = $3 ",
            "AND ($4 IS NULL OR p.name_folded LIKE $4 ESCAPE '\\') ",
            "AND ($5 IS NULL OR p.feedstock = $5) AND ($6 IS NULL OR p.rule_set = $6) ",
            "AND ($7 IS NULL OR p.example = $7) ",
            "AND ($12 IS NULL OR p.public_id IN (SELECT value FROM json_each($12))) AND ($8 IS NULL OR ",
            $further,
            ") ORDER BY ",
            $order,
            " LIMIT $10"
        )
    };
}

const BY_UPDATE: &str = listed!(
    "(p.updated_at, p.public_id) < ($8, $9)",
    "p.updated_at DESC, p.public_id DESC"
);
const BY_NAME: &str = listed!(
    "(p.name_folded, p.public_id) > ($8, $9)",
    "p.name_folded, p.public_id"
);
const BY_NET: &str = listed!(
    "(COALESCE(a.net, 1e300), p.public_id) > ($8, $9)",
    "COALESCE(a.net, 1e300), p.public_id"
);
const BY_SAVING: &str = listed!(
    "(COALESCE(a.saving, -1e300), p.public_id) < ($8, $9)",
    "COALESCE(a.saving, -1e300) DESC, p.public_id DESC"
);

/// The statements of this file.
pub(crate) const STATEMENTS: &[&str] = &[BY_UPDATE, BY_NAME, BY_NET, BY_SAVING];

/// Stands in the order where there is no figure.
const NO_FIGURE: f64 = 1e300;

/// A line of the list.
#[derive(sqlx::FromRow)]
pub(super) struct LineRow {
    pub(super) id: i64,
    pub(super) public_id: String,
    pub(super) name: String,
    pub(super) name_folded: String,
    pub(super) feedstock: String,
    pub(super) pathway_rule_set: String,
    pub(super) example: bool,
    pub(super) created_at: i64,
    pub(super) updated_at: i64,
    pub(super) archived_at: Option<i64>,
    pub(super) revision_id: i64,
    pub(super) number: i64,
    pub(super) hash: String,
    /// True if reasons were ever given for its warnings.
    pub(super) reasoned: bool,
    #[sqlx(flatten)]
    pub(super) summary: SummaryRow,
}

/// A place in an order: what the line is sorted by, and its public id.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Place {
    sort: Sort,
    by: By,
    id: String,
}

#[derive(Clone, Debug, PartialEq)]
enum By {
    Time(i64),
    Name(String),
    Figure(f64),
}

/// The letter that tells the order of a place.
fn letter(sort: Sort) -> char {
    match sort {
        Sort::Updated => 'u',
        Sort::Name => 'n',
        Sort::Net => 'g',
        Sort::Saving => 's',
    }
}

impl Place {
    /// The place of a line.
    pub(super) fn of(sort: Sort, row: &LineRow) -> Place {
        let by = match sort {
            Sort::Updated => By::Time(row.updated_at),
            Sort::Name => By::Name(row.name_folded.clone()),
            Sort::Net => By::Figure(row.summary.net.unwrap_or(NO_FIGURE)),
            Sort::Saving => By::Figure(row.summary.saving.unwrap_or(-NO_FIGURE)),
        };
        Place {
            sort,
            by,
            id: row.public_id.clone(),
        }
    }

    /// A text that is safe in a link: order, id, and the rest in hexadecimal.
    pub(super) fn to_text(&self) -> String {
        let by = match &self.by {
            By::Time(millis) => format!("{millis:x}"),
            By::Name(name) => canonical::hex(name.as_bytes()),
            By::Figure(figure) => format!("{:x}", figure.to_bits()),
        };
        format!("{}{}.{by}", letter(self.sort), self.id)
    }

    /// Reads a place of an order.
    pub(super) fn from_text(sort: Sort, text: &str) -> Option<Place> {
        let (id, by) = text.strip_prefix(letter(sort))?.split_once('.')?;
        let id = uuid::Uuid::parse_str(id).ok()?.to_string();
        let by = match sort {
            Sort::Updated => By::Time(i64::from_str_radix(by, 16).ok()?),
            Sort::Name => {
                if by.len() > 4_000 || by.len() % 2 != 0 || !by.is_ascii() {
                    return None;
                }
                let bytes = (0..by.len())
                    .step_by(2)
                    .map(|at| u8::from_str_radix(by.get(at..at + 2)?, 16).ok());
                By::Name(String::from_utf8(bytes.collect::<Option<Vec<u8>>>()?).ok()?)
            }
            Sort::Net | Sort::Saving => {
                let figure = f64::from_bits(u64::from_str_radix(by, 16).ok()?);
                By::Figure(Some(figure).filter(|figure| figure.is_finite())?)
            }
        };
        Some(Place { sort, by, id })
    }
}

/// The lines after a place; of these pathways alone, if they are given (public ids as a JSON list).
pub(super) async fn lines(
    c: &mut Connection,
    who: OrganisationId,
    question: &Question,
    after: Option<&Place>,
    limit: i64,
    settings: &str,
    chosen: Option<&str>,
) -> Result<Vec<LineRow>, StoreError> {
    let text = match question.sort {
        Sort::Updated => BY_UPDATE,
        Sort::Name => BY_NAME,
        Sort::Net => BY_NET,
        Sort::Saving => BY_SAVING,
    };
    let query = sqlx::query_as(text)
        .bind(who.0)
        .bind(PROGRAM)
        .bind(question.archived)
        .bind(question.name.as_deref().map(pattern))
        .bind(question.feedstock.as_deref())
        .bind(question.rule_set.as_deref())
        .bind(question.example);
    let query = match after.map(|place| &place.by) {
        None => query.bind(None::<i64>),
        Some(By::Time(millis)) => query.bind(*millis),
        Some(By::Name(name)) => query.bind(name),
        Some(By::Figure(figure)) => query.bind(*figure),
    };
    Ok(query
        .bind(after.map(|place| place.id.as_str()))
        .bind(limit)
        .bind(settings)
        .bind(chosen)
        .fetch_all(c)
        .await?)
}

/// A pattern that finds a part of a name; `%`, `_` and `\` in it stand for themselves.
fn pattern(part: &str) -> String {
    let mut pattern = String::from("%");
    for letter in fold(part).chars() {
        if matches!(letter, '%' | '_' | '\\') {
            pattern.push('\\');
        }
        pattern.push(letter);
    }
    pattern.push('%');
    pattern
}
