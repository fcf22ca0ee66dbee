//! Holds the published data of a file against the library of this program: a swapped factor is named.

use super::answer::Answer;
use super::compare::{Compared, Look, compare as differing};
use crate::core::documents::statement::Data;
use crate::core::documents::statement::data::{
    ConstantUsed, DefaultUsed, EditionUsed, FactorUsed, GwpSetUsed, MaterialUsed,
};
use crate::core::domain::Book;
use crate::core::statement::pick::{edition_hash, residue};
use serde::Serialize;
use serde_json::Value;

const EXACT: Look = Look {
    words: true,
    dust: true,
};

/// The first published figure that is another than in the library; notes what the library does not have.
pub(super) fn compare(data: &Data, library: &Book, notes: &mut Vec<String>) -> Option<Answer> {
    order(data)
        .or_else(|| rules(data, library, notes))
        .or_else(|| rows(data, library, notes))
        .or_else(|| tables(data, library))
        .or_else(|| editions(data, library, notes))
}

/// Lists stand in the order of their ids.
fn order(data: &Data) -> Option<Answer> {
    let sorted = [
        (
            "constants",
            data.constants
                .is_sorted_by_key(|used| (used.table.clone(), used.symbol.clone())),
        ),
        (
            "default_values",
            data.default_values.is_sorted_by_key(|used| used.id.clone()),
        ),
        ("editions", data.editions.is_sorted_by_key(|used| used.id.clone())),
        ("factors", data.factors.is_sorted_by_key(|used| used.id.clone())),
        (
            "materials",
            data.materials.is_sorted_by_key(|used| used.id.clone()),
        ),
        (
            "residues",
            data.residues
                .is_sorted_by_key(|used| (used.edition.clone(), used.crop.clone())),
        ),
    ];
    let (name, _) = sorted.into_iter().find(|(_, sorted)| !sorted)?;
    Some(Answer::Reordered {
        pointer: format!("/data/{name}"),
    })
}

fn swapped<T: Serialize>(what: String, stated: &T, published: &T) -> Option<Answer> {
    let (stated, published) = (
        serde_json::to_value(stated).ok()?,
        serde_json::to_value(published).ok()?,
    );
    let (pointer, stated, published) = match differing("", &stated, &published, EXACT)? {
        Compared::Value {
            pointer,
            stated,
            found,
        } => (pointer, super::text(&stated), super::text(&found)),
        Compared::Order { pointer } => (pointer, "in another order".to_owned(), "in its own".to_owned()),
    };
    let field = pointer.strip_prefix('/').unwrap_or(&pointer).to_owned();
    Some(Answer::Swapped {
        what,
        field,
        stated,
        published,
    })
}

fn absent(what: String) -> Option<Answer> {
    let nothing = super::text(&Value::Null);
    Some(Answer::Swapped {
        what,
        field: "the row".to_owned(),
        stated: "there".to_owned(),
        published: nothing,
    })
}

fn rules(data: &Data, library: &Book, notes: &mut Vec<String>) -> Option<Answer> {
    let rule_set = &data.rule_set;
    match library.rule_sets.get(&rule_set.id) {
        None => notes.push(format!(
            "{} ({}) is a rule set of the issuer's own: figures follow from it, but no publication stands behind it here.",
            rule_set.title, rule_set.id
        )),
        Some(published) if published.version != rule_set.version => notes.push(format!(
            "The data of rule set {} in the file are of version {}, here of version {}: figures follow from those in the file.",
            rule_set.id, rule_set.version, published.version
        )),
        Some(published) => {
            let what = format!("rule set {}", rule_set.id);
            if let Some(answer) = swapped(what, rule_set, published) {
                return Some(answer);
            }
        }
    }
    match library.gwp_sets.get(&data.gwp_set.id) {
        None => absent(format!("set of gas weights {}", data.gwp_set.id)),
        Some(published) => swapped(
            format!("set of gas weights {}", data.gwp_set.id),
            &data.gwp_set,
            &GwpSetUsed::of(published),
        ),
    }
}

