//! Substitution: what the co-products of a stage displace elsewhere is a credit of the stage, a row of its own. All the
//! burden stays with the output.

use super::graph::Graph;
use super::inputs;
use super::resolved::{Input, Product, Stage as Resolved};
use crate::core::documents::assessment::Finding;
use crate::core::documents::input::Input as InputDocument;
use crate::core::documents::pathway::{Displaces, Role, Stage};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::Gas;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::models::Setting;
use crate::core::models::factors::step;

/// The credits of a stage that shares by substitution, one a co-product. Elsewhere what a co-product displaces is kept
/// and not counted, so that one document can be put to several rule sets.
pub fn credits(
    stage: &Stage,
    products: &[Product],
    method: Option<AllocationMethod>,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> Vec<Input> {
    if method != Some(AllocationMethod::Substitution) {
        return Vec::new();
    }
    let co_products_at = at.field("co_products");
    let mut out = Vec::new();
    for (k, document) in stage.co_products.iter().enumerate() {
        let place = co_products_at.item(k);
        let place = place.field("displaces");
        match (&document.displaces, document.role) {
            (None, Role::CoProduct) => {
                // A residue by law takes nothing, whatever its role says, and brings nothing.
                if products.get(k + 1).is_some_and(|product| product.shares_burden) {
                    problems.add(
                        place,
                        format!("Sharing by substitution needs what {} displaces.", document.name),
                        "Add \"displaces\" with amount, unit and factor.",
                    );
                }
            }
            (None, _) => {}
            (Some(_), Role::Residue | Role::Waste) => problems.add(
                place,
                format!(
                    "{} is a residue or waste and displaces nothing here.",
                    document.name
                ),
                "Set its role to co_product, or take \"displaces\" out.",
            ),
            (Some(displaced), Role::CoProduct) => {
                if products.get(k + 1).is_some_and(|product| product.shares_burden) {
                    let named = (document.key.as_str(), document.name.as_str());
                    out.push(credit(
                        stage, named, displaced, setting, &place, problems, findings,
                    ));
                }
            }
        }
    }
    out
}

fn credit(
    stage: &Stage,
    (key, name): (&str, &str),
    displaced: &Displaces,
    setting: &Setting,
    at: &Place,
    problems: &mut Problems,
    findings: &mut Vec<Finding>,
) -> Input {
    let document = InputDocument {
        key: format!("displaces:{key}"),
        label: Some(format!("Displaced by {name}")),
        amount: Some(displaced.amount),
        unit: Some(displaced.unit.clone()),
        factor: Some(displaced.factor.clone()),
        ..InputDocument::default()
    };
    let mut input = Input {
        key: document.key.clone(),
        label: document.label.clone().unwrap_or_default(),
        term: Some(stage.kind.term()),
        ..Input::default()
    };
    let first = findings.len();
    let entry = inputs::Entry {
        stage,
        document: &document,
        setting,
        at: *at,
    };
    inputs::by_factor(&entry, &mut input, problems, findings);
    for finding in findings.iter_mut().skip(first) {
        finding.field = format!("co_products.{key}.displaces");
    }
    input.gases = input.gases * -1.0;
    // What is displaced grew elsewhere: it is no carbon of this crop.
    input.biogenic_kg = 0.0;
    for gas in Gas::ALL.into_iter().filter(|gas| input.gases[*gas] != 0.0) {
        input.steps.push(step(
            format!("credit, for {name} takes its place"),
            input.gases[gas],
            &format!("kg {}", gas.name()),
            "",
        ));
    }
    input
}

/// A co-product that brings a credit leaves the pathway: a stage that takes it would count it twice.
pub fn not_taken(stages: &[Resolved], graph: &Graph, problems: &mut Problems) {
    let stages_at = Place::ROOT.field("stages");
    for (j, sources) in graph.sources.iter().enumerate() {
        for (k, source) in sources.iter().enumerate() {
            let Some((i, product)) = *source else { continue };
            let Some(stage) = stages.get(i) else { continue };
            let Some(taken) = product
                .checked_sub(1)
                .and_then(|k| stage.document.co_products.get(k))
            else {
                continue;
            };
            let by_credit = stage.allocation == Some(AllocationMethod::Substitution);
            if by_credit && taken.displaces.is_some() {
                let at = stages_at.item(j);
                let at = at.field("intakes");
                let detail = format!(
                    "{} brings a credit for what it displaces, so it leaves the pathway and cannot be taken here too.",
                    taken.name
                );
                problems.add(
                    at.item(k).field("product"),
                    detail,
                    "Put this stage's inputs into the stage that makes it and give the product as it leaves, \
                     or share that stage otherwise.",
                );
            }
        }
    }
}
