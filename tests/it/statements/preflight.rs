//! What stands between a draft and its issue.

use super::made::{assessed, demo, full_facts, reasoned};
use jiff::civil::date;
use serde_json::{Value, json};
use wheelwort::core::documents::{Amount, Assessment, Pathway, StatementFacts};
use wheelwort::core::statement::items::Place;
use wheelwort::core::statement::preflight::Draft;
use wheelwort::core::statement::{Preflight, preflight};
use wheelwort::library;

fn of(facts: &Value, pathway: &Pathway, assessment: &Assessment) -> Preflight {
    let draft = Draft {
        facts: &StatementFacts::from_value(facts).expect("facts"),
        pathway,
        assessment,
        supersedes: false,
        uncertain: false,
        today: date(2027, 9, 2),
    };
    preflight(draft, library::book(), library::statement_items()).expect("a preflight")
}

fn items(preflight: &Preflight) -> Vec<&str> {
    preflight
        .missing
        .iter()
        .map(|missing| missing.item.as_str())
        .collect()
}

#[test]
fn full_facts_miss_nothing_under_any_law() {
    let mut pathway = demo("a_wheat_chp_rail");
    pathway.plant_capacity_per_year = Some(Amount {
        value: 60_000.0,
        unit: "m3".to_owned(),
    });
    let assessment = reasoned(&assessed(&pathway));
    let found = of(&full_facts(), &pathway, &assessment);
    assert_eq!(items(&found), Vec::<&str>::new(), "{:#?}", found.missing);
    assert_eq!(found.unreasoned, Vec::new());
    let blocking: Vec<&str> = found.blocking.iter().map(|finding| finding.id.as_str()).collect();
    assert_eq!(blocking, Vec::<&str>::new(), "{:#?}", found.blocking);
    assert!(found.is_ready());
}

#[test]
fn an_empty_draft_is_told_what_the_directive_asks_for() {
    let pathway = demo("a_wheat_chp_rail");
    let found = of(&json!({}), &pathway, &assessed(&pathway));
    assert_eq!(
        items(&found),
        [
            "S-108", "S-201", "S-202", "S-301", "S-302", "S-304", "S-306", "S-307", "S-308", "S-401",
            "S-404", "S-405", "S-406", "S-409", "S-801", "S-803", "S-901", "S-902", "S-903"
        ]
    );
    let recipient = &found.missing[2];
    assert_eq!(recipient.pointer, "/facts/recipient");
    assert_eq!(recipient.place, Place::Statement);
    assert!(recipient.source.contains("Annex I pt 2(b)") && !recipient.why.is_empty());
    let advice: Vec<&str> = found.advice.iter().map(|missing| missing.item.as_str()).collect();
    assert!(advice.contains(&"S-408"), "{advice:?}");
    assert!(found.blocking.iter().any(|finding| finding.id == "E-02"));
    assert!(!found.is_ready());
}

#[test]
fn germany_asks_for_more_when_it_is_named() {
    let pathway = demo("a_wheat_chp_rail");
    let found = of(&json!({ "laws": ["DE"] }), &pathway, &assessed(&pathway));
    for item in ["S-106", "S-109", "S-205", "S-309", "S-407", "S-507", "S-804"] {
        assert!(items(&found).contains(&item), "{item}");
    }
}

#[test]
fn other_rule_sets_ask_for_other_items() {
    let mut pathway = demo("a_wheat_chp_rail");
    pathway.rule_set = "uk-si-2007-3072".to_owned();
    let found = of(&json!({}), &pathway, &assessed(&pathway));
    assert_eq!(items(&found), ["S-301", "S-801", "S-901", "S-904"]);
    assert!(
        !found.blocking.iter().any(|finding| finding.id == "E-02"),
        "a rule of the EU"
    );
}

#[test]
fn what_an_item_takes_depends_on_the_feedstock() {
    let pathway = demo("d_straw_lignin");
    let assessment = assessed(&pathway);
    let with = |class: &str| {
        let mut facts = full_facts();
        facts["feedstock_class"] = class.into();
        facts["land_declarations"] = json!([]);
        items(&of(&facts, &pathway, &assessment))
            .iter()
            .map(|item| (*item).to_owned())
            .collect::<Vec<_>>()
    };
    assert!(with("residue").contains(&"S-802".to_owned()) && with("residue").contains(&"S-801".to_owned()));
    assert!(with("waste").contains(&"S-406".to_owned()) && !with("waste").contains(&"S-801".to_owned()));
}

#[test]
fn blocking_findings_and_bare_warnings_stand_in_the_way() {
    let pathway = demo("f_wheat_with_errors");
    let found = of(&full_facts(), &pathway, &assessed(&pathway));
    assert!(!found.blocking.is_empty() && !found.unreasoned.is_empty());
    let mut moved = assessed(&pathway);
    moved.pathway_hash = "sha256:0".to_owned();
    let found = of(&full_facts(), &pathway, &moved);
    assert!(found.blocking.iter().any(|finding| finding.id == "E-12"));
}

#[test]
fn every_item_has_a_source_and_a_field() {
    let items = library::statement_items();
    assert_eq!(items.items.len(), 85);
    for item in &items.items {
        assert!(
            !item.citation.source.is_empty() && item.pointer.starts_with('/'),
            "{item:?}"
        );
    }
    assert_eq!(items.keep_years("eu-2018-2001", &[]), 5);
}
