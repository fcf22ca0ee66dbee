//! Formulas of sharing on the sheet of stages: what a product weighs, per unit and in all.

use super::chain::{BASE, DRY, MOISTURE, PER_UNIT, STRENGTH};
use super::factors::{Constant, constant};
use super::flows::{ethanol_mj_per_kg, strength};
use super::page::{cell, figure};
use super::plan::Plan;
use crate::core::documents::pathway::Flow;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::engine::resolved::Stage;
use crate::core::models::flow::HEAT;
use crate::core::units::{Dimension, Quantity, parse_unit};

/// The two formulas of a product that shares, with their figures.
pub struct Weighed {
    /// Measure per unit of what it is taken of.
    pub per_unit: (String, f64),
    /// The measure.
    pub measure: (String, f64),
    /// How it comes about, in words.
    pub words: &'static str,
}

/// True if the products of a stage divide its burden between them.
pub fn shares(stage: &Stage) -> bool {
    let several = stage
        .products
        .iter()
        .filter(|product| product.shares_burden)
        .count()
        > 1;
    several && stage.allocation != Some(AllocationMethod::Substitution)
}

/// How a product of a stage weighs; none where it takes nothing.
pub fn weigh(plan: &Plan, j: usize, index: usize) -> Option<Weighed> {
    let stage = &plan.resolved.stages[j];
    let product = &stage.products[index];
    if !shares(stage) || !product.shares_burden {
        return None;
    }
    let row = plan.chain[j].product(index);
    let flow = match index {
        0 => &stage.document.output.flow,
        _ => &stage.document.co_products.get(index - 1)?.flow,
    };
    let of = |column: u16, least: bool| {
        let product_of = format!("{}*{}", cell(row, PER_UNIT), cell(row, column));
        if least {
            format!("=MAX(0,{product_of})")
        } else {
            format!("={product_of}")
        }
    };
    let (per_unit, column, least, words) = match stage.allocation? {
        AllocationMethod::Exergy => (
            exergy(plan, flow, &product.flow.material),
            BASE,
            false,
            "exergy per J",
        ),
        AllocationMethod::Mass if product.flow.pure_kg.is_some() => {
            (("=1".to_owned(), 1.0), DRY, false, "pure ethanol")
        }
        AllocationMethod::Mass => (("=1".to_owned(), 1.0), DRY, false, "dry matter"),
        AllocationMethod::Economic => (price(flow)?, BASE, false, "price per base unit"),
        AllocationMethod::Energy | AllocationMethod::Substitution => energy(plan, j, index, flow)?,
    };
    Some(Weighed {
        per_unit,
        measure: (of(column, least), product.measure),
        words,
    })
}

type PerUnit = ((String, f64), u16, bool, &'static str);

fn energy(plan: &Plan, j: usize, index: usize, flow: &Flow) -> Option<PerUnit> {
    let (resolved, rules) = (plan.resolved, plan.resolved.rules);
    let measured = &resolved.stages[j].products[index].flow;
    let row = plan.chain[j].product(index);
    if measured.pure_kg.is_some() {
        let own = measured.strength.unwrap_or(1.0);
        let last = resolved.last.filter(|_| index == 0);
        let wheel = last.and_then(|last| resolved.stages[last].products.first()?.flow.strength);
        let (formula, share) = match (last, wheel) {
            (Some(last), Some(wheel)) => {
                let other = cell(plan.chain[last].output, STRENGTH);
                let larger = format!("MAX({},{other})/100", cell(row, STRENGTH));
                (larger, own.max(wheel))
            }
            _ => (strength(row), own),
        };
        let per_kg = rules.ethanol_mj_per_kg(share);
        let formula = format!("={}", ethanol_mj_per_kg(rules, &formula));
        return Some(((formula, per_kg), DRY, true, "MJ/kg pure ethanol"));
    }
    if measured.energy_j().is_some() {
        return Some((("=1/1000000".to_owned(), 1e-6), BASE, false, "MJ per J"));
    }
    if let Some(own) = &flow.lhv {
        let unit = parse_unit(&own.unit).ok()?;
        let formula = format!("={}*{}/1000000", figure(own.value), figure(unit.factor));
        let found = own.value * unit.factor / 1e6;
        let words = match unit.dimension == Dimension::ENERGY.per(Dimension::MASS) {
            true => "MJ/kg as it leaves, as entered",
            false => "MJ/m3 as it leaves, as entered",
        };
        return Some(((formula, found), BASE, true, words));
    }
    let (lhv, _) = resolved.materials.lhv_dry(&measured.material)?;
    let at = plan.factors.material(&measured.material)?;
    if index == 0 {
        return Some(((format!("={at}"), lhv), DRY, false, "MJ/kg dry"));
    }
    let moisture = measured.moisture.unwrap_or(0.0);
    let found = (lhv * (1.0 - moisture) - rules.water_evaporation.value * moisture).max(0.0);
    let water = constant(Constant::WaterEvaporation);
    let wet = cell(row, MOISTURE);
    let formula = format!("=MAX(0,{at}*(1-{wet}/100)-{water}*{wet}/100)");
    Some(((formula, found), BASE, false, "MJ/kg as it leaves"))
}

fn exergy(plan: &Plan, flow: &Flow, material: &str) -> (String, f64) {
    let Some(celsius) = flow.temperature_c.filter(|_| material == HEAT) else {
        return ("=1/1000000".to_owned(), 1e-6);
    };
    let kelvin = celsius + 273.15;
    let ambient = plan.resolved.rules.ambient.value;
    let formula = format!(
        "=({c}+273.15-{a})/({c}+273.15)/1000000",
        c = figure(celsius),
        a = constant(Constant::Ambient)
    );
    (formula, (kelvin - ambient) / kelvin / 1e6)
}

fn price(flow: &Flow) -> Option<(String, f64)> {
    let own = flow.price.as_ref()?;
    let base = Quantity::read(own.value, &own.unit).ok()?.value;
    let unit = parse_unit(&own.unit).ok()?;
    Some((format!("={}*{}", figure(own.value), figure(unit.factor)), base))
}
