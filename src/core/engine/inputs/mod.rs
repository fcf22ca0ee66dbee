//! Prices the inputs of a stage: amounts with factors, given gases, models, and the stated terms of bought fuel.

mod by_factor;
mod by_model;
mod capture;
mod entry;
mod stated;

pub use by_factor::by_factor;
pub use entry::Entry;
pub use stated::stated;

use super::resolved::Input;
use crate::core::documents::amount::Origin;
use crate::core::documents::assessment::Finding;
use crate::core::documents::input::{Input as InputDocument, ModelUse};
use crate::core::documents::pathway::Stage;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::{Gas, StageKind};
use crate::core::models::Setting;
use crate::core::models::factors::step;
use crate::core::models::flow::Measured;
use crate::core::units::{Dimension, Quantity};
use by_model::by_model;

/// Prices every input of a stage.
pub fn inputs(
    stage: &Stage,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> Vec<Input> {
    let capture_term = capture::stage_term(stage);
    capture::one_use(stage, at, problems);
    let inputs_at = at.field("inputs");
    let mut out = Vec::with_capacity(stage.inputs.len());
    for (index, document) in stage.inputs.iter().enumerate() {
        let place = inputs_at.item(index);
        check_extras(document, &place, problems);
        let entry = Entry {
            stage,
            document,
            setting,
            at: place,
        };
        let mut input = Input {
            key: document.key.clone(),
            label: document.label.clone().unwrap_or_else(|| document.key.clone()),
            origin: document.origin,
            ..Input::default()
        };
        let mut fixed_term = None;
        let mut origins = Vec::new();
        if let Some(uses) = &document.model {
            let models = by_model(&entry, uses, &mut input, problems, findings);
            fixed_term = models.term;
            origins = models.origins;
        } else if let Some(gases) = document.gases {
            input.gases = gases;
            input.biogenic_kg = gases[Gas::Co2Biogenic];
            for (gas, kg) in gases.entries().filter(|(_, kg)| *kg != 0.0) {
                let unit = format!("kg {}", gas.name());
                input
                    .steps
                    .push(step("as entered, per recipe".to_owned(), kg, &unit, ""));
            }
        } else {
            by_factor(&entry, &mut input, problems, findings);
        }
        input.term = Some(fixed_term.unwrap_or(match stage.kind {
            StageKind::Capture => capture_term,
            kind => kind.term(),
        }));
        input.biogenic_kg = if input.fermentation_kg.is_some() {
            0.0
        } else {
            input.biogenic_kg
        };
        trust(document, &origins, &mut input);
        out.push(input);
    }
    if out.iter().any(|input| !input.per_fuel.is_empty()) {
        let area = recipe_ha(stage, setting);
        out.iter_mut().for_each(|input| input.recipe_ha = area);
    }
    out
}

/// Area of one recipe, ha: the largest that the output, an intake or the models of one input name.
fn recipe_ha(stage: &Stage, setting: &Setting) -> Option<f64> {
    let flows = setting.output.into_iter().chain(setting.intakes);
    let flows = flows.filter_map(Measured::area_m2).map(|m2| m2 / 1e4);
    let area = |model: &ModelUse| match model.parameters.get("area_ha")? {
        serde_json::Value::Object(amount) => {
            let (value, unit) = (amount.get("value")?.as_f64()?, amount.get("unit")?.as_str()?);
            Quantity::read_as(value, unit, Dimension::AREA)
                .ok()
                .map(|m2| m2 / 1e4)
        }
        plain => plain.as_f64(),
    };
    let inputs = stage.inputs.iter().filter_map(|input| input.model.as_ref());
    let named = inputs.map(|uses| uses.list().iter().filter_map(area).sum::<f64>());
    flows.chain(named).reduce(f64::max)
}

fn check_extras(document: &InputDocument, at: &Place, problems: &mut Problems) {
    if let Some(percent) = document
        .estimated_percent
        .filter(|percent| !(0.0..=100.0).contains(percent))
    {
        let detail = format!("{percent} % is outside 0 to 100 %.");
        problems.add(
            at.field("estimated_percent"),
            detail,
            "Give the estimated part of the figure in %.",
        );
    }
    if let Some(ratio) = document
        .net_per_gross
        .filter(|ratio| !(*ratio > 0.0 && *ratio <= 1.0))
    {
        let detail = format!("{ratio} is no ratio of net to gross heating value.");
        problems.add(
            at.field("net_per_gross"),
            detail,
            "Give it above 0 and at most 1, such as 0.9.",
        );
    }
}

/// How much of a figure is primary data and how much an estimate.
fn trust(document: &InputDocument, origins: &[Option<Origin>], input: &mut Input) {
    let estimated = document.estimated_percent.unwrap_or(0.0) / 100.0;
    match document.origin {
        Some(origin) if origin.is_primary() => {
            input.primary = 1.0 - estimated;
            input.estimated = estimated;
        }
        Some(Origin::Calculated) => {
            let all = !origins.is_empty()
                && origins
                    .iter()
                    .all(|origin| origin.is_some_and(Origin::is_primary));
            input.primary = if all { 1.0 - estimated } else { 0.0 };
            input.estimated = estimated;
        }
        Some(Origin::Estimated) => input.estimated = 1.0,
        _ => input.estimated = estimated,
    }
}
