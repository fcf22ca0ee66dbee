//! Demand, backwards from 1 MJ of fuel at the wheel: how many recipes of each stage one MJ asks for, with shares and
//! with all shares 1.

use super::resolved::Resolved;

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
    };
    if let Some(last) = resolved.last {
        let lhv = resolved.rules.ethanol_lhv.value;
        let pure = resolved.stages[last].products[0].flow.pure_kg.unwrap_or(f64::NAN);
        let recipes = 1.0 / (pure * lhv);
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
    demand
}
