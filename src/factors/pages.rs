//! Pages of published data: editions and their rows, materials, rule sets, and what nobody has read at its source.

use super::search;
use crate::app::App;
use crate::core::domain::factor::{TermValues, Use};
use crate::core::domain::{Book, Citation, Cited, Counts, Factor, Gas, GwpSet, Material, RuleSet, Status};
use crate::core::units::rounding::{show, show_all, significant};
use crate::web::Refusal;
use crate::web::answers::{csv, page};
use crate::web::csv::{Cell, Table};
use crate::web::extract::{Path, Query};
use crate::web::filters::{self, capital};
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;
use axum::Router;
use axum::extract::State;
use axum::response::Response;
use axum::routing::get;
use serde::Deserialize;
use std::collections::BTreeSet;

/// The routes of this file. The page of one factor stands with the pathways, which know who uses it.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/factors", get(factors))
        .route("/factors.csv", get(factors_csv))
        .route("/factors/memory", get(memory))
        .route("/materials/{id}", get(material))
        .route("/rule-sets/{id}", get(rule_set))
}

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
        let groups: BTreeSet<String> = search(book, edition, None, None).map(|factor| factor.group.clone()).collect();
        let mut query = Vec::new();
        for (name, value) in [("search", &asked.q), ("group", &asked.group)] {
            if !value.is_empty() {
                query.push(format!("{name}={}", links::segment(value)));
            }
        }
        let query = if query.is_empty() { String::new() } else { format!("?{}", query.join("&")) };
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
            rows: hits.iter().take(MOST).map(|factor| FactorRow::of(factor, weights)).collect(),
            defaults: defaults(book, &asked),
            groups: groups.into_iter().collect(),
            weights: weights.map_or_else(String::new, weight_words),
            materials: book.materials.values().map(|one| (links::material(&one.id), one.name.clone(), one.kind.clone())).collect(),
            rule_sets: book.rule_sets.values().map(|one| (links::rule_set(&one.id), one.title.clone(), one.source.clone())).collect(),
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
    let all = book.editions.values().filter(|one| asked.edition.is_empty() || one.id == asked.edition).flat_map(|one| one.pathways.values());
    all.filter(|_| asked.group.is_empty())
        .map(|row| DefaultRow {
            id: row.id.clone(),
            href: links::factor(&row.id),
            words: format!("{}, {}", row.feedstock, row.process_fuel),
            total: row.default.total,
            saving: row.default.saving_percent,
        })
        .filter(|row| words.iter().all(|word| format!("{} {}", row.id, row.words).to_lowercase().contains(word)))
        .collect()
}

/// The weights that lists work CO2e out with: those of the first rule set.
fn weights(book: &Book) -> Option<&GwpSet> {
    let rules = book.rule_sets.values().next()?;
    book.gwp_sets.get(&rules.gwp_set)
}

fn weight_words(weights: &GwpSet) -> String {
    format!("CH4 {}, N2O {} ({})", show_all(weights.ch4_fossil), show_all(weights.n2o), weights.title)
}

