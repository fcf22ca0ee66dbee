//! The sheet of factors: gas weights, constants of the rule set, and every factor used, with its source.

use super::look::{Digits, Part};
use super::page::{Layout, Page, cell};
use super::plan::{Plan, count};
use super::rows::Scale;
use crate::core::domain::{Book, Cited, Gas, GasVector, PublishedGases, Status};
use crate::core::engine::Resolved;
use crate::core::engine::resolved::DefaultTerm;
use crate::core::models::factors::Priced;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet.
pub const NAME: &str = "Factors";
const FIRST: u32 = 4;
const SIZE: u16 = 3;
const GASES: u16 = 4;
const LHV: u16 = 11;
const DENSITY: u16 = 12;
const SOURCE: u16 = 13;

/// A constant that formulas point at.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Constant {
    /// Heating value of pure ethanol, MJ/kg.
    EthanolLhv,
    /// Heat of evaporation of water, MJ/kg.
    WaterEvaporation,
    /// Temperature of the surroundings, K.
    Ambient,
    /// The fossil baseline, g CO2e/MJ.
    Comparator,
}

const CONSTANTS: [Constant; 4] = [
    Constant::EthanolLhv,
    Constant::WaterEvaporation,
    Constant::Ambient,
    Constant::Comparator,
];

/// The rows of the sheet.
pub struct Factors {
    materials: Vec<(String, f64, String)>,
    entries: Vec<Entry>,
}

/// A factor of the sheet.
struct Entry {
    id: String,
    name: String,
    per: String,
    size: Option<f64>,
    gases: PublishedGases,
    lhv: Option<f64>,
    density: Option<f64>,
    value: Option<f64>,
    source: String,
    status: &'static str,
    worked_out: bool,
}

impl Factors {
    /// The rows that every workbook has: constants, and heating values of the materials that share by one.
    pub fn new(resolved: &Resolved) -> Factors {
        let mut materials: Vec<(String, f64, String)> = Vec::new();
        for product in resolved.stages.iter().flat_map(|stage| &stage.products) {
            let id = product.flow.material.as_str();
            if materials.iter().any(|(known, ..)| known == id) {
                continue;
            }
            if let Some((lhv, source)) = resolved.materials.lhv_dry(id) {
                materials.push((id.to_owned(), lhv, source));
            }
        }
        Factors {
            materials,
            entries: Vec::new(),
        }
    }

    /// The index of a factor; it is added where it is new.
    pub fn priced(&mut self, priced: &Priced, book: &Book) -> usize {
        let own = priced.status == Status::Own;
        let (name, edition) = match book.factor(&priced.id) {
            Some(factor) if !own => {
                let edition = factor
                    .id
                    .split_once('/')
                    .and_then(|(id, _)| book.editions.get(id));
                (factor.name.clone(), edition.map_or("", |edition| &edition.title))
            }
            _ => (String::new(), ""),
        };
        let source = match edition {
            "" => priced.source.clone(),
            title => format!("{}; edition: {title}", priced.source),
        };
        self.add(Entry {
            id: priced.id.clone(),
            name,
            per: priced.per.clone(),
            size: Some(priced.unit.factor),
            gases: priced.gases,
            lhv: priced.lhv_mj_per_kg,
            density: priced.density_kg_per_m3,
            value: None,
            source,
            status: priced.status.word(),
            worked_out: false,
        })
    }

    /// The index of a model's gases per unit of what it is in proportion to.
    pub fn scaled(&mut self, name: String, by: Scale, gases: GasVector) -> usize {
        let mut published = PublishedGases::default();
        for (gas, kg) in gases.entries().filter(|(_, kg)| *kg != 0.0) {
            published.set(gas, Some(kg));
        }
        self.add(Entry {
            id: "model".to_owned(),
            name,
            per: match by {
                Scale::Intakes => "t carried",
                Scale::Output => "kg pure ethanol",
            }
            .to_owned(),
            size: Some(match by {
                Scale::Intakes => 1000.0,
                Scale::Output => 1.0,
            }),
            gases: published,
            lhv: None,
            density: None,
            value: None,
            source: "worked out by the model; its steps and their sources stand on Workings".to_owned(),
            status: Status::Calculated.word(),
            worked_out: true,
        })
    }

