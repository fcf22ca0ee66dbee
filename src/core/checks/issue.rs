//! Checks of the moment in which a figure is issued, with the day, the people and the hash at hand: E-02, E-12, E-13. They run
//! in the preflight of a statement; a pathway under work has neither a day of issue nor an approver, so nothing is said there.

use super::finding;
use crate::core::documents::Assessment;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::pathway::Pathway;
use crate::core::documents::records::{Audit, AuditScope};
use crate::core::domain::StageKind;
use jiff::civil::Date;

/// E-02: actual values only after a passed audit of that skill. `actual` tells whether an input of the stage counts as an
/// actual value (bought fuel brings its supplier's audit, defaults need none). Growers and carriers are covered by the
/// audit of the works that works their figures out; so one is asked for each works of the chain, or one for the pathway.
pub fn audited(pathway: &Pathway, issued_on: Date) -> Vec<Finding> {
    let holds = |audit: &&Audit| {
        audit.scope == AuditScope::ActualValues
            && audit.passed_on < issued_on
            && audit.valid_to.is_none_or(|last| issued_on <= last)
    };
    let passed: Vec<&Audit> = pathway.audits.iter().filter(holds).collect();
    if passed.iter().any(|audit| audit.stage.is_none()) {
        return Vec::new();
    }
    let has_works = pathway.stages.iter().any(|stage| is_works(stage.kind));
    let sites = pathway.stages.iter().filter(|stage| {
        let site = is_works(stage.kind) || (!has_works && stage.kind != StageKind::Bought);
        site && !stage.inputs.is_empty()
    });
    let without: Vec<&str> = sites
        .clone()
        .filter(|stage| {
            !passed
                .iter()
                .any(|audit| audit.stage.as_deref() == Some(stage.key.as_str()))
        })
        .map(|stage| stage.key.as_str())
        .collect();
    // Sections of one works stand under one audit: it is enough where any of them names it.
    if has_works && sites.count() > without.len() {
        return Vec::new();
    }
    let Some(first) = without.first() else {
        return Vec::new();
    };
    let title = pathway
        .stages
        .iter()
        .find(|stage| stage.key == **first)
        .map_or(*first, |stage| stage.title());
    let message = format!("{title} has no passed audit for actual values before {issued_on}.");
    let remedy = "Use default values or enter the audit.";
    vec![finding("E-02", Severity::Block, first, "audits", message, remedy)]
}

fn is_works(kind: StageKind) -> bool {
    super::works::with_boiler_house(kind)
}

/// E-12: the document is the one that was assessed.
pub fn unchanged(pathway_hash: &str, assessment: &Assessment) -> Option<Finding> {
    (pathway_hash != assessment.pathway_hash).then(|| {
        let message = format!("{} was changed after the assessment.", assessment.pathway_name);
        finding(
            "E-12",
            Severity::Block,
            "",
            "pathway_hash",
            message,
            "Work it out again.",
        )
    })
}

/// E-13: who submitted a statement is not who approves it. Compared by identity, never by name.
pub fn two_people<I: PartialEq>(
    statement: &str,
    submitted_by: &I,
    submitter: &str,
    approved_by: &I,
) -> Option<Finding> {
    (submitted_by == approved_by).then(|| {
        let message = format!("{submitter} submitted statement {statement} and cannot approve it.");
        finding(
            "E-13",
            Severity::Block,
            "",
            "approved_by",
            message,
            "Ask another person to approve it.",
        )
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use jiff::civil::date;
    use serde_json::json;

    fn pathway(audits: &serde_json::Value) -> Pathway {
        let document = json!({
            "format": "wheelwort.pathway/1", "name": "Invented", "feedstock": "wheat",
            "period": { "from": "2026-10-01", "to": "2027-09-30" }, "rule_set": "eu-2018-2001", "audits": audits,
            "stages": [
                { "key": "field", "kind": "cultivation", "output": { "material": "wheat", "amount": 8, "unit": "t" } },
                { "key": "works", "kind": "processing", "name": "Works", "output": { "material": "ethanol", "amount": 1, "unit": "t" },
                  "intakes": [ { "from": "field", "amount": 3, "unit": "t" } ],
                  "inputs": [ { "key": "gas", "amount": 1, "unit": "GJ", "factor": "eu-2022-996/fuel_natural_gas" } ] } ] });
        Pathway::from_value(&document).unwrap()
    }

    #[test]
    fn actual_values_come_after_an_audit() {
        let issued = date(2027, 10, 15);
        let check = |audits: serde_json::Value| audited(&pathway(&audits), issued);
        assert_eq!(
            check(json!([])).first().map(|found| found.id.as_str()),
            Some("E-02")
        );
        let audit =
            |scope: &str, passed: &str| json!({ "stage": "works", "scope": scope, "passed_on": passed });
        assert!(check(json!([audit("actual_values", "2026-11-03")])).is_empty());
        assert!(check(json!([{ "scope": "actual_values", "passed_on": "2026-11-03" }])).is_empty());
        assert_eq!(check(json!([audit("mass_balance", "2026-11-03")])).len(), 1);
        assert_eq!(check(json!([audit("actual_values", "2027-10-15")])).len(), 1);
        let mut ended = audit("actual_values", "2026-11-03");
        ended["valid_to"] = json!("2027-10-14");
        assert_eq!(check(json!([ended])).len(), 1);
    }

    #[test]
    fn two_people_issue_a_statement() {
        assert_eq!(two_people("S-1", &1, "A. Preparer", &2), None);
        let found = two_people("S-1", &1, "A. Preparer", &1).unwrap();
        assert_eq!((found.id.as_str(), found.severity), ("E-13", Severity::Block));
    }
}