impl FactorRow {
    fn of(factor: &Factor, weights: Option<&GwpSet>) -> FactorRow {
        let printed = |column: &str, gases: &[Gas]| match factor.printed.get(column) {
            Some(text) if !text.is_empty() => grouped(text),
            _ => {
                let found: Option<f64> = gases.iter().filter_map(|gas| factor.gases.get(*gas)).reduce(|a, b| a + b);
                found.map(|kg| significant(kg * 1000.0, 6, 9)).unwrap_or_default()
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
                .map(|weights| significant(factor.gases.vector().co2e(weights) * 1000.0, 5, 4))
                .unwrap_or_default(),
            printed: factor.printed_co2e_g.map(show_all).unwrap_or_default(),
            memory: factor.citation.status == Status::Memory,
        }
    }
}

/// Digits as printed, in groups of three from 1 000 on.
fn grouped(text: &str) -> String {
    match text.parse::<f64>() {
        Ok(figure) if !text.contains(['e', 'E']) => {
            let decimals = text.split_once('.').map_or(0, |(_, after)| after.len());
            show(figure, u8::try_from(decimals).unwrap_or(u8::MAX))
        }
        _ => text.to_owned(),
    }
}

/// The page of one factor, or of one published pathway.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "factor.html")]
pub struct ShowFactor {
    /// Round the page.
    pub frame: Frame,
    /// Full id.
    pub id: String,
    /// Name.
    pub name: String,
    /// Facts: name, value.
    pub facts: Vec<(String, String)>,
    /// Figures: name, as printed or published, unit.
    pub figures: Vec<(String, String, String)>,
    /// The sum in words: printed beside worked out.
    pub worked: Option<String>,
    /// What a reader should know.
    pub note: String,
    /// Where it comes from.
    pub source: String,
    /// How sure that is.
    pub status: &'static str,
    /// True if nobody has read it at its source.
    pub memory: bool,
    /// Who uses it.
    pub uses: Vec<UseRow>,
}

/// A place that names a factor.
#[derive(Clone, Debug, PartialEq)]
pub struct UseRow {
    /// Name of the pathway.
    pub pathway: String,
    /// Address of the pathway.
    pub href: String,
    /// Stage and input.
    pub place: String,
    /// Address of that place.
    pub at: String,
    /// Number of the revision.
    pub revision: i64,
}

impl ShowFactor {
    /// The page of a row, by its full id; none where there is no such row.
    pub fn of(book: &Book, id: &str, uses: Vec<UseRow>) -> Option<ShowFactor> {
        let (edition, row) = id.split_once('/')?;
        let data = format!("GET /api/v1/editions/{}/factors/{}", links::segment(edition), links::segment(row));
        let mut shown = match (book.factor(id), book.pathway_default(id)) {
            (Some(factor), _) => ShowFactor::of_factor(factor, weights(book), data),
            (None, Some(default)) => ShowFactor {
                facts: vec![
                    ("Feedstock".to_owned(), default.feedstock.clone()),
                    ("Process fuel".to_owned(), default.process_fuel.clone()),
                    ("Serves".to_owned(), format!("defaults of pathways of {}", default.feedstock_materials.join(", "))),
                ],
                figures: terms(&default.default, "default").into_iter().chain(terms(&default.typical, "typical, never for compliance")).collect(),
                ..ShowFactor::begin(id, &default.description, &default.citation, format!("GET /api/v1/editions/{}", links::segment(edition)))
            },
            (None, None) => return None,
        };
        shown.uses = uses;
        Some(shown)
    }

    fn begin(id: &str, name: &str, citation: &Citation, data: String) -> ShowFactor {
        ShowFactor {
            frame: Frame::new(format!("{}, {id}", capital(name)), Section::Factors, data),
            id: id.to_owned(),
            name: capital(name),
            facts: Vec::new(),
            figures: Vec::new(),
            worked: None,
            note: String::new(),
            source: citation.source.clone(),
            status: status_words(citation.status),
            memory: citation.status == Status::Memory,
            uses: Vec::new(),
        }
    }

    fn of_factor(factor: &Factor, weights: Option<&GwpSet>, data: String) -> ShowFactor {
        let counts = match factor.counts {
            Counts::Fuel => "fuel energy on the lower heating value; heat and power are refused",
            Counts::Power => "electrical energy; fuel and heat are refused",
            Counts::Heat => "useful heat; fuel and power are refused",
            Counts::Other => "the amount in its unit",
        };
        let usage = match &factor.usage {
            Use::Amount => "multiplies an amount".to_owned(),
            Use::Haul(vehicle) => format!("drives a haul: {} MJ per t km", show_all(vehicle.energy_mj_per_tkm)),
            Use::Engine(_) => "drives the combustion model".to_owned(),
            Use::HeatingValueOnly => "no emission is printed: serves by its heating value only".to_owned(),
            Use::Refused(why) => format!("refused as a factor: {why}"),
        };
        let mut facts = vec![
            ("Group".to_owned(), factor.group.clone()),
            ("Per".to_owned(), factor.per.clone()),
            ("Counts".to_owned(), counts.to_owned()),
            ("Use".to_owned(), usage),
        ];
        if let Some(lhv) = factor.lhv_mj_per_kg {
            facts.push(("Lower heating value, dry".to_owned(), format!("{} MJ/kg", show_all(lhv))));
        }
        if let Some(density) = factor.density_kg_per_m3 {
            facts.push(("Density".to_owned(), format!("{} kg/m3", show_all(density))));
        }
        let mut figures: Vec<(String, String, String)> = factor
            .printed
            .iter()
            .filter(|(_, text)| !text.is_empty())
            .map(|(column, text)| (capital(&column.replace('_', " ")), grouped(text), "as printed".to_owned()))
            .collect();
        for gas in Gas::ALL {
            if let Some(kg) = factor.gases.get(gas) {
                figures.push((capital(gas.words()), show_all(kg), format!("kg per {}, as counted", factor.per)));
            }
        }
        ShowFactor {
            facts,
            figures,
            worked: weights.and_then(|weights| worked(factor, weights)),
            note: factor.note.clone().unwrap_or_default(),
            ..ShowFactor::begin(&factor.id, &factor.name, &factor.citation, data)
        }
    }
}

fn worked(factor: &Factor, weights: &GwpSet) -> Option<String> {
    let names = weights.weights();
    let parts: Vec<String> = Gas::ALL
        .iter()
        .zip(names)
        .filter_map(|(gas, weight)| {
            let g = factor.gases.get(*gas).filter(|kg| *kg != 0.0 && weight != 0.0)? * 1000.0;
            Some(if weight == 1.0 { significant(g, 6, 9) } else { format!("{} × {}", significant(g, 6, 9), show_all(weight)) })
        })
        .collect();
    if parts.is_empty() {
        return None;
    }
    let sum = significant(factor.gases.vector().co2e(weights) * 1000.0, 6, 6);
    let printed = match factor.printed_co2e_g {
        Some(printed) => format!("printed {}", show_all(printed)),
        None => "the source prints no sum".to_owned(),
    };
    let sum = if parts.len() == 1 && parts.first() == Some(&sum) { sum } else { format!("{} = {sum}", parts.join(" + ")) };
    Some(format!("{sum} g CO2e per {}; {printed}", factor.per))
}

fn terms(values: &TermValues, what: &str) -> Vec<(String, String, String)> {
    [
        ("e_ec", values.e_ec),
        ("of it soil N2O", values.e_ec_soil_n2o),
        ("e_p", values.e_p),
        ("e_td", values.e_td),
        ("of it the final fuel", values.e_td_final_fuel),
        ("total", values.total),
        ("saving, %", values.saving_percent),
    ]
    .into_iter()
    .map(|(name, value)| (name.to_owned(), show_all(value), what.to_owned()))
    .collect()
}

/// A status in a sentence.
fn status_words(status: Status) -> &'static str {
    match status {
        Status::Read => "read at its source",
        Status::Memory => "from memory: nobody has read it at its source yet",
        Status::Calculated => "worked out from other figures",
        Status::Own => "given by who entered it",
    }
}

