//! The own account: name, password, sessions, tokens, and in the demonstration whom to be.

use super::super::gate::Arrival;
use super::super::me::{MePage, TypedToken};
use super::super::problems;
use super::super::sign_in::PasswordPage;
use super::{Done, come_in, gone, id_of, told_once};
use crate::app::App;
use crate::app::who::Right;
use crate::core::documents::Problem;
use crate::people::{
    Account, NewToken, PeopleError, change_password, end_session, make_token, revoke_token, sessions,
    set_theme, sign_in_as, sign_out_everywhere, tokens,
};
use crate::web::Refusal;
use crate::web::actor::{Actor, Anyone, CanRead};
use crate::web::answers::{page, see_other, with_status};
use crate::web::cookies;
use crate::web::extract::{Form, NoQuery, Path, Query};
use crate::web::frame::{Frame, Section};
use axum::extract::Extension;
use axum::http::{HeaderMap, StatusCode};
use axum::response::Response;
use serde::Deserialize;
use uuid::Uuid;

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

pub(super) async fn show_me(
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

pub(super) async fn show_password(Actor { app, .. }: Actor<Anyone>, _: NoQuery) -> Result<Response, Refusal> {
    signed_in(&app)?;
    page(&password_page(&app, Vec::new()).await?)
}

#[derive(Deserialize)]
pub(super) struct Passwords {
    old: String,
    new: String,
    again: String,
}

pub(super) async fn do_password(
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
pub(super) struct Theme {
    theme: String,
}

pub(super) async fn do_theme(
    Actor { app, .. }: Actor<CanRead>,
    Form(form): Form<Theme>,
) -> Result<Response, Refusal> {
    set_theme(&app, &form.theme).await?;
    Ok(see_other("/me?done=theme"))
}

pub(super) async fn do_token(
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

pub(super) async fn do_revoke(
    Actor { app, .. }: Actor<CanRead>,
    Path(id): Path<String>,
) -> Result<Response, Refusal> {
    revoke_token(&app, id_of(&id)?).await?;
    Ok(see_other("/me?done=revoked"))
}

pub(super) async fn do_end_session(
    Actor { app, .. }: Actor<CanRead>,
    Path(name): Path<String>,
) -> Result<Response, Refusal> {
    end_session(&app, &name).await?;
    Ok(see_other("/me?done=ended"))
}

pub(super) async fn do_sign_out_everywhere(
    Actor { app, .. }: Actor<CanRead>,
    Extension(arrival): Extension<Arrival>,
) -> Result<Response, Refusal> {
    sign_out_everywhere(&app).await?;
    Ok(gone(&arrival))
}

#[derive(Deserialize)]
pub(super) struct ActAs {
    person: Uuid,
}

/// In the demonstration, on this machine: be another of its people.
pub(super) async fn do_act_as(
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
