//! The page of rule sets: those in force first, and limits of other jurisdictions that none of them follows.

use super::published::status_words;
use crate::core::domain::rule_set::Standing;
use crate::core::domain::{Book, Status};
use crate::core::units::rounding::show_all;
use crate::library::Elsewhere;
use crate::web::csv::Table;
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;

/// The page of rule sets.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "rule_sets.html")]
pub struct RuleSets {
    /// Round the page.
    pub frame: Frame,
    /// The rule sets, in force first.
    pub rows: Vec<RuleRow>,
    /// Limits of other jurisdictions.
    pub elsewhere: Vec<LimitRow>,
}

/// One rule set.
#[derive(Clone, Debug, PartialEq)]
pub struct RuleRow {
    /// Address.
    pub href: String,
    /// Title.
    pub title: String,
    /// Id.
    pub id: String,
    /// Whether it may be relied on, in words.
    pub standing: &'static str,
    /// Class of the mark: empty for one in force.
    pub class: &'static str,
    /// What fuel is compared with: word and figure.
    pub comparator: String,
    /// Ethanol, MJ/kg.
    pub lhv: f64,
    /// Id of the gas weights.
    pub weights: String,
    /// The savings it asks for, least and most.
    pub savings: String,
    /// Where the crop's own CO2 stands.
    pub crop: &'static str,
}

/// A limit that no rule set follows.
#[derive(Clone, Debug, PartialEq)]
pub struct LimitRow {
    /// Whose law.
    pub jurisdiction: String,
    /// Law and place in it.
    pub law: String,
    /// Which fuels and plants.
    pub condition: String,
    /// The limit in words.
    pub limit: String,
    /// Days of plants and fuel, in words.
    pub days: String,
    /// Why no rule set follows it.
    pub why: String,
    /// Where it was read.
    pub source: String,
    /// How sure that is.
    pub status: &'static str,
    /// True if nobody has read it at its source.
    pub memory: bool,
}

impl RuleSets {
    /// The page.
    pub fn of(book: &Book, elsewhere: &[Elsewhere]) -> RuleSets {
        RuleSets {
            frame: Frame::new("Rule sets", Section::Factors, "GET /api/v1/rule-sets"),
            rows: book
                .offered_rule_sets()
                .into_iter()
                .map(|one| RuleRow {
                    href: links::rule_set(&one.id),
                    title: one.title.clone(),
                    id: one.id.clone(),
                    standing: one.standing.words(),
                    class: match one.standing {
                        Standing::InForce => "",
                        Standing::Own => "informs",
                        Standing::Unconfirmed => "warns",
                        Standing::Repealed => "blocks",
                    },
                    comparator: format!("{} {}", one.comparator_word, show_all(one.comparator.value)),
                    lhv: one.ethanol_lhv.value,
                    weights: one.gwp_set.clone(),
                    savings: savings(one.thresholds.iter().map(|threshold| threshold.percent)),
                    crop: one.biogenic_co2.words(),
                })
                .collect(),
            elsewhere: elsewhere.iter().map(LimitRow::of).collect(),
        }
    }

    /// The limits elsewhere as CSV.
    pub fn table(&self) -> Table {
        let mut table = Table::new(&[
            "jurisdiction",
            "law",
            "condition",
            "limit",
            "days",
            "why_no_rule_set",
            "source",
            "status",
        ]);
        for row in &self.elsewhere {
            table.rows.push(vec![
                row.jurisdiction.clone().into(),
                row.law.clone().into(),
                row.condition.clone().into(),
                row.limit.clone().into(),
                row.days.clone().into(),
                row.why.clone().into(),
                row.source.clone().into(),
                row.status.into(),
            ]);
        }
        table
    }
}

fn savings(percents: impl Iterator<Item = f64>) -> String {
    let mut all: Vec<f64> = percents.collect();
    all.sort_by(f64::total_cmp);
    match (all.first(), all.last()) {
        (Some(least), Some(most)) if least < most => format!("{} to {} %", show_all(*least), show_all(*most)),
        (Some(only), _) => format!("{} %", show_all(*only)),
        _ => "none asked".to_owned(),
    }
}

impl LimitRow {
    fn of(limit: &Elsewhere) -> LimitRow {
        let mut words = Vec::new();
        if let Some(percent) = limit.min_saving_percent {
            words.push(format!("at least {} % saved", show_all(percent)));
        }
        if let Some(reference) = limit.reference_g_per_mj {
            let basis = limit
                .heating_value
                .as_ref()
                .map_or_else(String::new, |basis| format!(" on the {basis} heating value"));
            words.push(format!("reference {} g CO2e/MJ{basis}", show_all(reference)));
        }
        if let Some(percent) = limit.at_most_percent_of_reference {
            words.push(format!("at most {} % of the reference", show_all(percent)));
        }
        if let Some(baseline) = limit.baseline_g_per_mj {
            words.push(format!("baseline {} g CO2e/MJ", show_all(baseline)));
        }
        let span = |what: &str, from: Option<jiff::civil::Date>, to: Option<jiff::civil::Date>| {
            let day = |day: jiff::civil::Date| filters::short_day(day);
            match (from, to) {
                (None, None) => None,
                (Some(from), None) => Some(format!("{what} from {}", day(from))),
                (None, Some(to)) => Some(format!("{what} until {}", day(to))),
                (Some(from), Some(to)) => Some(format!("{what} {} to {}", day(from), day(to))),
            }
        };
        let days: Vec<String> = [
            span("construction", limit.started_from, limit.started_to),
            span("fuel", limit.applies_from, limit.applies_to),
        ]
        .into_iter()
        .flatten()
        .collect();
        LimitRow {
            jurisdiction: limit.jurisdiction.clone(),
            law: format!("{}, {}", limit.instrument, limit.provision),
            condition: limit.condition.clone(),
            limit: if words.is_empty() {
                "none set as a figure".to_owned()
            } else {
                words.join("; ")
            },
            days: days.join("; "),
            why: limit.why_no_rule_set.clone(),
            source: limit.citation.source.clone(),
            status: status_words(limit.citation.status),
            memory: limit.citation.status == Status::Memory,
        }
    }
}
