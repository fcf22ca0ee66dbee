//! Links each intake to the product it uses up: how much of the supplier's recipe one recipe of the taker needs.

use super::graph::{Graph, Source};
use super::measuring::Flows;
use super::resolved::Intake;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::pathway::{Pathway, Stage as StageDocument};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::models::flow::Measured;

/// The intakes of stage `j`; one that cannot be linked is a problem.
pub(super) fn link(
    pathway: &Pathway,
    j: usize,
    graph: &Graph,
    flows: &[Flows],
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> Vec<Intake> {
    let document = &pathway.stages[j];
    let intakes_at = at.field("intakes");
    let mut out = Vec::with_capacity(document.intakes.len());
    for (k, intake) in document.intakes.iter().enumerate() {
        let Some(source) = graph.sources[j][k] else {
            continue;
        };
        let (Some(flow), Some(supply)) = (&flows[j].intakes[k], flows[source.0].product(source.1)) else {
            continue;
        };
        let place = intakes_at.item(k);
        let Some(recipes) = recipes(flow, supply, &place, problems) else {
            continue;
        };
        let moistures = (flow.moisture.is_some(), supply.moisture.is_some());
        if moistures.0 != moistures.1 && !flow.is_ethanol() {
            findings.push(one_moisture(document, intake.from.as_str(), moistures.0));
        }
        let (from, product): Source = source;
        out.push(Intake {
            from,
            product,
            recipes,
            flow: flow.clone(),
            carbon_percent_dry: intake.flow.carbon_percent_dry,
        });
    }
    out
}

/// Intake over product: on pure ethanol, on dry matter where both have a moisture, else as entered.
fn recipes(flow: &Measured, supply: &Measured, at: &Place, problems: &mut Problems) -> Option<f64> {
    if let (Some(taken), Some(made)) = (flow.pure_kg, supply.pure_kg) {
        return Some(taken / made);
    }
    if flow.dimension != supply.dimension {
        let detail = format!(
            "The intake is {}, but its source makes {}.",
            flow.dimension.describe(),
            supply.dimension.describe()
        );
        problems.add(
            at.field("unit"),
            detail,
            format!("Give it in {}.", supply.dimension.examples()),
        );
        return None;
    }
    match (flow.moisture, supply.moisture, flow.dry_kg(), supply.dry_kg()) {
        (Some(_), Some(_), Some(taken), Some(made)) => Some(taken / made),
        _ => Some(flow.base / supply.base),
    }
}

fn one_moisture(stage: &StageDocument, from: &str, intake_has: bool) -> Finding {
    let which = if intake_has { "the intake" } else { "the output" };
    Finding {
        id: "K-03".to_owned(),
        severity: Severity::Warn,
        stage: stage.key.clone(),
        field: format!("intakes.{from}"),
        message: format!(
            "Of the intake of {} and the output of {from} only {which} has a moisture, so they are matched wet.",
            stage.title()
        ),
        remedy: "Enter the other moisture.".to_owned(),
        reason: None,
    }
}
