//! Renders every page with every sample: nothing hostile gets through, no page carries what the policy forbids.

use super::card::Form;
use super::samples::{self, HOSTILE};
use super::{Notice, compare, defaults, home, new, revision, show, stage, workings};
use crate::core::documents::Problems;
use askama::Template;

/// Every page with every sample: name, HTML.
fn pages() -> Vec<(String, String)> {
    let book = samples::book();
    let mut out = Vec::new();
    let mut add = |name: &str, html: askama::Result<String>| {
        out.push((name.to_owned(), html.expect("a page that renders")));
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
            let page =
                stage::ShowStage::of(&card(&pathway, Some(&found), &one.key, &value, &Form::default()));
            add(&format!("stage_{name}_{}", one.key), page.render());
        }
    }
    for (name, pathway) in [("wheat", samples::wheat()), ("hostile", samples::hostile())] {
        let found = samples::assess(&pathway);
        let table = crate::core::levers::defaults::table(&pathway, &found, book).expect("a table");
        let mut page = defaults::ShowDefaults::of(samples::head(), &pathway, &table, book);
        page.why = HOSTILE.to_owned();
        add(&format!("defaults_{name}"), page.render());
    }
    add("stage_refused", refused().render());
    super::single_tests::blends(&mut add);
    more(&mut add);
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
            let found = low.find(banned).map(|at| {
                low.chars()
                    .skip(low.chars().count().min(at.saturating_sub(80)))
                    .take(200)
                    .collect::<String>()
            });
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

pub(super) fn card<'a>(
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
        tried: None,
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
    stage::ShowStage::of(&stage::Card {
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

/// Pages that are not of one pathway as it stands.
fn more(add: &mut impl FnMut(&str, askama::Result<String>)) {
    let book = samples::book();
    let (wheat, hostile) = (samples::wheat(), samples::hostile());
    let (one, other) = (samples::assess(&wheat), samples::assess(&hostile));
    let picked = [("1", &wheat, &one), ("2", &hostile, &other)].map(|(id, pathway, found)| compare::Picked {
        id,
        pathway,
        found,
    });
    let choices = vec![("1".to_owned(), HOSTILE.to_owned(), true)];
    add(
        "compare",
        compare::Compare::of(&picked, book, choices.clone()).render(),
    );
    add(
        "compare_ask",
        compare::Compare::ask("Choose two.", choices).render(),
    );
    add(
        "new",
        new::NewPathway::of(new::Start::default(), Vec::new(), String::new(), Vec::new(), book).render(),
    );
    let start = new::Start {
        name: HOSTILE.to_owned(),
        from: HOSTILE.to_owned(),
        ..new::Start::default()
    };
    let faults = start.pathway(book).expect_err("refused");
    assert_eq!(faults.len(), 4, "{faults:?}");
    add(
        "new_refused",
        new::NewPathway::of(start, faults.clone(), HOSTILE.to_owned(), Vec::new(), book).render(),
    );
    let changes = crate::pathways::changes::between(Some(&wheat), &hostile).expect("compares");
    let shown = revision::ShowRevision::of(
        samples::head(),
        (15, HOSTILE.to_owned()),
        &hostile,
        (Some(&one), Some(&other)),
        &changes,
        book,
    );
    add("revision", shown.render());
    let first = revision::ShowRevision::of(
        samples::head(),
        (14, String::new()),
        &wheat,
        (None, None),
        &[],
        book,
    );
    add("revision_first", first.render());
    let mut saved = show::ShowPathway::of(
        samples::head(),
        &wheat,
        Ok(&one),
        book,
        samples::revisions(),
        false,
    );
    saved.notice = Some(Notice {
        what: "Saved.".to_owned(),
        then: HOSTILE.to_owned(),
        back: Some(("/".to_owned(), HOSTILE.to_owned())),
    });
    add("pathway_saved", saved.render());
    let mut met = refused();
    met.met = vec![super::card::merge::Met {
        field: HOSTILE.to_owned(),
        base: "1".to_owned(),
        theirs: HOSTILE.to_owned(),
        mine: "3".to_owned(),
        both: true,
        pointer: "/inputs/0/amount".to_owned(),
        stands: Some(serde_json::json!(HOSTILE)),
        other: Some(serde_json::json!(HOSTILE)),
    }];
    met.meeting = super::meeting::Meeting {
        what: HOSTILE.to_owned(),
        started: "You started from, 14".to_owned(),
        theirs: HOSTILE.to_owned(),
    };
    add("stage_met", met.render());
}

#[test]
fn the_starter_chain_of_every_feedstock_can_be_worked_out() {
    let book = samples::book();
    let page = new::NewPathway::of(new::Start::default(), Vec::new(), String::new(), Vec::new(), book);
    assert!(page.feedstocks.len() > 10, "{:?}", page.feedstocks);
    for (feedstock, _) in page.feedstocks {
        let start = new::Start {
            name: "Trial".to_owned(),
            feedstock: feedstock.clone(),
            rule_set: "eu-2018-2001".to_owned(),
            from: "2026-07-01".to_owned(),
            to: "2027-06-30".to_owned(),
            plant_started: String::new(),
        };
        let pathway = start.pathway(book).expect("a pathway");
        let found = samples::assess(&pathway);
        assert!(found.net.g_co2e_per_mj.abs() < 1e-9, "{feedstock}");
    }
}

/// The words of a page. The list of models grows with every model: it is tested where it is made.
pub(super) fn words(html: &str) -> String {
    let words = crate::web::testing::words(html);
    let lines = words.lines().filter(|line| !line.starts_with("Another input is"));
    lines.collect::<Vec<_>>().join("\n")
}

#[test]
fn words_of_the_main_pages() {
    let wheat = samples::wheat();
    let found = samples::assess(&wheat);
    let page = show::ShowPathway::of(
        samples::head(),
        &wheat,
        Ok(&found),
        samples::book(),
        samples::revisions(),
        false,
    );
    insta::assert_snapshot!("pathway", words(&page.render().expect("renders")));
    let list = home::Home::of(&samples::lines(), samples::book(), home::Asked::default());
    insta::assert_snapshot!("home", words(&list.render().expect("renders")));
    insta::assert_snapshot!("stage_refused", words(&refused().render().expect("renders")));
}
