//! Documents for tests of the shell: one that holds, and one of each kind that does not. All made up.

use serde_json::{Value, json};

/// A short chain that holds and passes its threshold, without any model but a haul.
pub fn chain() -> Value {
    json!({
        "format": "wheelwort.pathway/1",
        "name": "Made-up wheat",
        "feedstock": "wheat",
        "period": { "from": "2026-07-01", "to": "2027-06-30" },
        "rule_set": "eu-2018-2001",
        "plant_started": "2017-05-01",
        "stages": [
            { "key": "field", "kind": "cultivation", "name": "Field",
              "output": { "material": "wheat", "amount": 8.2, "unit": "t", "moisture_percent": 14.0 },
              "inputs": [ { "key": "n", "label": "Ammonium nitrate", "amount": 120, "unit": "kg N",
                            "factor": "eu-2022-996/fert_n_an", "origin": "calculated" } ] },
            { "key": "works", "kind": "processing", "name": "Works",
              "output": { "material": "ethanol", "amount": 300, "unit": "t", "strength_percent_mass": 99.8 },
              "intakes": [ { "from": "field", "amount": 1000, "unit": "t", "moisture_percent": 14.0 } ],
              "inputs": [ { "key": "gas", "amount": 2.5, "unit": "TJ", "factor": "eu-2022-996/fuel_natural_gas",
                            "origin": "calculated" } ],
              "co_products": [ { "key": "grains", "name": "Grains", "material": "ddgs_wheat", "amount": 320, "unit": "t",
                                 "moisture_percent": 10.0, "role": "co_product" } ] },
            { "key": "truck", "kind": "fuel_transport", "name": "Truck",
              "output": { "material": "ethanol", "amount": 1, "unit": "t", "strength_percent_mass": 99.8 },
              "intakes": [ { "from": "works", "amount": 1, "unit": "t", "strength_percent_mass": 99.8 } ],
              "inputs": [ { "key": "haul", "model": { "kind": "haul", "distance": { "value": 150, "unit": "km" },
                            "vehicle": "eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel" } } ] }
        ]
    })
}

/// The chain with one place changed.
pub fn chain_with(pointer: &str, value: Value) -> Value {
    let mut document = chain();
    let (parent, name) = pointer.rsplit_once('/').expect("a pointer");
    let place = document.pointer_mut(parent).expect("a place");
    match place {
        Value::Array(items) => items[name.parse::<usize>().expect("an index")] = value,
        place => place[name] = value,
    }
    document
}

/// A rule set of one's own: that of the Directive with another comparator and a threshold of one's own.
pub fn own_rules() -> Value {
    let directive = &wheelwort::library::book().rule_sets["eu-2018-2001"];
    let bytes = wheelwort::core::documents::rule_set::canonical_bytes(directive).expect("JSON");
    let mut rules: Value = serde_json::from_slice(&bytes).expect("JSON");
    rules["id"] = "own-2027".into();
    rules["title"] = "Rules of a made-up buyer".into();
    rules["version"] = "1".into();
    rules["standing"] = "own".into();
    rules["comparator"] =
        json!({ "value": 90, "unit": "g CO2e/MJ", "source": "made-up contract, annex 2", "status": "own" });
    rules["thresholds"] = json!([{ "percent": 40, "source": "made-up contract, point 5", "status": "own" }]);
    rules
}

/// A question about E10 on a stored pathway.
pub fn e10(id: &str) -> Value {
    json!({ "blend": "E10", "temperature_c": 15, "heating_values": "emission_arithmetic", "ethanol": id })
}

/// A document that must be refused.
pub struct Bad {
    /// What is wrong with it.
    pub name: &'static str,
    /// Its bytes.
    pub bytes: Vec<u8>,
    /// The status it is answered with.
    pub status: u16,
    /// Where one of its errors points; none where the text is no document at all.
    pub pointer: Option<&'static str>,
}

fn bad(name: &'static str, pointer: &'static str, document: &Value) -> Bad {
    let bytes = serde_json::to_vec(document).expect("JSON");
    Bad {
        name,
        bytes,
        status: 422,
        pointer: Some(pointer),
    }
}

fn not_json(name: &'static str, text: String) -> Bad {
    Bad {
        name,
        bytes: text.into_bytes(),
        status: 400,
        pointer: None,
    }
}

/// The text of the chain with a part of it replaced by what JSON cannot say.
fn chain_saying(part: &str, other: &str) -> String {
    let text = chain().to_string();
    assert!(text.contains(part), "{part}");
    text.replacen(part, other, 1)
}

