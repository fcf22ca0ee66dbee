//! The arithmetic behind every figure, foldable and printable, with anchors that can be cited.

use super::findings::{self, FindingRow};
use super::ladder::stage_name;
use super::verdict::{Verdict, rounding_note};
use super::{Head, links};
use crate::core::documents::Pathway;
use crate::core::documents::assessment::{Assessment, Finding, StageResult, Step};
use crate::core::domain::{Book, Gas, GasVector, Term};
use crate::web::csv::{Cell, Table};
use crate::web::filters::{self, Markup};
use crate::web::frame::{Frame, Section};
use crate::web::links as addresses;
use askama::Template;

/// The page of workings.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "workings.html")]
pub struct ShowWorkings {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision.
    pub head: Head,
    /// Name of the pathway.
    pub name: String,
    /// Rule set, weights and hash, in words.
    pub lead: String,
    /// True if everything is unfolded.
    pub open: bool,
    /// The net, g CO2e/MJ.
    pub net: f64,
    /// The sum over the terms, in words.
    pub sum: String,
    /// The steps to net and saving.
    pub steps: Vec<StepRow>,
    /// Said where shown stages miss the shown net.
    pub note: Option<String>,
    /// The stages, field first.
    pub stages: Vec<StageWork>,
    /// The pathway's fingerprint.
    pub hash: String,
}

/// One step.
#[derive(Clone, Debug, PartialEq)]
pub struct StepRow {
    /// Its number, such as 2.7.13.
    pub number: String,
    /// What is done.
    pub text: String,
    /// The same for the page: every factor that it names leads to its page.
    pub shown: Markup,
    /// The result; none where the step is a question.
    pub value: Option<f64>,
    /// Unit of the result.
    pub unit: String,
    /// Where a figure comes from.
    pub source: String,
    /// Where the figure is worked out, on this page.
    pub href: Option<String>,
}

impl StepRow {
    /// What is done, as HTML with links.
    pub fn shown(&self) -> &Markup {
        &self.shown
    }
}

/// The workings of one stage.
#[derive(Clone, Debug, PartialEq)]
pub struct StageWork {
    /// Anchor.
    pub anchor: String,
    /// Number on the page.
    pub number: usize,
    /// Key in documents.
    pub key: String,
    /// Name as shown.
    pub name: String,
    /// Address of the stage, where it has a page.
    pub href: Option<String>,
    /// Contribution, g CO2e/MJ.
    pub g: f64,
    /// Without sharing.
    pub unallocated: f64,
    /// Share carried into the fuel, %.
    pub carried_percent: f64,
    /// Demand per MJ of fuel, in words.
    pub demand: String,
    /// Shares of the products: name, measure in words, share in %.
    pub products: Vec<(String, String, f64)>,
    /// Steps that lead to demand and shares.
    pub steps: Vec<StepRow>,
    /// The inputs.
    pub inputs: Vec<InputWork>,
    /// Findings about the stage that are about none of its inputs.
    pub findings: Vec<FindingRow>,
}

/// The workings of one input.
#[derive(Clone, Debug, PartialEq)]
pub struct InputWork {
    /// Anchor.
    pub anchor: String,
    /// Number on the page.
    pub number: String,
    /// Key in documents.
    pub key: String,
    /// Name as shown.
    pub name: String,
    /// The term it feeds.
    pub term: &'static str,
    /// Contribution, g CO2e/MJ.
    pub g: f64,
    /// Why it does not count, where it does not.
    pub replaced: Option<String>,
    /// kg of each gas per recipe, in words.
    pub recipe: Vec<(&'static str, f64)>,
    /// The arithmetic.
    pub steps: Vec<StepRow>,
    /// Findings about it.
    pub findings: Vec<FindingRow>,
    /// The evidence that backs it: id, address.
    pub evidence: Vec<(String, String)>,
}

impl ShowWorkings {
    /// The workings of an assessment.
    pub fn of(head: Head, pathway: &Pathway, found: &Assessment, book: &Book, open: bool) -> ShowWorkings {
        let rules = book.rule_sets.get(&found.rule_set);
        let rule_words = rules.map_or(found.rule_set.as_str(), |rules| rules.title.as_str());
        let revision = if head.revision > 0 {
            format!("Revision {}, ", head.revision)
        } else {
            String::new()
        };
        let stages: Vec<StageWork> = found
            .stages
            .iter()
            .enumerate()
            .map(|(index, stage)| StageWork::of(&head, pathway, found, stage, index + 2, book))
            .collect();
        let sums: Vec<f64> = stages.iter().map(|stage| stage.g).collect();
        ShowWorkings {
            frame: Frame::new(
                format!("Workings, {}", pathway.name),
                Section::Pathways,
                links::data_assessment(&head.id, head.revision),
            )
            .example(pathway.example),
            name: pathway.name.clone(),
            lead: format!(
                "{revision}rule set {rule_words}, gas weights {}, program {}.",
                found.gwp_set, found.program
            ),
            open,
            net: found.net.g_co2e_per_mj,
            sum: sum_words(found),
            steps: net_steps(
                found,
                &stages,
                &Verdict::of(found, rules),
                rules.map(|rules| rules.comparator.source.as_str()),
            ),
            note: rounding_note("The stages", &sums, found.net.g_co2e_per_mj, 2),
            stages,
            hash: found.pathway_hash.clone(),
            head,
        }
    }

