//! Renders the pages of published data: all rows, all materials, all rule sets.

use super::*;
use crate::core::units::rounding::show_all;
use askama::Template;
use std::collections::BTreeSet;

const HOSTILE: &str = "<script>alert('1')</script>";

fn sound(name: &str, html: &str) {
    for banned in ["<script>", " style=\"", "-0.00", "{{"] {
        assert!(!html.contains(banned), "{name} holds {banned}");
    }
    let ids: Vec<&str> = html
        .split(" id=\"")
        .skip(1)
        .filter_map(|rest| rest.split('"').next())
        .collect();
    assert_eq!(
        ids.iter().collect::<BTreeSet<_>>().len(),
        ids.len(),
        "{name}: ids stand once"
    );
}

#[test]
fn every_row_has_a_page() {
    let book = crate::library::book();
    for edition in book.editions.values() {
        let rows = edition.factors.values().map(|row| (&row.id, &row.citation));
        for (id, citation) in rows.chain(edition.pathways.values().map(|row| (&row.id, &row.citation))) {
            let uses = vec![UseRow {
                pathway: HOSTILE.to_owned(),
                href: "/".to_owned(),
                place: HOSTILE.to_owned(),
                at: "/".to_owned(),
                revision: 1,
            }];
            let page = ShowFactor::of(book, id, uses).unwrap_or_else(|| panic!("{id} has a page"));
            let html = page.render().expect("renders");
            sound(id, &html);
            let memory = citation.status == crate::core::domain::Status::Memory;
            assert_eq!(
                html.contains("From memory."),
                memory,
                "{id} says so plainly where it is from memory"
            );
        }
    }
    assert!(ShowFactor::of(book, "eu-2022-996/no_such", Vec::new()).is_none());
}

#[test]
fn printed_digits_stand_beside_the_sum() {
    let book = crate::library::book();
    let page = ShowFactor::of(book, "eu-2022-996/fert_n_can", Vec::new()).expect("there");
    // Implementing Regulation (EU) 2022/996 Annex IX prints 2 863, 7.3, 2.1 and 3 670.
    let words = "2\u{2009}863 + 7.3 × 25 + 2.1 × 298 = 3\u{2009}671.3 g CO2e per kg N; printed 3\u{2009}670";
    assert_eq!(page.worked.as_deref(), Some(words));
}

#[test]
fn lists_materials_and_rule_sets_render() {
    let book = crate::library::book();
    for asked in [
        Asked::default(),
        Asked {
            q: HOSTILE.to_owned(),
            ..Asked::default()
        },
        Asked {
            edition: "eu-2018-2001".to_owned(),
            ..Asked::default()
        },
        Asked {
            q: "ammonium nitrate".to_owned(),
            group: "fertiliser".to_owned(),
            edition: "eu-2022-996".to_owned(),
        },
    ] {
        sound("factors", &Factors::of(book, asked).render().expect("renders"));
    }
    for material in book.materials.values() {
        sound(
            &material.id,
            &Published::material(material).render().expect("renders"),
        );
    }
    let sets = RuleSets::of(book, crate::library::limits_elsewhere());
    assert_eq!(sets.rows.first().map(|row| row.class), Some(""), "in force first");
    assert_eq!(
        sets.rows.last().map(|row| row.class),
        Some("blocks"),
        "repealed last, marked"
    );
    assert!(sets.elsewhere.iter().all(|row| !row.why.is_empty()) && !sets.elsewhere.is_empty());
    sound("rule sets", &sets.render().expect("renders"));
    for rules in book.rule_sets.values() {
        let html = Published::rule_set(rules, book.gwp_sets.get(&rules.gwp_set))
            .render()
            .expect("renders");
        sound(&rules.id, &html);
        let comparator = format!("{} g CO<sub>2</sub>e/MJ", show_all(rules.comparator.value));
        assert!(html.contains(&comparator), "{}", rules.id);
        assert!(html.contains(rules.standing.words().split('\'').next().unwrap_or_default()));
    }
    let memory = Memory::of(crate::library::figures_from_memory());
    sound("memory", &memory.render().expect("renders"));
}
