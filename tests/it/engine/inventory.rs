//! Rule sets other than the Directive in force: the inventory with the crop's CO2 in line and the physical heating value, and the
//! repealed Directive for old statements.

use super::shapes::{Figures, assess, chain, good, stage};
use proptest::prelude::*;
use serde_json::{Value, json};
use wheelwort::core::documents::Assessment;
use wheelwort::core::documents::assessment::Finding;
use wheelwort::core::domain::rule_set::BiogenicCo2;
use wheelwort::library;

const LHV: f64 = 26.8036;
const LATENT: f64 = 2.442;

fn near(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs().max(b.abs()).max(1e-6)
}

/// The invented chain under the inventory, with a straw boiler and some CH4 and N2O of use.
fn inventory(strength: f64, distance_km: f64) -> Value {
    let mut document = chain(&Figures {
        strength,
        distance_km,
        ..Figures::usual()
    });
    document["rule_set"] = json!("inventory-ar6");
    let straw = json!({ "key": "straw", "gases": { "co2_biogenic": 90_000, "ch4_biogenic": 20, "n2o": 4 } });
    stage(&mut document, "works")["inputs"]
        .as_array_mut()
        .unwrap()
        .push(straw);
    stage(&mut document, "car")["inputs"] =
        json!([{ "key": "use", "gases": { "ch4_biogenic": 2e-5, "n2o": 1e-6, "co2_biogenic": 0 } }]);
    document
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn in_line_and_apart_give_the_same_net(strength in 20.0f64..100.0, km in 0.0f64..900.0, straw in 0.0f64..1e6, eu in any::<bool>()) {
        let mut document = inventory(strength, km);
        stage(&mut document, "works")["inputs"][2]["gases"]["co2_biogenic"] = json!(straw);
        if eu { document["rule_set"] = json!("eu-2018-2001"); }
        let a = good(&document);
        let net = a.net.g_co2e_per_mj;
        let rows: f64 = a.carbon.rows.iter().map(|row| row.g_co2_per_mj).sum();
        prop_assert!(rows.abs() <= 1e-9 * a.carbon.combustion_g_co2_per_mj);
        prop_assert!((a.carbon.terms_in_line_g_co2e_per_mj.sum() - net).abs() <= 1e-9 * net.abs().max(100.0));
        prop_assert!((a.carbon.net_in_line_g_co2e_per_mj - net).abs() <= 1e-9 * net.abs().max(100.0));
        prop_assert!(a.carbon.rows[0].g_co2_per_mj < 0.0 && a.carbon.rows[1..].iter().all(|row| row.g_co2_per_mj > 0.0));
        prop_assert_eq!(a.carbon.rows.len(), a.carbon.releases.len() + 1);
        prop_assert!(near(a.carbon.rows[0].g_co2_per_mj, a.carbon.uptake_g_co2_per_mj));
    }

    #[test]
    fn uptake_is_the_crops_carbon_less_what_leaves_where_the_balance_closes(strength in 50.0f64..100.0) {
        let mut document = inventory(strength, 100.0);
        // No other biogenic CO2 than the crop's; the grains hold what fuel and fermentation leave.
        stage(&mut document, "works")["inputs"].as_array_mut().unwrap().pop();
        let crop = 870.0 * 45.0 / 100.0 * 44.0095 / 12.011;
        let made = 300.0 * strength / 100.0 * (1.91061 + 44.0095 / 46.06844);
        stage(&mut document, "works")["co_products"][0]["carbon_percent_dry"] = json!(100.0 * (crop - made) * 12.011 / 44.0095 / 288.0);
        let a = good(&document);
        prop_assert!(near(a.carbon.closure_percent.unwrap(), 100.0));
        let leaving = a.carbon.co_products_g_co2_per_mj.unwrap() + a.carbon.other_g_co2_per_mj.unwrap();
        prop_assert!(near(-a.carbon.uptake_g_co2_per_mj, a.carbon.feedstock_g_co2_per_mj.unwrap() - leaving));
    }

    #[test]
    fn a_megajoule_or_a_tonne_of_fuel_give_the_same(strength in 20.0f64..100.0) {
        let by_energy = inventory(strength, 100.0);
        let mut by_mass = by_energy.clone();
        // The car's recipe in tonnes of the same fuel; its CH4 and N2O grow with the megajoules.
        let mj = 1000.0 * strength / 100.0 * (LHV - LATENT * (100.0 / strength - 1.0));
        let car = stage(&mut by_mass, "car");
        car["output"] = json!({ "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": strength });
        car["intakes"] = json!([{ "from": "truck", "amount": 1, "unit": "t", "strength_percent_mass": strength }]);
        car["inputs"][0]["gases"] = json!({ "ch4_biogenic": 2e-5 * mj, "n2o": 1e-6 * mj });
        let (a, b) = (good(&by_energy), good(&by_mass));
        prop_assert!(near(a.net.g_co2e_per_mj, b.net.g_co2e_per_mj), "{} {}", a.net.g_co2e_per_mj, b.net.g_co2e_per_mj);
        prop_assert!(near(a.carbon.fuel_g_co2_per_mj, b.carbon.fuel_g_co2_per_mj));
    }
}

