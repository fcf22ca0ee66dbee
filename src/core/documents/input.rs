//! Inputs of a stage: an amount times a factor, given gases, or a model with its parameters.

use super::amount::{Origin, Uncertainty};
use crate::core::domain::GasVector;
use serde::{Deserialize, Serialize};
use serde_json::{Map, Value};
use utoipa::ToSchema;

/// One row of a stage's inventory. Exactly one of: `amount`, `unit` and `factor`; `gases`; `model`.
#[derive(Clone, Debug, Default, PartialEq, Serialize, ToSchema)]
pub struct Input {
    /// Unique in its stage: 1 to 40 of `a-z 0-9 -`, beginning with a letter.
    pub key: String,
    /// What it is, for people.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub label: Option<String>,
    /// Amount per recipe, in `unit`; not negative.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub amount: Option<f64>,
    /// Unit of the amount.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub unit: Option<String>,
    /// One factor, or several whose gases add.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub factor: Option<OneOrMany<FactorRef>>,
    /// kg of each gas per recipe.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub gases: Option<GasVector>,
    /// One model, or several of one kind whose gases add.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub model: Option<OneOrMany<ModelUse>>,
    /// Net per gross heating value of an amount billed gross, above 0 to 1.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub net_per_gross: Option<f64>,
    /// Where the figure comes from.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub origin: Option<Origin>,
    /// The estimated part of a measured total, %.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub estimated_percent: Option<f64>,
    /// Id of the meter of the stage, or ids of several, whose readings must give the amount (or the model's parameter that
    /// the meter names) for the period of the pathway.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub meter: Option<OneOrMany<String>>,
    /// Ids of files that back the figure.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub evidence: Vec<String>,
    /// How sure the amount is.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub uncertainty: Option<Uncertainty>,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A single thing or a list, written back as it was entered.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
#[serde(untagged)]
pub enum OneOrMany<T> {
    /// One, without brackets.
    One(T),
    /// A list.
    Many(Vec<T>),
}

impl<T> OneOrMany<T> {
    /// The things as a slice.
    pub fn list(&self) -> &[T] {
        match self {
            OneOrMany::One(one) => std::slice::from_ref(one),
            OneOrMany::Many(many) => many,
        }
    }

    /// True if it was entered as a list: pointers then carry an index.
    pub fn is_list(&self) -> bool {
        matches!(self, OneOrMany::Many(_))
    }
}

/// A factor of an edition by id, or one given in full.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
#[serde(untagged)]
pub enum FactorRef {
    /// `edition/row`.
    Id(String),
    /// An own factor.
    Inline(InlineFactor),
}

/// An own factor: kg of each gas per unit.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct InlineFactor {
    /// kg of each gas per `per`; `co2e_unsplit` where only a total is known.
    pub gases: GasVector,
    /// Unit, such as `kg`, `kg N`, `MJ`, `MJ heat`, `kWh power`.
    pub per: String,
    /// Where the figure comes from.
    pub citation: String,
    /// How sure the factor is.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub uncertainty: Option<Uncertainty>,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
}

/// A model and its parameters, as entered. Names, units and ranges stand in the table of each model.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct ModelUse {
    /// Which model.
    pub kind: String,
    /// For people; never computed with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    /// Parameters by name: plain figures, amounts, words, references.
    #[serde(flatten)]
    #[schema(value_type = Object, additional_properties)]
    pub parameters: Map<String, Value>,
}
