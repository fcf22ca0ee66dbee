//! The assessment of a plan: every figure per MJ of fuel, with its workings.

use super::carbon::{self, Basis};
use super::demand::{Demand, demand};
use super::inventory::{counts, fuel_steps, recipe_gases, totals};
use super::resolved::{Input, Resolved, Stage};
use super::{saving, workings};
use crate::core::documents::assessment::{
    Assessment, FORMAT, Finding, InputResult, Memo, Net, ProductShare, Severity, StageResult, Step,
};
use crate::core::documents::pathway::Pathway;
use crate::core::documents::problem::{Problem, Problems};
use crate::core::documents::{assessment, canonical};
use crate::core::domain::{Gas, GasVector, StageKind, Term};
use crate::core::models::factors::step;
use crate::core::units::rounding::plain;

/// An assessment, and what the checks need to know about how it came about.
pub struct Assessed {
    /// The document; its findings are those of the figures as entered, the checks add theirs.
    pub assessment: Assessment,
    /// What the carbon closure rests on.
    pub carbon_basis: Basis,
}

/// Version of the program, as assessments name it.
pub const PROGRAM: &str = env!("CARGO_PKG_VERSION");

/// Assesses a plan.
///
/// # Errors
/// When a figure leaves the range of a double: a problem of the whole document.
pub fn assess(resolved: &Resolved, workings: bool) -> Result<Assessed, Problems> {
    let demand = demand(resolved);
    let mut findings = resolved.findings.clone();
    let sums = totals(resolved, &demand);
    let net = sums.terms.sum();
    if !net.is_finite() || !sums.gases.is_finite() {
        return Err(Problem {
            pointer: "/stages".to_owned(),
            detail: "The amounts give no finite figure per MJ.".to_owned(),
            remedy: "Check the sizes of amounts and their units.".to_owned(),
        }
        .into());
    }
    let (carbon, carbon_basis) =
        carbon::carbon(resolved, &demand, &resolved.materials, &sums.terms, &mut findings);
    let reach = saving::reach(resolved);
    let comparator = resolved.rules.comparator.value;
    let saving_percent = saving::saving_percent(net, comparator, &reach);
    let thresholds = saving::thresholds(resolved, saving_percent, &mut findings);
    if !reach.left_out.is_empty() {
        findings.push(partial(&reach.left_out));
    }
    findings.extend(empty_stages(resolved));
    let stages = stages(resolved, &demand, workings);
    let (primary, estimated) = trust(resolved, &stages);
    let assessment = Assessment {
        format: FORMAT.to_owned(),
        rule_set: resolved.rules.id.clone(),
        gwp_set: resolved.gwp.id.clone(),
        pathway_hash: resolved.hash.clone(),
        pathway_name: resolved.pathway.name.clone(),
        program: PROGRAM.to_owned(),
        basis: reach.basis,
        example: resolved.pathway.example,
        net: Net {
            g_co2e_per_mj: net,
            gases_g_per_mj: sums.gases,
        },
        comparator_g_co2e_per_mj: comparator,
        saving_percent,
        thresholds,
        terms_g_co2e_per_mj: sums.terms,
        memo: Memo {
            e_u_not_counted_g_co2e_per_mj: sums.use_not_counted,
        },
        stages,
        carbon,
        primary_data_percent: primary,
        estimated_percent: estimated,
        findings,
    };
    Ok(Assessed {
        assessment,
        carbon_basis,
    })
}

/// The hash of a pathway's canonical bytes.
///
/// # Errors
/// A problem of the whole document when a figure is not finite.
pub fn hash(pathway: &Pathway) -> Result<String, Problems> {
    match canonical::bytes(pathway) {
        Ok(bytes) => Ok(canonical::hash(&bytes)),
        Err(error) => Err(Problem {
            pointer: String::new(),
            detail: format!("The document has no canonical form: {error}."),
            remedy: "Give finite figures.".to_owned(),
        }
        .into()),
    }
}

