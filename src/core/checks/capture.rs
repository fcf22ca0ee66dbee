//! Captured CO2 and other deductions as far as the whole chain tells: no more than the works form, and proofs in place.

use super::parameters::{mass_kg, models, word};
use super::{Subject, finding};
use crate::core::documents::assessment::{Assessment, Finding, Severity};
use crate::core::documents::input::{Input, ModelUse};
use crate::core::documents::pathway::Stage;
use crate::core::domain::StageKind;
use crate::core::engine::demand::demand;
use crate::core::engine::resolved::Resolved;
use crate::core::units::rounding::plain_fixed;
use serde_json::Value;

/// Rounding that a sum of doubles may bring.
const SUM: f64 = 1e-9;

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    findings.extend(captured_not_above_formed(subject));
    findings.extend(not_in_two_credits(&credits(subject.resolved)));
    for stage in &subject.resolved.stages {
        findings.extend(emissions_of_capture(stage.document));
        for input in &stage.document.inputs {
            findings.extend(storage_evidence(stage.document, input));
            findings.extend(bonus_evidence(stage.document, input));
        }
    }
}

fn says(model: &ModelUse, name: &str, word: &str) -> bool {
    model.parameters.get(name).and_then(Value::as_str) == Some(word)
}

/// C-03: all captures of the chain together take no more biogenic CO2 than its works form.
pub fn captured_not_above_formed(subject: &Subject) -> Option<Finding> {
    let resolved = subject.resolved;
    let whole = demand(resolved).whole;
    let (mut captured, mut last) = (0.0, None);
    for (stage, whole) in resolved.stages.iter().zip(&whole) {
        for input in &stage.inputs {
            if let Some(kg) = input.captured_kg.filter(|_| *whole > 0.0) {
                captured += 1000.0 * kg * whole;
                last = Some((stage.document, input.key.as_str(), *whole));
            }
        }
    }
    let (stage, key, whole) = last?;
    let formed = formed(resolved, subject.assessment);
    if captured <= formed * (1.0 + SUM) {
        return None;
    }
    let tonnes = |g_per_mj: f64| plain_fixed(g_per_mj / whole / 1e6, 1);
    let message = format!(
        "{} captures {} t of CO2, more than the works can form ({} t).",
        stage.title(),
        tonnes(captured),
        tonnes(formed)
    );
    let remedy = "Check the CO2 meter or enter the other biogenic sources.";
    let field = format!("inputs.{key}.co2_captured");
    Some(finding(
        "C-03",
        Severity::Block,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// Biogenic CO2 that the works of the chain give off, g per MJ with all shares 1.
fn formed(resolved: &Resolved, assessment: &Assessment) -> f64 {
    let works: Vec<&str> = resolved
        .stages
        .iter()
        .filter(|stage| {
            let elsewhere = matches!(stage.kind(), StageKind::Bought | StageKind::Combustion);
            !stage.kind().is_before_works() && !elsewhere
        })
        .map(|stage| stage.document.key.as_str())
        .collect();
    let releases = assessment.carbon.releases.iter();
    releases
        .filter(|release| works.contains(&release.stage.as_str()))
        .map(|release| release.g_co2_per_mj)
        .sum()
}

/// G-01: a replacement states what capturing and processing the CO2 emits.
pub fn emissions_of_capture(stage: &Stage) -> Option<Finding> {
    let (input, model) = stage.inputs.iter().find_map(|input| {
        let model = models(input)
            .iter()
            .find(|model| says(model, "use", "replace_fossil"));
        model
            .filter(|model| model.kind == "capture")
            .map(|model| (input, model))
    })?;
    let others = stage
        .inputs
        .iter()
        .any(|other| !models(other).iter().any(|model| model.kind == "capture"));
    if others || model.parameters.contains_key("power_per_co2") {
        return None;
    }
    let message = format!(
        "The CO2 credit of {} lacks the emissions of capturing it.",
        stage.title()
    );
    let remedy = "Enter it or take the credit out.";
    let field = format!("inputs.{}", input.key);
    Some(finding(
        "G-01",
        Severity::Block,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// G-02: stored CO2 has contract and invoice attached.
pub fn storage_evidence(stage: &Stage, input: &Input) -> Option<Finding> {
    let stored = |model: &ModelUse| model.kind == "capture" && says(model, "use", "store");
    if !input.evidence.is_empty() || !models(input).iter().any(stored) {
        return None;
    }
    let message = format!(
        "No proof that the CO2 of {} was stored: no document is attached.",
        stage.title()
    );
    let remedy = "Name site and permit and attach contract and invoice.";
    let field = format!("inputs.{}", input.key);
    Some(finding(
        "G-02",
        Severity::Block,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// E-01: the bonus for degraded land rests on evidence, whatever the origin of the figures.
pub fn bonus_evidence(stage: &Stage, input: &Input) -> Option<Finding> {
    let asked = |model: &ModelUse| {
        model.kind == "land_use_change"
            && model.parameters.get("degraded_land_bonus") == Some(&Value::Bool(true))
    };
    if !input.evidence.is_empty() || !models(input).iter().any(asked) {
        return None;
    }
    let label = input.label.as_deref().unwrap_or(&input.key);
    let message = format!("{label} takes the bonus for degraded land, but no document is attached.");
    let remedy =
        "Attach proof that the land was unused in January 2008 and severely degraded, or take the bonus out.";
    let field = format!("inputs.{}.degraded_land_bonus", input.key);
    Some(finding(
        "E-01",
        Severity::Block,
        &stage.key,
        &field,
        message,
        remedy,
    ))
}

/// A credit for captured CO2, per MJ of fuel with all shares 1.
#[derive(Clone, Debug, PartialEq)]
pub struct Credit {
    /// Key of the stage.
    pub stage: String,
    /// Name of the stage.
    pub name: String,
    /// Field.
    pub field: String,
    /// Stored, or else in place of fossil CO2.
    pub stored: bool,
    /// What was captured, as read.
    pub captured: f64,
    /// What is credited.
    pub delivered: f64,
    /// Evidence of the figures.
    pub evidence: Vec<String>,
    /// t per unit of the two figures, to show them as entered.
    pub tonnes: f64,
}

/// G-03: what a storage credit and a replacement credit share in one reading is credited once. Two readings are one where
/// they are equal or rest on the same evidence.
pub fn not_in_two_credits(credits: &[Credit]) -> Vec<Finding> {
    let mut findings = Vec::new();
    for store in credits.iter().filter(|credit| credit.stored) {
        for other in credits.iter().filter(|credit| !credit.stored) {
            let equal = (store.captured - other.captured).abs() <= 1e-6 * store.captured;
            let one_reading = equal || store.evidence.iter().any(|id| other.evidence.contains(id));
            let twice = store.delivered + other.delivered - store.captured.max(other.captured);
            if !one_reading || twice <= SUM * store.captured {
                continue;
            }
            let message = format!(
                "{} t CO2 of {} appear in both storage and replacement.",
                plain_fixed(twice * store.tonnes, 1),
                store.name
            );
            let remedy = "Lower one of the two.";
            findings.push(finding(
                "G-03",
                Severity::Block,
                &store.stage,
                &store.field,
                message,
                remedy,
            ));
        }
    }
    findings
}

fn credits(resolved: &Resolved) -> Vec<Credit> {
    let whole = demand(resolved).whole;
    let mut found = Vec::new();
    for (stage, times) in resolved
        .stages
        .iter()
        .zip(whole)
        .filter(|(_, times)| *times > 0.0)
    {
        for input in &stage.document.inputs {
            for model in models(input).iter().filter(|model| model.kind == "capture") {
                let Some(captured) = mass_kg(model, "co2_captured") else {
                    continue;
                };
                found.push(Credit {
                    stage: stage.document.key.clone(),
                    name: stage.document.title().to_owned(),
                    field: format!("inputs.{}.co2_captured", input.key),
                    stored: word(model, "use") == Some("store"),
                    captured: captured * times,
                    delivered: mass_kg(model, "co2_delivered").unwrap_or(captured) * times,
                    evidence: input.evidence.clone(),
                    tonnes: 1.0 / times / 1000.0,
                });
            }
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    fn credit(stored: bool, captured: f64, delivered: f64, evidence: &str) -> Credit {
        let (stage, field) = (
            if stored { "store" } else { "sell" }.to_owned(),
            "inputs.credit".to_owned(),
        );
        let evidence = vec![evidence.to_owned()];
        Credit {
            name: stage.clone(),
            stage,
            field,
            stored,
            captured,
            delivered,
            evidence,
            tonnes: 0.001,
        }
    }

    #[test]
    fn a_tonne_is_credited_once() {
        let found = |a, b| not_in_two_credits(&[a, b]);
        // One reading of 100 t divided between the two uses.
        assert!(found(credit(true, 1e5, 6e4, "EV-1"), credit(false, 1e5, 4e4, "EV-1")).is_empty());
        // Two readings of their own.
        assert!(found(credit(true, 1e5, 9e4, "EV-1"), credit(false, 8e4, 8e4, "EV-2")).is_empty());
        // The same reading credited in full twice, by its figure or by its evidence.
        let equal = found(credit(true, 1e5, 1e5, "EV-1"), credit(false, 1e5, 1e5, "EV-2"));
        assert!(equal[0].message.starts_with("100.0 t CO2 of store"));
        assert_eq!(
            found(credit(true, 1e5, 9e4, "EV-1"), credit(false, 8e4, 8e4, "EV-1"))[0].id,
            "G-03"
        );
        // Two of one use are for C-03 to judge.
        assert!(found(credit(true, 1e5, 1e5, "EV-1"), credit(true, 1e5, 1e5, "EV-1")).is_empty());
    }
}
