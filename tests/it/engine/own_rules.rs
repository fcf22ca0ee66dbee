//! Rule sets of one's own: read from JSON and TOML, every problem at its pointer, one canonical form, and put to use.

use super::laws::replace_somewhere;
use super::shapes::{Figures, chain};
use proptest::prelude::*;
use rstest::rstest;
use serde_json::{Value, json};
use wheelwort::core::documents::rule_set::{canonical_bytes, from_json, from_toml, from_value};
use wheelwort::core::documents::{Assessment, Pathway, Problems};
use wheelwort::core::domain::RuleSet;
use wheelwort::core::domain::rule_set::Standing;
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::library::book;

/// A good rule set: that of the Directive with another comparator and a threshold of one's own.
fn own() -> Value {
    let mut value: Value =
        serde_json::from_slice(&canonical_bytes(&book().rule_sets["eu-2018-2001"]).unwrap()).unwrap();
    value["id"] = json!("own-2027");
    value["title"] = json!("Rules of a made-up buyer");
    value["version"] = json!("3");
    value["standing"] = json!("own");
    value["comparator"] =
        json!({ "value": 90, "unit": "g CO2e/MJ", "source": "made-up contract, annex 2", "status": "own" });
    value["thresholds"] = json!([{ "percent": 40, "source": "made-up contract, point 5", "status": "own" }]);
    value
}

fn read(value: &Value) -> Result<RuleSet, Problems> {
    from_value(value, book())
}

/// The assessment of a document under a rule set of one's own.
fn assessed(document: &Value, rules: &Value) -> Assessment {
    let set = read(rules).unwrap();
    let mut with = book().clone();
    with.rule_sets.insert(set.id.clone(), set);
    evaluate(&Pathway::from_value(document).unwrap(), &with, Options::default()).unwrap()
}

#[test]
fn a_good_one_is_read_and_has_one_form() {
    let set = read(&own()).unwrap();
    assert_eq!((set.standing, set.comparator.value), (Standing::Own, 90.0));
    let bytes = canonical_bytes(&set).unwrap();
    assert_eq!(from_json(&bytes, book()).unwrap(), set);
    assert_eq!(
        canonical_bytes(&from_json(&bytes, book()).unwrap()).unwrap(),
        bytes
    );
    // The standing may be left out.
    let mut short = own();
    short.as_object_mut().unwrap().remove("standing");
    assert_eq!(read(&short).unwrap(), set);
}

#[test]
fn toml_says_the_same() {
    let value = own();
    let text = toml::to_string(&value).unwrap();
    let set = from_toml(&text, book()).unwrap();
    assert_eq!(set, read(&value).unwrap());
    // A day may stand without quotes.
    let dated = text.replace("percent = 40", "started_to = 2030-12-31\npercent = 40");
    let dated = from_toml(&dated, book()).unwrap();
    assert_eq!(dated.thresholds[0].started_to.unwrap().to_string(), "2030-12-31");
    let problems = from_toml("format = \"wheelwort.rule_set/1\"\nid = = 3\n", book()).unwrap_err();
    assert!(problems.list()[0].detail.contains("Line 2"), "{problems:?}");
    let problems = from_toml(&text.replace("value = 26.81", "value = inf"), book()).unwrap_err();
    assert_eq!(problems.list()[0].pointer, "/ethanol_lhv/value");
}

type Spoil = fn(&mut Value);

