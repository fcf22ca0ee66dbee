//! The assessment document (`wheelwort.assessment/1`): a pathway evaluated under a rule set. Every entry of a sum is
//! a signed contribution; terms and stages both add to the net.

use crate::core::domain::rule_set::BiogenicCo2;
use crate::core::domain::{GasVector, Term};
use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// The format name that every assessment carries.
pub const FORMAT: &str = "wheelwort.assessment/1";

/// The result of evaluating a pathway.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Assessment {
    /// Always `wheelwort.assessment/1`.
    pub format: String,
    /// Id of the rule set.
    pub rule_set: String,
    /// Id of the set of gas weights.
    pub gwp_set: String,
    /// SHA-256 of the pathway's canonical bytes.
    pub pathway_hash: String,
    /// Name of the pathway.
    pub pathway_name: String,
    /// Version of the program.
    pub program: String,
    /// How far the figure reaches: `to the wheel`, or `to the gate of ...`.
    pub basis: String,
    /// True for demonstration data.
    pub example: bool,
    /// The figure.
    pub net: Net,
    /// The fossil baseline, g CO2e/MJ.
    pub comparator_g_co2e_per_mj: f64,
    /// Saving against the baseline, %; null where none is printed.
    pub saving_percent: Option<f64>,
    /// Minimum savings that apply.
    pub thresholds: Vec<ThresholdResult>,
    /// The net by term.
    pub terms_g_co2e_per_mj: Terms,
    /// Computed and in no total.
    pub memo: Memo,
    /// The net by stage, from field to wheel.
    pub stages: Vec<StageResult>,
    /// The crop's carbon.
    pub carbon: Carbon,
    /// Share of the figures that are measured or a supplier's, %.
    pub primary_data_percent: f64,
    /// Share of the figures that are estimates, %.
    pub estimated_percent: f64,
    /// What the checks have to say.
    pub findings: Vec<Finding>,
}

/// The net figure.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Net {
    /// g CO2e per MJ of fuel.
    pub g_co2e_per_mj: f64,
    /// The gas vector behind it, g per MJ of fuel.
    pub gases_g_per_mj: GasVector,
}

/// A minimum saving and whether it is met, unrounded.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ThresholdResult {
    /// Minimum saving, %.
    pub percent: f64,
    /// Why it applies.
    pub because: String,
    /// Whether the unrounded saving reaches it.
    pub met: bool,
}

/// Signed contributions by term, g CO2e/MJ.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Terms {
    /// Growing or collecting the feedstock.
    pub e_ec: f64,
    /// Land-use change.
    pub e_l: f64,
    /// Processing.
    pub e_p: f64,
    /// Transport and distribution.
    pub e_td: f64,
    /// Use of the fuel.
    pub e_u: f64,
    /// Soil carbon gained.
    pub e_sca: f64,
    /// CO2 captured and stored.
    pub e_ccs: f64,
    /// CO2 captured in place of fossil CO2.
    pub e_ccr: f64,
}

impl Terms {
    /// The entry of a term.
    pub fn get(&self, term: Term) -> f64 {
        match term {
            Term::Eec => self.e_ec,
            Term::El => self.e_l,
            Term::Ep => self.e_p,
            Term::Etd => self.e_td,
            Term::Eu => self.e_u,
            Term::Esca => self.e_sca,
            Term::Eccs => self.e_ccs,
            Term::Eccr => self.e_ccr,
        }
    }

    /// Adds to the entry of a term.
    pub fn add(&mut self, term: Term, amount: f64) {
        let entry = match term {
            Term::Eec => &mut self.e_ec,
            Term::El => &mut self.e_l,
            Term::Ep => &mut self.e_p,
            Term::Etd => &mut self.e_td,
            Term::Eu => &mut self.e_u,
            Term::Esca => &mut self.e_sca,
            Term::Eccs => &mut self.e_ccs,
            Term::Eccr => &mut self.e_ccr,
        };
        *entry += amount;
    }

    /// The sum of all terms.
    pub fn sum(&self) -> f64 {
        Term::ALL.into_iter().map(|term| self.get(term)).sum()
    }
}

/// Figures that are computed and stand in no total.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Memo {
    /// CH4 and N2O of use where the rule set counts e_u as zero, g CO2e/MJ.
    pub e_u_not_counted_g_co2e_per_mj: f64,
}

/// One stage of the breakdown.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct StageResult {
    /// Key of the stage; `default:e_td` and the like for a published default value.
    pub key: String,
    /// Kind of the stage; `default` for a published default value.
    pub kind: String,
    /// Name for people.
    pub name: String,
    /// The output's own share of the stage's burden.
    pub share: f64,
    /// Burden carried into the fuel per burden made: with shares over without, along the chain.
    pub carried_share: f64,
    /// How much of the output one MJ of fuel asks for.
    pub demand: Demand,
    /// Signed contribution, g CO2e/MJ.
    pub g_co2e_per_mj: f64,
    /// The same with all shares 1.
    pub unallocated_g_co2e_per_mj: f64,
    /// The gas vector behind it, g per MJ of fuel.
    pub gases_g_per_mj: GasVector,
    /// Shares of all products, when there are several.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub products: Vec<ProductShare>,
    /// Steps that lead to demand and shares.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub workings: Vec<Step>,
    /// The inputs.
    pub inputs: Vec<InputResult>,
}

