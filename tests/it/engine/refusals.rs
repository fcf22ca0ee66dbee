//! What the engine refuses: each wrong document gives a problem at the right pointer, with a remedy, and several
//! problems come together.

use super::shapes::{Figures, assess, chain, stage};
use rstest::rstest;
use serde_json::{Value, json};
use wheelwort::core::documents::Pathway;

fn pointers(document: &Value) -> Vec<String> {
    let problems = assess(document).expect_err("must be refused");
    for problem in problems.list() {
        assert!(
            !problem.detail.is_empty() && !problem.remedy.is_empty(),
            "{problem:?}"
        );
    }
    problems.list().iter().map(|p| p.pointer.clone()).collect()
}

#[rstest]
#[case::wrong_unit(|d: &mut Value| d["stages"][0]["inputs"][0]["unit"] = json!("kg"), "/stages/0/inputs/0/unit")]
#[case::unknown_unit(|d: &mut Value| d["stages"][0]["inputs"][0]["unit"] = json!("wagonload"), "/stages/0/inputs/0/unit")]
#[case::unknown_factor(|d: &mut Value| d["stages"][0]["inputs"][0]["factor"] = json!("eu-2022-996/fert_n_am"), "/stages/0/inputs/0/factor")]
#[case::unknown_edition(|d: &mut Value| d["stages"][1]["inputs"][0]["factor"][1] = json!("eu-2032/x"), "/stages/1/inputs/0/factor/1")]
#[case::vehicle_as_factor(|d: &mut Value| d["stages"][0]["inputs"][0]["factor"] = json!("eu-2022-996/tr_rail_electric_mv"), "/stages/0/inputs/0/factor")]
#[case::npk(|d: &mut Value| d["stages"][0]["inputs"][0]["factor"] = json!("eu-2022-996/fert_npk_15_15_15"), "/stages/0/inputs/0/factor")]
#[case::dangling(|d: &mut Value| d["stages"][1]["intakes"][0]["from"] = json!("fields"), "/stages/1/intakes/0/from")]
#[case::zero_output(|d: &mut Value| d["stages"][0]["output"]["amount"] = json!(0), "/stages/0/output/amount")]
#[case::negative_output(|d: &mut Value| d["stages"][0]["output"]["amount"] = json!(-8), "/stages/0/output/amount")]
#[case::all_water(|d: &mut Value| d["stages"][0]["output"]["moisture_percent"] = json!(100), "/stages/0/output/moisture_percent")]
#[case::negative_input(|d: &mut Value| d["stages"][0]["inputs"][0]["amount"] = json!(-1), "/stages/0/inputs/0/amount")]
#[case::strong(|d: &mut Value| d["stages"][1]["output"]["strength_percent_mass"] = json!(100.1), "/stages/1/output/strength_percent_mass")]
#[case::no_strength_at_all(|d: &mut Value| d["stages"][1]["output"]["strength_percent_mass"] = json!(0), "/stages/1/output/strength_percent_mass")]
#[case::two_strengths(|d: &mut Value| d["stages"][1]["output"]["strength_percent_vol"] = json!(99), "/stages/1/output/strength_percent_vol")]
#[case::volume_without_temperature(|d: &mut Value| { d["stages"][1]["output"]["unit"] = json!("m3") }, "/stages/1/output/temperature_c")]
#[case::unknown_field(|d: &mut Value| d["stages"][0]["colour"] = json!("green"), "/stages/0/colour")]
#[case::unknown_parameter(|d: &mut Value| d["stages"][2]["inputs"][0]["model"]["speed"] = json!(80), "/stages/2/inputs/0/model/speed")]
#[case::too_far(|d: &mut Value| d["stages"][2]["inputs"][0]["model"]["distance"]["value"] = json!(30000), "/stages/2/inputs/0/model/distance")]
#[case::wrong_format(|d: &mut Value| d["format"] = json!("wheelwort.pathway/2"), "/format")]
#[case::co2_product(|d: &mut Value| d["stages"][1]["co_products"][0]["material"] = json!("co2"), "/stages/1/co_products/0/material")]
#[case::unknown_material(|d: &mut Value| d["stages"][1]["co_products"][0]["material"] = json!("ddgs_weat"), "/stages/1/co_products/0/material")]
#[case::mass_allocation(|d: &mut Value| d["stages"][1]["allocation"] = json!("mass"), "/stages/1/allocation")]
#[case::heat_beside_ethanol(|d: &mut Value| { d["stages"][1]["co_products"][0] = json!({ "key": "heat", "name": "Heat", "role": "co_product", "material": "heat", "amount": 5, "unit": "GJ" }) }, "/stages/1/co_products")]
#[case::default_of_another_feedstock(|d: &mut Value| d["defaults"] = json!({ "e_td": "eu-2018-2001/cane" }), "/defaults/e_td")]
#[case::part_and_whole(|d: &mut Value| d["defaults"] = json!({ "e_td": "eu-2018-2001/cereal_ng_chp", "e_td_final_fuel": "eu-2018-2001/cereal_ng_chp" }), "/defaults/e_td_final_fuel")]
#[case::same_key(|d: &mut Value| d["stages"][1]["key"] = json!("field"), "/stages/1/key")]
#[case::bad_key(|d: &mut Value| d["stages"][0]["key"] = json!("Field One"), "/stages/0/key")]
#[case::built_in_material(|d: &mut Value| d["materials"] = json!([{ "id": "wheat", "name": "Mine" }]), "/materials/0/id")]
#[case::two_ends(|d: &mut Value| { let mut s = d["stages"][2].clone(); s["key"] = json!("truck-2"); d["stages"].as_array_mut().unwrap().push(s); d["stages"][4]["intakes"][0]["from"] = json!("works") }, "/stages/4/output")]
#[case::period(|d: &mut Value| d["period"]["to"] = json!("2020-01-01"), "/period/to")]
#[case::no_such_day(|d: &mut Value| d["period"]["to"] = json!("2027-02-30"), "/period/to")]
#[case::gases_and_factor(|d: &mut Value| d["stages"][0]["inputs"][0]["gases"] = json!({ "n2o": 1 }), "/stages/0/inputs/0")]
#[case::intake_dimension(|d: &mut Value| d["stages"][1]["intakes"][0]["unit"] = json!("MJ"), "/stages/1/intakes/0/moisture_percent")]
fn refused_at(#[case] spoil: fn(&mut Value), #[case] pointer: &str) {
    let mut document = chain(&Figures::usual());
    spoil(&mut document);
    let found = pointers(&document);
    assert!(
        found.iter().any(|p| p == pointer),
        "{pointer} not among {found:?}"
    );
}

