//! Prices an input by its amount and one or more factors.

use super::entry::Entry;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::{FactorRef, Input as InputDocument, OneOrMany};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::{Gas, GasVector};
use crate::core::engine::resolved::Input;
use crate::core::models::Setting;
use crate::core::models::factors::{self, HeatingValue, Priced};
use crate::core::models::flow::unit_words;
use crate::core::units::parse_unit;

/// Adds the gases of the entered amount to `input`; what does not fit is noted and adds nothing.
pub fn by_factor(entry: &Entry, input: &mut Input, problems: &mut Problems, findings: &mut Vec<Finding>) {
    let document = entry.document;
    let (Some(amount), Some(unit), Some(refs)) =
        (document.amount, document.unit.as_deref(), &document.factor)
    else {
        return;
    };
    if amount < 0.0 {
        let detail = format!("An amount of {amount} {unit} is negative.");
        problems.add(
            entry.at.field("amount"),
            detail,
            "Give zero or more; what leaves is a co-product or an output.",
        );
        return;
    }
    let unit = match parse_unit(unit) {
        Ok(unit) => unit,
        Err(error) => {
            let (detail, remedy) = unit_words(&error);
            problems.add(entry.at.field("unit"), detail, remedy);
            return;
        }
    };
    let list = price_list(refs, entry.setting, &entry.at.field("factor"), problems);
    if list.len() < refs.list().len() {
        return;
    }
    let heating = HeatingValue::of(&list);
    for factor in &list {
        match factors::convert(amount, &unit, document.net_per_gross, &heating, factor) {
            Ok(converted) => {
                input.gases += match entry.setting.workings {
                    true => {
                        input.steps.extend(converted.step);
                        factors::price(converted.amount, factor, &mut input.steps)
                    }
                    false => factors::gases_of(converted.amount, factor),
                };
            }
            Err(unfit) => {
                problems.add(entry.at.field("unit"), unfit.detail, unfit.remedy);
                return;
            }
        }
    }
    if !input.gases.is_finite() {
        problems.add(
            entry.at.field("amount"),
            "The amount gives no finite figure.",
            "Check its size and unit.",
        );
        input.gases = GasVector::ZERO;
    }
    input.biogenic_kg = input.gases[Gas::Co2Biogenic];
    let alone = factors::unpublished(&list);
    let gap = alone.and_then(|_| factors::unpublished(list.iter().chain(&burning_rows(entry))));
    if let Some((factor, gas)) = gap {
        findings.push(Finding {
            id: "K-02".to_owned(),
            severity: Severity::Warn,
            stage: entry.stage.key.clone(),
            field: format!("inputs.{}", document.key),
            message: format!(
                "{factor} of {} has no published {gas}; nothing is counted for it.",
                input.label
            ),
            remedy: "Choose a factor that has one, or give the reason.".to_owned(),
            reason: None,
        });
    }
}

/// Rows of burning emissions that another input of the stage counts for the same amount of energy.
fn burning_rows(entry: &Entry) -> Vec<Priced> {
    let document = entry.document;
    let same = |other: &&InputDocument| {
        other.key != document.key && other.amount == document.amount && other.unit == document.unit
    };
    let at = Place::ROOT;
    entry
        .stage
        .inputs
        .iter()
        .filter(same)
        .filter_map(|other| other.factor.as_ref())
        .flat_map(OneOrMany::list)
        .filter_map(|reference| factors::find(reference, entry.setting.book, &at, &mut Problems::default()))
        .filter(|row| row.group == "combustion non-CO2")
        .collect()
}

fn price_list(
    refs: &OneOrMany<FactorRef>,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
) -> Vec<Priced> {
    let find = |(index, reference): (usize, &FactorRef)| {
        let item = at.item(index);
        let place = if refs.is_list() { &item } else { at };
        factors::find_for_amount(reference, setting.book, place, problems)
    };
    refs.list().iter().enumerate().filter_map(find).collect()
}