fn partial(left_out: &[String]) -> Finding {
    Finding {
        id: "K-06".to_owned(),
        severity: Severity::Block,
        stage: String::new(),
        field: "stages".to_owned(),
        message: format!(
            "This pathway leaves out {}; no saving is printed.",
            left_out.join(", ")
        ),
        remedy: "Enter the missing stages or use a published default for their term.".to_owned(),
        reason: None,
    }
}

/// K-06 for a stage of growing or making that has no input and whose term no default value covers: its zero is no figure.
fn empty_stages(resolved: &Resolved) -> Vec<Finding> {
    let covered = |term: Term| resolved.defaults.iter().any(|default| default.term == term);
    let works = |stage: &&Stage| {
        matches!(stage.kind(), StageKind::Cultivation | StageKind::Processing)
            && stage.inputs.is_empty()
            && !covered(stage.kind().term())
    };
    let finding = |stage: &Stage| Finding {
        id: "K-06".to_owned(),
        severity: Severity::Block,
        stage: stage.document.key.clone(),
        field: "inputs".to_owned(),
        message: format!(
            "{} has no inputs, so it counts as nothing.",
            stage.document.title()
        ),
        remedy: "Enter what it uses, or use a published default for its term.".to_owned(),
        reason: None,
    };
    resolved.stages.iter().filter(works).map(finding).collect()
}

fn stages(resolved: &Resolved, demand: &Demand, workings: bool) -> Vec<StageResult> {
    let mut out = Vec::with_capacity(resolved.stages.len() + resolved.defaults.len());
    for &j in &resolved.order {
        out.push(stage(resolved, demand, j, workings));
    }
    out.extend(resolved.defaults.iter().map(|default| {
        let gases = GasVector::of(Gas::Co2eUnsplit, default.g_per_mj);
        let text = format!("default value of {} of {}", default.key, default.row);
        let input = InputResult {
            key: default.key.to_owned(),
            label: text.clone(),
            term: default.term,
            g_co2e_per_mj: default.g_per_mj,
            gases_g_per_mj: gases,
            recipe_gases_kg: GasVector::ZERO,
            replaced: None,
            workings: vec![step(text, default.g_per_mj, "g CO2e/MJ", &default.source)],
        };
        StageResult {
            key: format!("default:{}", default.key),
            kind: "default".to_owned(),
            name: format!("Published default of {}", default.key),
            share: 1.0,
            carried_share: 1.0,
            demand: assessment::Demand {
                amount: 1.0,
                unit: "MJ".to_owned(),
            },
            g_co2e_per_mj: default.g_per_mj,
            unallocated_g_co2e_per_mj: default.g_per_mj,
            gases_g_per_mj: gases,
            products: Vec::new(),
            workings: Vec::new(),
            inputs: vec![input],
        }
    }));
    out
}

fn stage(resolved: &Resolved, demand: &Demand, j: usize, workings: bool) -> StageResult {
    let stage = &resolved.stages[j];
    let (scale, whole) = (demand.scale[j], demand.whole[j]);
    let (mut sum, mut unshared, mut gases) = (0.0, 0.0, GasVector::ZERO);
    let mut inputs = Vec::with_capacity(stage.inputs.len());
    for input in &stage.inputs {
        let recipe = recipe_gases(input, demand.fuel_mj[j]);
        let result = input_result(resolved, input, recipe, (scale, demand.fuel_mj[j]), workings);
        sum += result.g_co2e_per_mj;
        gases += result.gases_g_per_mj;
        if counts(resolved, input) {
            unshared += (recipe * (1000.0 * whole)).co2e(resolved.gwp);
        }
        inputs.push(result);
    }
    let output = &stage.products[0];
    let amount = stage.document.output.flow.amount.unwrap_or(0.0);
    StageResult {
        key: stage.document.key.clone(),
        kind: stage.kind().name().to_owned(),
        name: stage.document.title().to_owned(),
        share: output.share,
        carried_share: if whole > 0.0 { scale / whole } else { 0.0 },
        demand: assessment::Demand {
            amount: demand.by_product[j][0] * amount,
            unit: stage.document.output.flow.unit.clone().unwrap_or_default(),
        },
        g_co2e_per_mj: sum,
        unallocated_g_co2e_per_mj: unshared,
        gases_g_per_mj: gases,
        products: shares(stage),
        workings: if workings {
            workings::chain(resolved, demand, j)
        } else {
            Vec::new()
        },
        inputs,
    }
}

