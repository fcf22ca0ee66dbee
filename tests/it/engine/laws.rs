//! Laws that hold for every pathway, whatever its figures.

use super::shapes::{Figures, assess, chain, good, scale_recipe, stage};
use proptest::prelude::*;
use serde_json::{Value, json};
use wheelwort::core::documents::{Assessment, Pathway, canonical};

fn near(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs().max(b.abs()).max(1e-6)
}

fn same_net(a: &Assessment, b: &Assessment) -> bool {
    near(a.net.g_co2e_per_mj, b.net.g_co2e_per_mj)
        && near(
            a.carbon.feedstock_g_co2_per_mj.unwrap(),
            b.carbon.feedstock_g_co2_per_mj.unwrap(),
        )
}

prop_compose! {
    fn figures()(
        grain_t in 1.0f64..20.0, moisture in 0.0f64..30.0, nitrogen_kg in 0.0f64..400.0, diesel_mj in 0.0f64..9e3,
        intake_t in 500.0f64..2_000.0, gas_gj in 0.0f64..9e3, power_mwh in 0.0f64..900.0, ethanol_t in 100.0f64..400.0,
        strength in 1.0f64..100.0, grains_t in 1.0f64..900.0, distance_km in 0.0f64..800.0,
    ) -> Figures {
        Figures { grain_t, moisture, nitrogen_kg, diesel_mj, intake_t, gas_gj, power_mwh, ethanol_t, strength, grains_t, distance_km }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn parts_add_to_the_net(f in figures()) {
        let a = good(&chain(&f));
        let net = a.net.g_co2e_per_mj;
        let stages: f64 = a.stages.iter().map(|s| s.g_co2e_per_mj).sum();
        let inputs: f64 = a.stages.iter().flat_map(|s| &s.inputs).map(|i| i.g_co2e_per_mj).sum();
        prop_assert!(near(net, a.terms_g_co2e_per_mj.sum()));
        prop_assert!(near(net, stages));
        prop_assert!(near(net, inputs));
        prop_assert!(near(net, a.carbon.net_in_line_g_co2e_per_mj));
        for s in &a.stages {
            for i in s.inputs.iter().filter(|i| i.replaced.is_none()) {
                prop_assert!(near(i.workings.last().unwrap().value, i.g_co2e_per_mj));
            }
        }
    }

    #[test]
    fn scaling_a_recipe_changes_nothing(f in figures(), by in 1e-3f64..1e3, key in prop::sample::select(vec!["field", "works"])) {
        let plain = chain(&f);
        let mut scaled = plain.clone();
        scale_recipe(stage(&mut scaled, key), by);
        prop_assert!(same_net(&good(&plain), &good(&scaled)));
    }

    #[test]
    fn the_order_of_stages_means_nothing(f in figures(), seed in 0usize..24) {
        let plain = chain(&f);
        let mut shuffled = plain.clone();
        let stages = shuffled["stages"].as_array_mut().unwrap();
        stages.rotate_left(seed % 4);
        if seed % 3 == 0 { stages.swap(0, 2); }
        let (a, b) = (good(&plain), good(&shuffled));
        prop_assert!(same_net(&a, &b));
        prop_assert_eq!(a.terms_g_co2e_per_mj, b.terms_g_co2e_per_mj);
    }

    #[test]
    fn splitting_a_stage_changes_nothing(f in figures()) {
        let plain = chain(&f);
        let mut split = plain.clone();
        // The truck's way in two halves.
        stage(&mut split, "truck")["inputs"][0]["model"]["distance"]["value"] = json!(f.distance_km / 2.0);
        let mut second = stage(&mut split, "truck").clone();
        second["key"] = json!("truck-2");
        second["intakes"][0]["from"] = json!("truck");
        split["stages"].as_array_mut().unwrap().push(second);
        stage(&mut split, "car")["intakes"][0]["from"] = json!("truck-2");
        prop_assert!(same_net(&good(&plain), &good(&split)));
    }

    #[test]
    fn merging_identical_growers_changes_nothing(f in figures(), part in 0.05f64..0.95) {
        let plain = chain(&f);
        let mut two = plain.clone();
        let mut other = stage(&mut two, "field").clone();
        other["key"] = json!("field-2");
        two["stages"].as_array_mut().unwrap().push(other);
        let works = stage(&mut two, "works");
        works["intakes"][0]["amount"] = json!(f.intake_t * part);
        let mut rest = works["intakes"][0].clone();
        rest["from"] = json!("field-2");
        rest["amount"] = json!(f.intake_t * (1.0 - part));
        works["intakes"].as_array_mut().unwrap().push(rest);
        prop_assert!(same_net(&good(&plain), &good(&two)));
    }

    #[test]
    fn shares_lie_in_zero_to_one_and_add_to_one(f in figures()) {
        for s in good(&chain(&f)).stages.iter().filter(|s| !s.products.is_empty()) {
            prop_assert!(s.products.iter().all(|p| (0.0..=1.0).contains(&p.share)));
            prop_assert!(near(s.products.iter().map(|p| p.share).sum(), 1.0));
        }
    }

    #[test]
    fn more_of_an_input_never_lowers_the_net(f in figures(), more in 1.0f64..10.0, which in 0usize..4) {
        let plain = chain(&f);
        let mut raised = plain.clone();
        let (key, index) = [("field", 0), ("field", 1), ("works", 0), ("works", 1)][which];
        let amount = stage(&mut raised, key)["inputs"][index]["amount"].as_f64().unwrap();
        stage(&mut raised, key)["inputs"][index]["amount"] = json!(amount * more);
        prop_assert!(good(&raised).net.g_co2e_per_mj >= good(&plain).net.g_co2e_per_mj - 1e-12);
    }

    #[test]
    fn a_document_reads_back_as_itself(f in figures()) {
        let document = chain(&f);
        let pathway = Pathway::from_value(&document).unwrap();
        let bytes = canonical::bytes(&pathway).unwrap();
        let again = Pathway::from_bytes(&bytes).unwrap();
        prop_assert_eq!(&pathway, &again);
        prop_assert_eq!(bytes.clone(), canonical::bytes(&document).unwrap());
        prop_assert_eq!(canonical::bytes(&again).unwrap(), bytes);
    }

    #[test]
    fn any_bytes_are_refused_without_a_panic(bytes in prop::collection::vec(any::<u8>(), 0..400)) {
        let _ = Pathway::from_bytes(&bytes);
    }

    #[test]
    fn any_change_of_a_document_is_taken_or_refused_without_a_panic(
        f in figures(), path in prop::collection::vec(0usize..12, 1..7), put in prop::sample::select(vec![
            json!(null), json!(-1), json!(0), json!(1e308), json!(1e-308), json!("MJ heat"), json!([]), json!({}), json!("kg N"),
            json!("eu-2022-996/tr_rail_electric_mv"), json!("a~/b"), json!(true), json!([[1]]), json!({"gases": {"n2o": 1}}) ]),
    ) {
        let mut document = chain(&f);
        replace_somewhere(&mut document, &path, put);
        if let Ok(assessment) = assess(&document) {
            prop_assert!(assessment.net.g_co2e_per_mj.is_finite());
        }
    }
}

/// Walks down by the given turns and replaces what stands there.
pub(super) fn replace_somewhere(value: &mut Value, path: &[usize], put: Value) {
    let Some((turn, rest)) = path.split_first() else {
        *value = put;
        return;
    };
    match value {
        Value::Object(map) if !map.is_empty() => {
            let key = map.keys().nth(turn % map.len()).unwrap().clone();
            replace_somewhere(map.get_mut(&key).unwrap(), rest, put);
        }
        Value::Array(list) if !list.is_empty() => {
            let index = turn % list.len();
            replace_somewhere(&mut list[index], rest, put);
        }
        leaf => *leaf = put,
    }
}

#[test]
fn carbon_closes_where_what_leaves_is_what_came_in() {
    // 1 t of dry crop carbon in; 300 t of 99.7 % ethanol, its fermentation CO2, and grains that hold the rest.
    let mut document = chain(&Figures::usual());
    let crop = 870.0 * 45.0 / 100.0 * 44.0095 / 12.011;
    let pure = 300.0 * 0.997;
    let fuel_and_fermentation = pure * (1.91061 + 44.0095 / 46.06844);
    let grains_c = (crop - fuel_and_fermentation) * 12.011 / 44.0095;
    let dry = 288.0;
    stage(&mut document, "works")["co_products"][0]["carbon_percent_dry"] = json!(100.0 * grains_c / dry);
    let assessment = good(&document);
    assert!(
        (assessment.carbon.closure_percent.unwrap() - 100.0).abs() < 1e-9,
        "{:?}",
        assessment.carbon
    );
    assert!(!assessment.findings.iter().any(|f| f.id == "C-16"));
    stage(&mut document, "works")["co_products"][0]["carbon_percent_dry"] = json!(20.0);
    let open = good(&document);
    let finding = open.findings.iter().find(|f| f.id == "C-16").unwrap();
    assert_eq!(
        finding.severity,
        wheelwort::core::documents::assessment::Severity::Block
    );
}
