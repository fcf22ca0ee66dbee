//! Footprint records: cradle to gate per kilogram, from the demonstration and from made-up chains worked by hand.

use serde_json::{Value, json};
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::exchange::pact::{Denaturant, Geography, PactError, PactFacts, Written, write};
use wheelwort::library::book;

/// Facts of an invented company.
pub fn facts() -> PactFacts {
    PactFacts {
        id: "0190a3c4-5b6d-7e8f-9a0b-1c2d3e4f5a6b".to_owned(),
        replaces: Vec::new(),
        made_at: "2027-06-10T12:00:00Z".parse().unwrap(),
        active: true,
        company: "Tarn Bridge Ethanol (invented)".to_owned(),
        company_ids: vec!["urn:pact:tarnbridge.example:company:1".to_owned()],
        product: "Fuel ethanol 99.7 % mass".to_owned(),
        description: "Undenatured fuel ethanol of wheat".to_owned(),
        product_ids: vec!["urn:pact:tarnbridge.example:supplier-id:e-99".to_owned()],
        classifications: Vec::new(),
        geography: Some(Geography::Country("DE".to_owned())),
        standards: vec!["ISO14040-44".to_owned()],
        left_out: (0.0, None),
        ratings: None,
        verification: None,
        remarks: Vec::new(),
        denaturant: None,
        storage_proven: false,
        soil_carbon_traced: false,
        delivers: false,
    }
}

pub fn demo(name: &str) -> Pathway {
    let (_, text) = wheelwort::demo::PATHWAYS
        .iter()
        .find(|(file, _)| file.starts_with(name))
        .unwrap();
    Pathway::from_bytes(text.as_bytes()).unwrap()
}

pub fn json_of(written: &Written) -> Value {
    serde_json::from_slice(&written.bytes).unwrap()
}

fn law(pathway: &Pathway) -> Assessment {
    evaluate(pathway, book(), Options::default()).unwrap()
}

fn figure(record: &Value, name: &str) -> f64 {
    record["pcf"][name].as_str().unwrap().parse().unwrap()
}

fn near(found: f64, wanted: f64) -> bool {
    (found - wanted).abs() <= 2e-9 + 1e-9 * wanted.abs()
}

/// Two stages and a way to the customer: every figure is worked out by hand below.
fn by_hand() -> Value {
    json!({
        "format": "wheelwort.pathway/1", "name": "By hand", "feedstock": "wheat", "rule_set": "eu-2018-2001",
        "period": { "from": "2025-01-01", "to": "2025-12-31" }, "plant_started": "2017-05-01",
        "stages": [
            { "key": "field", "kind": "cultivation", "output": { "material": "wheat", "amount": 1000, "unit": "kg" },
              "inputs": [ { "key": "field", "gases": { "co2_fossil": 60, "n2o": 0.2 } } ] },
            { "key": "works", "kind": "processing", "intakes": [ { "from": "field", "amount": 1000, "unit": "kg" } ],
              "output": { "material": "ethanol", "amount": 300, "unit": "kg", "strength_percent_mass": 100 },
              "inputs": [ { "key": "gas", "gases": { "co2_fossil": 90, "ch4_biogenic": 0.5, "co2e_unsplit": 3 } } ] },
            { "key": "truck", "kind": "fuel_transport", "intakes": [ { "from": "works", "amount": 300, "unit": "kg", "strength_percent_mass": 100 } ],
              "output": { "material": "ethanol", "amount": 297, "unit": "kg", "strength_percent_mass": 100 },
              "inputs": [ { "key": "diesel", "gases": { "co2_fossil": 6 } } ] }
        ]
    })
}

