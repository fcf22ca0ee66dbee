//! A pathway with every unit converted, every factor priced and every model computed: a flat plan of numbers.

use super::materials::Materials;
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::{Finding, Step};
use crate::core::documents::pathway::{Pathway, ValueKind};
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::domain::{GasVector, GwpSet, RuleSet, StageKind, Term};
use crate::core::models::PerFuel;
use crate::core::models::flow::Measured;

/// The plan of a pathway. Stages stand in the order of the document; `order` runs from field to wheel.
pub struct Resolved<'p> {
    /// The document.
    pub pathway: &'p Pathway,
    /// SHA-256 of its canonical bytes.
    pub hash: String,
    /// The rule set in force.
    pub rules: &'p RuleSet,
    /// The gas weights in force.
    pub gwp: &'p GwpSet,
    /// The stages.
    pub stages: Vec<Stage<'p>>,
    /// Indices of stages, suppliers before takers.
    pub order: Vec<usize>,
    /// The stage that delivers the fuel; none for a pathway of defaults alone.
    pub last: Option<usize>,
    /// Published default values in force.
    pub defaults: Vec<DefaultTerm>,
    /// What checks have to say about figures as entered.
    pub findings: Vec<Finding>,
    /// The pathway's own materials and the built-in ones.
    pub materials: Materials<'p>,
}

impl Resolved<'_> {
    /// Lower heating value of a material's dry matter, MJ/kg.
    pub fn lhv_dry(&self, material: &str) -> Option<f64> {
        self.materials.lhv_dry(material).map(|(lhv, _)| lhv)
    }

    /// Energy of the ethanol that one recipe of a stage gives, MJ; none where its output is no ethanol.
    pub fn fuel_mj(&self, stage: usize) -> Option<f64> {
        let flow = &self.stages.get(stage)?.products.first()?.flow;
        Some(self.rules.ethanol_mj(flow.pure_kg?, flow.strength.unwrap_or(1.0)))
    }
}

/// A stage of the plan.
pub struct Stage<'p> {
    /// The document's stage.
    pub document: &'p crate::core::documents::pathway::Stage,
    /// Its products; the output comes first.
    pub products: Vec<Product<'p>>,
    /// What it takes.
    pub intakes: Vec<Intake>,
    /// Its inventory per recipe.
    pub inputs: Vec<Input>,
    /// Steps that lead to the shares.
    pub share_steps: Vec<Step>,
    /// How it shares.
    pub allocation: Option<AllocationMethod>,
    /// How the sharing was measured (`MJ`, `MJ of exergy`, ...).
    pub measure_unit: &'static str,
}

impl Stage<'_> {
    /// Kind of the stage.
    pub fn kind(&self) -> StageKind {
        self.document.kind
    }
}

/// A product of a stage.
pub struct Product<'p> {
    /// Key of a co-product; none for the output.
    pub key: Option<&'p str>,
    /// Name for people.
    pub name: &'p str,
    /// The flow as measured.
    pub flow: Measured,
    /// Carbon in the dry matter as given on the flow, mass %.
    pub carbon_percent_dry: Option<f64>,
    /// False for residues and wastes.
    pub shares_burden: bool,
    /// Share of the stage's burden, 0 to 1.
    pub share: f64,
    /// What the sharing measured.
    pub measure: f64,
}

/// An intake of a stage.
pub struct Intake {
    /// Index of the supplier.
    pub from: usize,
    /// Index of its product.
    pub product: usize,
    /// How much of the supplier's recipe one recipe of this stage uses up.
    pub recipes: f64,
    /// The flow as measured where it arrives.
    pub flow: Measured,
    /// Carbon in the dry matter as given on the intake, mass %.
    pub carbon_percent_dry: Option<f64>,
}

/// An input of a stage, per recipe.
#[derive(Default)]
pub struct Input {
    /// Key of the input.
    pub key: String,
    /// What it is, for people.
    pub label: String,
    /// The term it feeds.
    pub term: Option<Term>,
    /// Gases per recipe, kg.
    pub gases: GasVector,
    /// CO2 of fermentation for the carbon balance, kg per recipe.
    pub fermentation_kg: Option<f64>,
    /// Biogenic CO2 for the carbon balance, kg per recipe.
    pub biogenic_kg: f64,
    /// CO2 taken from the works by a capture, kg per recipe.
    pub captured_kg: Option<f64>,
    /// Parts that count per MJ of fuel grown on an area.
    pub per_fuel: Vec<PerFuel>,
    /// Area of the whole recipe, ha, where the stage tells; the parts may stand for some of it.
    pub recipe_ha: Option<f64>,
    /// True for a soil N2O model.
    pub is_soil_n2o: bool,
    /// Which default value replaced it.
    pub replaced: Option<String>,
    /// The arithmetic up to the gases per recipe.
    pub steps: Vec<Step>,
    /// How much of the figure is primary data, 0 to 1.
    pub primary: f64,
    /// How much of the figure is an estimate, 0 to 1.
    pub estimated: f64,
    /// Where the figure comes from.
    pub origin: Option<Origin>,
    /// For a stated term of bought fuel: how the supplier found it.
    pub stated: Option<ValueKind>,
}

/// A published default value in force.
pub struct DefaultTerm {
    /// Its key in the document, such as `e_td`.
    pub key: &'static str,
    /// The term it feeds.
    pub term: Term,
    /// g CO2e/MJ.
    pub g_per_mj: f64,
    /// Full id of the published pathway.
    pub row: String,
    /// Document and point.
    pub source: String,
}
