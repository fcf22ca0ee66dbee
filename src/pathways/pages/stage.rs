//! The page of one stage, as a recipe card: what goes in, what is used, what comes out, each field with its figure.

use super::card::build::Source;
use super::card::merge::Met;
use super::card::search::{self, Found};
use super::card::spec::{self, Ground};
use super::card::{Do, Form};
use super::entries::Entries;
use super::findings::{self, FindingRow};
use super::tried::{StepLine, Tried};
use super::{Fact, Head, Notice, links};
use crate::core::documents::Pathway;
use crate::core::documents::assessment::{Assessment, StageResult};
use crate::core::documents::problem::Problem;
use crate::core::domain::{Book, StageKind};
use crate::core::models;
use crate::core::units::rounding::show;
use crate::evidence::EvidenceLink;
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use askama::Template;
use serde_json::Value;

/// The page of one stage.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "stage.html")]
pub struct ShowStage {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision the form began from.
    pub head: Head,
    /// Name of the pathway.
    pub pathway: String,
    /// Name of the stage.
    pub title: String,
    /// The ruled box of facts.
    pub facts: Vec<Fact>,
    /// What just happened.
    pub notice: Option<Notice>,
    /// What trying gave, where the card was worked out and not saved.
    pub tried: Option<Tried>,
    /// What was asked for and refused: to be saved, or to be worked out.
    pub refused_words: &'static str,
    /// Why it was not saved; empty where nothing was refused.
    pub refused: Vec<Refused>,
    /// What somebody else saved meanwhile.
    pub met: Vec<Met>,
    /// Who that was, and when.
    pub meeting: super::meeting::Meeting,
    /// How many fields differ, as a sentence.
    pub differ: String,
    /// Where the form is sent.
    pub action: String,
    /// Steering fields: name, value.
    pub hidden: Vec<(String, String)>,
    /// The stage itself.
    pub about: Entry,
    /// What it takes.
    pub intakes: Vec<Entry>,
    /// What it uses.
    pub inputs: Vec<Entry>,
    /// Its main product.
    pub output: Entry,
    /// Its other products.
    pub co_products: Vec<Entry>,
    /// What an input can be: value, words, chosen.
    pub input_kinds: Vec<Choice>,
    /// Why the change, as typed.
    pub why: String,
    /// Ids of materials, for the fields that take one.
    pub materials: Vec<(String, String)>,
    /// Ids of evidence that fields offer, with the names of the files.
    pub evidence: Vec<(String, String)>,
    /// True for a stage that is not stored yet.
    pub new: bool,
    /// For a new stage: the names of those that would take from it.
    pub takers: String,
}

/// Something that kept the card from being saved.
#[derive(Clone, Debug, PartialEq)]
pub struct Refused {
    /// Id of the field, if it is on the page.
    pub anchor: Option<String>,
    /// Name of the field or place.
    pub place: String,
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

/// One entry of the card: an intake, an input, a product.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Entry {
    /// Anchor on the page.
    pub anchor: String,
    /// What it is, for those who hear the page.
    pub legend: String,
    /// Steering fields: name, value.
    pub hidden: Vec<(String, String)>,
    /// Fields in one line.
    pub line: Vec<FieldView>,
    /// Fields below, all shown.
    pub below: Vec<FieldView>,
    /// Fields that few need.
    pub rare: Vec<FieldView>,
    /// True if the rare fields are unfolded.
    pub rare_open: bool,
    /// What the figure at the end of the line is.
    pub result_label: &'static str,
    /// The figure.
    pub result: Option<String>,
    /// The last good figure, where the card was refused.
    pub was: Option<String>,
    /// Value of the button that takes it out; empty where it stays.
    pub remove: String,
    /// What the model computes, and its source.
    pub explain: Option<(String, String)>,
    /// Where its arithmetic stands.
    pub workings: Option<String>,
    /// The arithmetic of its model.
    pub steps: Vec<StepLine>,
    /// What is wrong with the whole entry.
    pub wrong: Vec<(String, String)>,
    /// Where it stands in the stage, such as `/inputs/0`.
    pub at: String,
    /// Findings about the whole entry.
    pub findings: Vec<FindingRow>,
    /// The evidence that backs it.
    pub backed: Vec<EvidenceLink>,
    /// Name of the field that takes a file; empty where none does.
    pub file: String,
}

