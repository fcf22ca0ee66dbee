//! The energy of a consignment: by the factor that the rule set fixes for records, else by the heating value of its
//! arithmetic over the ethanol in the fuel.

use crate::core::documents::StatementFacts;
use crate::core::documents::statement::figures::ConsignmentEnergy;
use crate::core::domain::{Cited, RuleSet};
use crate::core::models::alcoholometry::density;
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity};

/// The energy of the consignment; none where quantity or what it takes is not given.
pub fn energy(facts: &StatementFacts, rules: &RuleSet) -> Option<ConsignmentEnergy> {
    let (amount, unit) = (facts.quantity?, facts.quantity_unit.as_deref()?);
    let quantity = Quantity::read(amount, unit).ok()?;
    let entered = format!("{} {unit}", plain(amount));
    match quantity.dimension {
        Dimension::ENERGY => {
            let energy_mj = quantity.value / 1e6;
            let how = format!("{entered}, stated as energy");
            finite(energy_mj, None, how)
        }
        Dimension::VOLUME => match &rules.consignment_lhv_volume {
            Some(fixed) => by(quantity.value * 1000.0, "L", fixed, &entered),
            None => {
                let kg = quantity.value * fuel_density(facts)?;
                by_arithmetic(kg, facts, rules, &entered)
            }
        },
        Dimension::MASS => match &rules.consignment_lhv_mass {
            Some(fixed) => by(quantity.value, "kg", fixed, &entered),
            None => by_arithmetic(quantity.value, facts, rules, &entered),
        },
        _ => None,
    }
}

/// Density of the fuel at the stated strength and temperature, kg/m3 (OIML R 22).
fn fuel_density(facts: &StatementFacts) -> Option<f64> {
    let (strength, celsius) = (facts.strength_percent_mass?, facts.temperature_c?);
    Some(density(strength / 100.0, celsius)).filter(|density| density.is_finite())
}

fn by(amount: f64, unit: &str, fixed: &Cited, entered: &str) -> Option<ConsignmentEnergy> {
    let how = format!(
        "{entered} = {} {unit} x {} {}",
        plain(amount),
        plain(fixed.value),
        fixed.unit
    );
    finite(amount * fixed.value, Some(fixed.clone()), how)
}

fn by_arithmetic(
    kg: f64,
    facts: &StatementFacts,
    rules: &RuleSet,
    entered: &str,
) -> Option<ConsignmentEnergy> {
    let strength = facts.strength_percent_mass? / 100.0;
    if strength <= 0.0 {
        return None;
    }
    let pure = kg * strength;
    let how = format!(
        "{entered} = {} kg of pure ethanol x {}",
        plain(pure),
        rules.ethanol_words(strength)
    );
    finite(
        rules.ethanol_mj(pure, strength),
        Some(rules.ethanol_lhv.clone()),
        how,
    )
}

fn finite(energy_mj: f64, factor: Option<Cited>, how: String) -> Option<ConsignmentEnergy> {
    energy_mj.is_finite().then_some(ConsignmentEnergy {
        energy_mj,
        factor,
        how,
    })
}
