//! Checks on whole documents: the demonstration as an auditor reads it, and small slips that each check must see.

use super::shapes::{Figures, chain};
use serde_json::{Value, json};
use std::path::Path;
use wheelwort::core::checks::reasons::{Because, Reason, apply, wanting};
use wheelwort::core::checks::recalculated::{Recalculated, recalculation};
use wheelwort::core::checks::settings::Settings;
use wheelwort::core::documents::assessment::{Finding, Severity};
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::evaluate::{Options, evaluate};

fn demo(letter: &str) -> Value {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("src/demo/pathways");
    let files = std::fs::read_dir(folder).expect("the demonstration");
    let file = files
        .map(|entry| entry.unwrap().path())
        .find(|path| {
            path.file_name()
                .unwrap()
                .to_string_lossy()
                .starts_with(&format!("{letter}_"))
        })
        .expect("a file of that letter");
    serde_json::from_slice(&std::fs::read(file).unwrap()).unwrap()
}

fn assessed(document: &Value) -> Assessment {
    with(document, Settings::standard())
}

fn with(document: &Value, settings: &Settings) -> Assessment {
    let pathway = Pathway::from_value(document).unwrap_or_else(|p| panic!("{:#?}", p.list()));
    let options = Options {
        settings,
        ..Options::default()
    };
    evaluate(&pathway, wheelwort::library::book(), options).unwrap_or_else(|p| panic!("{:#?}", p.list()))
}

fn found<'a>(assessment: &'a Assessment, id: &str) -> Vec<&'a Finding> {
    assessment.findings.iter().filter(|f| f.id == id).collect()
}

/// The input of a stage.
fn input<'d>(document: &'d mut Value, stage: &str, key: &str) -> &'d mut Value {
    let stages = document["stages"].as_array_mut().unwrap();
    let stage = stages.iter_mut().find(|s| s["key"] == stage).expect("stage");
    let inputs = stage["inputs"].as_array_mut().unwrap();
    inputs.iter_mut().find(|i| i["key"] == key).expect("input")
}

#[test]
fn the_demonstration_raises_what_an_auditor_would_ask() {
    let expected: [(&str, &[&str], &[&str]); 8] = [
        ("a", &[], &["E-07", "K-02"]),
        ("b", &[], &["E-07", "E-07", "K-02"]),
        ("c", &[], &["K-02"]),
        ("d", &[], &["C-16", "K-02"]),
        ("e", &[], &["K-02", "K-02"]),
        ("f", &["A-04", "E-01"], &["C-11", "C-18", "E-07", "K-01", "K-02"]),
        ("g", &["A-04"], &["C-11", "E-07", "K-02"]),
        ("h", &[], &["C-11", "E-07", "K-02"]),
    ];
    for (letter, block, warn) in expected {
        let assessment = assessed(&demo(letter));
        let ids = |severity| {
            let of = assessment.findings.iter().filter(|f| f.severity == severity);
            of.map(|f| f.id.as_str()).collect::<Vec<_>>()
        };
        assert_eq!(ids(Severity::Block), block, "{letter} blocks");
        assert_eq!(ids(Severity::Warn), warn, "{letter} warns");
    }
}

#[test]
fn every_finding_is_in_the_registry_with_a_severity_it_may_have() {
    for letter in ["a", "b", "c", "d", "e", "f", "g", "h"] {
        for finding in assessed(&demo(letter)).findings {
            let check = wheelwort::core::checks::registry::find(&finding.id).expect("a known check");
            assert!(finding.severity >= check.severity, "{}", finding.id);
        }
    }
}

#[test]
fn dry_matter_that_goes_nowhere_is_asked_for() {
    let usual = Figures::usual();
    assert!(found(&assessed(&chain(&usual)), "C-04").is_empty());
    let lost = chain(&Figures {
        grains_t: 50.0,
        ..usual.clone()
    });
    let assessment = assessed(&lost);
    assert_eq!(found(&assessment, "C-04")[0].stage, "works");
    let made = chain(&Figures {
        grains_t: 600.0,
        ..usual
    });
    assert!(
        found(&assessed(&made), "C-04")[0]
            .message
            .contains("more dry matter")
    );
    let wide = Settings {
        dry_matter_percent: 40.0,
        ..Settings::default()
    };
    assert!(found(&with(&lost, &wide), "C-04").is_empty());
}

