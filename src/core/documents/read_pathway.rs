//! Reads a pathway document from JSON: its shape, its keys, its words. What the figures mean is the engine's matter.

use super::pathway::{
    CoProduct, DefaultKey, Displaces, FORMAT, Flow, Grown, Intake, Output, OwnMaterial, Pathway, Period,
    PeriodKind, Role, Stage, Stated, StatedTerm, ValueKind,
};
use super::problem::Problems;
use super::read_input::{amount, evidence, factor_ref, input, key, one_or_many};
use super::reader::{Fields, Place, nearest, shape, text_of, word_of};
use super::{Amount, json};
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::domain::{StageKind, Term};
use crate::core::units::{Dimension, Quantity};
use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};

/// At most this many stages in a pathway: far above any real chain.
pub const MOST_STAGES: usize = 300;
/// At most this many inputs in a stage.
pub const MOST_INPUTS: usize = 2_000;

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

impl Stage {
    /// Reads one stage alone.
    ///
    /// # Errors
    /// Everything that is wrong with its shape; pointers begin at the stage.
    pub fn from_value(value: &Value) -> Result<Stage, Problems> {
        let mut problems = Problems::default();
        match stage(value, &Place::ROOT, &mut problems) {
            Some(stage) if problems.is_empty() => Ok(stage),
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
    if !fields.has("period") {
        Fields::missing("period", at, problems);
    }
    let period = fields
        .take("period")
        .and_then(|v| period(v, &at.field("period"), problems));
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
    if !fields.has("stages") {
        Fields::missing("stages", at, problems);
    }
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

fn unique<'k>(keys: impl Iterator<Item = &'k str>, at: &Place, field: &str, problems: &mut Problems) {
    let mut seen = BTreeSet::new();
    for (index, key) in keys.enumerate() {
        if !key.is_empty() && !seen.insert(key) {
            problems.add(
                at.item(index).field(field),
                format!("\"{key}\" stands twice."),
                "Give each a name of its own.",
            );
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
        if !fields.has(name) {
            Fields::missing(name, at, problems);
        }
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
        lhv_dry: fields
            .take("lhv_dry")
            .and_then(|v| amount(v, &at.field("lhv_dry"), problems)),
        carbon_percent_dry: percent(&mut fields, "carbon_percent_dry", at, problems),
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

fn percent(fields: &mut Fields, name: &'static str, at: &Place, problems: &mut Problems) -> Option<f64> {
    let figure = fields.number(name, at, problems)?;
    if !(0.0..=100.0).contains(&figure) {
        problems.add(
            at.field(name),
            format!("{figure} % is outside 0 to 100 %."),
            "Check the figure.",
        );
        return None;
    }
    Some(figure)
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

fn stage(value: &Value, at: &Place, problems: &mut Problems) -> Option<Stage> {
    let mut fields = Fields::open(value, at, problems)?;
    let key = key(&mut fields, at, problems);
    let kinds: Vec<_> = StageKind::ALL
        .into_iter()
        .map(|kind| (kind.name(), kind))
        .collect();
    for name in ["kind", "output"] {
        if !fields.has(name) {
            Fields::missing(name, at, problems);
        }
    }
    let kind = fields.word("kind", &kinds, at, problems);
    let name = fields.text("name", at, problems);
    let note = fields.text("note", at, problems);
    let grown = fields
        .take("grown")
        .and_then(|v| grown(v, &at.field("grown"), problems));
    let output = fields
        .take("output")
        .and_then(|v| output(v, &at.field("output"), problems));
    let intakes = fields.list("intakes", at, problems, intake);
    let count = value.get("inputs").and_then(Value::as_array).map_or(0, Vec::len);
    let inputs = if count > MOST_INPUTS {
        fields.take("inputs");
        let detail = format!("The stage has {count} inputs.");
        problems.add(
            at.field("inputs"),
            detail,
            format!("Give at most {MOST_INPUTS}; add like ones up."),
        );
        Vec::new()
    } else {
        fields.list("inputs", at, problems, input)
    };
    let co_products = fields.list("co_products", at, problems, co_product);
    let methods: Vec<_> = AllocationMethod::ALL
        .into_iter()
        .map(|method| (method.name(), method))
        .collect();
    let allocation = fields.word("allocation", &methods, at, problems);
    let stated = fields
        .take("stated")
        .and_then(|v| stated(v, &at.field("stated"), problems));
    fields.close(at, problems);
    unique(
        inputs.iter().map(|input| input.key.as_str()),
        &at.field("inputs"),
        "key",
        problems,
    );
    unique(
        co_products.iter().map(|product| product.key.as_str()),
        &at.field("co_products"),
        "key",
        problems,
    );
    Some(Stage {
        key: key?,
        kind: kind?,
        name,
        note,
        grown,
        output: output?,
        intakes,
        inputs,
        co_products,
        allocation,
        stated,
    })
}

fn grown(value: &Value, at: &Place, problems: &mut Problems) -> Option<Grown> {
    let mut fields = Fields::open(value, at, problems)?;
    let whole = |figure: Option<f64>, name: &str, most: f64, problems: &mut Problems| {
        let figure = figure?;
        if figure.fract() != 0.0 || !(0.0..=most).contains(&figure) {
            let detail = format!("{figure} is not a whole number of 0 to {most}.");
            problems.add(at.field(name), detail, "Give a whole number.");
            return None;
        }
        Some(figure)
    };
    let year = fields.number("harvest_year", at, problems);
    let growers = fields.number("growers", at, problems);
    let grown = Grown {
        country: fields.text("country", at, problems),
        region: fields.text("region", at, problems),
        harvest_year: whole(year, "harvest_year", 9_999.0, problems).map(|year| year as i16),
        land_use_january_2008: fields.text("land_use_january_2008", at, problems),
        land_declarations: fields.list("land_declarations", at, problems, |v, place, problems| {
            text_of(v, place, problems).map(str::to_owned)
        }),
        growers: whole(growers, "growers", 1e6, problems).map(|growers| growers as u32),
    };
    fields.close(at, problems);
    Some(grown)
}

fn flow(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Flow {
    Flow {
        amount: fields.number("amount", at, problems),
        unit: fields.text("unit", at, problems),
        moisture_percent: fields.number("moisture_percent", at, problems),
        carbon_percent_dry: percent(fields, "carbon_percent_dry", at, problems),
        lhv: fields
            .take("lhv")
            .and_then(|v| amount(v, &at.field("lhv"), problems)),
        temperature_c: fields.number("temperature_c", at, problems),
        price: fields
            .take("price")
            .and_then(|v| amount(v, &at.field("price"), problems)),
        strength_percent_mass: fields.number("strength_percent_mass", at, problems),
        strength_percent_vol: fields.number("strength_percent_vol", at, problems),
        note: fields.text("note", at, problems),
    }
}

fn output(value: &Value, at: &Place, problems: &mut Problems) -> Option<Output> {
    let mut fields = Fields::open(value, at, problems)?;
    let material = fields.required_text("material", at, problems);
    let flow = flow(&mut fields, at, problems);
    for name in ["amount", "unit"] {
        if !fields.has(name) {
            Fields::missing(name, at, problems);
        }
    }
    fields.close(at, problems);
    Some(Output {
        material: material?,
        flow,
    })
}

fn intake(value: &Value, at: &Place, problems: &mut Problems) -> Option<Intake> {
    let mut fields = Fields::open(value, at, problems)?;
    let from = fields.required_text("from", at, problems);
    let product = fields.text("product", at, problems);
    let flow = flow(&mut fields, at, problems);
    fields.close(at, problems);
    Some(Intake {
        from: from?,
        product,
        flow,
    })
}

fn co_product(value: &Value, at: &Place, problems: &mut Problems) -> Option<CoProduct> {
    let mut fields = Fields::open(value, at, problems)?;
    let key = key(&mut fields, at, problems);
    let name = fields.required_text("name", at, problems);
    let roles = [
        ("co_product", Role::CoProduct),
        ("residue", Role::Residue),
        ("waste", Role::Waste),
    ];
    if !fields.has("role") {
        Fields::missing("role", at, problems);
    }
    let role = fields.word("role", &roles, at, problems);
    let material = fields.required_text("material", at, problems);
    let flow = flow(&mut fields, at, problems);
    for name in ["amount", "unit"] {
        if !fields.has(name) {
            Fields::missing(name, at, problems);
        }
    }
    let displaces = fields
        .take("displaces")
        .and_then(|v| displaces(v, &at.field("displaces"), problems));
    fields.close(at, problems);
    Some(CoProduct {
        key: key?,
        name: name?,
        role: role?,
        material: material?,
        flow,
        displaces,
    })
}

fn displaces(value: &Value, at: &Place, problems: &mut Problems) -> Option<Displaces> {
    let mut fields = Fields::open(value, at, problems)?;
    let figure = fields.number("amount", at, problems);
    let unit = fields.required_text("unit", at, problems);
    let factor = fields
        .take("factor")
        .and_then(|v| one_or_many(v, &at.field("factor"), problems, factor_ref));
    fields.close(at, problems);
    Some(Displaces {
        amount: figure?,
        unit: unit?,
        factor: factor?,
    })
}

fn stated(value: &Value, at: &Place, problems: &mut Problems) -> Option<Stated> {
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
        lhv: fields
            .take("lhv")
            .and_then(|v| amount(v, &at.field("lhv"), problems)),
        plant_started: fields.day("plant_started", at, problems),
        covers: fields
            .take("covers")
            .and_then(|v: &Value| -> Option<Amount> { amount(v, &at.field("covers"), problems) }),
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
        if !fields.has(name) {
            Fields::missing(name, at, problems);
        }
    }
    let figure = fields.number("g_co2e_per_mj", at, problems);
    let value_kind = fields.word("value_kind", &kinds, at, problems);
    fields.close(at, problems);
    Some(StatedTerm {
        g_co2e_per_mj: figure?,
        value_kind: value_kind?,
    })
}