#[test]
fn a_chain_by_hand() {
    let pathway = Pathway::from_value(&by_hand()).unwrap();
    let delivers = PactFacts {
        delivers: true,
        ..facts()
    };
    let written = write(&pathway, book(), &delivers, &[]).unwrap();
    let record = json_of(&written);
    let gwp = &book().gwp_sets["ar6"];
    // 300 kg of ethanol carry everything; the truck and what it loses come after the gate.
    let fossil = (60.0 + 0.2 * gwp.n2o + 90.0 + 3.0) / 300.0;
    let methane = 0.5 * gwp.ch4_biogenic / 300.0;
    assert!(near(figure(&record, "fossilGhgEmissions"), fossil));
    assert!(near(
        figure(&record, "landManagementFossilGhgEmissions"),
        (60.0 + 0.2 * gwp.n2o) / 300.0
    ));
    assert!(near(figure(&record, "biogenicNonCO2Emissions"), methane));
    assert!(near(
        figure(&record, "pcfExcludingBiogenicUptake"),
        fossil + methane
    ));
    assert!(near(
        figure(&record, "pcfIncludingBiogenicUptake"),
        fossil + methane - 1.91061
    ));
    assert!(near(
        figure(&record, "outboundLogisticsGhgEmissions"),
        6.0 / 300.0
    ));
    assert!((figure(&record, "biogenicCarbonContent") - 0.5214).abs() < 1e-3);
    assert_eq!(record["pcf"]["referencePeriodStart"], "2025-01-01T00:00:00Z");
    assert_eq!(record["pcf"]["referencePeriodEnd"], "2026-01-01T00:00:00Z");
    assert_eq!(record["pcf"]["declaredUnitOfMeasurement"], "kilogram");
    assert_eq!(record["pcf"]["ipccCharacterizationFactors"], json!(["AR6"]));
    assert!(written.findings.is_empty(), "{:?}", written.findings);
    let without = json_of(&write(&pathway, book(), &facts(), &[]).unwrap());
    assert!(without["pcf"].get("outboundLogisticsGhgEmissions").is_none());
}

#[test]
fn the_demonstration_passes_its_own_checks() {
    for name in ["a_", "b_", "c_", "g_", "h_"] {
        let pathway = demo(name);
        let assessment = law(&pathway);
        let written = write(&pathway, book(), &facts(), &[&assessment]).unwrap();
        assert!(written.findings.is_empty(), "{name}: {:?}", written.findings);
        let record = json_of(&written);
        let total = figure(&record, "pcfExcludingBiogenicUptake");
        assert!((0.05..5.0).contains(&total), "{name}: {total}");
        assert!(record["comment"].as_str().unwrap().starts_with("EXAMPLE"));
    }
}

#[test]
fn the_total_is_the_engines_own_net_to_the_gate() {
    // The same chain cut at the gate by hand and evaluated: without deductions the total is that net per kilogram.
    let mut cut = by_hand();
    cut["stages"].as_array_mut().unwrap().pop();
    cut["rule_set"] = "inventory-ar6".into();
    let net = law(&Pathway::from_value(&cut).unwrap()).net.g_co2e_per_mj;
    let per_kg = net * book().rule_sets["inventory-ar6"].ethanol_lhv.value / 1000.0;
    let written = write(&Pathway::from_value(&by_hand()).unwrap(), book(), &facts(), &[]).unwrap();
    assert!(near(
        figure(&json_of(&written), "pcfExcludingBiogenicUptake"),
        per_kg
    ));
}

#[test]
fn stored_co2_counts_only_when_proven_and_sold_co2_never() {
    let mut pathway = demo("h_");
    let sold = json_of(&write(&pathway, book(), &facts(), &[]).unwrap());
    assert!(sold["pcf"].get("technologicalCO2Removals").is_none());
    assert_eq!(sold["pcf"]["ccsTechnologicalCO2CaptureIncluded"], false);
    assert!(
        sold["comment"]
            .as_str()
            .unwrap()
            .contains("CO2 sold in place of fossil CO2")
    );
    let capture = pathway
        .stages
        .iter_mut()
        .find(|stage| stage.key == "co2-plant")
        .unwrap();
    let Some(wheelwort::core::documents::input::OneOrMany::One(model)) = &mut capture.inputs[0].model else {
        panic!("one model")
    };
    for name in ["purpose", "replaces", "last_use_on"] {
        model.parameters.remove(name);
    }
    model.parameters.insert("use".to_owned(), "store".into());
    model
        .parameters
        .insert("storage_site".to_owned(), "Invented store under the sea".into());
    model
        .parameters
        .insert("storage_permit".to_owned(), "Invented permit 7".into());
    let without = write(&pathway, book(), &facts(), &[]).unwrap();
    let proven = PactFacts {
        storage_proven: true,
        ..facts()
    };
    let with = json_of(&write(&pathway, book(), &proven, &[]).unwrap());
    assert!(figure(&with, "technologicalCO2Removals") < 0.0);
    let apart = figure(&json_of(&without), "pcfExcludingBiogenicUptake")
        - figure(&with, "pcfExcludingBiogenicUptake");
    assert!(near(apart, -figure(&with, "technologicalCO2Removals")));
}

