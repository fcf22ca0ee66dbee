//! A made-up pathway for the tests of this room.

use crate::core::documents::Pathway;
use serde_json::json;

/// A short chain with a model, an own factor of a supplier and a co-product.
pub(crate) fn pathway() -> Pathway {
    Pathway::from_value(&json!({
        "format": "wheelwort.pathway/1", "name": "Made-up wheat", "example": true, "feedstock": "wheat",
        "period": { "from": "2025-07-01", "to": "2026-06-30" }, "rule_set": "eu-2018-2001",
        "plant_started": "2017-05-01",
        "stages": [
            { "key": "field", "kind": "cultivation", "name": "Field", "grown": { "country": "IE" },
              "output": { "material": "wheat", "amount": 8.2, "unit": "t", "moisture_percent": 14.0 },
              "inputs": [ { "key": "n", "amount": 120, "unit": "kg N", "factor": "eu-2022-996/fert_n_an",
                            "origin": "calculated" } ] },
            { "key": "works", "kind": "processing", "name": "Works",
              "output": { "material": "ethanol", "amount": 300, "unit": "t", "strength_percent_mass": 99.8 },
              "intakes": [ { "from": "field", "amount": 1000, "unit": "t", "moisture_percent": 14.0 } ],
              "inputs": [ { "key": "gas", "amount": 2.5, "unit": "TJ", "factor": "eu-2022-996/fuel_natural_gas",
                            "origin": "calculated" } ],
              "co_products": [ { "key": "grains", "name": "Grains", "material": "ddgs_wheat", "amount": 320,
                                 "unit": "t", "moisture_percent": 10.0, "role": "co_product" } ] },
            { "key": "truck", "kind": "fuel_transport", "name": "Truck",
              "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 99.8 },
              "intakes": [ { "from": "works", "amount": 1, "unit": "t", "strength_percent_mass": 99.8 } ],
              "inputs": [ { "key": "haul", "model": { "kind": "haul", "distance": { "value": 150, "unit": "km" },
                            "vehicle": "eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel" } } ] }
        ]
    }))
    .expect("a pathway")
}
