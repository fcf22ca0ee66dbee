//! Renders every page with every sample: nothing hostile gets through, no page carries what the policy forbids.

use super::card::Form;
use super::samples::{self, HOSTILE};
use super::{home, show, stage, workings};
use crate::core::documents::Problems;
use askama::Template;

/// Every page with every sample: name, HTML.
fn pages() -> Vec<(String, String)> {
    let book = samples::book();
    let mut out = Vec::new();
    let mut add = |name: &str, html: askama::Result<String>| {
        out.push((name.to_owned(), html.expect("a page that renders")))
    };
    for (name, pathway) in [("wheat", samples::wheat()), ("hostile", samples::hostile())] {
        let found = samples::assess(&pathway);
        for in_line in [false, true] {
            let page = show::ShowPathway::of(
                samples::head(),
                &pathway,
                Ok(&found),
                book,
                samples::revisions(),
                in_line,
            );
            add(
                &format!("pathway_{name}{}", if in_line { "_in_line" } else { "" }),
                page.render(),
            );
        }
        add(
            &format!("workings_{name}"),
            workings::ShowWorkings::of(samples::head(), &pathway, &found, book, true).render(),
        );
    }
    for (name, pathway) in [("wheat", samples::wheat()), ("hostile", samples::hostile())] {
        let found = samples::assess(&pathway);
        for one in &pathway.stages {
            let value = serde_json::to_value(one).expect("json");
            let page = stage::ShowStage::of(card(&pathway, Some(&found), &one.key, &value, &Form::default()));
            add(&format!("stage_{name}_{}", one.key), page.render());
        }
    }
    add("stage_refused", refused().render());
    let mut problems = Problems::default();
    problems.add("/stages/2/inputs/0/unit", HOSTILE, HOSTILE);
    problems.add("/period", "The period is empty.", "Give two days.");
    let broken = show::ShowPathway::of(
        samples::head(),
        &samples::hostile(),
        Err(&problems),
        book,
        Vec::new(),
        false,
    );
    add("pathway_broken", broken.render());
    add(
        "home_empty",
        home::Home::of(&[], book, home::Asked::default()).render(),
    );
    add(
        "home",
        home::Home::of(&samples::lines(), book, home::Asked::default()).render(),
    );
    let nothing = home::Asked {
        q: HOSTILE.to_owned(),
        ..home::Asked::default()
    };
    add(
        "home_nothing",
        home::Home::of(&samples::lines(), book, nothing).render(),
    );
    out
}

#[test]
fn every_page_renders_every_sample_safely() {
    let folder = std::env::var_os("WHEELWORT_PAGES");
    for (name, html) in pages() {
        if let Some(folder) = &folder {
            std::fs::write(std::path::Path::new(folder).join(format!("{name}.html")), &html)
                .expect("a folder to write to");
        }
        let low = html.to_lowercase();
        for banned in [
            "<script>alert",
            "<b>bold",
            " style=\"",
            "<style",
            "onclick",
            "-0.00",
            "nan",
            "|safe",
        ] {
            let found = low
                .find(banned)
                .map(|at| low[at.saturating_sub(80)..].chars().take(200).collect::<String>());
            let word = banned == "nan" && found.as_deref().is_some_and(|text| !text.contains(">nan<"));
            assert!(
                found.is_none() || word,
                "{name} holds {banned}: {}",
                found.unwrap_or_default()
            );
        }
        assert_eq!(html.matches("<main").count(), 1, "{name}");
        assert_eq!(html.matches("<h1").count(), 1, "{name}");
        let ids: Vec<&str> = html
            .split(" id=\"")
            .skip(1)
            .filter_map(|rest| rest.split('"').next())
            .collect();
        let mut once = ids.clone();
        once.sort_unstable();
        once.dedup();
        assert_eq!(once.len(), ids.len(), "{name}: ids stand once");
        for target in html
            .split("href=\"#")
            .skip(1)
            .filter_map(|rest| rest.split('"').next())
        {
            assert!(
                once.binary_search(&target).is_ok(),
                "{name}: #{target} leads nowhere"
            );
        }
    }
}

fn card<'a>(
    pathway: &'a crate::core::documents::Pathway,
    found: Option<&'a crate::core::documents::Assessment>,
    key: &'a str,
    stage: &'a serde_json::Value,
    typed: &'a Form,
) -> stage::Card<'a> {
    stage::Card {
        head: samples::head(),
        pathway,
        found,
        book: samples::book(),
        key,
        stage,
        typed,
        problems: &[],
        refused: false,
        search: None,
        after: None,
    }
}

/// A card that was refused, with a search open and an item added.
fn refused() -> stage::ShowStage {
    let pathway = samples::wheat();
    let found = samples::assess(&pathway);
    let stage = pathway
        .stages
        .iter()
        .find(|stage| stage.key == "grains")
        .expect("there");
    let value = serde_json::to_value(stage).expect("json");
    let mut form = Form::default();
    for (name, text) in [
        ("expected", "14"),
        ("/intakes/0/was", "0"),
        ("/inputs/0/was", "0"),
        ("/inputs/0/unit", "t"),
        ("/inputs/0/amount", "2301"),
        ("/inputs/1/was", "1"),
        ("/inputs/1/factor", "ireland"),
        ("/inputs/2/as", "haul"),
        ("/co_products/0/was", "0"),
        ("/inputs/2/label", HOSTILE),
    ] {
        form.set(name, text);
    }
    let mut problems = Problems::default();
    problems.add(
        "/inputs/0/unit",
        "t is a mass, but this factor counts per MJ.",
        "Give the energy in MJ, GJ, TJ or MWh.",
    );
    problems.add(
        "/inputs/2/model/vehicle",
        "\"vehicle\" is missing.",
        "Add \"vehicle\".",
    );
    problems.add("/inputs/1", "Something about the whole input.", "Mend it.");
    problems.add("", HOSTILE, HOSTILE);
    let shaped = super::card::build::shaped(&value, &form);
    stage::ShowStage::of(stage::Card {
        problems: problems.list(),
        refused: true,
        search: Some("/inputs/1/factor"),
        ..card(&pathway, Some(&found), "grains", &shaped, &form)
    })
}

#[test]
fn a_refused_card_keeps_what_was_typed_and_names_each_field() {
    let page = refused();
    let anchors: Vec<Option<&str>> = page.refused.iter().map(|row| row.anchor.as_deref()).collect();
    assert_eq!(
        anchors,
        [
            Some("f-inputs-0-unit"),
            Some("f-inputs-2-model-vehicle"),
            Some("input-power"),
            None
        ]
    );
    let gas = &page.inputs[0];
    assert!(gas.was.is_some() && gas.result.is_none());
    let html = page.render().expect("renders");
    assert!(
        html.contains("value=\"2301\"") && html.contains("was 4."),
        "figures as typed, and the last good one"
    );
    assert!(
        html.contains("choose:/inputs/1/factor=eu-2022-996/elec_"),
        "candidates can be chosen without script"
    );
}
