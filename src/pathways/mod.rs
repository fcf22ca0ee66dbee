//! Pathways and their revisions: what can be done with them. Each function is one use case: it evaluates first,
//! then writes in one transaction or not at all. Rights and the audit line come in with the people who ask.

pub mod api;
pub mod assess;
pub mod blend;
pub mod changes;
mod defaults;
mod error;
mod examples;
pub mod list;
pub mod pages;
mod read;
mod reasons;
pub mod rows;
mod save;
mod sound;
mod sql;

pub use assess::{AssessmentBytes, Reassessed, assessment, face, reassess_all};
pub use changes::{Change, Kind};
pub use defaults::{Defaults, defaults};
pub use error::{PathwayError, What};
pub use examples::{load_examples, remove_examples};
pub use list::{Line, Page, Question, Sort, list};
pub use read::{
    FactorUse, Revision, Stored, changes, read, revision, revisions, rows_differ, stage, uses_of_factor,
};
pub use reasons::{MOST_REASONS, Reasons, ReasonsDocument, put_reasons, reasons};
pub use save::{archive, create, delete_stage, put_stage, replace, restore};
pub use sound::{Damage, damaged};

use crate::core::documents::assessment::ThresholdResult;
use crate::store::StoreError;
use jiff::Timestamp;
use serde::Serialize;
use utoipa::ToSchema;
use uuid::Uuid;

/// Which revision the person who saves has seen.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Expected {
    /// By the hash of its document, as `If-Match` carries it.
    Hash(String),
    /// By number.
    Number(i64),
    /// Whichever is current.
    Any,
}

impl Expected {
    fn fits(&self, number: i64, hash: &str) -> bool {
        match self {
            Expected::Hash(seen) => seen == hash,
            Expected::Number(seen) => *seen == number,
            Expected::Any => true,
        }
    }

    /// `Conflict` unless the current revision, `number` with `hash`, is the expected one.
    fn check(&self, number: i64, hash: &str) -> Result<(), PathwayError> {
        self.fits(number, hash)
            .then_some(())
            .ok_or_else(|| PathwayError::Conflict {
                revision: number,
                hash: hash.to_owned(),
            })
    }
}

/// The short form of an assessment, for lists.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Summary {
    /// Id of the rule set.
    pub rule_set: String,
    /// g CO2e per MJ of fuel.
    pub net_g_co2e_per_mj: f64,
    /// Saving against the baseline, %; null where none is printed.
    pub saving_percent: Option<f64>,
    /// Minimum savings that apply.
    pub thresholds: Vec<ThresholdResult>,
    /// Findings that stop a statement.
    pub blocks: u32,
    /// Findings that want a written reason.
    pub warnings: u32,
    /// Findings that inform.
    pub infos: u32,
    /// Hash of the whole assessment, before reasons are put on its findings.
    pub assessment_hash: String,
}

/// What saving made.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Saved {
    /// Public id of the pathway.
    pub id: Uuid,
    /// Number of the current revision, from 1.
    pub revision: i64,
    /// Hash of its canonical document: the entity tag.
    pub hash: String,
    /// When it was saved.
    #[schema(value_type = String, format = DateTime)]
    pub saved_at: Timestamp,
    /// False when the document was the current one already: then nothing was written.
    pub changed: bool,
    /// The assessment in short.
    pub assessment: Summary,
}

/// Every SQL text of pathways.
pub(crate) fn statements() -> Vec<&'static str> {
    [sql::STATEMENTS, rows::sql::STATEMENTS, list::sql::STATEMENTS].concat()
}

fn time(millis: i64, table: &'static str, column: &'static str, row: i64) -> Result<Timestamp, StoreError> {
    Timestamp::from_millisecond(millis).map_err(|_| StoreError::Inconsistent { table, column, row })
}

fn public_id(text: &str, row: i64) -> Result<Uuid, StoreError> {
    Uuid::parse_str(text).map_err(|_| StoreError::Inconsistent {
        table: "pathway",
        column: "public_id",
        row,
    })
}
