//! The published rule sets: what they print, that each figure is cited, and that the document reader takes them.

use crate::core::documents::rule_set::{self, Document};
use crate::core::documents::{Problems, canonical};
use crate::core::domain::rule_set::{AllocationMethod, BiogenicCo2, EthanolWater, Standing};
use crate::core::domain::{RuleSet, Status, Term};
use crate::library::{book, figures_from_memory, limits_elsewhere};
use jiff::civil::{Date, date};

fn set(id: &str) -> &'static RuleSet {
    &book().rule_sets[id]
}

#[test]
fn there_are_four() {
    let ids: Vec<&str> = book().rule_sets.keys().map(String::as_str).collect();
    assert_eq!(
        ids,
        ["eu-2009-28", "eu-2018-2001", "inventory-ar6", "uk-si-2007-3072"]
    );
    let offered = book().offered_rule_sets();
    let offered: Vec<&str> = offered.into_iter().map(|set| set.id.as_str()).collect();
    assert_eq!(
        offered,
        ["eu-2018-2001", "inventory-ar6", "uk-si-2007-3072", "eu-2009-28"]
    );
}

#[test]
fn every_figure_is_cited_and_what_is_recalled_is_listed() {
    let memory = figures_from_memory().join("\n");
    for set in book().rule_sets.values() {
        for (name, figure) in set.figures() {
            let Some(figure) = figure else { continue };
            let place = format!("rule set {} {name} =", set.id);
            assert!(figure.source.len() > 10, "{place}");
            assert_eq!(
                figure.status == Status::Memory,
                memory.contains(&place),
                "{place}"
            );
        }
        assert!(set.thresholds.iter().all(|threshold| threshold.source.len() > 10));
        assert!(set.source.len() > 10 && !set.notes.is_empty(), "{}", set.id);
    }
}

#[test]
fn each_reads_back_from_its_document() {
    for set in book().rule_sets.values() {
        let bytes = rule_set::canonical_bytes(set).expect("finite");
        let value = serde_json::from_slice(&bytes).expect("JSON");
        let mut problems = Problems::default();
        let again = rule_set::shape(&value, &mut problems);
        assert!(problems.is_empty(), "{}: {problems:?}", set.id);
        assert_eq!(again.as_ref(), Some(set));
        assert_eq!(bytes, canonical::bytes(&Document::of(set)).expect("finite"));
        rule_set::check(set, book(), &mut problems);
        assert!(problems.is_empty(), "{}: {problems:?}", set.id);
        assert_eq!(rule_set::gap(&set.thresholds), None, "{}", set.id);
    }
}

/// Minimum saving of a plant for fuel of one day, %.
fn minimum(set: &RuleSet, started: Date, fuel: Date) -> Option<f64> {
    set.threshold(started, fuel, fuel)
        .map(|threshold| threshold.percent)
}

/// Directive 2009/28/EC, consolidated 05.10.2015, Annex V Part C points 5 and 19, Article 17(2).
#[test]
fn the_repealed_directive() {
    let set = set("eu-2009-28");
    assert_eq!((set.standing, set.comparator.value), (Standing::Repealed, 83.8));
    assert_eq!(
        book().gwp_sets[&set.gwp_set].weights(),
        [1.0, 0.0, 1.0, 23.0, 23.0, 296.0, 1.0]
    );
    assert!(set.title.contains("repealed") && set.leaves_out(Term::Eu));
    let (old, new) = (date(2015, 10, 5), date(2015, 10, 6));
    assert_eq!(minimum(set, old, date(2017, 12, 31)), Some(35.0));
    assert_eq!(minimum(set, old, date(2018, 1, 1)), Some(50.0));
    assert_eq!(minimum(set, new, date(2017, 12, 31)), Some(60.0));
    assert_eq!(minimum(set, new, date(2019, 6, 30)), Some(60.0));
    // Fuel of both spans: the stricter one.
    let both = set.threshold(old, date(2017, 7, 1), date(2018, 6, 30));
    assert_eq!(both.map(|threshold| threshold.percent), Some(50.0));
}

/// SI 2007/3072 Schedule 1 paragraph 4(a) as amended by SI 2021/1420.
#[test]
fn the_uk_order_is_unconfirmed() {
    let set = set("uk-si-2007-3072");
    assert_eq!(set.standing, Standing::Unconfirmed);
    assert_eq!(set.comparator.status, Status::Memory);
    assert_eq!(minimum(set, date(2015, 10, 5), date(2026, 1, 1)), Some(55.0));
    assert_eq!(minimum(set, date(2015, 10, 6), date(2026, 1, 1)), Some(65.0));
    assert!(
        set.thresholds
            .iter()
            .all(|threshold| threshold.status == Status::Read)
    );
}

