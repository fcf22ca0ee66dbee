//! The arithmetic of the chain in steps: from a volume to pure ethanol, from one stage to the next, from 1 MJ at the wheel to
//! the recipes of a stage.

use super::demand::Demand;
use super::resolved::{Intake, Resolved, Stage};
use crate::core::documents::assessment::Step;
use crate::core::models::factors::step;
use crate::core::models::flow::Measured;
use crate::core::units::Dimension;
use crate::core::units::rounding::plain;

const DENSITY: &str = "OIML R 22 (1975) general formula";

/// Steps from 1 MJ at the wheel to the recipes of a stage, its shares first.
pub fn chain(resolved: &Resolved, demand: &Demand, j: usize) -> Vec<Step> {
    let stage = &resolved.stages[j];
    let mut steps = stage.share_steps.clone();
    steps.extend(pure(stage));
    if resolved.last == Some(j) {
        steps.extend(last(resolved, demand, j));
    }
    for (t, taker) in resolved.stages.iter().enumerate() {
        for intake in taker.intakes.iter().filter(|intake| intake.from == j) {
            steps.extend(taken(stage, taker, intake, demand.scale[t]));
        }
    }
    let parts: Vec<String> = stage
        .products
        .iter()
        .zip(&demand.by_product[j])
        .filter(|(_, recipes)| **recipes != 0.0)
        .map(|(product, recipes)| format!("{} x share {}", plain(*recipes), plain(product.share)))
        .collect();
    let words = if parts.is_empty() {
        "none".to_owned()
    } else {
        parts.join(" + ")
    };
    steps.push(step(
        format!("recipes that the fuel carries: {words}"),
        demand.scale[j],
        "recipes per MJ with shares",
        "",
    ));
    steps
}

/// From the output as entered to its pure ethanol.
fn pure(stage: &Stage) -> Vec<Step> {
    let output = &stage.products[0].flow;
    let entered = &stage.document.output.flow;
    let (Some(pure), Some(wet), Some(strength), Some(amount), Some(unit)) = (
        output.pure_kg,
        output.wet_kg,
        output.strength,
        entered.amount,
        entered.unit.as_deref(),
    ) else {
        return Vec::new();
    };
    let mut steps = Vec::new();
    if output.dimension == Dimension::VOLUME {
        let density = wet / output.base;
        steps.push(step(
            format!(
                "output {} {unit} = {} m3, x {} kg/m3 at {} % mass and {} degC",
                plain(amount),
                plain(output.base),
                plain(density),
                plain(100.0 * strength),
                plain(output.celsius.unwrap_or(0.0)),
            ),
            wet,
            "kg",
            DENSITY,
        ));
    }
    if output.dimension != Dimension::ENERGY {
        let text = format!("output {} kg x {} ethanol by mass", plain(wet), plain(strength));
        steps.push(step(text, pure, "kg pure ethanol", ""));
    }
    steps
}

/// One megajoule over the energy of one recipe of the last stage.
fn last(resolved: &Resolved, demand: &Demand, j: usize) -> [Step; 2] {
    let output = &resolved.stages[j].products[0].flow;
    let energy = resolved.fuel_mj(j).unwrap_or(0.0);
    let text = format!(
        "one recipe: {} kg pure ethanol x {}",
        plain(output.pure_kg.unwrap_or(0.0)),
        resolved.rules.ethanol_words(output.strength.unwrap_or(1.0))
    );
    [
        step(text, energy, "MJ", &resolved.rules.ethanol_lhv.source),
        step(
            format!("1 MJ / {} MJ per recipe", plain(energy)),
            demand.by_product[j][0],
            "recipes per MJ",
            "",
        ),
    ]
}

/// What one taker asks for: its intake over the product, times its own recipes.
fn taken(stage: &Stage, taker: &Stage, intake: &Intake, recipes: f64) -> [Step; 2] {
    let product = &stage.products[intake.product];
    let title = taker.document.title();
    let (taken, made, unit) = basis(&intake.flow, &product.flow);
    [
        step(
            format!(
                "{title} takes {} of the {} {unit} of {} in one recipe",
                plain(taken),
                plain(made),
                product.name
            ),
            intake.recipes,
            "recipes",
            "",
        ),
        step(
            format!("x {} recipes of {title} per MJ", plain(recipes)),
            intake.recipes * recipes,
            "recipes per MJ",
            "",
        ),
    ]
}

/// What an intake and its source were matched on.
fn basis(taken: &Measured, made: &Measured) -> (f64, f64, &'static str) {
    if let (Some(taken), Some(made)) = (taken.pure_kg, made.pure_kg) {
        return (taken, made, "kg pure ethanol");
    }
    if let (Some(_), Some(_), Some(taken), Some(made)) =
        (taken.moisture, made.moisture, taken.dry_kg(), made.dry_kg())
    {
        return (taken, made, "kg dry matter");
    }
    let unit = match made.dimension {
        Dimension::MASS => "kg",
        Dimension::VOLUME => "m3",
        Dimension::AREA => "m2",
        _ => "J",
    };
    (taken.base, made.base, unit)
}