fn shares(stage: &Stage) -> Vec<ProductShare> {
    if stage.products.len() < 2 {
        return Vec::new();
    }
    let row = |product: &super::resolved::Product| ProductShare {
        product: product.key.unwrap_or("output").to_owned(),
        name: product.name.to_owned(),
        share: product.share,
        measure: product.measure,
        unit: stage.measure_unit.to_owned(),
    };
    stage.products.iter().map(row).collect()
}

fn input_result(
    resolved: &Resolved,
    input: &Input,
    recipe: GasVector,
    (scale, fuel_mj): (f64, f64),
    workings: bool,
) -> InputResult {
    let term = input.term.unwrap_or(Term::Ep);
    let per_mj = if counts(resolved, input) {
        recipe * (1000.0 * scale)
    } else {
        GasVector::ZERO
    };
    let co2e = per_mj.co2e(resolved.gwp);
    let replaced = match &input.replaced {
        Some(why) => Some(why.clone()),
        None if resolved.rules.leaves_out(term) => Some(format!(
            "{} is zero under {}; shown as memo",
            term.name(),
            resolved.rules.id
        )),
        None => None,
    };
    let steps = match workings {
        true => input_steps(resolved, input, recipe, (scale, fuel_mj), replaced.as_deref()),
        false => Vec::new(),
    };
    InputResult {
        key: input.key.clone(),
        label: input.label.clone(),
        term,
        g_co2e_per_mj: co2e,
        gases_g_per_mj: per_mj,
        recipe_gases_kg: recipe,
        replaced,
        workings: steps,
    }
}

fn input_steps(
    resolved: &Resolved,
    input: &Input,
    recipe: GasVector,
    (scale, fuel_mj): (f64, f64),
    replaced: Option<&str>,
) -> Vec<Step> {
    let mut steps = input.steps.clone();
    steps.extend(fuel_steps(input, fuel_mj));
    let weights = resolved.gwp.weights();
    let parts: Vec<String> = Gas::ALL
        .into_iter()
        .zip(weights)
        .filter(|(gas, _)| recipe[*gas] != 0.0)
        .map(|(gas, weight)| format!("{} {} x {}", plain(recipe[gas]), gas.name(), plain(weight)))
        .collect();
    let per_recipe = recipe.co2e(resolved.gwp);
    if !parts.is_empty() {
        steps.push(step(
            format!("weighted: {}", parts.join(" + ")),
            per_recipe,
            "kg CO2e per recipe",
            &resolved.gwp.citation.source,
        ));
    }
    match replaced {
        Some(why) => steps.push(step(why.to_owned(), 0.0, "g CO2e/MJ", "")),
        None => steps.push(step(
            format!(
                "{} kg CO2e x {} recipes per MJ with shares x 1000",
                plain(per_recipe),
                plain(scale)
            ),
            1000.0 * per_recipe * scale,
            "g CO2e/MJ",
            "",
        )),
    }
    steps
}

/// Shares of primary data and of estimates in the sum of absolute figures, %.
fn trust(resolved: &Resolved, stages: &[StageResult]) -> (f64, f64) {
    let (mut sum, mut primary, mut estimated) = (0.0, 0.0, 0.0);
    for (result, &j) in stages.iter().zip(&resolved.order) {
        for (row, input) in result.inputs.iter().zip(&resolved.stages[j].inputs) {
            let size = row.g_co2e_per_mj.abs();
            sum += size;
            primary += size * input.primary;
            estimated += size * input.estimated;
        }
    }
    sum += resolved
        .defaults
        .iter()
        .map(|default| default.g_per_mj.abs())
        .sum::<f64>();
    if sum > 0.0 {
        (100.0 * primary / sum, 100.0 * estimated / sum)
    } else {
        (0.0, 0.0)
    }
}
