//! `capture`: CO2 of biological origin that is captured and replaces fossil CO2 (e_ccr) or is stored (e_ccs). Directive
//! (EU) 2018/2001 Annex V Part C points 14 and 15; Implementing Regulation (EU) 2022/996 Articles 14(3) and 20(4).

use super::factors::{KWH, price_energy};
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::documents::assessment::Severity;
use crate::core::domain::{Counts, Gas, GasVector};
use crate::core::units::Dimension;
use crate::core::units::rounding::plain;

const REPLACE: &str = "replace_fossil";

/// The model. Its term follows `use`.
pub const MODEL: Model = Model {
    kind: "capture",
    title: "CO2 capture",
    what: "Credit for captured biogenic CO2 that replaces fossil CO2 or is stored.",
    source: "Directive (EU) 2018/2001 Annex V Part C points 14 and 15: CO2 delivered, as a deduction",
    term: None,
    parameters: &[
        Parameter::required(
            "use",
            Takes::Word(&[REPLACE, "store"]),
            "what becomes of the CO2; decides the term.",
        ),
        Parameter::required("co2_captured", Takes::Amount("kg"), "CO2 taken from the works.")
            .hard(Span::positive()),
        Parameter::optional(
            "co2_delivered",
            Takes::Amount("kg"),
            "all that is captured",
            "CO2 that reached its user or its store: the credit.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "purpose",
            Takes::Text,
            "none; needed with replace_fossil",
            "what the CO2 is used for.",
        ),
        Parameter::optional(
            "replaces",
            Takes::Text,
            "none; needed with replace_fossil",
            "where the fossil CO2 came from that it replaces.",
        ),
        Parameter::optional(
            "last_use_on",
            Takes::Day,
            "none; needed with replace_fossil",
            "last day the CO2 is used; later than 2035 counts nothing.",
        ),
        Parameter::optional(
            "storage_site",
            Takes::Text,
            "none; needed with store",
            "where the CO2 is stored.",
        ),
        Parameter::optional(
            "storage_permit",
            Takes::Text,
            "none; needed with store",
            "permit of the storage site.",
        ),
        Parameter::optional(
            "power_per_co2",
            Takes::Amount("kWh/t"),
            "the stage's own inputs",
            "power per CO2 captured, for drafts.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "power_factor",
            Takes::Factor,
            "none; needed with power_per_co2",
            "the grid, per kWh or MJ of power.",
        ),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let kind = given.word("use");
    let captured = given.number("co2_captured");
    let delivered = match given.has("co2_delivered") {
        true => given.number("co2_delivered"),
        false => captured,
    };
    let power = power(given);
    let complete = match kind? {
        REPLACE => replacement(given),
        _ => storage(given),
    };
    let (captured, delivered, power) = (captured?, delivered?, power?);
    complete?;
    if delivered > captured {
        given.problem(
            "co2_delivered",
            format!(
                "{} kg are delivered of {} kg captured.",
                plain(delivered),
                plain(captured)
            ),
            "Correct one of the two: what is delivered was captured before.",
        );
        return None;
    }
    given.step("captured, as measured".to_owned(), captured, "kg CO2", "");
    let gas = match kind? {
        REPLACE => Gas::Co2Fossil,
        _ => Gas::Co2eUnsplit,
    };
    let unit = format!("kg {}", gas.name());
    given.step(
        "credit: CO2 delivered, as a deduction".to_owned(),
        -delivered,
        &unit,
        MODEL.source,
    );
    let mut gases = GasVector::of(gas, -delivered);
    if let Some((kwh_per_t, factor)) = power {
        let kwh = captured / 1000.0 * kwh_per_t;
        let text = format!(
            "{} t captured x {} kWh per t",
            plain(captured / 1000.0),
            plain(kwh_per_t)
        );
        given.step(text, kwh, "kWh", "");
        gases += price_energy(kwh, KWH, &factor, &mut given.record.steps);
    }
    Some(Outcome {
        gases,
        captured_kg: Some(captured),
        ..Outcome::default()
    })
}

/// The power of a draft; the inner value is none where it is left out.
fn power(given: &mut Given) -> Option<Option<(f64, super::factors::Priced)>> {
    match (given.has("power_per_co2"), given.has("power_factor")) {
        (false, false) => return Some(None),
        (true, true) => {}
        (has_power, _) => {
            let (absent, there) = match has_power {
                true => ("power_factor", "power_per_co2"),
                false => ("power_per_co2", "power_factor"),
            };
            let detail = format!("\"{there}\" stands without \"{absent}\".");
            given.problem(absent, detail, format!("Add \"{absent}\", or take both out."));
            return None;
        }
    }
    let power = given.number("power_per_co2");
    let factor = given.amount_factor("power_factor")?;
    let fits = matches!(factor.unit.dimension, Dimension::ENERGY | Dimension::POWER)
        && matches!(factor.counts, Counts::Power | Counts::Other);
    if !fits {
        let detail = format!(
            "\"{}\" counts per {}, but power is wanted.",
            factor.id, factor.per
        );
        given.problem(
            "power_factor",
            detail,
            "Choose a grid per kWh, such as eu-2022-996/elec_eu27_2019_mv.",
        );
        return None;
    }
    Some(Some((power?, factor)))
}

/// What a replacement must state: purpose, what is replaced (G-01) and the last day of use.
fn replacement(given: &mut Given) -> Option<()> {
    let mut missing = Vec::new();
    for (name, words) in [
        ("purpose", "the purpose of use"),
        ("replaces", "what it replaces"),
    ] {
        if stated(given, name, "CO2 that replaces fossil CO2")?.is_empty() {
            missing.push((name, words));
        }
    }
    for (name, words) in missing {
        let message = format!("the CO2 credit lacks {words}.");
        given.note(
            "G-01",
            Severity::Block,
            name,
            message,
            "Enter it or take the credit out.",
        );
    }
    require(given, "last_use_on", "CO2 that replaces fossil CO2")?;
    let day = given.day("last_use_on")?;
    let rules = given.setting.rules;
    let last = rules.limit("replacement_last_year");
    if let Some(last) = last.filter(|last| f64::from(day.year()) > last.value) {
        given.problem(
            "last_use_on",
            format!(
                "Replacing fossil CO2 counts until the end of {} only.",
                plain(last.value)
            ),
            "Leave later use out of the amounts and give the last day that counts.",
        );
        return None;
    }
    Some(())
}

/// What storage must state: site and permit (G-02).
fn storage(given: &mut Given) -> Option<()> {
    for (name, words) in [
        ("storage_site", "the storage site"),
        ("storage_permit", "the permit of the site"),
    ] {
        if stated(given, name, "stored CO2")?.is_empty() {
            let message = format!("no proof that the CO2 was stored: {words} is not named.");
            let remedy = "Name site and permit and attach contract and invoice.";
            given.note("G-02", Severity::Block, name, message, remedy);
        }
    }
    Some(())
}

/// A text that must be there, without the blanks around it.
fn stated(given: &mut Given, name: &str, what: &str) -> Option<String> {
    require(given, name, what)?;
    given.text(name).map(|text| text.trim().to_owned())
}

fn require(given: &mut Given, name: &str, what: &str) -> Option<()> {
    if given.has(name) {
        return Some(());
    }
    given.problem(
        name,
        format!("\"{name}\" is missing: {what} needs it."),
        format!("Add \"{name}\"."),
    );
    None
}
