//! Defaults beside actuals: for each term the published default next to the own figure, every way to put them together,
//! and which is the best that Directive (EU) 2018/2001 Article 31(1)(a) to (c) allows. What the document cannot tell is said.

mod combine;
mod fit;
mod heat;
mod terms;

use crate::core::documents::Assessment;
use crate::core::documents::assessment::{Terms, ThresholdResult};
use crate::core::documents::pathway::{DefaultKey, Pathway};
use crate::core::documents::problem::{Problem, Problems};
use crate::core::domain::rule_set::Standing;
use crate::core::domain::{Book, PathwayDefault, RuleSet, StageKind, Status, Term};
use crate::core::engine::{assess, resolve};
use serde::Serialize;
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// The format name that every table carries.
pub const FORMAT: &str = "wheelwort.defaults/1";

/// The law behind the combinations.
pub const SOURCE: &str = "Directive (EU) 2018/2001, consolidated 16.07.2024, Article 31(1)(a) to (c); values of Annex V Parts A, B, D and E";

/// Defaults beside actuals of one pathway.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct DefaultsTable {
    /// Always `wheelwort.defaults/1`.
    pub format: String,
    /// Name of the pathway.
    pub pathway_name: String,
    /// SHA-256 of the pathway's canonical bytes.
    pub pathway_hash: String,
    /// True for demonstration data.
    pub example: bool,
    /// Rule set of the assessment.
    pub rule_set: String,
    /// Material id of the feedstock.
    pub feedstock: String,
    /// The fossil baseline, g CO2e/MJ.
    pub comparator_g_co2e_per_mj: f64,
    /// Every published pathway of the rule set, and whether it belongs to this chain.
    pub rows: Vec<PublishedRow>,
    /// Term by term.
    pub terms: Vec<TermRow>,
    /// Every combination: lawful ones first, then those that hinge on what cannot be told here; best first in each.
    pub combinations: Vec<Combination>,
    /// Id of the best combination that is lawful as far as the document tells.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub best: Option<String>,
    /// Id of a better one that hinges on what cannot be told here.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub best_if_confirmed: Option<String>,
    /// What no document of this kind can tell, and an auditor asks.
    pub cannot_be_told: Vec<String>,
    /// What a reader should know.
    pub notes: Vec<String>,
    /// The law.
    pub source: String,
}

/// Yes, no, or not to be told from the document.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Answer {
    /// Yes, as far as the document tells.
    Yes,
    /// The document does not tell.
    CannotBeTold,
    /// No.
    No,
}

impl Answer {
    /// Both together: the worse of the two.
    #[must_use]
    pub fn and(self, other: Answer) -> Answer {
        self.max(other)
    }
}

/// A published pathway, judged.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct PublishedRow {
    /// Full id, `edition/row`.
    pub id: String,
    /// Feedstock as printed.
    pub feedstock: String,
    /// Description of the pathway.
    pub description: String,
    /// Whether it is for the feedstock of this chain: decides on e_ec and e_td.
    pub feedstock_fits: Answer,
    /// Whether it is for its process as well: decides on e_p and on the whole pathway.
    pub process_fits: Answer,
    /// Why.
    pub reasons: Vec<String>,
    /// Printed total of the default values, g CO2e/MJ.
    pub default_total_g_co2e_per_mj: f64,
    /// Printed default saving, whole %.
    pub default_saving_percent: f64,
    /// Printed total of the typical values, g CO2e/MJ: never usable for compliance.
    pub typical_total_g_co2e_per_mj: f64,
    /// Printed typical saving, whole %: never usable for compliance.
    pub typical_saving_percent: f64,
    /// Document and table.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
}

/// One term, or a printed part of one.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
#[schema(as = DefaultsTermRow)]
pub struct TermRow {
    /// `e_ec`, `e_ec_soil_n2o`, `e_p`, `e_td`, `e_td_final_fuel`, `e_l`, ...
    pub term: String,
    /// The term it is inside of, for a part.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub part_of: Option<String>,
    /// Words for a page.
    pub words: String,
    /// The own figure, without any default, g CO2e/MJ; none where the pathway has none.
    pub actual_g_co2e_per_mj: Option<f64>,
    /// What a reader should know of the own figure.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub actual_note: String,
    /// The published values of the rows for this feedstock; empty where none are printed.
    pub published: Vec<PublishedValue>,
    /// Own figure less default, against the row that the best combination or else the first fitting row names, g CO2e/MJ.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub difference_g_co2e_per_mj: Option<f64>,
}