fn rows(data: &Data, library: &Book, notes: &mut Vec<String>) -> Option<Answer> {
    let known = |id: &str| {
        id.split_once('/')
            .is_some_and(|(edition, _)| library.editions.contains_key(edition))
    };
    for used in &data.factors {
        if !known(&used.id) {
            notes.push(format!(
                "The factor {} is of an edition that this program does not have.",
                used.id
            ));
            continue;
        }
        let what = format!("factor {}", used.id);
        let Some(published) = library.factor(&used.id) else {
            return absent(what);
        };
        let named = used
            .also
            .iter()
            .all(|also| library.factor(also).is_some_and(|row| row.id == used.id));
        if !named {
            return absent(format!("other name of factor {}", used.id));
        }
        // Names and use of the row in this pathway are not of the publication.
        let used_alone = FactorUsed {
            also: Vec::new(),
            for_comparison: false,
            ..used.clone()
        };
        if let Some(answer) = swapped(what, &used_alone, &FactorUsed::of(published)) {
            return Some(answer);
        }
    }
    for used in &data.default_values {
        if !known(&used.id) {
            notes.push(format!(
                "The default {} is of an edition that this program does not have.",
                used.id
            ));
            continue;
        }
        let what = format!("default {}", used.id);
        let Some(published) = library.pathway_default(&used.id) else {
            return absent(what);
        };
        let used_alone = DefaultUsed {
            for_comparison: false,
            ..used.clone()
        };
        if let Some(answer) = swapped(what, &used_alone, &DefaultUsed::of(published)) {
            return Some(answer);
        }
    }
    for used in &data.materials {
        let what = format!("material {}", used.id);
        let Some(published) = library.materials.get(&used.id) else {
            return absent(what);
        };
        if let Some(answer) = swapped(what, used, &MaterialUsed::of(published)) {
            return Some(answer);
        }
    }
    None
}

fn tables(data: &Data, library: &Book) -> Option<Answer> {
    for used in &data.constants {
        let what = format!("figure {} of {}", used.symbol, used.table);
        let published = match used.table.split_once('/') {
            Some(("soils", edition)) => library
                .soils
                .get(edition)
                .and_then(|soil| soil.constants.get(&used.symbol)),
            _ => library.land.get(&used.symbol),
        };
        let Some(published) = published else {
            return absent(what);
        };
        let published = ConstantUsed::of(&used.table, &used.symbol, published);
        if let Some(answer) = swapped(what, used, &published) {
            return Some(answer);
        }
    }
    for used in &data.residues {
        let what = format!("residues of {} in {}", used.crop, used.edition);
        let published = library
            .soils
            .get(&used.edition)
            .and_then(|soil| soil.residues.get(&used.crop));
        let Some(published) = published else {
            return absent(what);
        };
        if let Some(answer) = swapped(what, used, &residue(&used.edition, &used.crop, published)) {
            return Some(answer);
        }
    }
    None
}

fn editions(data: &Data, library: &Book, notes: &mut Vec<String>) -> Option<Answer> {
    for used in &data.editions {
        let Some(published) = library.editions.get(&used.id) else {
            notes.push(format!("The edition {} is not in this program.", used.id));
            continue;
        };
        if used.hash != edition_hash(published, library) {
            notes.push(format!(
                "The edition {} here has another hash: every row that the statement uses was compared alone.",
                used.id
            ));
        }
        let line = EditionUsed {
            id: published.id.clone(),
            title: published.title.clone(),
            source: published.citation.source.clone(),
            status: published.citation.status,
            valid_from: published.valid_from,
            valid_to: published.valid_to,
            hash: used.hash.clone(),
        };
        if let Some(answer) = swapped(format!("edition {}", used.id), used, &line) {
            return Some(answer);
        }
    }
    None
}
