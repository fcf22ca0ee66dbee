//! Meters, earlier periods and audits of a pathway: read strictly, written back the same, held against the figures.

use super::shapes::{Figures, assess, chain};
use rstest::rstest;
use serde_json::{Value, json};
use wheelwort::core::documents::Pathway;
use wheelwort::core::documents::canonical;

/// The chain with a gas meter behind the first input of the works, an earlier period and an audit.
fn metered() -> Value {
    let mut document = chain(&Figures::usual());
    let period = document["period"].clone();
    let input = document["stages"][1]["inputs"][0].clone();
    let (amount, unit) = (input["amount"].as_f64().unwrap(), input["unit"].clone());
    let begins: jiff::civil::Date = period["from"].as_str().unwrap().parse().unwrap();
    document["stages"][1]["inputs"][0]["meter"] = json!("gas-3");
    document["stages"][1]["meters"] = json!([{
        "id": "gas-3", "what": "Gas", "unit": unit, "calibration_due": "2030-01-01", "evidence": ["EV-1"],
        "readings": [ { "on": begins.yesterday().unwrap(), "value": 7 }, { "on": period["to"], "value": 7.0 + amount } ] }]);
    document["audits"] =
        json!([{ "stage": "works", "scope": "actual_values", "passed_on": "2026-06-01", "number": "A-1" }]);
    document
}

fn ids(document: &Value) -> Vec<String> {
    let assessment = assess(document).unwrap_or_else(|problems| panic!("{problems:#?}"));
    assessment.findings.into_iter().map(|found| found.id).collect()
}

fn meters_in(ids: &[String]) -> Vec<&str> {
    let meters = ["C-13", "C-14", "C-15"];
    ids.iter()
        .map(String::as_str)
        .filter(|id| meters.contains(id))
        .collect()
}

#[test]
fn records_are_written_back_as_they_were_read_and_change_no_figure() {
    let document = metered();
    let pathway = Pathway::from_value(&document).unwrap();
    let bytes = canonical::bytes(&pathway).unwrap();
    let again = Pathway::from_bytes(&bytes).unwrap();
    assert_eq!(again.stages[1].meters, pathway.stages[1].meters);
    assert_eq!(
        (&again.audits, &again.stages[1].inputs),
        (&pathway.audits, &pathway.stages[1].inputs)
    );
    assert_eq!(canonical::bytes(&again).unwrap(), bytes);
    let (with, without) = (
        assess(&document).unwrap(),
        assess(&chain(&Figures::usual())).unwrap(),
    );
    assert_eq!(with.net, without.net);
    assert!(meters_in(&ids(&document)).is_empty());
}

#[test]
fn meters_raise_their_findings() {
    let mut back = metered();
    back["stages"][1]["meters"][0]["readings"][0]["value"] = json!(1e9);
    back["stages"][1]["inputs"][0]
        .as_object_mut()
        .unwrap()
        .remove("meter");
    assert_eq!(meters_in(&ids(&back)), ["C-13"]);
    let mut gap = metered();
    gap["stages"][1]["meters"][0]["readings"][0]["on"] = json!("2026-12-31");
    assert_eq!(meters_in(&ids(&gap)), ["C-14"]);
    let mut due = metered();
    due["stages"][1]["meters"][0]["calibration_due"] = json!("2026-01-01");
    assert_eq!(meters_in(&ids(&due)), ["C-15"]);
}