/// A published figure on a page.
#[derive(Clone, Debug, PartialEq)]
pub struct CitedRow {
    /// Its name.
    pub name: String,
    /// The figure with its unit.
    pub figure: String,
    /// Basis and limits.
    pub basis: String,
    /// Where it comes from.
    pub source: String,
    /// How sure that is.
    pub status: &'static str,
    /// True if nobody has read it at its source.
    pub memory: bool,
    /// What a reader should know.
    pub note: String,
}

fn cited(name: &str, figure: &Cited, basis: String) -> CitedRow {
    CitedRow {
        name: capital(&name.replace('_', " ")),
        figure: format!("{} {}", show_all(figure.value), figure.unit),
        basis,
        source: figure.source.clone(),
        status: status_words(figure.status),
        memory: figure.status == Status::Memory,
        note: figure.note.clone().unwrap_or_default(),
    }
}

/// The page of one material, or of one rule set: facts and figures with their sources.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "published.html")]
pub struct Published {
    /// Round the page.
    pub frame: Frame,
    /// Name.
    pub name: String,
    /// What it is, in a sentence.
    pub lead: String,
    /// Facts: name, value.
    pub facts: Vec<(String, String)>,
    /// Figures with their sources.
    pub rows: Vec<CitedRow>,
    /// What a reader should know.
    pub notes: Vec<String>,
}

impl Published {
    /// The page of a material.
    pub fn material(material: &Material) -> Published {
        let class = match material.carbon_class {
            crate::core::domain::CarbonClass::Exact => "from its chemical formula: may stand in",
            crate::core::domain::CarbonClass::Typical => "a typical figure: may stand in, with a finding",
            crate::core::domain::CarbonClass::Side => "may stand in for a small flow only",
            crate::core::domain::CarbonClass::Measure => "never stands in: ask for the laboratory figure",
        };
        let rows = material.properties.iter().map(|(name, property)| {
            let limits = match (property.lower, property.upper) {
                (Some(low), Some(high)) => format!(", {} to {}", show_all(low), show_all(high)),
                _ => String::new(),
            };
            cited(name, &property.figure, format!("{}{limits}", property.basis))
        });
        Published {
            frame: Frame::new(&material.name, Section::Factors, format!("GET /api/v1/materials/{}", links::segment(&material.id))),
            name: material.name.clone(),
            lead: format!("Built-in material {}, {}.", material.id, material.kind),
            facts: vec![("Its carbon content".to_owned(), class.to_owned()), ("Because".to_owned(), material.carbon_reason.clone())],
            rows: rows.collect(),
            notes: Vec::new(),
        }
    }

