//! Shares of a stage's burden between its products. Directive (EU) 2018/2001 Annex V Part C points 16 to 18: energy by
//! lower heating value; exergy where a stage gives only heat and power; residues and wastes take nothing.

use super::materials::Materials;
use super::resolved::Product;
use crate::core::documents::assessment::Step;
use crate::core::documents::pathway::{CoProduct, Flow, Stage};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::RuleSet;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::models::factors::step;
use crate::core::models::flow::{HEAT, Measured, note_unit_error};
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity, parse_unit};

/// Sets share and measure of every product; returns the unit of the measure.
pub fn share(
    stage: &Stage,
    products: &mut [Product],
    rules: &RuleSet,
    materials: &Materials,
    at: &Place,
    problems: &mut Problems,
    steps: &mut Vec<Step>,
) -> &'static str {
    let Some(method) = method(stage, products, rules, at, problems) else {
        return "";
    };
    let unit = match method {
        AllocationMethod::Exergy => "MJ of exergy",
        AllocationMethod::Mass => "kg dry",
        AllocationMethod::Economic => "of money",
        AllocationMethod::Energy | AllocationMethod::Substitution => "MJ",
    };
    if products.iter().filter(|product| product.shares_burden).count() < 2 {
        for (index, product) in products.iter_mut().enumerate() {
            product.share = if index == 0 { 1.0 } else { 0.0 };
        }
        return unit;
    }
    let before = problems.len();
    let co_products_at = at.field("co_products");
    let output_at = at.field("output");
    for (index, product) in products.iter_mut().enumerate() {
        if !product.shares_burden {
            continue;
        }
        let (place, flow) = match index {
            0 => (output_at, &stage.output.flow),
            _ => (co_products_at.item(index - 1), &stage.co_products[index - 1].flow),
        };
        let scene = Scene {
            flow,
            rules,
            materials,
            at: &place,
            is_output: index == 0,
            name: product.name,
        };
        let measured = match method {
            AllocationMethod::Exergy => exergy(&product.flow, &scene, problems, steps),
            AllocationMethod::Mass => mass(&product.flow, &scene, problems),
            AllocationMethod::Economic => value(&product.flow, &scene, problems),
            AllocationMethod::Energy | AllocationMethod::Substitution => {
                energy(&product.flow, &scene, problems, steps)
            }
        };
        product.measure = measured.unwrap_or(0.0);
    }
    if problems.len() > before {
        return unit;
    }
    let sum: f64 = products.iter().map(|product| product.measure).sum();
    if sum <= 0.0 || !sum.is_finite() {
        problems.add(
            at.field("co_products"),
            "The products hold nothing that could share the burden.",
            "Give amounts and heating values above zero.",
        );
        return unit;
    }
    for product in products.iter_mut().filter(|product| product.shares_burden) {
        product.share = product.measure / sum;
        let text = format!(
            "share of {}: {} / {} {unit}",
            product.name,
            plain(product.measure),
            plain(sum)
        );
        steps.push(step(text, product.share, "", &rules.source));
    }
    unit
}

fn method(
    stage: &Stage,
    products: &[Product],
    rules: &RuleSet,
    at: &Place,
    problems: &mut Problems,
) -> Option<AllocationMethod> {
    let energy_only = products[0].flow.is_heat_or_power();
    let odd = |product: &CoProduct| {
        let heat_or_power = product.material == HEAT || product.material == crate::core::models::flow::POWER;
        heat_or_power != energy_only
            && (heat_or_power || product.role == crate::core::documents::pathway::Role::CoProduct)
    };
    if stage.co_products.iter().any(odd) {
        problems.add(
            at.field("co_products"),
            "Heat or power cannot share a burden beside another product.",
            "Put the boiler house or turbine in a stage of its own, of kind utility, or use a model of kind chp; \
             it then carries what the unit that makes it emits.",
        );
        return None;
    }
    let usual = if energy_only {
        rules.allocation_heat_and_power
    } else {
        rules.allocation
    };
    let Some(asked) = stage.allocation else {
        return Some(usual);
    };
    let allowed = asked == usual || (!energy_only && rules.allocation_allowed.contains(&asked));
    if !allowed {
        let mut names: Vec<&str> = match energy_only {
            true => vec![usual.name()],
            false => rules
                .allocation_allowed
                .iter()
                .map(|method| method.name())
                .collect(),
        };
        names.sort_unstable();
        problems.add(
            at.field("allocation"),
            format!("{} does not allow sharing by {} here.", rules.id, asked.name()),
            format!("Use {}, or leave it out.", names.join(" or ")),
        );
        return None;
    }
    Some(asked)
}

