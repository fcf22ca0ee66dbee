//! Rule sets as documents of the API.

use crate::core::documents::rule_set::FORMAT;
use crate::core::domain::rule_set::Standing;
use crate::core::domain::{RuleSet, Status};
use serde::Serialize;
use std::borrow::Cow;
use utoipa::openapi::{ObjectBuilder, RefOr, Schema, Type};
use utoipa::{PartialSchema, ToSchema};

/// A rule set in a list.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct RuleSetLine {
    /// Id as used in documents.
    pub id: String,
    /// Title.
    pub title: String,
    /// Version of its data: the newest of one's own.
    pub version: String,
    /// Whether it may be relied on.
    pub standing: Standing,
    /// False for one of one's own.
    pub built_in: bool,
    /// Id of the set of gas weights.
    pub gwp_set: String,
    /// The fossil baseline, g CO2e/MJ.
    pub comparator_g_co2e_per_mj: f64,
    /// The document.
    pub source: String,
    /// Whether it was read.
    pub status: Status,
}

impl RuleSetLine {
    /// The line of a rule set under the id that documents use.
    pub fn of(id: &str, rules: &RuleSet, built_in: bool) -> RuleSetLine {
        RuleSetLine {
            id: id.to_owned(),
            title: rules.title.clone(),
            version: rules.version.clone(),
            standing: rules.standing,
            built_in,
            gwp_set: rules.gwp_set.clone(),
            comparator_g_co2e_per_mj: rules.comparator.value,
            source: rules.source.clone(),
            status: rules.status,
        }
    }
}

/// A rule set document: the rule set with its `format`. Describes bytes that the core writes and reads.
#[derive(Clone, Copy, Debug)]
pub struct RuleSetDocument;

impl PartialSchema for RuleSetDocument {
    fn schema() -> RefOr<Schema> {
        let mut schema = RuleSet::schema();
        if let RefOr::T(Schema::Object(object)) = &mut schema {
            let format = ObjectBuilder::new()
                .schema_type(Type::String)
                .enum_values(Some([FORMAT]))
                .description(Some("The format name that every rule set document carries."))
                .build();
            object
                .properties
                .insert("format".to_owned(), RefOr::T(Schema::Object(format)));
            object.required.push("format".to_owned());
            object.description = Some("A rule set document.".to_owned());
        }
        schema
    }
}

impl ToSchema for RuleSetDocument {
    fn name() -> Cow<'static, str> {
        "RuleSetDocument".into()
    }

    fn schemas(schemas: &mut Vec<(String, RefOr<Schema>)>) {
        RuleSet::schemas(schemas);
    }
}
