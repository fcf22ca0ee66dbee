//! Every check of the audit checklist: id, what it asks, how much it matters, where it runs, its basis. One table, in two
//! files; what does not run yet says what it waits for.

mod assessment;
mod records;

use crate::core::documents::assessment::Severity;

/// Where a check runs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Runs {
    /// On every assessment.
    OnAssessment,
    /// While the figures are read: a finding of a model or of the chain.
    OnFigures,
    /// At entry: the document is refused with a problem.
    AtEntry,
    /// When somebody asks, with more than a pathway at hand (an auditor's own figure, a default to be chosen).
    OnRequest,
    /// When a statement is issued, with the day and the people at hand: a pathway under work has neither.
    AtIssue,
    /// Not yet: it waits for this.
    Later(&'static str),
    /// Never again: the id stays taken.
    Retired,
}

/// One check.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Check {
    /// Id of the audit checklist.
    pub id: &'static str,
    /// What it asks.
    pub asks: &'static str,
    /// The most it can matter.
    pub severity: Severity,
    /// Where it runs.
    pub runs: Runs,
    /// Legal or published basis.
    pub source: &'static str,
}

/// Rows of the table: id, severity, where it runs, what it asks, basis.
macro_rules! checks {
    ($($id:literal $severity:ident $runs:ident $(($waits:literal))? : $asks:literal, $source:literal;)*) => {
        &[$(crate::core::checks::registry::Check {
            id: $id,
            asks: $asks,
            severity: crate::core::documents::assessment::Severity::$severity,
            runs: crate::core::checks::registry::Runs::$runs $(($waits))?,
            source: $source,
        }),*]
    };
}
use checks;

/// Every check, by id.
pub fn all() -> impl Iterator<Item = &'static Check> {
    let rows = [
        assessment::A_TO_C,
        records::D,
        assessment::E,
        records::F,
        assessment::G,
        records::H_TO_J,
        assessment::K,
    ];
    rows.into_iter().flatten()
}

/// The check of an id.
pub fn find(id: &str) -> Option<&'static Check> {
    all().find(|check| check.id == id)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ids_stand_once_and_in_order() {
        let ids: Vec<&str> = all().map(|check| check.id).collect();
        let mut sorted = ids.clone();
        sorted.sort_unstable();
        sorted.dedup();
        assert_eq!(ids, sorted);
        assert_eq!(ids.len(), 114);
    }

    #[test]
    fn every_row_says_what_it_asks_on_what_basis_and_what_it_waits_for() {
        for check in all() {
            let waits = match check.runs {
                Runs::Later(waits) => waits,
                _ => "nothing",
            };
            assert!(
                check.asks.len() > 10 && !check.source.is_empty() && waits.len() > 3,
                "{}",
                check.id
            );
        }
        assert_eq!(find("C-05").unwrap().runs, Runs::Retired);
        assert_eq!(find("Z-01"), None);
    }
}
