//! Reads a pathway document from JSON: its shape, its keys, its words. What the figures mean is the engine's matter.

mod flows;
mod records;
mod stage;
mod stated;

use super::pathway::{DefaultKey, FORMAT, OwnMaterial, Pathway, Period, PeriodKind};
use super::problem::Problems;
use super::read_input::amount;
use super::reader::{Fields, Place, nearest, shape, text_of, unique, word_of};
use super::{Amount, json};
use crate::core::domain::StageKind;
use crate::core::units::{Dimension, Quantity};
use serde_json::Value;
use stage::stage;
use std::collections::BTreeMap;

pub use stage::MOST_INPUTS;

/// At most this many stages in a pathway: far above any real chain.
pub const MOST_STAGES: usize = 300;

impl Pathway {
    /// Reads the bytes of a document.
    ///
    /// # Errors
    /// Everything that is wrong with its shape, each with its pointer.
    pub fn from_bytes(bytes: &[u8]) -> Result<Pathway, Problems> {
        Pathway::from_value(&json::parse(bytes)?)
    }

    /// Reads a JSON value.
    ///
    /// # Errors
    /// Everything that is wrong with its shape, each with its pointer.
    pub fn from_value(value: &Value) -> Result<Pathway, Problems> {
        let mut problems = Problems::default();
        match pathway(value, &mut problems) {
            Some(pathway) if problems.is_empty() => Ok(pathway),
            _ => Err(problems),
        }
    }
}

fn pathway(value: &Value, problems: &mut Problems) -> Option<Pathway> {
    let at = &Place::ROOT;
    let mut fields = Fields::open(value, at, problems)?;
    let format = fields.required_text("format", at, problems);
    if let Some(found) = format.as_deref().filter(|found| *found != FORMAT) {
        let remedy = format!("This program reads \"{FORMAT}\".");
        problems.add(
            at.field("format"),
            format!("\"{found}\" is not a format this program reads."),
            remedy,
        );
        return None;
    }
    let name = fields.required_text("name", at, problems);
    if name
        .as_deref()
        .is_some_and(|name| name.trim().is_empty() || name.chars().count() > 200)
    {
        problems.add(
            at.field("name"),
            "The name is empty or longer than 200 letters.",
            "Give 1 to 200 letters.",
        );
    }
    let example = fields.flag("example", at, problems).unwrap_or(false);
    let note = fields.text("note", at, problems);
    let feedstock = fields.required_text("feedstock", at, problems);
    fields.need("period", at, problems);
    let period = fields.part("period", at, problems, period);
    let rule_set = fields.required_text("rule_set", at, problems);
    let plant_started = fields.day("plant_started", at, problems);
    let plant_capacity_per_year = fields
        .take("plant_capacity_per_year")
        .and_then(|v| capacity(v, &at.field("plant_capacity_per_year"), problems));
    let materials = fields.list("materials", at, problems, own_material);
    let defaults = fields
        .take("defaults")
        .map(|v| defaults(v, &at.field("defaults"), problems))
        .unwrap_or_default();
    let kinds: Vec<_> = StageKind::ALL
        .into_iter()
        .map(|kind| (kind.name(), kind))
        .collect();
    let not_covered = fields.list("not_covered", at, problems, |v, place, problems| {
        word_of(v, &kinds, place, problems)
    });
    let audits = fields.list("audits", at, problems, records::audit);
    fields.need("stages", at, problems);
    let count = value.get("stages").and_then(Value::as_array).map_or(0, Vec::len);
    let stages = if count > MOST_STAGES {
        fields.take("stages");
        let detail = format!("The pathway has {count} stages.");
        problems.add(at.field("stages"), detail, format!("Give at most {MOST_STAGES}."));
        Vec::new()
    } else {
        fields.list("stages", at, problems, stage)
    };
    fields.close(at, problems);
    unique(
        stages.iter().map(|stage| stage.key.as_str()),
        &at.field("stages"),
        "key",
        problems,
    );
    unique(
        materials.iter().map(|material| material.id.as_str()),
        &at.field("materials"),
        "id",
        problems,
    );
    records::known_stages(&audits, &stages, at, problems);
    Some(Pathway {
        format: format?,
        name: name?,
        example,
        note,
        feedstock: feedstock?,
        period: period?,
        rule_set: rule_set?,
        plant_started,
        plant_capacity_per_year,
        materials,
        defaults,
        not_covered,
        audits,
        stages,
    })
}