    /// Every step as CSV, figures in full.
    pub fn table(&self) -> Table {
        let mut table = Table::new(&[
            "stage",
            "input",
            "step",
            "what_is_done",
            "value",
            "unit",
            "source",
        ]);
        let mut add = |stage: &str, input: &str, steps: &[StepRow]| {
            for step in steps {
                table.rows.push(vec![
                    stage.into(),
                    input.into(),
                    Cell::Text(step.number.clone()),
                    step.text.clone().into(),
                    step.value.into(),
                    step.unit.clone().into(),
                    step.source.clone().into(),
                ]);
            }
        };
        add("", "", &self.steps);
        for stage in &self.stages {
            add(&stage.key, "", &stage.steps);
            for input in &stage.inputs {
                add(&stage.key, &input.key, &input.steps);
            }
        }
        table
    }
}

/// The evidence of an input; of a stated term that of the supplier's statement.
fn evidence(pathway: &Pathway, stage: &str, input: &str) -> Vec<(String, String)> {
    let Some(stage) = pathway.stages.iter().find(|one| one.key == stage) else {
        return Vec::new();
    };
    let ids = match stage.inputs.iter().find(|one| one.key == input) {
        Some(input) => input.evidence.as_slice(),
        None => stage.stated.as_ref().map_or(&[][..], |stated| &stated.evidence),
    };
    ids.iter()
        .map(|id| (id.clone(), addresses::evidence(id)))
        .collect()
}

fn sum_words(found: &Assessment) -> String {
    use crate::core::units::rounding::show;
    let mut words = String::from("E =");
    let mut figures = String::from(" =");
    for (index, term) in Term::ALL.into_iter().enumerate() {
        let deducts = matches!(term, Term::Esca | Term::Eccs | Term::Eccr);
        let sign = if deducts {
            " \u{2212} "
        } else if index == 0 {
            " "
        } else {
            " + "
        };
        let g = found.terms_g_co2e_per_mj.get(term);
        let shown = show(if deducts { -g } else { g }, 2);
        let shown = if shown.starts_with('\u{2212}') {
            format!("({shown})")
        } else {
            shown
        };
        words.push_str(&format!("{sign}{}", term.name()));
        figures.push_str(&format!("{sign}{shown}"));
    }
    format!("{words}{figures} = {}", show(found.net.g_co2e_per_mj, 2))
}

fn net_steps(
    found: &Assessment,
    stages: &[StageWork],
    verdict: &Verdict,
    source: Option<&str>,
) -> Vec<StepRow> {
    use crate::core::units::rounding::show_all;
    let unit = "g/MJ".to_owned();
    let mut out: Vec<StepRow> = stages
        .iter()
        .map(|stage| StepRow {
            number: String::new(),
            text: stage.name.clone(),
            shown: Markup(filters::chem_html(&stage.name)),
            value: Some(stage.g),
            unit: unit.clone(),
            source: String::new(),
            href: Some(format!("#{}", stage.anchor)),
        })
        .collect();
    let plain = |text: String, value: Option<f64>, unit: &str, source: &str| StepRow {
        number: String::new(),
        shown: Markup(filters::chem_html(&text)),
        text,
        value,
        unit: unit.to_owned(),
        source: source.to_owned(),
        href: None,
    };
    let net = found.net.g_co2e_per_mj;
    out.push(plain(
        "Net, the sum of the stages".to_owned(),
        Some(net),
        "g/MJ",
        "",
    ));
    if let Some(saving) = found.saving_percent {
        let base = show_all(found.comparator_g_co2e_per_mj);
        let text = format!(
            "Saving: ({base} \u{2212} {}) / {base} × 100",
            filters::worked_text(net)
        );
        out.push(plain(text, Some(saving), "%", source.unwrap_or_default()));
        for (asked, required) in found.thresholds.iter().zip(&verdict.required) {
            let text = format!("{} {} %, compared unrounded", required.word, required.percent);
            out.push(plain(text, None, "", &asked.because));
        }
    }
    number(&mut out, "1");
    out
}

fn number(steps: &mut [StepRow], prefix: &str) {
    for (index, step) in steps.iter_mut().enumerate() {
        step.number = format!("{prefix}.{}", index + 1);
    }
}

/// A text as HTML in which every factor of the book that it names is a link.
fn linked(text: &str, book: &Book) -> Markup {
    let mut out = String::new();
    let mut plain = String::new();
    for word in text.split_inclusive(char::is_whitespace) {
        let id = word.trim_matches(|c: char| !c.is_ascii_alphanumeric());
        let known = id.contains('/') && (book.factor(id).is_some() || book.pathway_default(id).is_some());
        match word.split_once(id).filter(|_| known) {
            Some((before, after)) => {
                plain.push_str(before);
                out.push_str(&filters::chem_html(&std::mem::replace(
                    &mut plain,
                    after.to_owned(),
                )));
                let (href, words) = (filters::chem_html(&links::factor(id)), filters::chem_html(id));
                out.push_str(&format!("<a href=\"{href}\">{words}</a>"));
            }
            None => plain.push_str(word),
        }
    }
    out.push_str(&filters::chem_html(&plain));
    Markup(out)
}

fn step_rows(steps: &[Step], prefix: &str, book: &Book) -> Vec<StepRow> {
    let mut out: Vec<StepRow> = steps
        .iter()
        .map(|step| StepRow {
            number: String::new(),
            text: step.text.clone(),
            shown: linked(&step.text, book),
            value: Some(step.value),
            unit: step.unit.clone(),
            source: step.source.clone(),
            href: None,
        })
        .collect();
    number(&mut out, prefix);
    out
}

fn recipe(gases: &GasVector) -> Vec<(&'static str, f64)> {
    gases
        .entries()
        .filter(|(_, kg)| *kg != 0.0)
        .map(|(gas, kg): (Gas, f64)| (gas.words(), kg))
        .collect()
}

impl StageWork {
    fn of(
        head: &Head,
        pathway: &Pathway,
        found: &Assessment,
        stage: &StageResult,
        place: usize,
        book: &Book,
    ) -> StageWork {
        use crate::core::units::rounding::significant;
        let input_keys: Vec<&str> = stage.inputs.iter().map(|input| input.key.as_str()).collect();
        let said = |key: Option<&str>| -> Vec<FindingRow> {
            let here = found.findings.iter().filter(|finding| finding.stage == stage.key);
            let about = |finding: &&Finding| {
                findings::input_of(finding).filter(|input| input_keys.contains(input)) == key
            };
            here.filter(about)
                .map(|finding| FindingRow::of(head, pathway, finding))
                .collect()
        };
        let own = pathway.stages.iter().any(|own| own.key == stage.key);
        let demand = format!(
            "{} {}",
            significant(stage.demand.amount, 6, 12),
            stage.demand.unit
        );
        StageWork {
            anchor: links::workings_anchor(&stage.key, ""),
            number: place,
            key: stage.key.clone(),
            name: stage_name(stage),
            href: own.then(|| links::stage(&head.id, &stage.key)),
            g: stage.g_co2e_per_mj,
            unallocated: stage.unallocated_g_co2e_per_mj,
            carried_percent: stage.carried_share * 100.0,
            demand,
            products: stage
                .products
                .iter()
                .map(|product| {
                    // Nothing is measured where nothing is shared, and of what carries no burden.
                    let measure = match (product.measure == 0.0, product.share > 0.0) {
                        (false, _) => format!("{} {}", significant(product.measure, 6, 6), product.unit),
                        (true, true) => "nothing is shared: it carries all".to_owned(),
                        (true, false) => "residue or waste: it carries none".to_owned(),
                    };
                    (product.name.clone(), measure, product.share * 100.0)
                })
                .collect(),
            steps: step_rows(&stage.workings, &format!("{place}.0"), book),
            findings: said(None),
            inputs: stage
                .inputs
                .iter()
                .enumerate()
                .map(|(index, input)| {
                    let number = format!("{place}.{}", index + 1);
                    InputWork {
                        anchor: links::workings_anchor(&stage.key, &input.key),
                        key: input.key.clone(),
                        name: if input.label.is_empty() {
                            input.key.clone()
                        } else {
                            input.label.clone()
                        },
                        term: input.term.name(),
                        g: input.g_co2e_per_mj,
                        replaced: input.replaced.clone(),
                        recipe: recipe(&input.recipe_gases_kg),
                        steps: step_rows(&input.workings, &number, book),
                        findings: said(Some(&input.key)),
                        evidence: evidence(pathway, &stage.key, &input.key),
                        number,
                    }
                })
                .collect(),
        }
    }
}
