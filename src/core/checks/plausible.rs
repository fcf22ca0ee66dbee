//! Group C: what an auditor finds too good, too bad or too much: capacity, typical values, steam.

use super::parameters::{energy_mj, models};
use super::settings::{Range, Settings};
use super::works;
use super::{Subject, finding};
use crate::core::documents::assessment::{Assessment, Finding, Severity};
use crate::core::documents::pathway::Stage;
use crate::core::domain::{RuleSet, StageKind};
use crate::core::engine::demand::demand;
use crate::core::engine::resolved::{Resolved, Stage as Planned};
use crate::core::models::{alcoholometry, flow, flow::Measured};
use crate::core::units::rounding::{plain, plain_fixed};
use crate::core::units::{Dimension, Quantity};

/// The typical value of a published pathway that may be compared with.
#[derive(Clone, Debug, PartialEq)]
pub struct Typical {
    /// Full id, `edition/row`.
    pub row: String,
    /// Printed total, g CO2e/MJ.
    pub g_co2e_per_mj: f64,
}

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    findings.extend(capacity(subject));
    findings.extend(far_from_typical(
        subject.assessment,
        subject.typical,
        subject.settings,
    ));
    for stage in &subject.resolved.stages {
        findings.extend(steam(stage, subject.resolved, subject.settings));
    }
}

/// C-07: what a works of the chain made in the period fits its capacity of a year.
fn capacity(subject: &Subject) -> Option<Finding> {
    let resolved = subject.resolved;
    let stated = resolved.pathway.plant_capacity_per_year.as_ref()?;
    let capacity = litres(&Quantity::read(stated.value, &stated.unit).ok()?, resolved.rules)?;
    let period = &resolved.pathway.period;
    let days = f64::from(period.from.until(period.to).ok()?.get_days() + 1);
    let demand = demand(resolved);
    let mut made = works::find(resolved, works::handles_matter)
        .into_iter()
        .flat_map(|works| {
            let leaving = works.leaving(resolved, &demand).into_iter();
            leaving
                .filter(|(_, _, product, _)| product.flow.is_ethanol())
                .map(|(j, index, ..)| (j, index))
                .collect::<Vec<_>>()
        });
    // The capacity is that of one works: with several nobody can tell whose it is.
    let (Some((j, index)), None) = (made.next(), made.next()) else {
        return None;
    };
    let stage = &resolved.stages[j];
    let pure = stage.products[index].flow.pure_kg?;
    within_capacity(
        stage.document,
        pure_litres(pure),
        capacity,
        days,
        subject.settings,
    )
}

/// C-07: output and capacity in litres of pure ethanol, the output over so many days, the capacity over a year.
pub fn within_capacity(
    stage: &Stage,
    output: f64,
    capacity: f64,
    days: f64,
    settings: &Settings,
) -> Option<Finding> {
    let most = capacity * days / 365.0 * settings.capacity_percent / 100.0;
    if output <= most {
        return None;
    }
    let message = format!(
        "{} m3 in {} days is above the capacity of {}, {} m3 a year.",
        plain_fixed(output / 1000.0, 0),
        plain(days),
        stage.title(),
        plain_fixed(capacity / 1000.0, 0)
    );
    let remedy = "Correct one of them or give the reason.";
    Some(finding(
        "C-07",
        Severity::Warn,
        &stage.key,
        "output",
        message,
        remedy,
    ))
}

/// Litres of pure ethanol at 20 degC.
fn pure_litres(pure_kg: f64) -> f64 {
    1000.0 * pure_kg / alcoholometry::density(1.0, 20.0)
}

fn litres(amount: &Quantity, rules: &RuleSet) -> Option<f64> {
    match amount.dimension {
        Dimension::VOLUME => Some(amount.value * 1000.0),
        Dimension::MASS => Some(pure_litres(amount.value)),
        Dimension::ENERGY | Dimension::ENERGY_NET => {
            Some(pure_litres(amount.value / 1e6 / rules.ethanol_lhv.value))
        }
        _ => None,
    }
}

