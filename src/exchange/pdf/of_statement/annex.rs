//! The workings of every stage and input, field first, as the assessment has them.

use super::super::sheet::{Chapter, Step, Working};
use super::say::{Sources, grams, worked};
use super::tables::name;
use crate::core::documents::assessment;
use crate::core::documents::statement::Statement;

pub(super) fn workings(statement: &Statement, sources: &mut Sources) -> Vec<Chapter> {
    let stages = statement.assessment.document.stages.iter();
    stages
        .map(|stage| {
            let shares = (!stage.workings.is_empty()).then(|| Working {
                name: "Demand and shares".to_owned(),
                result: String::new(),
                steps: steps(&stage.workings, sources),
            });
            let inputs = stage.inputs.iter().map(|input| {
                let label = if input.label.is_empty() {
                    &input.key
                } else {
                    &input.label
                };
                let result = match &input.replaced {
                    Some(why) => why.clone(),
                    None => format!("{} g CO2e/MJ, {}", worked(input.g_co2e_per_mj), input.term.name()),
                };
                Working {
                    name: label.clone(),
                    result,
                    steps: steps(&input.workings, sources),
                }
            });
            Chapter {
                name: name(stage),
                result: format!("{} g CO2e/MJ", grams(stage.g_co2e_per_mj)),
                workings: shares.into_iter().chain(inputs).collect(),
            }
        })
        .collect()
}

fn steps(steps: &[assessment::Step], sources: &mut Sources) -> Vec<Step> {
    steps
        .iter()
        .map(|step| Step {
            text: step.text.clone(),
            value: worked(step.value),
            unit: step.unit.clone(),
            source: sources.number(&step.source),
        })
        .collect()
}
