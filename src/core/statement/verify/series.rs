//! Several files of one issuer: each names the one before it by number and hash, so that none can be taken out or put
//! in unseen.

use super::answer::Answer;
use crate::core::documents::statement::Statement;
use std::collections::BTreeMap;

/// Holds statements against each other. Gives the first thing that does not fit, and what a reader should know.
pub fn series(statements: &[Statement]) -> (Option<Answer>, Vec<String>) {
    let mut notes = Vec::new();
    // One issuer, one key at a time: numbers of different issuers may look alike.
    let issuer = |statement: &Statement| {
        let name = statement
            .facts
            .issuer
            .as_ref()
            .and_then(|party| party.name.clone());
        name.unwrap_or_default()
    };
    let mut files: BTreeMap<(String, &str), &Statement> = BTreeMap::new();
    for statement in statements {
        let place = (issuer(statement), statement.statement_no.as_str());
        match files.insert(place, statement) {
            Some(other) if other.hash != statement.hash => return (Some(fork(other, statement)), notes),
            _ => {}
        }
    }
    let mut followed: BTreeMap<(String, &str), &Statement> = BTreeMap::new();
    for ((name, _), statement) in &files {
        let links = statement
            .previous
            .iter()
            .map(|previous| (&previous.statement_no, &previous.hash));
        let links = links.chain(
            statement
                .supersedes
                .iter()
                .map(|old| (&old.statement_no, &old.hash)),
        );
        for (number, hash) in links {
            match files.get(&(name.clone(), number.as_str())) {
                Some(file) if file.hash != *hash => {
                    let broken = Answer::BrokenSeries {
                        statement_no: statement.statement_no.clone(),
                        previous_no: number.clone(),
                        stated: hash.clone(),
                        found: file.hash.clone(),
                    };
                    return (Some(broken), notes);
                }
                Some(_) => {}
                None => notes.push(format!(
                    "Statement {} follows or replaces {number}, which is not among the files.",
                    statement.statement_no
                )),
            }
        }
        if let Some(previous) = &statement.previous {
            let place = (name.clone(), previous.statement_no.as_str());
            if let Some(other) = followed.insert(place, statement) {
                return (Some(fork(other, statement)), notes);
            }
        }
    }
    notes.sort();
    notes.dedup();
    (None, notes)
}

fn fork(one: &Statement, other: &Statement) -> Answer {
    Answer::ForkedSeries {
        one: one.statement_no.clone(),
        other: other.statement_no.clone(),
    }
}
