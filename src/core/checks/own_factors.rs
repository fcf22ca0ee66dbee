//! Group E: own factors in place of published ones, as far as their unit tells what they stand for.

use super::parameters::models;
use super::settings::Settings;
use super::{Subject, finding};
use crate::core::documents::Pathway;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::{FactorRef, InlineFactor, Input, OneOrMany};
use crate::core::documents::pathway::Stage;
use crate::core::documents::{problem::Problems, read_input, reader::Place};
use crate::core::domain::factor::Use;
use crate::core::domain::{Book, Counts, Factor, GwpSet};
use crate::core::units::rounding::significant;
use crate::core::units::{Dimension, parse_unit};
use serde_json::Value;

/// Words that say power comes from the public grid.
const GRID: [&str; 5] = ["grid", "mains", "public supply", "utility power", "network power"];
/// Words that say a factor is the average of a region.
const AVERAGE: [&str; 5] = ["average", "mix", "national", "regional", "country"];

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    // A rule set that names no standard factors asks for no reason.
    let edition = subject
        .resolved
        .rules
        .standard_factors
        .as_deref()
        .unwrap_or_default();
    for stage in subject.resolved.stages.iter().map(|stage| stage.document) {
        for input in &stage.inputs {
            for own in own_factors(stage, input) {
                let grid = from_grid(stage, &own);
                let is_grid = grid.is_some();
                findings.extend(grid);
                let standard = rows(subject.book, edition, &own);
                if !is_grid {
                    findings.extend(explained(stage, &own, edition, &standard));
                }
                findings.extend(within_range(
                    stage,
                    &own,
                    &standard,
                    subject.resolved.gwp,
                    subject.settings,
                ));
            }
        }
    }
}

/// An own factor and where it stands.
pub struct OwnFactor<'d> {
    /// Field of findings.
    pub field: String,
    /// The input, for people.
    pub label: &'d str,
    /// The factor.
    pub factor: InlineFactor,
    /// What the unit counts.
    pub dimension: Dimension,
    /// Base units in one unit of the factor.
    pub size: f64,
    /// True if the input or the factor has a note.
    pub noted: bool,
    /// What input and factor say of themselves, in small letters.
    pub words: String,
}

/// Own factors of an input: of its amount and in the parameters of its models.
fn own_factors<'d>(stage: &Stage, input: &'d Input) -> Vec<OwnFactor<'d>> {
    let label = input.label.as_deref().unwrap_or(&input.key);
    let field = format!("inputs.{}", input.key);
    let mut found = Vec::new();
    let mut see = |field: &str, factor: InlineFactor, unit: Option<&str>, noted: bool| {
        let Ok(per) = parse_unit(&factor.per) else { return };
        // A bare kWh counts what the amount counts.
        let amount = unit
            .and_then(|unit| parse_unit(unit).ok())
            .map(|unit| unit.dimension);
        let dimension = match (per.dimension, amount) {
            (Dimension::ENERGY, Some(tagged)) if Dimension::ENERGIES.contains(&tagged) => tagged,
            (own, _) => own,
        };
        let said = [
            label,
            &input.key,
            input.note.as_deref().unwrap_or_default(),
            stage.title(),
            &factor.citation,
        ];
        found.push(OwnFactor {
            field: field.to_owned(),
            label,
            dimension,
            size: per.factor,
            noted: noted || input.note.is_some() || factor.note.is_some(),
            words: said.join(" ").to_lowercase(),
            factor,
        });
    };
    for row in input.factor.as_ref().map(OneOrMany::list).unwrap_or_default() {
        if let FactorRef::Inline(factor) = row {
            see(&field, factor.clone(), input.unit.as_deref(), false);
        }
    }
    for model in models(input) {
        for (name, value) in &model.parameters {
            let mut inside = Vec::new();
            factors_in(value, &mut inside);
            for factor in inside {
                see(&format!("{field}.{name}"), factor, None, model.note.is_some());
            }
        }
    }
    found
}

/// Own factors inside a parameter, wherever it holds them.
fn factors_in(value: &Value, found: &mut Vec<InlineFactor>) {
    match value {
        Value::Object(object) if object.contains_key("per") && object.contains_key("gases") => {
            if let Some(FactorRef::Inline(factor)) =
                read_input::factor_ref(value, &Place::ROOT, &mut Problems::default())
            {
                found.push(factor);
            }
        }
        Value::Object(object) => object.values().for_each(|value| factors_in(value, found)),
        Value::Array(items) => items.iter().for_each(|value| factors_in(value, found)),
        _ => {}
    }
}

/// Every row of an edition that an own factor of the pathway is held against: a statement carries them.
pub fn compared_rows<'b>(pathway: &Pathway, book: &'b Book, edition: &str) -> Vec<&'b Factor> {
    let inputs = pathway
        .stages
        .iter()
        .flat_map(|stage| stage.inputs.iter().map(move |input| (stage, input)));
    let own = inputs.flat_map(|(stage, input)| own_factors(stage, input));
    own.flat_map(|own| rows(book, edition, &own)).collect()
}

/// Rows of the standard edition that count the same thing. A mass, a volume or an area may be of anything.
fn rows<'b>(book: &'b Book, edition: &str, own: &OwnFactor) -> Vec<&'b Factor> {
    let counts = match own.dimension {
        Dimension::ENERGY | Dimension::ENERGY_NET | Dimension::ENERGY_GROSS => Counts::Fuel,
        Dimension::POWER => Counts::Power,
        Dimension::HEAT => Counts::Heat,
        Dimension::MASS | Dimension::VOLUME | Dimension::AREA | Dimension::TRANSPORT => return Vec::new(),
        _ => Counts::Other,
    };
    let Some(edition) = book.editions.get(edition) else {
        return Vec::new();
    };
    let like = |row: &&Factor| {
        row.counts == counts
            && row.usage == Use::Amount
            && (counts != Counts::Other || row.unit.dimension == own.dimension)
    };
    let rows: Vec<&Factor> = edition.factors.values().filter(like).collect();
    // Fertiliser and what its acid does in the soil share a unit: the group with most rows is what the unit is for.
    let size = |group: &str| rows.iter().filter(|row| row.group == group).count();
    match rows
        .iter()
        .max_by_key(|row| size(&row.group))
        .map(|row| row.group.clone())
    {
        Some(group) if counts == Counts::Other => rows.into_iter().filter(|row| row.group == group).collect(),
        _ => rows,
    }
}

