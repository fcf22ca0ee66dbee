//! Two to six pathways side by side: narrow ladders on one scale, the difference by stage and by term, unlike settings.

use super::links;
use super::verdict::{Verdict, rounding_note};
use crate::charts::ladder::{self, Form, Ladder};
use crate::core::documents::{Assessment, Pathway};
use crate::core::domain::Book;
use crate::core::levers::compare::{Comparison, MOST, StageRow, Subject, compare};
use crate::core::units::rounding::show;
use crate::web::csv::{Cell, Table};
use crate::web::filters::{self, Markup};
use crate::web::frame::{Frame, Section};
use askama::Template;

/// The page of a comparison.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "compare.html")]
pub struct Compare {
    /// Round the page.
    pub frame: Frame,
    /// The headline.
    pub title: String,
    /// What comes of it, in words.
    pub lead: String,
    /// The pathways.
    pub columns: Vec<Column>,
    /// By stage, wheel to field.
    pub stages: Vec<Row>,
    /// By term.
    pub terms: Vec<Row>,
    /// The nets.
    pub net: Option<Row>,
    /// Said where shown stages miss a shown net.
    pub notes: Vec<String>,
    /// Settings in which they are unlike: setting, meaning, what each says.
    pub unlike: Vec<(String, String, Vec<String>)>,
    /// Pathways that can be chosen: id, name, chosen.
    pub choices: Vec<(String, String, bool)>,
    /// Address of the tables as CSV.
    pub csv: String,
    /// Why there is no comparison yet.
    pub ask: Option<String>,
}

/// One pathway of a comparison.
#[derive(Clone, Debug, PartialEq)]
pub struct Column {
    /// Name.
    pub name: String,
    /// Address.
    pub href: String,
    /// The answer.
    pub verdict: Verdict,
    /// The ladder as SVG.
    pub ladder: Markup,
    /// Demonstration data.
    pub example: bool,
    /// True for the first, which the others are compared with.
    pub base: bool,
    /// Why its figures cannot be compared with those of the first, where they cannot: then no difference is printed.
    pub apart: Option<String>,
}

impl Column {
    /// What is to be said below the answer beside the required savings, in one line.
    pub fn words(&self) -> String {
        let mut out: Vec<String> = Vec::new();
        out.extend(self.verdict.basis.clone());
        if self.base {
            out.push("base of the comparison".to_owned());
        }
        if self.example {
            out.push("example".to_owned());
        }
        out.join("; ")
    }
}

/// One row of a table: figures and differences against the first.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// Its name.
    pub name: String,
    /// Figures with the difference; the first has none.
    pub cells: Vec<(Option<f64>, Option<f64>)>,
}

impl Row {
    /// True where neither the first pathway nor this one has such a stage: there is no difference to tell.
    pub fn nowhere(&self, figure: &Option<f64>) -> bool {
        figure.is_none() && self.cells.first().is_none_or(|(first, _)| first.is_none())
    }
}

/// A pathway that is to be compared.
pub struct Picked<'a> {
    /// Id.
    pub id: &'a str,
    /// Document.
    pub pathway: &'a Pathway,
    /// Assessment.
    pub found: &'a Assessment,
}

impl Compare {
    /// The page before two are chosen.
    pub fn ask(ask: impl Into<String>, choices: Vec<(String, String, bool)>) -> Compare {
        Compare {
            frame: Frame::new("Compare", Section::Compare, "POST /api/v1/compare").wide(),
            title: "Compare".to_owned(),
            lead: String::new(),
            columns: Vec::new(),
            stages: Vec::new(),
            terms: Vec::new(),
            net: None,
            notes: Vec::new(),
            unlike: Vec::new(),
            choices,
            csv: String::new(),
            ask: Some(ask.into()),
        }
    }

