//! What an auditor would ask, as pure functions: an assessment in, findings out. Ids are those of the audit checklist
//! and are never used again. `registry` lists every check the program runs and where it runs.

pub mod balances;
pub mod capture;
pub mod complete;
pub mod recompute;
pub mod registry;
pub mod sharing;

use crate::core::documents::assessment::{Assessment, Finding, Severity};
use crate::core::engine::carbon::Basis;
use crate::core::engine::resolved::Resolved;

/// What a check may look at.
pub struct Subject<'s> {
    /// The assessment under question.
    pub assessment: &'s Assessment,
    /// The plan it came from.
    pub resolved: &'s Resolved<'s>,
    /// What the carbon closure rests on.
    pub carbon_basis: Basis,
}

/// Runs every check; findings come in the order of the registry's groups.
pub fn run(subject: &Subject) -> Vec<Finding> {
    let mut findings = Vec::new();
    recompute::run(subject, &mut findings);
    sharing::run(subject, &mut findings);
    balances::run(subject, &mut findings);
    capture::run(subject, &mut findings);
    complete::run(subject, &mut findings);
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
    }
}

/// Severity first, then id, then place: the order in which people should read findings.
pub fn sort(findings: &mut [Finding]) {
    findings.sort_by(|a, b| {
        (a.severity, &a.id, &a.stage, &a.field).cmp(&(b.severity, &b.id, &b.stage, &b.field))
    });
}
