//! The pages, asked as a browser without script asks: addresses followed, forms filled in and sent.

mod calculators;
mod defaults;
mod facts;
mod form;
mod meeting;
mod pages;
mod rules;
mod stage;

use crate::support::test_app::{Answer, TestApp};
use form::Form;

/// A page that is there.
async fn page(app: &TestApp, path: &str) -> String {
    let answer = app.get(path).await;
    assert_eq!(answer.status, 200, "{path}: {}", answer.text());
    assert!(answer.header("content-type").starts_with("text/html"), "{path}");
    answer.text()
}

/// Sends a form.
async fn send(app: &TestApp, form: &Form) -> Answer {
    let headers = [("content-type", "application/x-www-form-urlencoded")];
    app.ask("POST", &form.action, &headers, form.body()).await
}

/// Sends a form that is taken, and goes where it leads.
async fn follow(app: &TestApp, form: &Form) -> String {
    let answer = send(app, form).await;
    assert_eq!(answer.status, 303, "{}", answer.text());
    page(app, answer.header("location")).await
}

/// The address of the page of a stored pathway.
fn of_pages(api: &str) -> String {
    api.trim_start_matches("/api/v1").to_owned()
}
