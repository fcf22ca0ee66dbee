//! Laws of comparisons: parts of a difference add up to it, equal pathways have none, unlike settings are named.

use wheelwort::core::documents::pathway::PeriodKind;
use wheelwort::core::documents::{Assessment, Pathway};
use wheelwort::core::domain::RuleSet;
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::core::levers::compare::{Comparison, Subject, compare, place};
use wheelwort::library;

const WHEAT: &[u8] = include_bytes!("../../../src/demo/pathways/a_wheat_chp_rail.json");
const MAIZE: &[u8] = include_bytes!("../../../src/demo/pathways/b_maize_truck_and_barge.json");
const STRAW: &[u8] = include_bytes!("../../../src/demo/pathways/d_straw_lignin.json");

fn read(bytes: &[u8]) -> Pathway {
    Pathway::from_bytes(bytes).expect("a demo document")
}

fn with<T>(pathways: &[Pathway], rules: &[RuleSet], look: impl FnOnce(Comparison) -> T) -> T {
    let book = library::book();
    let assessed: Vec<Assessment> = pathways
        .iter()
        .map(|pathway| evaluate(pathway, book, Options::default()).expect("holds"))
        .collect();
    let subjects: Vec<Subject<'_>> = pathways
        .iter()
        .zip(&assessed)
        .zip(rules.iter().cycle())
        .map(|((pathway, assessment), rules)| Subject { pathway, assessment, rules })
        .collect();
    look(compare(&subjects))
}

fn eu() -> RuleSet {
    library::book().rule_sets["eu-2018-2001"].clone()
}

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs().max(b.abs()).max(1.0)
}

#[test]
fn parts_of_a_difference_add_up_to_it() {
    with(&[read(WHEAT), read(MAIZE), read(STRAW)], &[eu()], |comparison| {
        for (index, pathway) in comparison.pathways.iter().enumerate() {
            let whole = pathway.difference_g_co2e_per_mj;
            let terms: f64 = comparison.terms.iter().map(|row| row.difference_g_co2e_per_mj[index]).sum();
            let kinds: f64 = comparison.kinds.iter().map(|row| row.difference_g_co2e_per_mj[index]).sum();
            let stages: f64 = comparison.stages.iter().map(|row| row.difference_g_co2e_per_mj[index]).sum();
            assert!(close(whole, terms) && close(whole, kinds) && close(whole, stages), "{index}: {whole} {terms} {kinds} {stages}");
        }
        assert!(comparison.pathways[1].difference_g_co2e_per_mj != 0.0);
        assert!(comparison.example);
    });
}

#[test]
fn a_pathway_does_not_differ_from_itself() {
    with(&[read(WHEAT), read(WHEAT)], &[eu()], |comparison| {
        let other = &comparison.pathways[1];
        assert_eq!((other.difference_g_co2e_per_mj, other.saving_difference_points), (0.0, Some(0.0)));
        assert_eq!(other.largest, None);
        assert_eq!(comparison.unlike, []);
        assert!(comparison.stages.iter().all(|row| row.g_co2e_per_mj[0] == row.g_co2e_per_mj[1]));
    });
}

#[test]
fn the_kind_that_makes_the_difference_is_named() {
    with(&[read(WHEAT), read(STRAW)], &[eu()], |comparison| {
        let other = &comparison.pathways[1];
        let largest = other.largest.as_ref().expect("they differ");
        let beaten = comparison.kinds.iter().map(|row| row.difference_g_co2e_per_mj[1].abs());
        assert!(beaten.fold(0.0, f64::max) <= largest.difference_g_co2e_per_mj.abs());
    });
}

#[test]
fn other_rules_print_no_difference_of_savings() {
    let other = RuleSet { id: "made-up".into(), ..eu() };
    with(&[read(WHEAT), read(MAIZE)], &[eu(), other], |comparison| {
        assert!(comparison.pathways[1].saving_percent.is_some());
        assert_eq!(comparison.pathways[1].saving_difference_points, None);
        assert!(comparison.unlike.iter().any(|unlike| unlike.setting == "rule_set"));
    });
    with(&[read(WHEAT), read(MAIZE)], &[eu()], |comparison| {
        let [first, second] = &comparison.pathways[..] else { panic!("two were compared") };
        let points = second.saving_percent.expect("printed") - first.saving_percent.expect("printed");
        assert_eq!(second.saving_difference_points, Some(points));
        assert!(comparison.unlike.iter().all(|unlike| unlike.setting != "rule_set"));
    });
}

#[test]
fn unlike_settings_say_what_each_pathway_says() {
    let mut later = read(WHEAT);
    later.period.kind = Some(PeriodKind::Campaign);
    later.plant_started = None;
    with(&[read(WHEAT), later], &[eu()], |comparison| {
        let settings: Vec<&str> = comparison.unlike.iter().map(|unlike| unlike.setting.as_str()).collect();
        assert_eq!(settings, ["period", "plant_started"]);
        assert!(comparison.unlike[0].values[1].ends_with("campaign"));
        assert_eq!(comparison.unlike[1].values[1], "not said");
    });
}

#[test]
fn stages_run_from_field_to_wheel() {
    with(&[read(MAIZE), read(WHEAT)], &[eu()], |comparison| {
        let places: Vec<usize> = comparison.stages.iter().map(|row| place(&row.kind)).collect();
        assert!(places.is_sorted());
    });
}
