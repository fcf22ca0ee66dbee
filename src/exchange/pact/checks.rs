//! Checks J-01 to J-06 of the audit checklist over a record as it is sent: read from its JSON, so that a record of
//! somebody else can be checked too. Signs and decimals are tested by value, for the published patterns are loose.

use super::RULE_SET;
use super::decimal::Decimal;
use crate::core::checks::finding;
use crate::core::documents::Assessment;
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::domain::Book;
use crate::core::engine::carbon::CO2_PER_ETHANOL;
use serde_json::Value;

/// The total without uptake.
const EXCLUDING: &str = "pcfExcludingBiogenicUptake";
/// The total with it.
const INCLUDING: &str = "pcfIncludingBiogenicUptake";
const UPTAKE: &str = "biogenicCO2Uptake";
const CONTENT: &str = "biogenicCarbonContent";

/// Parts of the total. Land-management fossil emissions are inside the fossil ones and are not added again.
const PARTS: [&str; 7] = [
    "fossilGhgEmissions",
    "landUseChangeGhgEmissions",
    "landManagementBiogenicCO2Emissions",
    "landManagementBiogenicCO2Removals",
    "technologicalCO2Removals",
    "ccsTechnologicalCO2Capture",
    "biogenicNonCO2Emissions",
];

/// Fields that are at least zero.
const NOT_NEGATIVE: [&str; 17] = [
    "fossilGhgEmissions",
    "landUseChangeGhgEmissions",
    "landCarbonLeakage",
    "landManagementFossilGhgEmissions",
    "landManagementBiogenicCO2Emissions",
    "biogenicNonCO2Emissions",
    "landAreaOccupation",
    "aircraftGhgEmissions",
    "packagingGhgEmissions",
    "packagingBiogenicCarbonContent",
    "outboundLogisticsGhgEmissions",
    "fossilCarbonContent",
    "biogenicCarbonContent",
    "recycledCarbonContent",
    "ccuCarbonContent",
    "declaredUnitAmount",
    "productMassPerDeclaredUnit",
];

/// Fields that are at most zero.
const NOT_POSITIVE: [&str; 4] = [
    UPTAKE,
    "landManagementBiogenicCO2Removals",
    "technologicalCO2Removals",
    "ccsTechnologicalCO2Capture",
];

/// Other fields that are decimals.
const OTHER_DECIMALS: [&str; 4] = [
    EXCLUDING,
    INCLUDING,
    "exemptedEmissionsPercent",
    "primaryDataShare",
];

/// One of three at most.
const GEOGRAPHY: [&str; 3] = [
    "geographyRegionOrSubregion",
    "geographyCountry",
    "geographyCountrySubdivision",
];

/// Every check on a record worked out under a rule set, beside the assessments of the same product under fuel laws.
pub fn all(record: &Value, worked_out_under: &str, assessments: &[&Assessment], book: &Book) -> Vec<Finding> {
    let mut found = totals(record);
    found.extend(signs(record));
    found.extend(carbon(record));
    found.extend(decimals(record));
    found.extend(geography(record));
    found.extend(no_net_of_a_rule_set(record, worked_out_under, assessments, book));
    found
}

fn field<'r>(record: &'r Value, name: &str) -> Option<&'r Value> {
    record.get("pcf")?.get(name).filter(|value| !value.is_null())
}

fn text(record: &Value, name: &str) -> String {
    match field(record, name) {
        Some(Value::String(text)) => text.clone(),
        Some(other) => other.to_string(),
        None => "nothing".to_owned(),
    }
}

/// A decimal of the footprint; a field that is absent is none.
fn decimal(record: &Value, name: &str) -> Option<Decimal> {
    Decimal::read(field(record, name)?.as_str()?)
}

fn product(record: &Value) -> &str {
    record
        .get("productNameCompany")
        .and_then(Value::as_str)
        .unwrap_or("the product")
}

fn block(id: &str, field: &str, message: String, remedy: &str) -> Finding {
    finding(id, Severity::Block, "", field, message, remedy)
}

/// J-01: both totals are the sums of their parts.
pub fn totals(record: &Value) -> Vec<Finding> {
    let sum: Decimal = PARTS.iter().filter_map(|name| decimal(record, name)).sum();
    let uptake = decimal(record, UPTAKE).unwrap_or_default();
    let wrong = |name: &str, wanted: Decimal| {
        (decimal(record, name) != Some(wanted)).then(|| {
            let message = format!(
                "The footprint total {} of {} is not the sum of its parts, {wanted}.",
                text(record, name),
                product(record)
            );
            block(
                "J-01",
                &format!("pcf.{name}"),
                message,
                "Work the export out again.",
            )
        })
    };
    [wrong(EXCLUDING, sum), wrong(INCLUDING, sum + uptake)]
        .into_iter()
        .flatten()
        .collect()
}

