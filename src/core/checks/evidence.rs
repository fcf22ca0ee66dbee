//! Group E: value kinds, default values and editions, as far as documents tell.

use super::parameters::{models, word};
use super::{Subject, finding};
use crate::core::documents::assessment::{Finding, Severity, Terms};
use crate::core::documents::pathway::ValueKind;
use crate::core::domain::Term;
use crate::core::engine::resolved::Resolved;
use crate::core::units::rounding::plain_fixed;
use jiff::civil::Date;
use std::collections::{BTreeMap, BTreeSet};

/// Runs the checks that a pathway can tell.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    let assessment = subject.assessment;
    findings.extend(kinds_recorded(
        &assessment.terms_g_co2e_per_mj,
        &kinds(subject.resolved),
    ));
    findings.extend(one_version(&soil_editions(subject.resolved)));
}

/// The kinds of value behind each term (`actual`, `regional`, `default`): own inputs are actual, bought fuel says so
/// itself, published defaults are default.
pub fn kinds(resolved: &Resolved) -> BTreeMap<Term, BTreeSet<&'static str>> {
    let mut kinds: BTreeMap<Term, BTreeSet<&'static str>> = BTreeMap::new();
    let inputs = resolved.stages.iter().flat_map(|stage| &stage.inputs);
    for input in inputs.filter(|input| input.replaced.is_none()) {
        let kind = match input.stated {
            None | Some(ValueKind::Actual) => "actual",
            Some(ValueKind::Regional) => "regional",
            Some(ValueKind::Default) => "default",
        };
        if let Some(term) = input.term {
            kinds.entry(term).or_default().insert(kind);
        }
    }
    for default in &resolved.defaults {
        kinds.entry(default.term).or_default().insert("default");
    }
    kinds
}

/// E-03: each term that counts says of what kind its value is.
pub fn kinds_recorded(terms: &Terms, kinds: &BTreeMap<Term, BTreeSet<&'static str>>) -> Vec<Finding> {
    let without = |term: &Term| terms.get(*term) != 0.0 && kinds.get(term).is_none_or(BTreeSet::is_empty);
    let found = Term::ALL.into_iter().filter(without).map(|term| {
        let message = format!("{} has no kind of value.", term.name());
        let remedy = "Say whether it is default, regional or actual.";
        finding("E-03", Severity::Block, "", term.name(), message, remedy)
    });
    found.collect()
}

/// E-04: the printed total default of a pathway holds only where land-use change is not above zero. Defaults term by
/// term, which is what a pathway document holds, are another sum: land-use change stands beside them.
pub fn total_default(pathway: &str, land_g_per_mj: f64) -> Option<Finding> {
    (land_g_per_mj > 0.0).then(|| {
        let message = format!(
            "{pathway} cannot use the total default value: its land-use change is {} g/MJ.",
            plain_fixed(land_g_per_mj, 2)
        );
        let remedy = "Use actual values, or defaults term by term.";
        finding("E-04", Severity::Block, "", "defaults", message, remedy)
    })
}

/// A version of an edition that figures of a place rest on.
#[derive(Clone, Debug, PartialEq)]
pub struct EditionUse {
    /// What versions belong to, such as `the IPCC guidelines on soils`.
    pub edition: String,
    /// Version.
    pub version: String,
    /// Key of the stage.
    pub stage: String,
    /// Field.
    pub field: String,
}

/// E-05: one version of each edition.
pub fn one_version(uses: &[EditionUse]) -> Vec<Finding> {
    let mut first: BTreeMap<&str, &EditionUse> = BTreeMap::new();
    let mut said = BTreeSet::new();
    let mut findings = Vec::new();
    for used in uses {
        let before = *first.entry(&used.edition).or_insert(used);
        if before.version == used.version || !said.insert(used.edition.as_str()) {
            continue;
        }
        let message = format!(
            "Factors come from versions {} and {} of {}.",
            before.version, used.version, used.edition
        );
        let remedy = "Choose one and work the assessment out again.";
        findings.push(finding(
            "E-05",
            Severity::Block,
            &used.stage,
            &used.field,
            message,
            remedy,
        ));
    }
    findings
}