#[test]
fn a_works_makes_no_energy() {
    let usual = Figures::usual();
    assert!(found(&assessed(&chain(&usual)), "C-06").is_empty());
    let slip = Figures {
        ethanol_t: 3_000.0,
        ..usual
    };
    assert_eq!(
        found(&assessed(&chain(&slip)), "C-06")[0].severity,
        Severity::Block
    );
}

#[test]
fn a_works_makes_no_more_than_it_can() {
    let mut document = chain(&Figures::usual());
    for (capacity, unit, expected) in [
        (400.0, "m3", 0),
        (300.0, "m3", 1),
        (310.0, "t", 0),
        (5.0, "TJ", 1),
    ] {
        document["plant_capacity_per_year"] = json!({ "value": capacity, "unit": unit });
        assert_eq!(
            found(&assessed(&document), "C-07").len(),
            expected,
            "{capacity} {unit}"
        );
    }
    for (value, unit, pointer) in [(5.0, "ha", "unit"), (0.0, "m3", "value")] {
        document["plant_capacity_per_year"] = json!({ "value": value, "unit": unit });
        let problems = Pathway::from_value(&document).unwrap_err();
        assert_eq!(
            problems.list()[0].pointer,
            format!("/plant_capacity_per_year/{pointer}")
        );
    }
}

#[test]
fn yields_and_nitrogen_per_hectare_are_doubted_once() {
    let mut document = demo("a");
    input(&mut document, "field", "n2o")["model"]["area_ha"] = json!(5000);
    let assessment = assessed(&document);
    assert_eq!(found(&assessment, "C-09").len(), 1);
    assert_eq!(found(&assessment, "C-17").len(), 1);
    assert!(found(&assessment, "K-01").is_empty());
}

#[test]
fn a_field_delivers_no_more_than_it_grew() {
    let mut document = demo("a");
    input(&mut document, "field", "n2o")["model"]["yield_t"] = json!(60076.2);
    assert_eq!(found(&assessed(&document), "C-10")[0].field, "inputs.n2o.yield_t");
    // A crop that is delivered without a moisture is compared wet.
    let mut document = demo("a");
    let output = document["stages"][0]["output"].as_object_mut().unwrap();
    output.remove("moisture_percent");
    assert!(found(&assessed(&document), "C-10").is_empty());
}

#[test]
fn steam_in_the_wrong_unit_is_seen() {
    let mut document = demo("b");
    input(&mut document, "works", "chp")["model"]["heat_made"] = json!({ "value": 40_407.0, "unit": "GJ" });
    assert_eq!(found(&assessed(&document), "C-12")[0].stage, "works");
}

#[test]
fn own_factors_want_a_note_and_the_right_unit() {
    let mut document = demo("a");
    let own = input(&mut document, "field", "n-an-supplier");
    own.as_object_mut().unwrap().remove("note");
    let assessment = assessed(&document);
    let fields: Vec<&str> = found(&assessment, "E-07")
        .iter()
        .map(|f| f.field.as_str())
        .collect();
    assert_eq!(fields, ["inputs.n-an-supplier", "inputs.n2o.method"]);
    assert!(found(&assessment, "E-08").is_empty());
    input(&mut document, "field", "n-an-supplier")["factor"]["gases"]["co2_fossil"] = json!(1620);
    assert_eq!(
        found(&assessed(&document), "E-08")[0].field,
        "inputs.n-an-supplier"
    );
}

#[test]
fn power_of_the_grid_with_a_value_of_its_own_is_seen() {
    let mut document = demo("a");
    let own = |citation: &str| json!({ "gases": { "co2e_unsplit": 0.02 }, "per": "kWh power", "citation": citation });
    input(&mut document, "works", "grid")["factor"] = own("letter of the wind park");
    let assessment = assessed(&document);
    assert_eq!(found(&assessment, "E-09")[0].field, "inputs.grid");
    assert!(
        found(&assessment, "E-07")
            .iter()
            .all(|f| f.field != "inputs.grid")
    );
    input(&mut document, "works", "grid")["factor"] = own("grid average of the region 2026");
    assert!(found(&assessed(&document), "E-09").is_empty());
}

#[test]
fn the_higher_heating_value_is_seen() {
    let mut document = demo("e");
    document["stages"][0]["stated"]["lhv"]["value"] = json!(29.7);
    assert_eq!(found(&assessed(&document), "A-11")[0].field, "stated.lhv");
    let mut document = demo("a");
    let grains = &mut document["stages"][2]["co_products"][0];
    grains["lhv"] = json!({ "value": 16.05, "unit": "MJ/kg" });
    assert!(found(&assessed(&document), "A-11").is_empty());
    // The library's higher value of wheat grains, 19.51 MJ/kg dry, at 10 % water.
    document["stages"][2]["co_products"][0]["lhv"]["value"] = json!(17.559);
    assert_eq!(
        found(&assessed(&document), "A-11")[0].field,
        "co_products.grains.lhv"
    );
}

