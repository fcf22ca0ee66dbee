//! Start-up checks across tables: sums that are printed, references that must exist.

use super::reading::Reading;
use crate::core::documents::Problems;
use crate::core::documents::rule_set::{check, gap};
use crate::core::domain::factor::{TermValues, Use};
use crate::core::domain::{Book, CarbonClass, RuleSet};
use crate::core::units::rounding::round_half_away;

/// Runs every check on a filled book.
pub(super) fn run(reading: &mut Reading, book: &Book) {
    for set in book.rule_sets.values() {
        rule_set(reading, book, set);
    }
    defaults(reading, book);
    haul_fuels(reading, book);
    aliases(reading, book);
    carbon(reading, book);
}

fn rule_set(reading: &mut Reading, book: &Book, set: &RuleSet) {
    let place = format!("rule set {}", set.id);
    let mut problems = Problems::default();
    check(set, book, &mut problems);
    for problem in problems.list() {
        reading.problem(&format!("{place} {}", problem.pointer), &problem.detail);
    }
    if let Some((start, fuel)) = gap(&set.thresholds) {
        let what = format!("the thresholds leave a gap for a plant started {start}, fuel of {fuel}");
        reading.problem(&place, what);
    }
    let ethanol = set
        .standard_factors
        .as_ref()
        .and_then(|edition| book.editions.get(edition)?.factors.get("fuel_ethanol"))
        .and_then(|row| row.lhv_mj_per_kg);
    if ethanol.is_some_and(|lhv| lhv != set.ethanol_lhv.value) {
        reading.problem(
            &place,
            "the heating value of ethanol differs from the standard factors",
        );
    }
}

/// Published pathways whose printed totals and savings do not follow from their terms: wheat straw of Directive 2009/28/EC
/// prints 11 and 13 where the terms add to 10 and 12, and 85 % where 13 g gives 84.5 %.
const PRINTED_OTHERWISE: [&str; 1] = ["eu-2009-28/red1_wheat_straw"];

/// Totals are the sum of the terms, and printed savings follow from totals, under the rule set of the same name.
fn defaults(reading: &mut Reading, book: &Book) {
    for (id, edition) in &book.editions {
        for pathway in edition.pathways.values() {
            for values in [&pathway.default, &pathway.typical] {
                if PRINTED_OTHERWISE.contains(&pathway.id.as_str()) {
                    continue;
                }
                sums(reading, &pathway.id, values);
                let Some(set) = book.rule_sets.get(id) else {
                    reading.problem(&pathway.id, "no rule set goes with the values");
                    continue;
                };
                let saving = 100.0 * (set.comparator.value - values.total) / set.comparator.value;
                if round_half_away(saving, 0) != values.saving_percent {
                    reading.problem(&pathway.id, "the printed saving does not follow from the total");
                }
            }
            for material in &pathway.feedstock_materials {
                if !book.materials.contains_key(material) {
                    reading.problem(&pathway.id, format!("there is no material {material}"));
                }
            }
        }
    }
}

/// One decimal is printed; the sums of the print are exact to it.
fn sums(reading: &mut Reading, id: &str, values: &TermValues) {
    let sum = values.e_ec + values.e_p + values.e_td;
    if (sum - values.total).abs() > 1e-6 {
        reading.problem(id, "the terms do not add up to the total");
    }
    let larger = |part: Option<f64>, whole: f64| part.is_some_and(|part| part > whole);
    if larger(values.e_ec_soil_n2o, values.e_ec) || larger(values.e_td_final_fuel, values.e_td) {
        reading.problem(id, "a part is larger than its term");
    }
}

/// What drives a vehicle must be a fuel that emits.
fn haul_fuels(reading: &mut Reading, book: &Book) {
    for factor in book
        .editions
        .values()
        .flat_map(|edition| edition.factors.values())
    {
        let Use::Haul(vehicle) = &factor.usage else {
            continue;
        };
        let Some(fuel) = &vehicle.fuel else { continue };
        if book.factor(fuel).is_none_or(|fuel| fuel.usage != Use::Amount) {
            reading.problem(&factor.id, format!("its fuel {fuel} is no factor"));
        }
    }
}

fn aliases(reading: &mut Reading, book: &Book) {
    for edition in book.editions.values() {
        for (alias, row) in &edition.aliases {
            if !edition.factors.contains_key(row) || edition.factors.contains_key(alias) {
                reading.problem(
                    &edition.id,
                    format!("the alias {alias} leads nowhere or hides a row"),
                );
            }
        }
    }
}

/// A carbon content that may serve as a default must be there.
fn carbon(reading: &mut Reading, book: &Book) {
    for material in book.materials.values() {
        let serves = material.carbon_class != CarbonClass::Measure && material.kind != "energy";
        if serves && material.carbon_percent_dry().is_none() {
            reading.problem(&material.id, "its carbon content is missing");
        }
        let names_heat_or_power = matches!(material.id.as_str(), "heat" | "power");
        if material.kind != "energy" && material.properties.is_empty()
            || names_heat_or_power != (material.kind == "energy")
        {
            reading.problem(&material.id, "it has no figure, or is energy by mistake");
        }
    }
}
