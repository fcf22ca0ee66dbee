//! The workbook as bytes: the same twice, its figures those of the engine, text never a formula. Formulas are worked out
//! anew by a spreadsheet program in `tests/workbook`.

use calamine::{Data, Range, Reader, Xlsx};
use serde_json::json;
use std::io::{Cursor, Read};
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::domain::Term;
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::exchange::workbook::{About, WorkbookError, write};
use wheelwort::library::book;

fn about(cautions: &[String]) -> About<'_> {
    About {
        made_at: "2027-01-15T08:00:00Z".parse().unwrap(),
        issuer: Some("Tarn Bridge works"),
        statement: Some(("TB-2027-1", "00ff")),
        cautions,
    }
}

fn assessed(pathway: &Pathway) -> Assessment {
    evaluate(pathway, book(), Options::default()).unwrap()
}

fn demo(name: &str) -> Pathway {
    let (_, text) = wheelwort::demo::PATHWAYS
        .iter()
        .find(|(file, _)| file.starts_with(name))
        .unwrap();
    Pathway::from_bytes(text.as_bytes()).unwrap()
}

fn sheet(bytes: &[u8], name: &str) -> Range<Data> {
    let mut book: Xlsx<_> = Xlsx::new(Cursor::new(bytes.to_vec())).unwrap();
    book.worksheet_range(name).unwrap()
}

fn part(bytes: &[u8], path: &str) -> String {
    let mut archive = zip::ZipArchive::new(Cursor::new(bytes)).unwrap();
    let mut text = String::new();
    archive.by_name(path).unwrap().read_to_string(&mut text).unwrap();
    text
}

#[test]
fn the_same_call_gives_the_same_bytes() {
    let pathway = demo("a_");
    let assessment = assessed(&pathway);
    let first = write(&pathway, &assessment, book(), &about(&[])).unwrap();
    let second = write(&pathway, &assessment, book(), &about(&[])).unwrap();
    assert!(first == second);
    assert!(part(&first, "docProps/core.xml").contains("2027-01-15T08:00:00Z"));
}

#[test]
fn the_figures_carried_are_those_of_the_assessment() {
    let pathway = demo("b_");
    let assessment = assessed(&pathway);
    let bytes = write(&pathway, &assessment, book(), &about(&[])).unwrap();
    let (totals, terms) = (sheet(&bytes, "Totals"), sheet(&bytes, "Terms"));
    let carried = |range: &Range<Data>, row: u32, column: u32| match range.get_value((row, column)) {
        Some(Data::Float(x)) => *x,
        other => panic!("{other:?}"),
    };
    assert_eq!(carried(&totals, 4, 1), assessment.net.g_co2e_per_mj);
    assert_eq!(carried(&totals, 5, 1), assessment.comparator_g_co2e_per_mj);
    assert_eq!(carried(&totals, 6, 1), assessment.saving_percent.unwrap());
    for (row, term) in (4..).zip(Term::ALL) {
        assert_eq!(carried(&terms, row, 2), assessment.terms_g_co2e_per_mj.get(term));
    }
    let names = part(&bytes, "xl/workbook.xml");
    for name in ["net_g_co2e_per_mj", "comparator_g_co2e_per_mj", "saving_percent"] {
        assert!(names.contains(&format!("name=\"{name}\"")), "{name}");
    }
}

#[test]
fn demonstration_data_says_so() {
    let pathway = demo("a_");
    let bytes = write(
        &pathway,
        &assessed(&pathway),
        book(),
        &about(&["Made from a draft.".to_owned()]),
    )
    .unwrap();
    let words: Vec<String> = sheet(&bytes, "About")
        .cells()
        .map(|(_, _, cell)| cell.to_string())
        .collect();
    assert!(words.iter().any(|text| text.starts_with("EXAMPLE: invented")));
    assert!(words.iter().any(|text| text == "Made from a draft."));
    assert!(words.iter().any(|text| text.contains("TB-2027-1")));
    assert!(part(&bytes, "xl/worksheets/sheet1.xml").contains("EXAMPLE: invented data"));
}

#[test]
fn words_are_never_a_formula() {
    let nasty = [
        "=1+1",
        "+1",
        "-1",
        "@SUM(A1)",
        "=HYPERLINK(\"http://example.invalid\")",
        "\u{0}\u{7}a\tb",
        "]]>&<\"",
    ];
    for text in nasty {
        let mut pathway = demo("a_");
        text.clone_into(&mut pathway.name);
        pathway.stages[0].name = Some(text.to_owned());
        pathway.stages[0].inputs[0].label = Some(text.to_owned());
        pathway.stages[0].inputs[0].note = Some(text.to_owned());
        pathway.stages[0].inputs[0].evidence = vec![text.to_owned()];
        let assessment = assessed(&pathway);
        let bytes = write(&pathway, &assessment, book(), &about(&[text.to_owned()])).unwrap();
        let inputs = sheet(&bytes, "Inputs");
        assert!(
            matches!(inputs.get_value((5, 0)), Some(Data::String(_))),
            "{text:?}"
        );
        for number in 1..=9 {
            let xml = part(&bytes, &format!("xl/worksheets/sheet{number}.xml"));
            let formulas: Vec<&str> = xml
                .split("<f>")
                .skip(1)
                .filter_map(|rest| rest.split("</f>").next())
                .collect();
            let runs = ["1+1", "+1", "-1", "HYPERLINK(", "SUM(A1)", "@SUM(A1)"];
            assert!(
                !formulas
                    .iter()
                    .any(|formula| runs.contains(formula) || formula.contains("HYPERLINK")),
                "{text:?}"
            );
        }
    }
}

#[test]
fn long_text_is_cut_and_long_lists_stay_whole() {
    let mut pathway = demo("a_");
    let input = pathway.stages[0].inputs[0].clone();
    for number in 0..1_500 {
        let mut more = input.clone();
        more.key = format!("more-{number}");
        pathway.stages[0].inputs.push(more);
    }
    pathway.stages[0].inputs[0].note = Some("ß".repeat(100_000));
    let bytes = write(&pathway, &assessed(&pathway), book(), &about(&[])).unwrap();
    let inputs = sheet(&bytes, "Inputs");
    let rows = inputs
        .rows()
        .filter(|row| row.iter().any(|cell| cell.to_string().starts_with("more-")))
        .count();
    assert_eq!(rows, 1_500);
}

#[test]
fn another_document_or_an_old_figure_is_refused() {
    let pathway = demo("a_");
    let mut assessment = assessed(&pathway);
    let other = write(&demo("b_"), &assessment, book(), &about(&[]));
    assert!(matches!(other, Err(WorkbookError::OtherDocument(..))));
    assessment.net.g_co2e_per_mj += 0.001;
    let old = write(&pathway, &assessment, book(), &about(&[]));
    assert!(matches!(old, Err(WorkbookError::Outdated { .. })));
}

#[test]
fn a_pathway_of_defaults_alone_has_its_rows() {
    let text = include_str!("../../cases/contract/defaults_only_cane.json");
    let case: serde_json::Value = serde_json::from_str(text).unwrap();
    let pathway = Pathway::from_value(&case["document"]).unwrap();
    let bytes = write(&pathway, &assessed(&pathway), book(), &about(&[])).unwrap();
    let inputs = sheet(&bytes, "Inputs");
    let defaults = inputs
        .rows()
        .filter(|row| row.iter().any(|cell| *cell == *"published default"));
    assert_eq!(
        defaults.count(),
        case["document"]["defaults"].as_object().unwrap().len()
    );
    assert_ne!(case["document"]["defaults"], json!({}));
}
