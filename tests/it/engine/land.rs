//! Land-use change and soil carbon: published values, and what always holds.

use super::deductions::{P, close, ids, pointers, with};
use super::shapes::{good, stage};
use proptest::prelude::*;
use serde_json::{Value, json};
use wheelwort::core::documents::assessment::Step;

fn measured(before: f64, after: f64) -> Value {
    json!({ "kind": "land_use_change", "area_ha": 1, "converted_in": 2015,
            "before": { "carbon_t_per_ha": before }, "after": { "carbon_t_per_ha": after } })
}

fn tabled(region: &str, soil: &str, before: &Value, after: &Value) -> Value {
    json!({ "kind": "land_use_change", "area_ha": 1, "converted_in": 2015, "climate_region": region, "soil": soil,
            "before": before, "after": after })
}

fn grassland() -> Value {
    json!({ "use": "grassland", "management": "nominally_managed", "vegetation": "grassland_cool_temperate_wet" })
}

fn cropland() -> Value {
    json!({ "use": "cropland_annual", "management": "full_tillage", "vegetation": "cropland_annual" })
}

fn gained(before: f64, after: f64, years: u32) -> Value {
    json!({ "kind": "soil_carbon", "area_ha": 1, "carbon_before": { "value": before, "unit": "t/ha" },
            "carbon_after": { "value": after, "unit": "t/ha" }, "years": years, "practice": "cover_crop",
            "practice_since": "2020-01-01", "committed_until": "2031-01-01" })
}

// ---- land-use change --------------------------------------------------------------------------------------------------------

#[test]
fn land_use_change_and_its_bonus_as_in_the_directive() {
    // Directive (EU) 2018/2001 Annex V Part C points 7 and 8: 30 t C/ha lost, 60 000 MJ/ha a year: 91.6 and 62.6 g/MJ.
    let plain = good(&with(&measured(100.0, 70.0)));
    close(plain.terms_g_co2e_per_mj.e_l, 91.6, 1e-9);
    let mut bonus = measured(100.0, 70.0);
    bonus["degraded_land_bonus"] = json!(true);
    close(good(&with(&bonus)).terms_g_co2e_per_mj.e_l, 62.6, 1e-9);
    let mut bare = with(&bonus);
    stage(&mut bare, "field")["inputs"][0]["evidence"] = json!([]);
    assert!(ids(&good(&bare)).contains(&"E-01"));
    assert!(!ids(&good(&with(&bonus))).contains(&"E-01"));
}

#[test]
fn stocks_follow_the_table() {
    // Decision 2010/335/EU (recalled): sandy 71, grassland 71 + 6.8; cropland 71 x 0.69 x 1.08 x 1.11.
    let mut after = cropland();
    after["management"] = json!("reduced_tillage");
    after["input"] = json!("high_without_manure");
    let assessment = good(&with(&tabled(
        "cold_temperate_moist",
        "sandy",
        &grassland(),
        &after,
    )));
    let lost = 71.0 + 6.8 - 71.0 * 0.69 * 1.08 * 1.11;
    close(
        assessment.terms_g_co2e_per_mj.e_l,
        lost * 3.664e6 / 20.0 / P,
        1e-9,
    );
    let input = &assessment.stages[0].inputs[0];
    let recalled = |step: &&Step| step.source.contains("recalled, not read");
    assert_eq!(
        input.workings.iter().filter(recalled).count(),
        2,
        "{:#?}",
        input.workings
    );
}

