//! The chain up to the gate of the works, worked out anew with the weights of the newest IPCC report, by kind of emission.

use super::PactError;
use super::facts::PactFacts;
use crate::core::documents::Pathway;
use crate::core::documents::input::{ModelUse, OneOrMany};
use crate::core::documents::pathway::DefaultKey;
use crate::core::domain::{Book, Gas, GasVector, StageKind, Term};
use crate::core::engine::demand::demand;
use crate::core::engine::resolved::{Input, Resolved};
use crate::core::engine::{assess, resolve};
use crate::core::units::{Dimension, Quantity};
use serde_json::Value;
use std::collections::BTreeSet;

/// The rule set that the footprint is worked out under: no fuel law, weights of the Sixth Assessment Report.
pub const RULE_SET: &str = "inventory-ar6";

/// kg CO2e per kilogram of ethanol as it leaves the gate, water included, by kind.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Parts {
    /// Fossil, with all nitrous oxide.
    pub fossil: f64,
    /// The part of it that comes from managing land.
    pub land_fossil: f64,
    /// Carbon lost by changing the use of land; gains are left out.
    pub land_use_change: f64,
    /// Carbon lost from land in the same use.
    pub land_loss: f64,
    /// Carbon gained in land in the same use, at most zero; zero without traceability.
    pub land_gain: f64,
    /// Methane of biological origin.
    pub biogenic_methane: f64,
    /// Fermentation CO2 stored, at most zero; zero without proof.
    pub stored: f64,
    /// Transport after the gate; none where the pathway has no stages of it.
    pub outbound: Option<f64>,
    /// Pure ethanol, kg.
    pub pure: f64,
    /// Share of own data, %.
    pub primary_percent: f64,
    /// The net of the chain to the gate, kg CO2e, before anything is left out.
    pub net: f64,
    /// What was left out of the net, in words.
    pub left_out: Vec<&'static str>,
    /// Stages inside the boundary, in words.
    pub inside: Vec<String>,
    /// How stages share, in words.
    pub sharing: Vec<String>,
}

/// The chain up to the gate.
pub struct Gate {
    /// The document with the stages inside the boundary only.
    pub pathway: Pathway,
    /// The whole document under the rule set of the footprint.
    whole: Pathway,
    /// Key of the stage whose gate it is.
    key: String,
    /// Transport after the gate is a published default of a fuel law.
    outbound_by_default: bool,
}

/// Finds the gate: the works after which fuel is only carried and burnt.
///
/// # Errors
/// When the chain has no such place, or begins elsewhere than at the cradle.
pub fn gate(pathway: &Pathway, book: &Book) -> Result<Gate, PactError> {
    let mut whole = pathway.clone();
    RULE_SET.clone_into(&mut whole.rule_set);
    let outbound_by_default = whole.defaults.remove(&DefaultKey::ETdFinalFuel).is_some();
    if let Some(key) = whole.defaults.keys().next() {
        return Err(PactError::LawDefault(key.name()));
    }
    let after = |kind: StageKind| matches!(kind, StageKind::FuelTransport | StageKind::Combustion);
    if let Some(kind) = whole.not_covered.iter().find(|kind| !after(**kind)) {
        return Err(PactError::NotFromCradle(kind.words()));
    }
    if whole.stages.iter().any(|stage| stage.kind == StageKind::Bought) {
        return Err(PactError::Bought);
    }
    if !whole
        .stages
        .iter()
        .any(|stage| stage.kind == StageKind::Cultivation)
    {
        return Err(PactError::NotFromCradle(StageKind::Cultivation.words()));
    }
    let resolved = resolve(&whole, None, book, false).map_err(PactError::Refused)?;
    let mut at = resolved.last.ok_or(PactError::NoGate)?;
    while after(resolved.stages[at].kind()) {
        let suppliers: BTreeSet<usize> = resolved.stages[at]
            .intakes
            .iter()
            .filter(|intake| intake.flow.is_ethanol())
            .map(|intake| intake.from)
            .collect();
        let mut suppliers = suppliers.into_iter();
        at = match (suppliers.next(), suppliers.next()) {
            (Some(one), None) => one,
            (None, _) => return Err(PactError::NoGate),
            (Some(_), Some(_)) => return Err(PactError::SeveralWorks),
        };
    }
    let mut kept = BTreeSet::from([at]);
    for &j in resolved.order.iter().rev() {
        if kept.contains(&j) {
            kept.extend(resolved.stages[j].intakes.iter().map(|intake| intake.from));
        }
    }
    let key = resolved.stages[at].document.key.clone();
    drop(resolved);
    let mut inside = whole.clone();
    let mut index = 0;
    inside.stages.retain(|_| {
        index += 1;
        kept.contains(&(index - 1))
    });
    Ok(Gate {
        pathway: inside,
        whole,
        key,
        outbound_by_default,
    })
}