    /// The comparison of those picked.
    pub fn of(picked: &[Picked], book: &Book, choices: Vec<(String, String, bool)>) -> Compare {
        let rules = |one: &Picked| book.rule_sets.get(&one.found.rule_set);
        let subjects: Vec<Subject> = picked
            .iter()
            .filter_map(|one| {
                Some(Subject {
                    pathway: one.pathway,
                    assessment: one.found,
                    rules: rules(one)?,
                })
            })
            .collect();
        let comparison = compare(&subjects);
        let base = picked.first().and_then(rules);
        let apart: Vec<Option<String>> = picked
            .iter()
            .map(|one| base?.comparable_with(rules(one)?).err())
            .collect();
        let differs = |index: usize| index > 0 && apart.get(index).is_some_and(Option::is_none);
        let names: Vec<&str> = picked.iter().map(|one| one.pathway.name.as_str()).collect();
        let ids: Vec<String> = picked.iter().map(|one| links::segment(one.id)).collect();
        let all = picked.iter().all(|one| one.pathway.example);
        let frame = Frame::new(names.join(" beside "), Section::Compare, "POST /api/v1/compare").wide();
        let frame = if all {
            frame.example(true)
        } else {
            frame.partly_example(comparison.example)
        };
        let stages: Vec<Row> = comparison
            .stages
            .iter()
            .rev()
            .map(|row| stage_row(row, &differs))
            .collect();
        let notes = comparison.pathways.iter().enumerate().filter_map(|(index, one)| {
            let parts: Vec<f64> = stages.iter().filter_map(|row| row.cells.get(index)?.0).collect();
            rounding_note(
                &format!("The stages of {}", one.name),
                &parts,
                one.net_g_co2e_per_mj,
                2,
            )
        });
        Compare {
            frame,
            title: format!("{} pathways", count_words(picked.len())),
            lead: match reasons(&apart) {
                reasons if reasons.is_empty() => lead(&comparison),
                reasons => format!("{reasons} They stand side by side without differences."),
            },
            columns: columns(picked, book, &comparison, &apart),
            notes: notes.collect(),
            terms: comparison
                .terms
                .iter()
                .map(|row| {
                    let (g, change) = (&row.g_co2e_per_mj, &row.difference_g_co2e_per_mj);
                    figures(row.term.name(), g, change, &differs)
                })
                .collect(),
            net: Some(figures(
                "Net",
                &comparison
                    .pathways
                    .iter()
                    .map(|one| one.net_g_co2e_per_mj)
                    .collect::<Vec<_>>(),
                &comparison
                    .pathways
                    .iter()
                    .map(|one| one.difference_g_co2e_per_mj)
                    .collect::<Vec<_>>(),
                &differs,
            )),
            unlike: comparison
                .unlike
                .iter()
                .map(|one| {
                    (
                        setting_words(&one.setting),
                        one.meaning.clone(),
                        one.values.clone(),
                    )
                })
                .collect(),
            stages,
            choices,
            csv: format!("/compare.csv?ids={}", ids.join(",")),
            ask: None,
        }
    }

    /// Stages and terms as one CSV.
    pub fn table(&self) -> Table {
        let mut table = Table {
            head: vec!["part".to_owned(), "name".to_owned()],
            rows: Vec::new(),
        };
        for column in &self.columns {
            table.head.push(format!("{}, g CO2e/MJ", column.name));
        }
        let parts = [("stage", &self.stages), ("term", &self.terms)];
        for (part, rows) in parts {
            for row in rows {
                let mut cells: Vec<Cell> = vec![part.into(), row.name.clone().into()];
                cells.extend(row.cells.iter().map(|(figure, _)| Cell::from(*figure)));
                table.rows.push(cells);
            }
        }
        table
    }
}

/// A setting as a page names it.
fn setting_words(setting: &str) -> String {
    match setting {
        "gwp_set" => "Gas weights".to_owned(),
        "comparator_g_co2e_per_mj" => "Baseline, g CO2e/MJ".to_owned(),
        "ethanol_lhv" => "Heating value of ethanol".to_owned(),
        "not_covered" => "Left out".to_owned(),
        other => super::card::spec::named(other),
    }
}

fn count_words(count: usize) -> &'static str {
    match count {
        2 => "Two",
        3 => "Three",
        4 => "Four",
        5 => "Five",
        _ => "Six",
    }
}

/// Why some cannot be compared with the first, each reason once.
fn reasons(apart: &[Option<String>]) -> String {
    let mut out: Vec<&str> = apart.iter().flatten().map(String::as_str).collect();
    out.dedup();
    out.join(" ")
}

fn stage_row(row: &StageRow, differs: &impl Fn(usize) -> bool) -> Row {
    let mut names: Vec<&str> = Vec::new();
    for name in row.names.iter().flatten() {
        if !names.contains(&name.as_str()) {
            names.push(name);
        }
    }
    let name = if names.is_empty() {
        row.key.clone()
    } else {
        names.join(", ")
    };
    let differences = row.difference_g_co2e_per_mj.iter().enumerate();
    Row {
        name,
        cells: differences
            .map(|(i, d)| {
                (
                    row.g_co2e_per_mj.get(i).copied().flatten(),
                    differs(i).then_some(*d),
                )
            })
            .collect(),
    }
}