/// E-07: an own factor where the standard edition has rows for the same counted thing is explained in a note. What fuel
/// an own factor per MJ stands for nobody can tell, so fuels are left out.
pub fn explained(stage: &Stage, own: &OwnFactor, edition: &str, standard: &[&Factor]) -> Option<Finding> {
    let fuel_or_heat = [
        Dimension::ENERGY,
        Dimension::ENERGY_NET,
        Dimension::ENERGY_GROSS,
        Dimension::HEAT,
    ];
    let first = standard.first()?;
    if own.noted || fuel_or_heat.contains(&own.dimension) {
        return None;
    }
    let message = format!(
        "{} uses an own factor ({}) where the standard is {edition}, which has {} per {}.",
        own.label,
        own.factor.citation,
        match standard.len() {
            1 => first.row().to_owned(),
            more => format!("{more} rows"),
        },
        own.factor.per
    );
    let remedy = "Keep it and write down source and reason in the note, or use the standard.";
    Some(finding(
        "E-07",
        Severity::Warn,
        &stage.key,
        &own.field,
        message,
        remedy,
    ))
}

/// E-08: an own factor is within the span of the published rows for the same thing.
pub fn within_range(
    stage: &Stage,
    own: &OwnFactor,
    standard: &[&Factor],
    gwp: &GwpSet,
    settings: &Settings,
) -> Option<Finding> {
    let per_base = |row: &&Factor| row.gases.vector().co2e(gwp) / row.unit.factor;
    let low = standard.iter().map(per_base).reduce(f64::min)? / settings.own_factor_times;
    let high = standard.iter().map(per_base).reduce(f64::max)? * settings.own_factor_times;
    // Wind, biogenic fuel and waste heat count as nothing: only an energy factor may be that low.
    let low = if Dimension::ENERGIES.contains(&own.dimension) {
        f64::NEG_INFINITY
    } else {
        low
    };
    let value = own.factor.gases.co2e(gwp) / own.size;
    if (low..=high).contains(&value) {
        return None;
    }
    let shown = |per_base: f64| significant(per_base * own.size, 3, 9);
    let message = format!(
        "The factor of {} is {} kg CO2e per {}, outside {} to {}, the published span with room for {} times.",
        own.label,
        shown(value),
        own.factor.per,
        shown(low.max(0.0)),
        shown(high),
        settings.own_factor_times
    );
    let remedy = "Check its unit, or give the reason.";
    Some(finding(
        "E-08",
        Severity::Warn,
        &stage.key,
        &own.field,
        message,
        remedy,
    ))
}

/// E-09: power that calls itself the grid's has an own factor that does not call itself a region's average. Only words
/// tell, so it warns.
pub fn from_grid(stage: &Stage, own: &OwnFactor) -> Option<Finding> {
    let says = |list: &[&str]| list.iter().any(|word| own.words.contains(word));
    let power = own.dimension == Dimension::POWER || own.factor.per.to_lowercase().contains("wh");
    if !power || !says(&GRID) || says(&AVERAGE) {
        return None;
    }
    let message = format!(
        "{} is power from the grid but has a value of its own ({}).",
        own.label, own.factor.citation
    );
    let remedy = "Use the average of the country or region, or say in the citation that it is one.";
    Some(finding(
        "E-09",
        Severity::Warn,
        &stage.key,
        &own.field,
        message,
        remedy,
    ))
}

#[cfg(test)]
mod tests {
    use super::super::tests::stage;
    use super::*;
    use serde_json::json;

    fn own(label: &str, citation: &str, per: &str) -> Vec<Finding> {
        let mut stage = stage();
        let input = json!({ "key": "power", "label": label, "amount": 1, "unit": "MWh",
                            "factor": { "gases": { "co2_fossil": 0.3 }, "per": per, "citation": citation } });
        let input = read_input::input(&input, &Place::ROOT, &mut Problems::default()).unwrap();
        stage.inputs = vec![input];
        let found = own_factors(&stage, &stage.inputs[0]);
        found.iter().filter_map(|own| from_grid(&stage, own)).collect()
    }

    #[test]
    fn power_from_the_grid_names_its_region() {
        assert_eq!(
            own("Power from the grid", "letter of the wind park", "kWh power")[0].id,
            "E-09"
        );
        assert_eq!(
            own("Power from the grid", "letter of the wind park", "kWh").len(),
            1
        );
        assert!(own("Power from the grid", "average of the country 2026", "kWh power").is_empty());
        assert!(own("Power of the own turbine", "own meter", "kWh power").is_empty());
        assert!(own("Screens of the grid chamber", "letter", "kg").is_empty());
    }

    #[test]
    fn own_factors_are_found_wherever_a_model_holds_them() {
        let fuel = json!({ "gases": { "co2_fossil": 0.06 }, "per": "MJ", "citation": "own" });
        let mut found = Vec::new();
        factors_in(
            &json!([{ "factor": fuel, "share_percent": 40 }, { "factor": "eu/x", "stack": fuel }]),
            &mut found,
        );
        assert_eq!(found.len(), 2);
    }
}
