//! The page of one pathway: the answer, what weakens it, the ladder, the terms, the crop's carbon, checks, revisions.

use super::carbon::CarbonView;
use super::findings::FindingRow;
use super::ladder::LadderView;
use super::links;
use super::verdict::{Checks, Verdict, percent_words, rounding_note};
use super::{Fact, Fault, Head, Notice, RevisionRow, fault_rows};
use crate::core::documents::assessment::{Assessment, StageResult};
use crate::core::documents::problem::Problem;
use crate::core::documents::{Pathway, Problems};
use crate::core::domain::{Book, RuleSet, StageKind, Term};
use crate::web::csv::{Cell, Table};
use crate::web::filters::{self, capital, short_day};
use crate::web::frame::{Frame, Section};
use askama::Template;

/// The page of one pathway.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "pathway.html")]
pub struct ShowPathway {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision.
    pub head: Head,
    /// Its name.
    pub name: String,
    /// Its note.
    pub note: String,
    /// The ruled box of facts.
    pub facts: Vec<Fact>,
    /// What just happened.
    pub notice: Option<Notice>,
    /// The answer and what follows from it; none where it cannot be worked out.
    pub result: Option<PathwayResult>,
    /// Why it cannot be worked out.
    pub faults: Vec<Fault>,
    /// The stages as they stand in the document, for the list without a result.
    pub stages: Vec<StageLink>,
    /// Kinds of stage that can be added: name in documents, words.
    pub kinds: Vec<(&'static str, &'static str)>,
    /// The revisions, newest first.
    pub revisions: Vec<RevisionRow>,
}

/// A stage by name.
#[derive(Clone, Debug, PartialEq)]
pub struct StageLink {
    /// Address.
    pub href: String,
    /// Name as shown.
    pub name: String,
    /// What it is for.
    pub kind: &'static str,
}

