//! Sharing by energy, mass, value and substitution on examples worked out by hand, and what a rule set does not allow.

use super::shapes::{assess, good};
use rstest::rstest;
use serde_json::{Value, json};
use wheelwort::core::documents::Assessment;
use wheelwort::core::documents::assessment::StageResult;

/// Heating value of `inventory-ar6`, MJ/kg.
const LHV: f64 = 26.8036;

/// A works that gives 1 t of pure ethanol and 1 t of grains (10 % water) for 1 t of fossil CO2, and cars that burn it.
fn works(allocation: &str) -> Value {
    json!({
        "format": "wheelwort.pathway/1", "name": "Sharing", "feedstock": "wheat", "not_covered": ["cultivation"],
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "inventory-ar6",
        "stages": [
          { "key": "works", "kind": "processing", "allocation": allocation,
            "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 100,
                        "price": { "value": 700, "unit": "EUR/t" } },
            "inputs": [ { "key": "all", "gases": { "co2_fossil": 1000 } } ],
            "co_products": [ { "key": "grains", "name": "Grains", "role": "co_product", "material": "ddgs_wheat", "amount": 1, "unit": "t",
                               "moisture_percent": 10, "lhv": { "value": 16, "unit": "MJ/kg" }, "price": { "value": 200, "unit": "EUR/t" },
                               "displaces": { "amount": 0.8, "unit": "t",
                                              "factor": { "gases": { "co2_fossil": 0.5 }, "per": "kg", "citation": "made up" } } } ] },
          { "key": "car", "kind": "combustion", "output": { "material": "ethanol", "amount": 1, "unit": "MJ" }, "intakes": [ { "from": "works" } ] } ]
    })
}

fn near(found: f64, expected: f64) {
    assert!(
        (found - expected).abs() <= 1e-12 * expected.abs().max(1.0),
        "{found} instead of {expected}"
    );
}

fn stage<'a>(assessment: &'a Assessment, key: &str) -> &'a StageResult {
    assessment.stages.iter().find(|stage| stage.key == key).unwrap()
}

#[rstest]
#[case::energy("energy", 1000.0 * LHV / (1000.0 * LHV + 16_000.0), "MJ")]
#[case::mass("mass", 1000.0 / (1000.0 + 900.0), "kg dry")]
#[case::value("economic", 700.0 / (700.0 + 200.0), "EUR")]
fn shares(#[case] method: &str, #[case] share: f64, #[case] unit: &str) {
    let assessment = good(&works(method));
    let stage = stage(&assessment, "works");
    near(stage.share, share);
    near(stage.products[0].share + stage.products[1].share, 1.0);
    assert_eq!(stage.products[0].unit, unit);
    // 1 t of CO2 over the megajoules of 1 t of ethanol.
    near(assessment.net.g_co2e_per_mj, 1e6 * share / (1000.0 * LHV));
}

#[test]
fn substitution_is_a_credit_shown_apart() {
    let assessment = good(&works("substitution"));
    let stage = stage(&assessment, "works");
    near(stage.share, 1.0);
    near(stage.products[1].share, 0.0);
    // 0.8 t at 0.5 kg/kg: 400 kg less.
    let credit = &stage.inputs[1];
    assert_eq!(credit.key, "displaces:grains");
    near(credit.g_co2e_per_mj, -4e5 / (1000.0 * LHV));
    near(credit.workings.last().unwrap().value, credit.g_co2e_per_mj);
    near(stage.inputs[0].g_co2e_per_mj, 1e6 / (1000.0 * LHV));
    near(assessment.net.g_co2e_per_mj, 6e5 / (1000.0 * LHV));
    near(assessment.terms_g_co2e_per_mj.e_p, assessment.net.g_co2e_per_mj);
    near(stage.g_co2e_per_mj, assessment.net.g_co2e_per_mj);
    // Saving against petrol, 93.3 g/MJ, is not printed: the growing is left out.
    assert_eq!(assessment.saving_percent, None);
}

#[test]
fn what_is_displaced_counts_by_substitution_only() {
    let with = good(&works("energy"));
    let mut without = works("energy");
    without["stages"][0]["co_products"][0]
        .as_object_mut()
        .unwrap()
        .remove("displaces");
    assert_eq!(with.net, good(&without).net);
}

#[test]
fn power_beside_ethanol_displaces_power_of_the_grid() {
    let mut document = works("substitution");
    document["stages"][0]["co_products"] = json!([
        { "key": "power", "name": "Power", "role": "co_product", "material": "power", "amount": 2, "unit": "MWh",
          "displaces": { "amount": 2, "unit": "MWh", "factor": { "gases": { "co2_fossil": 0.1 }, "per": "kWh power", "citation": "made up" } } } ]);
    near(good(&document).net.g_co2e_per_mj, 8e5 / (1000.0 * LHV));
    document["stages"][0]["allocation"] = json!("energy");
    let problems = assess(&document).expect_err("like is not shared with unlike");
    assert_eq!(problems.list()[0].pointer, "/stages/0/co_products");
}

