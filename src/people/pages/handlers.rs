//! The handlers of the pages about people.

use super::gate::{Arrival, PASSWORD};
use super::me::{MePage, TypedToken};
use super::members::{PeoplePage, PersonPage, TypedPerson};
use super::problems;
use super::sign_in::{PasswordPage, SignInPage};
use crate::app::App;
use crate::app::who::{Right, Via};
use crate::core::documents::Problem;
use crate::people::api::read::end_of;
use crate::people::{
    Account, Audit, Change, NewPerson, NewToken, PeopleError, Person, Role, add, anybody, change,
    change_password, disable, end_session, find, make_token, people, reset_password, revoke_token, seconds,
    sessions, set_theme, sign_in, sign_in_as, sign_out, sign_out_everywhere, tokens,
};
use crate::web::Refusal;
use crate::web::actor::{Actor, Anyone, CanAdminister, CanRead};
use crate::web::answers::{page, see_other, with_status};
use crate::web::cookies;
use crate::web::extract::{Form, NoQuery, Path, Query};
use crate::web::frame::{Frame, Section};
use crate::web::links::local;
use axum::Router;
use axum::extract::Extension;
use axum::http::header::{CACHE_CONTROL, RETRY_AFTER, SET_COOKIE};
use axum::http::{HeaderMap, HeaderValue, StatusCode};
use axum::response::{IntoResponse, Response};
use axum::routing::{get, post};
use serde::Deserialize;
use std::collections::BTreeSet;
use uuid::Uuid;

/// The routes of the pages.
pub fn routes() -> Router<App> {
    Router::new()
        .route("/sign-in", get(show_sign_in).post(do_sign_in))
        .route("/sign-out", post(do_sign_out))
        .route("/me", get(show_me))
        .route(PASSWORD, get(show_password).post(do_password))
        .route("/me/theme", post(do_theme))
        .route("/me/tokens", post(do_token))
        .route("/me/tokens/{id}/revoke", post(do_revoke))
        .route("/me/sessions/{name}/end", post(do_end_session))
        .route("/me/sign-out-everywhere", post(do_sign_out_everywhere))
        .route("/me/act-as", post(do_act_as))
        .route("/people", get(show_people).post(do_add))
        .route("/people/{id}", get(show_person).post(do_change))
        .route("/people/{id}/password", post(do_reset))
        .route("/people/{id}/disable", post(do_disable))
}

#[derive(Debug, Default, Deserialize)]
#[serde(default, deny_unknown_fields)]
struct Next {
    next: String,
}

#[derive(Deserialize)]
struct Credentials {
    name: String,
    password: String,
    #[serde(default)]
    next: String,
}

async fn show_sign_in(
    Actor { app, .. }: Actor<Anyone>,
    Query(Next { next }): Query<Next>,
) -> Result<Response, Refusal> {
    if matches!(app.who.via, Via::Session(_)) && !next.is_empty() {
        return Ok(see_other(local(&next)));
    }
    page(&SignInPage::of(local(&next), !anybody(&app).await?))
}

async fn do_sign_in(
    Actor { app, .. }: Actor<Anyone>,
    Extension(arrival): Extension<Arrival>,
    headers: HeaderMap,
    Form(form): Form<Credentials>,
) -> Result<Response, Refusal> {
    let before = cookies::read(&headers, cookies::SESSION).map(str::to_owned);
    let next = local(&form.next).to_owned();
    match sign_in(&app, &form.name, form.password, before).await {
        Ok(signed_in) => Ok(come_in(
            &arrival,
            &signed_in.secret,
            if signed_in.must_change { PASSWORD } else { &next },
        )),
        Err(error @ (PeopleError::DoNotFit | PeopleError::TooOften(_))) => {
            let refused = SignInPage {
                name: form.name.chars().take(200).collect(),
                refused: error.to_string(),
                ..SignInPage::of(&next, !anybody(&app).await?)
            };
            if let PeopleError::TooOften(wait) = error {
                let mut response = with_status(StatusCode::TOO_MANY_REQUESTS, &refused)?;
                response
                    .headers_mut()
                    .insert(RETRY_AFTER, HeaderValue::from(seconds(wait)));
                return Ok(response);
            }
            with_status(StatusCode::UNPROCESSABLE_ENTITY, &refused)
        }
        Err(error) => Err(error.into()),
    }
}

