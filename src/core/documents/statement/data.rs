//! The published data that a statement rests on, as the file carries them: enough to work every figure out again without
//! any other source, and each with its source, so that it can be held against the publication.

use crate::core::domain::{CarbonClass, Gas, ProcessHeat, RuleSet, Status};
use jiff::civil::Date;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// Everything published (or of the organisation's own) that the figures rest on.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Data {
    /// The rule set, in full.
    pub rule_set: RuleSet,
    /// The gas weights.
    pub gwp_set: GwpSetUsed,
    /// Settings of the checks by name, where they are not the standard ones.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<Object>)]
    pub check_settings: Option<serde_json::Map<String, serde_json::Value>>,
    /// Editions that rows below were taken from.
    pub editions: Vec<EditionUsed>,
    /// Factors, by id.
    pub factors: Vec<FactorUsed>,
    /// Published pathways with default and typical values, by id.
    pub default_values: Vec<DefaultUsed>,
    /// Materials, by id.
    pub materials: Vec<MaterialUsed>,
    /// Constants of models and limits of the rule set, by table and symbol.
    pub constants: Vec<ConstantUsed>,
    /// Rows of crop residues, by edition and crop.
    pub residues: Vec<ResidueUsed>,
}

/// A set of gas weights.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct GwpSetUsed {
    /// Id.
    pub id: String,
    /// What it is called.
    pub title: String,
    /// Weight of fossil methane.
    pub ch4_fossil: f64,
    /// Weight of methane of biological origin.
    pub ch4_biogenic: f64,
    /// Weight of nitrous oxide.
    pub n2o: f64,
    /// Document, table and point.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
    /// What a reader should know.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// An edition.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct EditionUsed {
    /// Id.
    pub id: String,
    /// Title.
    pub title: String,
    /// The document it was taken from.
    pub source: String,
    /// Whether it was read.
    pub status: Status,
    /// First day it may be used; absent where the document fixes none.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub valid_from: Option<Date>,
    /// Last day it may be used; absent where it is open.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub valid_to: Option<Date>,
    /// Hash of all its rows, written as here.
    pub hash: String,
}

/// A factor.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct FactorUsed {
    /// `edition/row`.
    pub id: String,
    /// Other ids that the pathway names the row by.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub also: Vec<String>,
    /// True for a row that no figure rests on: checks compare with it.
    #[serde(default, skip_serializing_if = "std::ops::Not::not")]
    pub for_comparison: bool,
    /// Name.
    pub name: String,
    /// Group inside the edition.
    pub group: String,
    /// What one unit counts.
    pub counts: CountsUsed,
    /// The unit as printed.
    pub per: String,
    /// The unit as the arithmetic takes it.
    pub unit: String,
    /// kg of each gas per unit; a gas that is absent is not published, which is not the same as zero.
    pub gases: BTreeMap<Gas, f64>,
    /// How the row may be used.
    pub usage: UsageUsed,
    /// CO2e that the source prints beside the gases, g per unit: shown, never used.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub printed_co2e_g: Option<f64>,
    /// Lower heating value, MJ/kg, as printed.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub lhv_mj_per_kg: Option<f64>,
    /// Density, kg/m3, as printed.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub density_kg_per_m3: Option<f64>,
    /// What a reader should know.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    /// Document, table and point.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
}

/// What one unit of a factor counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum CountsUsed {
    /// Fuel energy on the net heating value.
    Fuel,
    /// Electrical energy.
    Power,
    /// Useful heat.
    Heat,
    /// Anything else.
    Other,
}

/// How a factor may be used.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum UsageUsed {
    /// Multiplies an amount.
    Amount,
    /// Drives a haul.
    Haul {
        /// Fuel energy, MJ/(t km).
        energy_mj_per_tkm: f64,
        /// Exhaust gases as published, kg per t km.
        exhaust: BTreeMap<Gas, f64>,
        /// The fuel it is driven by.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        fuel: Option<String>,
        /// True if the grid must be named.
        electric: bool,
    },
    /// Drives a combustion.
    Engine {
        /// Methane, kg/TJ.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        ch4_kg_per_tj: Option<f64>,
        /// Nitrous oxide, kg/TJ.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        n2o_kg_per_tj: Option<f64>,
    },
    /// Prints only a heating value or a density.
    HeatingValueOnly,
    /// Refused.
    Refused {
        /// Why.
        reason: String,
    },
}

/// A published pathway with its values.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct DefaultUsed {
    /// `edition/row`.
    pub id: String,
    /// True for a row that no figure rests on: checks compare with it.
    #[serde(default, skip_serializing_if = "std::ops::Not::not")]
    pub for_comparison: bool,
    /// Feedstock as printed.
    pub feedstock: String,
    /// Materials whose pathways may use the row.
    pub feedstock_materials: Vec<String>,
    /// Description.
    pub description: String,
    /// Process fuel as printed.
    pub process_fuel: String,
    /// Where the process heat comes from, where the row says.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub process_heat: Option<ProcessHeat>,
    /// Whether the stillage is digested, where the row says.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub stillage_digested: Option<bool>,
    /// Default values: the only ones that serve compliance.
    pub default: ValuesUsed,
    /// Typical values: for comparison only.
    pub typical: ValuesUsed,
    /// Document, table and point.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
}

/// Values by term, g CO2e/MJ, and the printed saving, %.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ValuesUsed {
    /// Cultivation.
    pub e_ec: f64,
    /// Of it, soil N2O.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub e_ec_soil_n2o: Option<f64>,
    /// Processing.
    pub e_p: f64,
    /// Transport and distribution.
    pub e_td: f64,
    /// Of it, the final fuel alone.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub e_td_final_fuel: Option<f64>,
    /// Printed total.
    pub total: f64,
    /// Printed saving, %.
    pub saving_percent: f64,
}

/// A material.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct MaterialUsed {
    /// Id.
    pub id: String,
    /// Name.
    pub name: String,
    /// What it is.
    pub kind: String,
    /// Whether its carbon content may be a default.
    pub carbon_class: CarbonClass,
    /// Why.
    pub carbon_reason: String,
    /// Published figures by property.
    pub properties: BTreeMap<String, PropertyUsed>,
}

/// A figure of a material.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct PropertyUsed {
    /// The figure, in `unit`.
    pub value: f64,
    /// Unit.
    pub unit: String,
    /// Lower limit.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub lower: Option<f64>,
    /// Upper limit.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub upper: Option<f64>,
    /// Dry matter, as is, ...
    pub basis: String,
    /// Document, table and point.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
    /// What a reader should know.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A constant of a model, or a limit of the rule set.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ConstantUsed {
    /// `soils/` and the edition, `land`, or `limits/` and the rule set.
    pub table: String,
    /// Symbol.
    pub symbol: String,
    /// The figure, in `unit`.
    pub value: f64,
    /// Unit.
    pub unit: String,
    /// Document, table and point.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
    /// What a reader should know.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A row of crop residues.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ResidueUsed {
    /// The edition.
    pub edition: String,
    /// Crop as documents name it.
    pub crop: String,
    /// Crop as printed.
    pub printed: String,
    /// Figures by parameter.
    pub figures: BTreeMap<String, f64>,
    /// Document, table and point.
    pub source: String,
    /// Whether it was read there.
    pub status: Status,
}