/// How much of a product is asked for.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Demand {
    /// Amount per MJ of fuel, in `unit`.
    pub amount: f64,
    /// The output's unit as entered.
    pub unit: String,
}

/// The share of one product.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ProductShare {
    /// `output`, or the co-product's key.
    pub product: String,
    /// Name for people.
    pub name: String,
    /// Share of the stage's burden, 0 to 1.
    pub share: f64,
    /// What the sharing measured (MJ, kg, EUR), per recipe; zero for residues and wastes.
    pub measure: f64,
    /// Unit of the measure.
    pub unit: String,
}

/// One input of the breakdown.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct InputResult {
    /// Key of the input; `stated:e_ec` for a term of bought fuel.
    pub key: String,
    /// What it is, for people.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub label: String,
    /// The term it feeds.
    pub term: Term,
    /// Signed contribution, g CO2e/MJ.
    pub g_co2e_per_mj: f64,
    /// The gas vector behind it, g per MJ of fuel.
    pub gases_g_per_mj: GasVector,
    /// kg of each gas per recipe, before the chain and before sharing.
    pub recipe_gases_kg: GasVector,
    /// Why the figure does not count, where it does not.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub replaced: Option<String>,
    /// The arithmetic, step by step.
    pub workings: Vec<Step>,
}

/// One step of the arithmetic that a reader can redo with a pocket calculator.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Step {
    /// What is done, with the figures it is done to.
    pub text: String,
    /// The result of the step, in full.
    pub value: f64,
    /// Unit of the result.
    pub unit: String,
    /// Where a figure of the step comes from.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub source: String,
}

/// The crop's carbon, physically and apart from sharing, g CO2 per MJ of fuel.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Carbon {
    /// Carbon of the crop that enters the works, as CO2; null where a content is unknown.
    pub feedstock_g_co2_per_mj: Option<f64>,
    /// Carbon of the fuel, as CO2.
    pub fuel_g_co2_per_mj: f64,
    /// Fermentation CO2, vented or captured.
    pub fermentation_g_co2_per_mj: f64,
    /// Carbon of co-products that leave, as CO2; null where a content is unknown.
    pub co_products_g_co2_per_mj: Option<f64>,
    /// Carbon of residues and wastes, and biogenic CO2 of other inputs of the works; null where a content is unknown.
    pub other_g_co2_per_mj: Option<f64>,
    /// Carbon out over carbon in, %; null where a content is unknown.
    pub closure_percent: Option<f64>,
    /// Half-range that typical contents bring to the closure (root of the sum of squares), points.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub closure_half_range_points: Option<f64>,
    /// What keeps the closure unknown.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub missing: Vec<String>,
    /// Photosynthetic uptake attributed to the fuel: negative.
    pub uptake_g_co2_per_mj: f64,
    /// CO2 of burning the fuel.
    pub combustion_g_co2_per_mj: f64,
    /// Biogenic CO2 of inputs other than fermentation.
    pub other_biogenic_g_co2_per_mj: f64,
    /// Net with uptake and all biogenic releases in line: equals the net.
    pub net_in_line_g_co2e_per_mj: f64,
    /// Where the rule set wants the crop's own CO2: beside the account or in line. Both are always given.
    #[serde(default)]
    pub presentation: BiogenicCo2,
    /// The crop's own CO2 in line, from field to wheel: uptake negative, releases positive. They add to zero.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub rows: Vec<BiogenicRow>,
    /// The net by term with these rows in line: adds to the same net.
    #[serde(default)]
    pub terms_in_line_g_co2e_per_mj: Terms,
    /// Which stages give biogenic CO2 back, in order.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub releases: Vec<Release>,
}

/// A row of the account with the crop's own CO2 in line.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct BiogenicRow {
    /// Key of the stage; empty where the pathway has no such stage or several share the row.
    pub stage: String,
    /// The term it feeds.
    pub term: Term,
    /// What it is.
    pub what: String,
    /// Signed contribution, g CO2 per MJ of fuel.
    pub g_co2_per_mj: f64,
}

/// Biogenic CO2 that a stage gives back.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Release {
    /// Key of the stage; empty where the pathway has no such stage.
    pub stage: String,
    /// What it is.
    pub what: String,
    /// g CO2 per MJ of fuel.
    pub g_co2_per_mj: f64,
}

/// What a check has to say.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Finding {
    /// Id of the check.
    pub id: String,
    /// How much it matters.
    pub severity: Severity,
    /// Key of the stage it points at; empty for the whole pathway.
    pub stage: String,
    /// Field it points at, such as `inputs.gas`.
    pub field: String,
    /// What is so.
    pub message: String,
    /// What to do.
    pub remedy: String,
    /// For a warning: the written reason why it is accepted.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
}

/// How much a finding matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Severity {
    /// Stops a statement.
    Block,
    /// Needs a written reason.
    Warn,
    /// Informs.
    Info,
}
