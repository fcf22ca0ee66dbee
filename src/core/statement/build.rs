//! Builds a statement from what was declared and what was worked out. Building is a function of its inputs alone, so that
//! a reader of the file can build it again and compare.

use super::figures::figures;
use super::items::Items;
use super::pick::{self, pick};
use super::words::words;
use crate::core::checks::settings::Settings;
use crate::core::documents::statement::figures::UncertaintyRange;
use crate::core::documents::statement::{
    AssessmentPart, Data, EvidenceFile, FORMAT, Figures, PathwayPart, Person, Previous, ReasonGiven,
    Signature, Statement, Superseded, Words,
};
use crate::core::documents::{Assessment, Pathway, Problems, StatementFacts, canonical};
use crate::core::domain::Book;
use crate::core::engine::assess::{PROGRAM, hash};
use crate::core::engine::resolve;
use jiff::civil::Date;
use jiff::tz::TimeZone;
use jiff::{Timestamp, ToSpan};
use thiserror::Error;

/// What the file of demonstration data says.
pub const EXAMPLE: &str = "EXAMPLE";
/// Years for which a figure may be used after its period where nothing is said (PACT v3.0.3, validity).
pub const VALID_YEARS: i64 = 3;
/// Years for which records are kept where no rule that applies asks for longer.
pub const KEEP_YEARS: i64 = 10;

/// What a statement is made of.
#[derive(Clone, Copy)]
pub struct Inputs<'i> {
    /// Number.
    pub statement_no: &'i str,
    /// 1, or one more than that of the statement it replaces.
    pub version: u32,
    /// What it replaces.
    pub supersedes: &'i [Superseded],
    /// The statement before it in the issuer's series.
    pub previous: Option<&'i Previous>,
    /// Now.
    pub issued_at: Timestamp,
    /// Who submitted.
    pub submitted_by: &'i Person,
    /// Who approves.
    pub approved_by: &'i Person,
    /// What was declared.
    pub facts: &'i StatementFacts,
    /// Public id of the pathway.
    pub pathway_id: &'i str,
    /// Number of its revision.
    pub revision: u32,
    /// Its document.
    pub pathway: &'i Pathway,
    /// Its assessment, as kept; reasons in it are left aside.
    pub assessment: &'i Assessment,
    /// Written reasons for warnings.
    pub reasons: &'i [ReasonGiven],
    /// Files that back figures.
    pub evidence: &'i [EvidenceFile],
    /// A range that was worked out, if one was.
    pub uncertainty: Option<UncertaintyRange>,
    /// Published data with the organisation's own.
    pub book: &'i Book,
    /// Settings of the checks in force.
    pub settings: &'i Settings,
    /// The items a statement holds, and the laws that ask for them.
    pub items: &'i Items,
}

/// Why a statement was not built.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum Refused {
    /// Its rule set is not here.
    #[error("The rule set of the assessment is not here. Work the assessment out again.")]
    RuleSet,
    /// The pathway gives another assessment now (E-12).
    #[error("The assessment is not what the pathway gives now. Work it out again.")]
    Stale,
    /// The pathway gives none any more.
    #[error("The pathway cannot be assessed any more.")]
    Pathway(Problems),
    /// The data that it carries do not lead to its figures: a defect here.
    #[error("The data that the statement would carry do not lead to its figures.")]
    Incomplete,
    /// A figure that cannot be written.
    #[error("A figure of the statement is not finite.")]
    NotFinite,
    /// The same person twice (E-13).
    #[error("{0} submitted the statement and cannot approve it. Ask another person to approve it.")]
    SamePerson(String),
    /// A day that is out of the calendar.
    #[error("A day of the statement is outside the calendar.")]
    Day,
}

