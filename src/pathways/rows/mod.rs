//! The rows that a document is written into beside itself, for search and for plain SQL by an auditor. Rows are made
//! from documents, never the other way round.

pub(crate) mod evidence;
pub(crate) mod sql;

pub use sql::{CoProductRow, EvidenceUseRow, InputRow, IntakeRow, StageRow, UseRow};

use crate::core::documents::Pathway;
use crate::core::documents::input::{FactorRef, Input, OneOrMany};
use crate::core::documents::pathway::{Role, Stage};
use crate::core::documents::pointer;
use serde::Serialize;
use serde_json::Value;

/// All rows of a revision, in the order of its document.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Rows {
    /// One for each stage.
    pub stages: Vec<StageRow>,
    /// One for each intake.
    pub intakes: Vec<IntakeRow>,
    /// One for each input.
    pub inputs: Vec<InputRow>,
    /// One for each co-product.
    pub co_products: Vec<CoProductRow>,
    /// One for each place that names a published row.
    pub uses: Vec<UseRow>,
    /// One for each place that names evidence.
    pub evidence: Vec<EvidenceUseRow>,
}

/// The rows of a revision as JSON, ready to be written; nothing for a table without rows.
#[derive(Clone, Debug, Default)]
pub(super) struct RowTexts {
    pub(super) stages: Option<String>,
    pub(super) intakes: Option<String>,
    pub(super) inputs: Option<String>,
    pub(super) co_products: Option<String>,
    pub(super) uses: Option<String>,
    pub(super) evidence: Option<String>,
}

impl Rows {
    /// The rows of a document.
    pub fn of(pathway: &Pathway) -> Rows {
        let mut rows = Rows::default();
        for (key, factor) in &pathway.defaults {
            let pointer = format!("/defaults/{}", key.name());
            rows.uses.push(UseRow {
                factor: factor.clone(),
                pointer,
                stage_key: None,
                input_key: None,
                co_product_key: None,
            });
        }
        for (index, stage) in pathway.stages.iter().enumerate() {
            rows.stage(index, stage);
        }
        rows.evidence = evidence::named(pathway);
        rows
    }

    pub(super) fn texts(&self) -> Result<RowTexts, serde_json::Error> {
        fn text<T: Serialize>(rows: &[T]) -> Result<Option<String>, serde_json::Error> {
            if rows.is_empty() {
                Ok(None)
            } else {
                serde_json::to_string(rows).map(Some)
            }
        }
        Ok(RowTexts {
            stages: text(&self.stages)?,
            intakes: text(&self.intakes)?,
            inputs: text(&self.inputs)?,
            co_products: text(&self.co_products)?,
            uses: text(&self.uses)?,
            evidence: text(&self.evidence)?,
        })
    }

    fn stage(&mut self, index: usize, stage: &Stage) {
        let at = format!("/stages/{index}");
        self.stages.push(StageRow {
            position: position(index),
            key: stage.key.clone(),
            kind: stage.kind.name().into(),
            name: stage.name.clone(),
            material: stage.output.material.clone(),
            amount: stage.output.flow.amount,
            unit: stage.output.flow.unit.clone(),
        });
        for (index, intake) in stage.intakes.iter().enumerate() {
            self.intakes.push(IntakeRow {
                stage_key: stage.key.clone(),
                position: position(index),
                source: intake.from.clone(),
                product: intake.product.clone(),
                amount: intake.flow.amount,
                unit: intake.flow.unit.clone(),
            });
        }
        for (index, input) in stage.inputs.iter().enumerate() {
            self.input(&format!("{at}/inputs/{index}"), &stage.key, index, input);
        }
        for (index, product) in stage.co_products.iter().enumerate() {
            self.co_products.push(CoProductRow {
                stage_key: stage.key.clone(),
                position: position(index),
                key: product.key.clone(),
                name: product.name.clone(),
                role: match product.role {
                    Role::CoProduct => "co_product".into(),
                    Role::Residue => "residue".into(),
                    Role::Waste => "waste".into(),
                },
                material: product.material.clone(),
                amount: product.flow.amount,
                unit: product.flow.unit.clone(),
            });
            if let Some(displaces) = &product.displaces {
                let at = format!("{at}/co_products/{index}/displaces/factor");
                for (factor, pointer) in named(&displaces.factor, &at) {
                    self.uses.push(UseRow {
                        factor,
                        pointer,
                        stage_key: Some(stage.key.clone()),
                        input_key: None,
                        co_product_key: Some(product.key.clone()),
                    });
                }
            }
        }
    }