/// One choice of a selection.
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// Value sent.
    pub value: String,
    /// Words shown.
    pub words: String,
    /// True if it is the one.
    pub here: bool,
}

/// One field.
#[derive(Clone, Debug, PartialEq)]
pub struct FieldView {
    /// Id on the page.
    pub id: String,
    /// Name in the form.
    pub name: String,
    /// Words above it.
    pub label: String,
    /// `number`, `text`, `select`, `area`, `date`, `factor`.
    pub kind: &'static str,
    /// Its text.
    pub text: String,
    /// Its unit, where it has one of its own.
    pub unit: Option<String>,
    /// Choices of a selection.
    pub choices: Vec<Choice>,
    /// Words below it.
    pub hint: String,
    /// List that completes it.
    pub list: &'static str,
    /// Place in the line.
    pub class: &'static str,
    /// What is wrong: fact, remedy.
    pub wrong: Vec<(String, String)>,
    /// What a search for it found.
    pub found: Option<Found>,
    /// Where a search for it is sent: back to the field itself.
    pub go: String,
    /// Factors that stand in it: id, address.
    pub factors: Vec<(String, String)>,
    /// True if it cannot be left empty.
    pub required: bool,
    /// Findings about it.
    pub findings: Vec<FindingRow>,
}

/// All that a card needs to be shown.
pub struct Card<'a> {
    /// Which pathway, which revision the form began from.
    pub head: Head,
    /// The pathway as stored.
    pub pathway: &'a Pathway,
    /// Its assessment, if it has one.
    pub found: Option<&'a Assessment>,
    /// What came of the card as typed, where it was worked out and not saved.
    pub tried: Option<&'a Assessment>,
    /// Published data.
    pub book: &'a Book,
    /// Key of the stage.
    pub key: &'a str,
    /// The stage, with its lists as the form has them.
    pub stage: &'a Value,
    /// What was typed; empty where the page is only looked at.
    pub typed: &'a Form,
    /// What was wrong with it: pointers inside the stage.
    pub problems: &'a [Problem],
    /// True if it was to be saved and was not.
    pub refused: bool,
    /// Field whose factor is looked up.
    pub search: Option<&'a str>,
    /// For a new stage: key of the stage it follows.
    pub after: Option<&'a str>,
}

/// The stages that another may take from.
pub fn sources(pathway: &Pathway, key: &str) -> Vec<Source> {
    pathway
        .stages
        .iter()
        .filter(|stage| stage.key != key)
        .map(|stage| Source {
            key: stage.key.clone(),
            name: stage.title().to_owned(),
            material: stage.output.material.clone(),
        })
        .collect()
}

