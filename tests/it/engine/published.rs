//! Published values: the 16 ethanol pathways of Directive (EU) 2018/2001 Annex V Parts A, B, D and E (consolidated
//! 16.07.2024), and worked points of the method.

use super::shapes::good;
use serde_json::json;
use wheelwort::core::engine::carbon::{CO2_PER_ETHANOL, FERMENTATION_CO2_PER_ETHANOL};
use wheelwort::library;

#[test]
fn sixteen_published_pathways_come_out_as_printed() {
    let edition = &library::book().editions["eu-2018-2001"];
    assert_eq!(edition.pathways.len(), 16);
    for pathway in edition.pathways.values() {
        let feedstock = &pathway.feedstock_materials[0];
        let id = &pathway.id;
        let assessment = good(&json!({
            "format": "wheelwort.pathway/1", "name": "Published values alone", "feedstock": feedstock,
            "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001",
            "plant_started": "2021-06-01", "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
        let net = assessment.net.g_co2e_per_mj;
        let printed = pathway.default;
        // Parts D and E print one decimal.
        assert!(
            (net - printed.total).abs() < 0.05,
            "{id}: {net} against {}",
            printed.total
        );
        let saving = assessment.saving_percent.unwrap();
        // Parts A and B print whole per cent; halves up reproduce all of them.
        assert_eq!((saving + 0.5).floor(), printed.saving_percent, "{id}: {saving}");
        assert_eq!(assessment.thresholds.len(), 1);
        assert_eq!(assessment.thresholds[0].percent, 65.0);
        assert_eq!(assessment.thresholds[0].met, saving >= 65.0);
        let stages: Vec<&str> = assessment.stages.iter().map(|s| s.key.as_str()).collect();
        assert_eq!(stages, ["default:e_ec", "default:e_p", "default:e_td"]);
    }
}

#[test]
fn thresholds_follow_the_plants_start() {
    // Directive (EU) 2018/2001 Article 29(10)(a) to (c).
    for (day, percent) in [
        ("2015-10-05", 50.0),
        ("2015-10-06", 60.0),
        ("2020-12-31", 60.0),
        ("2021-01-01", 65.0),
    ] {
        let id = "eu-2018-2001/cane";
        let assessment = good(&json!({
            "format": "wheelwort.pathway/1", "name": "Start", "feedstock": "sugar_cane",
            "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001",
            "plant_started": day, "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
        assert_eq!(assessment.thresholds[0].percent, percent, "{day}");
    }
}

#[test]
fn without_a_start_all_thresholds_are_listed_and_none_met() {
    let id = "eu-2018-2001/cane";
    let assessment = good(&json!({
        "format": "wheelwort.pathway/1", "name": "No start", "feedstock": "sugar_cane",
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001",
        "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
    assert_eq!(assessment.thresholds.len(), 3);
    assert!(assessment.thresholds.iter().all(|t| !t.met));
    assert!(assessment.findings.iter().any(|f| f.id == "H-01"));
}

#[test]
fn ethanols_carbon() {
    // Molar masses: C 12.011, CO2 44.0095, ethanol 46.06844 (value from memory; confirmed by tests/reference/chemistry.py).
    assert!((CO2_PER_ETHANOL - 2.0 * 44.0095 / 46.06844).abs() < 5e-6);
    assert!((FERMENTATION_CO2_PER_ETHANOL - 0.9553).abs() < 5e-5);
    assert!((CO2_PER_ETHANOL * 12.011 / 44.0095 - 0.5214).abs() < 5e-5);
}

#[test]
fn per_moist_tonne_to_fuel() {
    // Directive (EU) 2018/2001 Annex V Part C point 2, worked example `eec_to_fuel`: 250 000 g CO2e per moist tonne at
    // 14 %, 17.3 MJ/kg dry, 1.80 MJ of feedstock per MJ of fuel, allocation factor 0.60: 18.1476 g/MJ.
    let feed_dry_t = 1.80 * 1_000_000.0 / 17_300.0;
    let fuel_kg = 1_000_000.0 / 26.81;
    let grains_mj = 1_000_000.0 * (1.0 / 0.6 - 1.0);
    let assessment = good(&json!({
        "format": "wheelwort.pathway/1", "name": "Point 2", "feedstock": "maize_grain_only",
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001", "plant_started": "2021-06-01",
        "materials": [ { "id": "feed", "name": "Feed" } ],
        "stages": [
          { "key": "field", "kind": "cultivation",
            "output": { "material": "maize_grain_only", "amount": 1, "unit": "t", "moisture_percent": 14 },
            "inputs": [ { "key": "all", "gases": { "co2_fossil": 250 } } ] },
          { "key": "works", "kind": "processing",
            "output": { "material": "ethanol", "amount": fuel_kg, "unit": "kg", "strength_percent_mass": 100 },
            "intakes": [ { "from": "field", "amount": feed_dry_t, "unit": "t", "moisture_percent": 0 } ],
            "co_products": [ { "key": "feed", "name": "Feed", "role": "co_product", "material": "feed", "amount": 1, "unit": "kg",
                               "lhv": { "value": grains_mj, "unit": "MJ/kg" } } ] },
          { "key": "depot", "kind": "fuel_transport",
            "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 100 },
            "intakes": [ { "from": "works", "amount": 1, "unit": "t", "strength_percent_mass": 100 } ] } ] }));
    assert!(
        (assessment.net.g_co2e_per_mj - 18.1476).abs() < 5e-5,
        "{}",
        assessment.net.g_co2e_per_mj
    );
    assert_eq!(assessment.basis, "to the wheel");
}

#[test]
fn allocation_by_energy_as_worked() {
    // Worked example `allocation_ddgs`: 1.10 kg dry wheat DDGS (18.1 MJ/kg) per kg ethanol at 26.81 MJ/kg: 0.573844.
    let assessment = good(&json!({
        "format": "wheelwort.pathway/1", "name": "DDGS", "feedstock": "wheat",
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001", "plant_started": "2021-06-01",
        "stages": [
          { "key": "works", "kind": "processing",
            "output": { "material": "ethanol", "amount": 1, "unit": "kg", "strength_percent_mass": 100 },
            "co_products": [ { "key": "grains", "name": "DDGS", "role": "co_product", "material": "ddgs_wheat", "amount": 1.10, "unit": "kg" } ] } ] }));
    assert!(
        (assessment.stages[0].share - 0.573844).abs() < 5e-7,
        "{}",
        assessment.stages[0].share
    );
    assert_eq!(assessment.saving_percent, None);
    assert!(assessment.findings.iter().any(|f| f.id == "K-06"));
}

#[test]
fn a_road_leg_as_worked() {
    // Worked example `truck` (IR (EU) 2022/996 Annex IX): 0.87 MJ/t km diesel 95.1, CH4 0.004, N2O 0.0016 g/t km, 150 km: 0.466135 g/MJ.
    let assessment = good(&json!({
        "format": "wheelwort.pathway/1", "name": "Truck", "feedstock": "wheat", "not_covered": ["cultivation"],
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001", "plant_started": "2021-06-01",
        "stages": [
          { "key": "works", "kind": "processing", "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 100 } },
          { "key": "truck", "kind": "fuel_transport", "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 100 },
            "intakes": [ { "from": "works", "amount": 1, "unit": "t", "strength_percent_mass": 100 } ],
            "inputs": [ { "key": "haul", "model": { "kind": "haul", "vehicle": "eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel",
                          "distance": { "value": 150, "unit": "km" } } } ] } ] }));
    assert!(
        (assessment.terms_g_co2e_per_mj.e_td - 0.466135).abs() < 5e-7,
        "{}",
        assessment.terms_g_co2e_per_mj.e_td
    );
}