/// 1 t of fuel of a strength for 1 t of fossil CO2.
fn fuel(strength: f64) -> Value {
    json!({
        "format": "wheelwort.pathway/1", "name": "Fuel", "feedstock": "wheat", "not_covered": ["cultivation"],
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "inventory-ar6",
        "stages": [
          { "key": "works", "kind": "processing",
            "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": strength },
            "inputs": [ { "key": "all", "gases": { "co2_fossil": 1000 } } ] },
          { "key": "car", "kind": "combustion", "output": { "material": "ethanol", "amount": 1, "unit": "MJ" }, "intakes": [ { "from": "works" } ] } ] })
}

#[test]
fn the_water_of_hydrous_fuel_takes_heat() {
    // 930 kg of ethanol at 26.8036 less 70 kg of water at 2.442 MJ/kg.
    let mj = 930.0 * LHV - 70.0 * LATENT;
    let assessment = good(&fuel(93.0));
    assert!(near(assessment.net.g_co2e_per_mj, 1e6 / mj));
    assert!(near(
        assessment.carbon.fuel_g_co2_per_mj,
        930.0 * 1.91061 * 1000.0 / mj
    ));
    // Under the Directive the water does not count.
    let mut document = fuel(93.0);
    document["rule_set"] = json!("eu-2018-2001");
    assert!(near(good(&document).net.g_co2e_per_mj, 1e6 / (930.0 * 26.81)));
}

#[test]
fn the_water_of_a_wash_is_not_taken_off_its_share() {
    // A wash of 8 % is no fuel: the water leaves before the wheel. By energy it counts as the fuel it becomes.
    let mut document = fuel(99.0);
    document["stages"].as_array_mut().unwrap().push(json!(
        { "key": "wash", "kind": "fermentation",
          "output": { "material": "ethanol", "amount": 12.5, "unit": "t", "strength_percent_mass": 8 },
          "inputs": [ { "key": "all", "gases": { "co2_fossil": 500 } } ],
          "co_products": [ { "key": "feed", "name": "Feed", "role": "co_product", "material": "ddgs_wheat", "amount": 1, "unit": "t", "lhv": { "value": 16, "unit": "MJ/kg" } } ] }));
    document["stages"][0]["intakes"] =
        json!([{ "from": "wash", "amount": 12.5, "unit": "t", "strength_percent_mass": 8 }]);
    let assessment = good(&document);
    let share = assessment
        .stages
        .iter()
        .find(|stage| stage.key == "wash")
        .unwrap()
        .share;
    let fuel = 1000.0 * LHV - 1000.0 / 99.0 * LATENT;
    assert!(near(share, fuel / (fuel + 16_000.0)), "{share}");
}

#[test]
fn fuel_that_holds_no_heat_is_refused() {
    let problems = assess(&fuel(8.0)).expect_err("refused");
    let pointers: Vec<&str> = problems.list().iter().map(|p| p.pointer.as_str()).collect();
    assert!(
        pointers.contains(&"/stages/1/output/strength_percent_mass"),
        "{pointers:?}"
    );
    let mut document = fuel(8.0);
    document["rule_set"] = json!("eu-2018-2001");
    assert!(assess(&document).is_ok());
}

#[test]
fn use_of_the_fuel_counts() {
    let a = good(&inventory(99.7, 100.0));
    // 2e-5 kg of CH4 and 1e-6 kg of N2O per MJ with the weights 27 and 273.
    let grams = 0.02 * 27.0 + 0.001 * 273.0;
    assert!(near(a.terms_g_co2e_per_mj.e_u, grams));
    assert_eq!(a.memo.e_u_not_counted_g_co2e_per_mj, 0.0);
    assert_eq!(
        (a.gwp_set.as_str(), a.comparator_g_co2e_per_mj, a.thresholds.len()),
        ("ar6", 93.3, 0)
    );
    assert!(near(
        a.saving_percent.unwrap(),
        100.0 * (93.3 - a.net.g_co2e_per_mj) / 93.3
    ));
    assert_eq!(a.carbon.presentation, BiogenicCo2::InLine);
    assert!(
        a.carbon.terms_in_line_g_co2e_per_mj.e_u > 71.0 && a.carbon.terms_in_line_g_co2e_per_mj.e_ec < -90.0
    );
    // Without the car no saving is printed: use is not zero by rule.
    let mut document = inventory(99.7, 100.0);
    document["stages"].as_array_mut().unwrap().pop();
    assert_eq!(good(&document).saving_percent, None);
}