    /// The index of a published default value.
    pub fn default(&mut self, default: &DefaultTerm) -> usize {
        self.add(Entry {
            id: default.row.clone(),
            name: format!("published default value of {}", default.key),
            per: "g CO2e/MJ".to_owned(),
            size: None,
            gases: PublishedGases::default(),
            lhv: None,
            density: None,
            value: Some(default.g_per_mj),
            source: default.source.clone(),
            status: "",
            worked_out: false,
        })
    }

    fn add(&mut self, entry: Entry) -> usize {
        let same = |known: &Entry| {
            known.id == entry.id
                && known.name == entry.name
                && known.per == entry.per
                && known.gases == entry.gases
                && known.source == entry.source
        };
        self.entries.iter().position(same).unwrap_or_else(|| {
            self.entries.push(entry);
            self.entries.len() - 1
        })
    }

    /// True if a row of an edition is used.
    pub fn uses(&self, edition: &str) -> bool {
        let of = |entry: &Entry| entry.id.split_once('/').is_some_and(|(id, _)| id == edition);
        self.entries.iter().any(of)
    }

    /// Row of a factor.
    pub fn row(&self, index: usize) -> u32 {
        FIRST + 1 + count(CONSTANTS.len() + self.materials.len() + index)
    }

    /// The short name of a factor, for the cell that links to it.
    pub fn short(&self, index: usize) -> &str {
        self.entries
            .get(index)
            .map_or("", |entry| match entry.id.as_str() {
                "model" => &entry.name,
                id => id,
            })
    }

    /// The cell of a factor's unit size, in base units.
    pub fn size(&self, index: usize) -> String {
        self.at(index, SIZE)
    }

    /// The cell of a factor's gas.
    pub fn gas(&self, index: usize, gas: Gas) -> String {
        self.at(index, gas_column(GASES, gas))
    }

    /// The cell of a factor's heating value, MJ/kg.
    pub fn lhv(&self, index: usize) -> String {
        self.at(index, LHV)
    }

    /// The cell of a factor's density, kg/m3.
    pub fn density(&self, index: usize) -> String {
        self.at(index, DENSITY)
    }

    /// A factor's heating value, MJ/kg; zero where it prints none.
    pub fn heating_value(&self, index: usize) -> f64 {
        self.entries.get(index).and_then(|entry| entry.lhv).unwrap_or(0.0)
    }

    /// A factor's density, kg/m3; zero where it prints none.
    pub fn kg_per_m3(&self, index: usize) -> f64 {
        self.entries
            .get(index)
            .and_then(|entry| entry.density)
            .unwrap_or(0.0)
    }

    fn at(&self, index: usize, column: u16) -> String {
        format!("{NAME}!{}", cell(self.row(index), column))
    }

    /// The cell of a material's heating value, MJ/kg dry.
    pub fn material(&self, id: &str) -> Option<String> {
        let index = self.materials.iter().position(|(known, ..)| known == id)?;
        let row = FIRST + 1 + count(CONSTANTS.len() + index);
        Some(format!("{NAME}!{}", cell(row, SIZE)))
    }
}

/// The column of a gas where the gases begin at a column.
pub fn gas_column(first: u16, gas: Gas) -> u16 {
    (first..)
        .zip(Gas::ALL)
        .find(|(_, other)| *other == gas)
        .map_or(first, |(column, _)| column)
}

/// The cells of the gas weights, in the order of the gases.
pub fn weights() -> String {
    super::page::span(NAME, (FIRST, GASES), (FIRST, GASES + 6))
}

/// The cell of a constant.
pub fn constant(constant: Constant) -> String {
    let index = CONSTANTS.iter().position(|known| *known == constant).unwrap_or(0);
    format!("{NAME}!{}", cell(FIRST + 1 + count(index), SIZE))
}