#[test]
fn several_problems_come_together() {
    let mut document = chain(&Figures::usual());
    stage(&mut document, "field")["inputs"][0]["unit"] = json!("kg");
    stage(&mut document, "works")["inputs"][0]["factor"] = json!("eu-2022-996/nothing");
    stage(&mut document, "truck")["output"]["strength_percent_mass"] = json!(120);
    let found = pointers(&document);
    for pointer in [
        "/stages/0/inputs/0/unit",
        "/stages/1/inputs/0/factor",
        "/stages/2/output/strength_percent_mass",
    ] {
        assert!(
            found.iter().any(|p| p == pointer),
            "{pointer} not among {found:?}"
        );
    }
}

#[test]
fn a_mismatch_names_both_units() {
    let mut document = chain(&Figures::usual());
    stage(&mut document, "field")["inputs"][0]["unit"] = json!("kg");
    let problems = assess(&document).expect_err("refused");
    let text = problems.list()[0].to_string();
    assert!(text.contains("kg is a mass") && text.contains("kg N"), "{text}");
}

#[test]
fn a_circle_is_named() {
    let mut document = chain(&Figures::usual());
    stage(&mut document, "field")["intakes"] =
        json!([{ "from": "works", "product": "grains", "amount": 1, "unit": "t" }]);
    let problems = assess(&document).expect_err("refused");
    assert!(
        problems.list().iter().any(|p| p.detail.contains("circle")),
        "{problems:?}"
    );
}

#[test]
fn a_thousand_stages_are_refused() {
    let mut document = chain(&Figures::usual());
    let one = document["stages"][0].clone();
    document["stages"] = Value::Array(vec![one; 1_000]);
    assert_eq!(pointers(&document), ["/stages"]);
}

#[test]
fn foreign_letters_and_markup_in_names_are_kept_as_they_are() {
    let mut document = chain(&Figures::usual());
    document["name"] = json!("Weizen <b>Süd</b> & 小麦 \u{202e}");
    let pathway = Pathway::from_value(&document).unwrap();
    assert_eq!(pathway.name, "Weizen <b>Süd</b> & 小麦 \u{202e}");
    assert!(assess(&document).is_ok());
}
