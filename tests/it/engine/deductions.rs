//! Captured CO2, fires, digesters and dryers: published values, and what always holds.

use super::shapes::{Figures, assess, chain, good, stage};
use proptest::prelude::*;
use serde_json::{Value, json};
use wheelwort::core::documents::Assessment;
use wheelwort::core::domain::{Gas, GasVector};

/// Fuel of one hectare, MJ: the yield of the published checks.
pub const P: f64 = 60_000.0;
const LHV: f64 = 26.81;

/// One hectare of grain whose works have no co-products.
fn hectare() -> Value {
    let ethanol = P / LHV / 1000.0;
    let figures = Figures {
        intake_t: 8.0 * 0.86 / 0.87,
        ethanol_t: ethanol,
        strength: 100.0,
        ..Figures::usual()
    };
    let mut document = chain(&figures);
    stage(&mut document, "works")["co_products"] = json!([]);
    document
}

/// The hectare with a model in the stage that grows the grain.
pub fn with(model: &Value) -> Value {
    let mut document = hectare();
    let input = json!({ "key": "model", "label": "Model", "evidence": ["EV-1"], "origin": "calculated", "model": model });
    stage(&mut document, "field")["inputs"] = json!([input]);
    document
}

pub fn ids(assessment: &Assessment) -> Vec<&str> {
    assessment.findings.iter().map(|f| f.id.as_str()).collect()
}

pub fn pointers(document: &Value) -> Vec<String> {
    match assess(document) {
        Ok(_) => Vec::new(),
        Err(problems) => problems.list().iter().map(|p| p.pointer.clone()).collect(),
    }
}

#[track_caller]
pub fn close(found: f64, expected: f64, tolerance: f64) {
    assert!(
        (found - expected).abs() <= tolerance * expected.abs(),
        "{found} instead of {expected}"
    );
}

// ---- capture ----------------------------------------------------------------------------------------------------------------

/// The chain with a capture stage between works and truck.
fn capturing(model: &Value, power_mwh: Option<f64>) -> Value {
    let mut document = chain(&Figures::usual());
    let mut capture = stage(&mut document, "truck").clone();
    capture["key"] = json!("co2");
    capture["kind"] = json!("capture");
    let mut inputs = vec![json!({ "key": "credit", "label": "Credit", "model": model })];
    if let Some(mwh) = power_mwh {
        inputs.push(json!({ "key": "power", "amount": mwh, "unit": "MWh", "factor": "eu-2022-996/elec_eu27_2019_mv" }));
    }
    capture["inputs"] = json!(inputs);
    stage(&mut document, "truck")["intakes"][0]["from"] = json!("co2");
    document["stages"].as_array_mut().unwrap().push(capture);
    document
}

fn replacing(captured_t: f64, delivered_t: f64) -> Value {
    json!({ "kind": "capture", "use": "replace_fossil", "co2_captured": { "value": captured_t, "unit": "t" },
            "co2_delivered": { "value": delivered_t, "unit": "t" }, "purpose": "drinks", "replaces": "CO2 of an ammonia works",
            "last_use_on": "2027-09-30" })
}

fn storing(captured_t: f64) -> Value {
    json!({ "kind": "capture", "use": "store", "co2_captured": { "value": captured_t, "unit": "t" },
            "storage_site": "Site 1", "storage_permit": "Permit 1" })
}

#[test]
fn what_is_delivered_is_deducted() {
    let mj = 300_000.0 * 0.997 * LHV;
    let replaced = good(&capturing(&replacing(200.0, 190.0), Some(0.0)));
    close(replaced.terms_g_co2e_per_mj.e_ccr, -190e6 / mj, 1e-9);
    assert_eq!(replaced.terms_g_co2e_per_mj.e_ccs, 0.0);
    let stored = good(&capturing(&storing(200.0), Some(0.0)));
    close(stored.terms_g_co2e_per_mj.e_ccs, -200e6 / mj, 1e-9);
    assert_eq!(stored.terms_g_co2e_per_mj.e_ccr, 0.0);
    // Power of a draft is that of an input of its own: 30 MWh for 200 t are 150 kWh/t.
    let metered = good(&capturing(&replacing(200.0, 190.0), Some(30.0)));
    let mut draft = replacing(200.0, 190.0);
    draft["power_per_co2"] = json!({ "value": 150, "unit": "kWh/t" });
    draft["power_factor"] = json!("eu-2022-996/elec_eu27_2019_mv");
    let draft = good(&capturing(&draft, None));
    close(
        draft.terms_g_co2e_per_mj.e_ccr,
        metered.terms_g_co2e_per_mj.e_ccr,
        1e-9,
    );
    assert!(metered.terms_g_co2e_per_mj.e_ccr > replaced.terms_g_co2e_per_mj.e_ccr);
}

