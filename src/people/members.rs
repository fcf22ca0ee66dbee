//! The people of an organisation: listed, found, added.

use super::sql::{self, InvitationRow, NewRow, PersonRow, RoleRow};
use super::{PeopleError, Role, folded, password, public_id, secrets, time};
use crate::app::App;
use crate::audit_trail::{self, Deed};
use crate::core::documents::{Problem, Problems};
use crate::store::StoreError;
use jiff::Timestamp;
use serde::Serialize;
use serde_json::json;
use std::collections::{BTreeMap, BTreeSet};
use utoipa::ToSchema;
use uuid::Uuid;

/// Letters of a name at most.
const LONGEST_NAME: usize = 200;
/// Things an auditor can be invited to at most.
const MOST_INVITATIONS: usize = 1_000;

/// A person of the organisation.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Person {
    /// Public id.
    pub id: Uuid,
    /// Name, as pages and documents show it.
    pub name: String,
    /// Name they sign in with, in small letters.
    pub sign_in_name: String,
    /// What they are to the organisation: `administrator`, `preparer`, `approver`, `viewer`, `auditor`.
    pub roles: Vec<String>,
    /// What an auditor from outside was invited to; null for everybody else.
    pub audit: Option<Audit>,
    /// True if they must choose a new password before anything else.
    pub must_change_password: bool,
    /// When they were added.
    #[schema(value_type = String, format = DateTime)]
    pub created_at: Timestamp,
    /// Since when they cannot come in.
    #[schema(value_type = Option<String>, format = DateTime)]
    pub disabled_at: Option<Timestamp>,
}

impl Person {
    /// True if they hold the role, whether or not they can come in.
    pub fn is(&self, role: Role) -> bool {
        self.roles.iter().any(|name| name == role.name())
    }
}

/// What an auditor from outside looks at, and until when.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, ToSchema)]
pub struct Audit {
    /// The end of it.
    #[schema(value_type = String, format = DateTime)]
    pub until: Timestamp,
    /// Public ids of pathways.
    pub pathways: Vec<Uuid>,
    /// Public ids of statements.
    pub statements: Vec<Uuid>,
}

/// A person to add.
#[derive(Clone, Debug)]
pub struct NewPerson {
    /// Name, as pages and documents show it.
    pub name: String,
    /// Name to sign in with.
    pub sign_in_name: String,
    /// What they are to the organisation.
    pub roles: BTreeSet<Role>,
    /// What an auditor is invited to.
    pub audit: Option<Audit>,
    /// A password they know already; without one they get one to begin with.
    pub password: Option<String>,
}

/// Who was added.
#[derive(Clone, Debug)]
pub struct Added {
    /// The person.
    pub person: Person,
    /// The password to begin with, if none was given; it is told once.
    pub temporary_password: Option<String>,
}

/// Is there anybody who could sign in?
///
/// # Errors
/// When the database fails.
pub async fn anybody(app: &App) -> Result<bool, StoreError> {
    let mut reader = app.store.reader().await?;
    Ok(sql::count(&mut reader, app.organisation).await? > 0)
}

/// Everybody, in the order in which they were added.
///
/// # Errors
/// When the database fails.
pub async fn people(app: &App) -> Result<Vec<Person>, PeopleError> {
    let mut reader = app.store.reader().await?;
    let people = sql::people(&mut reader, app.organisation).await?;
    let mut roles: BTreeMap<i64, Vec<RoleRow>> = BTreeMap::new();
    for row in sql::roles(&mut reader, app.organisation, None).await? {
        roles.entry(row.person_id).or_default().push(row);
    }
    let mut invitations: BTreeMap<i64, Vec<InvitationRow>> = BTreeMap::new();
    for row in sql::invitations(&mut reader, app.organisation, None).await? {
        invitations.entry(row.person_id).or_default().push(row);
    }
    people
        .into_iter()
        .map(|row| {
            let roles = roles.remove(&row.id).unwrap_or_default();
            let invitations = invitations.remove(&row.id).unwrap_or_default();
            Ok(person(row, &roles, &invitations)?)
        })
        .collect()
}

