//! What an auditor would ask, as pure functions: an assessment in, findings out. Ids are those of the audit checklist
//! and are never used again. `registry` lists every check the program runs and where it runs.

pub mod balances;
pub mod capture;
pub mod complete;
pub mod evidence;
pub mod fields;
pub mod issue;
pub mod matter;
pub mod meters;
pub mod own_factors;
mod parameters;
pub mod periods;
pub mod plausible;
pub mod reasons;
pub mod recalculated;
pub mod recompute;
pub mod registry;
pub mod settings;
pub mod sharing;
mod works;

use crate::core::documents::assessment::{Assessment, Finding, Severity};
use crate::core::domain::Book;
use crate::core::engine::carbon::Basis;
use crate::core::engine::resolved::Resolved;
use plausible::Typical;
use settings::Settings;

/// What a check may look at.
pub struct Subject<'s> {
    /// The assessment under question.
    pub assessment: &'s Assessment,
    /// The plan it came from.
    pub resolved: &'s Resolved<'s>,
    /// What the carbon closure rests on.
    pub carbon_basis: Basis,
    /// The published data it was made with.
    pub book: &'s Book,
    /// Typical values of the published pathways that belong to the chain, or come nearest to it.
    pub typical: &'s [Typical],
    /// Tolerances and usual ranges in force.
    pub settings: &'s Settings,
}

/// Runs every check; findings come in the order of the registry's groups.
pub fn run(subject: &Subject) -> Vec<Finding> {
    let mut findings = Vec::new();
    recompute::run(subject, &mut findings);
    sharing::run(subject, &mut findings);
    recalculated::run(subject, &mut findings);
    balances::run(subject, &mut findings);
    matter::run(subject, &mut findings);
    plausible::run(subject, &mut findings);
    meters::run(subject, &mut findings);
    periods::run(subject, &mut findings);
    fields::run(subject, &mut findings);
    capture::run(subject, &mut findings);
    complete::run(subject, &mut findings);
    evidence::run(subject, &mut findings);
    own_factors::run(subject, &mut findings);
    findings
}

/// A finding about the whole pathway or a stage.
pub fn finding(
    id: &str,
    severity: Severity,
    stage: &str,
    field: &str,
    message: String,
    remedy: &str,
) -> Finding {
    Finding {
        id: id.to_owned(),
        severity,
        stage: stage.to_owned(),
        field: field.to_owned(),
        message,
        remedy: remedy.to_owned(),
        reason: None,
    }
}

/// Severity first, then id, then place: the order in which people should read findings.
pub fn sort(findings: &mut [Finding]) {
    findings.sort_by(|a, b| {
        (a.severity, &a.id, &a.stage, &a.field).cmp(&(b.severity, &b.id, &b.stage, &b.field))
    });
}

#[cfg(test)]
mod tests {
    use crate::core::documents::Pathway;
    use crate::core::documents::pathway::Stage;
    use serde_json::json;

    /// A field stage for checks that only name it.
    pub fn stage() -> Stage {
        let document = json!({
            "format": "wheelwort.pathway/1", "name": "Invented", "feedstock": "wheat",
            "period": { "from": "2026-10-01", "to": "2027-09-30" }, "rule_set": "eu-2018-2001",
            "stages": [ { "key": "field", "kind": "cultivation", "name": "Field",
                "output": { "material": "wheat", "amount": 8, "unit": "t" },
                "inputs": [ { "key": "n2o", "model": { "kind": "soil_n2o" } } ] } ] });
        Pathway::from_value(&document).unwrap().stages.remove(0)
    }
}
