//! Reads the documents of people and tokens.

use super::super::{Audit, Change, NewPerson, NewToken, Role};
use crate::app::who::Right;
use crate::core::documents::Problems;
use crate::core::documents::reader::{Place, day_of, object, text_of, whole, word_of};
use jiff::Timestamp;
use jiff::tz::TimeZone;
use serde_json::Value;
use utoipa::ToSchema;
use uuid::Uuid;

/// Words of roles.
const ROLES: &[(&str, Role)] = &[
    ("administrator", Role::Administrator),
    ("preparer", Role::Preparer),
    ("approver", Role::Approver),
    ("viewer", Role::Viewer),
    ("auditor", Role::Auditor),
];
const SCOPES: &[(&str, Right)] = &[
    ("read", Right::Read),
    ("write", Right::Write),
    ("approve", Right::Approve),
];

/// What an auditor from outside is invited to.
#[derive(ToSchema)]
#[schema(as = AuditDocument)]
#[allow(dead_code, reason = "describes what is read by hand")]
pub struct AuditDocument {
    /// The last day, UTC.
    #[schema(value_type = String, format = Date)]
    until: String,
    /// Public ids of pathways.
    #[schema(max_items = 1000)]
    pathways: Option<Vec<Uuid>>,
    /// Public ids of statements.
    #[schema(max_items = 1000)]
    statements: Option<Vec<Uuid>>,
}

/// A person to add.
#[derive(ToSchema)]
#[allow(dead_code, reason = "describes what is read by hand")]
pub struct NewPersonDocument {
    /// Name, as pages and documents show it.
    #[schema(min_length = 1, max_length = 200)]
    name: String,
    /// Name to sign in with; capitals do not matter.
    #[schema(min_length = 1, max_length = 200)]
    sign_in_name: String,
    /// `administrator`, `preparer`, `approver`, `viewer`; `auditor` stands alone.
    roles: Vec<String>,
    /// What an auditor is invited to.
    audit: Option<AuditDocument>,
}

/// What a person is from now on.
#[derive(ToSchema)]
#[allow(dead_code, reason = "describes what is read by hand")]
pub struct PersonDocument {
    /// Name, as pages and documents show it.
    #[schema(min_length = 1, max_length = 200)]
    name: String,
    /// `administrator`, `preparer`, `approver`, `viewer`; `auditor` stands alone.
    roles: Vec<String>,
    /// What an auditor is invited to.
    audit: Option<AuditDocument>,
    /// True to keep them out.
    disabled: Option<bool>,
}

/// A token to make.
#[derive(ToSchema)]
#[allow(dead_code, reason = "describes what is read by hand")]
pub struct NewTokenDocument {
    /// What it is for.
    #[schema(min_length = 1, max_length = 100)]
    label: String,
    /// `read`, `write`, `approve`.
    scopes: Vec<String>,
    /// For how many days it is good.
    #[schema(minimum = 1, maximum = 730)]
    days: u32,
}

pub(super) fn new_person(body: &Value) -> Result<NewPerson, Problems> {
    whole(body, |fields, at, problems| {
        fields.need("roles", at, problems);
        let name = fields.required_text("name", at, problems);
        let sign_in_name = fields.required_text("sign_in_name", at, problems);
        let roles = fields.list("roles", at, problems, role);
        let audit = fields.part("audit", at, problems, audit);
        Some(NewPerson {
            name: name?,
            sign_in_name: sign_in_name?,
            roles: roles.into_iter().collect(),
            audit,
            password: None,
        })
    })
}

pub(super) fn change(body: &Value) -> Result<(Change, bool), Problems> {
    whole(body, |fields, at, problems| {
        fields.need("roles", at, problems);
        let name = fields.required_text("name", at, problems);
        let roles = fields.list("roles", at, problems, role);
        let audit = fields.part("audit", at, problems, audit);
        let disabled = fields.flag("disabled", at, problems).unwrap_or(false);
        let change = Change {
            name: name?,
            roles: roles.into_iter().collect(),
            audit,
        };
        Some((change, disabled))
    })
}

pub(super) fn new_token(body: &Value) -> Result<NewToken, Problems> {
    whole(body, |fields, at, problems| {
        fields.need("scopes", at, problems);
        let label = fields.required_text("label", at, problems);
        let scopes = fields.list("scopes", at, problems, |value, at, problems| {
            word_of(value, SCOPES, at, problems)
        });
        let days = fields.required_number("days", at, problems);
        let days = days?;
        // Anything that is no whole number of days is none at all, and is refused as such.
        let whole = (1..=super::super::LONGEST_DAYS).find(|whole| f64::from(*whole) == days);
        Some(NewToken {
            label: label?,
            scopes: scopes.into_iter().collect(),
            days: whole.unwrap_or(0),
        })
    })
}

fn role(value: &Value, at: &Place, problems: &mut Problems) -> Option<Role> {
    word_of(value, ROLES, at, problems)
}

fn audit(value: &Value, at: &Place, problems: &mut Problems) -> Option<Audit> {
    object(value, at, problems, |fields, at, problems| {
        fields.need("until", at, problems);
        let until = fields.part("until", at, problems, |value, at, problems| {
            let day = day_of(value, at, problems)?;
            end_of(day).or_else(|| {
                problems.add(at, "This day cannot be kept.", "Give a day before the year 9999.");
                None
            })
        });
        let pathways = fields.list("pathways", at, problems, id);
        let statements = fields.list("statements", at, problems, id);
        Some(Audit {
            until: until?,
            pathways,
            statements,
        })
    })
}

/// The end of a day, UTC.
pub(in crate::people) fn end_of(day: jiff::civil::Date) -> Option<Timestamp> {
    let next = day.tomorrow().ok()?.at(0, 0, 0, 0);
    TimeZone::UTC.to_timestamp(next).ok()
}

fn id(value: &Value, at: &Place, problems: &mut Problems) -> Option<Uuid> {
    let text = text_of(value, at, problems)?;
    let id = text.parse::<Uuid>().ok();
    if id.is_none() {
        problems.add(at, "This is not a public id.", "Give the id as lists have it.");
    }
    id
}