fn figures(name: &str, all: &[f64], differences: &[f64], differs: &impl Fn(usize) -> bool) -> Row {
    let cells = all.iter().zip(differences).enumerate();
    Row {
        name: name.to_owned(),
        cells: cells
            .map(|(i, (g, d))| (Some(*g), differs(i).then_some(*d)))
            .collect(),
    }
}

fn lead(comparison: &Comparison) -> String {
    let lowest = comparison
        .pathways
        .iter()
        .min_by(|a, b| a.net_g_co2e_per_mj.total_cmp(&b.net_g_co2e_per_mj));
    let (Some(first), Some(lowest)) = (comparison.pathways.first(), lowest) else {
        return String::new();
    };
    let (one, difference) = if lowest == first {
        let highest = comparison
            .pathways
            .iter()
            .max_by(|a, b| a.net_g_co2e_per_mj.total_cmp(&b.net_g_co2e_per_mj));
        let highest = highest.unwrap_or(first);
        (
            highest,
            format!(
                "{} is lowest, {} g CO2e/MJ below {}.",
                first.name,
                show(highest.difference_g_co2e_per_mj.abs(), 1),
                highest.name
            ),
        )
    } else {
        (
            lowest,
            format!(
                "{} is lowest, {} g CO2e/MJ below {}.",
                lowest.name,
                show(lowest.difference_g_co2e_per_mj.abs(), 1),
                first.name
            ),
        )
    };
    let place = comparison.pathways.iter().position(|other| other == one);
    let makes = place.and_then(|place| cause(comparison, place, one.difference_g_co2e_per_mj));
    format!("{difference}{}", makes.unwrap_or_default())
}

/// The term that makes most of a difference, in words. Terms and not stages: every pathway has every term, while a stage
/// that stands on one side only would be told as a cause.
fn cause(comparison: &Comparison, place: usize, difference: f64) -> Option<String> {
    let parts = comparison
        .terms
        .iter()
        .filter_map(|row| Some((row.term, *row.difference_g_co2e_per_mj.get(place)?)));
    let (term, part) = parts
        .filter(|(_, part)| part * difference > 0.0)
        .max_by(|(_, a), (_, b)| a.abs().total_cmp(&b.abs()))?;
    Some(format!(
        " {} ({}) makes {} of it: {} g {}.",
        filters::capital(term.words()),
        term.name(),
        if part.abs() * 2.0 > difference.abs() {
            "most"
        } else {
            "the largest part"
        },
        show(part.abs(), 1),
        if part < 0.0 { "less" } else { "more" }
    ))
}

fn columns(picked: &[Picked], book: &Book, comparison: &Comparison, apart: &[Option<String>]) -> Vec<Column> {
    // Chains that differ get each other's rungs, empty, so that the same stage stands at the same height.
    let alike = comparison
        .stages
        .iter()
        .all(|row| row.g_co2e_per_mj.iter().all(Option::is_some));
    let ladders: Vec<Ladder> = picked
        .iter()
        .enumerate()
        .map(|(index, one)| {
            let weights = super::weights(book, &one.found.gwp_set);
            let rules = book.rule_sets.get(&one.found.rule_set);
            let ladder = super::ladder::model(one.found, &weights, rules, &format!("c{index}"));
            if alike {
                ladder
            } else {
                super::ladder::aligned(ladder, one.found, &comparison.stages)
            }
        })
        .collect();
    let scale = ladder::common_scale(&ladders);
    picked
        .iter()
        .zip(ladders)
        .enumerate()
        .map(|(index, (one, ladder))| Column {
            name: one.pathway.name.clone(),
            href: links::pathway(one.id),
            verdict: Verdict::of(one.found, book.rule_sets.get(&one.found.rule_set)),
            ladder: Markup(ladder::draw(&Ladder { scale, ..ladder }, Form::Narrow).unwrap_or_default()),
            example: one.pathway.example,
            base: index == 0,
            apart: apart.get(index).cloned().flatten(),
        })
        .collect()
}

/// The ids that an address names, each once, at most so many as fit side by side; and whether it named more.
pub fn ids(query: &str) -> (Vec<String>, bool) {
    let mut out: Vec<String> = Vec::new();
    for (name, value) in query.split('&').filter_map(|pair| pair.split_once('=')) {
        if name == "ids" || name == "id" {
            let parts = value
                .split(',')
                .flat_map(|part| part.split("%2C"))
                .flat_map(|part| part.split("%2c"));
            for id in parts.filter(|id| !id.is_empty()) {
                if !out.iter().any(|known| known == id) {
                    out.push(id.to_owned());
                }
            }
        }
    }
    let more = out.len() > MOST;
    out.truncate(MOST);
    (out, more)
}
