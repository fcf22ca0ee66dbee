//! Defaults beside actuals: hand-made cases, the 16 published pathways, and agreement with the engine.

use super::shapes::{Figures, chain, good, stage};
use serde_json::{Value, json};
use std::collections::BTreeMap;
use wheelwort::core::documents::Pathway;
use wheelwort::core::levers::defaults::{
    Answer, Combination, DefaultsTable, PublishedRow, Route, TermRow, table,
};
use wheelwort::library;

const BOILER: &str = "eu-2018-2001/cereal_ng_boiler";
const CHP: &str = "eu-2018-2001/cereal_ng_chp";
const LIGNITE: &str = "eu-2018-2001/cereal_lignite_chp";
const FOREST: &str = "eu-2018-2001/cereal_forest_residue_chp";

fn of(document: &Value) -> DefaultsTable {
    let pathway = Pathway::from_value(document).unwrap();
    table(&pathway, &good(document), library::book()).unwrap_or_else(|p| panic!("{:#?}", p.list()))
}

fn row<'t>(table: &'t DefaultsTable, id: &str) -> &'t PublishedRow {
    table.rows.iter().find(|row| row.id == id).unwrap()
}

fn term<'t>(table: &'t DefaultsTable, name: &str) -> &'t TermRow {
    table.terms.iter().find(|row| row.term == name).unwrap()
}

fn combination<'t>(table: &'t DefaultsTable, id: &str) -> &'t Combination {
    let known: Vec<&str> = table.combinations.iter().map(|c| c.id.as_str()).collect();
    let found = table.combinations.iter().find(|c| c.id == id);
    found.unwrap_or_else(|| panic!("{id} not in {known:#?}"))
}

fn best(table: &DefaultsTable) -> &Combination {
    combination(table, table.best.as_deref().unwrap())
}

/// The invented chain with its gas burnt as a stack row says.
fn burning(factors: Value) -> Value {
    let mut document = chain(&Figures::usual());
    stage(&mut document, "works")["inputs"][0]["factor"] = factors;
    document
}

/// Carbon-stock change of `kg` CO2 per hectare's harvest; negative for a gain.
fn with_land(mut document: Value, kg: f64) -> Value {
    let land = json!({ "key": "land", "kind": "land", "output": { "material": "wheat", "amount": 8, "unit": "t", "moisture_percent": 14.0 },
        "inputs": [ { "key": "stock", "gases": { "co2_land": kg } } ] });
    document["stages"].as_array_mut().unwrap().insert(0, land);
    stage(&mut document, "field")["intakes"] =
        json!([ { "from": "land", "amount": 8, "unit": "t", "moisture_percent": 14.0 } ]);
    document
}

