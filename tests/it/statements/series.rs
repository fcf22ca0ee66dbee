//! Several files of one issuer hold together, and none can be taken out or put in unseen.

use super::made::{Made, demo};
use wheelwort::core::documents::statement::{Previous, Statement};
use wheelwort::core::statement::verify::{Answer, series};

fn numbered(number: &str, previous: Option<&Statement>) -> Statement {
    let mut made = Made::of(demo("d_straw_lignin"));
    made.number = number.to_owned();
    made.previous = previous.map(|statement| Previous {
        statement_no: statement.statement_no.clone(),
        hash: statement.hash.clone(),
    });
    made.sealed()
}

#[test]
fn a_series_holds_and_its_breaks_are_named() {
    let first = numbered("WW-1", None);
    let second = numbered("WW-2", Some(&first));
    let third = numbered("WW-3", Some(&second));
    let all = [third.clone(), first.clone(), second.clone()];
    assert_eq!(series(&all), (None, Vec::new()));

    let (answer, notes) = series(&[first.clone(), third.clone()]);
    assert_eq!(answer, None);
    assert_eq!(
        notes,
        ["Statement WW-3 follows or replaces WW-2, which is not among the files."]
    );

    let mut other = second.clone();
    other.hash = first.hash.clone();
    let (answer, _) = series(&[other, third.clone()]);
    assert!(matches!(answer, Some(Answer::BrokenSeries { previous_no, .. }) if previous_no == "WW-2"));

    let fork = numbered("WW-4", Some(&first));
    let (answer, _) = series(&[first, second.clone(), fork]);
    assert!(matches!(answer, Some(Answer::ForkedSeries { .. })));

    let mut twin = second.clone();
    twin.hash = third.hash;
    let (answer, _) = series(&[second, twin]);
    assert!(matches!(answer, Some(Answer::ForkedSeries { .. })));
}
