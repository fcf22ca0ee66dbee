//! Where a document names evidence: at its audits, at the meters and inputs of its stages, in amounts inside models, at
//! what a supplier stated.

use super::EvidenceUseRow;
use crate::core::documents::Problems;
use crate::core::documents::pathway::{Pathway, Stage};
use crate::core::documents::pointer;
use serde_json::Value;
use std::collections::BTreeSet;

/// Every place of a document that names evidence, in its order.
pub fn named(pathway: &Pathway) -> Vec<EvidenceUseRow> {
    let mut found = Found::default();
    for (index, audit) in pathway.audits.iter().enumerate() {
        found.stage.clone_from(&audit.stage);
        found.ids(&format!("/audits/{index}/evidence"), &audit.evidence);
    }
    for (index, stage) in pathway.stages.iter().enumerate() {
        found.of_stage(&format!("/stages/{index}"), stage);
    }
    found.rows
}

/// What was found, and where the next is.
#[derive(Default)]
struct Found {
    rows: Vec<EvidenceUseRow>,
    stage: Option<String>,
    input: Option<String>,
}

impl Found {
    fn of_stage(&mut self, at: &str, stage: &Stage) {
        self.stage = Some(stage.key.clone());
        for (index, meter) in stage.meters.iter().enumerate() {
            self.ids(&format!("{at}/meters/{index}/evidence"), &meter.evidence);
        }
        if let Some(stated) = &stage.stated {
            self.ids(&format!("{at}/stated/evidence"), &stated.evidence);
        }
        for (index, input) in stage.inputs.iter().enumerate() {
            let at = format!("{at}/inputs/{index}");
            self.input = Some(input.key.clone());
            self.ids(&format!("{at}/evidence"), &input.evidence);
            let Some(models) = &input.model else { continue };
            for (index, model) in models.list().iter().enumerate() {
                let at = if models.is_list() {
                    format!("{at}/model/{index}")
                } else {
                    format!("{at}/model")
                };
                for (name, value) in &model.parameters {
                    self.inside(&format!("{at}/{}", pointer::step(name)), value);
                }
            }
        }
        self.input = None;
    }

    fn ids(&mut self, at: &str, ids: &[String]) {
        for (index, id) in ids.iter().enumerate() {
            self.add(format!("{at}/{index}"), id);
        }
    }

    /// An amount of a model may say what backs it, however deep it stands.
    fn inside(&mut self, at: &str, value: &Value) {
        match value {
            Value::Object(fields) => {
                for (name, value) in fields {
                    let at = format!("{at}/{}", pointer::step(name));
                    match value {
                        Value::Array(ids) if name == "evidence" => {
                            for (index, id) in ids.iter().enumerate() {
                                if let Some(id) = id.as_str() {
                                    self.add(format!("{at}/{index}"), id);
                                }
                            }
                        }
                        value => self.inside(&at, value),
                    }
                }
            }
            Value::Array(items) => {
                for (index, item) in items.iter().enumerate() {
                    self.inside(&format!("{at}/{index}"), item);
                }
            }
            _ => {}
        }
    }

    fn add(&mut self, pointer: String, id: &str) {
        self.rows.push(EvidenceUseRow {
            evidence: id.to_owned(),
            pointer,
            stage_key: self.stage.clone(),
            input_key: self.input.clone(),
        });
    }
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