/// One document of each kind that is refused.
pub fn all_bad() -> Vec<Bad> {
    let mut circle = chain();
    circle["stages"][0]["intakes"] = json!([{ "from": "works", "amount": 1, "unit": "t" }]);
    let mut dangling = chain();
    let mut spare = dangling["stages"][0].clone();
    spare["key"] = "spare".into();
    dangling["stages"].as_array_mut().expect("stages").push(spare);
    let mut many = chain();
    let field = many["stages"][0].clone();
    for number in 0..1_000 {
        let mut stage = field.clone();
        stage["key"] = format!("field-{number}").into();
        many["stages"].as_array_mut().expect("stages").push(stage);
    }
    vec![
        bad(
            "wrong unit",
            "/stages/0/inputs/0/unit",
            &chain_with("/stages/0/inputs/0/unit", "kg".into()),
        ),
        bad(
            "no unit at all",
            "/stages/0/inputs/0/unit",
            &chain_with("/stages/0/inputs/0/unit", "furlong".into()),
        ),
        bad(
            "unknown factor",
            "/stages/0/inputs/0/factor",
            &chain_with("/stages/0/inputs/0/factor", "eu-2022-996/none".into()),
        ),
        bad("circle", "/stages/0/intakes", &circle),
        bad("stage that nothing takes", "/stages/3", &dangling),
        bad(
            "intake from nowhere",
            "/stages/1/intakes/0/from",
            &chain_with("/stages/1/intakes/0/from", "barn".into()),
        ),
        bad(
            "zero output",
            "/stages/0/output/amount",
            &chain_with("/stages/0/output/amount", 0.into()),
        ),
        bad(
            "moisture 100",
            "/stages/0/output/moisture_percent",
            &chain_with("/stages/0/output/moisture_percent", 100.into()),
        ),
        bad(
            "negative amount",
            "/stages/0/inputs/0/amount",
            &chain_with("/stages/0/inputs/0/amount", (-1).into()),
        ),
        bad(
            "strength over 100",
            "/stages/1/output/strength_percent_mass",
            &chain_with("/stages/1/output/strength_percent_mass", json!(100.1)),
        ),
        bad(
            "unknown field",
            "/stages/0/colour",
            &chain_with("/stages/0/colour", "green".into()),
        ),
        bad(
            "unknown field at the top",
            "/colour",
            &chain_with("/colour", "green".into()),
        ),
        bad(
            "another format",
            "/format",
            &chain_with("/format", "wheelwort.pathway/2".into()),
        ),
        bad("no format", "/format", &chain_with("/format", Value::Null)),
        bad(
            "unknown rule set",
            "/rule_set",
            &chain_with("/rule_set", "made-up".into()),
        ),
        bad("1 000 stages", "/stages", &many),
        bad(
            "a number as text",
            "/stages/0/output/amount",
            &chain_with("/stages/0/output/amount", "8.2".into()),
        ),
        bad("a list", "", &json!([])),
        not_json("NaN", chain_saying("8.2", "NaN")),
        not_json("Infinity", chain_saying("8.2", "Infinity")),
        not_json("a number beyond a double", chain_saying("8.2", "1e999")),
        not_json(
            "a field that stands twice",
            chain_saying("\"name\":", "\"name\":\"x\",\"name\":"),
        ),
        not_json("nested 100 000 deep", "[".repeat(100_000) + &"]".repeat(100_000)),
        not_json(
            "nested 100 000 deep in a document",
            chain_saying("8.2", &("[".repeat(100_000) + &"]".repeat(100_000))),
        ),
        not_json("half a document", chain().to_string()[..100].to_owned()),
        not_json("nothing", String::new()),
        Bad {
            name: "not UTF-8",
            bytes: b"{\"name\": \"\xff\"}".to_vec(),
            status: 400,
            pointer: None,
        },
    ]
}

/// A document of 10 MB.
pub fn ten_megabytes() -> Vec<u8> {
    serde_json::to_vec(&chain_with("/note", "x".repeat(10_000_000).into())).expect("JSON")
}

/// Names that must come back as they were given and do no harm.
pub const NAMES: &[&str] = &[
    "<script>alert(1)</script>",
    "\"><img src=x onerror=alert(1)>",
    "Weizen für Zuckerrübenölmühle",
    "小麦 \u{1F33E}",
    "'; DROP TABLE pathway; --",
    "\u{202e}desrever",
    "{{ 7 * 7 }} ${7*7} %s",
];
