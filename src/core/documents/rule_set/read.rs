//! The shape of a rule set document, field by field.

use super::FORMAT;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Fields, Place, shape, text_of, word_of};
use crate::core::domain::rule_set::{AllocationMethod, BiogenicCo2, EthanolWater, Standing, Threshold};
use crate::core::domain::{Cited, RuleSet, Status, Term};
use serde_json::Value;
use std::collections::BTreeMap;

const STATUSES: [(&str, Status); 5] = [
    ("read", Status::Read),
    ("memory", Status::Memory),
    ("calculated", Status::Calculated),
    ("computed", Status::Calculated),
    ("own", Status::Own),
];

/// Reads a rule set; none where a field that must be there is not.
pub fn rule_set(value: &Value, problems: &mut Problems) -> Option<RuleSet> {
    let at = &Place::ROOT;
    let mut fields = Fields::open(value, at, problems)?;
    let format = fields.required_text("format", at, problems);
    if let Some(found) = format.as_deref().filter(|found| *found != FORMAT) {
        let detail = format!("\"{found}\" is not a format this program reads.");
        problems.add(
            at.field("format"),
            detail,
            format!("This program reads \"{FORMAT}\"."),
        );
        return None;
    }
    let id = fields.required_text("id", at, problems);
    let title = fields.required_text("title", at, problems);
    let version = fields.required_text("version", at, problems);
    let standings = Standing::ALL.map(|standing| (standing.name(), standing));
    let standing = fields.word("standing", &standings, at, problems);
    let gwp_set = fields.required_text("gwp_set", at, problems);
    let comparator_word = fields.required_text("comparator_word", at, problems);
    let comparator = required_cited(&mut fields, "comparator", at, problems);
    let petrol = required_cited(&mut fields, "petrol", at, problems);
    let ethanol_lhv = required_cited(&mut fields, "ethanol_lhv", at, problems);
    let waters = EthanolWater::ALL.map(|water| (water.name(), water));
    let ethanol_water = required_word(&mut fields, "ethanol_water", &waters, at, problems);
    let consignment_lhv_mass = cited(&mut fields, "consignment_lhv_mass", at, problems);
    let consignment_lhv_volume = cited(&mut fields, "consignment_lhv_volume", at, problems);
    let co2_per_carbon = required_cited(&mut fields, "co2_per_carbon", at, problems);
    let water_evaporation = required_cited(&mut fields, "water_evaporation", at, problems);
    let ambient = required_cited(&mut fields, "ambient", at, problems);
    let building_heat_carnot = required_cited(&mut fields, "building_heat_carnot", at, problems);
    let methods = AllocationMethod::ALL.map(|method| (method.name(), method));
    let allocation = required_word(&mut fields, "allocation", &methods, at, problems);
    let allocation_allowed = fields.list("allocation_allowed", at, problems, |item, place, problems| {
        word_of(item, &methods, place, problems)
    });
    let allocation_heat_and_power =
        required_word(&mut fields, "allocation_heat_and_power", &methods, at, problems);
    let terms = Term::ALL.map(|term| (term.name(), term));
    let terms_not_counted = fields.list("terms_not_counted", at, problems, |item, place, problems| {
        word_of(item, &terms, place, problems)
    });
    let presentations = BiogenicCo2::ALL.map(|way| (way.name(), way));
    let biogenic_co2 = required_word(&mut fields, "biogenic_co2", &presentations, at, problems);
    let standard_factors = fields.text("standard_factors", at, problems);
    let default_values = fields.text("default_values", at, problems);
    let soil_n2o_method = fields.required_text("soil_n2o_method", at, problems);
    let land_use_years = required_cited(&mut fields, "land_use_years", at, problems);
    let data_months = cited(&mut fields, "data_months", at, problems);
    let limits = limits(&mut fields, at, problems);
    let residues_by_law = texts(&mut fields, "residues_by_law", at, problems);
    let residues_source = fields.text("residues_source", at, problems);
    let thresholds = fields.list("thresholds", at, problems, threshold);
    let source = fields.required_text("source", at, problems);
    let status = required_word(&mut fields, "status", &STATUSES, at, problems);
    let notes = texts(&mut fields, "notes", at, problems);
    fields.close(at, problems);
    Some(RuleSet {
        id: id?,
        title: title?,
        version: version?,
        standing: standing.unwrap_or(Standing::Own),
        gwp_set: gwp_set?,
        comparator_word: comparator_word?,
        comparator: comparator?,
        petrol: petrol?,
        ethanol_lhv: ethanol_lhv?,
        ethanol_water: ethanol_water?,
        consignment_lhv_mass,
        consignment_lhv_volume,
        co2_per_carbon: co2_per_carbon?,
        water_evaporation: water_evaporation?,
        ambient: ambient?,
        building_heat_carnot: building_heat_carnot?,
        allocation: allocation?,
        allocation_allowed,
        allocation_heat_and_power: allocation_heat_and_power?,
        terms_not_counted,
        biogenic_co2: biogenic_co2?,
        standard_factors,
        default_values,
        soil_n2o_method: soil_n2o_method?,
        land_use_years: land_use_years?,
        data_months,
        limits,
        residues_by_law,
        residues_source,
        thresholds,
        source: source?,
        status: status?,
        notes,
    })
}