#[test]
fn the_inventory() {
    let set = set("inventory-ar6");
    assert_eq!((set.gwp_set.as_str(), set.standing), ("ar6", Standing::Own));
    assert_eq!(
        (set.comparator.value, set.comparator_word.as_str()),
        (93.3, "petrol")
    );
    assert!(set.thresholds.is_empty() && set.terms_not_counted.is_empty());
    assert_eq!(
        (set.ethanol_water, set.biogenic_co2),
        (EthanolWater::Evaporated, BiogenicCo2::InLine)
    );
    // 2 CO2 + 3 H2O(g) - C2H5OH(l), standard enthalpies of formation at 25 degC (CRC), over the molar mass.
    let heat = 2.0 * 393.5 + 3.0 * 241.8 - 277.6;
    assert!((set.ethanol_lhv.value - heat / 46.06844).abs() < 5e-5);
    assert!((set.ethanol_mj_per_kg(1.0) - 26.8036).abs() < 1e-12);
    // 93 % by mass: 7/93 kg of water per kg of ethanol.
    assert!((set.ethanol_mj_per_kg(0.93) - (26.8036 - 2.442 * 7.0 / 93.0)).abs() < 1e-12);
    assert!(set.ethanol_mj_per_kg(0.08) < 0.0);
    let allowed = [
        AllocationMethod::Energy,
        AllocationMethod::Mass,
        AllocationMethod::Economic,
        AllocationMethod::Substitution,
    ];
    assert_eq!(set.allocation_allowed, allowed);
}

#[test]
fn unlike_figures_are_not_compared() {
    let eu = set("eu-2018-2001");
    assert_eq!(eu.comparable_with(eu), Ok(()));
    let why = eu.comparable_with(set("inventory-ar6")).expect_err("unlike");
    assert!(
        why.contains("gases") && why.contains("26.81") && why.contains("26.8036"),
        "{why}"
    );
    let why = eu.comparable_with(set("eu-2009-28")).expect_err("unlike");
    assert!(why.contains("eu-2009-28") && why.contains("27 MJ/kg"), "{why}");
    // The same heating value, but in one the water counts.
    let mut wet = eu.clone();
    wet.ethanol_water = EthanolWater::Evaporated;
    assert!(eu.comparable_with(&wet).expect_err("unlike").contains("water"));
    // Other thresholds and comparators make figures no less comparable.
    let mut other = eu.clone();
    other.comparator.value = 90.0;
    other.thresholds.clear();
    assert_eq!(other.comparable_with(eu), Ok(()));
}

#[test]
fn gaps_between_thresholds_are_found() {
    let mut thresholds = set("eu-2009-28").thresholds.clone();
    thresholds.remove(1);
    let found = rule_set::gap(&thresholds).expect("a gap");
    assert_eq!(found, (Date::MIN, date(2018, 1, 1)));
}

/// 42 USC 7545(o); SOR/2022-140 s.1, s.5, Schedules 1 and 2.
#[test]
fn limits_elsewhere_are_shown_with_the_reason() {
    let rows = limits_elsewhere();
    let savings: Vec<_> = rows
        .iter()
        .filter(|row| row.jurisdiction == "US")
        .map(|row| (row.id.as_str(), row.min_saving_percent, row.baseline_g_per_mj))
        .collect();
    let wanted = [
        ("us-rfs-20", Some(20.0), None),
        ("us-rfs-gf", None, None),
        ("us-rfs-50", Some(50.0), None),
        ("us-rfs-60", Some(60.0), None),
    ];
    assert_eq!(savings, wanted);
    let references: Vec<_> = rows
        .iter()
        .filter(|row| row.jurisdiction == "CA")
        .filter_map(|row| row.reference_g_per_mj)
        .collect();
    assert_eq!(references, [89.2, 87.9, 86.6, 85.3, 84.0, 82.7, 81.4, 80.1]);
    let days = rows.iter().filter_map(|row| row.applies_from);
    assert_eq!(days.max(), Some(date(2030, 1, 1)));
    for row in rows {
        assert_eq!(row.citation.status, Status::Read, "{}", row.id);
        assert!(row.why_no_rule_set.len() > 40, "{}", row.id);
        let canadian = row.jurisdiction == "CA";
        assert_eq!(row.heating_value.as_deref(), canadian.then_some("higher"));
        assert_eq!(row.at_most_percent_of_reference, canadian.then_some(90.0));
    }
}