/// The Guidelines of 2006 and their Refinement of 2019 are two versions of one text.
fn soil_editions(resolved: &Resolved) -> Vec<EditionUse> {
    let mut uses = Vec::new();
    for stage in &resolved.stages {
        for input in &stage.document.inputs {
            let soils = models(input).iter().filter(|model| model.kind == "soil_n2o");
            for version in soils.filter_map(|model| word(model, "method")?.strip_prefix("ipcc-")) {
                uses.push(EditionUse {
                    edition: "the IPCC guidelines on managed soils".to_owned(),
                    version: version.to_owned(),
                    stage: stage.document.key.clone(),
                    field: format!("inputs.{}.method", input.key),
                });
            }
        }
    }
    uses
}

/// E-11: the file of evidence is the one that was attached on a day; `found` is the hash of what lies in its place now.
pub fn file_unchanged(file: &str, attached: Date, hash: &str, found: Option<&str>) -> Option<Finding> {
    let (message, remedy) = match found {
        Some(found) if found == hash => return None,
        Some(_) => (
            format!("{file} is not the file that was attached on {attached}."),
            "Restore that file, or attach this one as new evidence.",
        ),
        None => (
            format!("{file}, attached on {attached}, is missing."),
            "Restore it from a backup, or attach it once more.",
        ),
    };
    Some(finding("E-11", Severity::Block, "", "evidence", message, remedy))
}

#[cfg(test)]
mod tests {
    use super::*;
    use jiff::civil::date;

    fn used(edition: &str, version: &str) -> EditionUse {
        let [edition, version] = [edition, version].map(str::to_owned);
        EditionUse {
            edition,
            version,
            stage: "field".to_owned(),
            field: "inputs.n2o.method".to_owned(),
        }
    }

    #[test]
    fn every_term_that_counts_has_a_kind() {
        let terms = Terms {
            e_ec: 3.0,
            e_td: 1.0,
            ..Terms::default()
        };
        let mut kinds = BTreeMap::from([
            (Term::Eec, BTreeSet::from(["actual"])),
            (Term::Etd, BTreeSet::new()),
        ]);
        let found = kinds_recorded(&terms, &kinds);
        assert_eq!(found.len(), 1);
        assert_eq!(found[0].field, "e_td");
        kinds.insert(Term::Etd, BTreeSet::from(["default"]));
        assert!(kinds_recorded(&terms, &kinds).is_empty());
    }

    #[test]
    fn the_total_default_wants_no_land_use_change() {
        assert_eq!(total_default("Wheat", 0.0), None);
        assert_eq!(total_default("Wheat", -2.0), None);
        assert_eq!(total_default("Wheat", 0.1).unwrap().severity, Severity::Block);
    }

    #[test]
    fn one_version_of_an_edition() {
        assert!(one_version(&[used("soils", "2006"), used("soils", "2006"), used("own", "2")]).is_empty());
        let mixed = [
            used("soils", "2006"),
            used("soils", "2019"),
            used("soils", "2019"),
        ];
        let found = one_version(&mixed);
        assert_eq!(found.len(), 1);
        assert!(found[0].message.contains("2006 and 2019"));
    }

    #[test]
    fn a_file_is_the_one_that_was_attached() {
        let day = date(2026, 12, 1);
        assert_eq!(
            file_unchanged("bill.pdf", day, "sha256:a", Some("sha256:a")),
            None
        );
        let altered = file_unchanged("bill.pdf", day, "sha256:a", Some("sha256:b")).unwrap();
        assert_eq!((altered.id.as_str(), altered.severity), ("E-11", Severity::Block));
        assert_eq!(
            altered.message,
            "bill.pdf is not the file that was attached on 2026-12-01."
        );
        let missing = file_unchanged("bill.pdf", day, "sha256:a", None).unwrap();
        assert_eq!(missing.message, "bill.pdf, attached on 2026-12-01, is missing.");
    }
}
