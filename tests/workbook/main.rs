//! Workbooks recalculated by a spreadsheet program: every formula comes to the figure of the engine, and a changed amount
//! moves the net as the engine says. Needs LibreOffice (Debian: libreoffice-calc-nogui); `tests/all workbook` installs it.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    clippy::string_slice,
    reason = "a test fails by panicking"
)]

mod changes;
mod file;
mod office;

use calamine::Data;
use std::collections::BTreeMap;
use std::path::Path;
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::exchange::workbook::{About, write};
use wheelwort::library::book;

const TOLERANCE: f64 = 1e-9;

fn near(found: f64, wanted: f64) -> bool {
    (found - wanted).abs() <= TOLERANCE * wanted.abs().max(1e-6)
}

fn assessed(pathway: &Pathway) -> Option<Assessment> {
    evaluate(pathway, book(), Options::default()).ok()
}

fn workbook(pathway: &Pathway, assessment: &Assessment) -> Vec<u8> {
    let about = About {
        made_at: "2027-01-15T08:00:00Z".parse().unwrap(),
        issuer: Some("Tarn Bridge works"),
        statement: None,
        cautions: &[],
    };
    write(pathway, assessment, book(), &about).unwrap()
}

/// Every document that evaluates: the contract cases, the demonstration, and forms that these lack.
fn documents() -> BTreeMap<String, Pathway> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases/contract");
    let mut all = BTreeMap::new();
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        let case: serde_json::Value = serde_json::from_slice(&std::fs::read(&path).unwrap()).unwrap();
        if let Ok(pathway) = Pathway::from_value(&case["document"]) {
            all.insert(path.file_stem().unwrap().to_str().unwrap().to_owned(), pathway);
        }
    }
    for (name, text) in wheelwort::demo::PATHWAYS {
        let pathway = Pathway::from_bytes(text.as_bytes()).unwrap();
        all.insert(name.trim_end_matches(".json").to_owned(), pathway);
    }
    all.extend(changes::other_forms(&all));
    all.retain(|_, pathway| assessed(pathway).is_some());
    assert!(all.len() >= 28, "only {} documents evaluate", all.len());
    all
}

#[test]
fn every_formula_comes_to_the_figure_of_the_engine() {
    let documents = documents();
    let mut honest = BTreeMap::new();
    let mut spoiled = BTreeMap::new();
    for (name, pathway) in &documents {
        let bytes = workbook(pathway, &assessed(pathway).unwrap());
        spoiled.insert(name.clone(), file::spoiled(&bytes));
        honest.insert(name.clone(), bytes);
    }
    let saved = office::recalculate(&spoiled, "workbook-same");
    let mut wrong = Vec::new();
    let mut compared = 0;
    for (name, path) in &saved {
        let recalculated = std::fs::read(path).unwrap();
        for sheet in file::SHEETS {
            let (ours, theirs) = (
                file::sheet(&honest[name], sheet),
                file::sheet(&recalculated, sheet),
            );
            for (row, column, value) in ours.cells() {
                let (Ok(row), Ok(column)) = (u32::try_from(row), u32::try_from(column)) else {
                    continue;
                };
                let at = ours.start().map_or((0, 0), |(r, c)| (row + r, column + c));
                let other = theirs.get_value(at).cloned().unwrap_or(Data::Empty);
                let same = match (value, &other) {
                    // What a crop takes up it gives back: figures of some hundred grams that add to nothing.
                    (Data::Float(ours), Data::Float(theirs)) if sheet == "Carbon" => {
                        (theirs - ours).abs() < 1e-10
                    }
                    (Data::Float(ours), Data::Float(theirs)) => near(*theirs, *ours),
                    (Data::String(ours), Data::String(theirs)) => {
                        ours.replace('\r', "") == theirs.replace('\r', "")
                    }
                    (Data::String(ours), Data::Empty) => ours.is_empty(),
                    (ours, theirs) => ours == theirs,
                };
                compared += 1;
                if !same {
                    wrong.push(format!("{name} {sheet} {at:?}: {value:?} here, {other:?} there"));
                }
            }
        }
        let net = file::figure(&file::sheet(&recalculated, "Totals"), 4, 1).unwrap();
        let wanted = assessed(&documents[name]).unwrap().net.g_co2e_per_mj;
        if !near(net, wanted) {
            wrong.push(format!("{name}: net {net} instead of {wanted}"));
        }
    }
    let shown: Vec<&String> = wrong.iter().take(40).collect();
    assert!(
        wrong.is_empty(),
        "{} of {compared} cells differ:\n{shown:#?}",
        wrong.len()
    );
    assert!(compared > 10_000, "only {compared} cells");
}

#[test]
fn a_changed_amount_moves_the_net_as_the_engine_says() {
    let mut books = BTreeMap::new();
    let mut wanted = BTreeMap::new();
    let mut kinds: BTreeMap<&str, (usize, usize)> = BTreeMap::new();
    for (number, (name, pathway)) in documents().into_iter().enumerate() {
        let other = name.starts_with("mass_")
            || name.starts_with("value_")
            || name.starts_with("credit_")
            || name.starts_with("ar6_");
        if other && !name.ends_with("contract_example") && !name.ends_with("b_maize_truck_and_barge") {
            continue;
        }
        let before = assessed(&pathway).unwrap();
        let bytes = workbook(&pathway, &before);
        for change in changes::changes(&pathway, &bytes, number % 2 == 1) {
            let Some(after) = assessed(&change.pathway) else {
                continue;
            };
            let key = format!("{name}--{}", change.what);
            let net = after.net.g_co2e_per_mj;
            let seen = kinds.entry(change.kind).or_default();
            seen.0 += 1;
            seen.1 += usize::from(!near(net, before.net.g_co2e_per_mj));
            books.insert(key.clone(), file::with(&bytes, change.sheet, &change.cells));
            wanted.insert(key, net);
        }
    }
    let saved = office::recalculate(&books, "workbook-changed");
    let mut wrong = Vec::new();
    for (name, path) in &saved {
        let totals = file::sheet(&std::fs::read(path).unwrap(), "Totals");
        let net = file::figure(&totals, 4, 1).unwrap_or(f64::NAN);
        if !near(net, wanted[name]) {
            wrong.push(format!("{name}: {net} instead of {}", wanted[name]));
        }
    }
    assert!(
        wrong.is_empty(),
        "{} of {} differ:\n{wrong:#?}",
        wrong.len(),
        saved.len()
    );
    for kind in ["input", "intake", "co-product", "output"] {
        let (tried, moved) = kinds.get(kind).copied().unwrap_or_default();
        println!("{kind}: {tried} changed, {moved} of them move the net");
        assert!(moved >= 10, "{kind}: only {moved} of {tried} move the net");
    }
}
