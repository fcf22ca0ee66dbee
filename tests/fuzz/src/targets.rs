//! Documents, units, figures, rule sets and settings. Bytes in; what is accepted must survive the way out and back.

use std::path::Path;
use wheelwort::config::Given;
use wheelwort::core::documents::blend::{BlendRequest, PerKmRequest};
use wheelwort::core::documents::{Pathway, canonical, json, rule_set};
use wheelwort::core::evaluate::{Options, evaluate};
use wheelwort::core::units::{Quantity, parse_unit};
use wheelwort::library;

/// A pathway that is read is written and read again the same; if it evaluates, its figures are finite.
pub fn pathway(bytes: &[u8]) {
    let pathway = match Pathway::from_bytes(bytes) {
        Ok(pathway) => pathway,
        Err(problems) => {
            assert!(!problems.is_empty(), "refused without a reason");
            return;
        }
    };
    let written = canonical::bytes(&pathway).expect("what was read can be written");
    let again = Pathway::from_bytes(&written).expect("what was written can be read");
    assert_eq!(
        canonical::bytes(&again).expect("written"),
        written,
        "not the same twice"
    );
    match evaluate(&pathway, library::book(), Options::default()) {
        Ok(assessment) => {
            // JSON has no word for a figure that is not finite: the writer refuses it.
            canonical::bytes(&assessment).expect("every figure is finite");
        }
        Err(problems) => assert!(!problems.is_empty(), "refused without a reason"),
    }
}

/// Requests to mix fuels and to drive on them.
pub fn blend(bytes: &[u8]) {
    let Ok(value) = json::parse(bytes) else { return };
    if let Err(problems) = BlendRequest::from_value(&value) {
        assert!(!problems.is_empty());
    }
    if let Err(problems) = PerKmRequest::from_value(&value) {
        assert!(!problems.is_empty());
    }
}

/// A unit, and an amount in it: into the base unit and back.
pub fn unit(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else {
        return;
    };
    let (figure, text) = text.split_once(' ').unwrap_or(("1", text));
    if let Ok(unit) = parse_unit(text) {
        let _ = unit.dimension.describe();
        let _ = unit.dimension.examples();
    }
    let Ok(figure) = figure.parse::<f64>() else { return };
    if let Ok(quantity) = Quantity::read(figure, text) {
        if let Ok(back) = quantity.in_unit(text) {
            // Near the smallest doubles a step is more than this share of the figure.
            let close = (back - figure).abs() <= figure.abs() * 1e-12 + 1e-290;
            assert!(close, "{figure} {text} came back as {back}");
        }
    }
}

/// A figure as people type it.
pub fn figure(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else {
        return;
    };
    match wheelwort::web::typed::figure(text) {
        Ok(figure) => assert!(figure.is_finite()),
        Err((fact, remedy)) => assert!(!fact.is_empty() && !remedy.is_empty() && fact.len() < 1_000),
    }
}

/// A rule set as TOML.
pub fn rule_set_toml(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else {
        return;
    };
    match rule_set::from_toml(text, library::book()) {
        Ok(set) => {
            rule_set::canonical_bytes(&set).expect("what was read can be written");
        }
        Err(problems) => assert!(!problems.is_empty(), "refused without a reason"),
    }
}

/// A rule set as JSON.
pub fn rule_set_json(bytes: &[u8]) {
    match rule_set::from_json(bytes, library::book()) {
        Ok(set) => {
            let written = rule_set::canonical_bytes(&set).expect("what was read can be written");
            rule_set::from_json(&written, library::book()).expect("what was written can be read");
        }
        Err(problems) => assert!(!problems.is_empty(), "refused without a reason"),
    }
}

/// A file of settings.
pub fn settings(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else {
        return;
    };
    // A setting may name a file to be read; which files this machine has is not the question here.
    if text.contains("_file") {
        return;
    }
    match Given::from_toml(text, Path::new("settings.toml")) {
        Ok(given) => {
            let _ = given.table();
            if let Err(error) = given.checked() {
                assert!(!error.to_string().is_empty());
            }
        }
        Err(error) => assert!(!error.to_string().is_empty()),
    }
}
