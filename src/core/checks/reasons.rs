//! Written reasons for warnings: a warning lets a statement pass only with one. A reason names the finding by check,
//! stage and field, so that it stays with it when the document is evaluated again.

use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::problem::Problems;
use jiff::Timestamp;
use serde::{Deserialize, Serialize};
use std::collections::BTreeSet;
use utoipa::ToSchema;

/// The most letters of a reason.
pub const LONGEST: usize = 2000;

/// Why a warning is accepted.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct Reason {
    /// Id of the check.
    pub id: String,
    /// Key of the stage; empty for the whole pathway.
    #[serde(default)]
    pub stage: String,
    /// Field of the finding.
    #[serde(default)]
    pub field: String,
    /// The reason, 1 to 2000 letters.
    pub text: String,
    /// Who gave it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub who: Option<String>,
    /// When.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = DateTime)]
    pub when: Option<Timestamp>,
}

impl Reason {
    fn is_for(&self, finding: &Finding) -> bool {
        self.place()
            == (
                finding.id.as_str(),
                finding.stage.as_str(),
                finding.field.as_str(),
            )
    }

    fn place(&self) -> (&str, &str, &str) {
        (&self.id, &self.stage, &self.field)
    }
}

/// Findings with their reasons, and the reasons that fit none.
#[derive(Clone, Debug, Default, PartialEq, Serialize, ToSchema)]
pub struct Applied {
    /// The findings, in the order they came.
    pub findings: Vec<Finding>,
    /// Reasons that no warning wants.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub stale: Vec<Stale>,
}

/// A reason that no warning wants.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Stale {
    /// The reason.
    pub reason: Reason,
    /// Why it is of no use.
    pub because: Because,
}

/// Why a reason is of no use.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Because {
    /// The finding is gone.
    FindingGone,
    /// The finding blocks: no reason lifts it.
    Blocks,
    /// The finding only informs: it wants no reason.
    Informs,
}

/// Puts each reason on its warnings. A reason never lifts a finding that blocks. Reasons that are in the findings already
/// are taken off first, so that applying twice gives the same.
pub fn apply(findings: Vec<Finding>, reasons: &[Reason]) -> Applied {
    let mut findings = findings;
    for finding in &mut findings {
        finding.reason = None;
    }
    let mut stale = Vec::new();
    for reason in reasons {
        let mut because = Some(Because::FindingGone);
        for finding in findings.iter_mut().filter(|finding| reason.is_for(finding)) {
            match finding.severity {
                Severity::Warn => {
                    finding.reason = Some(reason.text.clone());
                    because = None;
                }
                Severity::Block => because = because.map(|_| Because::Blocks),
                Severity::Info => because = because.map(|_| Because::Informs),
            }
        }
        stale.extend(because.map(|because| Stale {
            reason: reason.clone(),
            because,
        }));
    }
    Applied { findings, stale }
}

/// Warnings that still want a reason.
pub fn wanting(findings: &[Finding]) -> impl Iterator<Item = &Finding> {
    let wants = |finding: &&Finding| finding.severity == Severity::Warn && finding.reason.is_none();
    findings.iter().filter(wants)
}

/// Checks a list of reasons: each has a text of 1 to 2000 letters and a known check, and a place is named once.
///
/// # Errors
/// Everything that is wrong, each with JSON pointer and remedy.
pub fn check(reasons: &[Reason]) -> Result<(), Problems> {
    let mut problems = Problems::default();
    let mut seen = BTreeSet::new();
    for (index, reason) in reasons.iter().enumerate() {
        let letters = reason.text.trim().chars().count();
        if letters == 0 || reason.text.chars().count() > LONGEST {
            let detail = "The reason is empty or longer than 2000 letters.";
            problems.add(format!("/{index}/text"), detail, "Give 1 to 2000 letters.");
        }
        if super::registry::find(&reason.id).is_none() {
            let detail = format!("There is no check \"{}\".", reason.id);
            problems.add(format!("/{index}/id"), detail, "Take the id from the finding.");
        }
        if !seen.insert(reason.place()) {
            let detail = format!("A reason for {} stands twice at this place.", reason.id);
            problems.add(format!("/{index}"), detail, "Keep one of the two.");
        }
    }
    match problems.is_empty() {
        true => Ok(()),
        false => Err(problems),
    }
}

#[cfg(test)]
mod tests {
    use super::super::finding;
    use super::*;

    fn found(id: &str, severity: Severity, field: &str) -> Finding {
        finding(id, severity, "works", field, "It is so.".to_owned(), "Change it.")
    }

    fn reason(id: &str, field: &str, text: &str) -> Reason {
        let (id, stage, field, text) = (
            id.to_owned(),
            "works".to_owned(),
            field.to_owned(),
            text.to_owned(),
        );
        Reason {
            id,
            stage,
            field,
            text,
            who: None,
            when: None,
        }
    }

    #[test]
    fn a_reason_goes_to_its_warning_and_to_no_other() {
        let findings = vec![
            found("C-12", Severity::Warn, "inputs.steam"),
            found("C-12", Severity::Warn, "inputs.other"),
        ];
        let applied = apply(
            findings,
            &[reason("C-12", "inputs.steam", "wet wash this season")],
        );
        assert_eq!(
            applied.findings[0].reason.as_deref(),
            Some("wet wash this season")
        );
        assert_eq!(applied.findings[1].reason, None);
        assert!(applied.stale.is_empty());
        assert_eq!(wanting(&applied.findings).count(), 1);
    }

    #[test]
    fn reasons_that_nothing_wants_are_listed() {
        let findings = vec![
            found("E-01", Severity::Block, "a"),
            found("K-07", Severity::Info, "b"),
        ];
        let reasons = [
            reason("E-01", "a", "x"),
            reason("K-07", "b", "x"),
            reason("C-11", "net", "x"),
        ];
        let applied = apply(findings.clone(), &reasons);
        assert_eq!(applied.findings, findings);
        let because: Vec<Because> = applied.stale.iter().map(|stale| stale.because).collect();
        assert_eq!(because, [Because::Blocks, Because::Informs, Because::FindingGone]);
    }

    #[test]
    fn applying_again_takes_old_reasons_off() {
        let once = apply(
            vec![found("C-12", Severity::Warn, "a")],
            &[reason("C-12", "a", "old")],
        );
        let twice = apply(once.findings, &[]);
        assert_eq!(twice.findings[0].reason, None);
    }

    #[test]
    fn reasons_are_checked() {
        let long = "x".repeat(LONGEST + 1);
        let list = [
            reason("C-12", "a", " "),
            reason("C-12", "a", &long),
            reason("Z-99", "a", "why"),
            reason("C-11", "a", "why"),
        ];
        let problems = check(&list).unwrap_err();
        let pointers: Vec<&str> = problems.list().iter().map(|p| p.pointer.as_str()).collect();
        assert_eq!(pointers, ["/0/text", "/1/text", "/1", "/2/id"]);
        assert!(check(&list[3..]).is_ok());
    }

    #[test]
    fn a_reason_reads_from_json() {
        let text =
            r#"{ "id": "C-11", "field": "net", "text": "own wind power", "when": "2027-01-05T09:00:00Z" }"#;
        let read: Reason = serde_json::from_str(text).unwrap();
        assert_eq!((read.stage.as_str(), read.who.as_deref()), ("", None));
        assert!(serde_json::from_str::<Reason>(r#"{ "id": "C-11", "text": "x", "why": 1 }"#).is_err());
    }
}
