//! From a document to a plan of numbers: units, factors, models, shares. All problems at once, each with its pointer.

use super::allocation::{self, Ground, Shared};
use super::assess::hash;
use super::defaults;
use super::graph::{Graph, graph};
use super::inputs;
use super::linking::link;
use super::materials::Materials;
use super::measuring::{Flows, measure_all};
use super::resolved::{Product, Resolved, Stage};
use super::substitution;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::OneOrMany;
use crate::core::documents::pathway::{CoProduct, Pathway, Role, Stage as StageDocument};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::{Book, RuleSet, StageKind};
use crate::core::models::Setting;
use crate::core::models::flow::{Measured, no_heat};

/// Builds the plan of a pathway under a rule set (the pathway's own when `rule_set` is none). Without `workings` the
/// figures are the same and the steps that lead to them are left out where they cost time.
///
/// # Errors
/// Everything that is wrong with the pathway.
pub fn resolve<'p>(
    pathway: &'p Pathway,
    rule_set: Option<&str>,
    book: &'p Book,
    workings: bool,
) -> Result<Resolved<'p>, Problems> {
    let mut problems = Problems::default();
    let rules = rules(pathway, rule_set, book, &mut problems);
    let Some((rules, gwp)) = rules else {
        return Err(problems);
    };
    let materials = Materials::new(pathway, book, &mut problems);
    let root = Place::ROOT;
    materials.check(&pathway.feedstock, &root.field("feedstock"), &mut problems);
    let graph = graph(pathway, &mut problems);
    let mut findings = Vec::new();
    let flows = measure_all(pathway, rules, &materials, &graph, &mut problems, &mut findings);
    let defaults = defaults::find(pathway, rules, book, &mut problems);
    let mut stages = Vec::with_capacity(pathway.stages.len());
    let fuel = graph.last.and_then(|last| flows.get(last)?.output.as_ref());
    let ground = Ground {
        rules,
        materials: &materials,
        wheel_strength: fuel.and_then(|fuel| fuel.strength),
    };
    let stages_at = root.field("stages");
    for (j, document) in pathway.stages.iter().enumerate() {
        let at = stages_at.item(j);
        let mut products = products(document, &flows[j], rules, &mut findings);
        let mut share_steps = Vec::new();
        let shared = match products.len() {
            0 => Shared::default(),
            _ => allocation::share(
                document,
                &mut products,
                &ground,
                &at,
                &mut problems,
                &mut share_steps,
            ),
        };
        let neighbours = neighbours(document);
        let received: Vec<Measured> = flows[j].intakes.iter().flatten().cloned().collect();
        let setting = Setting {
            book,
            rules,
            stage_kind: document.kind,
            output: flows[j].output.as_ref(),
            intakes: &received,
            neighbours: &neighbours,
            period: &pathway.period,
            harvest_year: harvest_year(pathway, &graph, j),
            workings,
        };
        let mut inputs = inputs::inputs(document, &setting, &at, &mut problems, &mut findings);
        bought(document, &flows[j], &setting, &at, &mut problems, &mut inputs);
        inputs.extend(substitution::credits(
            document,
            &products,
            shared.method,
            &setting,
            &at,
            &mut problems,
            &mut findings,
        ));
        let intakes = link(pathway, j, &graph, &flows, &at, &mut problems, &mut findings);
        stages.push(Stage {
            document,
            products,
            intakes,
            inputs,
            share_steps,
            allocation: shared.method,
            measure_unit: shared.unit,
        });
    }
    super::meters::agree(pathway, &mut problems);
    substitution::not_taken(&stages, &graph, &mut problems);
    if let (Some(last), Some(strength)) = (graph.last, ground.wheel_strength)
        && rules.ethanol_mj_per_kg(strength) <= 0.0
    {
        let at = stages_at.item(last);
        no_heat(strength, rules, &at.field("output"), &mut problems);
    }
    if !problems.is_empty() {
        return Err(problems);
    }
    let mut resolved = Resolved {
        pathway,
        hash: hash(pathway)?,
        rules,
        gwp,
        stages,
        order: graph.order,
        last: graph.last,
        defaults,
        findings,
        materials,
    };
    defaults::replace(&mut resolved);
    Ok(resolved)
}

