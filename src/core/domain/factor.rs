//! Factors: emissions per unit of something, as a source publishes them, and the editions that hold them.

use super::citation::Citation;
use super::gases::PublishedGases;
use crate::core::units::Unit;
use jiff::civil::Date;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// What one unit of a factor counts. It decides which amounts the factor takes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Counts {
    /// Fuel energy on the net (lower) heating value: bare or `net` energy; `gross` with its ratio; never heat or power.
    Fuel,
    /// Electrical energy: bare or `power` energy.
    Power,
    /// Useful heat: bare or `heat` energy.
    Heat,
    /// Anything else, by the dimension of its unit (kg, kg N, m3, t km, ha, ...).
    Other,
}

/// A vehicle of group transport: for the `haul` model only.
#[derive(Clone, Debug, PartialEq)]
pub struct HaulVehicle {
    /// Fuel energy per tonne-kilometre, MJ/(t km), at the published load.
    pub energy_mj_per_tkm: f64,
    /// Exhaust CH4 and N2O, kg per t km.
    pub exhaust: PublishedGases,
    /// Full id of the fuel factor that the row is driven by; none for a pipeline or electric rail.
    pub fuel: Option<String>,
    /// Electric: the grid must be named.
    pub electric: bool,
}

/// An engine row for the `combustion` model: kg per TJ of fuel (lower heating value).
#[derive(Clone, Debug, PartialEq)]
pub struct EngineVehicle {
    /// Methane, kg/TJ; none when not published.
    pub ch4_kg_per_tj: Option<f64>,
    /// Nitrous oxide, kg/TJ; none when not published.
    pub n2o_kg_per_tj: Option<f64>,
}

/// How a row may be used.
#[derive(Clone, Debug, PartialEq)]
pub enum Use {
    /// Multiplies an amount.
    Amount,
    /// Drives a `haul`.
    Haul(HaulVehicle),
    /// Drives a `combustion`.
    Engine(EngineVehicle),
    /// Prints no emission, only a heating value or a density.
    HeatingValueOnly,
    /// Refused as a factor, with the reason.
    Refused(String),
}

/// One row of an edition.
#[derive(Clone, Debug, PartialEq)]
pub struct Factor {
    /// Full id, `edition/row`.
    pub id: String,
    /// Name on pages.
    pub name: String,
    /// Fertiliser, seed, fuel, transport, electricity, ...
    pub group: String,
    /// What one unit counts.
    pub counts: Counts,
    /// The unit as printed, such as `kg N` or `MJ fuel (LHV)`.
    pub per: String,
    /// The same, parsed.
    pub unit: Unit,
    /// kg of each gas per unit; blanks are not published.
    pub gases: PublishedGases,
    /// How the row may be used.
    pub usage: Use,
    /// CO2e that the source prints beside the gases, g per unit: shown, never used.
    pub printed_co2e_g: Option<f64>,
    /// The figures as printed (digits kept), by column, for pages.
    pub printed: BTreeMap<String, String>,
    /// Lower heating value of the dry substance, MJ/kg, as printed.
    pub lhv_mj_per_kg: Option<f64>,
    /// Density, kg/m3, as printed.
    pub density_kg_per_m3: Option<f64>,
    /// What a reader should know before using it.
    pub note: Option<String>,
    /// Source and status.
    pub citation: Citation,
}

impl Factor {
    /// The row's id inside its edition.
    pub fn row(&self) -> &str {
        self.id.split_once('/').map_or(self.id.as_str(), |(_, row)| row)
    }
}

/// Where a published pathway's process heat comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum ProcessHeat {
    /// An ordinary boiler.
    Boiler,
    /// Combined heat and power, for all of the process heat (footnote of Directive (EU) 2018/2001 Annex V Parts A and D).
    Chp,
}

/// The disaggregated default (and typical) values of one published pathway, g CO2e/MJ.
#[derive(Clone, Debug, PartialEq)]
pub struct PathwayDefault {
    /// Full id, `edition/row`.
    pub id: String,
    /// Feedstock as printed.
    pub feedstock: String,
    /// Materials whose pathways may use the row.
    pub feedstock_materials: Vec<String>,
    /// Description of the pathway.
    pub description: String,
    /// Process fuel as printed.
    pub process_fuel: String,
    /// Where the process heat comes from; none where the row does not say.
    pub process_heat: Option<ProcessHeat>,
    /// Whether the stillage is digested to biogas; none where the row does not say.
    pub stillage_digested: Option<bool>,
    /// Default values: the only ones that serve compliance.
    pub default: TermValues,
    /// Typical values: shown, never usable for compliance.
    pub typical: TermValues,
    /// Source and status.
    pub citation: Citation,
}

/// Values of one published pathway by term, g CO2e/MJ, and the printed saving, %.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, ToSchema)]
#[schema(as = DefaultValues)]
pub struct TermValues {
    /// Cultivation.
    pub e_ec: f64,
    /// Of it, soil N2O; null where it is not printed apart.
    pub e_ec_soil_n2o: Option<f64>,
    /// Processing.
    pub e_p: f64,
    /// Transport and distribution.
    pub e_td: f64,
    /// Of it, the final fuel alone; null where it is not printed apart.
    pub e_td_final_fuel: Option<f64>,
    /// Printed total.
    pub total: f64,
    /// Printed saving, whole %.
    pub saving_percent: f64,
}

/// A published, read-only collection of factors, or a company's own.
#[derive(Clone, Debug, PartialEq)]
pub struct Edition {
    /// Id, the part of a factor's id before `/`.
    pub id: String,
    /// Title on pages.
    pub title: String,
    /// The document it was taken from.
    pub citation: Citation,
    /// What a reader should know.
    pub note: Option<String>,
    /// First day it may be used; none where the document fixes none.
    pub valid_from: Option<Date>,
    /// Last day it may be used; none where it is open.
    pub valid_to: Option<Date>,
    /// Where the days stand.
    pub validity_source: Option<Citation>,
    /// Rows by id inside the edition.
    pub factors: BTreeMap<String, Factor>,
    /// Other ids that rows answer to: alias to the row's id inside the edition.
    pub aliases: BTreeMap<String, String>,
    /// Supply and burning of a fuel apart, by the row's id inside the edition.
    pub fuel_splits: BTreeMap<String, FuelSplit>,
    /// Published pathways by id inside the edition.
    pub pathways: BTreeMap<String, PathwayDefault>,
}

impl Edition {
    /// A row by its id inside the edition, or by an alias of it.
    pub fn factor(&self, row: &str) -> Option<&Factor> {
        let row = self.aliases.get(row).map_or(row, String::as_str);
        self.factors.get(row)
    }
}

/// How a fuel's printed figure divides into supply and burning, g CO2e/MJ: shown beside the factor, never used.
#[derive(Clone, Debug, PartialEq)]
pub struct FuelSplit {
    /// Both together, as the source of the split prints it.
    pub total_g_per_mj: f64,
    /// Extraction, refining, transport.
    pub upstream_g_per_mj: f64,
    /// Burning.
    pub combustion_g_per_mj: f64,
    /// What a reader should know.
    pub note: Option<String>,
    /// Source and status.
    pub citation: Citation,
}
