//! Published default values beside own figures: term by term, every way to put them together, and why a row fits or not.

use super::verdict::percent_words;
use super::{Fault, Head, links};
use crate::core::documents::Pathway;
use crate::core::domain::Book;
use crate::core::levers::defaults::{Answer, Combination, DefaultsTable, Route};
use crate::core::units::rounding::{decimals_against, show};
use crate::web::csv::{Cell, Table};
use crate::web::filters::{self, capital};
use crate::web::frame::{Frame, Section};
use askama::Template;

/// The page of defaults beside actuals.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "defaults.html")]
pub struct ShowDefaults {
    /// Round the page.
    pub frame: Frame,
    /// Which pathway, which revision.
    pub head: Head,
    /// Its name.
    pub name: String,
    /// The best combination in a sentence.
    pub lead: String,
    /// A better one that hinges on what cannot be told, in a sentence.
    pub hinging: Option<String>,
    /// Published pathways for this feedstock: their short names, as columns.
    pub columns: Vec<ColumnHead>,
    /// Term by term.
    pub terms: Vec<TermRow>,
    /// Combinations that can be chosen, lawful ones first.
    pub open: Vec<Choice>,
    /// Combinations that are not lawful.
    pub closed: Vec<Choice>,
    /// Published pathways for this feedstock, judged.
    pub rows: Vec<RowView>,
    /// Published pathways of other feedstocks.
    pub others: Vec<RowView>,
    /// What no document can tell.
    pub cannot_be_told: Vec<String>,
    /// What a reader should know.
    pub notes: Vec<String>,
    /// The law.
    pub source: String,
    /// Why the change, as typed.
    pub why: String,
    /// Why nothing was saved.
    pub faults: Vec<Fault>,
}

/// The head of a column: a published pathway.
#[derive(Clone, Debug, PartialEq)]
pub struct ColumnHead {
    /// Row without its edition.
    pub name: String,
    /// Its page.
    pub href: String,
}

/// One term, or a printed part of one.
#[derive(Clone, Debug, PartialEq)]
pub struct TermRow {
    /// Its symbol; empty for a part, whose words say what it is of.
    pub symbol: String,
    /// What it holds.
    pub words: String,
    /// What a reader should know of the own figure.
    pub note: String,
    /// Own figure, g CO2e/MJ.
    pub own: Option<f64>,
    /// Default value by column and whether it may serve.
    pub published: Vec<Option<(f64, &'static str)>>,
    /// Own figure less default.
    pub difference: Option<f64>,
}

/// A combination.
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// Its id.
    pub id: String,
    /// Id on the page.
    pub anchor: String,
    /// What it is.
    pub words: String,
    /// The way of Article 31(1).
    pub route: &'static str,
    /// g CO2e/MJ.
    pub net: Option<f64>,
    /// Saving, %, with the decimals that its verdict needs.
    pub saving: Option<String>,
    /// True where both are printed figures.
    pub printed: bool,
    /// Required savings: `meets` or `misses`, percentage.
    pub required: Vec<(&'static str, String)>,
    /// Whether it is lawful, in words.
    pub lawful: &'static str,
    /// Why not, or what it hinges on.
    pub reasons: Vec<String>,
    /// True for the best lawful one.
    pub best: bool,
    /// True if the document has it already.
    pub here: bool,
    /// True if it is ticked.
    pub chosen: bool,
}

/// A published pathway, judged.
#[derive(Clone, Debug, PartialEq)]
pub struct RowView {
    /// Full id.
    pub id: String,
    /// Its page.
    pub href: String,
    /// Description.
    pub words: String,
    /// Whether its e_ec and e_td may serve.
    pub feedstock: &'static str,
    /// Whether its e_p may serve too.
    pub process: &'static str,
    /// Why.
    pub reasons: Vec<String>,
    /// Printed total of the defaults, g CO2e/MJ.
    pub total: f64,
    /// Printed default saving, %.
    pub saving: f64,
    /// Printed typical total and saving.
    pub typical: (f64, f64),
}

/// An answer in words.
fn told(answer: Answer) -> &'static str {
    match answer {
        Answer::Yes => "fits",
        Answer::CannotBeTold => "cannot be told",
        Answer::No => "does not fit",
    }
}

fn lawful(answer: Answer) -> &'static str {
    match answer {
        Answer::Yes => "lawful as far as the document tells",
        Answer::CannotBeTold => "hinges on what cannot be told here",
        Answer::No => "not lawful",
    }
}

fn route(route: Route) -> &'static str {
    match route {
        Route::WholeDefault => "Article 31(1)(a)",
        Route::AllActual => "Article 31(1)(b)",
        Route::Mixed => "Article 31(1)(c)",
    }
}

