//! The page of the people of an organisation, and that of one of them.

use super::{at, shown};
use crate::core::documents::Problem;
use crate::people::{Person, Role};
use crate::web::frame::{Frame, Section};
use askama::Template;
use jiff::Timestamp;

/// Roles that a member can hold: name in forms, word, what it means.
const ROLES: [(Role, &str, &str); 5] = [
    (
        Role::Administrator,
        "Administrator",
        "names the people and what they may do",
    ),
    (Role::Preparer, "Preparer", "enters data and prepares statements"),
    (
        Role::Approver,
        "Approver",
        "approves what another person submitted",
    ),
    (Role::Viewer, "Viewer", "looks at everything, changes nothing"),
    (
        Role::Auditor,
        "Auditor from outside",
        "looks at chosen pathways and statements until a day, and holds no other role",
    ),
];

/// The fields of a person, as typed.
#[derive(Clone, Debug, Default, PartialEq, Eq, serde::Deserialize)]
#[serde(default)]
pub struct TypedPerson {
    /// Name.
    pub name: String,
    /// Name to sign in with.
    pub sign_in_name: String,
    /// `on` for a role that is held.
    pub administrator: String,
    /// The same.
    pub preparer: String,
    /// The same.
    pub approver: String,
    /// The same.
    pub viewer: String,
    /// The same.
    pub auditor: String,
    /// The last day of an auditor.
    pub until: String,
    /// Ids or addresses of pathways, one a line.
    pub pathways: String,
    /// Ids or addresses of statements, one a line.
    pub statements: String,
}

impl TypedPerson {
    /// A person as their form shows them.
    pub fn of(person: &Person) -> TypedPerson {
        let held = |role| {
            if person.is(role) {
                "on".to_owned()
            } else {
                String::new()
            }
        };
        let lines = |ids: &[uuid::Uuid]| ids.iter().map(ToString::to_string).collect::<Vec<_>>().join("\n");
        let audit = person.audit.as_ref();
        TypedPerson {
            name: person.name.clone(),
            sign_in_name: person.sign_in_name.clone(),
            administrator: held(Role::Administrator),
            preparer: held(Role::Preparer),
            approver: held(Role::Approver),
            viewer: held(Role::Viewer),
            auditor: held(Role::Auditor),
            until: audit.map_or_else(String::new, |audit| last_day(audit.until)),
            pathways: audit.map_or_else(String::new, |audit| lines(&audit.pathways)),
            statements: audit.map_or_else(String::new, |audit| lines(&audit.statements)),
        }
    }

    /// Is the role ticked?
    pub fn holds(&self, role: Role) -> bool {
        let ticked = match role {
            Role::Administrator => &self.administrator,
            Role::Preparer => &self.preparer,
            Role::Approver => &self.approver,
            Role::Viewer => &self.viewer,
            Role::Auditor => &self.auditor,
        };
        !ticked.is_empty()
    }

    fn roles(&self) -> Vec<(&'static str, &'static str, &'static str, bool)> {
        ROLES
            .iter()
            .map(|(role, word, means)| (role.name(), *word, *means, self.holds(*role)))
            .collect()
    }
}

/// The last day before an end, UTC.
fn last_day(until: Timestamp) -> String {
    let before = Timestamp::from_millisecond(until.as_millisecond().saturating_sub(1)).unwrap_or(until);
    before.strftime("%Y-%m-%d").to_string()
}

/// Everybody, and a form to add somebody.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "people/people.html")]
pub struct PeoplePage {
    /// Round the page.
    pub frame: Frame,
    /// Everybody.
    pub people: Vec<Person>,
    /// The person to add, as typed.
    pub typed: TypedPerson,
    /// What is wrong with it.
    pub problems: Vec<Problem>,
    /// Who was just added, with their password to begin with.
    pub added: Option<(String, String)>,
}

impl PeoplePage {
    pub(super) fn frame() -> Frame {
        Frame::new("People", Section::People, "GET /api/v1/people")
    }

    fn wrong(&self, field: &str) -> Vec<&Problem> {
        at(&self.problems, field)
    }

    fn roles(&self, person: &Person) -> String {
        words_of(person)
    }

    fn state(&self, person: &Person) -> String {
        state(person)
    }
}

/// One person.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "people/person.html")]
pub struct PersonPage {
    /// Round the page.
    pub frame: Frame,
    /// The person.
    pub person: Person,
    /// Their fields, as typed.
    pub typed: TypedPerson,
    /// What is wrong with them.
    pub problems: Vec<Problem>,
    /// A password that was just set, told once.
    pub password: Option<String>,
    /// What was just done.
    pub done: &'static str,
}

impl PersonPage {
    pub(super) fn frame(person: &Person) -> Frame {
        Frame::new(
            person.name.clone(),
            Section::People,
            format!("GET /api/v1/people/{}", person.id),
        )
    }

    fn wrong(&self, field: &str) -> Vec<&Problem> {
        at(&self.problems, field)
    }

    fn roles(&self) -> String {
        words_of(&self.person)
    }

    fn state(&self) -> String {
        state(&self.person)
    }

    fn added(&self) -> String {
        shown(self.person.created_at)
    }
}

fn words_of(person: &Person) -> String {
    let held: Vec<_> = ROLES
        .iter()
        .filter(|(role, ..)| person.is(*role))
        .map(|(_, word, _)| word.to_lowercase())
        .collect();
    match &person.audit {
        Some(audit) => format!("{} until {}", held.join(", "), last_day(audit.until)),
        None => held.join(", "),
    }
}

fn state(person: &Person) -> String {
    match (&person.disabled_at, person.must_change_password) {
        (Some(at), _) => format!("kept out since {}", shown(*at)),
        (None, true) => "has not chosen a password yet".into(),
        (None, false) => "can sign in".into(),
    }
}