#[test]
fn energy_without_a_strength_where_water_counts() {
    // A truck that states its fuel in MJ takes the strength of the works; a works that does so has none, and says so.
    let mut document = inventory(93.0, 100.0);
    let truck = stage(&mut document, "truck");
    truck["output"] = json!({ "material": "ethanol", "amount": 1000, "unit": "MJ" });
    truck["intakes"][0] = json!({ "from": "works", "amount": 1000, "unit": "MJ" });
    let told = |a: &Assessment| a.findings.iter().filter(|f: &&Finding| f.id == "K-04").count();
    let a = good(&document);
    assert_eq!(told(&a), 0);
    assert!(near(
        a.net.g_co2e_per_mj,
        good(&inventory(93.0, 100.0)).net.g_co2e_per_mj
    ));
    let works = stage(&mut document, "works");
    works["output"] = json!({ "material": "ethanol", "amount": 8e6, "unit": "MJ" });
    assert_eq!(told(&good(&document)), 1);
}

#[test]
fn published_default_values_stay_with_their_rule_set() {
    let document = |rule_set: &str, row: &str| {
        json!({ "format": "wheelwort.pathway/1", "name": "Defaults", "feedstock": "sugar_cane",
                "period": { "from": "2016-01-01", "to": "2016-12-31" }, "rule_set": rule_set,
                "defaults": { "e_ec": row, "e_p": row, "e_td": row }, "stages": [] })
    };
    for (rule_set, row) in [
        ("inventory-ar6", "eu-2018-2001/cane"),
        ("eu-2018-2001", "eu-2009-28/red1_cane"),
        ("eu-2009-28", "eu-2018-2001/cane"),
        ("uk-si-2007-3072", "eu-2018-2001/cane"),
    ] {
        let problems = assess(&document(rule_set, row)).expect_err(rule_set);
        assert_eq!(problems.list()[0].pointer, "/defaults/e_ec");
    }
    let mut parts = document("eu-2009-28", "eu-2009-28/red1_cane");
    parts["defaults"] = json!({ "e_ec": "eu-2009-28/red1_cane", "e_p": "eu-2009-28/red1_cane", "e_td_final_fuel": "eu-2009-28/red1_cane" });
    let problems = assess(&parts).expect_err("not printed apart");
    assert!(
        problems
            .list()
            .iter()
            .any(|p| p.pointer == "/defaults/e_td_final_fuel"),
        "{problems:?}"
    );
}

/// Directive 2009/28/EC Annex V Parts A, B, D and E, comparator 83.8 (Part C point 19).
#[test]
fn repealed_pathways_come_out_as_printed() {
    let edition = &library::book().editions["eu-2009-28"];
    let mut seen = 0;
    for pathway in edition.pathways.values() {
        let Some(feedstock) = pathway.feedstock_materials.first() else {
            continue;
        };
        let id = &pathway.id;
        let a = good(&json!({
            "format": "wheelwort.pathway/1", "name": "Old statement", "feedstock": feedstock,
            "period": { "from": "2016-01-01", "to": "2016-12-31" }, "rule_set": "eu-2009-28", "plant_started": "2009-06-01",
            "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
        // The terms of wheat straw add to one less than its printed total.
        let less = if id.ends_with("red1_wheat_straw") {
            1.0
        } else {
            0.0
        };
        assert!(
            (a.net.g_co2e_per_mj - (pathway.default.total - less)).abs() < 1e-9,
            "{id}"
        );
        if less == 0.0 {
            let saving = a.saving_percent.unwrap();
            assert_eq!((saving + 0.5).floor(), pathway.default.saving_percent, "{id}");
        }
        assert_eq!(a.thresholds[0].percent, 35.0);
        seen += 1;
    }
    assert_eq!(seen, 9, "wood has no built-in feedstock");
}

#[test]
fn old_thresholds_follow_start_and_year() {
    for (started, from, to, percent) in [
        ("2015-10-05", "2017-01-01", "2017-12-31", 35.0),
        ("2015-10-05", "2017-07-01", "2018-06-30", 50.0),
        ("2015-10-05", "2018-01-01", "2018-12-31", 50.0),
        ("2015-10-06", "2017-01-01", "2017-12-31", 60.0),
    ] {
        let id = "eu-2009-28/red1_cane";
        let a = good(&json!({
            "format": "wheelwort.pathway/1", "name": "Start", "feedstock": "sugar_cane", "period": { "from": from, "to": to },
            "rule_set": "eu-2009-28", "plant_started": started, "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
        let found: Vec<f64> = a.thresholds.iter().map(|threshold| threshold.percent).collect();
        assert_eq!(found, [percent], "{started} {from}");
    }
    // Without a start: those that are asked of fuel of the period.
    let id = "eu-2009-28/red1_cane";
    let a = good(&json!({
        "format": "wheelwort.pathway/1", "name": "Start", "feedstock": "sugar_cane", "period": { "from": "2016-01-01", "to": "2016-12-31" },
        "rule_set": "eu-2009-28", "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
    let found: Vec<f64> = a.thresholds.iter().map(|threshold| threshold.percent).collect();
    assert_eq!(found, [35.0, 60.0]);
    assert!(a.findings.iter().any(|finding| finding.id == "H-01"));
}
