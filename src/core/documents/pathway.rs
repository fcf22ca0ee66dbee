//! The pathway document (`wheelwort.pathway/1`): one way of making and delivering a fuel ethanol, from field to wheel.

use super::amount::Amount;
use super::input::{FactorRef, Input, OneOrMany};
use super::records::{Audit, EarlierPeriod, Meter};
use crate::core::domain::StageKind;
use crate::core::domain::rule_set::AllocationMethod;
use jiff::civil::Date;
use serde::Serialize;
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// The format name that every pathway document carries.
pub const FORMAT: &str = "wheelwort.pathway/1";

/// A pathway.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Pathway {
    /// Always `wheelwort.pathway/1`.
    pub format: String,
    /// Name for people.
    pub name: String,
    /// True for demonstration data: shown on every page.
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    pub example: bool,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    /// Material id of the feedstock.
    pub feedstock: String,
    /// The days the figures cover.
    pub period: Period,
    /// Id of the calculation rule.
    pub rule_set: String,
    /// Day of the plant's first physical production.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub plant_started: Option<Date>,
    /// What the plant can make in a year, as ethanol: a volume, a mass or an energy.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub plant_capacity_per_year: Option<Amount>,
    /// Own materials.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub materials: Vec<OwnMaterial>,
    /// Published default values that replace a whole term or part of one, by `e_ec`, `e_p`, `e_td`,
    /// `e_td_final_fuel`, `e_ec_soil_n2o`.
    #[serde(skip_serializing_if = "BTreeMap::is_empty")]
    pub defaults: BTreeMap<DefaultKey, String>,
    /// Stage kinds that a partial chain leaves out.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub not_covered: Vec<StageKind>,
    /// Audits that sites of the pathway passed.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub audits: Vec<Audit>,
    /// The stages; their order means nothing.
    pub stages: Vec<Stage>,
}

/// Calendar days, both inside.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Period {
    /// First day.
    #[schema(value_type = String, format = Date)]
    pub from: Date,
    /// Last day.
    #[schema(value_type = String, format = Date)]
    pub to: Date,
    /// Calendar or campaign; calendar when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub kind: Option<PeriodKind>,
}

/// What a period follows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum PeriodKind {
    /// Calendar days.
    Calendar,
    /// A campaign of the works.
    Campaign,
}

/// Which value of a published pathway replaces which part.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum DefaultKey {
    /// The whole of e_ec.
    EEc,
    /// The soil N2O models only.
    EEcSoilN2o,
    /// The whole of e_p.
    EP,
    /// The whole of e_td.
    ETd,
    /// What comes after the last works.
    ETdFinalFuel,
}

impl DefaultKey {
    /// Every key.
    pub const ALL: [DefaultKey; 5] = [
        DefaultKey::EEc,
        DefaultKey::EEcSoilN2o,
        DefaultKey::EP,
        DefaultKey::ETd,
        DefaultKey::ETdFinalFuel,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            DefaultKey::EEc => "e_ec",
            DefaultKey::EEcSoilN2o => "e_ec_soil_n2o",
            DefaultKey::EP => "e_p",
            DefaultKey::ETd => "e_td",
            DefaultKey::ETdFinalFuel => "e_td_final_fuel",
        }
    }
}

/// An own material of a pathway.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct OwnMaterial {
    /// Id; a built-in id is refused.
    pub id: String,
    /// Name for people.
    pub name: String,
    /// Lower heating value of the dry matter.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lhv_dry: Option<Amount>,
    /// Carbon in the dry matter, mass %.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub carbon_percent_dry: Option<f64>,
    /// Where the figures come from.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub citation: Option<String>,
}

/// One step of the pathway: intakes, inputs and co-products that together make its output.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Stage {
    /// Unique in the pathway: 1 to 40 of `a-z 0-9 -`, beginning with a letter.
    pub key: String,
    /// What the stage is for.
    pub kind: StageKind,
    /// Name for people.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub name: Option<String>,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    /// Facts of growing.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub grown: Option<Grown>,
    /// What the recipe makes.
    pub output: Output,
    /// What it takes of earlier stages.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub intakes: Vec<Intake>,
    /// The inventory.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub inputs: Vec<Input>,
    /// What else it makes.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub co_products: Vec<CoProduct>,
    /// How it shares its burden, where the rule set lets it choose.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub allocation: Option<AllocationMethod>,
    /// The supplier's statement of bought fuel.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stated: Option<Stated>,
    /// Meters behind its figures.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub meters: Vec<Meter>,
    /// Yields of the same works in earlier periods, for comparison.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub earlier_periods: Vec<EarlierPeriod>,
}