#[test]
fn captured_is_not_above_formed() {
    // 300 t of 99.7 % ethanol form 0.9553 t of CO2 per t: 285.7 t.
    assert!(!ids(&good(&capturing(&replacing(285.6, 280.0), Some(1.0)))).contains(&"C-03"));
    assert!(ids(&good(&capturing(&replacing(285.9, 280.0), Some(1.0)))).contains(&"C-03"));
    let mut document = capturing(&replacing(285.9, 280.0), Some(1.0));
    let boiler = json!({ "key": "wood", "gases": { "co2_biogenic": 50_000.0 } });
    stage(&mut document, "works")["inputs"]
        .as_array_mut()
        .unwrap()
        .push(boiler);
    assert!(!ids(&good(&document)).contains(&"C-03"));
}

#[test]
fn proofs_of_capture() {
    let blank = |model: &Value, field: &str| {
        let mut model = model.clone();
        model[field] = json!(" ");
        model
    };
    let absent = |model: &Value, field: &str| {
        let mut model = model.clone();
        model.as_object_mut().unwrap().remove(field);
        model
    };
    for field in ["purpose", "replaces"] {
        let found = good(&capturing(&blank(&replacing(9.0, 9.0), field), Some(1.0)));
        assert!(ids(&found).contains(&"G-01"), "{field}");
        let found = pointers(&capturing(&absent(&replacing(9.0, 9.0), field), Some(1.0)));
        assert_eq!(found, [format!("/stages/4/inputs/0/model/{field}")]);
    }
    assert!(!ids(&good(&capturing(&replacing(9.0, 9.0), Some(1.0)))).contains(&"G-01"));
    assert!(ids(&good(&capturing(&replacing(9.0, 9.0), None))).contains(&"G-01"));
    let mut attached = capturing(&storing(9.0), Some(1.0));
    stage(&mut attached, "co2")["inputs"][0]["evidence"] = json!(["EV-1"]);
    assert!(!ids(&good(&attached)).contains(&"G-02"));
    assert!(ids(&good(&capturing(&storing(9.0), Some(1.0)))).contains(&"G-02"));
    stage(&mut attached, "co2")["inputs"][0]["model"]["storage_permit"] = json!("");
    assert!(ids(&good(&attached)).contains(&"G-02"));
}

#[test]
fn refused_captures() {
    let at = "/stages/4/inputs/0/model";
    let mut late = replacing(9.0, 9.0);
    late["last_use_on"] = json!("2036-01-01");
    assert_eq!(
        pointers(&capturing(&late, Some(1.0))),
        [format!("{at}/last_use_on")]
    );
    late["last_use_on"] = json!("2035-12-31");
    assert!(pointers(&capturing(&late, Some(1.0))).is_empty());
    assert_eq!(
        pointers(&capturing(&replacing(9.0, 9.1), Some(1.0))),
        [format!("{at}/co2_delivered")]
    );
    let both = json!([replacing(9.0, 9.0), storing(9.0)]);
    assert_eq!(pointers(&capturing(&both, Some(1.0))), ["/stages/4/inputs"]);
    let mut empty = capturing(&replacing(9.0, 9.0), Some(1.0));
    stage(&mut empty, "co2")["inputs"]
        .as_array_mut()
        .unwrap()
        .remove(0);
    assert_eq!(pointers(&empty), ["/stages/4/inputs"]);
}

// ---- fires, digesters, dryers -----------------------------------------------------------------------------------------------

fn field_gases(model: &Value) -> GasVector {
    good(&with(model)).stages[0].inputs[0].recipe_gases_kg
}

