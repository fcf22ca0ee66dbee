//! People as they come in: with a browser that keeps cookies, or with a token.

mod auditor;
mod forms;
mod members;
mod sign_in;
mod tokens;

use crate::support::test_app::{Answer, answer_of, request};
use axum::Router;
use axum::body::Body;
use std::collections::BTreeMap;
use std::sync::Mutex;
use tempfile::TempDir;
use uuid::Uuid;
use wheelwort::app::App;
use wheelwort::clock::Clock;
use wheelwort::library;
use wheelwort::people::{self, NewPerson, Role};
use wheelwort::web::{Shell, router};

pub const PASSWORD: &str = "barley tram seven";

/// The real service with nobody signed in.
pub struct House {
    pub app: App,
    pub router: Router,
    _folder: TempDir,
}

impl House {
    pub async fn new() -> House {
        House::with(Shell::default()).await
    }

    pub async fn with(shell: Shell) -> House {
        let folder = tempfile::tempdir().expect("a folder");
        let clock = Clock::fixed("2026-12-01T12:00:00Z".parse().expect("a time"), 7);
        let app = App::open(&folder.path().join("wheelwort.db"), clock, library::book())
            .await
            .expect("opens");
        let router = router(app.clone(), shell);
        House {
            app,
            router,
            _folder: folder,
        }
    }

    /// Adds a person who knows their password.
    pub async fn adds(&self, sign_in_name: &str, roles: &[Role]) -> Uuid {
        let new = NewPerson {
            name: format!("Name of {sign_in_name}"),
            sign_in_name: sign_in_name.into(),
            roles: roles.iter().copied().collect(),
            audit: None,
            password: Some(PASSWORD.into()),
        };
        people::add(&self.app, new).await.expect("added").person.id
    }

    pub fn browser(&self) -> Browser<'_> {
        Browser {
            house: self,
            cookies: Mutex::default(),
        }
    }

    /// A browser in which somebody signed in.
    pub async fn signed_in(&self, name: &str) -> Browser<'_> {
        let browser = self.browser();
        let answer = browser.signs_in(name, PASSWORD).await;
        assert_eq!(answer.status, 303, "{}", answer.text());
        browser
    }

    /// Asks with a token.
    pub async fn with_token(&self, token: &str, method: &str, path: &str, body: &str) -> Answer {
        let bearer = format!("Bearer {token}");
        let headers = [
            ("authorization", bearer.as_str()),
            ("content-type", "application/json"),
        ];
        answer_of(&self.router, request(method, path, &headers, body.to_owned())).await
    }

    /// The deeds of the audit trail, oldest first, with their particulars.
    pub async fn deeds(&self) -> Vec<(String, serde_json::Value)> {
        let page = wheelwort::audit_trail::list(&self.app, &wheelwort::audit_trail::Question::default())
            .await
            .expect("lists");
        page.entries
            .into_iter()
            .rev()
            .map(|entry| (entry.line.did, entry.line.what))
            .collect()
    }
}

/// A browser: it keeps the cookies it is given.
pub struct Browser<'h> {
    house: &'h House,
    cookies: Mutex<BTreeMap<String, String>>,
}

impl Browser<'_> {
    pub fn cookie(&self, name: &str) -> Option<String> {
        self.cookies.lock().expect("cookies").get(name).cloned()
    }

    pub fn keeps(&self, name: &str, value: &str) {
        self.cookies
            .lock()
            .expect("cookies")
            .insert(name.into(), value.into());
    }

    pub async fn ask(
        &self,
        method: &str,
        path: &str,
        headers: &[(&str, &str)],
        body: impl Into<Body>,
    ) -> Answer {
        let line = {
            let cookies = self.cookies.lock().expect("cookies");
            let pairs: Vec<_> = cookies
                .iter()
                .map(|(name, value)| format!("{name}={value}"))
                .collect();
            pairs.join("; ")
        };
        let mut all = headers.to_vec();
        all.push(("cookie", &line));
        let answer = answer_of(&self.house.router, request(method, path, &all, body)).await;
        let mut cookies = self.cookies.lock().expect("cookies");
        for set in answer.headers.get_all("set-cookie") {
            let set = set.to_str().expect("text");
            assert!(set.contains("HttpOnly") && set.contains("SameSite=Lax"), "{set}");
            let (name, value) = set
                .split(';')
                .next()
                .and_then(|pair| pair.split_once('='))
                .expect("a cookie");
            if set.contains("Max-Age=0") {
                cookies.remove(name);
            } else {
                cookies.insert(name.into(), value.into());
            }
        }
        drop(cookies);
        answer
    }

    pub async fn get(&self, path: &str) -> Answer {
        self.ask("GET", path, &[], Body::empty()).await
    }

    /// The token in the forms of a page.
    pub async fn form_token(&self, page: &str) -> String {
        let html = self.get(page).await.text();
        let from = html.split("name=\"form_token\" value=\"").nth(1).expect("a form");
        from.split('"').next().expect("a value").to_owned()
    }

    /// Sends the fields of a form as they are, without a token.
    pub async fn sends(&self, path: &str, fields: &[(&str, &str)]) -> Answer {
        let escaped = |text: &str| wheelwort::web::links::segment(text);
        let pairs: Vec<_> = fields
            .iter()
            .map(|(name, value)| format!("{}={}", escaped(name), escaped(value)))
            .collect();
        let kind = [("content-type", "application/x-www-form-urlencoded")];
        self.ask("POST", path, &kind, pairs.join("&")).await
    }

    /// Fills a form of `page` in and sends it.
    pub async fn fills(&self, page: &str, path: &str, fields: &[(&str, &str)]) -> Answer {
        let token = self.form_token(page).await;
        let mut all = vec![("form_token", token.as_str())];
        all.extend_from_slice(fields);
        self.sends(path, &all).await
    }

    pub async fn signs_in(&self, name: &str, password: &str) -> Answer {
        let fields = [("name", name), ("password", password), ("next", "/")];
        self.fills("/sign-in", "/sign-in", &fields).await
    }
}
