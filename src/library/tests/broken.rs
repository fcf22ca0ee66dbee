//! Broken data are noticed, each breakage by its own words.

use crate::core::domain::factor::Use;
use crate::core::domain::{Book, Citation, Status};
use crate::library::reading::{Reading, weakest};
use crate::library::{book, checks};
use rstest::rstest;

const COLUMNS: [&str; 4] = ["id", "value", "source", "status"];

#[rstest]
#[case("id,value,source,status\na,1,Table 1,read\na,2,Table 1,read\n", "used twice")]
#[case("id,value,source,status\n,1,Table 1,read\n", "is blank")]
#[case("id,value,source,status\na,,Table 1,read\n", "value is blank")]
#[case("id,value,source,status\na,x,Table 1,read\n", "no figure")]
#[case("id,value,source,status\na,inf,Table 1,read\n", "no figure")]
#[case("id,value,source,status\na,1,,read\n", "no source")]
#[case("id,value,source,status\na,1,Table 1,guessed\n", "no status")]
#[case("id,value,source,status\na,1,Table 1,own\n", "no status")]
#[case("id,value,source\na,1,Table 1\n", "no column \"status\"")]
#[case("id,value,source,status\na,1,Table 1\n", "found record with 3 fields")]
fn tables(#[case] text: &str, #[case] says: &str) {
    let mut reading = Reading::default();
    for row in reading.rows("table", text, &COLUMNS) {
        reading.cited(&row, "value", "figure");
    }
    let found = reading.problems.join("\n");
    assert!(found.contains(says), "{found}");
}

#[test]
fn a_good_table_has_no_problem() {
    let mut reading = Reading::default();
    let text = "id,value,source,status\na,0.5,Table 1,read\nb,2,Table 2,memory\nc,3,a + b,computed\n";
    let rows = reading.rows("table", text, &COLUMNS);
    let figures: Vec<f64> = rows
        .iter()
        .map(|row| reading.cited(row, "value", row.text("id")).value)
        .collect();
    assert_eq!(figures, [0.5, 2.0, 3.0]);
    assert!(reading.problems.is_empty());
    assert_eq!(reading.memory, ["b = 2 (Table 2)"]);
    reading.unit("row", "kg of something");
    assert_eq!(reading.problems.len(), 1);
}

#[test]
fn the_weakest_status_shows() {
    assert_eq!(weakest([Status::Read, Status::Calculated]), Status::Calculated);
    assert_eq!(
        weakest([Status::Read, Status::Memory, Status::Calculated]),
        Status::Memory
    );
    assert_eq!(weakest([Status::Read]), Status::Read);
}

/// What the start-up checks say about the book after a change.
fn after(change: impl FnOnce(&mut Book)) -> String {
    let mut book = book().clone();
    change(&mut book);
    let mut reading = Reading::default();
    checks::run(&mut reading, &book);
    reading.problems.join("\n")
}

fn without(map: &mut std::collections::BTreeMap<String, impl Sized>, key: &str) {
    assert!(map.remove(key).is_some());
}

#[test]
fn the_book_passes_its_checks() {
    assert_eq!(after(|_| ()), "");
}

#[test]
fn broken_sums_and_savings() {
    let cane = |change: fn(&mut crate::core::domain::PathwayDefault)| {
        after(|book| {
            let edition = book.editions.get_mut("eu-2018-2001").expect("the edition");
            change(edition.pathways.get_mut("cane").expect("the pathway"));
        })
    };
    assert!(cane(|row| row.default.e_p += 0.1).contains("add up"));
    assert!(cane(|row| row.typical.saving_percent += 1.0).contains("printed saving"));
    assert!(cane(|row| row.default.e_td_final_fuel = Some(10.0)).contains("larger than its term"));
    assert!(cane(|row| row.feedstock_materials.push("moss".to_owned())).contains("no material moss"));
}

#[test]
fn broken_references() {
    assert!(after(|book| without(&mut book.gwp_sets, "eu-2018-2001")).contains("no gas weights"));
    assert!(after(|book| without(&mut book.soils, "eu-2022-996")).contains("no soil method"));
    assert!(after(|book| without(&mut book.editions, "eu-2022-996")).contains("no edition"));
    assert!(
        after(|book| without(&mut book.materials, "agricultural_residue_bales"))
            .contains("meant by the residue")
    );
    let set = |change: fn(&mut crate::core::domain::RuleSet)| {
        after(|book| change(book.rule_sets.get_mut("eu-2018-2001").expect("the rule set")))
    };
    assert!(set(|set| set.ethanol_lhv.value = 26.8).contains("heating value of ethanol"));
    assert!(set(|set| set.allocation_allowed.clear()).contains("not allowed"));
    assert!(set(|set| drop(set.thresholds.remove(1))).contains("leave a gap"));
    assert!(set(|set| set.thresholds[1].started_from = set.thresholds[0].started_to).contains("overlap"));
    assert!(set(|set| set.comparator.unit = "kg CO2e/MJ".to_owned()).contains("counts in g CO2e/MJ"));
    let edition = |change: fn(&mut crate::core::domain::Edition)| {
        after(|book| change(book.editions.get_mut("eu-2022-996").expect("the edition")))
    };
    assert!(
        edition(|e| e.factors.get_mut("fuel_diesel").expect("diesel").usage = Use::HeatingValueOnly)
            .contains("its fuel")
    );
    assert!(
        edition(|e| drop(e.aliases.insert("a".to_owned(), "nowhere".to_owned()))).contains("leads nowhere")
    );
}

#[test]
fn a_source_is_wanted_everywhere() {
    let mut reading = Reading::default();
    reading.published(
        "place",
        "figure",
        &Citation {
            source: "  ".to_owned(),
            status: Status::Read,
        },
    );
    reading.published(
        "place",
        "figure",
        &Citation {
            source: "letter".to_owned(),
            status: Status::Own,
        },
    );
    assert_eq!(reading.problems.len(), 2);
}
