//! Groups E and K as far as a pathway alone can tell: evidence, notes, own factors in place of standard ones.

use super::{Subject, finding};
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::Input;
use crate::core::documents::pathway::Stage;
use crate::core::domain::RuleSet;

/// Runs the group.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    for stage in &subject.resolved.stages {
        for input in &stage.document.inputs {
            findings.extend(evidence(stage.document, input));
            findings.extend(soil_method(stage.document, input, subject.resolved.rules));
        }
        if let Some(stated) = &stage.document.stated
            && stated.evidence.is_empty()
        {
            findings.push(no_evidence(
                stage.document,
                "stated",
                "The supplier's statement",
                "supplier",
            ));
        }
    }
    findings.extend(estimates(subject));
}

/// E-01: measured and supplied figures have evidence.
pub fn evidence(stage: &Stage, input: &Input) -> Option<Finding> {
    let origin = input.origin.filter(|origin| origin.is_primary())?;
    if !input.evidence.is_empty() {
        return None;
    }
    let label = input.label.as_deref().unwrap_or(&input.key);
    Some(no_evidence(
        stage,
        &format!("inputs.{}", input.key),
        label,
        origin.name(),
    ))
}

fn no_evidence(stage: &Stage, field: &str, label: &str, origin: &str) -> Finding {
    let message = format!("{label} is given as {origin}, but no document is attached.");
    let remedy = "Attach it, or say that the figure is estimated.";
    finding("E-01", Severity::Block, &stage.key, field, message, remedy)
}

/// E-07: a soil N2O method other than the rule set's.
pub fn soil_method(stage: &Stage, input: &Input, rules: &RuleSet) -> Option<Finding> {
    let model = input
        .model
        .as_ref()?
        .list()
        .iter()
        .find(|model| model.kind == "soil_n2o")?;
    let method = model
        .parameters
        .get("method")
        .and_then(serde_json::Value::as_str)?;
    if method == rules.soil_n2o_method {
        return None;
    }
    let label = input.label.as_deref().unwrap_or(&input.key);
    let message = format!(
        "{label} uses {method} where the standard is {}.",
        rules.soil_n2o_method
    );
    let remedy = "Keep it and write down source and reason, or use the standard.";
    Some(finding(
        "E-07",
        Severity::Warn,
        &stage.key,
        &format!("inputs.{}.method", input.key),
        message,
        remedy,
    ))
}

/// E-10: the share of estimates is shown.
pub fn estimates(subject: &Subject) -> Option<Finding> {
    let percent = subject.assessment.estimated_percent;
    if percent <= 0.0 {
        return None;
    }
    let inputs: Vec<String> = subject
        .resolved
        .stages
        .iter()
        .flat_map(|stage| &stage.document.inputs)
        .filter(|input| {
            input.origin == Some(Origin::Estimated) || input.estimated_percent.is_some_and(|p| p > 0.0)
        })
        .map(|input| input.label.clone().unwrap_or_else(|| input.key.clone()))
        .collect();
    let message = format!(
        "{} % of the figures of {} rests on estimates: {}.",
        crate::core::units::rounding::plain_fixed(percent, 1),
        subject.assessment.pathway_name,
        inputs.join(", ")
    );
    let remedy = "Put readings or bills in their place where there are any.";
    Some(finding("E-10", Severity::Info, "", "inputs", message, remedy))
}
