//! Reads the supplier's terms of bought fuel.

use crate::core::documents::pathway::{Stated, StatedTerm, ValueKind};
use crate::core::documents::problem::Problems;
use crate::core::documents::read_input::{amount, evidence};
use crate::core::documents::reader::{Fields, Place, shape};
use crate::core::domain::Term;
use serde_json::Value;
use std::collections::BTreeMap;

/// Reads the terms, each with how the supplier found it.
pub fn stated(value: &Value, at: &Place, problems: &mut Problems) -> Option<Stated> {
    let mut fields = Fields::open(value, at, problems)?;
    let rule_set = fields.required_text("rule_set", at, problems);
    let place = at.field("terms");
    let mut terms = BTreeMap::new();
    match fields.take("terms") {
        Some(Value::Object(map)) => {
            for (name, term) in map {
                let place = place.field(name);
                if Term::from_name(name).is_none() {
                    let known = Term::ALL.map(Term::name).join(", ");
                    problems.add(
                        place,
                        format!("There is no term \"{name}\"."),
                        format!("Use one of: {known}."),
                    );
                } else if let Some(term) = stated_term(term, &place, problems) {
                    terms.insert(name.clone(), term);
                }
            }
        }
        Some(other) => {
            problems.add(
                place,
                format!("An object belongs here, not {}.", shape(other)),
                "Give `{ \"e_ec\": ... }`.",
            );
        }
        None => Fields::missing("terms", at, problems),
    }
    let stated = Stated {
        proof: fields.text("proof", at, problems),
        issuer: fields.text("issuer", at, problems),
        rule_set: rule_set.clone().unwrap_or_default(),
        lhv: fields.part("lhv", at, problems, amount),
        plant_started: fields.day("plant_started", at, problems),
        covers: fields.part("covers", at, problems, amount),
        evidence: evidence(&mut fields, at, problems),
        terms,
    };
    fields.close(at, problems);
    rule_set.map(|_| stated)
}

fn stated_term(value: &Value, at: &Place, problems: &mut Problems) -> Option<StatedTerm> {
    let mut fields = Fields::open(value, at, problems)?;
    let kinds = [
        ("default", ValueKind::Default),
        ("regional", ValueKind::Regional),
        ("actual", ValueKind::Actual),
    ];
    for name in ["g_co2e_per_mj", "value_kind"] {
        fields.need(name, at, problems);
    }
    let figure = fields.number("g_co2e_per_mj", at, problems);
    let value_kind = fields.word("value_kind", &kinds, at, problems);
    fields.close(at, problems);
    Some(StatedTerm {
        g_co2e_per_mj: figure?,
        value_kind: value_kind?,
    })
}
