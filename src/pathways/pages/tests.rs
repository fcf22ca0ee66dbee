//! Renders every page with every sample: nothing hostile gets through, no page carries what the policy forbids.

use super::samples::{self, HOSTILE};
use super::{home, show, workings};
use crate::core::documents::Problems;
use askama::Template;

/// Every page with every sample: name, HTML.
fn pages() -> Vec<(String, String)> {
    let book = samples::book();
    let mut out = Vec::new();
    let mut add = |name: &str, html: askama::Result<String>| out.push((name.to_owned(), html.expect("a page that renders")));
    for (name, pathway) in [("wheat", samples::wheat()), ("hostile", samples::hostile())] {
        let found = samples::assess(&pathway);
        for in_line in [false, true] {
            let page = show::ShowPathway::of(samples::head(), &pathway, Ok(&found), book, samples::revisions(), in_line);
            add(&format!("pathway_{name}{}", if in_line { "_in_line" } else { "" }), page.render());
        }
        add(&format!("workings_{name}"), workings::ShowWorkings::of(samples::head(), &pathway, &found, book, true).render());
    }
    let mut problems = Problems::default();
    problems.add("/stages/2/inputs/0/unit", HOSTILE, HOSTILE);
    problems.add("/period", "The period is empty.", "Give two days.");
    let broken = show::ShowPathway::of(samples::head(), &samples::hostile(), Err(&problems), book, Vec::new(), false);
    add("pathway_broken", broken.render());
    add("home_empty", home::Home::of(&[], book, home::Asked::default()).render());
    add("home", home::Home::of(&samples::lines(), book, home::Asked::default()).render());
    let nothing = home::Asked { q: HOSTILE.to_owned(), ..home::Asked::default() };
    add("home_nothing", home::Home::of(&samples::lines(), book, nothing).render());
    out
}

#[test]
fn every_page_renders_every_sample_safely() {
    let folder = std::env::var_os("WHEELWORT_PAGES");
    for (name, html) in pages() {
        if let Some(folder) = &folder {
            std::fs::write(std::path::Path::new(folder).join(format!("{name}.html")), &html).expect("a folder to write to");
        }
        let low = html.to_lowercase();
        for banned in ["<script>alert", "<b>bold", " style=\"", "<style", "onclick", "-0.00", "nan", "|safe"] {
            let found = low.find(banned).map(|at| low[at.saturating_sub(80)..].chars().take(200).collect::<String>());
            let word = banned == "nan" && found.as_deref().is_some_and(|text| !text.contains(">nan<"));
            assert!(found.is_none() || word, "{name} holds {banned}: {}", found.unwrap_or_default());
        }
        assert_eq!(html.matches("<main").count(), 1, "{name}");
        assert_eq!(html.matches("<h1").count(), 1, "{name}");
        let ids: Vec<&str> = html.split(" id=\"").skip(1).filter_map(|rest| rest.split('"').next()).collect();
        let mut once = ids.clone();
        once.sort_unstable();
        once.dedup();
        assert_eq!(once.len(), ids.len(), "{name}: ids stand once");
        for target in html.split("href=\"#").skip(1).filter_map(|rest| rest.split('"').next()) {
            assert!(once.binary_search(&target).is_ok(), "{name}: #{target} leads nowhere");
        }
    }
}
