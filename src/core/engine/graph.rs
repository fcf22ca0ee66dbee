//! Who takes what from whom: finds the last stage and an order from field to wheel; cycles and loose ends are problems.

use crate::core::documents::pathway::Pathway;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::StageKind;
use crate::core::models::flow::ETHANOL;
use std::collections::BTreeMap;

/// An intake's source: stage and product (0 is the output).
pub type Source = (usize, usize);

/// The graph of a pathway.
pub struct Graph {
    /// By stage and intake: where it comes from; none where the source is unknown.
    pub sources: Vec<Vec<Option<Source>>>,
    /// Suppliers before takers.
    pub order: Vec<usize>,
    /// The stage that delivers the fuel.
    pub last: Option<usize>,
}

/// Builds the graph.
pub fn graph(pathway: &Pathway, problems: &mut Problems) -> Graph {
    let stages_at = Place::ROOT.field("stages");
    let index: BTreeMap<&str, usize> = pathway
        .stages
        .iter()
        .enumerate()
        .map(|(i, stage)| (stage.key.as_str(), i))
        .collect();
    let sources: Vec<Vec<Option<Source>>> = pathway
        .stages
        .iter()
        .enumerate()
        .map(|(j, stage)| {
            let stage_at = stages_at.item(j);
            let intakes_at = stage_at.field("intakes");
            let found = stage.intakes.iter().enumerate().map(|(k, intake)| {
                let at = intakes_at.item(k);
                let Some(&i) = index.get(intake.from.as_str()) else {
                    let remedy = match nearest(&intake.from, index.keys().copied()) {
                        Some(near) => format!("Perhaps \"{near}\" was meant."),
                        None => "Name the key of another stage.".to_owned(),
                    };
                    problems.add(
                        at.field("from"),
                        format!("There is no stage \"{}\".", intake.from),
                        remedy,
                    );
                    return None;
                };
                let Some(key) = &intake.product else {
                    return Some((i, 0));
                };
                let products = &pathway.stages[i].co_products;
                match products.iter().position(|product| product.key == *key) {
                    Some(product) => Some((i, product + 1)),
                    None => {
                        let known = products
                            .iter()
                            .map(|p| p.key.as_str())
                            .collect::<Vec<_>>()
                            .join(", ");
                        let remedy = match known.is_empty() {
                            true => format!("\"{}\" has no co-products; leave \"product\" out.", intake.from),
                            false => format!("\"{}\" has: {known}.", intake.from),
                        };
                        let detail = format!("\"{}\" has no co-product \"{key}\".", intake.from);
                        problems.add(at.field("product"), detail, remedy);
                        None
                    }
                }
            });
            found.collect()
        })
        .collect();
    let order = order(pathway, &sources, problems);
    let last = last(pathway, &sources, problems);
    Graph { sources, order, last }
}

fn order(pathway: &Pathway, sources: &[Vec<Option<Source>>], problems: &mut Problems) -> Vec<usize> {
    let count = sources.len();
    let mut waiting: Vec<usize> = sources.iter().map(|list| list.iter().flatten().count()).collect();
    let mut takers: Vec<Vec<usize>> = vec![Vec::new(); count];
    for (j, list) in sources.iter().enumerate() {
        for (i, _) in list.iter().flatten() {
            takers[*i].push(j);
        }
    }
    let mut ready: Vec<usize> = (0..count).rev().filter(|j| waiting[*j] == 0).collect();
    let mut order = Vec::with_capacity(count);
    while let Some(i) = ready.pop() {
        order.push(i);
        for &j in takers[i].iter().rev() {
            waiting[j] -= 1;
            if waiting[j] == 0 {
                ready.push(j);
            }
        }
    }
    if order.len() < count {
        let stuck: Vec<usize> = (0..count).filter(|j| waiting[*j] > 0).collect();
        let on_cycle = cycle(&stuck, sources);
        let keys = on_cycle
            .iter()
            .map(|j| pathway.stages[*j].key.as_str())
            .collect::<Vec<_>>()
            .join(" takes from ");
        let first = on_cycle.first().copied().unwrap_or(0);
        problems.add(
            Place::ROOT.field("stages").item(first).field("intakes"),
            format!("The stages run in a circle: {keys}."),
            "Take one of the intakes out; energy that loops back inside a works belongs in one stage.",
        );
    }
    order
}

/// One circle among the stages that never became ready, its first stage repeated at the end.
fn cycle(stuck: &[usize], sources: &[Vec<Option<Source>>]) -> Vec<usize> {
    let Some(&start) = stuck.first() else {
        return Vec::new();
    };
    let mut path = vec![start];
    loop {
        let here = path[path.len() - 1];
        let next = sources[here]
            .iter()
            .flatten()
            .map(|(i, _)| *i)
            .find(|i| stuck.contains(i));
        let Some(next) = next else { return path };
        if let Some(from) = path.iter().position(|seen| *seen == next) {
            path.push(next);
            return path.split_off(from);
        }
        path.push(next);
    }
}

fn last(pathway: &Pathway, sources: &[Vec<Option<Source>>], problems: &mut Problems) -> Option<usize> {
    let taken = |i: usize| sources.iter().flatten().flatten().any(|(from, _)| *from == i);
    let output_taken = |i: usize| sources.iter().flatten().flatten().any(|source| *source == (i, 0));
    let at = Place::ROOT.field("stages");
    let mut ends = Vec::new();
    for (i, stage) in pathway.stages.iter().enumerate() {
        let is_ethanol = stage.output.material == ETHANOL;
        if is_ethanol && !output_taken(i) {
            ends.push(i);
        } else if !is_ethanol && !taken(i) && stage.kind != StageKind::CoProductHandling {
            problems.add(
                at.item(i).field("output"),
                format!(
                    "Nothing takes the {} of \"{}\".",
                    stage.output.material, stage.key
                ),
                format!("Let a stage take from \"{}\", or take the stage out.", stage.key),
            );
        }
    }
    match ends[..] {
        [end] => Some(end),
        [] => {
            if !pathway.stages.is_empty() {
                problems.add(
                    at,
                    "No stage delivers ethanol that nothing else takes.",
                    "End the chain with ethanol.",
                );
            }
            None
        }
        _ => {
            let keys = ends
                .iter()
                .map(|i| pathway.stages[*i].key.as_str())
                .collect::<Vec<_>>()
                .join(", ");
            for end in ends.iter().skip(1) {
                problems.add(
                    at.item(*end).field("output"),
                    format!("Ethanol ends at more than one stage: {keys}."),
                    "Let all but one be taken by a later stage.",
                );
            }
            None
        }
    }
}