#[test]
fn burning_of_residues_as_in_the_guidelines() {
    // 2006 IPCC Guidelines Vol. 4 Ch. 2 Equation 2.27, Tables 2.4 and 2.5: 6.5 t/ha of cane trash: 17.55 kg CH4, 0.455 kg N2O.
    for model in [
        json!({ "kind": "residue_burning", "burnt_t": 6.5 }),
        json!({ "kind": "residue_burning", "area_ha": 2, "fuel_load": { "value": 4.0625, "unit": "t/ha" }, "combustion_factor_percent": 80 }),
    ] {
        let gases = field_gases(&model);
        close(gases[Gas::Ch4Biogenic], 17.55, 1e-12);
        close(gases[Gas::N2o], 0.455, 1e-12);
    }
    let both =
        json!({ "kind": "residue_burning", "burnt_t": 6.5, "fuel_load": { "value": 4, "unit": "t/ha" } });
    assert_eq!(pointers(&with(&both)), ["/stages/0/inputs/0/model/fuel_load"]);
    let half = json!({ "kind": "residue_burning", "area_ha": 1 });
    assert_eq!(pointers(&with(&half)).len(), 2);
}

#[test]
fn methane_of_a_digester() {
    // Implementing Regulation (EU) 2022/996 Annex IX: methane 50 MJ/kg; open store of maize digestate 0.4422 g CH4,
    // 0.0082 g N2O per MJ of biogas.
    let mut model = json!({ "kind": "digester", "biogas_made": { "value": 1, "unit": "GJ" }, "methane_percent": 55,
                            "slip_percent": 1, "storage": "closed" });
    let gases = field_gases(&model);
    close(gases[Gas::Ch4Biogenic], 0.2, 1e-12);
    assert_eq!(gases[Gas::N2o], 0.0);
    model["storage"] = json!("eu-2022-996/digest_open_maize_digestate_storage");
    let gases = field_gases(&model);
    close(gases[Gas::Ch4Biogenic], 0.2 + 0.4422, 1e-12);
    close(gases[Gas::N2o], 0.0082, 1e-12);
    let assessment = good(&with(&model));
    let co2 = assessment.stages[0].inputs[0]
        .workings
        .iter()
        .find(|s| s.text.starts_with("biogenic CO2"));
    close(co2.unwrap().value, 44.0095 / 16.0425 / 50.0 / 0.55, 1e-12);
}

#[test]
fn heat_of_a_dryer() {
    let from =
        json!({ "factor": { "gases": { "co2_fossil": 0.05 }, "per": "MJ heat", "citation": "made up" } });
    // 30 t dry from 65 % to 10 % water: 30 (65/35 - 10/90) t.
    let model = json!({ "kind": "dryer", "dry_t": 30, "moisture_in_percent": 65, "moisture_out_percent": 10, "heat_from": from });
    let water = 30.0 * (65.0 / 35.0 - 10.0 / 90.0);
    close(field_gases(&model)[Gas::Co2Fossil], water * 3000.0 * 0.05, 1e-12);
    let model = json!({ "kind": "dryer", "water_t": water, "heat_per_water": { "value": 3, "unit": "MJ/kg" }, "heat_from": from });
    close(field_gases(&model)[Gas::Co2Fossil], water * 3000.0 * 0.05, 1e-12);
    let wetter = json!({ "kind": "dryer", "dry_t": 30, "moisture_in_percent": 10, "moisture_out_percent": 65, "heat_from": from });
    assert_eq!(
        pointers(&with(&wetter)),
        ["/stages/0/inputs/0/model/moisture_out_percent"]
    );
}

// ---- laws -------------------------------------------------------------------------------------------------------------------

proptest! {
    #![proptest_config(ProptestConfig::with_cases(48))]

    #[test]
    fn more_delivered_never_raises_the_net(captured in 1.0f64..280.0, part in 0.0f64..1.0, more in 0.0f64..1.0, store: bool) {
        let net = |delivered: f64| {
            let mut model = if store { storing(captured) } else { replacing(captured, 0.0) };
            model["co2_delivered"] = json!({ "value": delivered, "unit": "t" });
            good(&capturing(&model, Some(2.0))).net.g_co2e_per_mj
        };
        let less = captured * part;
        prop_assert!(net(less + (captured - less) * more) <= net(less));
    }
}