#[test]
fn forest_scrubland_and_perennial_crops_have_their_rows() {
    let forest = json!({ "use": "forest", "vegetation": "forest_over_30_canopy_temperate_temperate_oceanic_forest_europe" });
    let lost = 95.0 + 84.0 - 95.0 * 0.69;
    let assessment = good(&with(&tabled(
        "cold_temperate_moist",
        "high_activity_clay",
        &forest,
        &cropland(),
    )));
    close(
        assessment.terms_g_co2e_per_mj.e_l,
        lost * 3.664e6 / 20.0 / P,
        1e-9,
    );
    let scrub = json!({ "use": "scrubland", "management": "moderately_degraded", "vegetation": "scrubland_temperate_global" });
    let cane = json!({ "use": "cropland_perennial", "management": "no_tillage",
                       "vegetation": "sugar_cane_warm_temperate_moist_subtropical_humid_forest_north_america" });
    let change = 34.0 * 0.95 + 7.4 - (34.0 * 1.15 + 4.8);
    let assessment = good(&with(&tabled("warm_temperate_moist", "sandy", &scrub, &cane)));
    close(
        assessment.terms_g_co2e_per_mj.e_l,
        change * 3.664e6 / 20.0 / P,
        1e-9,
    );
    let mut tilled = forest.clone();
    tilled["management"] = json!("no_tillage");
    let found = pointers(&with(&tabled("boreal", "sandy", &tilled, &cropland())));
    assert_eq!(found, ["/stages/0/inputs/0/model/before/management"]);
    let town = json!({ "use": "settlement", "vegetation": "cropland_annual" });
    let found = pointers(&with(&tabled("boreal", "sandy", &town, &cropland())));
    assert_eq!(found, ["/stages/0/inputs/0/model/before/use"]);
    let mut misspelt = forest;
    misspelt["vegetation"] = json!("forest_over_30_canopy_temperate");
    let found = pointers(&with(&tabled("boreal", "sandy", &misspelt, &cropland())));
    assert_eq!(found, ["/stages/0/inputs/0/model/before/vegetation"]);
    let found = pointers(&with(&tabled(
        "tropical_wet",
        "spodic",
        &grassland(),
        &cropland(),
    )));
    assert!(
        found
            .iter()
            .all(|p| p.ends_with("/before/use") || p.ends_with("/after/use"))
            && !found.is_empty()
    );
}

#[test]
fn every_region_has_its_factors() {
    let regions = "boreal cold_temperate_dry cold_temperate_moist warm_temperate_dry warm_temperate_moist tropical_dry \
                   tropical_moist tropical_wet tropical_montane";
    for region in regions.split(' ') {
        for (tillage, input) in [
            ("full_tillage", "low"),
            ("reduced_tillage", "high_with_manure"),
            ("no_tillage", "high_without_manure"),
        ] {
            let mut after = cropland();
            after["management"] = json!(tillage);
            after["input"] = json!(input);
            for (state, input) in [
                ("improved", "high_with_manure"),
                ("moderately_degraded", "medium"),
                ("severely_degraded", "medium"),
            ] {
                let mut before = grassland();
                before["management"] = json!(state);
                before["input"] = json!(input);
                assert_eq!(
                    pointers(&with(&tabled(region, "sandy", &before, &after))),
                    [""; 0],
                    "{region} {state} {tillage}"
                );
            }
        }
    }
    let mut rich = grassland();
    rich["input"] = json!("high_with_manure");
    let found = pointers(&with(&tabled("boreal", "sandy", &rich, &cropland())));
    assert_eq!(found, ["/stages/0/inputs/0/model/before/input"]);
}

#[test]
fn what_a_stock_needs_is_asked_for() {
    let model = json!({ "kind": "land_use_change", "converted_in": 2015.5, "spread_years": 30,
                        "before": { "use": "grassland" }, "after": { "carbon_t_per_ha": 70, "input": "low" } });
    let at = "/stages/0/inputs/0/model";
    let wanted = [
        "area_ha",
        "converted_in",
        "before/vegetation",
        "before/management",
        "after/input",
        "spread_years",
    ];
    let wanted: Vec<String> = wanted.iter().map(|field| format!("{at}/{field}")).collect();
    assert_eq!(pointers(&with(&model)), wanted);
    let mut model = tabled("boreal", "sandy", &grassland(), &cropland());
    model.as_object_mut().unwrap().remove("soil");
    assert_eq!(pointers(&with(&model)), [format!("{at}/soil")]);
    let mut late = measured(50.0, 60.0);
    late["converted_in"] = json!(2028);
    assert_eq!(pointers(&with(&late)), [format!("{at}/converted_in")]);
}

