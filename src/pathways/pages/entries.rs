//! The entries of a card: each with its fields, what is wrong with them, and the figure at the end of its line.

use super::card::build::{self, Source};
use super::card::fields;
use super::card::search;
use super::card::spec::{self, Ground, Shape, Spec};
use super::links;
use super::stage::{Card, Choice, Entry, FieldView, covers, workings};
use super::tried::StepLine;
use crate::core::documents::assessment::StageResult;
use crate::core::domain::Book;
use crate::core::models;
use crate::core::units::rounding::show;
use serde_json::Value;

/// Where entries are made.
pub(super) struct Entries<'a> {
    pub(super) card: &'a Card<'a>,
    pub(super) ground: Ground<'a>,
    pub(super) result: Option<&'a StageResult>,
    pub(super) sources: &'a [Source],
}

impl Entries<'_> {
    pub(super) fn entry(&self, specs: &[Spec], anchor: &str) -> Entry {
        let mut entry = Entry {
            anchor: anchor.to_owned(),
            legend: "The stage".to_owned(),
            ..Entry::default()
        };
        for spec in specs {
            let field = self.field(spec);
            if spec.rare {
                entry.rare_open |= !field.wrong.is_empty() || field.found.is_some();
                entry.rare.push(field);
            } else if field.class.is_empty() {
                entry.below.push(field);
            } else {
                entry.line.push(field);
            }
        }
        // In the line in the order of its columns, whatever the order of the rows.
        let column = |field: &FieldView| {
            ["e-name", "e-amt", "e-unit", "e-q", "e-org"]
                .iter()
                .position(|class| *class == field.class)
        };
        entry.line.sort_by_key(column);
        entry
    }

    pub(super) fn output(&self) -> Entry {
        let share = self.result.map(|result| result.share);
        let mut entry = self.entry(&spec::output(self.ground), "output");
        entry.at = "/output".to_owned();
        entry.legend = "Main product".to_owned();
        self.figure(
            &mut entry,
            "Share",
            share.map(|share| format!("{} %", show(share * 100.0, 1))),
        );
        entry
    }

    pub(super) fn item(&self, list: &'static str, index: usize) -> Entry {
        let at = format!("{list}/{index}");
        let item = self.ground.at(&at);
        let key = item
            .and_then(|item| item.get("key"))
            .and_then(Value::as_str)
            .unwrap_or_default()
            .to_owned();
        let (anchor, otherwise) = match list {
            "/inputs" => (format!("input-{key}"), "Input"),
            "/intakes" => (format!("intake-{index}"), "Intake"),
            _ => (format!("co-product-{key}"), "Co-product"),
        };
        let anchor = if key.is_empty() && list != "/intakes" {
            format!("{anchor}new-{index}")
        } else {
            anchor
        };
        let mut entry = self.entry(
            &build::item_specs(self.ground, list, index, self.sources),
            &anchor,
        );
        let name = ["label", "name"]
            .iter()
            .map(|name| self.ground.word(&format!("{at}/{name}")))
            .find(|name| !name.is_empty());
        entry.legend = name.unwrap_or_else(|| {
            if key.is_empty() {
                format!("{otherwise} {}", index + 1)
            } else {
                key.clone()
            }
        });
        entry.remove = format!("remove:{at}");
        entry.at.clone_from(&at);
        let posted = self.card.typed.get("expected").is_some();
        for steer in ["was", "as"] {
            let typed = self.card.typed.text(&format!("{at}/{steer}"));
            let value = if steer == "was" && !posted {
                index.to_string()
            } else {
                typed.to_owned()
            };
            if !value.is_empty() {
                entry.hidden.push((format!("{at}/{steer}"), value));
            }
        }
        let known: Vec<String> = entry
            .line
            .iter()
            .chain(&entry.below)
            .chain(&entry.rare)
            .map(|field| field.name.clone())
            .collect();
        let problems = self
            .card
            .problems
            .iter()
            .filter(|problem| covers(&at, &problem.pointer));
        entry.wrong = problems
            .filter(|problem| !known.iter().any(|name| covers(name, &problem.pointer)))
            .map(|problem| (problem.detail.clone(), problem.remedy.clone()))
            .collect();
        match list {
            "/inputs" => self.input(&mut entry, item, &key),
            "/co_products" => {
                let share = self
                    .result
                    .and_then(|result| result.products.iter().find(|product| product.product == key));
                self.figure(
                    &mut entry,
                    "Share",
                    share.map(|product| format!("{} %", show(product.share * 100.0, 1))),
                );
            }
            _ => {}
        }
        entry
    }

    fn input(&self, entry: &mut Entry, item: Option<&Value>, key: &str) {
        let result = self
            .result
            .and_then(|result| result.inputs.iter().find(|input| input.key == key));
        self.figure(
            entry,
            "g CO2e/MJ",
            result.map(|input| show(input.g_co2e_per_mj, 2)),
        );
        if result.is_some() {
            entry.workings = Some(workings(self.card, key));
        }
        let model = item.map(spec::input_as).and_then(|is| models::find(&is));
        let fresh = self.card.tried.is_some() || self.card.typed.get("expected").is_none();
        if let (Some(result), true, true) = (result, model.is_some(), fresh) {
            let steps = result.workings.iter().map(|step| StepLine {
                text: step.text.clone(),
                value: step.value,
                unit: step.unit.clone(),
                source: step.source.clone(),
            });
            entry.steps = steps.collect();
        }
        entry.explain = model.map(|model| {
            (
                format!("{}. {}", model.title, model.what),
                model.source.to_owned(),
            )
        });
    }

    /// The figure at the end of the line; where the card is being changed it is the last good one.
    fn figure(&self, entry: &mut Entry, label: &'static str, figure: Option<String>) {
        entry.result_label = label;
        if self.card.typed.get("expected").is_some() && self.card.tried.is_none() {
            entry.was = figure;
        } else {
            entry.result = figure;
        }
    }

    fn field(&self, spec: &Spec) -> FieldView {
        let (text, unit) = fields::shown(spec, self.ground);
        let name = spec.pointer.clone();
        let last = name.rsplit('/').next().unwrap_or_default();
        let has_unit = !fields::unit_of(&spec.shape).is_empty();
        let kind = match &spec.shape {
            Shape::Number | Shape::Measured(_) | Shape::Amount(_) => "number",
            Shape::Word(_) | Shape::Flag => "select",
            Shape::Area => "area",
            Shape::Day => "date",
            Shape::Factor | Shape::Factors => "factor",
            Shape::NoneOrAmount(_) | Shape::Text | Shape::Texts => "text",
        };
        let model = name.contains("/model/")
            || name.contains("/stated/")
            || name.contains("/gases/")
            || name.contains("/displaces/");
        let class = match last {
            _ if model || spec.rare => "",
            "label" | "name" | "from" | "material" if !name.starts_with("/co_products") || last == "name" => {
                "e-name"
            }
            "amount" => "e-amt",
            "unit" => "e-unit",
            "origin" | "role" => "e-org",
            "strength_percent_mass" | "moisture_percent" => "e-q",
            "kind" | "allocation" => "e-org",
            _ => "",
        };
        let found = self
            .card
            .search
            .filter(|field| *field == name)
            .map(|_| search::find(self.card.book, &text));
        FieldView {
            id: links::field_id(&name),
            label: spec.label.clone(),
            choices: choices(&spec.shape, &text),
            unit: has_unit.then_some(unit),
            hint: spec.hint.clone(),
            list: match last {
                "unit" => "units",
                "material" => "materials",
                "evidence" => "evidence",
                _ => "",
            },
            class,
            wrong: self.wrong(&name),
            found,
            go: format!(
                "{}#{}",
                links::stage(&self.card.head.id, self.card.key),
                links::field_id(&name)
            ),
            factors: factors(kind, &text, self.card.book),
            required: spec.required,
            findings: Vec::new(),
            kind,
            text,
            name,
        }
    }

    fn wrong(&self, name: &str) -> Vec<(String, String)> {
        let mine = self
            .card
            .problems
            .iter()
            .filter(|problem| covers(name, &problem.pointer));
        mine.map(|problem| (problem.detail.clone(), problem.remedy.clone()))
            .collect()
    }
}

fn choices(shape: &Shape, text: &str) -> Vec<Choice> {
    let choice = |value: &str, words: &str| Choice {
        value: value.to_owned(),
        words: words.to_owned(),
        here: value == text,
    };
    let mut out = vec![choice("", "\u{2013}")];
    match shape {
        Shape::Word(words) => out.extend(words.iter().map(|(value, shown)| choice(value, shown))),
        Shape::Flag => out.extend([choice("yes", "yes"), choice("no", "no")]),
        _ => return Vec::new(),
    }
    // A word that the list does not know stays as it stands: the refusal names it.
    if !out.iter().any(|choice| choice.here) {
        out.push(Choice {
            value: text.to_owned(),
            words: text.to_owned(),
            here: true,
        });
    }
    out
}

fn factors(kind: &str, text: &str, book: &Book) -> Vec<(String, String)> {
    if kind != "factor" {
        return Vec::new();
    }
    let ids = text
        .split(['+', ',', ' '])
        .map(str::trim)
        .filter(|id| book.factor(id).is_some());
    ids.map(|id| (id.to_owned(), links::factor(id))).collect()
}