#[test]
fn the_sixteen_pathways_alone_have_their_whole_default() {
    let edition = &library::book().editions["eu-2018-2001"];
    assert_eq!(edition.pathways.len(), 16);
    for published in edition.pathways.values() {
        let id = &published.id;
        let table = of(&json!({
            "format": "wheelwort.pathway/1", "name": "Published values alone", "feedstock": published.feedstock_materials[0],
            "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001",
            "plant_started": "2021-06-01", "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
        let whole = combination(&table, &format!("whole_default:{id}"));
        assert_eq!(whole.net_g_co2e_per_mj, Some(published.default.total));
        assert_eq!(whole.saving_percent, Some(published.default.saving_percent));
        assert!(whole.as_printed);
        assert_eq!(whole.thresholds.len(), 1);
        assert_eq!(whole.thresholds[0].met, published.default.saving_percent >= 65.0);
        // Nothing but the feedstock is known: a row that names its process cannot be confirmed.
        let alone = published.process_heat.is_none();
        let expected = match (alone, published.stillage_digested) {
            (true, _) => Answer::Yes,
            (false, Some(true)) => Answer::No,
            (false, _) => Answer::CannotBeTold,
        };
        assert_eq!(whole.lawful, expected, "{id}: {:?}", whole.reasons);
        assert_eq!(
            table.best.is_some(),
            alone,
            "{id}: no own figure stands beside the default"
        );
        assert!(term(&table, "e_p").actual_g_co2e_per_mj.is_none());
        assert_eq!(
            row(&table, id).typical_total_g_co2e_per_mj,
            published.typical.total
        );
        assert_eq!(table.rows.len(), 16);
    }
}

#[test]
fn a_gas_boiler_has_the_boilers_row_and_no_other() {
    let table = of(&chain(&Figures::usual()));
    assert_eq!(row(&table, BOILER).process_fits, Answer::Yes);
    for id in [CHP, LIGNITE, FOREST] {
        let row = row(&table, id);
        assert_eq!((row.feedstock_fits, row.process_fits), (Answer::Yes, Answer::No));
        assert!(
            row.reasons
                .iter()
                .any(|why| why.contains("Input gas of works") && why.contains("all process heat")),
            "{:?}",
            row.reasons
        );
        assert_eq!(
            combination(&table, &format!("whole_default:{id}")).lawful,
            Answer::No
        );
        assert!(
            table
                .combinations
                .iter()
                .all(|c| !c.defaults.values().any(|used| used == id) || c.route == Route::WholeDefault)
        );
    }
    let other = row(&table, "eu-2018-2001/maize_ng_boiler");
    assert_eq!(other.feedstock_fits, Answer::No);
    assert!(
        table
            .combinations
            .iter()
            .all(|c| c.defaults.values().all(|used| used.contains("/cereal_")))
    );
    // One row of e_p or none, e_ec or not, three ways of e_td; all three defaults are the whole default again.
    let sums = table
        .combinations
        .iter()
        .filter(|c| c.route != Route::WholeDefault)
        .count();
    assert_eq!(sums, 2 * 2 * 3 - 1);
}

#[test]
fn the_terms_stand_beside_each_other() {
    let document = chain(&Figures::usual());
    let (table, assessment) = (of(&document), good(&document));
    let e_p = term(&table, "e_p");
    assert_eq!(e_p.actual_g_co2e_per_mj, Some(assessment.terms_g_co2e_per_mj.e_p));
    // Directive (EU) 2018/2001 Annex V Part D: 29.3 default and 21.0 typical.
    assert_eq!(e_p.published[0].row, BOILER);
    assert_eq!(e_p.published[0].default_g_co2e_per_mj, 29.3);
    assert_eq!(e_p.published[0].typical_g_co2e_per_mj, 21.0);
    assert_eq!(e_p.published.len(), 4);
    assert_eq!(
        e_p.published
            .iter()
            .filter(|v| v.may_serve == Answer::Yes)
            .count(),
        1
    );
    let own = assessment.terms_g_co2e_per_mj.e_p;
    assert!((e_p.difference_g_co2e_per_mj.unwrap() - (own - 29.3)).abs() < 1e-12);
    assert!(
        term(&table, "e_ec")
            .published
            .iter()
            .all(|v| v.default_g_co2e_per_mj == 27.0 && v.may_serve == Answer::Yes)
    );
    assert!(
        term(&table, "e_ec_soil_n2o")
            .published
            .iter()
            .all(|v| v.default_g_co2e_per_mj == 14.1 && v.may_serve == Answer::No)
    );
    let part = term(&table, "e_td_final_fuel");
    assert_eq!(part.part_of.as_deref(), Some("e_td"));
    // The only transport of the chain comes after the works.
    let own = assessment.terms_g_co2e_per_mj.e_td;
    assert!((part.actual_g_co2e_per_mj.unwrap() - own).abs() < 1e-12);
    assert!(
        term(&table, "e_l").published.is_empty() && term(&table, "e_l").actual_g_co2e_per_mj == Some(0.0)
    );
}

#[test]
fn each_combination_is_what_the_engine_gives_for_its_defaults() {
    for document in [
        chain(&Figures::usual()),
        with_land(chain(&Figures::usual()), 900.0),
    ] {
        let table = of(&document);
        let mut compared = 0;
        for combination in table.combinations.iter().filter(|c| !c.as_printed) {
            let mut changed = document.clone();
            let defaults: BTreeMap<&str, &str> = combination
                .defaults
                .iter()
                .map(|(key, row)| (key.name(), row.as_str()))
                .collect();
            changed["defaults"] = json!(defaults);
            let assessment = good(&changed);
            assert_eq!(
                combination.net_g_co2e_per_mj,
                Some(assessment.net.g_co2e_per_mj),
                "{}",
                combination.id
            );
            assert_eq!(combination.saving_percent, assessment.saving_percent);
            assert_eq!(combination.thresholds, assessment.thresholds);
            compared += 1;
        }
        assert!(compared >= 11);
    }
}

#[test]
fn the_best_is_the_least_of_each_term() {
    let document = chain(&Figures::usual());
    let (table, own) = (of(&document), good(&document).terms_g_co2e_per_mj);
    // All of the chain's transport is of the finished fuel, so 1.6 stands beside its own figure and 2.2.
    let least = own.e_ec.min(27.0) + own.e_p.min(29.3) + own.e_td.min(1.6);
    let best = best(&table);
    assert!(
        (best.net_g_co2e_per_mj.unwrap() - least).abs() < 1e-9,
        "{best:#?}"
    );
    assert_eq!(best.lawful, Answer::Yes);
    let saving = best.saving_percent.unwrap();
    for other in table.combinations.iter().filter(|c| c.lawful == Answer::Yes) {
        assert!(other.saving_percent.unwrap() <= saving);
    }
    // A works that burns twice as much takes the default of e_p.
    let mut wasteful = document;
    stage(&mut wasteful, "works")["inputs"][0]["amount"] = json!(9_000);
    let table = of(&wasteful);
    let best = self::best(&table);
    assert!(best.defaults.keys().any(|key| key.name() == "e_p"), "{best:#?}");
    assert_eq!(best.route, Route::Mixed);
    assert_eq!(best.terms_g_co2e_per_mj.unwrap().e_p, 29.3);
}

#[test]
fn land_use_change_closes_the_whole_default_alone() {
    for (kg, lawful, what) in [
        (1_000.0, Answer::No, "above zero"),
        (-1_000.0, Answer::Yes, "below zero"),
    ] {
        let document = with_land(chain(&Figures::usual()), kg);
        let table = of(&document);
        let whole = combination(&table, &format!("whole_default:{BOILER}"));
        assert_eq!(whole.lawful, lawful, "{what}: {:?}", whole.reasons);
        assert_eq!(whole.reasons.iter().any(|why| why.contains("e_l is")), kg > 0.0);
        // (c) stays open, and keeps e_l in its sum.
        let all_three = combination(&table, &format!("mixed:e_ec={BOILER},e_p={BOILER},e_td={BOILER}"));
        assert_eq!(all_three.lawful, Answer::Yes);
        let e_l = term(&table, "e_l").actual_g_co2e_per_mj.unwrap();
        assert_eq!(e_l > 0.0, kg > 0.0);
        assert!((all_three.net_g_co2e_per_mj.unwrap() - (27.0 + 29.3 + 2.2 + e_l)).abs() < 1e-9);
    }
}

#[test]
fn heat_and_power_rows_need_all_heat_from_heat_and_power() {
    let chp = burning(json!(["eu-2022-996/fuel_natural_gas", "eu-2022-996/comb_ng_chp"]));
    let table = of(&chp);
    assert_eq!(
        row(&table, CHP).process_fits,
        Answer::Yes,
        "{:?}",
        row(&table, CHP).reasons
    );
    assert_eq!(row(&table, BOILER).process_fits, Answer::No);
    assert_eq!(row(&table, LIGNITE).process_fits, Answer::No);
    assert_eq!(
        combination(&table, &format!("whole_default:{CHP}")).lawful,
        Answer::Yes
    );
    // A boiler beside it closes the row.
    let mut both = chp;
    let boiler = json!({ "key": "boiler", "amount": 10, "unit": "GJ", "factor": ["eu-2022-996/fuel_natural_gas", "eu-2022-996/comb_ng_boiler"] });
    stage(&mut both, "works")["inputs"]
        .as_array_mut()
        .unwrap()
        .push(boiler);
    let table = of(&both);
    assert_eq!(row(&table, CHP).process_fits, Answer::No);
    assert_eq!(row(&table, BOILER).process_fits, Answer::CannotBeTold);
    assert_eq!(
        combination(&table, &format!("mixed:e_p={BOILER}")).lawful,
        Answer::CannotBeTold
    );
}

#[test]
fn what_cannot_be_told_is_said_and_never_the_best() {
    // Gas alone: a boiler's or a plant's for heat and power.
    let mut document = burning(json!("eu-2022-996/fuel_natural_gas"));
    stage(&mut document, "works")["inputs"][0]["amount"] = json!(9_000);
    let table = of(&document);
    for id in [BOILER, CHP] {
        let row = row(&table, id);
        assert_eq!(row.process_fits, Answer::CannotBeTold);
        assert!(
            row.reasons.iter().any(|why| why.contains("how it is burnt")),
            "{:?}",
            row.reasons
        );
    }
    assert_eq!(row(&table, LIGNITE).process_fits, Answer::No);
    assert_eq!(best(&table).lawful, Answer::Yes);
    assert!(!best(&table).defaults.keys().any(|key| key.name() == "e_p"));
    let confirmed = combination(&table, table.best_if_confirmed.as_deref().unwrap());
    assert_eq!(confirmed.lawful, Answer::CannotBeTold);
    assert!(confirmed.saving_percent > best(&table).saving_percent);
    assert!(confirmed.defaults.values().any(|id| id == CHP));
    // Wood may be forest residue, or not.
    let wood = of(&burning(json!("eu-2022-996/comb_wood_chip_chp")));
    assert_eq!(row(&wood, FOREST).process_fits, Answer::CannotBeTold);
    assert_eq!(row(&wood, CHP).process_fits, Answer::No);
}

#[test]
fn a_chain_that_leaves_growing_out_needs_its_default() {
    let mut document = chain(&Figures::usual());
    document["stages"].as_array_mut().unwrap().remove(0);
    stage(&mut document, "works")["intakes"] = json!([]);
    document["not_covered"] = json!(["cultivation"]);
    let table = of(&document);
    let own = combination(&table, "all_actual");
    assert_eq!(own.lawful, Answer::No);
    assert!(
        own.reasons.iter().any(|why| why.contains("leaves out growing")),
        "{:?}",
        own.reasons
    );
    let with_default = combination(&table, &format!("mixed:e_ec={BOILER}"));
    assert_eq!(with_default.lawful, Answer::Yes, "{:?}", with_default.reasons);
    assert!(best(&table).defaults.keys().any(|key| key.name() == "e_ec"));
    assert_eq!(term(&table, "e_ec").actual_note, "leaves out growing");
}

#[test]
fn defaults_in_the_document_do_not_hide_the_own_figures() {
    let plain = chain(&Figures::usual());
    let mut with_default = plain.clone();
    with_default["defaults"] = json!({ "e_p": BOILER });
    let (plain, with_default) = (of(&plain), of(&with_default));
    assert_eq!(plain.terms, with_default.terms);
    assert_eq!(plain.combinations, with_default.combinations);
}

#[test]
fn a_feedstock_without_rows_has_own_figures_alone() {
    let mut document = chain(&Figures::usual());
    document["feedstock"] = json!("sugar_beet_molasses");
    document["materials"] = json!([ { "id": "sugar_beet_molasses", "name": "Molasses" } ]);
    let table = of(&document);
    assert_eq!(table.combinations.len(), 1);
    assert_eq!(table.best.as_deref(), Some("all_actual"));
    assert!(table.notes.iter().any(|note| note.contains("only own figures")));
    assert!(term(&table, "e_p").published.is_empty());
}

#[test]
fn a_second_feedstock_leaves_the_row_untold() {
    let mut document = chain(&Figures::usual());
    let maize = json!({ "key": "maize", "kind": "cultivation", "output": { "material": "maize_grain_only", "amount": 8, "unit": "t", "moisture_percent": 14.0 } });
    document["stages"].as_array_mut().unwrap().push(maize);
    let intake = json!({ "from": "maize", "amount": 5, "unit": "t", "moisture_percent": 14.0 });
    stage(&mut document, "works")["intakes"]
        .as_array_mut()
        .unwrap()
        .push(intake);
    let table = of(&document);
    assert_eq!(row(&table, BOILER).feedstock_fits, Answer::CannotBeTold);
    assert_eq!(table.best.as_deref(), Some("all_actual"));
}

#[test]
fn residues_start_at_collection() {
    let id = "eu-2018-2001/wheat_straw";
    let table = of(&json!({
        "format": "wheelwort.pathway/1", "name": "Straw", "feedstock": "wheat_straw",
        "period": { "from": "2026-01-01", "to": "2026-12-31" }, "rule_set": "eu-2018-2001",
        "plant_started": "2021-06-01", "defaults": { "e_ec": id, "e_p": id, "e_td": id }, "stages": [] }));
    assert!(
        table
            .notes
            .iter()
            .any(|note| note.contains("from its collection on"))
    );
    // Annex V Part E: collecting straw is 1.8.
    assert_eq!(term(&table, "e_ec").published[0].default_g_co2e_per_mj, 1.8);
    assert_eq!(best(&table).route, Route::WholeDefault);
}

#[test]
fn an_unknown_start_meets_no_threshold() {
    let mut document = chain(&Figures::usual());
    document.as_object_mut().unwrap().remove("plant_started");
    let table = of(&document);
    for combination in table.combinations.iter().filter(|c| c.saving_percent.is_some()) {
        assert_eq!(combination.thresholds.len(), 3, "{}", combination.id);
        assert!(combination.thresholds.iter().all(|t| !t.met));
    }
}

#[test]
fn an_assessment_of_another_pathway_is_refused() {
    let document = chain(&Figures::usual());
    let mut other = document.clone();
    other["name"] = json!("Another");
    let refused = table(
        &Pathway::from_value(&other).unwrap(),
        &good(&document),
        library::book(),
    );
    assert_eq!(refused.unwrap_err().list()[0].pointer, "");
}

#[test]
fn the_document_is_plain_json() {
    let value = serde_json::to_value(of(&chain(&Figures::usual()))).unwrap();
    assert_eq!(value["format"], "wheelwort.defaults/1");
    assert_eq!(value["rows"][0]["process_fits"], "yes");
    let combinations = value["combinations"].as_array().unwrap();
    let whole = format!("whole_default:{BOILER}");
    let whole = combinations.iter().find(|c| c["id"] == whole.as_str()).unwrap();
    assert_eq!(whole["route"], "whole_default");
    assert_eq!(whole["lawful"], "yes");
    assert_eq!(
        whole["defaults"],
        json!({ "e_ec": BOILER, "e_p": BOILER, "e_td": BOILER })
    );
    assert!(value["best"].is_string());
}

fn demo(file: &str) -> Value {
    let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("src/demo/pathways")
        .join(file);
    serde_json::from_slice(&std::fs::read(path).unwrap()).unwrap()
}

#[test]
fn the_demonstration_chains_find_their_rows() {
    // Whole chains with models: gas-fired heat and power for wheat; lignin cake of its own for straw.
    let wheat = of(&demo("a_wheat_chp_rail.json"));
    assert_eq!(
        row(&wheat, CHP).process_fits,
        Answer::Yes,
        "{:?}",
        row(&wheat, CHP).reasons
    );
    assert_eq!(row(&wheat, BOILER).process_fits, Answer::No);
    let soil = term(&wheat, "e_ec_soil_n2o").actual_g_co2e_per_mj.unwrap();
    assert!(soil > 0.0 && soil < term(&wheat, "e_ec").actual_g_co2e_per_mj.unwrap());
    assert_eq!(best(&wheat).lawful, Answer::Yes);
    let straw = of(&demo("d_straw_lignin.json"));
    let id = "eu-2018-2001/wheat_straw";
    assert_eq!(
        row(&straw, id).feedstock_fits,
        Answer::Yes,
        "{:?}",
        row(&straw, id).reasons
    );
    assert_eq!(row(&straw, id).process_fits, Answer::Yes);
    let cane = of(&demo("e_cane_imported.json"));
    assert!(
        cane.combinations
            .iter()
            .filter(|c| !c.defaults.is_empty())
            .all(|c| c.lawful != Answer::Yes)
    );
}
