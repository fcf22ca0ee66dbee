//! The page of factors: editions, search, rows with printed and worked-out sums.

use crate::core::domain::{Book, Factor, Gas, GwpSet, Status};
use crate::core::units::rounding::{round_half_away, show, show_all, significant};
use crate::factors::search;
use crate::web::csv::{Cell, Table};
use crate::web::filters::{self, capital};
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;
use serde::Deserialize;
use std::collections::BTreeSet;

/// The page of factors.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "factors.html")]
pub struct Factors {
    /// Round the page.
    pub frame: Frame,
    /// The editions: id, title, source, rows, chosen.
    pub editions: Vec<EditionRow>,
    /// What was asked.
    pub asked: Asked,
    /// Groups that can be asked for.
    pub groups: Vec<String>,
    /// The rows found, at most so many as fit a page.
    pub rows: Vec<FactorRow>,
    /// Published pathways with default values: id, address, feedstock, what it is.
    pub defaults: Vec<DefaultRow>,
    /// How many were found.
    pub found: usize,
    /// Weights used for the worked-out CO2e.
    pub weights: String,
    /// Materials: address, name, kind.
    pub materials: Vec<(String, String, String)>,
    /// Rule sets: address, title, source.
    pub rule_sets: Vec<(String, String, String)>,
}

/// An edition in the list.
#[derive(Clone, Debug, PartialEq)]
pub struct EditionRow {
    /// Id.
    pub id: String,
    /// Title.
    pub title: String,
    /// Source.
    pub source: String,
    /// How many rows.
    pub rows: usize,
    /// True if it is the one shown.
    pub here: bool,
}

/// What the list of factors is asked for.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(default)]
pub struct Asked {
    /// Id of an edition; empty for all.
    pub edition: String,
    /// Words.
    pub q: String,
    /// A group; empty for all.
    pub group: String,
}

/// One factor in the list.
#[derive(Clone, Debug, PartialEq)]
pub struct FactorRow {
    /// Full id.
    pub id: String,
    /// Address.
    pub href: String,
    /// Name.
    pub name: String,
    /// What one unit counts.
    pub per: String,
    /// CO2, CH4, N2O in g, as printed; empty where not published.
    pub gases: [String; 3],
    /// CO2e worked out, g.
    pub worked: String,
    /// CO2e as printed, g.
    pub printed: String,
    /// True if nobody has read it at its source.
    pub memory: bool,
}

/// A published pathway in the list.
#[derive(Clone, Debug, PartialEq)]
pub struct DefaultRow {
    /// Full id.
    pub id: String,
    /// Address.
    pub href: String,
    /// What it is.
    pub words: String,
    /// Default total, g CO2e/MJ.
    pub total: f64,
    /// Printed saving, %.
    pub saving: f64,
}

/// Most rows on a page.
const MOST: usize = 300;

impl Factors {
    /// The list as asked for.
    pub fn of(book: &Book, asked: Asked) -> Factors {
        let weights = weights(book);
        let edition = Some(asked.edition.as_str()).filter(|id| !id.is_empty());
        let group = Some(asked.group.as_str()).filter(|group| !group.is_empty());
        let hits: Vec<&Factor> = search(book, edition, Some(&asked.q), group).collect();
        let groups: BTreeSet<String> = search(book, edition, None, None)
            .map(|factor| factor.group.clone())
            .collect();
        let mut query = Vec::new();
        for (name, value) in [("search", &asked.q), ("group", &asked.group)] {
            if !value.is_empty() {
                query.push(format!("{name}={}", links::segment(value)));
            }
        }
        let query = if query.is_empty() {
            String::new()
        } else {
            format!("?{}", query.join("&"))
        };
        let data = match edition {
            Some(edition) => format!("GET /api/v1/editions/{}/factors{query}", links::segment(edition)),
            None => format!("GET /api/v1/factors{query}"),
        };
        Factors {
            frame: Frame::new("Factors", Section::Factors, data),
            editions: book
                .editions
                .values()
                .map(|one| EditionRow {
                    id: one.id.clone(),
                    title: one.title.clone(),
                    source: one.citation.source.clone(),
                    rows: one.factors.len() + one.pathways.len(),
                    here: one.id == asked.edition,
                })
                .collect(),
            found: hits.len(),
            rows: hits
                .iter()
                .take(MOST)
                .map(|factor| FactorRow::of(factor, weights))
                .collect(),
            defaults: defaults(book, &asked),
            groups: groups.into_iter().collect(),
            weights: weights.map_or_else(String::new, weight_words),
            materials: book
                .materials
                .values()
                .map(|one| (links::material(&one.id), one.name.clone(), one.kind.clone()))
                .collect(),
            rule_sets: book
                .offered_rule_sets()
                .into_iter()
                .map(|one| (links::rule_set(&one.id), one.title.clone(), one.source.clone()))
                .collect(),
            asked,
        }
    }

