//! The inventory per MJ of fuel: recipes times gases, by input, stage and term.

use super::demand::Demand;
use super::resolved::{Input, Resolved};
use crate::core::documents::assessment::{Step, Terms};
use crate::core::domain::{Gas, GasVector, Term};
use crate::core::models::PerFuel;
use crate::core::models::factors::step;
use crate::core::units::rounding::plain;

/// The net by term and the gas vector behind it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Totals {
    /// Signed contributions, g CO2e/MJ.
    pub terms: Terms,
    /// Gases of all that counts, g/MJ.
    pub gases: GasVector,
    /// CH4 and N2O of use where the rule set counts e_u as zero, g CO2e/MJ.
    pub use_not_counted: f64,
}

/// True if the input stands in the net.
pub fn counts(resolved: &Resolved, input: &Input) -> bool {
    input.replaced.is_none() && input.term.is_some_and(|term| !resolved.rules.leaves_out(term))
}

/// Gases per recipe with the parts that depend on the fuel grown on an area; `fuel_mj` is the fuel that the crop of one
/// recipe makes, all shares 1.
pub fn recipe_gases(input: &Input, fuel_mj: f64) -> GasVector {
    parts(input, fuel_mj).fold(input.gases, |mut gases, (part, mj)| {
        gases[Gas::Co2Land] += capped(part, mj) - part.claim_kg + part.add_g_per_mj * mj / 1000.0;
        gases
    })
}

/// Every part with the fuel that its own area grows, MJ: the area is a part of the recipe's.
fn parts(input: &Input, fuel_mj: f64) -> impl Iterator<Item = (&PerFuel, f64)> {
    let named: f64 = input.per_fuel.iter().map(|part| part.area_ha).sum();
    let area = input.recipe_ha.unwrap_or(0.0).max(named);
    input
        .per_fuel
        .iter()
        .map(move |part| (part, fuel_mj * part.area_ha / area))
}

/// A claim, or one added back, no larger than its cap, kg.
fn capped(part: &PerFuel, mj: f64) -> f64 {
    match part.cap_g_per_mj {
        Some(cap) => {
            let limit = cap * mj / 1000.0;
            part.claim_kg.max(-limit).min(limit)
        }
        None => part.claim_kg,
    }
}

/// The arithmetic of the parts that depend on the fuel grown on an area.
pub fn fuel_steps(input: &Input, fuel_mj: f64) -> Vec<Step> {
    let mut steps = Vec::new();
    for (part, mj) in parts(input, fuel_mj) {
        let area = format!(
            "fuel grown on {} ha per recipe, all shares 1",
            plain(part.area_ha)
        );
        steps.push(step(area, mj, "MJ", ""));
        if let Some(cap) = part.cap_g_per_mj {
            let text = format!(
                "claim {} kg, at most {} g per MJ x {} MJ / 1000",
                plain(part.claim_kg),
                plain(cap),
                plain(mj)
            );
            steps.push(step(text, capped(part, mj), "kg co2_land", &part.source));
        }
        if part.add_g_per_mj != 0.0 {
            let text = format!("{} g per MJ x {} MJ / 1000", plain(part.add_g_per_mj), plain(mj));
            let kg = part.add_g_per_mj * mj / 1000.0;
            steps.push(step(text, kg, "kg co2_land", &part.source));
        }
    }
    steps
}

/// Adds everything up without keeping the parts: the shortest way from a plan to the net.
pub fn totals(resolved: &Resolved, demand: &Demand) -> Totals {
    let mut totals = Totals::default();
    for &j in &resolved.order {
        for input in &resolved.stages[j].inputs {
            let per_mj = recipe_gases(input, demand.fuel_mj[j]) * (1000.0 * demand.scale[j]);
            let co2e = per_mj.co2e(resolved.gwp);
            match input.term {
                Some(term) if counts(resolved, input) => {
                    totals.terms.add(term, co2e);
                    totals.gases += per_mj;
                }
                Some(Term::Eu) if input.replaced.is_none() => totals.use_not_counted += co2e,
                _ => {}
            }
        }
    }
    for default in &resolved.defaults {
        totals.terms.add(default.term, default.g_per_mj);
        totals.gases += GasVector::of(Gas::Co2eUnsplit, default.g_per_mj);
    }
    totals
}
