//! Laws of comparisons: parts of a difference add up to it, equal pathways have none, unlike settings are named.

use crate::support::documents::{chain, chain_with};
use serde_json::{Value, json};
use wheelwort::core::documents::pathway::PeriodKind;
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::domain::RuleSet;
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::core::levers::compare::{Comparison, Subject, compare, place};
use wheelwort::library;

/// The short chain.
fn wheat() -> Pathway {
    read(&chain())
}

/// Another chain: other figures, another works, a stage more, marked as an example.
fn maize() -> Pathway {
    let mut document = chain_with("/example", true.into());
    document["stages"][0]["inputs"][0]["amount"] = 90.into();
    document["stages"][1]["key"] = "mill".into();
    document["stages"][1]["inputs"][0]["amount"] = json!(3.5);
    document["stages"][2]["intakes"][0]["from"] = "store".into();
    let store = json!({ "key": "store", "kind": "fuel_transport",
        "output": { "material": "ethanol", "amount": 1, "unit": "t" },
        "intakes": [ { "from": "mill", "amount": 1.001, "unit": "t" } ],
        "inputs": [ { "key": "power", "gases": { "co2_fossil": 2 }, "origin": "calculated" } ] });
    document["stages"].as_array_mut().expect("stages").push(store);
    read(&document)
}

/// Published default values alone.
fn cane() -> Pathway {
    let case: Value =
        serde_json::from_str(include_str!("../../cases/contract/defaults_only_cane.json")).expect("JSON");
    read(&case["document"])
}

fn read(document: &Value) -> Pathway {
    Pathway::from_value(document).expect("holds")
}

fn with<T>(pathways: &[Pathway], rules: &[RuleSet], look: impl FnOnce(Comparison) -> T) -> T {
    let book = library::book();
    let assessed: Vec<Assessment> = pathways
        .iter()
        .map(|pathway| evaluate(pathway, book, Options::default()).expect("holds"))
        .collect();
    let subjects: Vec<Subject<'_>> = pathways
        .iter()
        .zip(&assessed)
        .zip(rules.iter().cycle())
        .map(|((pathway, assessment), rules)| Subject {
            pathway,
            assessment,
            rules,
        })
        .collect();
    look(compare(&subjects))
}

fn eu() -> RuleSet {
    library::book().rule_sets["eu-2018-2001"].clone()
}

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs().max(b.abs()).max(1.0)
}

#[test]
fn parts_of_a_difference_add_up_to_it() {
    with(&[wheat(), maize(), cane()], &[eu()], |comparison| {
        for (index, pathway) in comparison.pathways.iter().enumerate() {
            let whole = pathway.difference_g_co2e_per_mj;
            let terms: f64 = comparison
                .terms
                .iter()
                .map(|row| row.difference_g_co2e_per_mj[index])
                .sum();
            let kinds: f64 = comparison
                .kinds
                .iter()
                .map(|row| row.difference_g_co2e_per_mj[index])
                .sum();
            let stages: f64 = comparison
                .stages
                .iter()
                .map(|row| row.difference_g_co2e_per_mj[index])
                .sum();
            assert!(
                close(whole, terms) && close(whole, kinds) && close(whole, stages),
                "{index}: {whole} {terms} {kinds} {stages}"
            );
        }
        assert!(comparison.pathways[1].difference_g_co2e_per_mj != 0.0);
        assert!(comparison.example);
    });
}

#[test]
fn a_pathway_does_not_differ_from_itself() {
    with(&[wheat(), wheat()], &[eu()], |comparison| {
        let other = &comparison.pathways[1];
        assert_eq!(
            (other.difference_g_co2e_per_mj, other.saving_difference_points),
            (0.0, Some(0.0))
        );
        assert_eq!(other.largest, None);
        assert_eq!(comparison.unlike, []);
        assert!(
            comparison
                .stages
                .iter()
                .all(|row| row.g_co2e_per_mj[0] == row.g_co2e_per_mj[1])
        );
    });
}

#[test]
fn the_kind_that_makes_the_difference_is_named() {
    with(&[wheat(), cane()], &[eu()], |comparison| {
        let other = &comparison.pathways[1];
        let largest = other.largest.as_ref().expect("they differ");
        let beaten = comparison
            .kinds
            .iter()
            .map(|row| row.difference_g_co2e_per_mj[1].abs());
        assert!(beaten.fold(0.0, f64::max) <= largest.difference_g_co2e_per_mj.abs());
    });
}

#[test]
fn other_rules_print_no_difference_of_savings() {
    let other = RuleSet {
        id: "made-up".into(),
        ..eu()
    };
    with(&[wheat(), maize()], &[eu(), other], |comparison| {
        assert!(comparison.pathways[1].saving_percent.is_some());
        assert_eq!(comparison.pathways[1].saving_difference_points, None);
        assert!(
            comparison
                .unlike
                .iter()
                .any(|unlike| unlike.setting == "rule_set")
        );
    });
    with(&[wheat(), maize()], &[eu()], |comparison| {
        let [first, second] = &comparison.pathways[..] else {
            panic!("two were compared")
        };
        let points = second.saving_percent.expect("printed") - first.saving_percent.expect("printed");
        assert_eq!(second.saving_difference_points, Some(points));
        assert!(
            comparison
                .unlike
                .iter()
                .all(|unlike| unlike.setting != "rule_set")
        );
    });
}

#[test]
fn unlike_settings_say_what_each_pathway_says() {
    let mut later = wheat();
    later.period.kind = Some(PeriodKind::Campaign);
    later.plant_started = None;
    with(&[wheat(), later], &[eu()], |comparison| {
        let settings: Vec<&str> = comparison
            .unlike
            .iter()
            .map(|unlike| unlike.setting.as_str())
            .collect();
        assert_eq!(settings, ["period", "plant_started"]);
        assert!(comparison.unlike[0].values[1].ends_with("campaign"));
        assert_eq!(comparison.unlike[1].values[1], "not said");
    });
}

#[test]
fn stages_run_from_field_to_wheel() {
    with(&[maize(), wheat()], &[eu()], |comparison| {
        let places: Vec<usize> = comparison.stages.iter().map(|row| place(&row.kind)).collect();
        assert!(places.is_sorted());
    });
}