fn capacity(value: &Value, at: &Place, problems: &mut Problems) -> Option<Amount> {
    let amount = amount(value, at, problems)?;
    if amount.value <= 0.0 {
        let detail = format!("A capacity of {} {} makes nothing.", amount.value, amount.unit);
        problems.add(
            at.field("value"),
            detail,
            "Give what the plant can make in a year.",
        );
        return None;
    }
    let wanted = [
        Dimension::VOLUME,
        Dimension::MASS,
        Dimension::ENERGY,
        Dimension::ENERGY_NET,
    ];
    match Quantity::read(amount.value, &amount.unit) {
        Ok(read) if wanted.contains(&read.dimension) => Some(amount),
        _ => {
            let detail = format!("\"{}\" is no volume, mass or energy.", amount.unit);
            problems.add(
                at.field("unit"),
                detail,
                "Give it in m3, t or GJ; a year is understood.",
            );
            None
        }
    }
}

fn period(value: &Value, at: &Place, problems: &mut Problems) -> Option<Period> {
    let mut fields = Fields::open(value, at, problems)?;
    let kinds = [
        ("calendar", PeriodKind::Calendar),
        ("campaign", PeriodKind::Campaign),
    ];
    for name in ["from", "to"] {
        fields.need(name, at, problems);
    }
    let from = fields.day("from", at, problems);
    let to = fields.day("to", at, problems);
    let kind = fields.word("kind", &kinds, at, problems);
    fields.close(at, problems);
    let (from, to) = (from?, to?);
    if to < from {
        problems.add(
            at.field("to"),
            format!("The period ends on {to}, before it begins on {from}."),
            "Swap the days.",
        );
    }
    Some(Period { from, to, kind })
}

fn own_material(value: &Value, at: &Place, problems: &mut Problems) -> Option<OwnMaterial> {
    let mut fields = Fields::open(value, at, problems)?;
    let id = fields.required_text("id", at, problems);
    let name = fields.required_text("name", at, problems);
    let material = OwnMaterial {
        id: id.clone().unwrap_or_default(),
        name: name.clone().unwrap_or_default(),
        lhv_dry: fields.part("lhv_dry", at, problems, amount),
        carbon_percent_dry: fields.percent("carbon_percent_dry", at, problems),
        citation: fields.text("citation", at, problems),
    };
    fields.close(at, problems);
    if let Some(id) = &id {
        let fits = (1..=64).contains(&id.len())
            && id
                .bytes()
                .all(|b| b.is_ascii_lowercase() || b.is_ascii_digit() || matches!(b, b'_' | b'-'));
        if !fits {
            let detail = format!("\"{id}\" is not a material id.");
            problems.add(at.field("id"), detail, "Use 1 to 64 of a-z 0-9 _ and -.");
        }
    }
    id.and(name).map(|_| material)
}

fn defaults(value: &Value, at: &Place, problems: &mut Problems) -> BTreeMap<DefaultKey, String> {
    let Value::Object(map) = value else {
        problems.add(
            at,
            format!("An object belongs here, not {}.", shape(value)),
            "Give `{ \"e_td\": \"...\" }`.",
        );
        return BTreeMap::new();
    };
    let mut out = BTreeMap::new();
    for (name, row) in map {
        let place = at.field(name);
        match DefaultKey::ALL.into_iter().find(|key| key.name() == name) {
            Some(key) => {
                if let Some(row) = text_of(row, &place, problems) {
                    out.insert(key, row.to_owned());
                }
            }
            None => {
                let known = DefaultKey::ALL.map(DefaultKey::name);
                let near =
                    nearest(name, known.into_iter()).map_or(String::new(), |n| format!(" Perhaps \"{n}\"."));
                let remedy = format!("Use one of: {}.{near}", known.join(", "));
                problems.add(
                    place,
                    format!("There is no default value for \"{name}\"."),
                    remedy,
                );
            }
        }
    }
    out
}
