//! Where a figure comes from, and whether anybody has read it there.

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// How sure we are that a figure stands in its source.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Status {
    /// Seen in a text of the source.
    Read,
    /// Recalled; nobody has read it at its source. Pages and lists say so.
    Memory,
    /// Worked out from other figures; the source says how.
    #[serde(alias = "computed")]
    Calculated,
    /// Given by the person who entered the document (a supplier's figure, an own measurement).
    Own,
}

impl Status {
    /// The word used in tables and pages.
    pub fn word(self) -> &'static str {
        match self {
            Status::Read => "read",
            Status::Memory => "memory",
            Status::Calculated => "calculated",
            Status::Own => "own",
        }
    }
}

/// A source in words (document, table, point) and its status.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Citation {
    /// Document, table and point.
    pub source: String,
    /// Whether the figure was read there.
    pub status: Status,
}

/// A figure that carries its unit and its source.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Cited {
    /// The figure, in `unit`.
    pub value: f64,
    /// Unit as printed.
    pub unit: String,
    /// Document, table and point.
    pub source: String,
    /// Whether the figure was read there.
    pub status: Status,
    /// What a reader should know before using it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}
