//! What an input can use instead of a factor: pure functions from parameters to gases, one file each, with their
//! parameters as a table. To add one: a file with `MODEL`, a row in `ALL`.

pub mod alcoholometry;
mod alternatives;
pub mod boiler;
pub mod capture;
pub mod chp;
pub mod combustion;
pub mod constants;
pub mod dehydration;
pub mod digester;
pub mod distillation;
pub mod dryer;
pub mod factors;
pub mod fermentation;
pub mod fermentation_co2;
pub mod flow;
pub mod given;
pub mod haul;
pub mod heat_from;
pub mod labels;
pub mod land_stock;
pub mod land_use_change;
pub mod lime;
pub mod parameter;
pub mod refusal;
pub mod residue_burning;
pub mod soil_carbon;
pub mod soil_n2o;
pub mod still;
#[cfg(test)]
mod testing;
pub mod urea;

use crate::core::documents::assessment::Severity;
use crate::core::documents::pathway::Period;
use crate::core::domain::{Book, GasVector, RuleSet, StageKind, Term};
use flow::Measured;
use given::Given;
use parameter::Parameter;

/// A model: what it computes, what it may be told, and the function itself.
pub struct Model {
    /// Name in documents.
    pub kind: &'static str,
    /// Name on pages.
    pub title: &'static str,
    /// What it computes, in a sentence.
    pub what: &'static str,
    /// Equation and source.
    pub source: &'static str,
    /// The term it feeds, whatever the stage; none: the stage's.
    pub term: Option<Term>,
    /// Its parameters.
    pub parameters: &'static [Parameter],
    /// Parameters to outcome; `None` where something is wrong, which is then noted.
    pub compute: fn(&mut Given) -> Option<Outcome>,
}

/// Every model, by kind.
pub const ALL: &[&Model] = &[
    &soil_n2o::MODEL,
    &lime::MODEL,
    &urea::MODEL,
    &haul::MODEL,
    &boiler::MODEL,
    &chp::MODEL,
    &fermentation_co2::MODEL,
    &distillation::MODEL,
    &dehydration::MODEL,
    &combustion::MODEL,
    &land_use_change::MODEL,
    &soil_carbon::MODEL,
    &capture::MODEL,
    &residue_burning::MODEL,
    &digester::MODEL,
    &dryer::MODEL,
];

/// The model of a kind.
pub fn find(kind: &str) -> Option<&'static Model> {
    ALL.iter().find(|model| model.kind == kind).copied()
}

/// Where a model is computed.
pub struct Setting<'a> {
    /// The published data.
    pub book: &'a Book,
    /// The rule set in force.
    pub rules: &'a RuleSet,
    /// Kind of the stage.
    pub stage_kind: StageKind,
    /// The stage's output; none where it could not be measured.
    pub output: Option<&'a Measured>,
    /// What the stage takes, as measured where it arrives.
    pub intakes: &'a [Measured],
    /// `(kind, method)` of every model of the stage, to notice what would count twice.
    pub neighbours: &'a [(String, String)],
    /// The days the pathway covers.
    pub period: &'a Period,
    /// Year of the harvest, of this stage or of one that takes from it; else the year the period begins in.
    pub harvest_year: i16,
    /// Whether anybody will read the arithmetic; without it the figures come sooner.
    pub workings: bool,
}

/// What a model gives, per recipe.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Outcome {
    /// Gases that count, kg.
    pub gases: GasVector,
    /// CO2 of fermentation for the carbon balance, kg: what the sugar split gives, or what was measured.
    pub fermentation_kg: Option<f64>,
    /// Biogenic CO2 for the carbon balance where it differs from the gases (the whole fuel of heat and power; none
    /// for fermentation, which stands in `fermentation_kg`), kg.
    pub biogenic_kg: Option<f64>,
    /// CO2 taken from the works by a capture, kg; a check holds it against what the works can form.
    pub captured_kg: Option<f64>,
    /// A limit on the deduction that only the whole chain can tell (soil carbon, degraded-land bonus).
    pub per_fuel: Option<PerFuel>,
}

/// A part of an outcome that counts per MJ of fuel grown on an area; the engine knows the yield of the chain.
#[derive(Clone, Debug, PartialEq)]
pub struct PerFuel {
    /// Area, ha per recipe.
    pub area_ha: f64,
    /// CO2 of land in the outcome's gases that the cap bears on, kg: negative for a claim, positive for one added back.
    pub claim_kg: f64,
    /// The size of the claim may not pass this, g per MJ of fuel grown on the area.
    pub cap_g_per_mj: Option<f64>,
    /// Added for every MJ of fuel grown on the area, g CO2 of land: negative for a bonus.
    pub add_g_per_mj: f64,
    /// Document and point of cap or bonus.
    pub source: String,
}

/// What a check has to say about a figure of a model; the engine adds where it stands.
#[derive(Clone, Debug, PartialEq)]
pub struct Note {
    /// Id of the check.
    pub id: &'static str,
    /// How much it matters.
    pub severity: Severity,
    /// Parameter it points at; empty for the whole input.
    pub field: String,
    /// What is so.
    pub message: String,
    /// What to do.
    pub remedy: String,
}
