//! Checks of the audit checklist that look at a statement: people, days, validity, certificates, audits, corrections.
//! Ids are those of the checklist; each is a pure function.

use crate::core::checks::finding;
use crate::core::documents::Pathway;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::statement::facts::{Grade, StatementFacts};
use crate::core::units::rounding::{plain, plain_fixed};
use jiff::ToSpan;
use jiff::civil::Date;

/// Days for which an open major finding may stand (IR (EU) 2022/996 Art. 10(4)(b)).
const MAJOR_DAYS: i64 = 90;
/// Months between audits (IR (EU) 2022/996 Art. 10(2)).
const AUDIT_MONTHS: i64 = 12;

/// Checks of what was declared, on a day. `audited`: the rule set wants audits behind actual values (EU, Germany).
pub fn declared(
    facts: &StatementFacts,
    pathway: &Pathway,
    value_kinds: &[String],
    audited: bool,
    today: Date,
) -> Vec<Finding> {
    let mut findings = Vec::new();
    findings.extend(validity(facts, pathway));
    findings.extend(certificate(facts, today));
    findings.extend(suspended(facts));
    findings.extend(major_findings(facts, today));
    if audited {
        findings.extend(audits(facts, value_kinds, today));
    }
    findings
}

fn block(id: &str, field: &str, message: String, remedy: &str) -> Finding {
    finding(id, Severity::Block, "", field, message, remedy)
}

/// I-05: the figure is not used longer than three years after its data ended.
fn validity(facts: &StatementFacts, pathway: &Pathway) -> Option<Finding> {
    let to = facts.valid_to?;
    let last = pathway.period.to.checked_add(3.years()).ok()?;
    (to > last).then(|| {
        let message = format!(
            "Validity runs to {to}, more than 3 years after the data ended on {}.",
            pathway.period.to
        );
        block("I-05", "valid_to", message, "Set an earlier day.")
    })
}

/// The certificate is valid on the day of issue (Biokraft-NachV 2021 §9(1) no.1); I-10 beside it.
fn certificate(facts: &StatementFacts, today: Date) -> Option<Finding> {
    let before = facts.certificate_valid_from.filter(|from| today < *from);
    let after = facts.certificate_valid_to.filter(|to| *to < today);
    let message = match (before, after) {
        (Some(from), _) => format!("The certificate is valid from {from} on, after the day of issue."),
        (_, Some(to)) => format!("The certificate was valid up to {to}."),
        _ => return None,
    };
    Some(block(
        "I-10",
        "certificate_valid_to",
        message,
        "Issue nothing before the certificate is valid.",
    ))
}

/// I-10: the issuer is not suspended.
fn suspended(facts: &StatementFacts) -> Option<Finding> {
    let since = facts.certificate_suspended_since?;
    let issuer = facts
        .issuer
        .as_ref()
        .and_then(|party| party.name.as_deref())
        .unwrap_or("the issuer");
    let message = format!("The certificate of {issuer} is suspended since {since}.");
    Some(block(
        "I-10",
        "certificate_suspended_since",
        message,
        "Claim nothing until it is lifted.",
    ))
}

/// I-09: no major finding of an auditor stays open for more than 90 days, and no critical one at all.
fn major_findings(facts: &StatementFacts, today: Date) -> Vec<Finding> {
    let mut found = Vec::new();
    for (index, finding) in facts.audit_findings.iter().enumerate() {
        let (Some(grade), Some(raised), None) = (finding.grade, finding.raised_on, finding.closed_on) else {
            continue;
        };
        let overdue = raised
            .checked_add(MAJOR_DAYS.days())
            .is_ok_and(|last| today > last);
        let stops = grade == Grade::Critical || (grade == Grade::Major && overdue);
        if stops {
            let number = finding.number.clone().unwrap_or_else(|| (index + 1).to_string());
            let message = format!(
                "The {} finding {number} is open since {raised}; after {MAJOR_DAYS} days the certificate is withdrawn.",
                grade.name()
            );
            let field = format!("audit_findings/{index}");
            found.push(block(
                "I-09",
                &field,
                message,
                "Answer it and have the auditor close it.",
            ));
        }
    }
    found
}

/// E-02: actual values only after a passed audit of that skill. I-08: the last audit is not older than a year.
fn audits(facts: &StatementFacts, value_kinds: &[String], today: Date) -> Vec<Finding> {
    let mut found = Vec::new();
    let passed = || {
        facts
            .audits
            .iter()
            .filter(|audit| audit.passed_on.is_some_and(|day| day <= today))
    };
    let actual = value_kinds.iter().any(|kind| kind == "actual");
    if actual && !passed().any(|audit| audit.actual_values == Some(true)) {
        let site = facts
            .plant
            .as_ref()
            .and_then(|plant| plant.name.as_deref())
            .unwrap_or("The works");
        let message = format!("{site} has no passed audit for actual values.");
        found.push(block(
            "E-02",
            "audits",
            message,
            "Use default values or enter the audit.",
        ));
    }
    let last = passed().filter_map(|audit| audit.passed_on).max();
    let due = last.and_then(|last| last.checked_add(AUDIT_MONTHS.months()).ok());
    if let (Some(last), Some(due)) = (last, due)
        && due < today
    {
        let message = format!("The last audit was on {last}, more than {AUDIT_MONTHS} months ago.");
        let remedy = "Arrange the next one or give the reason.";
        found.push(finding("I-08", Severity::Warn, "", "audits", message, remedy));
    }
    found
}

