//! Document -> store -> document is the identity, to the last bit; rows say what their document says.

use super::support::{Bench, pathway, read, wheat};
use serde_json::{Value, json};
use wheelwort::core::documents::{Pathway, canonical};
use wheelwort::pathways;
use wheelwort::store::StoreError;

/// Bits that look random: SplitMix64.
fn bits(state: &mut u64) -> u64 {
    *state = state.wrapping_add(0x9e37_79b9_7f4a_7c15);
    let mut x = *state;
    x = (x ^ (x >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    x = (x ^ (x >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    x ^ (x >> 31)
}

/// Doubles of full precision, of any size a figure of a person can have.
fn doubles(count: usize) -> Vec<f64> {
    let mut state = 11;
    let mut found = Vec::with_capacity(count);
    while found.len() < count {
        let figure = f64::from_bits(bits(&mut state));
        if figure.is_finite() && figure.abs() > 1e-60 && figure.abs() < 1e60 {
            found.push(figure.abs());
        }
    }
    found
}

/// A pathway whose stage has an input for each figure.
fn with_amounts(figures: &[f64]) -> Pathway {
    let mut document = wheat("many");
    let inputs: Vec<Value> = figures
        .iter()
        .enumerate()
        .map(|(index, figure)| {
            json!({ "key": format!("n-{index}"), "amount": figure, "unit": "kg N", "factor": "eu-2022-996/fert_n_an" })
        })
        .collect();
    document["stages"][0]["inputs"] = json!(inputs);
    read(&document)
}

#[tokio::test]
async fn ten_thousand_doubles_keep_every_bit() {
    let bench = Bench::new().await;
    for figures in doubles(10_000).chunks(2_000) {
        let document = with_amounts(figures);
        let bytes = canonical::bytes(&document).expect("json");
        let saved = pathways::create(&bench.app, document.clone(), None)
            .await
            .expect("saved");
        let stored = pathways::read(&bench.app, saved.id).await.expect("there");
        assert_eq!(&*stored.document, bytes.as_slice());
        let back = Pathway::from_bytes(&stored.document).expect("reads");
        assert_eq!(back, document);
        let amounts: Vec<u64> = back.stages[0]
            .inputs
            .iter()
            .map(|input| input.amount.expect("given").to_bits())
            .collect();
        assert_eq!(
            amounts,
            figures.iter().map(|figure| figure.to_bits()).collect::<Vec<_>>()
        );
    }
    // The columns hold the same bits, read as REAL.
    let mut reader = bench.app.store.reader().await.expect("a reader");
    let columns: Vec<f64> =
        sqlx::query_scalar("SELECT amount FROM input WHERE stage_key = 'field' ORDER BY id")
            .fetch_all(&mut *reader)
            .await
            .expect("read");
    let same = columns
        .iter()
        .zip(doubles(10_000))
        .filter(|(a, b)| a.to_bits() == b.to_bits())
        .count();
    assert_eq!((columns.len(), same), (10_000, 10_000));
    drop(reader);
    assert!(
        pathways::rows_differ(&bench.app)
            .await
            .expect("compared")
            .is_empty()
    );
    bench.app.close().await;
}

#[tokio::test]
async fn the_assessment_survives_with_every_bit() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    let made = wheelwort::core::evaluate::evaluate(
        &pathway("first"),
        bench.app.library,
        wheelwort::core::evaluate::Options::default(),
    )
    .expect("evaluates");
    let bench = bench.restarted().await;
    let kept = pathways::assessment(&bench.app, saved.id, None, None)
        .await
        .expect("kept");
    assert_eq!(&*kept.bytes, canonical::bytes(&made).expect("json").as_slice());
    assert_eq!(kept.hash, canonical::hash(&kept.bytes));
    assert_eq!(
        (&kept.pathway_hash, &made.pathway_hash),
        (&saved.hash, &saved.hash)
    );
    let line = &pathways::list(&bench.app, &pathways::Question::default())
        .await
        .expect("listed")
        .lines[0];
    let summary = line.assessment.as_ref().expect("kept");
    assert_eq!(summary, &saved.assessment);
    assert_eq!(
        summary.net_g_co2e_per_mj.to_bits(),
        made.net.g_co2e_per_mj.to_bits()
    );
    bench.app.close().await;
}

/// Rows are rebuilt from documents and compared; a row that was tampered with is found.
#[tokio::test]
async fn rows_are_what_their_document_says() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    let other = pathways::create(&bench.app, pathway("second"), None)
        .await
        .expect("saved");
    assert!(
        pathways::rows_differ(&bench.app)
            .await
            .expect("compared")
            .is_empty()
    );
    for (sql, rows) in [
        ("SELECT count(*) FROM stage", 8),
        ("SELECT count(*) FROM intake", 6),
        ("SELECT count(*) FROM input", 14),
        ("SELECT count(*) FROM co_product", 2),
        ("SELECT count(*) FROM factor_use", 12),
    ] {
        assert_eq!(bench.number(sql).await, rows, "{sql}");
    }
    for (change, back, who) in [
        (
            "UPDATE input SET amount = amount + 1 WHERE key = 'n' AND revision_id = 1",
            "UPDATE input SET amount = amount - 1 WHERE key = 'n' AND revision_id = 1",
            saved.id,
        ),
        (
            "UPDATE factor_use SET factor = 'a/b' WHERE input_key = 'haul' AND revision_id = 2",
            "UPDATE factor_use SET factor = 'eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel' \
             WHERE input_key = 'haul' AND revision_id = 2",
            other.id,
        ),
    ] {
        bench.force(change).await.expect("changed");
        assert_eq!(pathways::rows_differ(&bench.app).await.expect("compared"), [who]);
        bench.force(back).await.expect("changed back");
    }
    assert!(
        pathways::rows_differ(&bench.app)
            .await
            .expect("compared")
            .is_empty()
    );
    bench.app.close().await;
}

#[tokio::test]
async fn a_factor_is_found_wherever_it_is_named() {
    let bench = Bench::new().await;
    let mut document = wheat("first");
    document["defaults"] = json!({ "e_td_final_fuel": "eu-2018-2001/cereal_ng_chp" });
    let saved = pathways::create(&bench.app, read(&document), None)
        .await
        .expect("saved");
    let uses = |factor: &'static str| {
        let app = bench.app.clone();
        async move {
            let found = pathways::uses_of_factor(&app, factor).await.expect("found");
            found
                .into_iter()
                .map(|found| (found.pointer, found.stage, found.input))
                .collect::<Vec<_>>()
        }
    };
    let at = |pointer: &str, stage: &str, input: &str| {
        vec![(pointer.to_owned(), Some(stage.to_owned()), Some(input.to_owned()))]
    };
    let mach = uses("eu-2022-996/mach_diesel_agriculture").await;
    assert_eq!(mach, at("/stages/0/inputs/1/factor/1", "field", "diesel"));
    let truck = uses("eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel").await;
    assert_eq!(truck, at("/stages/2/inputs/0/model/vehicle", "truck", "haul"));
    let defaults = uses("eu-2018-2001/cereal_ng_chp").await;
    assert_eq!(defaults, [("/defaults/e_td_final_fuel".to_owned(), None, None)]);
    assert_eq!(uses("eu-2022-996/nothing").await, []);
    // Only current revisions count.
    document["stages"][0]["inputs"][1]["factor"] = json!("eu-2022-996/fuel_diesel");
    let expected = pathways::Expected::Number(1);
    pathways::replace(&bench.app, saved.id, read(&document), expected, None)
        .await
        .expect("saved");
    assert_eq!(uses("eu-2022-996/mach_diesel_agriculture").await, []);
    bench.app.close().await;
}

/// Factors inside models, as deep as they lie, and what a co-product displaces; units and sources are no factors.
#[test]
fn factors_inside_models_are_found() {
    let mut document = wheat("first");
    document["stages"][1]["inputs"] = json!([
        { "key": "heat", "model": [ { "kind": "boiler", "note": "see a/b",
            "heat": { "value": 5, "unit": "GJ/t" }, "citation": "lab/7",
            "fuels": [ { "factor": "eu-2022-996/fuel_hard_coal", "stack": "eu-2022-996/comb_hard_coal_chp" },
                       { "factor": { "gases": { "n2o": 1 }, "per": "MJ/kg", "citation": "x/y" } } ] } ] } ]);
    document["stages"][1]["co_products"][0]["displaces"] = json!({ "amount": 1, "unit": "kg", "factor": ["ed/row.1", { "gases": { "n2o": 1 }, "per": "kg", "citation": "c" }] });
    let rows = pathways::rows::Rows::of(&read(&document));
    let found: Vec<_> = rows
        .uses
        .iter()
        .filter(|found| found.stage_key.as_deref() == Some("works"))
        .map(|found| {
            (
                found.pointer.as_str(),
                found.factor.as_str(),
                found.co_product_key.as_deref(),
            )
        })
        .collect();
    assert_eq!(
        found,
        [
            (
                "/stages/1/inputs/0/model/0/fuels/0/factor",
                "eu-2022-996/fuel_hard_coal",
                None
            ),
            (
                "/stages/1/inputs/0/model/0/fuels/0/stack",
                "eu-2022-996/comb_hard_coal_chp",
                None
            ),
            (
                "/stages/1/co_products/0/displaces/factor/0",
                "ed/row.1",
                Some("grains")
            ),
        ]
    );
    let heat = rows
        .inputs
        .iter()
        .find(|input| input.key == "heat")
        .expect("there");
    assert_eq!(
        (heat.way.as_str(), heat.model.as_deref()),
        ("model", Some("boiler"))
    );
    assert_eq!(
        heat.factors,
        "eu-2022-996/fuel_hard_coal eu-2022-996/comb_hard_coal_chp"
    );
}

#[tokio::test]
async fn a_damaged_record_is_named() {
    let bench = Bench::new().await;
    let saved = pathways::create(&bench.app, pathway("first"), None)
        .await
        .expect("saved");
    bench
        .force("UPDATE assessment SET thresholds = 'rust'")
        .await
        .expect("damaged");
    let bench = bench.restarted().await;
    let error = pathways::revisions(&bench.app, saved.id)
        .await
        .expect_err("damaged");
    let pathways::PathwayError::Store(StoreError::Inconsistent { table, column, row }) = error else {
        panic!("{error}")
    };
    assert_eq!((table, column, row), ("assessment", "thresholds", 1));
    bench.app.close().await;
}

/// The contract documents, one for each feature: stored and read back they are the same; what the engine refuses leaves
/// no trace.
#[tokio::test]
async fn contract_documents_come_back_as_they_went() {
    let bench = Bench::new().await;
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases/contract");
    let (mut stored, mut refused) = (0, 0);
    for entry in std::fs::read_dir(folder).expect("a folder") {
        let path = entry.expect("a file").path();
        if path.extension().is_none_or(|ending| ending != "json") {
            continue;
        }
        let case: Value = serde_json::from_slice(&std::fs::read(&path).expect("read")).expect("json");
        let saved = match Pathway::from_value(&case["document"]) {
            Ok(document) => pathways::create(&bench.app, document, None).await,
            Err(problems) => Err(problems.into()),
        };
        match saved {
            Ok(saved) => {
                stored += 1;
                assert!(case["expected"].get("refused").is_none(), "{path:?}");
                let back = pathways::read(&bench.app, saved.id).await.expect("there");
                let sent = canonical::bytes(&read(&case["document"])).expect("json");
                let again = Pathway::from_bytes(&back.document).expect("reads");
                assert_eq!(&*back.document, sent.as_slice(), "{path:?}");
                assert_eq!(canonical::bytes(&again).expect("json"), sent, "{path:?}");
                assert_eq!(canonical::hash(&back.document), saved.hash);
            }
            Err(pathways::PathwayError::Problems(_)) => refused += 1,
            Err(other) => panic!("{path:?}: {other}"),
        }
    }
    assert!(stored > 0 && refused > 0, "{stored} stored, {refused} refused");
    assert_eq!(bench.number("SELECT count(*) FROM pathway").await, stored);
    assert!(
        pathways::rows_differ(&bench.app)
            .await
            .expect("compared")
            .is_empty()
    );
    bench.app.close().await;
}