struct Scene<'s> {
    flow: &'s Flow,
    rules: &'s RuleSet,
    materials: &'s Materials<'s>,
    at: &'s Place<'s>,
    is_output: bool,
    name: &'s str,
}

/// Energy of a product, MJ: ethanol by its pure mass, an intermediate by its dry matter, a co-product as it leaves.
fn energy(measured: &Measured, scene: &Scene, problems: &mut Problems, steps: &mut Vec<Step>) -> Option<f64> {
    let Scene {
        flow,
        rules,
        materials,
        at,
        is_output,
        name,
    } = scene;
    if let Some(pure) = measured.pure_kg {
        let lhv = rules.ethanol_lhv.value;
        let mj = pure * lhv;
        steps.push(step(
            format!("{name}: {} kg pure ethanol x {} MJ/kg", plain(pure), plain(lhv)),
            mj,
            "MJ",
            &rules.ethanol_lhv.source,
        ));
        return Some(mj);
    }
    if let Some(joules) = measured.energy_j() {
        return Some(joules / 1e6);
    }
    if let Some(own) = &flow.lhv {
        let unit = match parse_unit(&own.unit) {
            Ok(unit) => unit,
            Err(error) => {
                note_unit_error(&error, &at.field("lhv"), problems);
                return None;
            }
        };
        let value = unit.to_base(own.value).ok()? / 1e6;
        let per_mass = Dimension::ENERGY.per(Dimension::MASS);
        let per_volume = Dimension::ENERGY.per(Dimension::VOLUME);
        let mj = match (unit.dimension, measured.dimension) {
            (found, Dimension::MASS) if found == per_mass => measured.base * value,
            (found, Dimension::VOLUME) if found == per_volume => measured.base * value,
            (found, wanted) => {
                let words = wanted.describe();
                let detail = format!("{} is {}, but the amount is {words}.", own.unit, found.describe());
                problems.add(
                    at.field("lhv").field("unit"),
                    detail,
                    "Give MJ/kg for a mass or MJ/L for a volume.",
                );
                return None;
            }
        };
        let text = format!(
            "{name}: {} {} at {} {}",
            plain(flow.amount?),
            flow.unit.as_deref()?,
            plain(own.value),
            own.unit
        );
        steps.push(step(
            text,
            mj.max(0.0),
            "MJ",
            "heating value as entered, as it leaves",
        ));
        return Some(mj.max(0.0));
    }
    let (Some(wet), Some((lhv, source))) = (measured.wet_kg, materials.lhv_dry(&measured.material)) else {
        let detail = match measured.wet_kg {
            None => format!(
                "The {} is not given as a mass, so its energy is not known.",
                measured.material
            ),
            Some(_) => format!("No heating value of \"{}\" is known.", measured.material),
        };
        problems.add(
            at.field("lhv"),
            detail,
            "Add \"lhv\" to the flow (as it leaves), or \"lhv_dry\" to the material.",
        );
        return None;
    };
    let moisture = measured.moisture.unwrap_or(0.0);
    let water = rules.water_evaporation.value;
    if *is_output {
        let dry = wet * (1.0 - moisture);
        let mj = dry * lhv;
        steps.push(step(
            format!("{name}: {} kg dry x {} MJ/kg", plain(dry), plain(lhv)),
            mj,
            "MJ",
            &source,
        ));
        return Some(mj);
    }
    let as_it_leaves = (lhv * (1.0 - moisture) - water * moisture).max(0.0);
    steps.push(step(
        format!(
            "{name}, as it leaves: {} x (1 - {}) - {} x {}, at least 0",
            plain(lhv),
            plain(moisture),
            plain(water),
            plain(moisture)
        ),
        as_it_leaves,
        "MJ/kg",
        &source,
    ));
    let mj = wet * as_it_leaves;
    steps.push(step(
        format!("{name}: {} kg x {} MJ/kg", plain(wet), plain(as_it_leaves)),
        mj,
        "MJ",
        "",
    ));
    Some(mj)
}