#[test]
fn denaturant_takes_its_place() {
    let pathway = Pathway::from_value(&by_hand()).unwrap();
    let pure = json_of(&write(&pathway, book(), &facts(), &[]).unwrap());
    let denaturant = Denaturant {
        percent: 2.0,
        carbon_percent: 85.0,
        kg_co2e_per_kg: 0.5,
    };
    let with = PactFacts {
        denaturant: Some(denaturant),
        ..facts()
    };
    let written = write(&pathway, book(), &with, &[]).unwrap();
    let record = json_of(&written);
    assert!(near(figure(&record, "fossilCarbonContent"), 0.017));
    assert!(near(
        figure(&record, "fossilGhgEmissions"),
        0.98 * figure(&pure, "fossilGhgEmissions") + 0.01
    ));
    assert!(near(
        figure(&record, "biogenicCO2Uptake"),
        0.98 * figure(&pure, "biogenicCO2Uptake")
    ));
    assert!(written.findings.is_empty());
}

#[test]
fn what_is_no_cradle_to_gate_chain_is_refused() {
    let refused = |pathway: &Pathway| write(pathway, book(), &facts(), &[]).unwrap_err();
    assert!(matches!(refused(&demo("e_")), PactError::Bought));
    assert!(matches!(refused(&demo("d_")), PactError::LawDefault("e_td")));
    let case = |text: &str| {
        let case: Value = serde_json::from_str(text).unwrap();
        Pathway::from_value(&case["document"]).unwrap()
    };
    let defaults = case(include_str!("../../cases/contract/defaults_only_cane.json"));
    assert!(matches!(refused(&defaults), PactError::LawDefault(_)));
    let partial = case(include_str!("../../cases/contract/not_covered.json"));
    assert!(matches!(refused(&partial), PactError::NotFromCradle(_)));
}

#[test]
fn missing_facts_are_named() {
    let pathway = Pathway::from_value(&by_hand()).unwrap();
    let field = |facts: PactFacts| match write(&pathway, book(), &facts, &[]) {
        Err(PactError::Fact { field, .. }) => field,
        other => panic!("{other:?}"),
    };
    assert_eq!(
        field(PactFacts {
            company_ids: vec!["DE123".to_owned()],
            ..facts()
        }),
        "company_ids"
    );
    assert_eq!(
        field(PactFacts {
            product_ids: Vec::new(),
            ..facts()
        }),
        "product_ids"
    );
    assert_eq!(
        field(PactFacts {
            standards: Vec::new(),
            ..facts()
        }),
        "standards"
    );
    assert_eq!(
        field(PactFacts {
            id: "7".to_owned(),
            ..facts()
        }),
        "id"
    );
    assert_eq!(
        field(PactFacts {
            ratings: Some([0.0, 1.0, 2.0]),
            ..facts()
        }),
        "ratings"
    );
    assert_eq!(
        field(PactFacts {
            left_out: (f64::NAN, None),
            ..facts()
        }),
        "left_out"
    );
}

#[test]
fn the_same_call_gives_the_same_bytes_and_says_what_it_is_not() {
    let pathway = demo("a_");
    let written = write(&pathway, book(), &facts(), &[]).unwrap();
    assert!(written.bytes == write(&pathway, book(), &facts(), &[]).unwrap().bytes);
    let record = json_of(&written);
    let comment = record["comment"].as_str().unwrap();
    assert!(comment.contains("no proof under a fuel law") && comment.contains("no conformance test"));
    assert_eq!(record["specVersion"], "3.0.3");
    assert!(record.get("extensions").is_none());
}