/// C-11: far from the typical value of every published pathway that belongs to the chain. A figure without a saving
/// (a partial chain) has nothing to be compared with.
pub fn far_from_typical(
    assessment: &Assessment,
    typical: &[Typical],
    settings: &Settings,
) -> Option<Finding> {
    assessment.saving_percent?;
    let net = assessment.net.g_co2e_per_mj;
    let positive = typical.iter().filter(|row| row.g_co2e_per_mj > 0.0);
    let nearest = positive.min_by(|a, b| {
        let away = |row: &Typical| (net / row.g_co2e_per_mj - 1.0).abs();
        away(a).total_cmp(&away(b))
    })?;
    let ratio = net / nearest.g_co2e_per_mj;
    if (settings.typical_low..=settings.typical_high).contains(&ratio) {
        return None;
    }
    let message = format!(
        "{} is {} % {} the typical value of {} ({} g/MJ).",
        assessment.pathway_name,
        plain_fixed(100.0 * (ratio - 1.0).abs(), 0),
        if ratio < 1.0 { "below" } else { "above" },
        nearest.row,
        plain(nearest.g_co2e_per_mj)
    );
    let remedy = "Write the reason: the auditor will ask.";
    Some(finding("C-11", Severity::Warn, "", "net", message, remedy))
}

/// C-12 for a stage whose heat is metered: boilers, heat and power, heat from a boiler house.
fn steam(stage: &Planned, resolved: &Resolved, settings: &Settings) -> Option<Finding> {
    let pure = stage.products[0].flow.pure_kg.filter(|kg| *kg > 0.0)?;
    let residue = resolved.rules.is_residue_by_law(&resolved.pathway.feedstock);
    let (setup, range) = match stage.kind() {
        StageKind::Processing if residue => ("a works on a residue", settings.steam_residue_works_mj_per_l),
        StageKind::Processing => ("a whole works", settings.steam_works_mj_per_l),
        StageKind::Distillation => ("distillation", settings.steam_distillation_mj_per_l),
        StageKind::Dehydration => ("dehydration", settings.steam_dehydration_mj_per_l),
        _ => return None,
    };
    let own = stage
        .document
        .inputs
        .iter()
        .flat_map(models)
        .filter_map(|model| match model.kind.as_str() {
            "boiler" => energy_mj(model, "heat"),
            "chp" => energy_mj(model, "heat_used").or_else(|| energy_mj(model, "heat_made")),
            _ => None,
        });
    let heat = |flow: &Measured| {
        flow.energy_j()
            .filter(|_| flow.material == flow::HEAT)
            .map(|joules| joules / 1e6)
    };
    let taken = stage.intakes.iter().filter_map(|intake| heat(&intake.flow));
    let all: Vec<f64> = own.chain(taken).collect();
    // Heat that is priced by its fuel, or needed by a still that the program worked out, has no meter to doubt.
    if all.is_empty() {
        return None;
    }
    steam_per_litre(
        stage.document,
        all.iter().sum::<f64>() / pure_litres(pure),
        setup,
        range,
    )
}

/// C-12: useful heat per litre of pure ethanol, MJ/L.
pub fn steam_per_litre(stage: &Stage, mj_per_l: f64, setup: &str, range: Range) -> Option<Finding> {
    if range.holds(mj_per_l) {
        return None;
    }
    let message = format!(
        "{} uses {} MJ of steam per litre; usual for {setup} is {} to {}.",
        stage.title(),
        plain_fixed(mj_per_l, 2),
        plain(range.low),
        plain(range.high)
    );
    let remedy = "Check the meter and its unit, or give the reason.";
    Some(finding(
        "C-12",
        Severity::Warn,
        &stage.key,
        "inputs",
        message,
        remedy,
    ))
}

#[cfg(test)]
mod tests {
    use super::super::tests::stage;
    use super::*;

    #[test]
    fn output_stays_within_the_capacity_of_its_days() {
        let (stage, settings) = (stage(), Settings::default());
        let check = |output, days| within_capacity(&stage, output, 3.65e6, days, &settings);
        assert_eq!(check(3.65e6, 365.0), None);
        assert_eq!(check(1.1e6, 100.0), None);
        assert!(check(1.11e6, 100.0).unwrap().message.contains("in 100 days"));
    }

    #[test]
    fn steam_per_litre_is_usual_for_the_set_up() {
        let (stage, range) = (stage(), Range { low: 3.0, high: 14.0 });
        assert_eq!(steam_per_litre(&stage, 6.7, "a whole works", range), None);
        assert!(
            steam_per_litre(&stage, 24.1, "a whole works", range)
                .unwrap()
                .message
                .contains("3 to 14")
        );
        assert!(steam_per_litre(&stage, 0.67, "a whole works", range).is_some());
    }

    #[test]
    fn a_litre_of_pure_ethanol_weighs_what_the_formula_says() {
        // OIML R 22: 789.24 kg/m3 at 20 degC.
        assert!((pure_litres(789.24) - 1000.0).abs() < 0.01);
    }
}
