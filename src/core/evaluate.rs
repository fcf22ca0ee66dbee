//! One call from a document to its assessment with all findings: what the API, the command line and pages use.

use crate::core::checks::{self, Subject};
use crate::core::documents::{Assessment, Pathway, Problems};
use crate::core::domain::Book;
use crate::core::engine::{assess, resolve};

/// What an evaluation may be told beside the pathway.
#[derive(Clone, Copy, Debug, Default)]
pub struct Options<'o> {
    /// Evaluate under another rule set than the pathway names.
    pub rule_set: Option<&'o str>,
    /// Leave the step-by-step arithmetic out of the assessment.
    pub without_workings: bool,
}

/// Evaluates a pathway.
///
/// # Errors
/// Everything that is wrong with the pathway, each with JSON pointer and remedy.
pub fn evaluate(pathway: &Pathway, book: &Book, options: Options<'_>) -> Result<Assessment, Problems> {
    let resolved = resolve(pathway, options.rule_set, book)?;
    let assessed = assess(&resolved, !options.without_workings)?;
    let mut assessment = assessed.assessment;
    let subject = Subject {
        assessment: &assessment,
        resolved: &resolved,
        carbon_basis: assessed.carbon_basis,
    };
    let found = checks::run(&subject);
    assessment.findings.extend(found);
    checks::sort(&mut assessment.findings);
    Ok(assessment)
}