/// The value of a term in one published pathway.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct PublishedValue {
    /// Full id, `edition/row`.
    pub row: String,
    /// Default value, g CO2e/MJ.
    pub default_g_co2e_per_mj: f64,
    /// Typical value, g CO2e/MJ: never usable for compliance.
    pub typical_g_co2e_per_mj: f64,
    /// Whether the row may serve this term here.
    pub may_serve: Answer,
}

/// The way of Article 31(1) that a combination takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Route {
    /// (a): the printed default saving of the whole pathway.
    WholeDefault,
    /// (b): own figures for everything.
    AllActual,
    /// (c): default values for some terms, own figures for the others.
    Mixed,
}

/// One way to put defaults and own figures together.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Combination {
    /// Unique in the table; made of route, keys and rows.
    pub id: String,
    /// The way of Article 31(1).
    pub route: Route,
    /// What it is, in a sentence.
    pub words: String,
    /// The `defaults` of a pathway document that makes this combination.
    pub defaults: BTreeMap<DefaultKey, String>,
    /// Whether it is lawful.
    pub lawful: Answer,
    /// Why not, or what it hinges on.
    pub reasons: Vec<String>,
    /// g CO2e/MJ; the printed total for a whole default.
    pub net_g_co2e_per_mj: Option<f64>,
    /// %; the printed whole per cent for a whole default.
    pub saving_percent: Option<f64>,
    /// True where net and saving are printed figures, not computed here.
    pub as_printed: bool,
    /// Signed contributions by term, where they are computed.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub terms_g_co2e_per_mj: Option<Terms>,
    /// Minimum savings that apply, and whether this combination meets them.
    pub thresholds: Vec<ThresholdResult>,
}

/// What the table is made from.
struct Subject<'s> {
    pathway: &'s Pathway,
    rules: &'s RuleSet,
    book: &'s Book,
    /// The published pathways of the rule set, by row.
    published: Vec<&'s PathwayDefault>,
    /// The pathway without defaults; none where it has no stages.
    actual: Option<Assessment>,
}

impl Subject<'_> {
    fn published(&self, id: &str) -> Option<&PathwayDefault> {
        self.published.iter().find(|row| row.id == id).copied()
    }

    fn has_stage(&self, kind: StageKind) -> bool {
        self.pathway.stages.iter().any(|stage| stage.kind == kind)
    }
}

/// Lays defaults beside actuals. `assessment` is one of the same pathway and names the rule set.
///
/// # Errors
/// When the assessment is of another pathway or of a rule set that is not held, and everything that keeps the pathway
/// from being assessed without its defaults.
pub fn table(pathway: &Pathway, assessment: &Assessment, book: &Book) -> Result<DefaultsTable, Problems> {
    let whole = |detail: String, remedy: &str| {
        Problems::from(Problem {
            pointer: String::new(),
            detail,
            remedy: remedy.to_owned(),
        })
    };
    if assess::hash(pathway)? != assessment.pathway_hash {
        let detail = format!("The assessment is of another pathway than \"{}\".", pathway.name);
        return Err(whole(detail, "Assess the pathway again."));
    }
    let Some(rules) = book.rule_sets.get(&assessment.rule_set) else {
        let detail = format!("There is no rule set \"{}\" here.", assessment.rule_set);
        return Err(whole(detail, "Assess the pathway under a rule set that is held."));
    };
    let published: Vec<&PathwayDefault> = rules
        .default_values
        .as_ref()
        .and_then(|edition| book.editions.get(edition))
        .map_or_else(Vec::new, |edition| edition.pathways.values().collect());
    let actual = match pathway.stages.is_empty() {
        true => None,
        false => Some(attempt(pathway, &BTreeMap::new(), rules, book)?),
    };
    let subject = Subject {
        pathway,
        rules,
        book,
        published,
        actual,
    };
    let rows = judged(pathway, rules, book);
    let combinations = combine::all(&subject, &rows);
    let (best, best_if_confirmed) = combine::best(&combinations);
    let terms = terms::rows(
        &subject,
        &rows,
        combinations.iter().find(|c| Some(&c.id) == best.as_ref()),
    );
    Ok(DefaultsTable {
        format: FORMAT.to_owned(),
        pathway_name: pathway.name.clone(),
        pathway_hash: assessment.pathway_hash.clone(),
        example: pathway.example,
        rule_set: rules.id.clone(),
        feedstock: pathway.feedstock.clone(),
        comparator_g_co2e_per_mj: rules.comparator.value,
        cannot_be_told: cannot_be_told(&subject, &rows),
        notes: notes(&subject, &rows),
        rows,
        terms,
        combinations,
        best,
        best_if_confirmed,
        source: if subject.published.is_empty() || rules.standing == Standing::Repealed {
            rules.source.clone()
        } else {
            SOURCE.to_owned()
        },
    })
}