/// A person by public id.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn find(app: &App, id: Uuid) -> Result<Person, PeopleError> {
    let mut reader = app.store.reader().await?;
    let row = sql::person(&mut reader, app.organisation, id).await?;
    let row = row.ok_or(PeopleError::NotFound)?;
    let roles = sql::roles(&mut reader, app.organisation, Some(row.id)).await?;
    let invitations = sql::invitations(&mut reader, app.organisation, Some(row.id)).await?;
    Ok(person(row, &roles, &invitations)?)
}

/// A person of the organisation by the name they sign in with.
///
/// # Errors
/// `NotFound`, or when the database fails.
pub async fn by_sign_in_name(app: &App, name: &str) -> Result<Person, PeopleError> {
    let mut reader = app.store.reader().await?;
    let row = sql::named(&mut reader, &folded(name)).await?;
    drop(reader);
    let row = row.filter(|row| row.organisation() == app.organisation);
    let row = row.ok_or(PeopleError::NotFound)?;
    find(app, public_id(&row.public_id, "person", row.id)?).await
}

/// Adds a person. Whoever has no password yet gets one to begin with, which must be changed at the first sign-in.
///
/// # Errors
/// All problems at once, a name that is taken among them; or when the database fails.
pub async fn add(app: &App, new: NewPerson) -> Result<Added, PeopleError> {
    let (name, sign_in_name) = (new.name.trim().to_owned(), folded(&new.sign_in_name));
    let now = app.clock.millis();
    let mut problems = names_wrong(&name, &sign_in_name);
    problems.extend(roles_wrong(&new.roles, new.audit.as_ref(), now));
    if let Some(password) = &new.password
        && let Err(found) = password::check(password, "/password", &[&name, &sign_in_name])
    {
        problems.extend(found.into_list());
    }
    refuse(problems)?;
    let temporary = match new.password {
        Some(_) => None,
        None => Some(secrets::temporary_password(&app.clock)),
    };
    let password = new.password.or_else(|| temporary.clone()).unwrap_or_default();
    let row = NewRow {
        id: app.clock.id(),
        name,
        sign_in_name,
        password_hash: Some(password::hash(app, password).await?),
        must_change: temporary.is_some(),
    };
    let (who, by, id, doors) = (app.organisation, app.who.clone(), row.id, app.doors.clone());
    let (roles, things) = given(&new.roles, new.audit.as_ref());
    let what = json!({ "name": row.name, "sign_in_name": row.sign_in_name, "roles": names(&new.roles), "audit": new.audit });
    let job = app.store.write_then(
        move |c| {
            Box::pin(async move {
                let Some(person) = sql::add(c, who, &row, now).await? else {
                    return Err(PeopleError::problem(
                        "/sign_in_name",
                        "Somebody signs in with that name already.",
                        "Choose another.",
                    ));
                };
                sql::set_roles(c, who, person, &roles, now).await?;
                if let Some((things, until)) = things {
                    sql::set_invitations(c, who, person, &things, until).await?;
                }
                audit_trail::add(c, who, &by, now, Deed::new("added", "person", id, what)).await?;
                Ok(())
            })
        },
        move |()| doors.forget(),
    );
    job.await?;
    Ok(Added {
        person: find(app, id).await?,
        temporary_password: temporary,
    })
}

/// Makes the first administrator, where nobody is there yet; false where somebody is.
///
/// # Errors
/// As [`add`].
pub async fn first_administrator(
    app: &App,
    sign_in_name: &str,
    password: String,
) -> Result<bool, PeopleError> {
    if anybody(app).await? {
        return Ok(false);
    }
    let new = NewPerson {
        name: sign_in_name.to_owned(),
        sign_in_name: sign_in_name.to_owned(),
        roles: [Role::Administrator, Role::Preparer].into(),
        audit: None,
        password: Some(password),
    };
    add(app, new).await?;
    Ok(true)
}

/// What is wrong with names.
pub(super) fn names_wrong(name: &str, sign_in_name: &str) -> Vec<Problem> {
    let mut problems = Problems::default();
    if name.is_empty() || name.chars().count() > LONGEST_NAME || name.chars().any(char::is_control) {
        let remedy = format!("Give 1 to {LONGEST_NAME} letters in one line.");
        problems.add("/name", "This is not a name to show.", remedy);
    }
    let fits = |c: char| c.is_alphanumeric() || "._-+@".contains(c);
    if sign_in_name.is_empty()
        || sign_in_name.chars().count() > LONGEST_NAME
        || !sign_in_name.chars().all(fits)
    {
        let remedy = format!(
            "Give 1 to {LONGEST_NAME} letters, digits and . _ - + @ without spaces, such as ines.marsh."
        );
        problems.add("/sign_in_name", "This is not a name to sign in with.", remedy);
    }
    problems.into_list()
}