/// What an assessment has to show.
#[derive(Clone, Debug, PartialEq)]
pub struct PathwayResult {
    /// The answer.
    pub verdict: Verdict,
    /// Open checks.
    pub checks: Checks,
    /// Share of figures that rest on estimates, %.
    pub estimated_percent: f64,
    /// Share of figures that are measured or a supplier's, %.
    pub primary_percent: f64,
    /// The main picture.
    pub ladder: LadderView,
    /// How many steps of the workings rest on a source that was recalled and not read.
    pub recalled: usize,
    /// Sentences under the ladder.
    pub ladder_notes: Vec<String>,
    /// Terms of the rule.
    pub terms: Vec<TermRow>,
    /// The net.
    pub net: f64,
    /// How the saving follows, in words.
    pub saving_sum: String,
    /// Said where shown terms miss the shown net.
    pub term_note: Option<String>,
    /// Computed and in no total: e_u where the rule counts none.
    pub memo_e_u: Option<f64>,
    /// The crop's carbon.
    pub carbon: CarbonView,
    /// The crop's own CO2 in line, field first: stage, what it is, term, g CO2/MJ; empty where it stands apart.
    pub crop_rows: Vec<(String, String, &'static str, f64)>,
    /// What checks have to say, worst first.
    pub findings: Vec<FindingRow>,
}

/// One term of the rule.
#[derive(Clone, Debug, PartialEq)]
pub struct TermRow {
    /// With its sign in the sum.
    pub symbol: String,
    /// What it holds.
    pub words: &'static str,
    /// Where its figure comes from.
    pub kind: String,
    /// Signed contribution.
    pub g: f64,
    /// The same with the crop's own CO2 in line.
    pub in_line: f64,
}

impl ShowPathway {
    /// The page of a pathway with its assessment, or with what keeps it from being worked out.
    pub fn of(
        head: Head,
        pathway: &Pathway,
        outcome: Result<&Assessment, &Problems>,
        book: &Book,
        revisions: Vec<RevisionRow>,
        in_line: bool,
    ) -> ShowPathway {
        let rules = book.rule_sets.get(&pathway.rule_set);
        let mut frame = Frame::new(
            &pathway.name,
            Section::Pathways,
            links::data_assessment(&head.id, head.revision),
        )
        .example(pathway.example);
        frame.data.push(format!("GET /api/v1/pathways/{}", head.id));
        ShowPathway {
            frame,
            name: pathway.name.clone(),
            note: pathway.note.clone().unwrap_or_default(),
            facts: facts(&head, pathway, outcome.ok(), book, rules),
            notice: None,
            result: outcome
                .ok()
                .map(|found| PathwayResult::of(&head, pathway, found, book, rules, in_line)),
            faults: outcome
                .err()
                .map(|problems| faults(&head, pathway, problems.list()))
                .unwrap_or_default(),
            stages: stage_links(&head.id, pathway),
            kinds: StageKind::ALL
                .iter()
                .map(|kind| (kind.name(), kind.words()))
                .collect(),
            revisions,
            head,
        }
    }
}

fn stage_links(id: &str, pathway: &Pathway) -> Vec<StageLink> {
    let one = |stage: &crate::core::documents::pathway::Stage| StageLink {
        href: links::stage(id, &stage.key),
        name: stage.title().to_owned(),
        kind: stage.kind.words(),
    };
    pathway.stages.iter().map(one).collect()
}

fn faults(head: &Head, pathway: &Pathway, problems: &[Problem]) -> Vec<Fault> {
    fault_rows(problems, |pointer| links::place(&head.id, pathway, pointer))
}

fn facts(
    head: &Head,
    pathway: &Pathway,
    found: Option<&Assessment>,
    book: &Book,
    rules: Option<&RuleSet>,
) -> Vec<Fact> {
    let feedstock = book.materials.get(&pathway.feedstock);
    let mut out = vec![
        Fact {
            label: "Feedstock",
            value: feedstock.map_or_else(|| pathway.feedstock.clone(), |material| material.name.clone()),
            href: feedstock.map(|material| links::material(&material.id)),
        },
        Fact::new(
            "Period",
            format!(
                "{} to {}",
                short_day(pathway.period.from),
                short_day(pathway.period.to)
            ),
        ),
        Fact {
            label: "Rule set",
            value: rules.map_or_else(|| pathway.rule_set.clone(), |rules| rules.title.clone()),
            href: rules.map(|rules| links::rule_set(&rules.id)),
        },
    ];
    let needs = match found.map(|found| found.thresholds.as_slice()) {
        Some([one]) => format!(", so {} % is needed", percent_words(one.percent)),
        _ => String::new(),
    };
    let stated = pathway
        .stages
        .iter()
        .find_map(|stage| stage.stated.as_ref()?.plant_started);
    out.push(match pathway.plant_started {
        Some(day) => Fact::new("Plant started", format!("{}{needs}", short_day(day))),
        // Where fuel is bought, the works of its proof decide.
        None if let Some(day) = stated => Fact::new(
            "Plant started",
            format!("{}, the stated works{needs}", short_day(day)),
        ),
        None if rules.is_some_and(|rules| rules.thresholds.is_empty()) => {
            Fact::new("Plant started", "not given; the rule set asks for no saving")
        }
        None => Fact::new("Plant started", "not given: the required saving depends on it"),
    });
    if head.revision > 0 {
        let saved = if head.saved.is_empty() {
            String::new()
        } else {
            format!(", saved {}", head.saved)
        };
        out.push(Fact::new("Revision", format!("{}{saved}", head.revision)));
    }
    if head.archived {
        out.push(Fact::new("State", "archived"));
    }
    out
}

impl PathwayResult {
    fn of(
        head: &Head,
        pathway: &Pathway,
        found: &Assessment,
        book: &Book,
        rules: Option<&RuleSet>,
        in_line: bool,
    ) -> PathwayResult {
        let verdict = Verdict::of(found, rules);
        let weights = super::weights(book, &found.gwp_set);
        let stage_page = |key: &str| {
            pathway
                .stages
                .iter()
                .any(|stage| stage.key == key)
                .then(|| links::stage(&head.id, key))
        };
        let ladder = LadderView::of(found, &weights, rules, in_line, stage_page);
        let terms: Vec<TermRow> = Term::ALL
            .into_iter()
            .map(|term| term_row(term, pathway, found, rules))
            .collect();
        let net = found.net.g_co2e_per_mj;
        let parts: Vec<f64> = terms.iter().map(|row| row.g).collect();
        let memo = found.memo.e_u_not_counted_g_co2e_per_mj;
        PathwayResult {
            checks: Checks::of(found),
            estimated_percent: found.estimated_percent,
            primary_percent: found.primary_data_percent,
            recalled: recalled(found),
            ladder_notes: ladder_notes(found, &ladder, rules, &weights),
            saving_sum: saving_sum(found, &verdict),
            term_note: rounding_note("The terms", &parts, net, 2),
            memo_e_u: (memo != 0.0).then_some(memo),
            carbon: CarbonView::of(&found.carbon, net),
            crop_rows: if in_line {
                crop_rows(pathway, found)
            } else {
                Vec::new()
            },
            findings: super::findings::rows(head, pathway, &found.findings),
            verdict,
            ladder,
            terms,
            net,
        }
    }
}

fn ladder_notes(
    found: &Assessment,
    ladder: &LadderView,
    rules: Option<&RuleSet>,
    weights: &crate::core::domain::GwpSet,
) -> Vec<String> {
    use crate::core::units::rounding::show_all;
    let mut out = Vec::new();
    if let Some(rules) = rules {
        out.push(format!(
            "{} {} g CO2e/MJ: {}.",
            capital(&rules.comparator_word),
            show_all(found.comparator_g_co2e_per_mj),
            rules.comparator.source
        ));
    }
    out.push(format!(
        "Gas weights: fossil CH4 {}, biogenic CH4 {}, N2O {}: {}.",
        show_all(weights.ch4_fossil),
        show_all(weights.ch4_biogenic),
        show_all(weights.n2o),
        weights.citation.source
    ));
    out.push("A stage\u{2019}s figure is its share for the fuel.".to_owned());
    let sums: Vec<f64> = ladder
        .rows
        .iter()
        .filter_map(|row| row.counted)
        .map(|counted| counted.sum)
        .collect();
    out.extend(rounding_note("The stages", &sums, found.net.g_co2e_per_mj, 2));
    out.push("Gas columns can differ from their sum in the last digit: rounding.".to_owned());
    out
}

/// How many steps of the workings say that their source was recalled and not read.
fn recalled(found: &Assessment) -> usize {
    let of_stage = |stage: &StageResult| {
        let inputs = stage.inputs.iter().flat_map(|input| &input.workings);
        let steps = stage.workings.iter().chain(inputs);
        steps
            .filter(|step| step.source.contains("recalled, not read"))
            .count()
    };
    found.stages.iter().map(of_stage).sum()
}

fn crop_rows(pathway: &Pathway, found: &Assessment) -> Vec<(String, String, &'static str, f64)> {
    let rows = found.carbon.rows.iter().map(|row| {
        let stage = pathway.stages.iter().find(|stage| stage.key == row.stage);
        let name = stage.map_or_else(|| "\u{2013}".to_owned(), |stage| stage.title().to_owned());
        (name, capital(&row.what), row.term.name(), row.g_co2_per_mj)
    });
    rows.collect()
}

fn saving_sum(found: &Assessment, verdict: &Verdict) -> String {
    use crate::core::units::rounding::{show, show_all};
    match found.saving_percent {
        Some(saving) => {
            let base = show_all(found.comparator_g_co2e_per_mj);
            let net = show(found.net.g_co2e_per_mj, 2);
            format!("({base} \u{2212} {net}) / {base} = {} % saved", show(saving, 2))
        }
        None => match &verdict.basis {
            Some(basis) => format!("{basis}: no saving is worked out"),
            None => "no saving is worked out: the chain leaves something out".to_owned(),
        },
    }
}

fn term_row(term: Term, pathway: &Pathway, found: &Assessment, rules: Option<&RuleSet>) -> TermRow {
    let g = found.terms_g_co2e_per_mj.get(term);
    let deducts = matches!(term, Term::Esca | Term::Eccs | Term::Eccr);
    let default = pathway.defaults.iter().find(|(key, _)| key.name() == term.name());
    let part = pathway
        .defaults
        .iter()
        .find(|(key, _)| key.name().starts_with(&format!("{}_", term.name())));
    let used = found
        .stages
        .iter()
        .flat_map(|stage| &stage.inputs)
        .any(|input| input.term == term);
    let is_stated = |key: &str| {
        let of_document = pathway.stages.iter().find(|stage| stage.key == key);
        of_document.is_some_and(|stage| stage.stated.is_some())
    };
    let feeds = |stated: bool| {
        let of_kind = found
            .stages
            .iter()
            .filter(|stage| is_stated(&stage.key) == stated);
        of_kind
            .flat_map(|stage| &stage.inputs)
            .any(|input| input.term == term)
    };
    let kind = if rules.is_some_and(|rules| rules.leaves_out(term)) {
        "zero by the rule".to_owned()
    } else if let Some((_, row)) = default {
        format!("default value {row}")
    } else if let Some((_, row)) = part {
        format!("own figures, and default value {row} for a part")
    } else if used && feeds(true) && feeds(false) {
        "own figures, and a part stated by the supplier".to_owned()
    } else if used && feeds(true) {
        "stated by the supplier".to_owned()
    } else if used {
        "own figures".to_owned()
    } else if deducts {
        "not claimed".to_owned()
    } else {
        "nothing entered".to_owned()
    };
    TermRow {
        symbol: format!("{} {}", if deducts { "\u{2212}" } else { "+" }, term.name()),
        words: term.words(),
        kind,
        g,
        in_line: found.carbon.terms_in_line_g_co2e_per_mj.get(term),
    }
}

impl PathwayResult {
    /// The table of terms as CSV.
    pub fn terms_table(&self) -> Table {
        let mut table = Table::new(&["term", "what_it_holds", "kind_of_value", "g_co2e_per_mj"]);
        for (term, row) in Term::ALL.into_iter().zip(&self.terms) {
            table.rows.push(vec![
                term.name().into(),
                row.words.into(),
                row.kind.clone().into(),
                Cell::Figure(row.g),
            ]);
        }
        table.rows.push(vec![
            "net".into(),
            "net".into(),
            Cell::Empty,
            Cell::Figure(self.net),
        ]);
        table
    }

    /// The findings as CSV.
    pub fn checks_table(&self) -> Table {
        let mut table = Table::new(&["check", "severity", "place", "message", "remedy", "reason"]);
        for row in &self.findings {
            table.rows.push(vec![
                row.id.clone().into(),
                row.severity.into(),
                row.place.clone().into(),
                row.message.clone().into(),
                row.remedy.clone().into(),
                row.reason.clone().into(),
            ]);
        }
        table
    }
}
