//! Group B: shares of the burden.

use super::{Subject, finding};
use crate::core::documents::assessment::{Finding, Severity, StageResult};
use crate::core::domain::StageKind;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::engine::resolved::Resolved;
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity};

/// Runs the group.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    for stage in &subject.assessment.stages {
        findings.extend(add_to_one(stage));
        findings.extend(within_one(stage));
        findings.extend(from_measures(stage));
    }
    findings.extend(after_split(subject.resolved));
    findings.extend(wet_value(subject.resolved));
    findings.extend(capture_after_split(subject.resolved));
}

/// B-01: the shares of a stage add to one.
pub fn add_to_one(stage: &StageResult) -> Option<Finding> {
    let sum: f64 = stage.products.iter().map(|product| product.share).sum();
    (!stage.products.is_empty() && (sum - 1.0).abs() > 1e-9).then(|| {
        let message = format!("The shares of {} add to {}, not 1.", stage.name, plain(sum));
        let remedy = "Correct the amounts or heating values of its products.";
        finding("B-01", Severity::Block, &stage.key, "products", message, remedy)
    })
}

/// B-02: no share below zero or above one.
pub fn within_one(stage: &StageResult) -> Vec<Finding> {
    stage
        .products
        .iter()
        .filter(|product| !(0.0..=1.0).contains(&product.share))
        .map(|product| {
            let message = format!("{} has a share of {}.", product.name, plain(product.share));
            let remedy = "Correct its amount, moisture or heating value.";
            finding(
                "B-02",
                Severity::Block,
                &stage.key,
                &product.product,
                message,
                remedy,
            )
        })
        .collect()
}

/// B-07: the shares follow from what the sharing measured.
pub fn from_measures(stage: &StageResult) -> Vec<Finding> {
    let sum: f64 = stage.products.iter().map(|product| product.measure).sum();
    if sum <= 0.0 {
        return Vec::new();
    }
    stage
        .products
        .iter()
        .filter(|product| (product.share - product.measure / sum).abs() > 1e-6)
        .map(|product| {
            let expected = plain(product.measure / sum);
            let message = format!(
                "The share of {} should be {expected}, not {}.",
                product.name,
                plain(product.share)
            );
            finding(
                "B-07",
                Severity::Block,
                &stage.key,
                &product.product,
                message,
                "Work the assessment out again.",
            )
        })
        .collect()
}

/// True if co-products take a part of the burden of a stage: not by substitution, where all of it stays with the output.
fn splits(resolved: &Resolved, j: usize) -> bool {
    let stage = &resolved.stages[j];
    let shares = stage.products.iter().skip(1).any(|product| product.shares_burden);
    shares && stage.allocation != Some(AllocationMethod::Substitution)
}

/// Stages upstream of `j`, itself left out.
fn upstream(resolved: &Resolved, j: usize) -> Vec<usize> {
    let mut seen = vec![false; resolved.stages.len()];
    let mut open = vec![j];
    while let Some(here) = open.pop() {
        for intake in &resolved.stages[here].intakes {
            if !seen[intake.from] {
                seen[intake.from] = true;
                open.push(intake.from);
            }
        }
    }
    (0..seen.len()).filter(|i| seen[*i]).collect()
}

/// B-05: a stage that handles a co-product after the split burdens the ethanol alone.
pub fn after_split(resolved: &Resolved) -> Vec<Finding> {
    let mut out = Vec::new();
    for (j, stage) in resolved.stages.iter().enumerate() {
        let handles = stage.kind() == StageKind::CoProductHandling
            && stage.products[0].flow.is_ethanol()
            && !splits(resolved, j)
            && !stage.inputs.is_empty();
        if !handles {
            continue;
        }
        let Some(split) = upstream(resolved, j).into_iter().find(|i| splits(resolved, *i)) else {
            continue;
        };
        let product = resolved.stages[split]
            .products
            .iter()
            .skip(1)
            .find(|p| p.shares_burden);
        let product = product.map_or("a co-product", |p| p.name);
        let name = stage.document.title();
        let message =
            format!("{name} works on {product} alone, after the split, and cannot be shared with ethanol.");
        let remedy = format!("Let {name} take {product} as its intake.");
        out.push(finding(
            "B-05",
            Severity::Block,
            &stage.document.key,
            "intakes",
            message,
            &remedy,
        ));
    }
    out
}

/// B-06: a heating value of the dry matter was entered although water leaves with the product.
pub fn wet_value(resolved: &Resolved) -> Vec<Finding> {
    let mut out = Vec::new();
    for stage in &resolved.stages {
        for product in &stage.document.co_products {
            let (Some(lhv), Some(moisture)) = (&product.flow.lhv, product.flow.moisture_percent) else {
                continue;
            };
            let entered = Quantity::read_as(lhv.value, &lhv.unit, Dimension::ENERGY.per(Dimension::MASS));
            let Some(dry) = resolved.lhv_dry(&product.material) else {
                continue;
            };
            let Ok(entered) = entered else { continue };
            if moisture > 1.0 && (entered / 1e6 / dry - 1.0).abs() < 0.005 {
                let message = format!(
                    "The heating value of {} was entered dry although {} % water leaves with it.",
                    product.name,
                    plain(moisture)
                );
                let remedy = "Enter it as it leaves, or leave it out and give the moisture.";
                let field = format!("co_products.{}", product.key);
                out.push(finding(
                    "B-06",
                    Severity::Warn,
                    &stage.document.key,
                    &field,
                    message,
                    remedy,
                ));
            }
        }
    }
    out
}

/// G-04: a capture stage stands before the stage whose co-products share the burden.
pub fn capture_after_split(resolved: &Resolved) -> Vec<Finding> {
    let mut out = Vec::new();
    for (j, stage) in resolved
        .stages
        .iter()
        .enumerate()
        .filter(|(_, stage)| stage.kind() == StageKind::Capture)
    {
        let Some(split) = upstream(resolved, j).into_iter().find(|i| splits(resolved, *i)) else {
            continue;
        };
        let (name, split) = (stage.document.title(), resolved.stages[split].document.title());
        let message = format!("{name} stands after {split}, so ethanol alone gets the CO2 credit.");
        let remedy = format!("Move {name} before {split} or give the reason.");
        out.push(finding(
            "G-04",
            Severity::Warn,
            &stage.document.key,
            "intakes",
            message,
            &remedy,
        ));
    }
    out
}
