//! The inventory per MJ of fuel: recipes times gases, by input, stage and term.

use super::demand::Demand;
use super::resolved::{Input, Resolved};
use crate::core::documents::assessment::Terms;
use crate::core::domain::{Gas, GasVector, Term};
use crate::core::models::PerFuel;

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

/// Gases per recipe with the parts that depend on the fuel grown on an area; `whole` is recipes per MJ with all shares 1.
pub fn recipe_gases(input: &Input, whole: f64) -> GasVector {
    input
        .per_fuel
        .iter()
        .fold(input.gases, |gases, part| with_fuel(gases, part, whole))
}

fn with_fuel(mut gases: GasVector, part: &PerFuel, whole: f64) -> GasVector {
    if whole <= 0.0 {
        return gases;
    }
    let mj = 1.0 / whole;
    if let Some(cap) = part.cap_g_per_mj {
        gases[Gas::Co2Land] = gases[Gas::Co2Land].max(-cap * mj / 1000.0);
    }
    gases[Gas::Co2Land] += part.add_g_per_mj * mj / 1000.0;
    gases
}

/// Adds everything up without keeping the parts: the shortest way from a plan to the net.
pub fn totals(resolved: &Resolved, demand: &Demand) -> Totals {
    let mut totals = Totals::default();
    for &j in &resolved.order {
        for input in &resolved.stages[j].inputs {
            let per_mj = recipe_gases(input, demand.whole[j]) * (1000.0 * demand.scale[j]);
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
