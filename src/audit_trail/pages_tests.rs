//! The page with every sample: empty, full, hostile, a wrong filter.

use super::*;
use crate::app::who::Who;
use crate::audit_trail::{By, FORMAT};
use crate::web::testing::words;
use serde_json::json;

const HOSTILE: &str = "<script>alert('1')</script> \"x\" & <b>bold</b>";

fn entry(number: i64, thing: &str, what: Value, words: &str) -> Entry {
    let who = Who {
        name: words.to_owned(),
        from: "192.0.2.7".into(),
        via: crate::app::who::Via::Token(words.to_owned()),
        ..Who::command()
    };
    Entry {
        line: Line {
            format: FORMAT.into(),
            number,
            previous: String::new(),
            at: "2027-07-12T10:21:07Z".parse().expect("a time"),
            by: By::of(&who),
            did: "saved".into(),
            thing: thing.into(),
            id: "0197d3c8-5b9e-7cc1-9f5e-2a3b4c5d6e7f".into(),
            what,
            reason: Some(words.to_owned()),
        },
        hash: format!("sha256:{}", "a1".repeat(32)),
    }
}

fn full() -> ShowTrail {
    let saved = json!({ "name": "Autumn wheat, Tarn Bridge works", "revision": 15, "hash": "sha256:00", "net_g_co2e_per_mj": 31.049 });
    let page = Page {
        entries: vec![
            entry(3, "pathway", saved, "T. Hale"),
            entry(
                2,
                "person",
                json!({ "roles": ["viewer"], "name": "S. Lund" }),
                "I. Marsh",
            ),
            entry(
                1,
                "check_settings",
                json!({ "before": "x", "hash": "y" }),
                HOSTILE,
            ),
        ],
        next: Some(1),
    };
    let people = [Person {
        id: uuid::Uuid::from_u128(7),
        name: HOSTILE.into(),
    }];
    let asked = Asked {
        thing: "pathway".into(),
        did: HOSTILE.into(),
        after: "9".into(),
        ..Asked::default()
    };
    ShowTrail::of(
        &asked,
        Ok(page),
        &people,
        (12, format!("sha256:{}", "b2".repeat(32))),
    )
}

#[test]
fn words_of_the_page() {
    insta::assert_snapshot!("trail", words(&full().render().expect("renders")));
}

#[test]
fn every_sample_renders_safely() {
    let nothing = Page {
        entries: Vec::new(),
        next: None,
    };
    let asked = Asked {
        id: HOSTILE.into(),
        from: HOSTILE.into(),
        ..Asked::default()
    };
    let wrong = asked.filter().question().expect_err("a wrong filter");
    assert_eq!(wrong.field, "from");
    let samples = [
        full(),
        ShowTrail::of(&Asked::default(), Ok(nothing.clone()), &[], (0, String::new())),
        ShowTrail::of(&asked, Ok(nothing), &[], (1, "sha256:00".into())),
        ShowTrail::of(&asked, Err(wrong), &[], (1, "sha256:00".into())),
    ];
    let folder = std::env::var_os("WHEELWORT_PAGES");
    for (number, page) in samples.into_iter().enumerate() {
        let html = page.render().expect("renders");
        if let Some(folder) = &folder {
            let file = std::path::Path::new(folder).join(format!("audit_trail_{number}.html"));
            std::fs::write(file, &html).expect("a folder to write to");
        }
        for banned in ["<script>alert", "<b>bold", " style=\""] {
            assert!(!html.contains(banned), "{banned}: {html}");
        }
    }
}

#[test]
fn a_query_keeps_what_was_asked_for() {
    let asked = Asked {
        did: "gave reasons".into(),
        to: "2027-01-31".into(),
        ..Asked::default()
    };
    assert_eq!(
        asked.query("after=3"),
        "?did=gave%20reasons&to=2027-01-31&after=3"
    );
    assert_eq!(Asked::default().query(""), "");
}
