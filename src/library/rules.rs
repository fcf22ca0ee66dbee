//! Rule sets and sets of gas weights: one TOML file each.

use super::reading::Reading;
use crate::core::domain::{Citation, GwpSet, RuleSet};
use serde::Deserialize;
use std::collections::BTreeMap;

/// A file of `gwp/`.
#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Weights {
    id: String,
    title: String,
    ch4_fossil: f64,
    ch4_biogenic: f64,
    n2o: f64,
    source: String,
    status: String,
    note: Option<String>,
}

/// Every set of weights.
pub(super) fn gwp_sets(reading: &mut Reading) -> BTreeMap<String, GwpSet> {
    let mut sets = BTreeMap::new();
    for text in [
        include_str!("gwp/eu-2009-28.toml"),
        include_str!("gwp/eu-2018-2001.toml"),
        include_str!("gwp/ar4.toml"),
        include_str!("gwp/ar5.toml"),
        include_str!("gwp/ar6.toml"),
    ] {
        let Weights {
            id,
            title,
            ch4_fossil,
            ch4_biogenic,
            n2o,
            source,
            status,
            note,
        } = match toml::from_str(text) {
            Ok(weights) => weights,
            Err(error) => {
                reading.problem("gwp", error.to_string());
                continue;
            }
        };
        if [ch4_fossil, ch4_biogenic, n2o]
            .iter()
            .any(|weight| !(weight.is_finite() && *weight > 1.0))
        {
            reading.problem(&id, "a gas weight is not above one");
        }
        let citation = reading.cite(&id, &format!("gas weights {id}"), &source, &status);
        let set = GwpSet {
            id: id.clone(),
            title,
            ch4_fossil,
            ch4_biogenic,
            n2o,
            citation,
            note,
        };
        if sets.insert(id, set).is_some() {
            reading.problem("gwp", "two sets of weights have the same id");
        }
    }
    sets
}

/// Every rule set.
pub(super) fn rule_sets(reading: &mut Reading) -> BTreeMap<String, RuleSet> {
    let mut sets = BTreeMap::new();
    for text in [
        include_str!("rule_sets/eu-2009-28.toml"),
        include_str!("rule_sets/eu-2018-2001.toml"),
        include_str!("rule_sets/inventory-ar6.toml"),
        include_str!("rule_sets/uk-si-2007-3072.toml"),
    ] {
        let set: RuleSet = match toml::from_str(text) {
            Ok(set) => set,
            Err(error) => {
                reading.problem("rule_sets", error.to_string());
                continue;
            }
        };
        citations(reading, &set);
        if let Some(other) = sets.insert(set.id.clone(), set) {
            reading.problem("rule_sets", format!("two rule sets have the id {}", other.id));
        }
    }
    sets
}

fn citations(reading: &mut Reading, set: &RuleSet) {
    let place = format!("rule set {}", set.id);
    reading.published(&place, &place, &set.citation());
    for threshold in &set.thresholds {
        let citation = Citation {
            source: threshold.source.clone(),
            status: threshold.status,
        };
        reading.published(
            &place,
            &format!("{place} threshold {} %", threshold.percent),
            &citation,
        );
    }
    for (name, cited) in set.figures() {
        let Some(cited) = cited else { continue };
        let citation = Citation {
            source: cited.source.clone(),
            status: cited.status,
        };
        reading.published(
            &place,
            &format!("{place} {name} = {} {}", cited.value, cited.unit),
            &citation,
        );
    }
}