#[test]
fn conversions_of_long_ago_and_between_crops_count_nothing_and_say_so() {
    let perennial = json!({ "use": "cropland_perennial", "management": "no_tillage",
                            "vegetation": "perennial_crops_temperate_all_moisture" });
    let region = ("cold_temperate_moist", "sandy");
    let mut cases = vec![
        (tabled(region.0, region.1, &cropland(), &perennial), "one use"),
        (tabled(region.0, region.1, &perennial, &cropland()), "one use"),
    ];
    for (year, words) in [(2007, "before January 2008"), (1990, "before January 2008")] {
        let mut old = tabled(region.0, region.1, &grassland(), &cropland());
        old["converted_in"] = json!(year);
        cases.push((old, words));
    }
    for (model, words) in cases {
        let mut model = model;
        model["degraded_land_bonus"] = json!(true);
        let old = model["converted_in"].as_i64().unwrap() < 2006;
        if old {
            model["degraded_land_bonus"] = json!(false);
        }
        let assessment = good(&with(&model));
        assert_eq!(assessment.terms_g_co2e_per_mj.e_l, 0.0);
        let steps = &assessment.stages[0].inputs[0].workings;
        assert!(steps.iter().any(|step| step.text.contains(words)), "{steps:#?}");
    }
    // Twenty years before the harvest: 2010 for the harvest of 2030, and not for that of 2029.
    let mut model = measured(100.0, 70.0);
    model["converted_in"] = json!(2010);
    for (harvest, e_l) in [(2029, 91.6), (2030, 0.0)] {
        let mut document = with(&model);
        stage(&mut document, "field")["grown"] = json!({ "country": "XW", "harvest_year": harvest });
        let assessment = good(&document);
        assert!(
            (assessment.terms_g_co2e_per_mj.e_l - e_l).abs() < 1e-6,
            "{harvest}"
        );
        let said = assessment.stages[0].inputs[0]
            .workings
            .iter()
            .any(|s| s.text.contains("20 years before the harvest"));
        assert_eq!(said, harvest == 2030);
    }
}

// ---- soil carbon ------------------------------------------------------------------------------------------------------------

#[test]
fn soil_carbon_as_in_the_regulation() {
    // Implementing Regulation (EU) 2022/996 Annex V: 1 t C/ha in 10 years, 60 000 MJ/ha: 6.10667 g/MJ.
    let assessment = good(&with(&gained(50.0, 51.0, 10)));
    close(assessment.terms_g_co2e_per_mj.e_sca, -6.106_666_666_666_667, 1e-9);
    assert!(ids(&assessment).iter().all(|id| *id != "F-08" && *id != "F-10"));
}

#[test]
fn the_cap_cuts_and_biochar_lifts_it() {
    let mut model = gained(50.0, 80.0, 5);
    close(good(&with(&model)).terms_g_co2e_per_mj.e_sca, -25.0, 1e-9);
    model["practice"] = json!("biochar");
    close(good(&with(&model)).terms_g_co2e_per_mj.e_sca, -45.0, 1e-9);
    model["broken"] = json!(true);
    let assessment = good(&with(&model));
    close(assessment.terms_g_co2e_per_mj.e_sca, 45.0, 1e-9);
    assert!(ids(&assessment).contains(&"F-10"));
}

#[test]
fn a_loss_of_soil_carbon_counts_whole_broken_or_not() {
    for broken in [false, true] {
        let mut model = gained(80.0, 50.0, 5);
        model["broken"] = json!(broken);
        close(
            good(&with(&model)).terms_g_co2e_per_mj.e_sca,
            30.0 * 3.664e6 / 5.0 / P,
            1e-9,
        );
    }
    let mut model = gained(50.0, 51.0, 10);
    model["extra_emissions"] = json!({ "value": 1.2, "unit": "t" });
    close(
        good(&with(&model)).terms_g_co2e_per_mj.e_sca,
        (1200.0 - 366.4) * 1000.0 / P,
        1e-9,
    );
}

