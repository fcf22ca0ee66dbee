//! A published calculation rule as data: gases, allocation, terms, comparator, thresholds. The engine asks what a
//! rule set says, never which one it is.

use super::citation::{Citation, Cited};
use super::stage_kind::Term;
use jiff::civil::Date;
use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// How a stage shares its burden between its products.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum AllocationMethod {
    /// Lower heating value of the products.
    Energy,
    /// Dry mass.
    Mass,
    /// Economic value.
    Economic,
    /// Avoided burden, shown apart.
    Substitution,
    /// Heat by its Carnot factor, power by 1.
    Exergy,
}

impl AllocationMethod {
    /// Every method.
    pub const ALL: [AllocationMethod; 5] = [
        AllocationMethod::Energy,
        AllocationMethod::Mass,
        AllocationMethod::Economic,
        AllocationMethod::Substitution,
        AllocationMethod::Exergy,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            AllocationMethod::Energy => "energy",
            AllocationMethod::Mass => "mass",
            AllocationMethod::Economic => "economic",
            AllocationMethod::Substitution => "substitution",
            AllocationMethod::Exergy => "exergy",
        }
    }

    /// The method of a document name, if there is one.
    pub fn from_name(name: &str) -> Option<AllocationMethod> {
        AllocationMethod::ALL
            .into_iter()
            .find(|method| method.name() == name)
    }
}

/// The minimum saving for plants that started within a span of days.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct Threshold {
    /// Minimum saving, %.
    pub percent: f64,
    /// First day of the span; none = from the beginning.
    #[schema(value_type = Option<String>, format = Date)]
    pub started_from: Option<Date>,
    /// Last day of the span; none = open.
    #[schema(value_type = Option<String>, format = Date)]
    pub started_to: Option<Date>,
    /// Document and point.
    pub source: String,
    /// Whether it was read there.
    pub status: super::Status,
}

impl Threshold {
    /// True if a plant that started on `day` falls under this threshold.
    pub fn covers(&self, day: Date) -> bool {
        self.started_from.is_none_or(|from| from <= day) && self.started_to.is_none_or(|to| day <= to)
    }
}

/// A calculation rule.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RuleSet {
    /// Id as used in documents.
    pub id: String,
    /// Title on pages.
    pub title: String,
    /// Version of the rule set's data here.
    pub version: String,
    /// Id of the set of gas weights.
    pub gwp_set: String,
    /// The comparator's word on pages, such as `fossil fuel comparator`.
    pub comparator_word: String,
    /// The fossil baseline, g CO2e/MJ.
    pub comparator: Cited,
    /// Petrol itself, g CO2e/MJ, for display.
    pub petrol: Cited,
    /// Lower heating value of pure ethanol in the arithmetic, MJ/kg.
    pub ethanol_lhv: Cited,
    /// Heating value of ethanol on consignment records, MJ/kg.
    pub consignment_lhv_mass: Cited,
    /// Heating value of ethanol on consignment records, MJ/L.
    pub consignment_lhv_volume: Cited,
    /// CO2 per carbon in the rule's formulas, kg/kg.
    pub co2_per_carbon: Cited,
    /// Heat of evaporation taken off the heating value of wet co-products, MJ per kg of water.
    pub water_evaporation: Cited,
    /// The temperature of the surroundings in the Carnot factor, K.
    pub ambient: Cited,
    /// Carnot factor that heat for buildings below 150 degC may use.
    pub building_heat_carnot: Cited,
    /// The sharing method without a stage's own word.
    pub allocation: AllocationMethod,
    /// The methods a stage may ask for.
    pub allocation_allowed: Vec<AllocationMethod>,
    /// Sharing of a stage that gives only heat and power.
    pub allocation_heat_and_power: AllocationMethod,
    /// Terms that are zero by rule: computed, shown as memo, in no total.
    pub terms_not_counted: Vec<Term>,
    /// The edition of standard factors.
    pub standard_factors: String,
    /// The soil N2O method that needs no written reason.
    pub soil_n2o_method: String,
    /// Years over which land-use change is spread.
    pub land_use_years: Cited,
    /// Built-in materials that are residues whatever a file says.
    pub residues_by_law: Vec<String>,
    /// Source of the residue list.
    pub residues_source: String,
    /// Minimum savings.
    pub thresholds: Vec<Threshold>,
    /// The document.
    pub source: String,
    /// Whether it was read.
    pub status: super::Status,
    /// What a reader should know, one note a line.
    pub notes: Vec<String>,
}

impl RuleSet {
    /// The document behind the rule set.
    pub fn citation(&self) -> Citation {
        Citation {
            source: self.source.clone(),
            status: self.status,
        }
    }

    /// True if the rule says the term is zero.
    pub fn leaves_out(&self, term: Term) -> bool {
        self.terms_not_counted.contains(&term)
    }

    /// True if the material is a residue whatever the file says. Ids that end in `*` stand for all that begin so.
    pub fn is_residue_by_law(&self, material: &str) -> bool {
        self.residues_by_law.iter().any(|id| match id.strip_suffix('*') {
            Some(stem) => material.starts_with(stem),
            None => id == material,
        })
    }
}
