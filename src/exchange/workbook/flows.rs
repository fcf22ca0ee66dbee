//! Formulas of one flow on the sheet of stages: from the amount as entered to base units, dry matter and pure ethanol.

use super::chain::{BASE, DENSITY, DRY, MOISTURE, NAME, STRENGTH};
use super::factors::{Constant, constant};
use super::page::{cell, on};
use crate::core::documents::pathway::Flow;
use crate::core::domain::RuleSet;
use crate::core::domain::rule_set::EthanolWater;
use crate::core::models::flow::Measured;
use crate::core::units::Dimension;

/// The symbol of the base unit of a flow.
pub fn base_unit(measured: &Measured) -> &'static str {
    match measured.dimension {
        Dimension::MASS => "kg",
        Dimension::VOLUME => "m3",
        Dimension::AREA => "m2",
        Dimension::ENERGY => "J",
        _ => "",
    }
}

/// Density of a volume of ethanol, kg/m3.
pub fn density(measured: &Measured) -> Option<f64> {
    let wet = measured.wet_kg.filter(|_| measured.is_ethanol())?;
    (measured.dimension == Dimension::VOLUME).then(|| wet / measured.base)
}

/// MJ per kilogram of pure ethanol, where the strength (a share of one) is a formula.
pub fn ethanol_mj_per_kg(rules: &RuleSet, strength: &str) -> String {
    let lhv = constant(Constant::EthanolLhv);
    match rules.ethanol_water {
        EthanolWater::Ignored => lhv,
        EthanolWater::Evaporated => {
            let water = constant(Constant::WaterEvaporation);
            format!("({lhv}-{water}*(1/({strength})-1))")
        }
    }
}

/// The strength of a row as a share of one.
pub fn strength(row: u32) -> String {
    format!("{}/100", cell(row, STRENGTH))
}

/// The formula of dry matter or pure ethanol, kg, and its figure; none where a flow has neither.
pub fn dry(measured: &Measured, rules: &RuleSet, row: u32) -> Option<(String, f64)> {
    let base = cell(row, BASE);
    if let Some(pure) = measured.pure_kg {
        let share = strength(row);
        let formula = match measured.dimension {
            Dimension::VOLUME => format!("={base}*{}*{share}", cell(row, DENSITY)),
            Dimension::ENERGY => format!("={base}/1000000/{}", ethanol_mj_per_kg(rules, &share)),
            _ => format!("={base}*{share}"),
        };
        return Some((formula, pure));
    }
    let dry = measured.dry_kg()?;
    let formula = match measured.moisture {
        Some(_) => format!("={base}*(1-{}/100)", cell(row, MOISTURE)),
        None => format!("={base}"),
    };
    Some((formula, dry))
}

/// The mass with its water, kg, as a formula on another sheet; none where a flow has none.
/// A flow that is not entered follows from the fuel burnt.
pub fn wet(measured: &Measured, entered: bool, row: u32) -> Option<String> {
    measured.wet_kg?;
    let base = on(NAME, row, BASE);
    let over_strength = || format!("{}/({}/100)", on(NAME, row, DRY), on(NAME, row, STRENGTH));
    Some(match measured.dimension {
        _ if !entered => over_strength(),
        Dimension::VOLUME => format!("{base}*{}", on(NAME, row, DENSITY)),
        Dimension::ENERGY => over_strength(),
        _ => base,
    })
}

/// What a reader should know about figures of a flow that are values.
pub fn note(flow: &Flow, measured: &Measured) -> String {
    let mut notes = Vec::new();
    if flow.strength_percent_vol.is_some() {
        notes.push("strength entered in % vol, as % mass by OIML R 22: a value");
    }
    if density(measured).is_some() {
        notes.push("density by OIML R 22 at its strength and temperature: a value");
    }
    if measured.is_ethanol() && !measured.strength_given {
        notes.push("no strength given: counts as pure ethanol");
    } else if measured.is_ethanol()
        && flow.strength_percent_mass.is_none()
        && flow.strength_percent_vol.is_none()
    {
        notes.push("strength of the fuel it is made from");
    }
    notes.join("; ")
}
