//! Calculators: answers against published figures, every refusal at its field.

use crate::support::TestApp;
use crate::support::test_app::pointers;
use rstest::rstest;
use serde_json::{Value, json};

async fn ask(calculator: &str, body: &Value) -> Value {
    let answer = TestApp::new()
        .await
        .post(&format!("/api/v1/calculators/{calculator}"), body)
        .await;
    assert_eq!(answer.status, 200, "{}", answer.text());
    answer.json()
}

fn near(answer: &Value, pointer: &str, expected: f64, within: f64) {
    let found = answer.pointer(pointer).and_then(Value::as_f64);
    let found = found.unwrap_or_else(|| panic!("{pointer}: {answer}"));
    assert!(
        (found - expected).abs() <= within,
        "{pointer}: {found}, not {expected}"
    );
}

#[tokio::test]
async fn strength_converts() {
    // OIML R 22: 96 % vol is 93.84 % by mass; pure ethanol weighs 789.24 kg/m3 at 20 degC.
    let body = json!({ "strength_percent_vol": 96, "litres": 1000 });
    let mixture = ask("alcoholometry", &body).await;
    near(&mixture, "/strength_percent_mass", 93.84, 0.005);
    near(&mixture, "/pure_litres_at_20", 960.0, 1e-9);
    near(&mixture, "/pure_kg", 960.0 * 0.78924, 0.01);
    near(&mixture, "/temperature_c", 20.0, 0.0);
    let back =
        json!({ "strength_percent_mass": mixture["strength_percent_mass"], "pure_kg": mixture["pure_kg"] });
    near(&ask("alcoholometry", &back).await, "/litres", 1000.0, 1e-6);
}

#[tokio::test]
async fn a_column_has_its_heat_and_the_other_method_beside_it() {
    let body = json!({ "wash_strength_percent_vol": 10, "product_strength_percent_mass": 92, "coupling_factor": 0.5 });
    let column = ask("distillation", &body).await;
    let heat = column["reboiler_mj_per_kg"].as_f64().unwrap();
    near(&column, "/external_mj_per_kg", heat / 2.0, 1e-12);
    let beside = column["enthalpy_reboiler_mj_per_kg"].as_f64().unwrap();
    assert!((1.0..1.15).contains(&(beside / heat)), "{beside} beside {heat}");
    assert!(
        column["caution"]
            .as_str()
            .unwrap()
            .contains("no basis for the design")
    );
    assert!(!column["workings"].as_array().unwrap().is_empty());
    let cold = json!({ "wash_strength_percent_vol": 10, "product_strength_percent_mass": 92, "feed_temperature_c": 30,
                       "activity": "van_laar", "feed_approach_k": null });
    let cold = ask("distillation", &cold).await;
    assert!(cold["reboiler_mj_per_kg"].as_f64().unwrap() > heat);
    near(&cold, "/feed_temperature_c", 30.0, 0.0);
}

#[tokio::test]
async fn a_sieve_has_its_heat() {
    let body = json!({ "feed_strength_percent_mass": 92.5, "product_strength_percent_mass": 99.7 });
    let sieve = ask("dehydration", &body).await;
    let parts: f64 = ["vaporise_mj_per_kg", "superheat_mj_per_kg", "redistil_mj_per_kg"]
        .iter()
        .map(|name| sieve[*name].as_f64().unwrap())
        .sum();
    near(&sieve, "/total_mj_per_kg", parts, 1e-12);
    let liquid = json!({ "feed_strength_percent_mass": 92.5, "product_strength_percent_mass": 99.7,
                         "feed_is_vapour": false, "purge_percent": 0 });
    let liquid = ask("dehydration", &liquid).await;
    assert!(liquid["vaporise_mj_per_kg"].as_f64().unwrap() > 0.8);
    assert!(liquid["purge_reboiler_mj_per_kg"].is_null());
    assert!(liquid["caution"].is_string());
}

#[tokio::test]
async fn a_fermentation_has_ethanol_co2_and_yeast() {
    let body = json!({ "substrates": [{ "substrate": "starch", "kg": 690 }, { "substrate": "sucrose", "kg": 30 }],
                       "feedstock_kg": 1000, "efficiency_percent": 84.1, "yeast_percent": 20 });
    let found = ask("fermentation", &body).await;
    // AHDB/HGCA Research Review 61: 435 L per tonne of dry wheat with these contents.
    near(&found, "/litres_per_tonne", 435.0, 0.5);
    near(&found, "/substrates/0/most_kg_per_kg", 0.56825, 0.0);
    assert_eq!(found["substrates"][1]["route"], "sugar");
    let ethanol = found["ethanol_kg"].as_f64().unwrap();
    near(&found, "/split_co2_kg", ethanol * 44.0095 / 46.06844, 1e-9);
    assert!(found["yeast_kg"].as_f64().unwrap() > 10.0);
    let yeast = found["workings"]
        .as_array()
        .unwrap()
        .iter()
        .find(|step| step["unit"] == "kg yeast, dry");
    assert!(yeast.unwrap()["source"].as_str().unwrap().contains("Schulze"));
}

#[rstest]
#[case::nothing("alcoholometry", json!({}), &["/strength_percent_mass", "/kg"])]
#[case::twice("alcoholometry", json!({ "strength_percent_mass": 1, "strength_percent_vol": 1, "kg": 1, "litres": 1 }),
    &["/strength_percent_vol", "/litres"])]
#[case::outside("alcoholometry", json!({ "strength_percent_vol": 101, "kg": -1, "temperature_c": 80 }),
    &["/strength_percent_vol", "/temperature_c", "/kg"])]
#[case::unknown("alcoholometry", json!({ "strength_percent_vol": 1, "kg": 1, "colour": 1 }), &["/colour"])]
#[case::list("distillation", json!([]), &[""])]
#[case::wash("distillation", json!({ "wash_strength_percent_vol": 60, "product_strength_percent_mass": "x" }),
    &["/product_strength_percent_mass"])]
#[case::order("distillation", json!({ "wash_strength_percent_vol": 20, "product_strength_percent_mass": 3 }),
    &["/product_strength_percent_mass"])]
#[case::warmth("distillation", json!({ "wash_strength_percent_vol": 10, "product_strength_percent_mass": 92,
    "feed_temperature_c": 20, "feed_approach_k": 10, "activity": "ideal", "speed": 1 }),
    &["/feed_temperature_c", "/activity", "/speed"])]
#[case::sieve("dehydration", json!({ "feed_strength_percent_mass": 99, "product_strength_percent_mass": 97 }),
    &["/feed_strength_percent_mass", "/product_strength_percent_mass"])]
#[case::no_sugar("fermentation", json!({ "substrates": [], "efficiency_percent": 90 }), &["/substrates"])]
#[case::sugars("fermentation", json!({ "substrates": [{ "substrate": "honey", "kg": 1 }, { "kg": 2, "l": 3 }, 7] }),
    &["/substrates/0/substrate", "/substrates/1/substrate", "/substrates/1/l", "/substrates/2", "/efficiency_percent"])]
#[case::much("fermentation", json!({ "substrates": [{ "substrate": "starch", "kg": 0 }], "ethanol_kg": 1 }),
    &["/substrates/0/kg"])]
#[tokio::test]
async fn a_wrong_question_is_refused_with_pointers(
    #[case] calculator: &str,
    #[case] body: Value,
    #[case] expected: &[&str],
) {
    let app = TestApp::new().await;
    let refused = app
        .post(&format!("/api/v1/calculators/{calculator}"), &body)
        .await
        .refused(422);
    assert_eq!(pointers(&refused), expected, "{refused}");
}
