//! Where a document names evidence: at its inputs, in amounts inside their models, at what a supplier stated.

use super::EvidenceUseRow;
use crate::core::documents::Problems;
use crate::core::documents::pathway::{Pathway, Stage};
use serde_json::Value;
use std::collections::BTreeSet;

/// Every place of a document that names evidence, in its order.
pub fn named(pathway: &Pathway) -> Vec<EvidenceUseRow> {
    let mut found = Vec::new();
    for (index, stage) in pathway.stages.iter().enumerate() {
        let at = format!("/stages/{index}");
        if let Some(stated) = &stage.stated {
            add(
                &mut found,
                stage,
                None,
                &format!("{at}/stated/evidence"),
                texts(&stated.evidence),
            );
        }
        for (index, input) in stage.inputs.iter().enumerate() {
            let at = format!("{at}/inputs/{index}");
            add(
                &mut found,
                stage,
                Some(&input.key),
                &format!("{at}/evidence"),
                texts(&input.evidence),
            );
            let Some(models) = &input.model else { continue };
            for (index, model) in models.list().iter().enumerate() {
                let at = if models.is_list() {
                    format!("{at}/model/{index}")
                } else {
                    format!("{at}/model")
                };
                for (name, value) in &model.parameters {
                    inside(
                        &mut found,
                        stage,
                        &input.key,
                        &format!("{at}/{}", escaped(name)),
                        value,
                    );
                }
            }
        }
    }
    found
}

fn add<'i>(
    found: &mut Vec<EvidenceUseRow>,
    stage: &Stage,
    input: Option<&str>,
    at: &str,
    ids: impl Iterator<Item = (usize, &'i str)>,
) {
    for (index, id) in ids {
        found.push(EvidenceUseRow {
            evidence: id.to_owned(),
            pointer: format!("{at}/{index}"),
            stage_key: stage.key.clone(),
            input_key: input.map(str::to_owned),
        });
    }
}

fn texts(ids: &[String]) -> impl Iterator<Item = (usize, &str)> {
    ids.iter().map(String::as_str).enumerate()
}

/// An amount of a model may say what backs it, however deep it stands.
fn inside(found: &mut Vec<EvidenceUseRow>, stage: &Stage, input: &str, at: &str, value: &Value) {
    match value {
        Value::Object(fields) => {
            for (name, value) in fields {
                let at = format!("{at}/{}", escaped(name));
                match value {
                    Value::Array(ids) if name == "evidence" => {
                        let ids = ids.iter().enumerate();
                        let texts = ids.filter_map(|(index, id)| Some((index, id.as_str()?)));
                        add(found, stage, Some(input), &at, texts);
                    }
                    value => inside(found, stage, input, &at, value),
                }
            }
        }
        Value::Array(items) => {
            for (index, item) in items.iter().enumerate() {
                inside(found, stage, input, &format!("{at}/{index}"), item);
            }
        }
        _ => {}
    }
}

fn escaped(name: &str) -> String {
    name.replace('~', "~0").replace('/', "~1")
}

/// The ids among those places, once each.
pub fn ids(named: &[EvidenceUseRow]) -> BTreeSet<&str> {
    named.iter().map(|place| place.evidence.as_str()).collect()
}

/// A problem for each place that names evidence which is not there.
pub fn problems(named: &[EvidenceUseRow], missing: &BTreeSet<String>) -> Problems {
    let mut problems = Problems::default();
    for place in named.iter().filter(|place| missing.contains(&place.evidence)) {
        let id = shortened(&place.evidence);
        problems.add(
            &place.pointer,
            format!("There is no evidence \"{id}\" here."),
            format!(
                "Attach the file first, under that id: on the page Evidence, or with POST /api/v1/evidence. Or take \
                 \"{id}\" out."
            ),
        );
    }
    problems
}

/// Inside models an id may be as long as anybody likes.
fn shortened(id: &str) -> String {
    id.chars().take(64).collect()
}
