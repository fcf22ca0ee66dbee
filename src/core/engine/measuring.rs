//! Measures the flows of every stage: amounts in base units, strengths, moistures.

use super::graph::Graph;
use super::materials::Materials;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::pathway::{Pathway, Stage as StageDocument};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::rule_set::EthanolWater;
use crate::core::domain::{RuleSet, StageKind};
use crate::core::models::flow::{ETHANOL, Measured, measure};

/// The flows of one stage as measured; none where one cannot be.
#[derive(Default)]
pub(super) struct Flows {
    /// What it makes.
    pub(super) output: Option<Measured>,
    /// What else it makes.
    pub(super) co_products: Vec<Option<Measured>>,
    /// What it takes.
    pub(super) intakes: Vec<Option<Measured>>,
}

impl Flows {
    /// The output, or a co-product, by its index.
    pub(super) fn product(&self, index: usize) -> Option<&Measured> {
        match index {
            0 => self.output.as_ref(),
            _ => self.co_products.get(index - 1)?.as_ref(),
        }
    }
}

/// Measures every flow; findings tell what was taken for granted.
pub(super) fn measure_all(
    pathway: &Pathway,
    rules: &RuleSet,
    materials: &Materials,
    graph: &Graph,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> Vec<Flows> {
    let stages_at = Place::ROOT.field("stages");
    let mut flows: Vec<Flows> = Vec::with_capacity(pathway.stages.len());
    for (j, stage) in pathway.stages.iter().enumerate() {
        let at = stages_at.item(j);
        let output_at = at.field("output");
        let output = materials
            .check(&stage.output.material, &output_at.field("material"), problems)
            .then(|| {
                measure(
                    &stage.output.flow,
                    &stage.output.material,
                    rules,
                    &output_at,
                    problems,
                )
            })
            .flatten();
        let products_at = at.field("co_products");
        let co_products = stage
            .co_products
            .iter()
            .enumerate()
            .map(|(k, product)| {
                let place = products_at.item(k);
                let known = materials.check(&product.material, &place.field("material"), problems);
                known
                    .then(|| measure(&product.flow, &product.material, rules, &place, problems))
                    .flatten()
            })
            .collect();
        flows.push(Flows {
            output,
            co_products,
            intakes: Vec::new(),
        });
    }
    strengths_of_energy(rules, graph, &mut flows, problems);
    for (j, stage) in pathway.stages.iter().enumerate() {
        strength_missing(flows[j].output.as_ref(), stage, "output", rules, findings);
        for (product, flow) in stage.co_products.iter().zip(&flows[j].co_products) {
            let field = format!("co_products.{}", product.key);
            strength_missing(flow.as_ref(), stage, &field, rules, findings);
        }
        let intakes_at = stages_at.item(j);
        let intakes_at = intakes_at.field("intakes");
        let mut received = Vec::with_capacity(stage.intakes.len());
        for (k, intake) in stage.intakes.iter().enumerate() {
            let place = intakes_at.item(k);
            let Some((i, product)) = graph.sources[j][k] else {
                received.push(None);
                continue;
            };
            let material = match product {
                0 => &pathway.stages[i].output.material,
                _ => &pathway.stages[i].co_products[product - 1].material,
            };
            let without_amount = intake.flow.amount.is_none() && intake.flow.unit.is_none();
            if stage.kind == StageKind::Combustion && without_amount && material == ETHANOL {
                received.push(burnt(flows[j].output.as_ref(), flows[i].product(product)));
                continue;
            }
            let mut flow = measure(&intake.flow, material, rules, &place, problems);
            if let (Some(flow), Some(source)) = (flow.as_mut(), flows[i].product(product)) {
                strength_of_energy(flow, source.strength, rules, &place, problems);
            }
            let field = format!("intakes.{}", intake.from);
            strength_missing(flow.as_ref(), stage, &field, rules, findings);
            received.push(flow);
        }
        flows[j].intakes = received;
    }
    flows
}

/// Where the water of ethanol counts, fuel entered as energy without a strength has that of the fuel it is made from.
fn strengths_of_energy(rules: &RuleSet, graph: &Graph, flows: &mut [Flows], problems: &mut Problems) {
    let stages_at = Place::ROOT.field("stages");
    for &j in &graph.order {
        let sources = graph.sources[j].iter().flatten();
        let strength = sources
            .filter_map(|(i, product)| flows[*i].product(*product))
            .find_map(|flow| flow.strength);
        let at = stages_at.item(j);
        if let Some(output) = flows[j].output.as_mut() {
            strength_of_energy(output, strength, rules, &at.field("output"), problems);
        }
    }
}

fn strength_of_energy(
    flow: &mut Measured,
    strength: Option<f64>,
    rules: &RuleSet,
    at: &Place,
    problems: &mut Problems,
) {
    let lacks = flow.is_ethanol() && flow.energy_j().is_some() && !flow.strength_given;
    if let (true, EthanolWater::Evaporated, Some(strength)) = (lacks, rules.ethanol_water, strength) {
        flow.take_strength(strength, rules, at, problems);
        flow.strength_given = true;
    }
}

/// What a combustion stage takes when it states the fuel burnt only: the same pure ethanol.
fn burnt(output: Option<&Measured>, source: Option<&Measured>) -> Option<Measured> {
    let (output, source) = (output?, source?);
    let pure = output.pure_kg?;
    let strength = source.strength.unwrap_or(1.0);
    Some(Measured {
        pure_kg: Some(pure),
        strength: Some(strength),
        wet_kg: Some(pure / strength),
        ..output.clone()
    })
}

fn strength_missing(
    flow: Option<&Measured>,
    stage: &StageDocument,
    field: &str,
    rules: &RuleSet,
    findings: &mut Vec<Finding>,
) {
    let Some(flow) = flow.filter(|flow| flow.is_ethanol() && !flow.strength_given) else {
        return;
    };
    // Where water does not count, fuel given as energy holds the same pure ethanol whatever its strength.
    if flow.energy_j().is_some() && rules.ethanol_water == EthanolWater::Ignored {
        return;
    }
    findings.push(Finding {
        id: "K-04".to_owned(),
        severity: Severity::Warn,
        stage: stage.key.clone(),
        field: field.to_owned(),
        message: format!(
            "The {field} of {} has no strength and counts as pure ethanol.",
            stage.title()
        ),
        remedy: "Enter it in % mass or % vol at 20 °C.".to_owned(),
        reason: None,
    });
}