/// Writes the sheet.
pub fn write(mut page: Page, plan: &Plan) -> Result<(), XlsxError> {
    let mut columns = vec![
        ("Factor", 34.0),
        ("Name", 34.0),
        ("Per, or unit", 15.0),
        ("Size of the unit in base units, or the figure", 15.0),
    ];
    let gases: Vec<String> = Gas::ALL
        .iter()
        .map(|gas| format!("{} kg per unit", gas.words()))
        .collect();
    columns.extend(gases.iter().map(|head| (head.as_str(), 12.0)));
    columns.extend([
        ("Heating value MJ/kg", 10.0),
        ("Density kg/m3", 10.0),
        ("Source", 70.0),
        ("Status", 10.0),
    ]);
    page.lay_out(
        "Factors, gas weights and constants",
        &Layout {
            columns: &columns,
            head: FIRST - 1,
            fixed: 1,
            wide: true,
        },
    )?;
    page.text(
        1,
        0,
        "kg of each gas per unit, as published. An empty cell is not published and adds nothing. Base units: kg, m, s, J. \
         Status memory: nobody has read the figure at its source.",
        Part::Text,
    )?;
    let gwp = plan.resolved.gwp;
    page.text(FIRST, 0, &gwp.id, Part::Text)?;
    page.text(FIRST, 1, &format!("Gas weights: {}", gwp.title), Part::Text)?;
    page.text(FIRST, 2, "kg CO2e per kg", Part::Text)?;
    for (column, weight) in (GASES..).zip(gwp.weights()) {
        page.number(FIRST, column, weight, Part::Published, Digits::All)?;
    }
    sourced(&mut page, FIRST, &gwp.citation.source, gwp.citation.status.word())?;
    let rules = plan.resolved.rules;
    for (row, constant) in (FIRST + 1..).zip(CONSTANTS) {
        let (words, cited): (&str, &Cited) = match constant {
            Constant::EthanolLhv => ("Heating value of pure ethanol", &rules.ethanol_lhv),
            Constant::WaterEvaporation => ("Heat of evaporation of water", &rules.water_evaporation),
            Constant::Ambient => ("Temperature of the surroundings", &rules.ambient),
            Constant::Comparator => ("Fossil baseline", &rules.comparator),
        };
        page.text(row, 0, &rules.id, Part::Text)?;
        page.text(row, 1, words, Part::Text)?;
        page.text(row, 2, &cited.unit, Part::Text)?;
        page.number(row, SIZE, cited.value, Part::Published, Digits::All)?;
        sourced(&mut page, row, &cited.source, cited.status.word())?;
    }
    let factors = &plan.factors;
    let first = FIRST + 1 + count(CONSTANTS.len());
    for (row, (id, lhv, source)) in (first..).zip(&factors.materials) {
        page.text(row, 0, id, Part::Text)?;
        let name = format!("Heating value of {}, dry", plan.resolved.materials.name(id));
        page.text(row, 1, &name, Part::Text)?;
        page.text(row, 2, "MJ/kg dry", Part::Text)?;
        page.number(row, SIZE, *lhv, Part::Published, Digits::All)?;
        sourced(&mut page, row, source, "")?;
    }
    for (index, entry) in factors.entries.iter().enumerate() {
        write_entry(&mut page, factors.row(index), entry)?;
    }
    Ok(())
}

fn write_entry(page: &mut Page, row: u32, entry: &Entry) -> Result<(), XlsxError> {
    let part = if entry.worked_out {
        Part::Value
    } else {
        Part::Published
    };
    page.text(row, 0, &entry.id, Part::Text)?;
    page.text(row, 1, &entry.name, Part::Text)?;
    page.text(row, 2, &entry.per, Part::Text)?;
    if let Some(figure) = entry.size.or(entry.value) {
        page.number(row, SIZE, figure, part, Digits::All)?;
    }
    for gas in Gas::ALL {
        if let Some(kg) = entry.gases.get(gas) {
            page.number(row, gas_column(GASES, gas), kg, part, Digits::All)?;
        }
    }
    if let Some(lhv) = entry.lhv {
        page.number(row, LHV, lhv, part, Digits::All)?;
    }
    if let Some(density) = entry.density {
        page.number(row, DENSITY, density, part, Digits::All)?;
    }
    sourced(page, row, &entry.source, entry.status)
}

fn sourced(page: &mut Page, row: u32, source: &str, status: &str) -> Result<(), XlsxError> {
    page.text(row, SOURCE, source, Part::Text)?;
    page.text(row, SOURCE + 1, status, Part::Text)
}