impl Gate {
    /// Works the parts out.
    ///
    /// # Errors
    /// When the chain up to the gate cannot be worked out.
    pub fn parts(&self, book: &Book, facts: &PactFacts) -> Result<Parts, PactError> {
        let resolved = resolve(&self.pathway, None, book, false).map_err(PactError::Refused)?;
        let assessment = assess(&resolved, false).map_err(PactError::Refused)?.assessment;
        let last = resolved.last.ok_or(PactError::NoGate)?;
        let output = &resolved.stages[last].products[0].flow;
        let (Some(mj), Some(wet), Some(pure)) = (resolved.fuel_mj(last), output.wet_kg, output.pure_kg)
        else {
            return Err(PactError::NoGate);
        };
        let per_kg = mj / wet / 1000.0;
        let scales = demand(&resolved);
        let mut parts = Parts {
            pure: pure / wet,
            primary_percent: assessment.primary_data_percent,
            net: assessment.net.g_co2e_per_mj * per_kg,
            ..Parts::default()
        };
        for (result, &j) in assessment.stages.iter().zip(&resolved.order) {
            let stage = &resolved.stages[j];
            let words = format!("{} ({})", stage.document.title(), stage.kind().words());
            parts.inside.push(words);
            if result.products.len() > 1
                && let Some(method) = stage.allocation
            {
                parts
                    .sharing
                    .push(format!("{}: {}", stage.document.title(), method.name()));
            }
            for (i, (row, input)) in result.inputs.iter().zip(&stage.inputs).enumerate() {
                let models = stage
                    .document
                    .inputs
                    .get(i)
                    .and_then(|input| input.model.as_ref());
                let taken = models.map_or(0.0, delivered) * scales.scale[j] * 1000.0;
                let gases = row.gases_g_per_mj * per_kg;
                parts.add(&resolved, input, gases, taken * per_kg, facts);
            }
        }
        if !self.outbound_by_default && self.whole.stages.len() > self.pathway.stages.len() {
            parts.outbound = Some(self.outbound(book)?);
        }
        Ok(parts)
    }

    /// Fuel transport after the gate, kg CO2e per kg at the gate.
    fn outbound(&self, book: &Book) -> Result<f64, PactError> {
        let resolved = resolve(&self.whole, None, book, false).map_err(PactError::Refused)?;
        let assessment = assess(&resolved, false).map_err(PactError::Refused)?.assessment;
        let scales = demand(&resolved);
        let position = resolved
            .stages
            .iter()
            .position(|stage| stage.document.key == self.key);
        let at = position.ok_or(PactError::NoGate)?;
        let wet = resolved.stages[at].products[0]
            .flow
            .wet_kg
            .ok_or(PactError::NoGate)?;
        let kg_per_mj = scales.by_product[at][0] * wet;
        let inside: BTreeSet<&str> = self
            .pathway
            .stages
            .iter()
            .map(|stage| stage.key.as_str())
            .collect();
        let grams: f64 = assessment
            .stages
            .iter()
            .filter(|stage| !inside.contains(stage.key.as_str()))
            .flat_map(|stage| &stage.inputs)
            .filter(|input| input.term == Term::Etd)
            .map(|input| input.g_co2e_per_mj)
            .sum();
        Ok(grams / 1000.0 / kg_per_mj)
    }
}

impl Parts {
    /// Adds the gases of an input, kg per kg of product; `taken` is CO2 of the works that its capture hands on.
    fn add(
        &mut self,
        resolved: &Resolved,
        input: &Input,
        mut gases: GasVector,
        taken: f64,
        facts: &PactFacts,
    ) {
        let weigh = |gas: Gas, kg: f64| GasVector::of(gas, kg).co2e(resolved.gwp);
        match input.term {
            Some(Term::Eccs) if taken > 0.0 => {
                gases[Gas::Co2eUnsplit] += taken;
                if facts.storage_proven {
                    self.stored -= taken;
                } else {
                    self.leave_out("CO2 captured for storage, for its storage is not proven");
                }
            }
            Some(Term::Eccr) if taken > 0.0 => {
                gases[Gas::Co2Fossil] += taken;
                self.leave_out(
                    "the credit for CO2 sold in place of fossil CO2, for which the record has no field",
                );
            }
            _ => {}
        }
        let land = std::mem::take(&mut gases[Gas::Co2Land]);
        match (input.term, land < 0.0) {
            (_, true) if input.term != Some(Term::El) && facts.soil_carbon_traced => self.land_gain += land,
            (Some(Term::El), true) => self.leave_out("carbon gained by changing the use of land"),
            (_, true) => self.leave_out("carbon gained in soil, which is not traced"),
            (Some(Term::El), false) => self.land_use_change += land,
            (_, false) => self.land_loss += land,
        }
        let methane = std::mem::take(&mut gases[Gas::Ch4Biogenic]);
        self.biogenic_methane += weigh(Gas::Ch4Biogenic, methane);
        let fossil = gases.co2e(resolved.gwp);
        self.fossil += fossil;
        if input.term == Some(Term::Eec) {
            self.land_fossil += fossil;
        }
    }

    fn leave_out(&mut self, what: &'static str) {
        if !self.left_out.contains(&what) {
            self.left_out.push(what);
        }
    }
}

/// CO2 that the capture models of an input hand on, kg per recipe.
fn delivered(models: &OneOrMany<ModelUse>) -> f64 {
    let captures = models.list().iter().filter(|model| model.kind == "capture");
    captures
        .filter_map(|model| {
            let given = |name: &str| model.parameters.get(name).filter(|value| !value.is_null());
            mass(given("co2_delivered").or_else(|| given("co2_captured"))?)
        })
        .sum()
}

/// A mass as a plain figure in kg, or with its unit.
fn mass(value: &Value) -> Option<f64> {
    match value {
        Value::Object(amount) => {
            let (figure, unit) = (amount.get("value")?.as_f64()?, amount.get("unit")?.as_str()?);
            Quantity::read_as(figure, unit, Dimension::MASS).ok()
        }
        plain => plain.as_f64(),
    }
}
