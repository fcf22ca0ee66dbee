//! One call from a document to its assessment with all findings: what the API, the command line and pages use.

use crate::core::checks::plausible::Typical;
use crate::core::checks::settings::Settings;
use crate::core::checks::{self, Subject};
use crate::core::documents::pathway::DefaultKey;
use crate::core::documents::{Assessment, Pathway, Problems};
use crate::core::domain::{Book, RuleSet};
use crate::core::engine::{assess, resolve};
use crate::core::levers::defaults::{Answer, judged};

/// What an evaluation may be told beside the pathway.
#[derive(Clone, Copy, Debug)]
pub struct Options<'o> {
    /// Evaluate under another rule set than the pathway names.
    pub rule_set: Option<&'o str>,
    /// Leave the step-by-step arithmetic out of the assessment.
    pub without_workings: bool,
    /// Tolerances and usual ranges of the checks.
    pub settings: &'o Settings,
}

impl Default for Options<'_> {
    fn default() -> Self {
        Options {
            rule_set: None,
            without_workings: false,
            settings: Settings::standard(),
        }
    }
}

/// Evaluates a pathway.
///
/// # Errors
/// Everything that is wrong with the pathway, each with JSON pointer and remedy.
pub fn evaluate(pathway: &Pathway, book: &Book, options: Options<'_>) -> Result<Assessment, Problems> {
    let resolved = resolve(pathway, options.rule_set, book, !options.without_workings)?;
    let assessed = assess(&resolved, !options.without_workings)?;
    let mut assessment = assessed.assessment;
    let typical = match assessment.saving_percent {
        Some(_) => typical(pathway, resolved.rules, book),
        None => Vec::new(),
    };
    let subject = Subject {
        assessment: &assessment,
        resolved: &resolved,
        carbon_basis: assessed.carbon_basis,
        book,
        typical: &typical,
        settings: options.settings,
    };
    let found = checks::run(&subject);
    assessment.findings.extend(found);
    checks::fields::drop_repeats(&mut assessment.findings);
    checks::sort(&mut assessment.findings);
    Ok(assessment)
}

/// Typical values to compare with: of the published pathway that a default of e_p names; else of those that fit feedstock
/// and process; where none surely does, of those that may; else of all for the feedstock.
fn typical(pathway: &Pathway, rules: &RuleSet, book: &Book) -> Vec<Typical> {
    let rows = judged(pathway, rules, book);
    let fitting = || rows.iter().filter(|row| row.feedstock_fits != Answer::No);
    let named = pathway.defaults.get(&DefaultKey::EP);
    let best = fitting().map(|row| row.process_fits).min();
    fitting()
        .filter(|row| match named {
            Some(named) => row.id == *named,
            None => Some(row.process_fits) == best,
        })
        .map(|row| Typical {
            row: row.id.clone(),
            g_co2e_per_mj: row.typical_total_g_co2e_per_mj,
        })
        .collect()
}
