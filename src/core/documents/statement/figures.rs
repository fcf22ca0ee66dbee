//! What a statement states: worked out from facts, pathway and assessment alone, so that it can be worked out again.

use crate::core::documents::assessment::ThresholdResult;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::domain::{Cited, GasVector, Term};
use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// The figures of a statement. All in full; [`Words::rounding`] says how they are shown.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Figures {
    /// The unit everything is stated per.
    pub declared_unit: String,
    /// The figure, g CO2e/MJ.
    pub net_g_co2e_per_mj: f64,
    /// Gases behind it, g per MJ: fossil and biogenic apart.
    pub gases_g_per_mj: GasVector,
    /// The fossil baseline, g CO2e/MJ.
    pub comparator_g_co2e_per_mj: f64,
    /// What the rule set calls it.
    pub comparator_word: String,
    /// Saving, %; absent where the chain is partial.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub saving_percent: Option<f64>,
    /// Minimum savings that apply, decided unrounded.
    pub thresholds: Vec<ThresholdResult>,
    /// The sum by term.
    pub terms: Vec<TermLine>,
    /// The provisional indirect land-use estimate: beside the figure, never inside it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub iluc_g_per_mj: Option<Cited>,
    /// A margin added on purpose, and the figure with it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub with_margin: Option<WithMargin>,
    /// Heating value behind the figure.
    pub heating_value: HeatingValueBasis,
    /// The consignment's energy; absent where no quantity is given.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub energy: Option<ConsignmentEnergy>,
    /// The figure in other units.
    pub derived: Derived,
    /// How stages share their burden.
    pub allocation: Vec<SharingStage>,
    /// Fuel from feedstock; absent where the chain does not tell.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub conversion_factor: Option<ConversionFactor>,
    /// The crop's carbon, kept apart.
    pub biogenic: Biogenic,
    /// How good the data are.
    pub data_quality: DataQuality,
    /// How sure the figure is.
    pub uncertainty: Uncertainty,
    /// CH4 and N2O of use where the rule set counts them as zero, g CO2e/MJ.
    pub e_u_not_counted_g_co2e_per_mj: f64,
}

/// A term of the sum.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct TermLine {
    /// The term.
    pub term: Term,
    /// What it holds.
    pub what: String,
    /// Signed contribution, g CO2e/MJ.
    pub g_co2e_per_mj: f64,
    /// Kinds of value behind it: `actual`, `regional`, `default`.
    pub value_kinds: Vec<String>,
    /// The same in words: also `zero by the rule`, `not claimed`, `nothing counted`.
    pub value_kind: String,
}

/// The figure with a margin.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct WithMargin {
    /// The margin, g CO2e/MJ.
    pub margin_g_per_mj: f64,
    /// Figure and margin, g CO2e/MJ.
    pub g_co2e_per_mj: f64,
}

/// Heating value behind a figure.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct HeatingValueBasis {
    /// `LHV`: lower. No rule set here counts on the higher one.
    pub heating_value_basis: String,
    /// Of pure ethanol in the arithmetic.
    pub arithmetic: Cited,
    /// What becomes of the water in the fuel.
    pub water: String,
    /// By mass on consignment records, where the rule fixes one.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub consignment_mass: Option<Cited>,
    /// By volume on consignment records, where the rule fixes one.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub consignment_volume: Option<Cited>,
}

/// The energy of a consignment.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ConsignmentEnergy {
    /// MJ.
    pub energy_mj: f64,
    /// The factor it was worked out with; absent where the quantity is an energy.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub factor: Option<Cited>,
    /// How, in words.
    pub how: String,
}

/// The figure in other units.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Derived {
    /// kg CO2e per kg of pure ethanol, on the heating value of the arithmetic.
    pub kg_co2e_per_kg: f64,
    /// kg CO2e per litre, where the rule fixes energy by volume.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub kg_co2e_per_l: Option<f64>,
    /// t CO2e of the consignment.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub consignment_t_co2e: Option<f64>,
}

/// A stage that shares its burden.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct SharingStage {
    /// Key of the stage.
    pub stage: String,
    /// Name of the stage.
    pub name: String,
    /// How it shares.
    pub method: AllocationMethod,
    /// Its products.
    pub products: Vec<SharedProduct>,
}

/// A product and its share.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct SharedProduct {
    /// `output`, or the key of the co-product.
    pub product: String,
    /// Name.
    pub name: String,
    /// Share of the burden, 0 to 1.
    pub share: f64,
}

/// Fuel from feedstock.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ConversionFactor {
    /// kg of pure ethanol per kg of feedstock as it leaves the field, losses included.
    pub kg_fuel_per_kg_feedstock: f64,
    /// Material of the feedstock.
    pub feedstock: String,
    /// Feedstock per MJ of fuel, kg.
    pub feedstock_kg_per_mj: f64,
}

/// The crop's carbon.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Biogenic {
    /// CO2 taken up by the crop, g per MJ: negative.
    pub uptake_g_co2_per_mj: f64,
    /// Fermentation CO2, g per MJ.
    pub fermentation_g_co2_per_mj: f64,
    /// CO2 of burning the fuel, g per MJ.
    pub combustion_g_co2_per_mj: f64,
    /// Biogenic CO2 of other inputs, g per MJ.
    pub other_g_co2_per_mj: f64,
    /// Biogenic carbon in a kg of pure ethanol, kg.
    pub content_kg_c_per_kg: f64,
}

/// How good the data are.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct DataQuality {
    /// Share of figures that are measured or a supplier's, %.
    pub primary_data_percent: f64,
    /// Share of figures that are estimates, %.
    pub estimated_percent: f64,
}

/// How sure a figure is.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Uncertainty {
    /// In words: also that it was not worked out.
    pub text: String,
    /// The range, where it was worked out.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub range: Option<UncertaintyRange>,
}

/// A range that was worked out by drawing.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct UncertaintyRange {
    /// Lower end, g CO2e/MJ.
    pub low_g_co2e_per_mj: f64,
    /// Upper end, g CO2e/MJ.
    pub high_g_co2e_per_mj: f64,
    /// Share of draws inside, %.
    pub coverage_percent: f64,
    /// Draws.
    pub draws: u32,
    /// Seed.
    pub seed: u32,
}

/// What is said beside the figures.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Words {
    /// The rule set's document and version.
    pub rule_set_text: String,
    /// How far the figure reaches, and what is left out.
    pub boundary: String,
    /// Why the crop's CO2 is not in the figure.
    pub uptake_note: String,
    /// How figures are rounded.
    pub rounding: String,
    /// What not to do with the figures.
    pub cautions: Vec<String>,
}