#[rstest]
#[case::format(|v: &mut Value| v["format"] = json!("wheelwort.rule_set/2"), "/format")]
#[case::unknown_field(|v: &mut Value| v["colour"] = json!("green"), "/colour")]
#[case::unknown_field_inside(|v: &mut Value| v["comparator"]["values"] = json!(3), "/comparator/values")]
#[case::no_version(|v: &mut Value| { v.as_object_mut().unwrap().remove("version"); }, "/version")]
#[case::blank_version(|v: &mut Value| v["version"] = json!("  "), "/version")]
#[case::no_comparator(|v: &mut Value| { v.as_object_mut().unwrap().remove("comparator"); }, "/comparator")]
#[case::id(|v: &mut Value| v["id"] = json!("Own Rules"), "/id")]
#[case::built_in_id(|v: &mut Value| v["id"] = json!("eu-2018-2001"), "/id")]
#[case::standing(|v: &mut Value| v["standing"] = json!("in_force"), "/standing")]
#[case::unit(|v: &mut Value| v["ethanol_lhv"]["unit"] = json!("kJ/kg"), "/ethanol_lhv/unit")]
#[case::higher_heating_value(|v: &mut Value| v["ethanol_lhv"]["value"] = json!(29.7), "/ethanol_lhv/value")]
#[case::negative(|v: &mut Value| v["comparator"]["value"] = json!(-94), "/comparator/value")]
#[case::zero(|v: &mut Value| v["land_use_years"]["value"] = json!(0), "/land_use_years/value")]
#[case::text_for_a_number(|v: &mut Value| v["comparator"]["value"] = json!("94"), "/comparator/value")]
#[case::no_source(|v: &mut Value| v["comparator"]["source"] = json!(""), "/comparator/source")]
#[case::source_missing(|v: &mut Value| { v["comparator"].as_object_mut().unwrap().remove("source"); }, "/comparator/source")]
#[case::no_status(|v: &mut Value| v["comparator"]["status"] = json!("guessed"), "/comparator/status")]
#[case::no_document(|v: &mut Value| v["source"] = json!(" "), "/source")]
#[case::gases(|v: &mut Value| v["gwp_set"] = json!("ar7"), "/gwp_set")]
#[case::factors(|v: &mut Value| v["standard_factors"] = json!("eu-2009-28"), "/standard_factors")]
#[case::defaults(|v: &mut Value| v["default_values"] = json!("eu-2022-996"), "/default_values")]
#[case::soil(|v: &mut Value| v["soil_n2o_method"] = json!("ipcc-1996"), "/soil_n2o_method")]
#[case::method(|v: &mut Value| v["allocation"] = json!("by_hand"), "/allocation")]
#[case::own_method_not_allowed(|v: &mut Value| v["allocation"] = json!("mass"), "/allocation_allowed")]
#[case::exergy_of_goods(|v: &mut Value| v["allocation_allowed"] = json!(["energy", "exergy"]), "/allocation_allowed/1")]
#[case::mass_of_heat(|v: &mut Value| v["allocation_heat_and_power"] = json!("mass"), "/allocation_heat_and_power")]
#[case::term(|v: &mut Value| v["terms_not_counted"] = json!(["e_x"]), "/terms_not_counted/0")]
#[case::term_twice(|v: &mut Value| v["terms_not_counted"] = json!(["e_u", "e_u"]), "/terms_not_counted/1")]
#[case::residue(|v: &mut Value| v["residues_by_law"] = json!(["straw*", "moss"]), "/residues_by_law/1")]
#[case::residue_source(|v: &mut Value| { v.as_object_mut().unwrap().remove("residues_source"); }, "/residues_source")]
#[case::percent(|v: &mut Value| v["thresholds"][0]["percent"] = json!(101), "/thresholds/0/percent")]
#[case::no_threshold_source(|v: &mut Value| v["thresholds"][0]["source"] = json!(""), "/thresholds/0/source")]
#[case::backwards(|v: &mut Value| { v["thresholds"][0]["started_from"] = json!("2021-01-02"); v["thresholds"][0]["started_to"] = json!("2021-01-01") }, "/thresholds/0/started_to")]
#[case::overlap(|v: &mut Value| v["thresholds"] = json!([
    { "percent": 40, "started_to": "2020-12-31", "source": "made up", "status": "own" },
    { "percent": 50, "started_from": "2020-12-31", "source": "made up", "status": "own" } ]), "/thresholds/1")]
#[case::overlap_in_time(|v: &mut Value| v["thresholds"] = json!([
    { "percent": 40, "applies_to": "2020-12-31", "source": "made up", "status": "own" },
    { "percent": 50, "applies_from": "2021-01-01", "source": "made up", "status": "own" },
    { "percent": 60, "started_from": "2019-01-01", "applies_from": "2030-01-01", "source": "made up", "status": "own" } ]), "/thresholds/2")]
#[case::unknown_limit(|v: &mut Value| v["limits"]["soil_carbon_cup"] = v["limits"]["soil_carbon_cap"].clone(), "/limits/soil_carbon_cup")]
#[case::limit_unit(|v: &mut Value| v["limits"]["soil_carbon_cap"]["unit"] = json!("kg CO2e/MJ"), "/limits/soil_carbon_cap/unit")]
#[case::limit_source(|v: &mut Value| v["limits"]["soil_carbon_cap"]["source"] = json!(""), "/limits/soil_carbon_cap/source")]
#[case::limits_as_a_list(|v: &mut Value| v["limits"] = json!([]), "/limits")]
#[case::months(|v: &mut Value| v["data_months"] = json!({ "value": 0, "unit": "months", "source": "made up", "status": "own" }), "/data_months/value")]
#[case::day(|v: &mut Value| v["thresholds"][0]["started_to"] = json!("2020-02-30"), "/thresholds/0/started_to")]
fn refused(#[case] spoil: Spoil, #[case] pointer: &str) {
    let mut value = own();
    spoil(&mut value);
    let problems = read(&value).expect_err("must be refused");
    assert!(
        problems
            .list()
            .iter()
            .any(|p| p.pointer == pointer && !p.detail.is_empty() && !p.remedy.is_empty()),
        "{pointer} not in {problems:?}"
    );
    assert!(problems.len() <= 2, "{problems:?}");
}

#[test]
fn spans_that_touch_do_not_overlap() {
    let mut value = own();
    value["thresholds"] = json!([
        { "percent": 40, "started_to": "2020-12-31", "applies_to": "2029-12-31", "source": "made up", "status": "own" },
        { "percent": 45, "started_to": "2020-12-31", "applies_from": "2030-01-01", "source": "made up", "status": "own" },
        { "percent": 50, "started_from": "2021-01-01", "source": "made up", "status": "own" } ]);
    assert!(read(&value).is_ok());
}