fn required_word<T: Copy>(
    fields: &mut Fields,
    name: &'static str,
    words: &[(&'static str, T)],
    at: &Place,
    problems: &mut Problems,
) -> Option<T> {
    fields.need(name, at, problems);
    fields.word(name, words, at, problems)
}

fn texts(fields: &mut Fields, name: &'static str, at: &Place, problems: &mut Problems) -> Vec<String> {
    fields.list(name, at, problems, |item, place, problems| {
        text_of(item, place, problems).map(str::to_owned)
    })
}

fn required_cited(
    fields: &mut Fields,
    name: &'static str,
    at: &Place,
    problems: &mut Problems,
) -> Option<Cited> {
    fields.need(name, at, problems);
    cited(fields, name, at, problems)
}

fn cited(fields: &mut Fields, name: &'static str, at: &Place, problems: &mut Problems) -> Option<Cited> {
    fields.part(name, at, problems, one_cited)
}

/// Limits by symbol, each a figure with its source.
fn limits(fields: &mut Fields, at: &Place, problems: &mut Problems) -> BTreeMap<String, Cited> {
    let Some(value) = fields.take("limits") else {
        return BTreeMap::new();
    };
    let at = at.field("limits");
    let Value::Object(map) = value else {
        let detail = format!("An object belongs here, not {}.", shape(value));
        problems.add(at, detail, "Give `{ \"soil_carbon_cap\": { ... } }`.");
        return BTreeMap::new();
    };
    let read = map
        .iter()
        .filter_map(|(name, figure)| Some((name.clone(), one_cited(figure, &at.field(name), problems)?)));
    read.collect()
}

fn one_cited(value: &Value, at: &Place, problems: &mut Problems) -> Option<Cited> {
    let mut fields = Fields::open(value, at, problems)?;
    fields.need("value", at, problems);
    let figure = fields.number("value", at, problems);
    let unit = fields.required_text("unit", at, problems);
    let source = fields.required_text("source", at, problems);
    let status = required_word(&mut fields, "status", &STATUSES, at, problems);
    let note = fields.text("note", at, problems);
    fields.close(at, problems);
    Some(Cited {
        value: figure?,
        unit: unit?,
        source: source?,
        status: status?,
        note,
    })
}

fn threshold(value: &Value, at: &Place, problems: &mut Problems) -> Option<Threshold> {
    let mut fields = Fields::open(value, at, problems)?;
    fields.need("percent", at, problems);
    let percent = fields.number("percent", at, problems);
    let started_from = fields.day("started_from", at, problems);
    let started_to = fields.day("started_to", at, problems);
    let applies_from = fields.day("applies_from", at, problems);
    let applies_to = fields.day("applies_to", at, problems);
    let source = fields.required_text("source", at, problems);
    let status = required_word(&mut fields, "status", &STATUSES, at, problems);
    fields.close(at, problems);
    Some(Threshold {
        percent: percent?,
        started_from,
        started_to,
        applies_from,
        applies_to,
        source: source?,
        status: status?,
    })
}