impl ShowStage {
    /// The page of a card.
    pub fn of(card: &Card) -> ShowStage {
        let stored = card.pathway.stages.iter().any(|stage| stage.key == card.key);
        let ground = Ground {
            stage: card.stage,
            typed: card.typed,
        };
        let shown = card.tried.or(card.found);
        let result = shown.and_then(|found| found.stages.iter().find(|stage| stage.key == card.key));
        let sources = sources(card.pathway, card.key);
        let at = Entries {
            card,
            ground,
            result,
            sources: &sources,
        };
        let title = match ground.word("/name") {
            name if name.is_empty() => card.key.to_owned(),
            name => name,
        };
        let entries = |list: &'static str| -> Vec<Entry> {
            let count = ground.at(list).and_then(Value::as_array).map_or(0, Vec::len);
            (0..count).map(|index| at.item(list, index)).collect()
        };
        let mut hidden = vec![("expected".to_owned(), card.head.revision.to_string())];
        let mut takers = String::new();
        if !stored {
            let after = card.after.unwrap_or_default();
            hidden.push(("new".to_owned(), "yes".to_owned()));
            hidden.push(("after".to_owned(), after.to_owned()));
            let takes = |stage: &&crate::core::documents::pathway::Stage| {
                stage
                    .intakes
                    .iter()
                    .any(|intake| intake.from == after && intake.product.is_none())
            };
            let names: Vec<&str> = card
                .pathway
                .stages
                .iter()
                .filter(takes)
                .map(crate::core::documents::pathway::Stage::title)
                .collect();
            takers = names.join(", ");
        }
        let about = at.entry(&spec::stage(ground), "about");
        let output = at.output();
        let (intakes, inputs, co_products) =
            (entries("/intakes"), entries("/inputs"), entries("/co_products"));
        let mut page = ShowStage {
            frame: Frame::new(
                format!("{title}, {}", card.pathway.name),
                Section::Pathways,
                format!(
                    "GET /api/v1/pathways/{}/stages/{}",
                    links::segment(&card.head.id),
                    links::segment(card.key)
                ),
            )
            .example(card.pathway.example),
            pathway: card.pathway.name.clone(),
            facts: facts(card),
            notice: None,
            tried: card.tried.map(|now| Tried::of(now, card.found, card.key)),
            refused_words: "Not saved",
            refused: Vec::new(),
            met: Vec::new(),
            meeting: super::meeting::Meeting::default(),
            differ: String::new(),
            action: links::stage(&card.head.id, card.key),
            hidden,
            about,
            intakes,
            inputs,
            output,
            co_products,
            input_kinds: input_kinds(card.typed.text("add-as")),
            why: card.typed.text("why").to_owned(),
            materials: materials(card.book, card.pathway),
            evidence: Vec::new(),
            new: !stored,
            takers,
            title,
            head: card.head.clone(),
        };
        if card.refused {
            page.refused = card
                .problems
                .iter()
                .map(|problem| page.refusal(problem))
                .collect();
        }
        page.put_findings(card);
        page
    }

    /// The findings of the last assessment, each at the figure it questions.
    fn put_findings(&mut self, card: &Card) {
        let all = card.tried.or(card.found).map_or(&[][..], |found| &found.findings);
        let mut sorted: Vec<_> = all.iter().filter(|finding| finding.stage == card.key).collect();
        sorted.sort_by_key(|finding| finding.severity);
        let lists = [&mut self.intakes, &mut self.inputs, &mut self.co_products];
        let mut entries: Vec<&mut Entry> = lists.into_iter().flatten().collect();
        entries.push(&mut self.output);
        for finding in sorted {
            let row = FindingRow::of(&card.head, card.pathway, finding);
            findings::place(finding, row, card.stage, &mut self.about, &mut entries);
        }
    }

    fn every_entry(&self) -> impl Iterator<Item = &Entry> {
        let alone = [&self.about, &self.output];
        alone
            .into_iter()
            .chain(&self.intakes)
            .chain(&self.inputs)
            .chain(&self.co_products)
    }

    pub(super) fn every_entry_mut(&mut self) -> impl Iterator<Item = &mut Entry> {
        [&mut self.about, &mut self.output]
            .into_iter()
            .chain(&mut self.intakes)
            .chain(&mut self.inputs)
            .chain(&mut self.co_products)
    }

    fn refusal(&self, problem: &Problem) -> Refused {
        let fields = self.every_entry().flat_map(|entry| {
            let all = entry.line.iter().chain(&entry.below).chain(&entry.rare);
            all.map(move |field| (entry, field))
        });
        let best = fields
            .filter(|(_, field)| covers(&field.name, &problem.pointer))
            .max_by_key(|(_, field)| field.name.len());
        let (anchor, place) = match best {
            Some((entry, field)) => (
                Some(field.id.clone()),
                format!("{}, {}", entry.legend, field.label),
            ),
            None => {
                let entry = self
                    .every_entry()
                    .find(|entry| entry.wrong.iter().any(|(fact, _)| *fact == problem.detail));
                match entry {
                    Some(entry) => (Some(entry.anchor.clone()), entry.legend.clone()),
                    None => (None, self.title.clone()),
                }
            }
        };
        Refused {
            anchor,
            place,
            detail: problem.detail.clone(),
            remedy: problem.remedy.clone(),
        }
    }
}

