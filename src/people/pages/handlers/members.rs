//! The members of the organisation: who they are, what they may do, what auditors see.

use super::super::members::{PeoplePage, PersonPage, TypedPerson};
use super::super::problems;
use super::{Done, id_of, told_once};
use crate::app::App;
use crate::core::documents::Problem;
use crate::people::api::read::end_of;
use crate::people::{
    Audit, Change, NewPerson, PeopleError, Person, Role, add, change, disable, find, people, reset_password,
};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanAdminister};
use crate::web::answers::{page, see_other, with_status};
use crate::web::extract::{Form, NoQuery, Path, Query};
use axum::http::StatusCode;
use axum::response::{IntoResponse, Response};
use serde::Deserialize;
use std::collections::BTreeSet;
use uuid::Uuid;

async fn people_page(app: &App) -> Result<PeoplePage, PeopleError> {
    Ok(PeoplePage {
        frame: PeoplePage::frame(),
        people: people(app).await?,
        typed: TypedPerson::default(),
        problems: Vec::new(),
        added: None,
    })
}

pub(super) async fn show_people(
    Actor { app, .. }: Actor<CanAdminister>,
    _: NoQuery,
) -> Result<Response, Refusal> {
    page(&people_page(&app).await?)
}

pub(super) async fn do_add(
    Actor { app, .. }: Actor<CanAdminister>,
    Form(typed): Form<TypedPerson>,
) -> Result<Response, Refusal> {
    let (roles, audit, mut found) = read(&typed);
    let new = NewPerson {
        name: typed.name.clone(),
        sign_in_name: typed.sign_in_name.clone(),
        roles,
        audit,
        password: None,
    };
    if found.is_empty() {
        match add(&app, new).await {
            Ok(added) => {
                let password = added.temporary_password.unwrap_or_default();
                let shown = PeoplePage {
                    added: Some((added.person.name, password)),
                    ..people_page(&app).await?
                };
                return told_once(page(&shown)?);
            }
            Err(error) => found = problems(error)?,
        }
    }
    let refused = PeoplePage {
        problems: found,
        typed,
        ..people_page(&app).await?
    };
    with_status(StatusCode::UNPROCESSABLE_ENTITY, &refused)
}

fn person_page(person: Person) -> PersonPage {
    PersonPage {
        frame: PersonPage::frame(&person),
        typed: TypedPerson::of(&person),
        problems: Vec::new(),
        password: None,
        done: "",
        person,
    }
}

pub(super) async fn show_person(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    Query(done): Query<Done>,
) -> Result<Response, Refusal> {
    let shown = person_page(find(&app, id_of(&id)?).await?);
    page(&PersonPage {
        done: done.words(),
        ..shown
    })
}

pub(super) async fn do_change(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    Form(typed): Form<TypedPerson>,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    let (roles, audit, mut found) = read(&typed);
    let new = Change {
        name: typed.name.clone(),
        roles,
        audit,
    };
    if found.is_empty() {
        match change(&app, id, new).await {
            Ok(person) => return Ok(see_other(&format!("/people/{}?done=changed", person.id))),
            Err(error) => found = problems(error)?,
        }
    }
    let refused = PersonPage {
        problems: found,
        typed,
        ..person_page(find(&app, id).await?)
    };
    with_status(StatusCode::UNPROCESSABLE_ENTITY, &refused)
}

#[derive(Default, Deserialize)]
#[serde(default)]
pub(super) struct Reset {
    revoke_tokens: String,
}

pub(super) async fn do_reset(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    Form(form): Form<Reset>,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    let password = reset_password(&app, id, None, !form.revoke_tokens.is_empty()).await?;
    let shown = PersonPage {
        password: Some(password),
        ..person_page(find(&app, id).await?)
    };
    told_once(page(&shown)?)
}

#[derive(Deserialize)]
pub(super) struct Disable {
    disabled: String,
}

pub(super) async fn do_disable(
    Actor { app, .. }: Actor<CanAdminister>,
    Path(id): Path<String>,
    Form(form): Form<Disable>,
) -> Result<Response, Refusal> {
    let id = id_of(&id)?;
    match disable(&app, id, form.disabled == "yes").await {
        Ok(_) => Ok(see_other(&format!("/people/{id}?done=changed"))),
        Err(error) => {
            let refused = PersonPage {
                problems: problems(error)?,
                ..person_page(find(&app, id).await?)
            };
            Ok(with_status(StatusCode::CONFLICT, &refused)?.into_response())
        }
    }
}

/// Roles and invitations out of a form, and what is wrong with them.
fn read(typed: &TypedPerson) -> (BTreeSet<Role>, Option<Audit>, Vec<Problem>) {
    let roles: BTreeSet<Role> = Role::ALL
        .iter()
        .copied()
        .filter(|role| typed.holds(*role))
        .collect();
    let mut found = Vec::new();
    if !roles.contains(&Role::Auditor) {
        return (roles, None, found);
    }
    let until = typed.until.trim().parse().ok().and_then(end_of);
    if until.is_none() {
        found.push(Problem {
            pointer: "/audit/until".into(),
            detail: "An auditor looks until a day.".into(),
            remedy: "Write it as year-month-day, such as 2026-12-31.".into(),
        });
    }
    let mut ids = |field: &str, text: &str| -> Vec<Uuid> {
        let mut all = Vec::new();
        for line in text.split_whitespace() {
            // An address that somebody copied ends in the id.
            let part = line.split(['?', '#']).next().unwrap_or(line);
            match part.rsplit('/').next().unwrap_or(part).parse() {
                Ok(id) => all.push(id),
                Err(_) => found.push(Problem {
                    pointer: format!("/audit/{field}"),
                    detail: format!("\"{}\" is no address or id.", crate::web::problem::shown(line)),
                    remedy: "Copy the address of its page, one a line.".into(),
                }),
            }
        }
        all
    };
    let (pathways, statements) = (
        ids("pathways", &typed.pathways),
        ids("statements", &typed.statements),
    );
    let audit = until.map(|until| Audit {
        until,
        pathways,
        statements,
    });
    (roles, audit, found)
}
