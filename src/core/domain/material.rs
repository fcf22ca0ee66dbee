//! Materials that flow between stages: heating value, carbon, composition, each with its source.

use super::citation::Cited;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// Whether a library carbon content may stand in where a pathway gives none.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum CarbonClass {
    /// From a chemical formula: serves without a finding.
    Exact,
    /// A typical figure: serves with finding K-07.
    Typical,
    /// Serves with finding K-07 for a flow under a quarter of the carbon only.
    Side,
    /// Never serves: ask for the laboratory figure.
    Measure,
}

/// A built-in material.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Material {
    /// Id as used in documents.
    pub id: String,
    /// Name on pages.
    pub name: String,
    /// Crop, co-product, residue, intermediate, fuel, pure substance, energy, ...
    pub kind: String,
    /// Whether its carbon content may be a default, and why.
    pub carbon_class: CarbonClass,
    /// The reason for the class.
    pub carbon_reason: String,
    /// Published figures by property: `lhv_dry` (MJ/kg dry), `carbon_percent_dry`, `moisture_percent`, ...
    pub properties: BTreeMap<String, Property>,
}

/// One published figure of a material, with its limits.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Property {
    /// The figure and its source.
    #[serde(flatten)]
    pub figure: Cited,
    /// Lower limit, if one is given.
    pub lower: Option<f64>,
    /// Upper limit, if one is given.
    pub upper: Option<f64>,
    /// Dry matter, as is, ash-free, ...
    pub basis: String,
}

impl Material {
    /// Lower heating value of the dry matter, MJ/kg.
    pub fn lhv_dry(&self) -> Option<f64> {
        self.value("lhv_dry")
    }

    /// Carbon in the dry matter, mass %.
    pub fn carbon_percent_dry(&self) -> Option<f64> {
        self.value("carbon_percent_dry")
    }

    /// Any figure by property name.
    pub fn value(&self, property: &str) -> Option<f64> {
        self.properties.get(property).map(|p| p.figure.value)
    }
}