#[test]
fn soils_follow_one_version_of_the_guidelines() {
    let mut document = demo("b");
    assert!(found(&assessed(&document), "E-05").is_empty());
    input(&mut document, "field-river", "n2o")["model"]["method"] = json!("ipcc-2006");
    assert_eq!(found(&assessed(&document), "E-05").len(), 1);
}

#[test]
fn one_tonne_is_not_sold_and_stored() {
    let mut document = demo("h");
    assert!(found(&assessed(&document), "G-03").is_empty());
    let stages = document["stages"].as_array_mut().unwrap();
    let at = stages.iter().position(|s| s["key"] == "co2-plant").unwrap();
    let mut store = stages[at].clone();
    store["key"] = json!("store");
    store["intakes"][0]["from"] = json!("co2-plant");
    store["inputs"] = json!([ { "key": "credit", "origin": "measured", "evidence": ["EV-2026-251"],
        "model": { "kind": "capture", "use": "store", "co2_captured": { "value": 26976, "unit": "t" },
                   "storage_site": "Site 01", "storage_permit": "P-1" } } ]);
    stages[at + 1]["intakes"][0]["from"] = json!("store");
    stages.insert(at + 1, store);
    let assessment = assessed(&document);
    assert_eq!(found(&assessment, "G-03")[0].stage, "store");
}

#[test]
fn a_published_default_far_from_the_figure_is_compared_with_its_own_row() {
    // A default is above its typical value by construction, and no reason for a question.
    let mut document = chain(&Figures::usual());
    document["stages"] = json!([]);
    document["defaults"] = json!({ "e_ec": "eu-2018-2001/cereal_ng_chp", "e_p": "eu-2018-2001/cereal_ng_chp",
                                   "e_td": "eu-2018-2001/cereal_ng_chp" });
    assert!(found(&assessed(&document), "C-11").is_empty());
    let strict = Settings {
        typical_high: 1.01,
        ..Settings::default()
    };
    assert_eq!(
        found(&with(&document, &strict), "C-11")[0].severity,
        Severity::Warn
    );
}

#[test]
fn a_recalculation_names_the_first_figure_that_differs() {
    let issued = assessed(&demo("a"));
    let net = issued.net.g_co2e_per_mj;
    let inputs = |change: f64| {
        let rows = issued
            .stages
            .iter()
            .flat_map(|s| s.inputs.iter().map(move |i| (s, i)));
        rows.map(|(stage, input)| {
            let more = if input.key == "diesel" { change } else { 0.0 };
            (format!("{}/{}", stage.key, input.key), input.g_co2e_per_mj + more)
        })
        .collect()
    };
    let settings = Settings::standard();
    let theirs = |change| Recalculated {
        net_g_per_mj: net + change,
        inputs_g_per_mj: inputs(change),
    };
    assert_eq!(recalculation("S-1", &issued, &theirs(0.0049), settings), None);
    let found = recalculation("S-1", &issued, &theirs(0.02), settings).unwrap();
    assert_eq!(
        (found.id.as_str(), found.stage.as_str(), found.field.as_str()),
        ("A-14", "field", "inputs.diesel")
    );
    let bare = Recalculated {
        net_g_per_mj: net - 1.0,
        ..Recalculated::default()
    };
    assert_eq!(
        recalculation("S-1", &issued, &bare, settings).unwrap().field,
        "net"
    );
}

#[test]
fn reasons_stay_with_their_warnings() {
    let reason = |id: &str, stage: &str, field: &str| Reason {
        id: id.to_owned(),
        stage: stage.to_owned(),
        field: field.to_owned(),
        text: "The guidelines of 2006 are those of the growers' contracts.".to_owned(),
        who: None,
        when: None,
    };
    let reasons = [
        reason("E-07", "field", "inputs.n2o.method"),
        reason("C-12", "works", "inputs"),
    ];
    let applied = apply(assessed(&demo("a")).findings, &reasons);
    let open: Vec<&str> = wanting(&applied.findings).map(|f| f.id.as_str()).collect();
    assert_eq!(open, ["K-02"]);
    assert_eq!(applied.stale.len(), 1);
    assert_eq!(applied.stale[0].because, Because::FindingGone);
}