/// Builds a statement. It has neither hash nor signature yet: [`super::seal`] puts them on.
///
/// # Errors
/// Why it cannot be built. What the law asks for beyond that is the matter of [`super::preflight`], which comes first.
pub fn build(inputs: Inputs) -> Result<Statement, Refused> {
    if inputs.submitted_by.id == inputs.approved_by.id {
        return Err(Refused::SamePerson(inputs.approved_by.name.clone()));
    }
    let mut assessment = inputs.assessment.clone();
    for finding in &mut assessment.findings {
        finding.reason = None;
    }
    let pathway_hash = hash(inputs.pathway).map_err(Refused::Pathway)?;
    if pathway_hash != assessment.pathway_hash {
        return Err(Refused::Stale);
    }
    let data = pick(inputs.pathway, &assessment, inputs.book, inputs.settings)?;
    let (figures, words) = stated(
        inputs.facts,
        inputs.pathway,
        &assessment,
        &data,
        inputs.uncertainty,
    )?;
    let days = Days::of(
        inputs.facts,
        inputs.pathway,
        inputs.issued_at,
        inputs.items,
        &assessment.rule_set,
    )?;
    let bytes = canonical::bytes(&assessment).map_err(|_| Refused::NotFinite)?;
    Ok(Statement {
        format: FORMAT.to_owned(),
        example: inputs.pathway.example.then(|| EXAMPLE.to_owned()),
        statement_no: inputs.statement_no.to_owned(),
        version: inputs.version,
        supersedes: inputs.supersedes.to_vec(),
        previous: inputs.previous.cloned(),
        status: "issued".to_owned(),
        issued_at: inputs.issued_at,
        valid_from: days.valid_from,
        valid_to: days.valid_to,
        keep_until: days.keep_until,
        program: PROGRAM.to_owned(),
        submitted_by: inputs.submitted_by.clone(),
        approved_by: inputs.approved_by.clone(),
        facts: inputs.facts.clone(),
        pathway: PathwayPart {
            id: inputs.pathway_id.to_owned(),
            revision: inputs.revision,
            hash: pathway_hash,
            document: inputs.pathway.clone(),
        },
        assessment: AssessmentPart {
            hash: canonical::hash(&bytes),
            document: assessment,
        },
        reasons: inputs.reasons.to_vec(),
        evidence: inputs.evidence.to_vec(),
        data,
        figures,
        words,
        hash: String::new(),
        signature: Signature::default(),
    })
}

/// Figures and words from the parts of a statement: also what a reader of the file works out again.
///
/// # Errors
/// When the data do not lead to a plan of the pathway.
pub fn stated(
    facts: &StatementFacts,
    pathway: &Pathway,
    assessment: &Assessment,
    data: &Data,
    uncertainty: Option<UncertaintyRange>,
) -> Result<(Figures, Words), Refused> {
    let book = pick::book(data).map_err(|_| Refused::Incomplete)?;
    let plan = resolve(pathway, Some(&data.rule_set.id), &book, false).map_err(Refused::Pathway)?;
    let figures = figures(facts, assessment, &plan, uncertainty);
    let words = words(pathway, assessment, &data.rule_set);
    Ok((figures, words))
}

/// The days of a statement: as declared, or what holds where nothing is said.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Days {
    /// First day on which the figure may be used.
    pub valid_from: Date,
    /// Last day.
    pub valid_to: Date,
    /// Day up to which records are kept.
    pub keep_until: Date,
}

impl Days {
    /// The days of a statement that is issued at an instant.
    ///
    /// # Errors
    /// When one is outside the calendar.
    pub fn of(
        facts: &StatementFacts,
        pathway: &Pathway,
        issued_at: Timestamp,
        items: &Items,
        rule_set: &str,
    ) -> Result<Days, Refused> {
        let issued = issued_at.to_zoned_datetime(TimeZone::UTC).date();
        let later = |day: Date, years: i64| day.checked_add(years.years()).map_err(|_| Refused::Day);
        let keep = items.keep_years(rule_set, &facts.laws).max(KEEP_YEARS);
        Ok(Days {
            valid_from: facts.valid_from.unwrap_or(issued),
            valid_to: match facts.valid_to {
                Some(day) => day,
                None => later(pathway.period.to, VALID_YEARS)?,
            },
            keep_until: match facts.keep_until {
                Some(day) => day,
                None => later(issued, keep)?,
            },
        })
    }
}
