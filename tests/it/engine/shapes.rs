//! Small invented pathways as JSON, to be changed by tests.

use serde_json::{Value, json};
use wheelwort::core::documents::{Assessment, Pathway, Problems};
use wheelwort::core::evaluate::{Options, evaluate};

/// Figures of an invented chain of field, truck, works with two co-products, rail and cars.
#[derive(Clone, Debug)]
pub struct Figures {
    pub grain_t: f64,
    pub moisture: f64,
    pub nitrogen_kg: f64,
    pub diesel_mj: f64,
    pub intake_t: f64,
    pub gas_gj: f64,
    pub power_mwh: f64,
    pub ethanol_t: f64,
    pub strength: f64,
    pub grains_t: f64,
    pub distance_km: f64,
}

impl Figures {
    pub fn usual() -> Figures {
        Figures {
            grain_t: 8.0,
            moisture: 14.0,
            nitrogen_kg: 150.0,
            diesel_mj: 3_000.0,
            intake_t: 1_000.0,
            gas_gj: 3_000.0,
            power_mwh: 90.0,
            ethanol_t: 300.0,
            strength: 99.7,
            grains_t: 320.0,
            distance_km: 150.0,
        }
    }
}

/// The document of a chain.
pub fn chain(f: &Figures) -> Value {
    json!({
        "format": "wheelwort.pathway/1", "name": "Invented chain", "example": true, "note": "Invented for a check.",
        "feedstock": "wheat", "period": { "from": "2026-10-01", "to": "2027-09-30" },
        "rule_set": "eu-2018-2001", "plant_started": "2019-03-01",
        "stages": [
            { "key": "field", "kind": "cultivation",
              "output": { "material": "wheat", "amount": f.grain_t, "unit": "t", "moisture_percent": f.moisture, "carbon_percent_dry": 45.0 },
              "inputs": [
                { "key": "n", "amount": f.nitrogen_kg, "unit": "kg N", "factor": "eu-2022-996/fert_n_an" },
                { "key": "diesel", "amount": f.diesel_mj, "unit": "MJ", "factor": ["eu-2022-996/fuel_diesel", "eu-2022-996/mach_diesel_agriculture"] } ] },
            { "key": "works", "kind": "processing",
              "output": { "material": "ethanol", "amount": f.ethanol_t, "unit": "t", "strength_percent_mass": f.strength },
              "intakes": [ { "from": "field", "amount": f.intake_t, "unit": "t", "moisture_percent": 13.0 } ],
              "inputs": [
                { "key": "gas", "amount": f.gas_gj, "unit": "GJ", "factor": ["eu-2022-996/fuel_natural_gas", "eu-2022-996/comb_ng_boiler"] },
                { "key": "power", "amount": f.power_mwh, "unit": "MWh", "factor": "eu-2022-996/elec_eu27_2019_mv" } ],
              "co_products": [
                { "key": "grains", "name": "Grains", "role": "co_product", "material": "ddgs_wheat", "amount": f.grains_t, "unit": "t", "moisture_percent": 10.0, "carbon_percent_dry": 47.0 } ] },
            { "key": "truck", "kind": "fuel_transport",
              "output": { "material": "ethanol", "amount": f.ethanol_t, "unit": "t", "strength_percent_mass": f.strength },
              "intakes": [ { "from": "works", "amount": f.ethanol_t, "unit": "t", "strength_percent_mass": f.strength } ],
              "inputs": [ { "key": "haul", "model": { "kind": "haul", "vehicle": "eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel", "distance": { "value": f.distance_km, "unit": "km" } } } ] },
            { "key": "car", "kind": "combustion",
              "output": { "material": "ethanol", "amount": 1, "unit": "MJ" }, "intakes": [ { "from": "truck" } ] } ]
    })
}

/// Reads and evaluates a document.
pub fn assess(document: &Value) -> Result<Assessment, Problems> {
    evaluate(
        &Pathway::from_value(document)?,
        wheelwort::library::book(),
        Options::default(),
    )
}

/// Evaluates a document that must be good.
pub fn good(document: &Value) -> Assessment {
    assess(document).unwrap_or_else(|problems| panic!("{:#?}", problems.list()))
}

/// The index of a stage in a document.
pub fn stage_index(document: &Value, key: &str) -> usize {
    document["stages"]
        .as_array()
        .unwrap()
        .iter()
        .position(|stage| stage["key"] == key)
        .unwrap()
}

/// A stage of a document, to be changed.
pub fn stage<'d>(document: &'d mut Value, key: &str) -> &'d mut Value {
    let index = stage_index(document, key);
    &mut document["stages"][index]
}

/// Multiplies every amount of a stage's own recipe (output, intakes, inputs, co-products).
pub fn scale_recipe(stage: &mut Value, by: f64) {
    let scale = |value: &mut Value| {
        if let Some(amount) = value["amount"].as_f64() {
            value["amount"] = json!(amount * by);
        }
    };
    scale(&mut stage["output"]);
    for list in ["intakes", "inputs", "co_products"] {
        for row in stage[list].as_array_mut().into_iter().flatten() {
            scale(row);
        }
    }
}
