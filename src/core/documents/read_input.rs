//! Reads inputs, factor references and models from JSON.

use super::amount::{Amount, Origin, Uncertainty};
use super::input::{FactorRef, InlineFactor, Input, ModelUse, OneOrMany};
use super::problem::Problems;
use super::reader::{Fields, Place, number_of, shape, text_of};
use crate::core::domain::{Gas, GasVector};
use serde_json::Value;

/// Reads `{ "value": ..., "unit": ... }`.
pub fn amount(value: &Value, at: &Place, problems: &mut Problems) -> Option<Amount> {
    let mut fields = Fields::open(value, at, problems)?;
    let figure = fields.amount("value", at, problems);
    let unit = fields.required_text("unit", at, problems);
    fields.need("value", at, problems);
    fields.close(at, problems);
    Some(Amount {
        value: figure?,
        unit: unit?,
    })
}

/// The words of [`Origin`].
pub fn origins() -> Vec<(&'static str, Origin)> {
    Origin::ALL
        .into_iter()
        .map(|origin| (origin.name(), origin))
        .collect()
}

/// Evidence ids: 1 to 64 of `A-Z a-z 0-9 . _ -`.
pub fn evidence(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Vec<String> {
    fields.list("evidence", at, problems, |value, place, problems| {
        let text = text_of(value, place, problems)?;
        if !is_evidence_id(text) {
            let detail = format!("\"{text}\" is not an evidence id.");
            problems.add(place, detail, "Use 1 to 64 of A-Z a-z 0-9 . _ and -.");
            return None;
        }
        Some(text.to_owned())
    })
}

/// True if a text can be the id of evidence.
pub fn is_evidence_id(text: &str) -> bool {
    let plain = |b: u8| b.is_ascii_alphanumeric() || matches!(b, b'.' | b'_' | b'-');
    (1..=64).contains(&text.len()) && text.bytes().all(plain)
}

/// A stage, input or co-product key.
pub fn key(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Option<String> {
    let text = fields.required_text("key", at, problems)?;
    let fits = (1..=40).contains(&text.len())
        && text.starts_with(|c: char| c.is_ascii_lowercase())
        && text
            .bytes()
            .all(|b| b.is_ascii_lowercase() || b.is_ascii_digit() || b == b'-');
    if !fits {
        let detail = format!("\"{text}\" is not a key.");
        problems.add(
            at.field("key"),
            detail,
            "Use 1 to 40 of a-z 0-9 and -, beginning with a letter.",
        );
        return None;
    }
    Some(text)
}

/// Reads one input.
pub fn input(value: &Value, at: &Place, problems: &mut Problems) -> Option<Input> {
    let mut fields = Fields::open(value, at, problems)?;
    let key = key(&mut fields, at, problems);
    let factor = fields.part("factor", at, problems, |v, place, problems| {
        one_or_many(v, place, problems, factor_ref)
    });
    let model = fields.part("model", at, problems, |v, place, problems| {
        one_or_many(v, place, problems, model_use)
    });
    let input = Input {
        key: key.clone().unwrap_or_default(),
        label: fields.text("label", at, problems),
        amount: fields.amount("amount", at, problems),
        unit: fields.text("unit", at, problems),
        factor,
        gases: fields.part("gases", at, problems, gases),
        model,
        net_per_gross: fields.number("net_per_gross", at, problems),
        origin: fields.word("origin", &origins(), at, problems),
        estimated_percent: fields.number("estimated_percent", at, problems),
        meter: fields.part("meter", at, problems, |v, place, problems| {
            one_or_many(v, place, problems, |v, place, problems| {
                text_of(v, place, problems).map(str::to_owned)
            })
        }),
        evidence: evidence(&mut fields, at, problems),
        uncertainty: fields.part("uncertainty", at, problems, uncertainty),
        note: fields.text("note", at, problems),
    };
    let by_factor = fields.has("factor") || fields.has("amount") || fields.has("unit");
    let ways = [by_factor, fields.has("gases"), fields.has("model")]
        .into_iter()
        .filter(|way| *way)
        .count();
    if ways != 1 {
        problems.add(
            at,
            "An input is one of: amount, unit and factor; gases; model.",
            "Give exactly one of the three.",
        );
    } else if by_factor {
        for name in ["amount", "unit", "factor"] {
            fields.need(name, at, problems);
        }
    }
    fields.close(at, problems);
    key.map(|_| input)
}

/// Reads one thing or a list of 1 to 1 000.
pub fn one_or_many<T>(
    value: &Value,
    at: &Place,
    problems: &mut Problems,
    read: impl Fn(&Value, &Place, &mut Problems) -> Option<T>,
) -> Option<OneOrMany<T>> {
    match value {
        Value::Array(items) if items.is_empty() => {
            problems.add(at, "The list is empty.", "Give at least one.");
            None
        }
        Value::Array(items) => {
            let before = problems.len();
            let many: Vec<T> = items
                .iter()
                .enumerate()
                .filter_map(|(i, item)| read(item, &at.item(i), problems))
                .collect();
            (problems.len() == before).then_some(OneOrMany::Many(many))
        }
        one => read(one, at, problems).map(OneOrMany::One),
    }
}

/// Reads `edition/row` or an own factor.
pub fn factor_ref(value: &Value, at: &Place, problems: &mut Problems) -> Option<FactorRef> {
    match value {
        Value::String(id) => Some(FactorRef::Id(id.clone())),
        Value::Object(_) => inline_factor(value, at, problems).map(FactorRef::Inline),
        other => {
            let detail = format!("A factor belongs here, not {}.", shape(other));
            problems.add(
                at,
                detail,
                "Give \"edition/row\" or { \"gases\", \"per\", \"citation\" }.",
            );
            None
        }
    }
}

fn inline_factor(value: &Value, at: &Place, problems: &mut Problems) -> Option<InlineFactor> {
    let mut fields = Fields::open(value, at, problems)?;
    let vector = fields.part("gases", at, problems, gases);
    fields.need("gases", at, problems);
    let per = fields.required_text("per", at, problems);
    let citation = fields.required_text("citation", at, problems);
    if citation.as_deref().is_some_and(|text| text.trim().is_empty()) {
        problems.add(
            at.field("citation"),
            "The source is empty.",
            "Say where the figure comes from.",
        );
    }
    let uncertainty = fields.part("uncertainty", at, problems, uncertainty);
    let note = fields.text("note", at, problems);
    fields.close(at, problems);
    Some(InlineFactor {
        gases: vector?,
        per: per?,
        citation: citation?,
        uncertainty,
        note,
    })
}

/// Reads an object of gases, kg each.
pub fn gases(value: &Value, at: &Place, problems: &mut Problems) -> Option<GasVector> {
    let Value::Object(map) = value else {
        problems.add(
            at,
            format!("An object of gases belongs here, not {}.", shape(value)),
            GASES,
        );
        return None;
    };
    if map.is_empty() {
        problems.add(at, "No gas is given.", GASES);
        return None;
    }
    let mut vector = GasVector::ZERO;
    for (name, amount) in map {
        let place = at.field(name);
        match Gas::from_name(name) {
            Some(gas) => vector[gas] = number_of(amount, &place, problems).unwrap_or(0.0),
            None => problems.add(place, format!("There is no gas \"{name}\"."), GASES),
        }
    }
    Some(vector)
}

const GASES: &str = "Use co2_fossil, co2_biogenic, co2_land, ch4_fossil, ch4_biogenic, n2o, or co2e_unsplit for a total alone.";

fn model_use(value: &Value, at: &Place, problems: &mut Problems) -> Option<ModelUse> {
    let mut fields = Fields::open(value, at, problems)?;
    let kind = fields.required_text("kind", at, problems)?;
    let note = fields.text("note", at, problems);
    let mut parameters = value.as_object().cloned().unwrap_or_default();
    parameters.remove("kind");
    parameters.remove("note");
    Some(ModelUse {
        kind,
        note,
        parameters,
    })
}

/// Reads a distribution.
pub fn uncertainty(value: &Value, at: &Place, problems: &mut Problems) -> Option<Uncertainty> {
    let mut fields = Fields::open(value, at, problems)?;
    let kinds = [("lognormal", 0), ("normal", 1), ("triangular", 2), ("uniform", 3)];
    fields.need("kind", at, problems);
    let kind = fields.word("kind", &kinds, at, problems)?;
    let mut number = |name: &'static str| fields.number(name, at, problems);
    let read = match kind {
        0 => Some(Uncertainty::Lognormal {
            gsd: number("gsd"),
            percent_95: number("percent_95"),
        }),
        1 => Some(Uncertainty::Normal {
            sd_percent: number("sd_percent"),
            percent_95: number("percent_95"),
        }),
        2 => match (number("min"), number("mode"), number("max")) {
            (Some(min), Some(mode), Some(max)) => Some(Uncertainty::Triangular { min, mode, max }),
            _ => None,
        },
        _ => match (number("min"), number("max")) {
            (Some(min), Some(max)) => Some(Uncertainty::Uniform { min, max }),
            _ => None,
        },
    };
    fields.close(at, problems);
    let fits = match &read {
        Some(Uncertainty::Lognormal {
            gsd: Some(gsd),
            percent_95: None,
        }) => *gsd >= 1.0 && *gsd <= 100.0,
        Some(Uncertainty::Lognormal {
            gsd: None,
            percent_95: Some(p),
        }) => *p >= 0.0 && *p <= 10_000.0,
        Some(
            Uncertainty::Normal {
                sd_percent: Some(p),
                percent_95: None,
            }
            | Uncertainty::Normal {
                sd_percent: None,
                percent_95: Some(p),
            },
        ) => *p >= 0.0 && *p <= 1_000.0,
        Some(Uncertainty::Triangular { min, mode, max }) => min <= mode && mode <= max && min < max,
        Some(Uncertainty::Uniform { min, max }) => min < max,
        _ => false,
    };
    if !fits {
        problems.add(
            at,
            "The distribution does not fit its kind.",
            "lognormal: gsd of 1 or more, or percent_95; normal: sd_percent or percent_95; triangular: min <= mode <= max; uniform: min < max.",
        );
        return None;
    }
    read
}
