//! Pages of rule sets of one's own: the versions of one, and the form for the next.

use super::super::RuleSetVersion;
use crate::clock::day_of;
use crate::core::documents::{Problems, rule_set};
use crate::core::domain::RuleSet;
use crate::core::domain::rule_set::Standing;
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use crate::web::links;
use askama::Template;

/// The versions of a rule set.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "rules/versions.html")]
pub struct Versions {
    /// Round the page.
    pub frame: Frame,
    /// Title of the rule set.
    pub title: String,
    /// Its id.
    pub id: String,
    /// Address of its page.
    pub href: String,
    /// Address of the form for the next one; none where the reader may not write.
    pub next: Option<String>,
    /// True for a built-in one.
    pub built_in: bool,
    /// The version that was just saved.
    pub saved: Option<String>,
    /// Its versions, newest first.
    pub rows: Vec<VersionRow>,
}

/// One version.
#[derive(Clone, Debug, PartialEq)]
pub struct VersionRow {
    /// Its name.
    pub version: String,
    /// Address of its page.
    pub href: String,
    /// Address of its document.
    pub document: String,
    /// The day it was saved; empty for a built-in one.
    pub day: String,
    /// Hash of its document.
    pub hash: String,
}

impl Versions {
    /// The page of a rule set.
    pub fn of(
        rules: &RuleSet,
        versions: &[RuleSetVersion],
        built_in: bool,
        may_write: bool,
        saved: Option<String>,
    ) -> Versions {
        let rows = versions.iter().map(|line| {
            let id = match built_in {
                true => rules.id.clone(),
                false => format!("{}@{}", rules.id, line.version),
            };
            VersionRow {
                version: line.version.clone(),
                href: links::rule_set(&id),
                document: format!("/api/v1/rule-sets/{}", links::segment(&id)),
                day: line
                    .saved_at
                    .map(|at| filters::short_day(day_of(at)))
                    .unwrap_or_default(),
                hash: line.hash.clone(),
            }
        });
        Versions {
            frame: Frame::new(
                format!("Versions of {}", rules.title),
                Section::Factors,
                format!("GET /api/v1/rule-sets/{}/versions", links::segment(&rules.id)),
            ),
            title: rules.title.clone(),
            id: rules.id.clone(),
            href: links::rule_set(&rules.id),
            next: may_write.then(|| format!("{}/next", links::rule_set(&rules.id))),
            built_in,
            saved: saved.filter(|saved| versions.iter().any(|line| line.version == *saved)),
            rows: rows.collect(),
        }
    }
}

/// The form for a version of a rule set of one's own.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "rules/new_version.html")]
pub struct NewVersion {
    /// Round the page.
    pub frame: Frame,
    /// Title of the rule set it begins from.
    pub title: String,
    /// Address of that one.
    pub href: String,
    /// Where the form is sent.
    pub action: String,
    /// The text.
    pub text: String,
    /// What is wrong with it.
    pub faults: Vec<Fault>,
}

/// One thing that is wrong with a text.
#[derive(Clone, Debug, PartialEq)]
pub struct Fault {
    /// Line, counted from 1; none where nobody can tell.
    pub line: Option<usize>,
    /// Where in the document, such as `/comparator/unit`; empty for the whole.
    pub pointer: String,
    /// What is so.
    pub detail: String,
    /// What to do.
    pub remedy: String,
}

impl NewVersion {
    fn page(rules: &RuleSet, text: String, faults: Vec<Fault>) -> NewVersion {
        let href = links::rule_set(&rules.id);
        NewVersion {
            frame: Frame::new(
                "A rule set of your own",
                Section::Factors,
                format!("PUT /api/v1/rule-sets/{}", links::segment(&rules.id)),
            ),
            title: rules.title.clone(),
            action: format!("{href}/next"),
            href,
            text,
            faults,
        }
    }

    /// The form with the present version as its text, renamed where it has to be.
    pub fn begin(rules: &RuleSet, built_in: bool) -> NewVersion {
        let mut next = rules.clone();
        next.standing = Standing::Own;
        if built_in {
            next.id = format!("own-{}", rules.id);
            next.title = format!("{}, our own reading", rules.title);
            next.version = "1".to_owned();
        } else {
            next.version = following(&rules.version);
        }
        let text = rule_set::toml_of(&next).unwrap_or_default();
        NewVersion::page(rules, text, Vec::new())
    }

