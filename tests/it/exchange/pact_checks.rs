//! J-01 to J-06, each with a record that passes and one that fails.

use super::pact::{demo, facts, json_of};
use serde_json::{Value, json};
use wheelwort::core::documents::assessment::{Finding, Severity};
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::exchange::pact::{RULE_SET, checks, write};
use wheelwort::library::book;

/// The invented illustration of the field list: one kilogram, undenatured.
fn record() -> Value {
    json!({
        "productNameCompany": "Fuel ethanol (invented)",
        "pcf": {
            "declaredUnitAmount": "1", "productMassPerDeclaredUnit": "1",
            "fossilGhgEmissions": "0.600", "landManagementFossilGhgEmissions": "0.200",
            "landUseChangeGhgEmissions": "0", "biogenicNonCO2Emissions": "0.004",
            "pcfExcludingBiogenicUptake": "0.604", "biogenicCarbonContent": "0.521", "fossilCarbonContent": "0",
            "biogenicCO2Uptake": "-1.911", "pcfIncludingBiogenicUptake": "-1.307",
            "exemptedEmissionsPercent": "0", "primaryDataShare": "80", "geographyCountry": "DE"
        }
    })
}

fn with(name: &str, value: impl Into<Value>) -> Value {
    let mut record = record();
    record["pcf"][name] = value.into();
    record
}

fn only(found: &[Finding], id: &str, severity: Severity) {
    assert!(!found.is_empty(), "{id} found nothing");
    assert!(
        found
            .iter()
            .all(|finding| finding.id == id && finding.severity == severity),
        "{found:?}"
    );
    assert!(
        found
            .iter()
            .all(|finding| !finding.message.is_empty() && !finding.remedy.is_empty())
    );
}

#[test]
fn a_good_record_passes_all() {
    assert_eq!(checks::all(&record(), RULE_SET, &[], book()), []);
}

#[test]
fn j_01_totals_follow_from_their_parts() {
    assert!(checks::totals(&record()).is_empty());
    only(
        &checks::totals(&with("pcfExcludingBiogenicUptake", "0.804")),
        "J-01",
        Severity::Block,
    );
    only(
        &checks::totals(&with("pcfIncludingBiogenicUptake", "-1.308")),
        "J-01",
        Severity::Block,
    );
    only(
        &checks::totals(&with("technologicalCO2Removals", "-0.1")),
        "J-01",
        Severity::Block,
    );
    // The land-management part is inside the fossil emissions: it moves no total.
    assert!(checks::totals(&with("landManagementFossilGhgEmissions", "0.3")).is_empty());
}

#[test]
fn j_02_signs_are_those_of_the_number() {
    assert!(checks::signs(&record()).is_empty());
    only(
        &checks::signs(&with("fossilGhgEmissions", "-0.1")),
        "J-02",
        Severity::Block,
    );
    // The published pattern lets these pass.
    only(
        &checks::signs(&with("biogenicCO2Uptake", "5.0")),
        "J-02",
        Severity::Block,
    );
    only(
        &checks::signs(&with("landManagementBiogenicCO2Removals", "10")),
        "J-02",
        Severity::Block,
    );
}

#[test]
fn j_03_uptake_fits_the_carbon() {
    assert!(checks::carbon(&record()).is_empty());
    only(
        &checks::carbon(&with("biogenicCarbonContent", "0.50")),
        "J-03",
        Severity::Warn,
    );
}

#[test]
fn j_04_decimals_are_plain_text() {
    assert!(checks::decimals(&record()).is_empty());
    for bad in [
        json!(0.6),
        json!("6e-1"),
        json!("1.2345E+6"),
        json!("12abc"),
        json!("0,6"),
        json!(""),
        json!(".6"),
    ] {
        only(
            &checks::decimals(&with("fossilGhgEmissions", bad)),
            "J-04",
            Severity::Block,
        );
    }
    assert!(checks::decimals(&with("fossilGhgEmissions", Value::Null)).is_empty());
}

#[test]
fn j_05_one_place() {
    assert!(checks::geography(&record()).is_empty());
    only(
        &checks::geography(&with("geographyCountrySubdivision", "DE-BY")),
        "J-05",
        Severity::Block,
    );
}

#[test]
fn j_06_the_net_of_a_fuel_law_is_no_footprint() {
    let pathway = demo("a_");
    let law = evaluate(&pathway, book(), Options::default()).unwrap();
    let honest = json_of(&write(&pathway, book(), &facts(), &[&law]).unwrap());
    assert!(checks::no_net_of_a_rule_set(&honest, RULE_SET, &[&law], book()).is_empty());
    only(
        &checks::no_net_of_a_rule_set(&honest, "eu-2018-2001", &[&law], book()),
        "J-06",
        Severity::Block,
    );
    let per_kg = law.net.g_co2e_per_mj * book().rule_sets["eu-2018-2001"].ethanol_lhv.value / 1000.0;
    let mut sent = honest;
    sent["pcf"]["pcfExcludingBiogenicUptake"] = format!("{per_kg:.9}").into();
    only(
        &checks::no_net_of_a_rule_set(&sent, RULE_SET, &[&law], book()),
        "J-06",
        Severity::Block,
    );
}