#[test]
fn several_problems_come_together() {
    let mut value = own();
    value["gwp_set"] = json!("ar7");
    value["comparator"]["unit"] = json!("kg/MJ");
    value["petrol"]["source"] = json!("");
    value["thresholds"][0]["percent"] = json!(0);
    let found: Vec<String> = read(&value)
        .unwrap_err()
        .list()
        .iter()
        .map(|p| p.pointer.clone())
        .collect();
    assert_eq!(
        found,
        [
            "/comparator/unit",
            "/petrol/source",
            "/gwp_set",
            "/thresholds/0/percent"
        ]
    );
}

#[test]
fn it_serves_an_assessment() {
    let set = read(&own()).unwrap();
    let mut with = book().clone();
    with.rule_sets.insert(set.id.clone(), set);
    let mut document = chain(&Figures::usual());
    let under = |document: &Value| {
        evaluate(&Pathway::from_value(document).unwrap(), &with, Options::default()).unwrap()
    };
    let eu = under(&document);
    document["rule_set"] = json!("own-2027");
    let own = under(&document);
    assert_eq!(own.net, eu.net);
    assert_eq!(own.comparator_g_co2e_per_mj, 90.0);
    assert_eq!(own.thresholds[0].percent, 40.0);
    assert_ne!(own.saving_percent, eu.saving_percent);
}

/// Limits of deductions are those that the document carries: with none there is no cap, and no bonus either.
#[test]
fn an_own_rule_set_has_the_limits_that_it_carries() {
    let mut document = chain(&Figures::usual());
    document["rule_set"] = json!("own-2027");
    document["stages"][0]["inputs"]
        .as_array_mut()
        .unwrap()
        .push(json!({ "key": "soil", "model": {
        "kind": "soil_carbon", "area_ha": 1, "carbon_before": { "value": 50, "unit": "t/ha" },
        "carbon_after": { "value": 80, "unit": "t/ha" }, "years": 5, "practice": "cover_crop",
        "practice_since": "2020-01-01", "committed_until": "2031-01-01" } }));
    let claim = |value: &Value| {
        let assessment = assessed(&document, value);
        -assessment.terms_g_co2e_per_mj.e_sca
    };
    let as_the_directive = claim(&own());
    let mut lower = own();
    lower["limits"]["soil_carbon_cap"]["value"] = json!(10);
    assert!(
        (as_the_directive / claim(&lower) - 2.5).abs() < 1e-9,
        "25 and 10 g/MJ of the fuel grown there"
    );
    let mut none = own();
    none.as_object_mut().unwrap().remove("limits");
    assert!(claim(&none) > as_the_directive);
    document["stages"][0]["inputs"].as_array_mut().unwrap().pop();
    document["stages"][0]["inputs"]
        .as_array_mut()
        .unwrap()
        .push(json!({ "key": "land", "model": {
        "kind": "land_use_change", "area_ha": 1, "converted_in": 2015, "degraded_land_bonus": true,
        "before": { "carbon_t_per_ha": 70 }, "after": { "carbon_t_per_ha": 70 } } }));
    let set = read(&none).unwrap();
    let mut with = book().clone();
    with.rule_sets.insert(set.id.clone(), set);
    let problems = evaluate(
        &Pathway::from_value(&document).unwrap(),
        &with,
        Options::default(),
    )
    .unwrap_err();
    assert!(
        problems
            .list()
            .iter()
            .any(|problem| problem.detail.contains("knows no bonus")),
        "{problems:?}"
    );
}

#[test]
fn months_of_data_are_asked_for_where_the_rule_set_names_them() {
    let mut value = own();
    value["data_months"] =
        json!({ "value": 24, "unit": "months", "source": "made-up contract, point 9", "status": "own" });
    let mut document = chain(&Figures::usual());
    document["rule_set"] = json!("own-2027");
    let found = |value: &Value| {
        let assessment = assessed(&document, value);
        assessment.findings.iter().any(|finding| finding.id == "E-14")
    };
    assert!(found(&value));
    value["data_months"]["value"] = json!(12);
    assert!(!found(&value));
    assert!(!found(&own()), "the directive asks for none");
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(128))]

    #[test]
    fn any_change_is_taken_or_refused_without_a_panic(
        path in prop::collection::vec(0usize..40, 1..4), put in prop::sample::select(vec![
            json!(null), json!(-1), json!(0), json!(1e308), json!(1e-308), json!("MJ/kg"), json!([]), json!({}), json!(true), json!([[1]]),
            json!("9999-12-31"), json!("-009999-01-01"), json!("*") ]),
    ) {
        let mut value = own();
        replace_somewhere(&mut value, &path, put);
        if let Ok(set) = read(&value) {
            let bytes = canonical_bytes(&set).unwrap();
            prop_assert_eq!(from_json(&bytes, book()).unwrap(), set);
        }
    }
}