/// J-02: emissions are at least zero; uptake, removals and captures at most zero.
pub fn signs(record: &Value) -> Vec<Finding> {
    let wrong = |name: &&str, holds: fn(Decimal) -> bool| {
        let value = decimal(record, name)?;
        (!holds(value)).then(|| {
            block(
                "J-02",
                &format!("pcf.{name}"),
                format!("{name} = {value} has the wrong sign."),
                "Give emissions as at least 0; uptake, removals and captures as at most 0.",
            )
        })
    };
    let below = NOT_NEGATIVE
        .iter()
        .filter_map(|name| wrong(name, |value| value >= Decimal::ZERO));
    let above = NOT_POSITIVE
        .iter()
        .filter_map(|name| wrong(name, |value| value <= Decimal::ZERO));
    below.chain(above).collect()
}

/// J-03: the uptake is the CO2 of the biogenic carbon in the product, within 1 %.
pub fn carbon(record: &Value) -> Vec<Finding> {
    let figure = |name: &str| decimal(record, name)?.to_string().parse::<f64>().ok();
    let (Some(uptake), Some(content)) = (figure(UPTAKE), figure(CONTENT)) else {
        return Vec::new();
    };
    let held = super::CO2_PER_CARBON * content;
    if (uptake + held).abs() <= 0.01 * held.abs() {
        return Vec::new();
    }
    let message = format!(
        "The uptake {} of {} does not fit a carbon content of {} kg.",
        text(record, UPTAKE),
        product(record),
        text(record, CONTENT)
    );
    let remedy = "Check strength and denaturant.";
    vec![finding(
        "J-03",
        Severity::Warn,
        "",
        &format!("pcf.{UPTAKE}"),
        message,
        remedy,
    )]
}

/// J-04: decimals are texts of digits and a point.
pub fn decimals(record: &Value) -> Vec<Finding> {
    let names = NOT_NEGATIVE.iter().chain(&NOT_POSITIVE).chain(&OTHER_DECIMALS);
    let mut names: Vec<&str> = names.copied().collect();
    names.sort_unstable();
    names.dedup();
    names
        .into_iter()
        .filter(|name| field(record, name).is_some_and(|value| !value.as_str().is_some_and(is_decimal)))
        .map(|name| {
            block(
                "J-04",
                &format!("pcf.{name}"),
                format!(
                    "{name} = {} is not a plain decimal in quotes.",
                    text(record, name)
                ),
                "Send it with digits and a point only.",
            )
        })
        .collect()
}

/// Digits with at most one point inside, and a sign at most.
fn is_decimal(text: &str) -> bool {
    let digits = text.strip_prefix(['+', '-']).unwrap_or(text);
    let (whole, part) = digits.split_once('.').unwrap_or((digits, "0"));
    let all_digits = |text: &str| !text.is_empty() && text.bytes().all(|byte| byte.is_ascii_digit());
    all_digits(whole) && all_digits(part)
}

/// J-05: at most one of region, country and subdivision.
pub fn geography(record: &Value) -> Vec<Finding> {
    let named: Vec<&str> = GEOGRAPHY
        .into_iter()
        .filter(|name| field(record, name).is_some())
        .collect();
    if named.len() < 2 {
        return Vec::new();
    }
    let message = format!("The footprint of {} names {}.", product(record), named.join(", "));
    vec![block(
        "J-05",
        "pcf",
        message,
        "Give only one of region, country, subdivision.",
    )]
}

/// J-06: the totals come from the footprint's own calculation, and are not the net of a fuel law put per kilogram.
pub fn no_net_of_a_rule_set(
    record: &Value,
    worked_out_under: &str,
    assessments: &[&Assessment],
    book: &Book,
) -> Vec<Finding> {
    let refused = |rule_set: &str| {
        block(
            "J-06",
            &format!("pcf.{EXCLUDING}"),
            format!(
                "The net of {rule_set} cannot be sent as a product footprint: boundary, weights and allocation differ."
            ),
            "Work out the footprint apart.",
        )
    };
    if worked_out_under != RULE_SET {
        return vec![refused(worked_out_under)];
    }
    let total = [EXCLUDING, INCLUDING].map(|name| decimal(record, name)?.to_string().parse::<f64>().ok());
    // Per kilogram of pure ethanol, or of the product with its water.
    let content = decimal(record, CONTENT).and_then(|content| content.to_string().parse::<f64>().ok());
    let pure = content.map_or(1.0, |content| content * super::CO2_PER_CARBON / CO2_PER_ETHANOL);
    let same = |assessment: &&&Assessment| {
        let Some(rules) = book.rule_sets.get(&assessment.rule_set) else {
            return false;
        };
        let law = assessment.rule_set != RULE_SET;
        let net = assessment.net.g_co2e_per_mj * rules.ethanol_lhv.value / 1000.0;
        let equal = |total: f64, net: f64| (total - net).abs() <= 1e-6 * net.abs();
        let sent =
            |total: &Option<f64>| total.is_some_and(|total| equal(total, net) || equal(total, net * pure));
        law && net != 0.0 && total.iter().any(sent)
    };
    assessments
        .iter()
        .filter(same)
        .map(|assessment| refused(&assessment.rule_set))
        .collect()
}
