//! A statement as a sheet: its figures are those of the document, in the decimals of a paper.

use crate::statements::made::{Made, STATEMENT, demo};
use wheelwort::core::units::rounding::{show, show_all};
use wheelwort::exchange::pdf::{Beside, Sheet, write};

fn sheet() -> Sheet {
    Sheet::of(&STATEMENT, Beside::default())
}

#[test]
fn the_answer_is_that_of_the_document() {
    let (sheet, figures) = (sheet(), &STATEMENT.figures);
    assert_eq!(sheet.answer.net, show(figures.net_g_co2e_per_mj, 2));
    assert_eq!(sheet.terms.net, sheet.answer.net);
    let saving = show(figures.saving_percent.unwrap(), 2);
    assert_eq!(
        sheet.answer.saving.unwrap(),
        format!("{saving}\u{a0}% below the fossil fuel comparator")
    );
    let met = figures.thresholds.iter().find(|one| one.met).unwrap();
    let verdict = format!("meets {}\u{a0}%", show_all(met.percent));
    assert_eq!(
        (sheet.answer.verdict.as_deref(), sheet.answer.meets),
        (Some(verdict.as_str()), true)
    );
    assert!(sheet.example && sheet.hash.len() == 64 && sheet.signatures.len() == 2);
}

#[test]
fn every_stage_term_and_input_is_on_the_sheet() {
    let (sheet, assessment) = (sheet(), &STATEMENT.assessment.document);
    assert_eq!(sheet.terms.rows.len(), 8);
    assert_eq!(sheet.stages.rows.len(), assessment.stages.len());
    let first = &sheet.stages.rows[sheet.stages.rows.len() - 1][0];
    assert_eq!(first, &assessment.stages[0].name, "wheel first, field last");
    let inputs: usize = assessment.stages.iter().map(|stage| stage.inputs.len()).sum();
    let shares = assessment
        .stages
        .iter()
        .filter(|stage| !stage.workings.is_empty())
        .count();
    let workings: usize = sheet.annex.iter().map(|chapter| chapter.workings.len()).sum();
    assert_eq!(workings, inputs + shares);
    assert!(
        sheet
            .stages
            .rows
            .iter()
            .all(|row| row.len() == sheet.stages.columns.len())
    );
    for table in [&sheet.carbon, &sheet.land, &sheet.factors, &sheet.findings] {
        assert!(table.rows.iter().all(|row| row.len() == table.columns.len()));
    }
}

#[test]
fn a_missed_saving_is_said_and_one_that_cannot_be_decided_is_not() {
    let mut statement = Made::of(demo("a_wheat_chp_rail")).sealed();
    statement.figures.thresholds.truncate(1);
    statement.figures.saving_percent = Some(59.996);
    statement.figures.thresholds[0].percent = 60.0;
    statement.figures.thresholds[0].met = false;
    let missed = Sheet::of(&statement, Beside::default()).answer;
    assert_eq!(
        (missed.verdict.as_deref(), missed.meets),
        (Some("misses 60\u{a0}%"), false)
    );
    assert_eq!(
        missed.saving.as_deref(),
        Some("59.996\u{a0}% below the fossil fuel comparator"),
        "60.00 would look wrong"
    );
    let other = statement.figures.thresholds[0].clone();
    statement.figures.thresholds.push(other);
    let open = Sheet::of(&statement, Beside::default()).answer;
    assert_eq!((open.verdict, open.meets), (None, true));
}

#[test]
fn a_statement_of_the_demo_becomes_a_paper() {
    let paper = write(&sheet()).unwrap();
    assert!(paper.starts_with(b"%PDF-1.7"));
    std::fs::write(
        std::path::Path::new(env!("CARGO_TARGET_TMPDIR")).join("of_statement.pdf"),
        paper,
    )
    .unwrap();
}