#[test]
fn a_credit_stays_with_the_stage_through_the_chain() {
    // A second works upstream shares by mass; its burden is unchanged by the credit downstream.
    let mut document = works("substitution");
    document["stages"].as_array_mut().unwrap().push(json!(
        { "key": "mill", "kind": "preparation", "allocation": "mass",
          "output": { "material": "wheat", "amount": 3, "unit": "t" },
          "inputs": [ { "key": "all", "gases": { "co2_fossil": 400 } } ],
          "co_products": [ { "key": "bran", "name": "Bran", "role": "co_product", "material": "ddgs_wheat", "amount": 1, "unit": "t" } ] }));
    document["stages"][0]["intakes"] = json!([ { "from": "mill", "amount": 3, "unit": "t" } ]);
    near(
        good(&document).net.g_co2e_per_mj,
        (6e5 + 4e5 * 0.75) / (1000.0 * LHV),
    );
}

#[test]
fn drying_after_a_credit_burdens_the_fuel_and_is_no_mistake() {
    let mut document = works("substitution");
    document["stages"][1]["intakes"][0]["from"] = json!("dryer");
    document["stages"].as_array_mut().unwrap().push(json!(
        { "key": "dryer", "kind": "co_product_handling", "inputs": [ { "key": "heat", "gases": { "co2_fossil": 100 } } ],
          "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 100 },
          "intakes": [ { "from": "works", "amount": 1, "unit": "t", "strength_percent_mass": 100 } ] }));
    let assessment = good(&document);
    near(assessment.net.g_co2e_per_mj, 7e5 / (1000.0 * LHV));
    assert!(!assessment.findings.iter().any(|finding| finding.id == "B-05"));
    document["stages"][0]["allocation"] = json!("mass");
    assert!(
        good(&document)
            .findings
            .iter()
            .any(|finding| finding.id == "B-05")
    );
}

type Spoil = fn(&mut Value);

#[rstest]
#[case::mass_under_the_directive(|d: &mut Value| { d["rule_set"] = json!("eu-2018-2001"); d["stages"][0]["allocation"] = json!("mass") }, "/stages/0/allocation")]
#[case::value_under_the_directive(|d: &mut Value| { d["rule_set"] = json!("eu-2018-2001"); d["stages"][0]["allocation"] = json!("economic") }, "/stages/0/allocation")]
#[case::substitution_under_the_directive(|d: &mut Value| d["rule_set"] = json!("eu-2018-2001"), "/stages/0/allocation")]
#[case::substitution_under_the_repealed_one(|d: &mut Value| d["rule_set"] = json!("eu-2009-28"), "/stages/0/allocation")]
#[case::exergy_of_goods(|d: &mut Value| d["stages"][0]["allocation"] = json!("exergy"), "/stages/0/allocation")]
#[case::nothing_displaced(|d: &mut Value| { d["stages"][0]["co_products"][0].as_object_mut().unwrap().remove("displaces"); }, "/stages/0/co_products/0/displaces")]
#[case::a_waste_displaces(|d: &mut Value| d["stages"][0]["co_products"][0]["role"] = json!("waste"), "/stages/0/co_products/0/displaces")]
#[case::wrong_unit(|d: &mut Value| d["stages"][0]["co_products"][0]["displaces"]["unit"] = json!("MJ"), "/stages/0/co_products/0/displaces/unit")]
#[case::negative_amount(|d: &mut Value| d["stages"][0]["co_products"][0]["displaces"]["amount"] = json!(-1), "/stages/0/co_products/0/displaces/amount")]
#[case::no_price(|d: &mut Value| { d["stages"][0]["allocation"] = json!("economic"); d["stages"][0]["output"].as_object_mut().unwrap().remove("price"); }, "/stages/0/output/price")]
#[case::two_currencies(|d: &mut Value| { d["stages"][0]["allocation"] = json!("economic"); d["stages"][0]["co_products"][0]["price"]["unit"] = json!("USD/t") }, "/stages/0/co_products/0/price/unit")]
#[case::price_below_zero(|d: &mut Value| { d["stages"][0]["allocation"] = json!("economic"); d["stages"][0]["co_products"][0]["price"]["value"] = json!(-5) }, "/stages/0/co_products/0/price/value")]
#[case::price_per_volume(|d: &mut Value| { d["stages"][0]["allocation"] = json!("economic"); d["stages"][0]["co_products"][0]["price"]["unit"] = json!("EUR/m3") }, "/stages/0/co_products/0/price/unit")]
#[case::mass_of_a_volume(|d: &mut Value| { d["stages"][0]["allocation"] = json!("mass"); let grains = &mut d["stages"][0]["co_products"][0]; grains["unit"] = json!("m3"); grains.as_object_mut().unwrap().remove("moisture_percent"); }, "/stages/0/co_products/0/unit")]
#[case::taken_and_credited(|d: &mut Value| { d["stages"].as_array_mut().unwrap().push(json!({ "key": "dryer", "kind": "co_product_handling",
    "output": { "material": "ddgs_wheat", "amount": 1, "unit": "t" }, "intakes": [ { "from": "works", "product": "grains", "amount": 1, "unit": "t" } ] })); }, "/stages/2/intakes/0/product")]
fn refused(#[case] spoil: Spoil, #[case] pointer: &str) {
    let mut document = works("substitution");
    spoil(&mut document);
    let problems = assess(&document).expect_err("must be refused");
    assert!(
        problems
            .list()
            .iter()
            .any(|p| p.pointer == pointer && !p.remedy.is_empty()),
        "{pointer} not in {problems:?}"
    );
}
