//! The items of a statement and the laws that ask for them: two tables with their sources.

use super::reading::{Reading, Row};
use crate::core::documents::statement::facts::Law;
use crate::core::domain::{Citation, Status};
use crate::core::statement::items::{Asked, Item, Items, LawLine, Place};

/// Both tables.
pub(super) fn read(reading: &mut Reading) -> Items {
    let text = include_str!("statement_items.csv");
    let columns = [
        "id", "section", "item", "must", "good", "why", "source", "status", "place", "pointer",
    ];
    let rows = reading.rows("statement_items.csv", text, &columns);
    let items = rows.iter().map(|row| item(reading, row)).collect();
    let text = include_str!("statement_laws.csv");
    let columns = ["law", "title", "rule_sets", "keep_years", "source", "status"];
    let rows = reading.rows("statement_laws.csv", text, &columns);
    let laws = rows.iter().filter_map(|row| law(reading, row)).collect();
    Items { items, laws }
}

fn named(word: &str) -> Option<Law> {
    Law::ALL.iter().copied().find(|law| law.name() == word)
}

/// Where an item is asked for. These are no figures: one of our own is allowed, and a recalled one is said so where it
/// stands, not in the list of figures from memory.
fn citation(reading: &mut Reading, row: &Row) -> Citation {
    let statuses = [Status::Read, Status::Memory, Status::Own];
    let status = statuses
        .into_iter()
        .find(|status| status.word() == row.text("status"));
    let source = row.text("source").to_owned();
    if source.is_empty() || status.is_none() {
        reading.problem(&row.place(), "source or status is missing or not known");
    }
    Citation {
        source,
        status: status.unwrap_or(Status::Own),
    }
}

fn item(reading: &mut Reading, row: &Row) -> Item {
    let text = |column: &str| row.text(column).to_owned();
    let must = match row.text("must") {
        "ALL" => Asked::Always,
        words => {
            let mut laws = Vec::new();
            for word in words.split_whitespace() {
                match named(word) {
                    Some(law) => laws.push(law),
                    None => reading.problem(&row.place(), format!("there is no law \"{word}\"")),
                }
            }
            Asked::By(laws)
        }
    };
    let place = match row.text("place") {
        "statement" => Place::Statement,
        "pathway" => Place::Pathway,
        "stage" => Place::Stage,
        "issue" => Place::Issue,
        other => {
            reading.problem(&row.place(), format!("there is no place \"{other}\""));
            Place::Statement
        }
    };
    Item {
        id: text("id"),
        section: text("section"),
        item: text("item"),
        must,
        good: row.text("good") == "yes",
        why: text("why"),
        place,
        pointer: text("pointer"),
        citation: citation(reading, row),
    }
}

fn law(reading: &mut Reading, row: &Row) -> Option<LawLine> {
    let Some(law) = named(row.text("law")) else {
        reading.problem(&row.place(), "the law is not known");
        return None;
    };
    let keep_years = row.some("keep_years").and_then(|years| {
        let read = years.parse().ok();
        if read.is_none() {
            reading.problem(&row.place(), "keep_years is no whole number");
        }
        read
    });
    Some(LawLine {
        law,
        title: row.text("title").to_owned(),
        rule_sets: row
            .text("rule_sets")
            .split_whitespace()
            .map(str::to_owned)
            .collect(),
        keep_years,
        citation: citation(reading, row),
    })
}