/// True if a problem at `pointer` is one of the field `name`.
pub(super) fn covers(name: &str, pointer: &str) -> bool {
    pointer
        .strip_prefix(name)
        .is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
}

fn materials(book: &Book, pathway: &Pathway) -> Vec<(String, String)> {
    let own = pathway
        .materials
        .iter()
        .map(|material| (material.id.clone(), material.name.clone()));
    let library = book
        .materials
        .values()
        .map(|material| (material.id.clone(), material.name.clone()));
    own.chain(library).collect()
}

fn input_kinds(chosen: &str) -> Vec<Choice> {
    let choice = |value: &str, words: String| Choice {
        value: value.to_owned(),
        words,
        here: value == chosen,
    };
    let mut out = vec![
        choice("factor", "an amount times a factor".to_owned()),
        choice("own", "an amount times an own factor".to_owned()),
        choice("gases", "gases as given".to_owned()),
    ];
    out.extend(
        models::ALL
            .iter()
            .map(|model| choice(model.kind, format!("a model: {}", model.title))),
    );
    out
}

fn facts(card: &Card) -> Vec<Fact> {
    let mut out = Vec::new();
    let result: Option<&StageResult> = card
        .found
        .and_then(|found| found.stages.iter().find(|stage| stage.key == card.key));
    let order: Vec<&str> = card
        .pathway
        .stages
        .iter()
        .map(|stage| stage.key.as_str())
        .collect();
    let name = |index: usize| card.pathway.stages.get(index).map_or("", |stage| stage.title());
    match order.iter().position(|key| *key == card.key) {
        Some(place) => {
            let mut words = format!("{} of {}", place + 1, order.len());
            if place > 0 {
                words.push_str(&format!(", after {}", name(place - 1)));
            }
            if place + 1 < order.len() {
                words.push_str(&format!(", before {}", name(place + 1)));
            }
            out.push(Fact::new("Stage", words));
        }
        None => out.push(Fact::new("Stage", "new, not saved yet")),
    }
    let kind = card
        .stage
        .get("kind")
        .and_then(Value::as_str)
        .and_then(StageKind::from_name);
    if let Some(kind) = kind {
        out.push(Fact::new(
            "Kind and term",
            format!("{}, {}", filters::capital(kind.words()), kind.term().name()),
        ));
    }
    if let (Some(found), Some(result)) = (card.found, result) {
        let words = format!(
            "{} of {} g CO2e/MJ",
            show(result.g_co2e_per_mj, 2),
            show(found.net.g_co2e_per_mj, 2)
        );
        out.push(Fact {
            label: "Last saved",
            value: words,
            href: Some(workings(card, "")),
        });
        out.push(Fact::new(
            "Fuel\u{2019}s share",
            format!(
                "{} % of its burden stays with the fuel",
                show(result.carried_share * 100.0, 1)
            ),
        ));
    }
    let saved = if card.head.saved.is_empty() {
        String::new()
    } else {
        format!(", saved {}", card.head.saved)
    };
    out.push(Fact::new("Revision", format!("{}{saved}", card.head.revision)));
    out
}

pub(super) fn workings(card: &Card, input: &str) -> String {
    format!(
        "{}#{}",
        links::workings(&card.head.id),
        links::workings_anchor(card.key, input)
    )
}

/// What the pressed button changes in what was typed, before the card is shown again. True if it asks to save.
pub fn steer(form: &mut Form, asked: &Do) -> bool {
    match asked {
        Do::Save | Do::Try => return true,
        Do::Add(list) => {
            let is = form.text("add-as").to_owned();
            let steering: &[(&str, &str)] = if *list == "/inputs" {
                &[("as", &is)]
            } else {
                &[("as", "new")]
            };
            form.add(list, steering);
        }
        Do::Remove(list, index) => form.remove(list, *index),
        Do::Choose(field, factor) => {
            let text = search::chosen(form.text(field), factor);
            form.set(field.clone(), text);
        }
        Do::Search(_) => {}
    }
    false
}