#[rstest]
#[case::another_amount(|d: &mut Value| d["stages"][1]["meters"][0]["readings"][0]["value"] = json!(0), "/stages/1/inputs/0/amount")]
#[case::another_kind(|d: &mut Value| d["stages"][1]["meters"][0]["unit"] = json!("km"), "/stages/1/inputs/0/amount")]
#[case::no_such_meter(|d: &mut Value| d["stages"][1]["inputs"][0]["meter"] = json!("gas-4"), "/stages/1/inputs/0/meter")]
#[case::no_unit(|d: &mut Value| { d["stages"][1]["meters"][0].as_object_mut().unwrap().remove("unit"); }, "/stages/1/meters/0/unit")]
#[case::unknown_unit(|d: &mut Value| d["stages"][1]["meters"][0]["unit"] = json!("wagonload"), "/stages/1/meters/0/unit")]
#[case::unknown_field(|d: &mut Value| d["stages"][1]["meters"][0]["colour"] = json!("red"), "/stages/1/meters/0/colour")]
#[case::out_of_order(|d: &mut Value| d["stages"][1]["meters"][0]["readings"].as_array_mut().unwrap().reverse(), "/stages/1/meters/0/readings/1/on")]
#[case::negative_dial(|d: &mut Value| d["stages"][1]["meters"][0]["readings"][0]["value"] = json!(-1), "/stages/1/meters/0/readings/0/value")]
#[case::estimate_without_a_note(|d: &mut Value| d["stages"][1]["meters"][0]["periods"] = json!([{ "from": "2026-10-01", "to": "2026-10-02", "estimated": 1 }]), "/stages/1/meters/0/periods/0/note")]
#[case::half_a_period(|d: &mut Value| d["stages"][1]["meters"][0]["periods"] = json!([{ "from": "2026-10-01", "to": "2026-10-02", "reading_to": 1 }]), "/stages/1/meters/0/periods/0")]
#[case::meter_of_a_model(|d: &mut Value| { d["stages"][2]["inputs"][0]["meter"] = json!("m"); d["stages"][2]["meters"] = json!([{ "id": "m", "unit": "t" }]) }, "/stages/2/inputs/0/meter")]
#[case::audit_of_nobody(|d: &mut Value| d["audits"][0]["stage"] = json!("mill"), "/audits/0/stage")]
#[case::audit_of_nothing(|d: &mut Value| d["audits"][0]["scope"] = json!("beauty"), "/audits/0/scope")]
#[case::yield_of_a_field(|d: &mut Value| d["stages"][0]["earlier_periods"] = json!([{ "from": "2025-01-01", "to": "2025-12-31", "yield": { "value": 8, "unit": "t/ha" } }]), "/stages/0/earlier_periods")]
#[case::yield_in_another_unit(|d: &mut Value| d["stages"][1]["earlier_periods"] = json!([{ "from": "2025-01-01", "to": "2025-12-31", "yield": { "value": 8, "unit": "km" } }]), "/stages/1/earlier_periods/0/yield/unit")]
#[case::more_than_there_is(|d: &mut Value| d["stages"][0]["inputs"][0]["amount"] = json!(1e300), "/stages/0/inputs/0/amount")]
#[case::more_output_than_there_is(|d: &mut Value| d["stages"][0]["output"]["amount"] = json!(1e61), "/stages/0/output/amount")]
fn refused_at(#[case] spoil: fn(&mut Value), #[case] pointer: &str) {
    let mut document = metered();
    spoil(&mut document);
    let problems = assess(&document).expect_err("must be refused");
    let found: Vec<&str> = problems
        .list()
        .iter()
        .map(|problem| problem.pointer.as_str())
        .collect();
    assert!(found.contains(&pointer), "{pointer} not among {found:?}");
}

#[test]
fn a_yield_that_moved_and_a_repealed_edition_are_findings() {
    let mut document = metered();
    let stage = &document["stages"][1];
    let (made, taken) = (&stage["output"], &stage["intakes"][0]);
    let unit = format!(
        "{}/{}",
        made["unit"].as_str().unwrap(),
        taken["unit"].as_str().unwrap()
    );
    let now = made["amount"].as_f64().unwrap() / taken["amount"].as_f64().unwrap();
    let earlier = |times: f64| json!([{ "from": "2025-10-01", "to": "2026-09-30", "yield": { "value": now * times, "unit": unit } }]);
    document["stages"][1]["earlier_periods"] = earlier(1.04);
    assert!(!ids(&document).contains(&"C-08".to_owned()));
    document["stages"][1]["earlier_periods"] = earlier(1.06);
    assert!(ids(&document).contains(&"C-08".to_owned()));
    assert!(!ids(&document).contains(&"E-06".to_owned()));
    document["period"] = json!({ "from": "2018-01-01", "to": "2018-11-30" });
    document["stages"][1].as_object_mut().unwrap().remove("meters");
    document["stages"][1]["inputs"][0]
        .as_object_mut()
        .unwrap()
        .remove("meter");
    assert!(
        ids(&document).contains(&"E-06".to_owned()),
        "standard factors begin in 2022"
    );
}