/// What is wrong with roles.
pub(super) fn roles_wrong(roles: &BTreeSet<Role>, audit: Option<&Audit>, now: i64) -> Vec<Problem> {
    let mut problems = Problems::default();
    if roles.is_empty() {
        let remedy = format!(
            "Give at least one of {}.",
            names(&Role::ALL.iter().copied().collect()).join(", ")
        );
        problems.add("/roles", "The person has no role.", remedy);
    }
    if roles.contains(&Role::Auditor) && roles.len() > 1 {
        problems.add(
            "/roles",
            "An auditor from outside holds no other role.",
            "Give the other role to another person, or take the auditor's away.",
        );
    }
    match (roles.contains(&Role::Auditor), audit) {
        (true, None) => problems.add(
            "/audit",
            "An auditor looks at chosen pathways and statements until a day.",
            "Say which, and until when.",
        ),
        (false, Some(_)) => problems.add(
            "/audit",
            "Only an auditor is invited to chosen things.",
            "Leave it out, or give the role auditor.",
        ),
        (true, Some(audit)) => {
            if audit.until.as_millisecond() <= now {
                problems.add("/audit/until", "The end lies in the past.", "Give a later day.");
            }
            if audit.pathways.len() + audit.statements.len() > MOST_INVITATIONS {
                let remedy = format!("Choose at most {MOST_INVITATIONS}.");
                problems.add("/audit", "These are too many things.", remedy);
            }
        }
        (false, None) => {}
    }
    problems.into_list()
}

/// Refuses if anything is wrong.
pub(super) fn refuse(problems: Vec<Problem>) -> Result<(), PeopleError> {
    let mut all = Problems::default();
    for problem in problems {
        all.add(problem.pointer, problem.detail, problem.remedy);
    }
    if all.is_empty() {
        Ok(())
    } else {
        Err(PeopleError::Problems(all))
    }
}

/// Names of roles, in their order.
pub(super) fn names(roles: &BTreeSet<Role>) -> Vec<&'static str> {
    roles.iter().map(|role| role.name()).collect()
}

/// Things with their end.
type Invited = Option<(Vec<(&'static str, Uuid)>, i64)>;

/// Roles and invitations as rows.
pub(super) fn given(roles: &BTreeSet<Role>, audit: Option<&Audit>) -> (Vec<(Role, Option<i64>)>, Invited) {
    let until = audit.map(|audit| audit.until.as_millisecond());
    let roles = roles
        .iter()
        .map(|role| (*role, until.filter(|_| *role == Role::Auditor)))
        .collect();
    let things = audit.map(|audit| {
        let pathways: BTreeSet<_> = audit.pathways.iter().map(|id| ("pathway", *id)).collect();
        let statements: BTreeSet<_> = audit.statements.iter().map(|id| ("statement", *id)).collect();
        let things = pathways.into_iter().chain(statements).collect();
        (things, audit.until.as_millisecond())
    });
    (roles, things)
}

pub(super) fn person(
    row: PersonRow,
    roles: &[RoleRow],
    invitations: &[InvitationRow],
) -> Result<Person, StoreError> {
    let until = roles.iter().find_map(|role| role.until);
    let of_kind = |kind: &str| {
        invitations
            .iter()
            .filter(|invitation| invitation.kind == kind)
            .map(|invitation| public_id(&invitation.thing, "invitation", row.id))
            .collect::<Result<Vec<_>, _>>()
    };
    let audit = match until {
        None => None,
        Some(until) => Some(Audit {
            until: time(until, "member", "until", row.id)?,
            pathways: of_kind("pathway")?,
            statements: of_kind("statement")?,
        }),
    };
    Ok(Person {
        id: public_id(&row.public_id, "person", row.id)?,
        roles: roles.iter().map(|role| role.role.clone()).collect(),
        audit,
        must_change_password: row.must_change,
        created_at: time(row.created_at, "person", "created_at", row.id)?,
        disabled_at: row
            .disabled_at
            .map(|at| time(at, "person", "disabled_at", row.id))
            .transpose()?,
        name: row.name,
        sign_in_name: row.sign_in_name,
    })
}
