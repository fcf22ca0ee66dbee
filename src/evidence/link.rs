//! A record as pages show it beside a figure: a link with what tells one file from another.

use super::Record;
use crate::clock::day_of;
use crate::web::extract::megabytes;
use crate::web::filters::short_day;
use crate::web::links;

/// A record as pages show it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct EvidenceLink {
    /// Id.
    pub id: String,
    /// Address of its page.
    pub href: String,
    /// Name of the file; empty where no such evidence is here.
    pub file_name: String,
    /// Size in words.
    pub size: String,
    /// The first signs of its hash.
    pub short_hash: String,
    /// Who attached it.
    pub by: String,
    /// The day, in words.
    pub day: String,
}

impl EvidenceLink {
    /// A record as a link.
    pub fn of(record: &Record) -> EvidenceLink {
        EvidenceLink {
            id: record.id.clone(),
            href: links::evidence(&record.id),
            file_name: record.file_name.clone(),
            size: size_words(record.size),
            short_hash: short_hash(&record.hash),
            by: record.attached_by.clone(),
            day: day_words(record),
        }
    }

    /// An id that nothing is recorded under.
    pub fn unknown(id: &str) -> EvidenceLink {
        EvidenceLink {
            id: id.to_owned(),
            href: links::evidence(id),
            file_name: String::new(),
            size: String::new(),
            short_hash: String::new(),
            by: String::new(),
            day: String::new(),
        }
    }

    /// True if there is such evidence.
    pub fn is_known(&self) -> bool {
        !self.file_name.is_empty()
    }
}

/// A size in words.
pub(super) fn size_words(bytes: i64) -> String {
    let bytes = usize::try_from(bytes).unwrap_or(0);
    match bytes {
        0..1_000 => format!("{bytes} bytes"),
        1_000..100_000 => match (bytes / 100 % 10, bytes / 1_000) {
            (0, whole) => format!("{whole} kB"),
            (part, whole) => format!("{whole}.{part} kB"),
        },
        100_000..1_000_000 => format!("{} kB", bytes / 1_000),
        _ => megabytes(bytes),
    }
}

/// The first twelve digits of a hash: enough to compare by eye.
pub(super) fn short_hash(hash: &str) -> String {
    let digits = hash.strip_prefix("sha256:").unwrap_or(hash);
    digits.chars().take(12).collect()
}

/// The day it was attached, in words.
pub(super) fn day_words(record: &Record) -> String {
    short_day(day_of(record.attached_at))
}
