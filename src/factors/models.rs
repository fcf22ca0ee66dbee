//! The models as documents: what each computes, from what source, and what it may be told.

use crate::core::domain::Term;
use crate::core::models::parameter::{Parameter, Span, Takes};
use crate::core::models::{ALL, Model};
use serde::Serialize;
use utoipa::ToSchema;

/// A model that an input may use instead of a factor.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct ModelDocument {
    /// `kind` in documents.
    pub kind: String,
    /// Name.
    pub title: String,
    /// What it computes.
    pub what: String,
    /// Equation and source.
    pub source: String,
    /// The term it feeds, whatever the stage; null: the stage's.
    pub term: Option<Term>,
    /// What it may be told.
    pub parameters: Vec<ParameterDocument>,
}

/// A parameter of a model.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct ParameterDocument {
    /// Name in documents.
    pub name: String,
    /// What it is and how it enters the equation.
    pub meaning: String,
    /// What it takes.
    pub takes: TakesDocument,
    /// True if the model cannot do without.
    pub required: bool,
    /// What stands in where it is left out, in words.
    pub default: Option<String>,
    /// Outside is refused.
    pub hard: Option<SpanDocument>,
    /// Outside gives finding K-01.
    pub usual: Option<SpanDocument>,
}

/// What a parameter takes.
#[derive(Clone, Debug, Default, Serialize, ToSchema)]
pub struct TakesDocument {
    /// `number`, `amount`, `word`, `flag`, `day`, `year`, `text`, `factor`, `gases`, `fuels`, `nitrogen_by_type`, `object`,
    /// `vehicle`, `none_or_amount`.
    pub kind: String,
    /// Unit of a plain figure; amounts of the same dimension are taken too.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub unit: Option<String>,
    /// The words or names to choose from.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub words: Vec<String>,
    /// The parameters of an object.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    #[schema(no_recursion)]
    pub parameters: Vec<ParameterDocument>,
}

/// A span of figures.
#[derive(Clone, Copy, Debug, Serialize, ToSchema)]
pub struct SpanDocument {
    /// Lowest figure.
    pub low: f64,
    /// True if the lowest figure itself is outside.
    pub above: bool,
    /// Highest figure; null where open.
    pub high: Option<f64>,
}

/// Every model, by kind.
pub fn models() -> Vec<ModelDocument> {
    let mut all: Vec<ModelDocument> = ALL.iter().map(|model| ModelDocument::of(model)).collect();
    all.sort_by(|a, b| a.kind.cmp(&b.kind));
    all
}

impl ModelDocument {
    fn of(model: &Model) -> ModelDocument {
        ModelDocument {
            kind: model.kind.into(),
            title: model.title.into(),
            what: model.what.into(),
            source: model.source.into(),
            term: model.term,
            parameters: model.parameters.iter().map(ParameterDocument::of).collect(),
        }
    }
}

impl ParameterDocument {
    fn of(parameter: &Parameter) -> ParameterDocument {
        let Parameter {
            name,
            takes,
            required,
            default,
            hard,
            usual,
            meaning,
        } = *parameter;
        ParameterDocument {
            name: name.into(),
            meaning: meaning.into(),
            takes: TakesDocument::of(&takes),
            required,
            default: (!default.is_empty()).then(|| default.into()),
            hard: hard.map(SpanDocument::of),
            usual: usual.map(SpanDocument::of),
        }
    }
}

impl TakesDocument {
    fn of(takes: &Takes) -> TakesDocument {
        let named = |kind: &str| TakesDocument {
            kind: kind.into(),
            ..TakesDocument::default()
        };
        let unit = |kind: &str, unit: &str| TakesDocument {
            unit: Some(unit.into()),
            ..named(kind)
        };
        let words = |kind: &str, words: &[&str]| TakesDocument {
            words: words.iter().map(|word| (*word).into()).collect(),
            ..named(kind)
        };
        let inside = |kind: &str, parameters: &[Parameter]| TakesDocument {
            parameters: parameters.iter().map(ParameterDocument::of).collect(),
            ..named(kind)
        };
        match takes {
            Takes::Number("") => named("number"),
            Takes::Number(of) => unit("number", of),
            Takes::Amount(of) => unit("amount", of),
            Takes::Word(list) => words("word", list),
            Takes::Flag => named("flag"),
            Takes::Day => named("day"),
            Takes::Year => named("year"),
            Takes::Text => named("text"),
            Takes::Factor => named("factor"),
            Takes::Gases => named("gases"),
            Takes::Fuels => named("fuels"),
            Takes::NitrogenByType(list) => words("nitrogen_by_type", list),
            Takes::Object(parameters) => inside("object", parameters),
            Takes::Vehicle(parameters) => inside("vehicle", parameters),
            Takes::NoneOrAmount(of) => unit("none_or_amount", of),
        }
    }
}

impl SpanDocument {
    fn of(span: Span) -> SpanDocument {
        SpanDocument {
            low: span.low,
            above: span.above,
            high: span.high.is_finite().then_some(span.high),
        }
    }
}
