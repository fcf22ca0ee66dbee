//! What is wrong with a document: where, what, and what to do about it.

use serde::{Deserialize, Serialize};
use std::fmt;
use utoipa::ToSchema;

/// One thing wrong with a document.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize, ToSchema)]
pub struct Problem {
    /// JSON pointer (RFC 6901) to the field; empty for the whole document.
    pub pointer: String,
    /// What is wrong, naming the figures and units involved.
    pub detail: String,
    /// What to do about it.
    pub remedy: String,
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let pointer = if self.pointer.is_empty() {
            "/"
        } else {
            &self.pointer
        };
        write!(f, "{pointer}: {} {}", self.detail, self.remedy)
    }
}

/// All problems of a document, in the order they were met.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Problems(Vec<Problem>);

impl Problems {
    /// More than this many are not collected: a broken file would only repeat itself.
    pub const MOST: usize = 200;

    /// Notes one problem.
    pub fn add(&mut self, pointer: impl fmt::Display, detail: impl Into<String>, remedy: impl Into<String>) {
        if self.0.len() < Self::MOST {
            self.0.push(Problem {
                pointer: pointer.to_string(),
                detail: detail.into(),
                remedy: remedy.into(),
            });
        }
    }

    /// True if nothing is wrong.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// How many were noted.
    pub fn len(&self) -> usize {
        self.0.len()
    }

    /// The problems in order.
    pub fn list(&self) -> &[Problem] {
        &self.0
    }

    /// The problems, taken out.
    pub fn into_list(self) -> Vec<Problem> {
        self.0
    }
}

impl From<Problem> for Problems {
    fn from(problem: Problem) -> Problems {
        Problems(vec![problem])
    }
}