/// From what size on an error matters, g CO2e/MJ: SOR/2022-140 s.150(a) in Canada, 5 % elsewhere (customary).
pub fn materiality(g_co2e_per_mj: f64, canada: bool) -> f64 {
    let size = g_co2e_per_mj.abs();
    match canada {
        true if size < 20.0 => 1.0,
        true if size > 100.0 => 5.0,
        _ => 0.05 * size,
    }
}

/// An issued figure and what it would be now.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moved {
    /// As issued, g CO2e/MJ.
    pub issued: f64,
    /// Now, g CO2e/MJ.
    pub now: f64,
    /// Every threshold that was met is met now.
    pub still_met: bool,
    /// Canadian steps of materiality.
    pub canada: bool,
}

/// H-03, H-05 and H-07: what a later change means for an issued statement.
pub fn moved(statement: &str, change: Moved) -> Option<Finding> {
    let by = change.now - change.issued;
    let limit = materiality(change.issued, change.canada);
    if !change.still_met {
        let message = format!(
            "With what is known now statement {statement} stands at {} g/MJ and misses a saving that it met.",
            plain_fixed(change.now, 2)
        );
        return Some(block("H-05", "net", message, "Withdraw or supersede it."));
    }
    if by.abs() <= limit {
        return None;
    }
    let id = if by > 0.0 { "H-07" } else { "H-03" };
    let message = format!(
        "What is known now changes statement {statement} by {} g/MJ, above the materiality threshold of {}.",
        plain_fixed(by, 2),
        plain(limit)
    );
    Some(finding(
        id,
        Severity::Warn,
        "",
        "net",
        message,
        "Supersede the statement, or give the reason.",
    ))
}

#[cfg(test)]
mod tests {
    use super::*;
    use jiff::civil::date;
    use serde_json::{Value, json};

    fn facts(document: &Value) -> StatementFacts {
        StatementFacts::from_value(document).expect("facts")
    }

    fn ids(facts: &StatementFacts) -> Vec<String> {
        let pathway = super::super::testing::pathway();
        let kinds = ["actual".to_owned()];
        let found = declared(facts, &pathway, &kinds, true, date(2026, 9, 2));
        found.into_iter().map(|finding| finding.id).collect()
    }

    #[test]
    fn a_clean_statement_has_no_findings() {
        let facts = facts(&json!({
            "valid_to": "2028-01-01", "certificate_valid_from": "2026-01-01", "certificate_valid_to": "2026-12-31",
            "audits": [ { "passed_on": "2026-03-01", "actual_values": true } ],
            "audit_findings": [ { "grade": "major", "raised_on": "2026-07-01" },
                { "grade": "critical", "raised_on": "2026-01-01", "closed_on": "2026-02-01" } ] }));
        assert_eq!(ids(&facts), Vec::<String>::new());
    }

    #[test]
    fn each_check_finds_what_it_is_for() {
        let audited = json!([ { "passed_on": "2026-03-01", "actual_values": true } ]);
        let with = |name: &str, value: Value| {
            let mut document = json!({ "audits": audited });
            document[name] = value;
            ids(&facts(&document))
        };
        assert_eq!(with("valid_to", json!("2031-01-01")), ["I-05"]);
        assert_eq!(with("certificate_valid_to", json!("2026-09-01")), ["I-10"]);
        assert_eq!(with("certificate_valid_from", json!("2026-09-03")), ["I-10"]);
        assert_eq!(with("certificate_suspended_since", json!("2026-08-01")), ["I-10"]);
        assert_eq!(
            with(
                "audit_findings",
                json!([ { "grade": "major", "raised_on": "2026-05-01" } ])
            ),
            ["I-09"]
        );
        assert_eq!(
            with(
                "audit_findings",
                json!([ { "grade": "critical", "raised_on": "2026-09-01" } ])
            ),
            ["I-09"]
        );
        assert_eq!(with("audits", json!([])), ["E-02"]);
        assert_eq!(
            with(
                "audits",
                json!([ { "passed_on": "2026-10-01", "actual_values": true } ])
            ),
            ["E-02"]
        );
        assert_eq!(
            with(
                "audits",
                json!([ { "passed_on": "2025-03-01", "actual_values": true } ])
            ),
            ["I-08"]
        );
    }

    #[test]
    fn later_changes_are_weighed() {
        let change = Moved {
            issued: 30.0,
            now: 31.0,
            still_met: true,
            canada: false,
        };
        assert_eq!(moved("WW-1", change), None);
        let found = |now, still_met| {
            moved(
                "WW-1",
                Moved {
                    now,
                    still_met,
                    ..change
                },
            )
            .map(|finding| finding.id)
        };
        assert_eq!(found(32.0, true).as_deref(), Some("H-07"));
        assert_eq!(found(28.0, true).as_deref(), Some("H-03"));
        assert_eq!(found(30.1, false).as_deref(), Some("H-05"));
        // SOR/2022-140 s.150: 1 g/MJ below 20, 5 % between, 5 g/MJ above 100; the steps meet.
        assert_eq!(
            [10.0, 20.0, 50.0, 100.0, 150.0].map(|ci| materiality(ci, true)),
            [1.0, 1.0, 2.5, 5.0, 5.0]
        );
    }
}
