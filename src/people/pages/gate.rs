//! The layer that knows people: reads the token or the cookie of a request, says who asks and whether a form came from a
//! page of ours, and tells the page whom it is for. Every route stands behind it.

use crate::app::App;
use crate::app::who::{Right, Via, Who};
use crate::config::Networks;
use crate::people::credentials::recognise::{Come, Manners};
use crate::people::{PeopleError, recognise_session, recognise_token, secrets, sign_in_as};
use crate::web::Refusal;
use crate::web::actor::Asking;
use crate::web::answers::see_other;
use crate::web::cookies;
use crate::web::form_check::{FormCheck, taken_out};
use crate::web::patience::Peer;
use crate::web::visitor::Visitor;
use axum::extract::{ConnectInfo, Request, State};
use axum::http::header::{AUTHORIZATION, HOST, HeaderValue, ORIGIN, WWW_AUTHENTICATE};
use axum::http::{HeaderMap, Method, StatusCode};
use axum::middleware::Next;
use axum::response::{IntoResponse, Response};
use std::net::IpAddr;
use std::sync::Arc;
use tokio::sync::Mutex;
use uuid::Uuid;

/// Where somebody goes who must choose a password.
pub(super) const PASSWORD: &str = "/me/password";

/// How people come in.
#[derive(Clone, Debug, Default)]
pub struct Door {
    /// Proxies whose `X-Forwarded-For` and `X-Forwarded-Proto` are believed.
    pub trusted_proxies: Networks,
    /// Cookies are sent over TLS only, however the request came.
    pub secure_cookies: bool,
    /// Visitors of the demonstration are signed in as somebody.
    pub demo: Option<Arc<DemoDoor>>,
}