/// Gives the browser its session, in place of what it had, and sends it on.
pub(super) fn come_in(arrival: &Arrival, secret: &str, next: &str) -> Response {
    let mut response = see_other(next);
    let age = Some(crate::people::LONGEST.as_secs());
    let set = cookies::set(cookies::SESSION, secret, age, arrival.secure);
    for cookie in [set, cookies::clear(cookies::VISIT, arrival.secure)]
        .into_iter()
        .flatten()
    {
        response.headers_mut().append(SET_COOKIE, cookie);
    }
    response
}

/// Takes the session from the browser, and sends it to the door.
fn gone(arrival: &Arrival) -> Response {
    let mut response = see_other("/sign-in");
    if let Some(cookie) = cookies::clear(cookies::SESSION, arrival.secure) {
        response.headers_mut().append(SET_COOKIE, cookie);
    }
    response
}

async fn do_sign_out(
    Actor { app, .. }: Actor<Anyone>,
    Extension(arrival): Extension<Arrival>,
) -> Result<Response, Refusal> {
    match sign_out(&app).await {
        Ok(()) | Err(PeopleError::NoPerson) => Ok(gone(&arrival)),
        Err(error) => Err(error.into()),
    }
}

async fn me_page(app: &App, arrival: &Arrival) -> Result<MePage, PeopleError> {
    let account = Account::of(app).await?;
    let demo = arrival.demo.as_ref().map_or_else(Vec::new, |demo| {
        demo.people
            .iter()
            .map(|(id, words)| (*id, *words, Some(*id) == app.who.person))
            .collect()
    });
    let words = |right: &Right| match right {
        Right::Read => "look at data",
        Right::Write => "enter and change data, prepare statements",
        Right::Approve => "approve statements",
        Right::Administer => "name the people and what they may do",
    };
    Ok(MePage {
        frame: MePage::frame(),
        organisation: app.who.organisation_name.clone(),
        may: app.who.rights.iter().map(words).collect(),
        sessions: sessions(app).await?,
        tokens: tokens(app).await?,
        now: app.clock.now(),
        made: None,
        typed: TypedToken {
            days: "90".into(),
            read: "on".into(),
            ..TypedToken::default()
        },
        problems: Vec::new(),
        demo,
        done: "",
        account,
    })
}

#[derive(Debug, Default, Deserialize)]
#[serde(default, deny_unknown_fields)]
struct Done {
    done: String,
}

impl Done {
    /// The words of what was just done; nothing that an address holds is shown.
    fn words(&self) -> &'static str {
        match self.done.as_str() {
            "password" => "The password is changed. Every other session has ended.",
            "theme" => "Pages look as you chose.",
            "revoked" => "The token is revoked and refused from now on.",
            "ended" => "The session has ended.",
            "changed" => "Kept.",
            _ => "",
        }
    }
}

async fn show_me(
    Actor { app, .. }: Actor<CanRead>,
    Extension(arrival): Extension<Arrival>,
    Query(done): Query<Done>,
) -> Result<Response, Refusal> {
    let me = me_page(&app, &arrival).await?;
    page(&MePage {
        done: done.words(),
        ..me
    })
}

/// What a handler may do that anybody who signed in may: even somebody who must choose a password first.
fn signed_in(app: &App) -> Result<(), Refusal> {
    if app.who.is_known() {
        Ok(())
    } else {
        Err(Refusal::of(StatusCode::UNAUTHORIZED))
    }
}

async fn password_page(app: &App, problems: Vec<Problem>) -> Result<PasswordPage, PeopleError> {
    let account = Account::of(app).await?;
    Ok(PasswordPage {
        frame: Frame::bare("Choose a password", Section::Me),
        sign_in_name: account.person.sign_in_name,
        must: account.person.must_change_password,
        problems,
    })
}

async fn show_password(Actor { app, .. }: Actor<Anyone>, _: NoQuery) -> Result<Response, Refusal> {
    signed_in(&app)?;
    page(&password_page(&app, Vec::new()).await?)
}

#[derive(Deserialize)]
struct Passwords {
    old: String,
    new: String,
    again: String,
}

async fn do_password(
    Actor { app, .. }: Actor<Anyone>,
    Form(form): Form<Passwords>,
) -> Result<Response, Refusal> {
    signed_in(&app)?;
    let wrong = |pointer: &str, detail: String, remedy: &str| {
        vec![Problem {
            pointer: pointer.into(),
            detail,
            remedy: remedy.into(),
        }]
    };
    let found = if form.new == form.again {
        match change_password(&app, form.old, form.new).await {
            Ok(()) => return Ok(see_other("/me?done=password")),
            Err(PeopleError::DoNotFit) => wrong(
                "/old",
                "This is not your present password.".into(),
                "Type it again.",
            ),
            Err(error @ PeopleError::TooOften(_)) => wrong("/old", error.to_string(), ""),
            Err(error) => problems(error)?,
        }
    } else {
        wrong(
            "/again",
            "The two new passwords differ.".into(),
            "Type the same twice.",
        )
    };
    with_status(
        StatusCode::UNPROCESSABLE_ENTITY,
        &password_page(&app, found).await?,
    )
}

