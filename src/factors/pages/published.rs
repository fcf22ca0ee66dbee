//! Pages of materials and rule sets, and the list of figures from memory: every figure with its source.

use crate::core::domain::{CarbonClass, Cited, GwpSet, Material, RuleSet, Status};
use crate::core::units::rounding::show_all;
use crate::web::filters::{self, capital};
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;

/// A status in a sentence.
pub(super) fn status_words(status: Status) -> &'static str {
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
    /// The list it stands in: address, words.
    pub trail: Option<(&'static str, &'static str)>,
    /// Address of its versions, for a rule set.
    pub versions: Option<String>,
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
            CarbonClass::Exact => "from its chemical formula: may stand in",
            CarbonClass::Typical => "a typical figure: may stand in, with a finding",
            CarbonClass::Side => "may stand in for a small flow only",
            CarbonClass::Measure => "never stands in: ask for the laboratory figure",
        };
        let rows = material.properties.iter().map(|(name, property)| {
            let limits = match (property.lower, property.upper) {
                (Some(low), Some(high)) => format!(", {} to {}", show_all(low), show_all(high)),
                _ => String::new(),
            };
            cited(name, &property.figure, format!("{}{limits}", property.basis))
        });
        Published {
            frame: Frame::new(
                &material.name,
                Section::Factors,
                format!("GET /api/v1/materials/{}", links::segment(&material.id)),
            ),
            trail: None,
            versions: None,
            name: material.name.clone(),
            lead: format!("Built-in material {}, {}.", material.id, material.kind),
            facts: vec![
                ("Its carbon content".to_owned(), class.to_owned()),
                ("Because".to_owned(), material.carbon_reason.clone()),
            ],
            rows: rows.collect(),
            notes: Vec::new(),
        }
    }

    /// The page of a rule set.
    pub fn rule_set(rules: &RuleSet, weights: Option<&GwpSet>) -> Published {
        let methods = rules
            .allocation_allowed
            .iter()
            .map(|method| method.name())
            .collect::<Vec<_>>()
            .join(", ");
        let terms = rules
            .terms_not_counted
            .iter()
            .map(|term| term.name())
            .collect::<Vec<_>>()
            .join(", ");
        let named = |field: &str| match field {
            "comparator" => rules.comparator_word.clone(),
            field => figure_words(field).to_owned(),
        };
        let figures = rules.figures().into_iter();
        let mut rows: Vec<CitedRow> = figures
            .filter_map(|(field, figure)| Some(cited(&named(field), figure?, String::new())))
            .collect();
        for threshold in &rules.thresholds {
            let day = |day: Option<jiff::civil::Date>, open: &str| {
                day.map_or_else(|| open.to_owned(), filters::short_day)
            };
            rows.push(CitedRow {
                name: "Required saving".to_owned(),
                figure: format!("{} %", show_all(threshold.percent)),
                basis: format!(
                    "plants started from {} to {}{}",
                    day(threshold.started_from, "any day"),
                    day(threshold.started_to, "today and on"),
                    match (threshold.applies_from, threshold.applies_to) {
                        (None, None) => String::new(),
                        (from, to) => format!(
                            ", fuel from {} to {}",
                            day(from, "any day"),
                            day(to, "today and on")
                        ),
                    }
                ),
                source: threshold.source.clone(),
                status: status_words(threshold.status),
                memory: threshold.status == Status::Memory,
                note: String::new(),
            });
        }
        for (symbol, figure) in &rules.limits {
            rows.push(cited(
                limit_words(symbol),
                figure,
                "limit of a deduction".to_owned(),
            ));
        }
        if let Some(weights) = weights {
            let gases = [
                ("fossil CH4", weights.ch4_fossil),
                ("biogenic CH4", weights.ch4_biogenic),
                ("N2O", weights.n2o),
            ];
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
            frame: Frame::new(
                &rules.title,
                Section::Factors,
                format!("GET /api/v1/rule-sets/{}", links::segment(&rules.id)),
            ),
            trail: Some(("/rule-sets", "Rule sets")),
            versions: Some(format!(
                "{}/versions",
                links::rule_set(rules.id.split('@').next().unwrap_or_default())
            )),
            name: rules.title.clone(),
            lead: format!(
                "Rule set {}, version {}: {}; {}.",
                rules.id,
                rules.version,
                rules.source,
                status_words(rules.status)
            ),
            facts: vec![
                (
                    "Burden is shared by".to_owned(),
                    format!("{}; a stage may ask for {methods}", rules.allocation.name()),
                ),
                (
                    "Heat and power share by".to_owned(),
                    rules.allocation_heat_and_power.name().to_owned(),
                ),
                (
                    "Terms that are zero by the rule".to_owned(),
                    if terms.is_empty() {
                        "none".to_owned()
                    } else {
                        terms
                    },
                ),
                ("Standing".to_owned(), rules.standing.words().to_owned()),
                (
                    "Water in ethanol".to_owned(),
                    rules.ethanol_water.words().to_owned(),
                ),
                (
                    "The crop's own CO2".to_owned(),
                    rules.biogenic_co2.words().to_owned(),
                ),
                (
                    "Standard factors".to_owned(),
                    or_none(rules.standard_factors.as_ref()),
                ),
                (
                    "Default values".to_owned(),
                    or_none(rules.default_values.as_ref()),
                ),
                ("Soil N2O by".to_owned(), rules.soil_n2o_method.clone()),
                (
                    "Residues whatever a file says".to_owned(),
                    match &rules.residues_source {
                        Some(source) => format!("{}: {source}", rules.residues_by_law.join(", ")),
                        None => "none".to_owned(),
                    },
                ),
            ],
            rows,
            notes: rules.notes.clone(),
        }
    }
}

fn or_none(id: Option<&String>) -> String {
    id.map_or_else(|| "none".to_owned(), String::clone)
}

/// What a figure of a rule set is called on its page.
fn figure_words(field: &str) -> &str {
    match field {
        "petrol" => "petrol itself",
        "ethanol_lhv" => "lower heating value of pure ethanol",
        "consignment_lhv_mass" => "ethanol on consignment records, by mass",
        "consignment_lhv_volume" => "ethanol on consignment records, by volume",
        "co2_per_carbon" => "CO2 per carbon",
        "water_evaporation" => "heat of evaporation of water",
        "ambient" => "temperature of the surroundings",
        "building_heat_carnot" => "Carnot factor of heat for buildings",
        "land_use_years" => "years of land-use change",
        "data_months" => "months of data that an actual value asks for",
        other => other,
    }
}

/// What a limit of deductions is called on the page of its rule set.
fn limit_words(symbol: &str) -> &str {
    match symbol {
        "land_use_since" => "land converted before this year counts no change",
        "degraded_land_bonus" => "bonus for restored degraded land",
        "degraded_land_years" => "longest the bonus may be used",
        "soil_carbon_cap" => "cap on a soil-carbon claim",
        "soil_carbon_cap_biochar" => "cap on a soil-carbon claim with biochar",
        "soil_carbon_practice_years" => "years of the practice before a claim",
        "soil_carbon_commitment_years" => "shortest commitment to the practice",
        "soil_carbon_ban_years" => "years without a claim after a broken commitment",
        "replacement_last_year" => "last year in which replacing fossil CO2 counts",
        other => other,
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
        Memory {
            frame: Frame::bare("Figures from memory", Section::Factors),
            figures,
        }
    }
}