    fn input(&mut self, at: &str, stage: &str, index: usize, input: &Input) {
        let mut found: Vec<(String, String)> = Vec::new();
        if let Some(factor) = &input.factor {
            found.extend(named(factor, &format!("{at}/factor")));
        }
        if let Some(models) = &input.model {
            for (index, model) in models.list().iter().enumerate() {
                let at = if models.is_list() {
                    format!("{at}/model/{index}")
                } else {
                    format!("{at}/model")
                };
                for (name, value) in &model.parameters {
                    inside(name, value, &at, &mut found);
                }
            }
        }
        let way = match (&input.model, &input.gases) {
            (Some(_), _) => "model",
            (None, Some(_)) => "gases",
            (None, None) => "factor",
        };
        self.inputs.push(InputRow {
            stage_key: stage.into(),
            position: position(index),
            key: input.key.clone(),
            label: input.label.clone(),
            way: way.into(),
            model: input
                .model
                .as_ref()
                .and_then(|models| models.list().first())
                .map(|model| model.kind.clone()),
            factors: found
                .iter()
                .map(|(factor, _)| factor.as_str())
                .collect::<Vec<_>>()
                .join(" "),
            amount: input.amount,
            unit: input.unit.clone(),
            origin: input.origin.map(|origin| origin.name().into()),
        });
        self.uses
            .extend(found.into_iter().map(|(factor, pointer)| UseRow {
                factor,
                pointer,
                stage_key: Some(stage.into()),
                input_key: Some(input.key.clone()),
                co_product_key: None,
            }));
    }
}

fn position(index: usize) -> i64 {
    i64::try_from(index).unwrap_or(i64::MAX)
}

/// The published rows among factors, with their pointers.
fn named(factors: &OneOrMany<FactorRef>, at: &str) -> Vec<(String, String)> {
    let list = factors
        .list()
        .iter()
        .enumerate()
        .filter_map(|(index, factor)| match factor {
            FactorRef::Id(id) if factors.is_list() => Some((id.clone(), format!("{at}/{index}"))),
            FactorRef::Id(id) => Some((id.clone(), at.to_owned())),
            FactorRef::Inline(_) => None,
        });
    list.collect()
}

/// Parameters of models whose text is never a reference, though it may hold a slash.
const NEVER_A_REFERENCE: [&str; 5] = ["unit", "per", "citation", "note", "kind"];

/// The published rows that a parameter of a model names, however deep. Models come and go; a reference is known by
/// its shape, `edition/row`.
fn inside(name: &str, value: &Value, at: &str, found: &mut Vec<(String, String)>) {
    let at = format!("{at}/{}", pointer::step(name));
    match value {
        Value::String(text) if is_reference(text) && !NEVER_A_REFERENCE.contains(&name) => {
            found.push((text.clone(), at));
        }
        Value::Array(items) => {
            for (index, item) in items.iter().enumerate() {
                inside(&index.to_string(), item, &at, found);
            }
        }
        Value::Object(fields) => {
            for (name, value) in fields {
                inside(name, value, &at, found);
            }
        }
        _ => {}
    }
}

fn is_reference(text: &str) -> bool {
    let plain = |part: &str| {
        !part.is_empty()
            && part
                .bytes()
                .all(|byte| byte.is_ascii_alphanumeric() || b"-_.".contains(&byte))
    };
    text.split_once('/')
        .is_some_and(|(edition, row)| plain(edition) && plain(row))
}
