//! Pages of pathways: view models from documents and assessments, templates beside them, handlers that only fetch.

mod answers;
mod backed;
pub mod blend;
pub mod carbon;
pub mod card;
pub mod compare;
pub mod defaults;
mod defaults_handlers;
mod document_handlers;
mod entries;
mod factor_handlers;
pub mod facts;
pub mod findings;
mod handlers;
pub mod home;
mod kept;
pub mod ladder;
pub mod links;
pub mod meeting;
pub mod new;
mod notices;
pub mod revision;
pub mod show;
pub mod stage;
mod stage_handlers;
mod tried;
pub mod verdict;
pub mod workings;

pub use handlers::routes;

#[cfg(test)]
pub mod samples;
#[cfg(test)]
mod single_tests;
#[cfg(test)]
mod tests;

use crate::core::documents::problem::Problem;
use crate::core::domain::{Book, Citation, GwpSet, Status};

/// Which pathway a page shows, and which revision of it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Head {
    /// Id of the pathway.
    pub id: String,
    /// Number of the revision; 0 where nothing is stored.
    pub revision: u64,
    /// Day it was saved, in words.
    pub saved: String,
    /// True if it is archived.
    pub archived: bool,
}

impl Head {
    /// The address of the pathway.
    pub fn href(&self) -> String {
        links::pathway(&self.id)
    }
}

/// One fact in the ruled box.
#[derive(Clone, Debug, PartialEq)]
pub struct Fact {
    /// Its name.
    pub label: &'static str,
    /// What it is.
    pub value: String,
    /// Where more of it stands.
    pub href: Option<String>,
}

impl Fact {
    /// A fact without a link.
    pub fn new(label: &'static str, value: impl Into<String>) -> Fact {
        Fact {
            label,
            value: value.into(),
            href: None,
        }
    }
}

/// What just happened, told once after a save.
#[derive(Clone, Debug, PartialEq)]
pub struct Notice {
    /// The fact, in bold.
    pub what: String,
    /// What follows from it.
    pub then: String,
    /// A way back: address and words.
    pub back: Option<(String, String)>,
}

/// Something wrong with a document, on a page.
#[derive(Clone, Debug, PartialEq)]
pub struct Fault {
    /// Where it can be mended.
    pub href: Option<String>,
    /// The name of that place.
    pub place: String,
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

/// Problems as rows of a page; `place` says where a pointer leads.
pub fn fault_rows(problems: &[Problem], place: impl Fn(&str) -> (Option<String>, String)) -> Vec<Fault> {
    problems
        .iter()
        .map(|problem| {
            let (href, words) = place(&problem.pointer);
            Fault {
                href,
                place: words,
                detail: problem.detail.clone(),
                remedy: problem.remedy.clone(),
            }
        })
        .collect()
}

/// One revision in a list.
#[derive(Clone, Debug, PartialEq)]
pub struct RevisionRow {
    /// Its number.
    pub number: u64,
    /// Address of what changed.
    pub href: String,
    /// Day it was saved, in words.
    pub saved: String,
    /// Why.
    pub why: String,
    /// Net, g CO2e/MJ; none where it could not be worked out.
    pub net: Option<f64>,
    /// Change against the revision before.
    pub change: Option<f64>,
}

/// The gas weights of a set; where the set is not known here any more, nothing is invented: all weigh zero.
pub fn weights(book: &Book, id: &str) -> GwpSet {
    book.gwp_sets.get(id).cloned().unwrap_or_else(|| GwpSet {
        id: id.to_owned(),
        title: id.to_owned(),
        ch4_fossil: 0.0,
        ch4_biogenic: 0.0,
        n2o: 0.0,
        citation: Citation {
            source: "unknown set of weights".to_owned(),
            status: Status::Memory,
        },
        note: None,
    })
}
