//! Start-up checks across tables: sums that are printed, references that must exist.

use super::reading::Reading;
use crate::core::domain::factor::{TermValues, Use};
use crate::core::domain::{Book, CarbonClass, RuleSet};
use crate::core::units::rounding::round_half_away;

/// Runs every check on a filled book.
pub(super) fn run(reading: &mut Reading, book: &Book) {
    for set in book.rule_sets.values() {
        rule_set(reading, book, set);
    }
    for id in book.limits.keys().filter(|id| !book.rule_sets.contains_key(*id)) {
        reading.problem("rule_sets/limits.csv", format!("there is no rule set {id}"));
    }
    defaults(reading, book);
    haul_fuels(reading, book);
    aliases(reading, book);
    carbon(reading, book);
}

fn rule_set(reading: &mut Reading, book: &Book, set: &RuleSet) {
    let place = format!("rule set {}", set.id);
    if !book.gwp_sets.contains_key(&set.gwp_set) {
        reading.problem(&place, format!("there are no gas weights {}", set.gwp_set));
    }
    if !book.soils.contains_key(&set.soil_n2o_method) {
        reading.problem(&place, format!("there is no soil method {}", set.soil_n2o_method));
    }
    if !set.allocation_allowed.contains(&set.allocation) {
        reading.problem(&place, "its own allocation is not allowed");
    }
    for id in &set.residues_by_law {
        let stem = id.strip_suffix('*');
        let fits = |material: &String| stem.map_or(material == id, |stem| material.starts_with(stem));
        if !book.materials.keys().any(fits) {
            reading.problem(&place, format!("no material is meant by the residue {id}"));
        }
    }
    let Some(edition) = book.editions.get(&set.standard_factors) else {
        reading.problem(&place, format!("there is no edition {}", set.standard_factors));
        return;
    };
    let ethanol = edition
        .factors
        .get("fuel_ethanol")
        .and_then(|row| row.lhv_mj_per_kg);
    if ethanol != Some(set.ethanol_lhv.value) {
        reading.problem(
            &place,
            "the heating value of ethanol differs from the standard factors",
        );
    }
    for (before, after) in set.thresholds.iter().zip(set.thresholds.iter().skip(1)) {
        let next_day = before.started_to.and_then(|day| day.tomorrow().ok());
        if next_day.is_none() || next_day != after.started_from {
            reading.problem(&place, "the thresholds leave a gap or overlap");
        }
    }
}

/// Totals are the sum of the terms, and printed savings follow from totals, under the rule set of the same name.
fn defaults(reading: &mut Reading, book: &Book) {
    for (id, edition) in &book.editions {
        for pathway in edition.pathways.values() {
            for values in [&pathway.default, &pathway.typical] {
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
    if values.e_ec_soil_n2o > values.e_ec || values.e_td_final_fuel > values.e_td {
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
