//! Demand, backwards from 1 MJ of fuel at the wheel: how many recipes of each stage one MJ asks for, with shares and
//! with all shares 1.

use super::resolved::{Resolved, Stage};
use crate::core::domain::StageKind;

/// Recipes per MJ of fuel.
pub struct Demand {
    /// By stage and product: how many recipes the demand for the product alone would ask for.
    pub by_product: Vec<Vec<f64>>,
    /// By stage: recipes that the fuel carries, sum over products of demand x share / amount.
    pub scale: Vec<f64>,
    /// By stage and product with all shares 1.
    pub whole_by_product: Vec<Vec<f64>>,
    /// By stage: recipes with all shares 1; the largest over the products, for they come from one recipe.
    pub whole: Vec<f64>,
    /// By stage: fuel that the crop of one recipe makes with all shares 1, MJ. Where a stage takes crops of several
    /// regions the fuel is split between them, so that none is credited with the fuel of another.
    pub fuel_mj: Vec<f64>,
}

/// Works out the demand. `resolved.order` must run from suppliers to takers.
pub fn demand(resolved: &Resolved) -> Demand {
    let zeros = || {
        resolved
            .stages
            .iter()
            .map(|stage| vec![0.0; stage.products.len()])
            .collect::<Vec<_>>()
    };
    let mut demand = Demand {
        by_product: zeros(),
        scale: vec![0.0; resolved.stages.len()],
        whole_by_product: zeros(),
        whole: vec![0.0; resolved.stages.len()],
        fuel_mj: vec![0.0; resolved.stages.len()],
    };
    if let Some(last) = resolved.last {
        let recipes = 1.0 / resolved.fuel_mj(last).unwrap_or(f64::NAN);
        demand.by_product[last][0] = recipes;
        demand.whole_by_product[last][0] = recipes;
    }
    for &j in resolved.order.iter().rev() {
        let stage = &resolved.stages[j];
        demand.scale[j] = stage
            .products
            .iter()
            .zip(&demand.by_product[j])
            .map(|(product, recipes)| recipes * product.share)
            .sum();
        demand.whole[j] = demand.whole_by_product[j].iter().copied().fold(0.0, f64::max);
        for intake in &stage.intakes {
            demand.by_product[intake.from][intake.product] += demand.scale[j] * intake.recipes;
            demand.whole_by_product[intake.from][intake.product] += demand.whole[j] * intake.recipes;
        }
    }
    for (j, part) in fuel_parts(resolved).into_iter().enumerate() {
        if demand.whole[j] > 0.0 {
            demand.fuel_mj[j] = part / demand.whole[j];
        }
    }
    demand
}

/// How much of the fuel each stage's crop makes, 0 to 1.
fn fuel_parts(resolved: &Resolved) -> Vec<f64> {
    let mut grown = vec![false; resolved.stages.len()];
    for &j in &resolved.order {
        let stage = &resolved.stages[j];
        grown[j] = stage.kind().is_before_works()
            || stage.kind() == StageKind::Bought
            || stage.intakes.iter().any(|intake| grown[intake.from]);
    }
    let mut parts = vec![0.0; resolved.stages.len()];
    if let Some(last) = resolved.last {
        parts[last] = 1.0;
    }
    for &j in resolved.order.iter().rev() {
        parts[j] = f64::min(parts[j], 1.0);
        for (from, weight) in crop_weights(&resolved.stages[j], &grown) {
            parts[from] += parts[j] * weight;
        }
    }
    parts
}

/// The suppliers whose product becomes the product of a stage, and how much of it: by pure ethanol where the stage takes
/// ethanol, else by dry matter or whatever the crops are measured in.
fn crop_weights(stage: &Stage, grown: &[bool]) -> Vec<(usize, f64)> {
    let ethanol = stage.intakes.iter().any(|intake| intake.flow.is_ethanol());
    let crops: Vec<_> = stage
        .intakes
        .iter()
        .filter(|intake| {
            grown[intake.from] && !intake.flow.is_heat_or_power() && intake.flow.is_ethanol() == ethanol
        })
        .map(|intake| {
            let flow = &intake.flow;
            let amount = flow.pure_kg.or(flow.dry_kg()).unwrap_or(flow.base);
            let measured_in = flow.pure_kg.is_none().then_some(flow.dimension);
            (intake.from, measured_in, amount)
        })
        .collect();
    let sum = |like| -> f64 {
        let alike = crops.iter().filter(|(_, measured_in, _)| *measured_in == like);
        alike.map(|(_, _, amount)| amount).sum()
    };
    crops
        .iter()
        .map(|(from, measured_in, amount)| (*from, amount / sum(*measured_in)))
        .collect()
}