/// The people of a demonstration: whoever comes from this machine is the first of them.
#[derive(Debug)]
pub struct DemoDoor {
    /// Public ids with what they are, in words.
    pub people: Vec<(Uuid, &'static str)>,
    /// The session that visitors share.
    session: Mutex<String>,
}

impl DemoDoor {
    /// A door for these people.
    pub fn new(people: Vec<(Uuid, &'static str)>) -> DemoDoor {
        DemoDoor {
            people,
            session: Mutex::default(),
        }
    }

    /// Who a visitor is, with the secret that stands for their session.
    async fn visitor(&self, app: &App, from: &str) -> Result<Option<(String, Come)>, PeopleError> {
        let mut session = self.session.lock().await;
        if let Some(come) = recognise_session(app, &session, from).await? {
            return Ok(Some((session.clone(), come)));
        }
        let Some((first, _)) = self.people.first() else {
            return Ok(None);
        };
        let asked = app.asked_by(app.organisation, Arc::new(stranger(from)));
        *session = sign_in_as(&asked, *first, None, "demonstration").await?.secret;
        let come = recognise_session(app, &session, from).await?;
        Ok(come.map(|come| (session.clone(), come)))
    }
}

fn stranger(from: &str) -> Who {
    Who {
        from: from.to_owned(),
        ..Who::stranger()
    }
}

/// What the layer needs.
#[derive(Clone)]
pub struct Gate {
    /// The program.
    pub app: App,
    /// How people come in.
    pub door: Arc<Door>,
}

/// Where a request came from, for handlers that set cookies and begin sessions.
#[derive(Clone, Debug)]
pub(crate) struct Arrival {
    /// The address of the client.
    pub(crate) from: String,
    /// True if cookies are to be sent over TLS only.
    pub(crate) secure: bool,
    /// The demonstration, for those who may change who they are in it.
    pub(crate) demo: Option<Arc<DemoDoor>>,
}

/// Somebody who came, and the secret that their forms belong to.
struct Visit {
    come: Option<Come>,
    secret: String,
    /// A cookie for a browser that has none yet.
    cookie: Option<HeaderValue>,
    /// Forms need no token: the request shows by itself that a script of theirs sent it.
    by_token: bool,
}

/// The layer.
pub async fn authenticate(State(gate): State<Gate>, request: Request, next: Next) -> Response {
    // Files of the program are the same for everybody.
    if request.uri().path().starts_with("/assets/") {
        return next.run(request).await;
    }
    match enter(&gate, request, next).await {
        Ok(response) => response,
        Err(refusal) => refusal.into_response(),
    }
}

async fn enter(gate: &Gate, mut request: Request, next: Next) -> Result<Response, Refusal> {
    let arrival = arrival(&gate.door, &request);
    let visit = match request.extensions().get::<Asking>() {
        Some(asking) => put_before(asking),
        None => visit(gate, &arrival, request.headers()).await?,
    };
    let path = request.uri().path().to_owned();
    if let Some((_, _, manners)) = &visit.come
        && manners.must_change
        && !visit.by_token
        && ![PASSWORD, "/sign-out"].contains(&path.as_str())
    {
        if request.method() == Method::GET && !path.starts_with("/api/") {
            return Ok(see_other(PASSWORD));
        }
        return Err(Refusal::not_allowed(
            "Your password was set by somebody else. Choose your own at /me/password first.",
        ));
    }
    let form_token = secrets::form_token(&visit.secret);
    let (mut request, check) = if request.method().is_safe() {
        (request, FormCheck::Passed)
    } else if path.starts_with("/api/") {
        let check = script_check(&request, &visit, &form_token);
        (request, check)
    } else {
        let (request, token) = taken_out(std::mem::take(&mut request)).await?;
        let passed = visit.by_token || token.is_some_and(|token| secrets::same(&token, &form_token));
        (
            request,
            if passed {
                FormCheck::Passed
            } else {
                FormCheck::Missing
            },
        )
    };
    let visitor = visitor(&visit, form_token);
    if let Some((organisation, who, _)) = visit.come {
        request.extensions_mut().insert(Asking { organisation, who });
    } else if request.extensions().get::<Asking>().is_none() {
        let who = Arc::new(stranger(&arrival.from));
        request.extensions_mut().insert(Asking {
            organisation: gate.app.organisation,
            who,
        });
    }
    request.extensions_mut().insert(check);
    request.extensions_mut().insert(arrival);
    let mut response = next.run(request).await;
    response.extensions_mut().insert(visitor);
    Ok(response)
}

/// Who came, by token, by cookie, or because this is the demonstration.
async fn visit(gate: &Gate, arrival: &Arrival, headers: &HeaderMap) -> Result<Visit, Refusal> {
    let app = &gate.app;
    if let Some(token) = bearer(headers) {
        let Some(come) = recognise_token(app, token, &arrival.from).await? else {
            return Err(Refusal::of(StatusCode::UNAUTHORIZED)
                .detail(
                    "The token is not known here, has ended or was revoked, or its person is disabled. Make another at /me.",
                )
                .header(
                    WWW_AUTHENTICATE,
                    HeaderValue::from_static("Bearer error=\"invalid_token\""),
                ));
        };
        return Ok(Visit {
            come: Some(come),
            secret: token.to_owned(),
            cookie: None,
            by_token: true,
        });
    }
    let by_cookie = |come, secret: &str| Visit {
        come: Some(come),
        secret: secret.to_owned(),
        cookie: None,
        by_token: false,
    };
    if let Some(secret) = cookies::read(headers, cookies::SESSION)
        && let Some(come) = recognise_session(app, secret, &arrival.from).await?
    {
        return Ok(by_cookie(come, secret));
    }
    if let Some(demo) = &arrival.demo
        && let Some((secret, come)) = demo.visitor(app, &arrival.from).await?
    {
        return Ok(by_cookie(come, &secret));
    }
    let kept = cookies::read(headers, cookies::VISIT).filter(|secret| secrets::is_secret(secret));
    let secret = kept.map_or_else(|| secrets::fresh(&app.clock), str::to_owned);
    Ok(Visit {
        come: None,
        cookie: match kept {
            Some(_) => None,
            None => cookies::set(cookies::VISIT, &secret, None, arrival.secure),
        },
        secret,
        by_token: false,
    })
}

/// Somebody whom another layer has put on the request already: tests of what stands behind this one.
fn put_before(asking: &Asking) -> Visit {
    let manners = Manners {
        must_change: false,
        theme: String::new(),
    };
    Visit {
        come: Some((asking.organisation, asking.who.clone(), manners)),
        secret: String::new(),
        cookie: None,
        by_token: true,
    }
}

fn visitor(visit: &Visit, form_token: String) -> Visitor {
    let who = visit.come.as_ref().map(|(_, who, _)| who);
    let known = who.filter(|who| !visit.by_token && matches!(who.via, Via::Session(_)));
    Visitor {
        name: known.map(|who| who.name.clone()),
        administers: known.is_some_and(|who| who.may(Right::Administer)),
        theme: visit
            .come
            .as_ref()
            .map(|(_, _, manners)| manners.theme.clone())
            .unwrap_or_default(),
        form_token,
        cookie: visit.cookie.clone(),
    }
}

/// The token in `Authorization: Bearer ...`. Other kinds are a matter of the proxy before us.
fn bearer(headers: &HeaderMap) -> Option<&str> {
    let value = headers.get(AUTHORIZATION)?.to_str().ok()?;
    let (kind, token) = value.trim().split_once(' ')?;
    kind.eq_ignore_ascii_case("bearer").then(|| token.trim())
}

/// A write to the API that comes with a cookie shows that a page of ours sent it: by the token of its forms in
/// `X-Form-Token`, or by what the browser says (the layer before this one has refused other origins).
fn script_check(request: &Request, visit: &Visit, form_token: &str) -> FormCheck {
    let headers = request.headers();
    let text = |name: &str| headers.get(name).and_then(|value| value.to_str().ok());
    let passed = visit.by_token
        || visit.come.is_none()
        || text("x-form-token").is_some_and(|token| secrets::same(token, form_token))
        || text("sec-fetch-site") == Some("same-origin")
        || headers.contains_key(ORIGIN);
    if passed {
        FormCheck::Passed
    } else {
        FormCheck::Missing
    }
}

fn arrival(door: &Door, request: &Request) -> Arrival {
    let headers = request.headers();
    let peer = request
        .extensions()
        .get::<ConnectInfo<Peer>>()
        .map(|ConnectInfo(Peer(address))| address.ip().to_canonical());
    let trusted = peer.is_some_and(|peer| door.trusted_proxies.contain(peer));
    let forwarded: Vec<&str> = headers
        .get_all("x-forwarded-for")
        .iter()
        .filter_map(|line| line.to_str().ok())
        .collect();
    let over_tls = trusted
        && headers
            .get("x-forwarded-proto")
            .is_some_and(|proto| proto == "https");
    let of_this_machine = peer.is_some_and(|peer| peer.is_loopback())
        && forwarded.is_empty()
        && !headers.contains_key("forwarded")
        && names_this_machine(headers);
    Arrival {
        from: peer.map_or_else(String::new, |peer| {
            door.trusted_proxies
                .client(peer, forwarded.iter().copied())
                .to_string()
        }),
        secure: door.secure_cookies || over_tls,
        demo: door.demo.clone().filter(|_| of_this_machine),
    }
}

/// A page of elsewhere whose name leads to this machine is not of this machine.
fn names_this_machine(headers: &HeaderMap) -> bool {
    let host = headers
        .get(HOST)
        .and_then(|host| host.to_str().ok())
        .unwrap_or("");
    let name = match host.strip_prefix('[') {
        Some(rest) => rest.split(']').next().unwrap_or_default(),
        None => host.split(':').next().unwrap_or_default(),
    };
    name.eq_ignore_ascii_case("localhost") || name.parse::<IpAddr>().is_ok_and(|ip| ip.is_loopback())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_foreign_name_is_not_this_machine() {
        let named = |host: &'static str| {
            names_this_machine(&HeaderMap::from_iter([(HOST, HeaderValue::from_static(host))]))
        };
        assert!(named("127.0.0.1:8080") && named("localhost") && named("[::1]:80"));
        assert!(!named("127.0.0.1.example.org") && !named("example.org:80") && !named(""));
    }
}
