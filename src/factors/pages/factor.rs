//! The page of one factor, or of one published pathway: figures as printed, as counted, and worked out.

use super::list::{grouped, weights};
use super::published::status_words;
use crate::core::domain::factor::{TermValues, Use};
use crate::core::domain::{Book, Citation, Counts, Factor, Gas, GwpSet, Status};
use crate::core::units::rounding::{round_half_away, show_all};
use crate::web::filters::{self, capital};
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;

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
        // A published pathway is no factor: as data it stands in its edition.
        let data = if book.factor(id).is_some() {
            format!(
                "GET /api/v1/factors/{}/{}",
                links::segment(edition),
                links::segment(row)
            )
        } else {
            format!("GET /api/v1/editions/{}", links::segment(edition))
        };
        let mut shown = match (book.factor(id), book.pathway_default(id)) {
            (Some(factor), _) => ShowFactor::of_factor(factor, weights(book), data),
            (None, Some(default)) => ShowFactor {
                facts: vec![
                    ("Feedstock".to_owned(), default.feedstock.clone()),
                    ("Process fuel".to_owned(), default.process_fuel.clone()),
                    (
                        "Serves".to_owned(),
                        format!(
                            "defaults of pathways of {}",
                            default.feedstock_materials.join(", ")
                        ),
                    ),
                ],
                figures: terms(&default.default, "default")
                    .into_iter()
                    .chain(terms(&default.typical, "typical, never for compliance"))
                    .collect(),
                ..ShowFactor::begin(
                    id,
                    &default.description,
                    &default.citation,
                    format!("GET /api/v1/editions/{}", links::segment(edition)),
                )
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
            Use::Haul(vehicle) => format!(
                "drives a haul: {} MJ per t km",
                show_all(vehicle.energy_mj_per_tkm)
            ),
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
            facts.push((
                "Lower heating value, dry".to_owned(),
                format!("{} MJ/kg", show_all(lhv)),
            ));
        }
        if let Some(density) = factor.density_kg_per_m3 {
            facts.push(("Density".to_owned(), format!("{} kg/m3", show_all(density))));
        }
        let mut figures: Vec<(String, String, String)> = factor
            .printed
            .iter()
            .filter(|(_, text)| !text.is_empty())
            .map(|(column, text)| {
                (
                    capital(&column.replace('_', " ")),
                    grouped(text),
                    "as printed".to_owned(),
                )
            })
            .collect();
        for gas in Gas::ALL {
            if let Some(kg) = factor.gases.get(gas) {
                figures.push((
                    capital(gas.words()),
                    show_all(kg),
                    format!("kg per {}, as counted", factor.per),
                ));
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
            Some(if weight == 1.0 {
                trimmed(g)
            } else {
                format!("{} × {}", trimmed(g), show_all(weight))
            })
        })
        .collect();
    if parts.is_empty() {
        return None;
    }
    let sum = trimmed(factor.gases.vector().co2e(weights) * 1000.0);
    let printed = match factor.printed_co2e_g {
        Some(printed) => format!("printed {}", show_all(printed)),
        None => "the source prints no sum".to_owned(),
    };
    let sum = if parts.len() == 1 && parts.first() == Some(&sum) {
        sum
    } else {
        format!("{} = {sum}", parts.join(" + "))
    };
    Some(format!("{sum} g CO2e per {}; {printed}", factor.per))
}

/// Grams with the digits they have: kilograms times a thousand leave noise behind the ninth decimal.
fn trimmed(g: f64) -> String {
    show_all(round_half_away(g, 9))
}

fn terms(values: &TermValues, what: &str) -> Vec<(String, String, String)> {
    [
        ("e_ec", Some(values.e_ec)),
        ("of it soil N2O", values.e_ec_soil_n2o),
        ("e_p", Some(values.e_p)),
        ("e_td", Some(values.e_td)),
        ("of it the final fuel", values.e_td_final_fuel),
        ("total", Some(values.total)),
        ("saving, %", Some(values.saving_percent)),
    ]
    .into_iter()
    .map(|(name, value)| {
        let shown = value.map_or_else(|| "not printed apart".to_owned(), show_all);
        (name.to_owned(), shown, what.to_owned())
    })
    .collect()
}