#[test]
fn each_grower_is_capped_by_the_fuel_of_the_own_fields() {
    let (mut rich, mut poor) = (gained(50.0, 90.0, 5), gained(50.0, 51.0, 10));
    rich["area_ha"] = json!(0.25);
    poor["area_ha"] = json!(0.75);
    let together = good(&with(&json!([rich, poor]))).terms_g_co2e_per_mj.e_sca;
    close(together, -(25.0 * 0.25 + 6.106_666_666_666_667 * 0.75), 1e-9);
    // The rest of the fields makes fuel too where another model names them.
    let mut document = with(&rich);
    let fire = json!({ "key": "fire", "model": { "kind": "residue_burning", "area_ha": 1, "burnt_t": 0 } });
    stage(&mut document, "field")["inputs"]
        .as_array_mut()
        .unwrap()
        .push(fire);
    close(good(&document).terms_g_co2e_per_mj.e_sca, -25.0 * 0.25, 1e-9);
}

#[test]
fn a_region_is_not_credited_with_the_fuel_of_another() {
    let mut document = with(&gained(50.0, 90.0, 5));
    let mut other = stage(&mut document, "field").clone();
    other["key"] = json!("plain");
    other["inputs"] = json!([]);
    document["stages"].as_array_mut().unwrap().push(other);
    let works = stage(&mut document, "works");
    let mut second = works["intakes"][0].clone();
    second["from"] = json!("plain");
    for (intake, part) in [(&mut works["intakes"][0], 0.4), (&mut second, 0.6)] {
        intake["amount"] = json!(intake["amount"].as_f64().unwrap() * part);
    }
    works["intakes"].as_array_mut().unwrap().push(second);
    close(good(&document).terms_g_co2e_per_mj.e_sca, -0.4 * 25.0, 1e-9);
}

#[test]
fn conditions_of_the_soil_carbon_credit() {
    for (field, day, broken) in [
        ("practice_since", "2023-10-01", false),
        ("practice_since", "2023-10-02", true),
        ("committed_until", "2030-01-01", false),
        ("committed_until", "2029-12-31", true),
    ] {
        let mut model = gained(50.0, 51.0, 10);
        model["committed_until"] = json!("2035-01-01");
        model[field] = json!(day);
        let assessment = good(&with(&model));
        assert_eq!(ids(&assessment).contains(&"F-08"), broken, "{field} {day}");
    }
}

// ---- laws -------------------------------------------------------------------------------------------------------------------

proptest! {
    #![proptest_config(ProptestConfig::with_cases(48))]

    #[test]
    fn no_soil_carbon_claim_passes_its_cap(before in 0.0f64..200.0, gain in 0.0f64..300.0, years in 1u32..30, biochar: bool, area in 0.01f64..100.0) {
        let mut model = gained(before, before + gain, years);
        model["area_ha"] = json!(area);
        let cap = if biochar { 45.0 } else { 25.0 };
        if biochar {
            model["practice"] = json!("biochar");
        }
        let e_sca = good(&with(&model)).terms_g_co2e_per_mj.e_sca;
        prop_assert!(e_sca <= 0.0 && e_sca >= -cap * (1.0 + 1e-12), "{e_sca}");
    }

    #[test]
    fn the_size_of_the_recipe_does_not_matter(by in 0.001f64..1000.0, bonus: bool) {
        let mut model = measured(90.0, 70.0);
        model["degraded_land_bonus"] = json!(bonus);
        let small = good(&with(&model)).net.g_co2e_per_mj;
        model["area_ha"] = json!(by);
        let mut document = with(&model);
        let grain = &mut stage(&mut document, "field")["output"]["amount"];
        *grain = json!(8.0 * by);
        let large = good(&document).net.g_co2e_per_mj;
        prop_assert!((small - large).abs() <= 1e-9 * small.abs().max(1.0), "{small} {large}");
    }
}