#[derive(Deserialize)]
struct Theme {
    theme: String,
}

async fn do_theme(Actor { app, .. }: Actor<CanRead>, Form(form): Form<Theme>) -> Result<Response, Refusal> {
    set_theme(&app, &form.theme).await?;
    Ok(see_other("/me?done=theme"))
}

async fn do_token(
    Actor { app, .. }: Actor<CanRead>,
    Extension(arrival): Extension<Arrival>,
    Form(typed): Form<TypedToken>,
) -> Result<Response, Refusal> {
    let scopes = [
        (&typed.read, Right::Read),
        (&typed.write, Right::Write),
        (&typed.approve, Right::Approve),
    ];
    let new = NewToken {
        label: typed.label.clone(),
        scopes: scopes
            .iter()
            .filter(|(ticked, _)| !ticked.is_empty())
            .map(|(_, right)| *right)
            .collect(),
        days: typed.days.trim().parse().unwrap_or(0),
    };
    match make_token(&app, None, new).await {
        Ok(made) => {
            let me = MePage {
                made: Some(made.token),
                ..me_page(&app, &arrival).await?
            };
            told_once(page(&me)?)
        }
        Err(error) => {
            let me = MePage {
                problems: problems(error)?,
                typed,
                ..me_page(&app, &arrival).await?
            };
            with_status(StatusCode::UNPROCESSABLE_ENTITY, &me)
        }
    }
}

/// A page that holds a secret: nothing keeps it.
fn told_once(mut response: Response) -> Result<Response, Refusal> {
    response
        .headers_mut()
        .insert(CACHE_CONTROL, HeaderValue::from_static("no-store"));
    Ok(response)
}

fn id_of(text: &str) -> Result<Uuid, Refusal> {
    text.parse().map_err(|_| Refusal::of(StatusCode::NOT_FOUND))
}

async fn do_revoke(Actor { app, .. }: Actor<CanRead>, Path(id): Path<String>) -> Result<Response, Refusal> {
    revoke_token(&app, id_of(&id)?).await?;
    Ok(see_other("/me?done=revoked"))
}

async fn do_end_session(
    Actor { app, .. }: Actor<CanRead>,
    Path(name): Path<String>,
) -> Result<Response, Refusal> {
    end_session(&app, &name).await?;
    Ok(see_other("/me?done=ended"))
}

async fn do_sign_out_everywhere(
    Actor { app, .. }: Actor<CanRead>,
    Extension(arrival): Extension<Arrival>,
) -> Result<Response, Refusal> {
    sign_out_everywhere(&app).await?;
    Ok(gone(&arrival))
}

#[derive(Deserialize)]
struct ActAs {
    person: Uuid,
}

/// In the demonstration, on this machine: be another of its people.
async fn do_act_as(
    Actor { app, .. }: Actor<CanRead>,
    Extension(arrival): Extension<Arrival>,
    headers: HeaderMap,
    Form(form): Form<ActAs>,
) -> Result<Response, Refusal> {
    let known = arrival
        .demo
        .as_ref()
        .is_some_and(|demo| demo.people.iter().any(|(id, _)| *id == form.person));
    if !known {
        return Err(Refusal::of(StatusCode::NOT_FOUND));
    }
    let before = cookies::read(&headers, cookies::SESSION).map(str::to_owned);
    let signed_in = sign_in_as(&app, form.person, before, "demonstration").await?;
    Ok(come_in(&arrival, &signed_in.secret, "/me"))
}

async fn people_page(app: &App) -> Result<PeoplePage, PeopleError> {
    Ok(PeoplePage {
        frame: PeoplePage::frame(),
        people: people(app).await?,
        typed: TypedPerson::default(),
        problems: Vec::new(),
        added: None,
    })
}

async fn show_people(Actor { app, .. }: Actor<CanAdminister>, _: NoQuery) -> Result<Response, Refusal> {
    page(&people_page(&app).await?)
}

async fn do_add(
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

async fn show_person(
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

async fn do_change(
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
struct Reset {
    revoke_tokens: String,
}

async fn do_reset(
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
struct Disable {
    disabled: String,
}

async fn do_disable(
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
