//! Pages about people: the way in, one's own account, and the members of the organisation.

pub mod gate;
mod handlers;
mod me;
mod members;
mod sign_in;

pub use handlers::routes;

use super::PeopleError;
use crate::core::documents::Problem;
use jiff::Timestamp;

/// A time as people read it.
fn shown(at: Timestamp) -> String {
    at.strftime("%Y-%m-%d %H:%M UTC").to_string()
}

/// What is wrong with a form, if that is why it was refused; else the error.
fn problems(error: PeopleError) -> Result<Vec<Problem>, PeopleError> {
    match error {
        PeopleError::Problems(problems) => Ok(problems.into_list()),
        PeopleError::LastAdministrator => Ok(vec![Problem {
            pointer: "/roles".into(),
            detail: error.to_string(),
            remedy: String::new(),
        }]),
        other => Err(other),
    }
}

/// The problems of one field.
fn at<'p>(problems: &'p [Problem], field: &str) -> Vec<&'p Problem> {
    let of_field = |pointer: &str| {
        let rest = pointer.strip_prefix('/').unwrap_or(pointer);
        rest == field || rest.strip_prefix(field).is_some_and(|rest| rest.starts_with('/'))
    };
    problems
        .iter()
        .filter(|problem| of_field(&problem.pointer))
        .collect()
}