fn rules<'p>(
    pathway: &Pathway,
    asked: Option<&str>,
    book: &'p Book,
    problems: &mut Problems,
) -> Option<(&'p RuleSet, &'p crate::core::domain::GwpSet)> {
    let id = asked.unwrap_or(&pathway.rule_set);
    let pointer = if asked.is_some() { "" } else { "/rule_set" };
    let Some(rules) = book.rule_sets.get(id) else {
        let known = book
            .rule_sets
            .keys()
            .map(String::as_str)
            .collect::<Vec<_>>()
            .join(", ");
        let remedy = match nearest(id, book.rule_sets.keys().map(String::as_str)) {
            Some(near) => format!("Perhaps \"{near}\" was meant."),
            None => format!("Choose one of: {known}."),
        };
        problems.add(pointer, format!("There is no rule set \"{id}\"."), remedy);
        return None;
    };
    match book.gwp_sets.get(&rules.gwp_set) {
        Some(gwp) => Some((rules, gwp)),
        None => {
            let detail = format!(
                "The gas weights \"{}\" of {id} are not in the library.",
                rules.gwp_set
            );
            problems.add(pointer, detail, "Choose another rule set.");
            None
        }
    }
}

fn products<'p>(
    document: &'p StageDocument,
    flows: &Flows,
    rules: &RuleSet,
    findings: &mut Vec<Finding>,
) -> Vec<Product<'p>> {
    let Some(output) = flows.output.clone() else {
        return Vec::new();
    };
    if flows.co_products.iter().any(Option::is_none) {
        return Vec::new();
    }
    let mut products = vec![Product {
        key: None,
        name: document.title(),
        flow: output,
        carbon_percent_dry: document.output.flow.carbon_percent_dry,
        shares_burden: true,
        share: 0.0,
        measure: 0.0,
    }];
    for (product, flow) in document
        .co_products
        .iter()
        .zip(flows.co_products.iter().flatten())
    {
        products.push(Product {
            key: Some(&product.key),
            name: &product.name,
            flow: flow.clone(),
            carbon_percent_dry: product.flow.carbon_percent_dry,
            shares_burden: shares_burden(document, product, rules, findings),
            share: 0.0,
            measure: 0.0,
        });
    }
    products
}

fn shares_burden(
    stage: &StageDocument,
    product: &CoProduct,
    rules: &RuleSet,
    findings: &mut Vec<Finding>,
) -> bool {
    if product.role != Role::CoProduct {
        return false;
    }
    if !rules.is_residue_by_law(&product.material) {
        return true;
    }
    findings.push(Finding {
        id: "B-04".to_owned(),
        severity: Severity::Warn,
        stage: stage.key.clone(),
        field: format!("co_products.{}", product.key),
        message: format!(
            "{} is given as co-product, but under {} it is a residue and takes no share of the burden.",
            product.name, rules.id
        ),
        remedy: "Set its role to residue.".to_owned(),
        reason: None,
    });
    false
}

fn neighbours(stage: &StageDocument) -> Vec<(String, String)> {
    let word =
        |value: Option<&serde_json::Value>| value.and_then(|v| v.as_str()).unwrap_or_default().to_owned();
    stage
        .inputs
        .iter()
        .filter_map(|input| input.model.as_ref())
        .flat_map(OneOrMany::list)
        .map(|model| (model.kind.clone(), word(model.parameters.get("method"))))
        .collect()
}

/// Year of the harvest: of the stage, else of one that takes from it, else the year the period begins in.
fn harvest_year(pathway: &Pathway, graph: &Graph, j: usize) -> i16 {
    let of = |i: usize| {
        pathway.stages[i]
            .grown
            .as_ref()
            .and_then(|grown| grown.harvest_year)
    };
    let takers = || {
        (0..pathway.stages.len())
            .filter(|i| graph.sources[*i].iter().flatten().any(|(from, _)| *from == j))
            .find_map(of)
    };
    of(j)
        .or_else(takers)
        .unwrap_or_else(|| pathway.period.from.year())
}

fn bought(
    document: &StageDocument,
    flows: &Flows,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    inputs: &mut Vec<super::resolved::Input>,
) {
    if document.kind != StageKind::Bought {
        if document.stated.is_some() {
            let detail = format!(
                "A stage of kind {} has no supplier's statement.",
                document.kind.name()
            );
            problems.add(
                at.field("stated"),
                detail,
                "Set the kind to bought, or take \"stated\" out.",
            );
        }
        return;
    }
    for (name, filled) in [
        ("intakes", !document.intakes.is_empty()),
        ("inputs", !document.inputs.is_empty()),
        ("co_products", !document.co_products.is_empty()),
    ] {
        if filled {
            let detail = format!("Bought fuel has no {name} of its own: they are in the supplier's terms.");
            problems.add(
                at.field(name),
                detail,
                "Put them in a stage that takes the bought fuel.",
            );
        }
    }
    if let Some(output) = &flows.output {
        inputs.extend(inputs::stated(document, output, setting, at, problems));
    }
}
