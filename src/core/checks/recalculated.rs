//! Group A: one basis of heating values, and an outside recalculation against what was issued.

use super::settings::Settings;
use super::{Subject, finding};
use crate::core::documents::Assessment;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::units::rounding::{plain, plain_fixed};
use crate::core::units::{Dimension, Quantity};
use std::collections::BTreeMap;

/// Runs the check that a pathway can tell.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    findings.extend(one_basis(&heating_values(subject)));
}

/// A heating value as entered, and the lower and the higher one it may be.
#[derive(Clone, Debug, PartialEq)]
pub struct HeatingValue {
    /// Key of the stage.
    pub stage: String,
    /// Field.
    pub field: String,
    /// What it is of.
    pub name: String,
    /// True if it is the higher heating value.
    pub higher: bool,
}

/// heating values stand on one basis.
pub fn one_basis(values: &[HeatingValue]) -> Option<Finding> {
    let first = values.iter().find(|value| value.higher)?;
    let names: Vec<&str> = values
        .iter()
        .filter(|value| value.higher)
        .map(|value| value.name.as_str())
        .collect();
    let lower = values.len() - names.len();
    let message = format!(
        "The higher heating value is used for {}; the rule set and {lower} other heating values entered count with the lower.",
        names.join(", ")
    );
    let remedy = "Bring them to the lower heating value.";
    Some(finding(
        "A-11",
        Severity::Block,
        &first.stage,
        &first.field,
        message,
        remedy,
    ))
}

/// True if a heating value is the higher one: nearer to it than to the lower one, which it passes by the setting.
pub fn is_higher(entered: f64, lower: f64, higher: f64, settings: &Settings) -> bool {
    entered > lower * (1.0 + settings.higher_basis_percent / 100.0)
        && (entered - higher).abs() < (entered - lower).abs()
}

/// Higher over lower heating value of ethanol, from its molar heat of combustion: 29.7 and 26.8 MJ/kg.
const ETHANOL_HIGHER: f64 = 29.7 / 26.8;

fn heating_values(subject: &Subject) -> Vec<HeatingValue> {
    let resolved = subject.resolved;
    let per_mass = Dimension::ENERGY.per(Dimension::MASS);
    let mut values = Vec::new();
    for stage in &resolved.stages {
        let mut see = |field: String, name: String, entered: f64, lower: f64, higher: f64| {
            values.push(HeatingValue {
                stage: stage.document.key.clone(),
                field,
                name,
                higher: is_higher(entered, lower, higher, subject.settings),
            });
        };
        let stated = stage.document.stated.as_ref();
        if let Some(lhv) = stated.and_then(|stated| stated.lhv.as_ref())
            && let Ok(joules) = Quantity::read_as(lhv.value, &lhv.unit, per_mass)
        {
            let lower = resolved.rules.ethanol_lhv.value;
            let name = format!("the proof of {}", stage.document.title());
            see(
                "stated.lhv".to_owned(),
                name,
                joules / 1e6,
                lower,
                lower * ETHANOL_HIGHER,
            );
        }
        for (document, product) in stage
            .document
            .co_products
            .iter()
            .zip(stage.products.iter().skip(1))
        {
            let Some(lhv) = &document.flow.lhv else { continue };
            let library = subject.book.materials.get(&document.material);
            let known = library.and_then(|m| m.value("lhv_dry").zip(m.value("hhv_dry")));
            let (Some((lower, higher)), Ok(joules)) =
                (known, Quantity::read_as(lhv.value, &lhv.unit, per_mass))
            else {
                continue;
            };
            // As it leaves: water costs its evaporation on the lower basis and nothing on the higher one.
            let water = product.flow.moisture.unwrap_or(0.0);
            let wet = lower * (1.0 - water) - resolved.rules.water_evaporation.value * water;
            let field = format!("co_products.{}.lhv", document.key);
            see(
                field,
                document.name.clone(),
                joules / 1e6,
                wet,
                higher * (1.0 - water),
            );
        }
    }
    values
}

/// What an outside recalculation found.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Recalculated {
    /// Net, g CO2e/MJ.
    pub net_g_per_mj: f64,
    /// Contributions by `stage/input`, g CO2e/MJ, as far as they were recalculated.
    pub inputs_g_per_mj: BTreeMap<String, f64>,
}

/// an outside recalculation agrees with what was issued; else the first step that differs is named.
pub fn recalculation(
    statement: &str,
    issued: &Assessment,
    theirs: &Recalculated,
    settings: &Settings,
) -> Option<Finding> {
    let ours = issued.net.g_co2e_per_mj;
    if agrees(ours, theirs.net_g_per_mj, settings) {
        return None;
    }
    let rows = issued.stages.iter().flat_map(|stage| {
        let rows = stage.inputs.iter();
        rows.map(|row| (format!("{}/{}", stage.key, row.key), row.g_co2e_per_mj))
    });
    let mut known = rows.filter_map(|(key, ours)| {
        let theirs = *theirs.inputs_g_per_mj.get(&key)?;
        Some((key, ours, theirs))
    });
    let first = known.find(|(_, ours, theirs)| !agrees(*ours, *theirs, settings));
    let remedy = match &first {
        Some((step, ..)) => format!("Open the workings at {step}, the first that differs."),
        None => "Open the workings and compare stage by stage: no single figure that was given differs."
            .to_owned(),
    };
    let message = format!(
        "Your recalculation of statement {statement} gives {} g/MJ, it says {}.",
        plain(theirs.net_g_per_mj),
        plain_fixed(ours, 4)
    );
    let (stage, field) = match first.as_ref().and_then(|(step, ..)| step.split_once('/')) {
        Some((stage, input)) => (stage, format!("inputs.{input}")),
        None => ("", "net".to_owned()),
    };
    Some(finding("A-14", Severity::Warn, stage, &field, message, &remedy))
}

fn agrees(issued: f64, theirs: f64, settings: &Settings) -> bool {
    (issued - theirs).abs() <= settings.recalculation_g_per_mj.max(1e-6 * issued.abs())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn value(name: &str, higher: bool) -> HeatingValue {
        let (stage, field) = ("works".to_owned(), format!("co_products.{name}.lhv"));
        HeatingValue {
            stage,
            field,
            name: name.to_owned(),
            higher,
        }
    }

    #[test]
    fn heating_values_stand_on_one_basis() {
        let settings = Settings::default();
        // Ethanol: 26.81 MJ/kg is the rule set's, 29.7 the higher one.
        assert!(!is_higher(26.81, 26.81, 26.81 * ETHANOL_HIGHER, &settings));
        assert!(!is_higher(27.0, 26.81, 26.81 * ETHANOL_HIGHER, &settings));
        assert!(is_higher(29.7, 26.81, 26.81 * ETHANOL_HIGHER, &settings));
        assert_eq!(one_basis(&[value("pulp", false), value("oil", false)]), None);
        let found = one_basis(&[value("pulp", false), value("oil", true)]).unwrap();
        assert_eq!(
            (found.id.as_str(), found.field.as_str()),
            ("A-11", "co_products.oil.lhv")
        );
        assert!(found.message.contains("for oil"));
    }
}