    /// The page of a rule set.
    pub fn rule_set(rules: &RuleSet, weights: Option<&GwpSet>) -> Published {
        let methods = rules.allocation_allowed.iter().map(|method| method.name()).collect::<Vec<_>>().join(", ");
        let terms = rules.terms_not_counted.iter().map(|term| term.name()).collect::<Vec<_>>().join(", ");
        let mut rows: Vec<CitedRow> = [
            (rules.comparator_word.as_str(), &rules.comparator),
            ("petrol itself", &rules.petrol),
            ("lower heating value of pure ethanol", &rules.ethanol_lhv),
            ("ethanol on consignment records, by mass", &rules.consignment_lhv_mass),
            ("ethanol on consignment records, by volume", &rules.consignment_lhv_volume),
            ("CO2 per carbon", &rules.co2_per_carbon),
            ("heat of evaporation of water", &rules.water_evaporation),
            ("temperature of the surroundings", &rules.ambient),
            ("Carnot factor of heat for buildings", &rules.building_heat_carnot),
            ("years of land-use change", &rules.land_use_years),
        ]
        .into_iter()
        .map(|(name, figure)| cited(name, figure, String::new()))
        .collect();
        for threshold in &rules.thresholds {
            let day = |day: Option<jiff::civil::Date>, open: &str| day.map_or_else(|| open.to_owned(), filters::short_day);
            rows.push(CitedRow {
                name: "Required saving".to_owned(),
                figure: format!("{} %", show_all(threshold.percent)),
                basis: format!("plants started from {} to {}", day(threshold.started_from, "any day"), day(threshold.started_to, "today and on")),
                source: threshold.source.clone(),
                status: status_words(threshold.status),
                memory: threshold.status == Status::Memory,
                note: String::new(),
            });
        }
        if let Some(weights) = weights {
            let gases = [("fossil CH4", weights.ch4_fossil), ("biogenic CH4", weights.ch4_biogenic), ("N2O", weights.n2o)];
            rows.extend(gases.into_iter().map(|(gas, weight)| CitedRow {
                name: format!("Weight of {gas} over 100 years"),
                figure: format!("{} kg CO2e/kg", show_all(weight)),
                basis: weights.title.clone(),
                source: weights.citation.source.clone(),
                status: status_words(weights.citation.status),
                memory: weights.citation.status == Status::Memory,
                note: weights.note.clone().unwrap_or_default(),
            }));
        }
        Published {
            frame: Frame::new(&rules.title, Section::Factors, format!("GET /api/v1/rule-sets/{}", links::segment(&rules.id))),
            name: rules.title.clone(),
            lead: format!("Rule set {}, version {}: {}; {}.", rules.id, rules.version, rules.source, status_words(rules.status)),
            facts: vec![
                ("Burden is shared by".to_owned(), format!("{}; a stage may ask for {methods}", rules.allocation.name())),
                ("Heat and power share by".to_owned(), rules.allocation_heat_and_power.name().to_owned()),
                ("Terms that are zero by the rule".to_owned(), if terms.is_empty() { "none".to_owned() } else { terms }),
                ("Standard factors".to_owned(), rules.standard_factors.clone()),
                ("Soil N2O by".to_owned(), rules.soil_n2o_method.clone()),
                ("Residues whatever a file says".to_owned(), format!("{}: {}", rules.residues_by_law.join(", "), rules.residues_source)),
            ],
            rows,
            notes: rules.notes.clone(),
        }
    }
}

/// The page of figures from memory.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "memory.html")]
pub struct Memory {
    /// Round the page.
    pub frame: Frame,
    /// The figures with their sources.
    pub figures: Vec<String>,
}

impl Memory {
    /// The list as the published data give it.
    pub fn of(figures: Vec<String>) -> Memory {
        Memory { frame: Frame::bare("Figures from memory", Section::Factors), figures }
    }
}

async fn factors(State(app): State<App>, Query(asked): Query<Asked>) -> Result<Response, Refusal> {
    page(&Factors::of(app.library, asked))
}

async fn factors_csv(State(app): State<App>, Query(asked): Query<Asked>) -> Response {
    csv("factors", &Factors::table(app.library, &asked))
}

async fn memory() -> Result<Response, Refusal> {
    page(&Memory::of(crate::library::figures_from_memory()))
}

async fn material(State(app): State<App>, Path(id): Path<String>) -> Result<Response, Refusal> {
    let material = app.library.materials.get(&id).ok_or_else(|| Refusal::not_here("material", &id))?;
    page(&Published::material(material))
}

async fn rule_set(State(app): State<App>, Path(id): Path<String>) -> Result<Response, Refusal> {
    let rules = app.library.rule_sets.get(&id).ok_or_else(|| Refusal::not_here("rule set", &id))?;
    page(&Published::rule_set(rules, app.library.gwp_sets.get(&rules.gwp_set)))
}
