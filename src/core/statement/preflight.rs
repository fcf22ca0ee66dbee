//! What stands between a draft and its issue: items that the law asks for, findings that block, warnings without a reason.

use super::checks;
use super::items::{Items, Place};
use super::present::{Standing, standing};
use crate::core::checks::evidence::kinds;
use crate::core::checks::issue::unchanged;
use crate::core::checks::reasons::wanting;
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::statement::facts::Law;
use crate::core::documents::{Assessment, Pathway, Problems, StatementFacts};
use crate::core::domain::{Book, RuleSet};
use crate::core::engine::assess::hash;
use crate::core::engine::resolve;
use jiff::civil::Date;
use serde::Serialize;
use std::collections::BTreeSet;
use utoipa::ToSchema;

/// What the preflight looks at.
#[derive(Clone, Copy)]
pub struct Draft<'d> {
    /// What was declared.
    pub facts: &'d StatementFacts,
    /// The pathway.
    pub pathway: &'d Pathway,
    /// Its assessment, with the reasons on its findings.
    pub assessment: &'d Assessment,
    /// True if the statement replaces another.
    pub supersedes: bool,
    /// True if a range of the figure was worked out.
    pub uncertain: bool,
    /// Today, UTC.
    pub today: Date,
}

/// The same with what follows from it.
pub(super) struct Subject<'d> {
    pub facts: &'d StatementFacts,
    pub pathway: &'d Pathway,
    pub assessment: &'d Assessment,
    pub rules: RuleSet,
    pub supersedes: bool,
    pub uncertain: bool,
    pub converts: bool,
    pub wants_evidence: bool,
    pub has_evidence: bool,
}

/// An item that is not there.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Missing {
    /// Id of the item, such as `S-202`.
    pub item: String,
    /// What it is.
    pub what: String,
    /// Why it belongs in a statement.
    pub why: String,
    /// Who asks for it; empty where every statement holds it, or where it is only good to have.
    pub laws: Vec<Law>,
    /// Document and point.
    pub source: String,
    /// Where it is entered.
    pub place: Place,
    /// Pointer to its field.
    pub pointer: String,
}

/// Everything between a draft and its issue.
#[derive(Clone, Debug, Default, PartialEq, Serialize, ToSchema)]
pub struct Preflight {
    /// Laws that the statement answers to.
    pub laws: Vec<Law>,
    /// Items that these ask for and that are not there (I-04).
    pub missing: Vec<Missing>,
    /// Items that would be good to have.
    pub advice: Vec<Missing>,
    /// Findings that block.
    pub blocking: Vec<Finding>,
    /// Warnings without a written reason.
    pub unreasoned: Vec<Finding>,
}

impl Preflight {
    /// True if nothing stands in the way of submitting.
    pub fn is_ready(&self) -> bool {
        self.missing.is_empty() && self.blocking.is_empty() && self.unreasoned.is_empty()
    }
}

/// Goes through everything.
///
/// # Errors
/// When the pathway cannot be assessed any more.
pub fn preflight(draft: Draft, book: &Book, items: &Items) -> Result<Preflight, Problems> {
    let Draft {
        facts,
        pathway,
        assessment,
        ..
    } = draft;
    let plan = resolve(pathway, Some(&assessment.rule_set), book, false)?;
    let figures = super::figures::figures(facts, assessment, &plan, None);
    let inputs = || pathway.stages.iter().flat_map(|stage| &stage.inputs);
    let primary = || inputs().filter(|input| input.origin.is_some_and(Origin::is_primary));
    let subject = Subject {
        facts,
        pathway,
        assessment,
        rules: plan.rules.clone(),
        supersedes: draft.supersedes,
        uncertain: draft.uncertain,
        converts: figures.conversion_factor.is_some(),
        wants_evidence: primary().next().is_some(),
        has_evidence: primary().all(|input| !input.evidence.is_empty()),
    };
    let laws = items.laws_of(&assessment.rule_set, &facts.laws);
    let mut preflight = Preflight {
        laws: laws.clone(),
        ..Preflight::default()
    };
    for item in &items.items {
        // An item that nothing here looks for counts as missing.
        if standing(&item.id, &subject).unwrap_or(Standing::Missing) != Standing::Missing {
            continue;
        }
        let asked = item.asked_by(&laws);
        let must = asked.is_some();
        if !must && !item.good {
            continue;
        }
        let missing = Missing {
            item: item.id.clone(),
            what: item.item.clone(),
            why: item.why.clone(),
            laws: asked.unwrap_or_default(),
            source: item.citation.source.clone(),
            place: item.place,
            pointer: item.pointer.clone(),
        };
        if must {
            &mut preflight.missing
        } else {
            &mut preflight.advice
        }
        .push(missing);
    }
    let kinds: BTreeSet<String> = kinds(&plan).into_values().flatten().map(str::to_owned).collect();
    let kinds: Vec<String> = kinds.into_iter().collect();
    let mut findings = assessment.findings.clone();
    findings.extend(unchanged(&hash(pathway)?, assessment));
    let audited = laws.contains(&Law::Eu) || laws.contains(&Law::De);
    findings.extend(checks::declared(facts, pathway, &kinds, audited, draft.today));
    preflight.unreasoned = wanting(&findings).cloned().collect();
    findings.retain(|finding| finding.severity == Severity::Block);
    preflight.blocking = findings;
    Ok(preflight)
}
