//! The file of a statement: it holds everything its figures come from, and reads back as it was written.

use super::made::{BYTES, Made, STATEMENT, demo, key, public};
use serde_json::Value;
use std::path::Path;
use wheelwort::core::documents::Pathway;
use wheelwort::core::documents::statement::data::{DefaultUsed, FactorUsed, MaterialUsed};
use wheelwort::core::documents::statement::read;
use wheelwort::core::statement::verify::{KeyStanding, verify};
use wheelwort::core::statement::{Refused, seal};
use wheelwort::library;

#[test]
fn a_fresh_file_is_verified() {
    let verdict = verify(&BYTES, &[public()], library::book());
    assert_eq!(verdict.answer, None, "{verdict}");
    assert_eq!(verdict.key, KeyStanding::Known);
    assert!(verdict.example);
    assert_eq!(verdict.notes, ["EXAMPLE: the statement is about invented data."]);
    let alone = verify(&BYTES, &[], library::book());
    assert!(alone.is_verified() && alone.key == KeyStanding::Unvouched);
    assert!(alone.to_string().contains("Compare the key"), "{alone}");
}

#[test]
fn it_reads_back_as_it_was_written() {
    let (statement, _) = read(&BYTES).expect("a statement");
    assert_eq!(statement.facts, STATEMENT.facts);
    assert_eq!(statement.data, STATEMENT.data);
    assert_eq!(statement.bytes().expect("bytes"), *BYTES);
}

#[test]
fn the_same_inputs_give_the_same_bytes() {
    let again = Made::of(demo("a_wheat_chp_rail")).sealed();
    assert_eq!(again.bytes().expect("bytes"), *BYTES);
}

/// The file that other programs check (`tests/reference/statement.py`). `UPDATE_STATEMENT=1` writes it anew.
#[test]
fn the_file_for_other_programs_is_this_one() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases/statements/files/wheat.json");
    if std::env::var_os("UPDATE_STATEMENT").is_some() {
        std::fs::create_dir_all(path.parent().expect("a folder")).expect("made");
        std::fs::write(&path, &*BYTES).expect("written");
    }
    let kept = std::fs::read(&path).expect("the kept file");
    assert!(
        kept == *BYTES,
        "the kept file differs: UPDATE_STATEMENT=1 writes it anew"
    );
}

#[test]
fn every_demo_and_contract_pathway_makes_a_file_that_is_verified() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut seen = 0;
    for folder in ["src/demo/pathways", "tests/cases/contract"] {
        let mut files: Vec<_> = std::fs::read_dir(root.join(folder))
            .expect("a folder")
            .map(|f| f.expect("a file").path())
            .collect();
        files.sort();
        for file in files {
            let value: Value = serde_json::from_slice(&std::fs::read(&file).expect("a file")).expect("json");
            let document = value.get("document").unwrap_or(&value);
            if value.pointer("/expected/refused").is_some() {
                continue;
            }
            let pathway = Pathway::from_value(document).expect("a pathway");
            let statement = Made::of(pathway).sealed();
            let verdict = verify(&statement.bytes().expect("bytes"), &[public()], library::book());
            assert!(verdict.is_verified(), "{}: {verdict}", file.display());
            seen += 1;
        }
    }
    assert!(seen > 20, "{seen}");
}

#[test]
fn every_published_row_reads_back_from_what_a_file_carries() {
    let book = library::book();
    for edition in book.editions.values() {
        for factor in edition.factors.values() {
            let mut again = FactorUsed::of(factor).factor().expect("a factor");
            again.printed.clone_from(&factor.printed);
            assert_eq!(again, *factor);
        }
        for row in edition.pathways.values() {
            assert_eq!(DefaultUsed::of(row).row(), *row);
        }
    }
    for material in book.materials.values() {
        assert_eq!(MaterialUsed::of(material).material(), *material);
    }
}

#[test]
fn it_carries_what_its_figures_rest_on_and_not_the_library() {
    let data = &STATEMENT.data;
    let named: Vec<&str> = data.factors.iter().map(|factor| factor.id.as_str()).collect();
    assert!(named.contains(&"eu-2022-996/fert_n_an"), "{named:?}");
    assert!(data.factors.len() < 120, "{}", data.factors.len());
    assert!(
        !data.constants.iter().any(|constant| constant.table == "land"),
        "no land was converted"
    );
    assert_eq!(data.rule_set.id, "eu-2018-2001");
    assert!(BYTES.len() < 600_000, "{}", BYTES.len());
}

#[test]
fn figures_follow_from_the_assessment() {
    let (figures, assessment) = (&STATEMENT.figures, &STATEMENT.assessment.document);
    let net = assessment.net.g_co2e_per_mj;
    let energy = figures.energy.as_ref().expect("an energy");
    // 3 200 m3 at 21 MJ/L, Directive (EU) 2018/2001 Annex III.
    assert!((energy.energy_mj - 67.2e6).abs() < 1.0, "{energy:?}");
    assert!((figures.derived.consignment_t_co2e.expect("tonnes") - net * 67.2).abs() < 1e-6);
    let sum: f64 = figures.terms.iter().map(|term| term.g_co2e_per_mj).sum();
    assert!((sum - net).abs() < 1e-9);
    assert_eq!(figures.terms[4].value_kind, "zero by the rule");
    assert_eq!(
        figures.iluc_g_per_mj.as_ref().map(|cited| cited.value),
        Some(12.0)
    );
    assert_eq!(
        figures.uncertainty.text,
        "No range was worked out. Judged in words."
    );
    assert_eq!(STATEMENT.keep_until.to_string(), "2037-09-02");
    for stage in &figures.allocation {
        let shares: f64 = stage.products.iter().map(|product| product.share).sum();
        assert!((shares - 1.0).abs() < 1e-9, "{stage:?}");
    }
}

#[test]
fn what_must_not_be_issued_is_not_built() {
    let mut made = Made::of(demo("a_wheat_chp_rail"));
    made.pathway.name.push_str(" changed");
    assert!(matches!(made.built(), Err(Refused::Stale)));
    let mut made = Made::of(demo("a_wheat_chp_rail"));
    made.assessment.net.g_co2e_per_mj -= 1.0;
    assert!(matches!(made.built(), Err(Refused::Stale)));
}

#[test]
fn a_real_pathway_makes_no_example_and_the_other_way_round() {
    let mut pathway = demo("a_wheat_chp_rail");
    assert_eq!(STATEMENT.example.as_deref(), Some("EXAMPLE"));
    assert!(STATEMENT.words.cautions[0].starts_with("EXAMPLE"));
    pathway.example = false;
    let statement = Made::of(pathway).built().expect("a statement");
    assert_eq!(statement.example, None);
    let sealed = seal(statement, &key()).expect("sealed");
    assert!(verify(&sealed.bytes().expect("bytes"), &[], library::book()).is_verified());
}