impl Stage {
    /// The name for people, or the key where there is none.
    pub fn title(&self) -> &str {
        self.name.as_deref().unwrap_or(&self.key)
    }
}

/// Facts of growing that declarations and checks need.
#[derive(Clone, Debug, Default, PartialEq, Serialize, ToSchema)]
pub struct Grown {
    /// Country code.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub country: Option<String>,
    /// Region, such as a NUTS 2 code.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub region: Option<String>,
    /// Year of the harvest.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub harvest_year: Option<i16>,
    /// What the land was in January 2008.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub land_use_january_2008: Option<String>,
    /// Numbers of the growers' land declarations.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub land_declarations: Vec<String>,
    /// How many growers.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub growers: Option<u32>,
}

/// The amount and quality of a flow.
#[derive(Clone, Debug, Default, PartialEq, Serialize, ToSchema)]
pub struct Flow {
    /// Amount, above zero.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub amount: Option<f64>,
    /// Unit of the amount.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub unit: Option<String>,
    /// Water, mass % of the wet flow, 0 to below 100.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub moisture_percent: Option<f64>,
    /// Carbon in the dry matter, mass %.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub carbon_percent_dry: Option<f64>,
    /// Lower heating value as the flow leaves, wet; not on ethanol.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lhv: Option<Amount>,
    /// Of heat at delivery, or of a volume when it was read, degC.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub temperature_c: Option<f64>,
    /// Price, such as EUR/t.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub price: Option<Amount>,
    /// Ethanol: mass %.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub strength_percent_mass: Option<f64>,
    /// Ethanol: volume % at 20 degC.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub strength_percent_vol: Option<f64>,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// What a stage makes.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Output {
    /// Built-in material id, or one of the pathway's own.
    pub material: String,
    /// How much.
    #[serde(flatten)]
    pub flow: Flow,
}

/// The amount of an earlier stage's product that a stage uses up.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Intake {
    /// Key of the earlier stage.
    pub from: String,
    /// Key of one of its co-products; its output when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub product: Option<String>,
    /// How much; may be left out by a `combustion` stage that states MJ burnt.
    #[serde(flatten)]
    pub flow: Flow,
}

/// A second product of a stage.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct CoProduct {
    /// Unique among the stage's co-products.
    pub key: String,
    /// Name for people.
    pub name: String,
    /// Co-products share the burden; residues and wastes carry nothing.
    pub role: Role,
    /// Built-in material id, or one of the pathway's own.
    pub material: String,
    /// How much.
    #[serde(flatten)]
    pub flow: Flow,
    /// With substitution: what it displaces.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub displaces: Option<Displaces>,
}

/// What a co-product displaces, for substitution.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Displaces {
    /// Amount displaced per recipe.
    pub amount: f64,
    /// Its unit.
    pub unit: String,
    /// The factor of what is displaced.
    pub factor: OneOrMany<FactorRef>,
}

/// What a product is before the law.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Role {
    /// Shares the burden.
    CoProduct,
    /// Starts at zero.
    Residue,
    /// Starts at zero.
    Waste,
}

/// What the supplier of bought fuel states.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Stated {
    /// Number of the proof.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub proof: Option<String>,
    /// Who issued it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub issuer: Option<String>,
    /// Rule set of the statement: must be the pathway's.
    pub rule_set: String,
    /// Heating value the proof counts with, per kg of pure ethanol.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lhv: Option<Amount>,
    /// Day of the stated works' first production.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = Option<String>, format = Date)]
    pub plant_started: Option<Date>,
    /// How much fuel the proof covers.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub covers: Option<Amount>,
    /// Ids of files that back the statement.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub evidence: Vec<String>,
    /// Stated terms; deductions are negative.
    pub terms: BTreeMap<String, StatedTerm>,
}

/// One term of a supplier's statement.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, ToSchema)]
pub struct StatedTerm {
    /// g CO2e per MJ of fuel, signed.
    pub g_co2e_per_mj: f64,
    /// How the supplier found it.
    pub value_kind: ValueKind,
}

/// How a stated value was found.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum ValueKind {
    /// From the supplier's own data.
    Actual,
    /// A regional figure.
    Regional,
    /// A published default.
    Default,
}