/// Exergy of heat or power, MJ: heat by its Carnot factor, power by 1 (Annex V Part C points 1(b) and 16).
fn exergy(measured: &Measured, scene: &Scene, problems: &mut Problems, steps: &mut Vec<Step>) -> Option<f64> {
    let Scene {
        flow,
        rules,
        at,
        name,
        ..
    } = scene;
    let mj = measured.energy_j()? / 1e6;
    if measured.material != HEAT {
        steps.push(step(
            format!("{name}: {} MJ of power x 1", plain(mj)),
            mj,
            "MJ of exergy",
            &rules.source,
        ));
        return Some(mj);
    }
    let Some(celsius) = flow.temperature_c else {
        let remedy = "Add temperature_c, the temperature at delivery.";
        problems.add(
            at.field("temperature_c"),
            "Heat shares by its temperature, and none is given.",
            remedy,
        );
        return None;
    };
    let ambient = rules.ambient.value;
    let kelvin = celsius + 273.15;
    let carnot = (kelvin - ambient) / kelvin;
    if carnot <= 0.0 {
        let detail = format!("Heat at {celsius} degC is not above the surroundings.");
        problems.add(
            at.field("temperature_c"),
            detail,
            "Give the temperature at delivery in degC.",
        );
        return None;
    }
    steps.push(step(
        format!(
            "{name}: Carnot factor ({} - {}) / {}",
            plain(kelvin),
            plain(ambient),
            plain(kelvin)
        ),
        carnot,
        "",
        &rules.ambient.source,
    ));
    let exergy = mj * carnot;
    steps.push(step(
        format!("{name}: {} MJ of heat x {}", plain(mj), plain(carnot)),
        exergy,
        "MJ of exergy",
        "",
    ));
    Some(exergy)
}

fn mass(measured: &Measured, scene: &Scene, problems: &mut Problems) -> Option<f64> {
    let kg = measured.pure_kg.or_else(|| measured.dry_kg());
    if kg.is_none() {
        let detail = format!("The {} is not given as a mass.", measured.material);
        problems.add(scene.at.field("unit"), detail, "Give it in kg or t.");
    }
    kg
}

fn value(measured: &Measured, scene: &Scene, problems: &mut Problems) -> Option<f64> {
    let Some(price) = &scene.flow.price else {
        let detail = format!("Sharing by value needs the price of {}.", scene.name);
        problems.add(
            scene.at.field("price"),
            detail,
            "Add \"price\", such as 215 EUR/t.",
        );
        return None;
    };
    let price_at = scene.at.field("price");
    let price = match Quantity::read(price.value, &price.unit) {
        Ok(price) => price,
        Err(error) => {
            note_unit_error(&error, &price_at, problems);
            return None;
        }
    };
    let money = price.times(Quantity {
        value: measured.base,
        dimension: measured.dimension,
    });
    if money.dimension.as_currency().is_none() {
        let detail = "This price times this amount is no money.".to_owned();
        problems.add(
            price_at.field("unit"),
            detail,
            "Give a price per mass for a mass, per volume for a volume.",
        );
        return None;
    }
    Some(money.value)
}