/// The published pathways of a rule set, judged: those that belong to the chain come first.
pub fn judged(pathway: &Pathway, rules: &RuleSet, book: &Book) -> Vec<PublishedRow> {
    let edition = rules.default_values.as_ref();
    let Some(edition) = edition.and_then(|edition| book.editions.get(edition)) else {
        return Vec::new();
    };
    let works = heat::works(pathway, book);
    let rows = edition.pathways.values();
    let mut rows: Vec<PublishedRow> = rows.map(|row| fit::judge(row, pathway, &works)).collect();
    rows.sort_by_key(|row| (row.feedstock_fits, row.process_fits));
    rows
}

/// The pathway with these defaults in place of its own. What a default covers is no longer left out.
#[must_use]
pub fn with_defaults(pathway: &Pathway, defaults: &BTreeMap<DefaultKey, String>) -> Pathway {
    let mut changed = pathway.clone();
    changed.defaults = defaults.clone();
    let covers = |kind: StageKind| {
        let term = match kind.term() {
            Term::Eec => defaults.contains_key(&DefaultKey::EEc),
            Term::Ep => defaults.contains_key(&DefaultKey::EP),
            Term::Etd => defaults.contains_key(&DefaultKey::ETd),
            Term::El | Term::Eu | Term::Esca | Term::Eccs | Term::Eccr => false,
        };
        term || (kind == StageKind::FuelTransport && defaults.contains_key(&DefaultKey::ETdFinalFuel))
    };
    changed.not_covered.retain(|kind| !covers(*kind));
    changed
}

/// The pathway with other defaults, assessed: the same arithmetic as everywhere.
fn attempt(
    pathway: &Pathway,
    defaults: &BTreeMap<DefaultKey, String>,
    rules: &RuleSet,
    book: &Book,
) -> Result<Assessment, Problems> {
    let changed = with_defaults(pathway, defaults);
    let resolved = resolve(&changed, Some(&rules.id), book, false)?;
    Ok(assess(&resolved, false)?.assessment)
}

fn notes(subject: &Subject, rows: &[PublishedRow]) -> Vec<String> {
    let (pathway, rules) = (subject.pathway, subject.rules);
    let mut notes = Vec::new();
    if rows.is_empty() {
        notes.push(format!("No published default values belong to {}.", rules.id));
        return notes;
    }
    if rows.iter().all(|row| row.feedstock_fits == Answer::No) {
        notes.push(format!(
            "No default values are published for {}: only own figures serve.",
            pathway.feedstock
        ));
    }
    notes.push("Typical values are shown beside the defaults and never serve compliance.".to_owned());
    notes.push("e_ec and e_td are printed alike for every process of a feedstock: they hinge on the feedstock alone, e_p on the process as well.".to_owned());
    notes.push("The soil N2O part of e_ec is printed for information; nothing that was read lets it stand in for that part alone, so no combination uses it.".to_owned());
    if rules.is_residue_by_law(&pathway.feedstock) {
        notes.push(format!(
            "{} is a residue: it starts at zero, and e_ec, own or default, counts from its collection on ({}).",
            pathway.feedstock,
            rules.residues_source.as_deref().unwrap_or(&rules.source)
        ));
    }
    if !subject.has_stage(StageKind::Land) {
        notes.push("The pathway has no land stage: e_l counts as zero, which the growers' declarations must bear out.".to_owned());
    }
    notes
}

fn cannot_be_told(subject: &Subject, rows: &[PublishedRow]) -> Vec<String> {
    if rows.is_empty() {
        return Vec::new();
    }
    let mut open = vec![
        "Own figures may be claimed only after an audit of that skill (Implementing Regulation (EU) 2022/996 Article 14(4)).".to_owned(),
    ];
    if rows.iter().any(|row| row.feedstock_fits != Answer::No) {
        open.push("Whether the inputs name all process heat: heat that no input names would close a row of combined heat and power.".to_owned());
        open.push("Whether a regional cultivation figure accepted by the Commission could replace the default e_ec (Article 31(2) to (4)).".to_owned());
    }
    if subject.has_stage(StageKind::Bought) {
        open.push(
            "How the supplier's stated terms may change: only the supplier can state them anew.".to_owned(),
        );
    }
    let soil_carbon = subject
        .actual
        .as_ref()
        .is_some_and(|actual| actual.terms_g_co2e_per_mj.e_sca != 0.0);
    if soil_carbon {
        open.push("Whether an auditor takes an own e_sca beside a default e_ec, which counts no extra fertiliser of the practice.".to_owned());
    }
    open
}