    /// The rows as CSV, figures as kg per unit in full.
    pub fn table(book: &Book, asked: &Asked) -> Table {
        let mut head = vec!["id", "name", "group", "per"];
        head.extend(Gas::ALL.iter().map(|gas| gas.name()));
        head.extend(["printed_co2e_g", "source", "status"]);
        let mut table = Table::new(&head);
        let edition = Some(asked.edition.as_str()).filter(|id| !id.is_empty());
        let group = Some(asked.group.as_str()).filter(|group| !group.is_empty());
        for factor in search(book, edition, Some(&asked.q), group) {
            let mut row: Vec<Cell> = vec![
                factor.id.clone().into(),
                factor.name.clone().into(),
                factor.group.clone().into(),
                factor.per.clone().into(),
            ];
            row.extend(Gas::ALL.iter().map(|gas| Cell::from(factor.gases.get(*gas))));
            row.push(factor.printed_co2e_g.into());
            row.push(factor.citation.source.clone().into());
            row.push(factor.citation.status.word().into());
            table.rows.push(row);
        }
        table
    }
}

fn defaults(book: &Book, asked: &Asked) -> Vec<DefaultRow> {
    let words: Vec<String> = asked.q.split_whitespace().map(str::to_lowercase).collect();
    let all = book
        .editions
        .values()
        .filter(|one| asked.edition.is_empty() || one.id == asked.edition)
        .flat_map(|one| one.pathways.values());
    all.filter(|_| asked.group.is_empty())
        .map(|row| DefaultRow {
            id: row.id.clone(),
            href: links::factor(&row.id),
            words: format!("{}, {}", row.feedstock, row.process_fuel),
            total: row.default.total,
            saving: row.default.saving_percent,
        })
        .filter(|row| {
            words
                .iter()
                .all(|word| format!("{} {}", row.id, row.words).to_lowercase().contains(word))
        })
        .collect()
}

/// The weights that lists work CO2e out with: those of the first rule set on offer.
pub(super) fn weights(book: &Book) -> Option<&GwpSet> {
    let rules = book.offered_rule_sets().into_iter().next()?;
    book.gwp_sets.get(&rules.gwp_set)
}

fn weight_words(weights: &GwpSet) -> String {
    format!("the weights of {}", weights.title)
}

impl FactorRow {
    fn of(factor: &Factor, weights: Option<&GwpSet>) -> FactorRow {
        let printed = |column: &str, gases: &[Gas]| match factor.printed.get(column) {
            Some(text) if !text.is_empty() => grouped(text),
            _ => {
                let found: Option<f64> = gases
                    .iter()
                    .filter_map(|gas| factor.gases.get(*gas))
                    .reduce(|a, b| a + b);
                found
                    .map(|kg| show_all(round_half_away(kg * 1000.0, 9)))
                    .unwrap_or_default()
            }
        };
        FactorRow {
            id: factor.id.clone(),
            href: links::factor(&factor.id),
            name: capital(&factor.name),
            per: factor.per.clone(),
            gases: [
                printed("co2_g", &[Gas::Co2Fossil, Gas::Co2Land]),
                printed("ch4_g", &[Gas::Ch4Fossil, Gas::Ch4Biogenic]),
                printed("n2o_g", &[Gas::N2o]),
            ],
            worked: weights
                .filter(|_| !factor.gases.is_blank())
                .map(|weights| sum_words(factor.gases.vector().co2e(weights) * 1000.0))
                .unwrap_or_default(),
            printed: factor.printed_co2e_g.map(show_all).unwrap_or_default(),
            memory: factor.citation.status == Status::Memory,
        }
    }
}

/// A worked-out sum: whole grams from a hundred on, four significant figures below.
fn sum_words(g: f64) -> String {
    if g.abs() >= 100.0 {
        show(g, 0)
    } else {
        significant(g, 4, 4)
    }
}

/// Digits as printed, in groups of three from 1 000 on.
pub(super) fn grouped(text: &str) -> String {
    match text.parse::<f64>() {
        Ok(figure) if !text.contains(['e', 'E']) => {
            let decimals = text.split_once('.').map_or(0, |(_, after)| after.len());
            show(figure, u8::try_from(decimals).unwrap_or(u8::MAX))
        }
        _ => text.to_owned(),
    }
}