impl ShowDefaults {
    /// The page of a table.
    pub fn of(head: Head, pathway: &Pathway, table: &DefaultsTable, book: &Book) -> ShowDefaults {
        let law = book.rule_sets.get(&table.rule_set);
        // The articles are those of one directive: other rule sets are told without them.
        let articles = table.source == crate::core::levers::defaults::SOURCE;
        let frame = Frame::new(
            format!("Default values, {}", pathway.name),
            Section::Pathways,
            format!("GET /api/v1/pathways/{}/defaults", links::segment(&head.id)),
        )
        .example(pathway.example);
        let fitting: Vec<&str> = table
            .rows
            .iter()
            .filter(|row| row.feedstock_fits != Answer::No)
            .map(|row| row.id.as_str())
            .collect();
        let choices = table.combinations.iter().enumerate().map(|(index, one)| {
            let mut choice = Choice::of(index, one, table, pathway);
            if !articles {
                choice.route = "";
            }
            (one.lawful, choice)
        });
        let (open, closed): (Vec<_>, Vec<_>) = choices.partition(|(answer, _)| *answer != Answer::No);
        let bare = |list: Vec<(Answer, Choice)>| -> Vec<Choice> {
            list.into_iter().map(|(_, choice)| choice).collect()
        };
        let rows = table
            .rows
            .iter()
            .map(|row| (row.feedstock_fits, RowView::of(row)));
        let (rows, others): (Vec<_>, Vec<_>) = rows.partition(|(answer, _)| *answer != Answer::No);
        let bare_rows =
            |list: Vec<(Answer, RowView)>| -> Vec<RowView> { list.into_iter().map(|(_, row)| row).collect() };
        let sentence = |id: &Option<String>, begin: &str| {
            let one = table
                .combinations
                .iter()
                .find(|one| Some(&one.id) == id.as_ref())?;
            let net = one.net_g_co2e_per_mj?;
            let mut out = format!("{begin}{}: {} g CO2e/MJ", one.words, show(net, 2));
            if let Some(saving) = saving(one) {
                out.push_str(&format!(", {saving} % saved"));
            }
            for required in &one.thresholds {
                let word = if required.met { "meets" } else { "misses" };
                out.push_str(&format!(", {word} {} %", percent_words(required.percent)));
            }
            Some(format!("{out}."))
        };
        ShowDefaults {
            frame,
            name: pathway.name.clone(),
            lead: sentence(&table.best, "Best as far as the document tells: ").unwrap_or_else(|| {
                format!(
                    "No combination of default values and own figures is lawful as far as the document tells under {}.",
                    law.map_or(table.rule_set.as_str(), |rules| rules.title.as_str())
                )
            }),
            hinging: sentence(
                &table.best_if_confirmed,
                "Better, if what cannot be told here is confirmed: ",
            ),
            columns: fitting
                .iter()
                .map(|id| ColumnHead {
                    name: short(id).to_owned(),
                    href: links::factor(id),
                })
                .collect(),
            terms: table
                .terms
                .iter()
                .map(|row| TermRow {
                    symbol: match row.part_of {
                        Some(_) => String::new(),
                        None => row.term.clone(),
                    },
                    words: row.words.clone(),
                    note: row.actual_note.clone(),
                    own: row.actual_g_co2e_per_mj,
                    published: fitting
                        .iter()
                        .map(|id| {
                            let value = row.published.iter().find(|value| value.row == *id)?;
                            Some((value.default_g_co2e_per_mj, told(value.may_serve)))
                        })
                        .collect(),
                    difference: row.difference_g_co2e_per_mj,
                })
                .collect(),
            open: bare(open),
            closed: bare(closed),
            rows: bare_rows(rows),
            others: bare_rows(others),
            cannot_be_told: table.cannot_be_told.clone(),
            notes: table.notes.clone(),
            source: table.source.clone(),
            why: String::new(),
            faults: Vec::new(),
            head,
        }
    }

    /// The same page with another combination ticked.
    #[must_use]
    pub fn ticking(mut self, id: &str) -> ShowDefaults {
        if self.open.iter().any(|one| one.id == id) {
            for one in &mut self.open {
                one.chosen = one.id == id;
            }
        }
        self
    }

    /// The combinations as CSV.
    pub fn table(&self) -> Table {
        let mut table = Table::new(&[
            "combination",
            "what_it_is",
            "lawful",
            "net_g_co2e_per_mj",
            "saving_percent",
            "printed",
            "reasons",
        ]);
        for one in self.open.iter().chain(&self.closed) {
            table.rows.push(vec![
                one.id.clone().into(),
                one.words.clone().into(),
                one.lawful.into(),
                one.net.into(),
                one.saving.clone().map_or(Cell::Empty, Cell::from),
                if one.printed { "yes" } else { "no" }.into(),
                one.reasons.join(" ").into(),
            ]);
        }
        table
    }
}

fn short(id: &str) -> &str {
    id.split_once('/').map_or(id, |(_, row)| row)
}

/// The saving with so many decimals that its verdict cannot look wrong; printed ones as printed.
fn saving(one: &Combination) -> Option<String> {
    let saving = one.saving_percent?;
    if one.as_printed {
        return Some(percent_words(saving));
    }
    let decimals = one
        .thresholds
        .iter()
        .map(|t| decimals_against(saving, t.percent, 1));
    Some(show(saving, decimals.max().unwrap_or(1)))
}

impl Choice {
    fn of(index: usize, one: &Combination, table: &DefaultsTable, pathway: &Pathway) -> Choice {
        let best = table.best.as_ref() == Some(&one.id);
        Choice {
            id: one.id.clone(),
            anchor: format!("c{index}"),
            words: capital(&one.words),
            route: route(one.route),
            net: one.net_g_co2e_per_mj,
            saving: saving(one),
            printed: one.as_printed,
            required: one
                .thresholds
                .iter()
                .map(|t| (if t.met { "meets" } else { "misses" }, percent_words(t.percent)))
                .collect(),
            lawful: lawful(one.lawful),
            reasons: one.reasons.clone(),
            best,
            here: one.defaults == pathway.defaults,
            chosen: best,
        }
    }
}

impl RowView {
    fn of(row: &crate::core::levers::defaults::PublishedRow) -> RowView {
        RowView {
            id: row.id.clone(),
            href: links::factor(&row.id),
            words: row.description.clone(),
            feedstock: told(row.feedstock_fits),
            process: told(row.process_fits),
            reasons: row.reasons.clone(),
            total: row.default_total_g_co2e_per_mj,
            saving: row.default_saving_percent,
            typical: (row.typical_total_g_co2e_per_mj, row.typical_saving_percent),
        }
    }
}