    /// The form with what was typed and what is wrong with it.
    pub fn refused(rules: &RuleSet, text: &str, faults: Vec<Fault>) -> NewVersion {
        NewVersion::page(rules, text.to_owned(), faults)
    }
}

/// The name of the version after one: its last number plus one, or a number behind it.
fn following(version: &str) -> String {
    let stem = version.trim_end_matches(|c: char| c.is_ascii_digit());
    let number = version.get(stem.len()..).unwrap_or_default();
    match number.parse::<u64>() {
        Ok(number) => format!("{stem}{}", number.saturating_add(1)),
        Err(_) => format!("{version}-2"),
    }
}

/// A fault in words.
pub(super) fn said(pointer: &str, detail: &str) -> Fault {
    Fault {
        line: None,
        pointer: pointer.to_owned(),
        detail: detail.to_owned(),
        remedy: String::new(),
    }
}

/// What is wrong with a text, each at its line where it can be found.
pub(super) fn faults(text: &str, problems: &Problems) -> Vec<Fault> {
    let faults = problems.list().iter().map(|problem| Fault {
        line: line_of(text, &problem.pointer),
        pointer: problem.pointer.clone(),
        detail: problem.detail.clone(),
        remedy: problem.remedy.clone(),
    });
    faults.collect()
}

/// The line where a pointer's field stands: of the first part that is named so, and from there on of the parts below it; in
/// TOML no further than its table.
fn line_of(text: &str, pointer: &str) -> Option<usize> {
    let lines: Vec<&str> = text.lines().map(str::trim).collect();
    let mut found: Option<usize> = None;
    let mut list = "";
    for part in pointer.split('/').skip(1) {
        let from = found.unwrap_or(0);
        let next = match part.parse::<usize>() {
            Ok(index) => {
                let head = format!("[[{list}]]");
                let mut heads = (0..lines.len()).filter(|k| lines.get(*k).is_some_and(|line| *line == head));
                heads.nth(index)
            }
            Err(_) => {
                list = part;
                let table = |k: &usize| lines.get(*k).is_some_and(|line| line.starts_with('['));
                let end = match found.filter(table) {
                    Some(head) => (head + 1..lines.len()).find(table).unwrap_or(lines.len()),
                    None => lines.len(),
                };
                let named = |k: &usize| lines.get(*k).is_some_and(|line| names(line, part));
                let elsewhere = || (from..lines.len()).find(|k| table(k) && named(k));
                (from..end).find(named).or_else(elsewhere)
            }
        };
        match next {
            Some(line) => found = Some(line),
            None => break,
        }
    }
    found.map(|line| line + 1)
}

/// True if a line gives a value to a field, or begins its table.
fn names(line: &str, field: &str) -> bool {
    let key = line.trim_start_matches(['[', '"', '{', ' ']);
    let begins = key.strip_prefix(field).is_some_and(|rest| {
        rest.trim_start_matches(['"', ' '])
            .starts_with(['=', ':', ']', '.'])
    });
    let ends = line.starts_with('[')
        && line
            .split(']')
            .next()
            .is_some_and(|head| head.ends_with(&format!(".{field}")));
    begins || ends
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pointers_find_their_lines() {
        let text = "id = \"own\"\n\n[comparator]\nvalue = 94.0\nunit = \"g/MJ\"\n\n[[thresholds]]\npercent = 50.0\n\n[[thresholds]]\npercent = 160.0\n\n[limits.land_use_since]\nvalue = 2008.0\n[limits.soil_carbon_cap]\nvalue = 25.0\n";
        assert_eq!(line_of(text, "/id"), Some(1));
        assert_eq!(line_of(text, "/comparator/unit"), Some(5));
        assert_eq!(line_of(text, "/thresholds/1/percent"), Some(11));
        assert_eq!(line_of(text, "/limits/soil_carbon_cap/value"), Some(16));
        assert_eq!(line_of(text, "/nowhere"), None);
        // What is missing in a table stands at its head.
        assert_eq!(line_of(text, "/comparator/source"), Some(3));
        assert_eq!(line_of("{\n  \"id\": 3\n}", "/id"), Some(2));
    }

    #[test]
    fn the_next_version_has_the_next_name() {
        assert_eq!(following("1"), "2");
        assert_eq!(following("2026.9"), "2026.10");
        assert_eq!(following("draft"), "draft-2");
    }
}
