//! Reads the facts of a statement strictly: unknown fields, figures outside their range and days out of order are problems.

use super::facts::{Days, StatementFacts};
use super::part::Leaf;
use crate::core::documents::json;
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::units::rounding::plain;
use crate::core::units::{Dimension, Quantity};
use jiff::civil::Date;
use serde_json::Value;

impl StatementFacts {
    /// Reads the bytes of a document.
    ///
    /// # Errors
    /// Everything that is wrong with it, each with its pointer.
    pub fn from_bytes(bytes: &[u8]) -> Result<StatementFacts, Problems> {
        StatementFacts::from_value(&json::parse(bytes)?)
    }

    /// Reads a JSON value.
    ///
    /// # Errors
    /// Everything that is wrong with it, each with its pointer.
    pub fn from_value(value: &Value) -> Result<StatementFacts, Problems> {
        let mut problems = Problems::default();
        match StatementFacts::at(value, &Place::ROOT, &mut problems) {
            Some(facts) if problems.is_empty() => Ok(facts),
            _ => Err(problems),
        }
    }

    /// Reads the facts that stand at a place of another document.
    pub fn at(value: &Value, at: &Place, problems: &mut Problems) -> Option<StatementFacts> {
        let facts = StatementFacts::of(value, at, problems)?;
        check(&facts, at, problems);
        Some(facts)
    }
}

/// The figures that have a range: field, value, least, most, unit.
type Ranged<'f> = (&'f str, Option<f64>, f64, f64, &'static str);

fn check(facts: &StatementFacts, at: &Place, problems: &mut Problems) {
    let figures: [Ranged; 7] = [
        ("temperature_c", facts.temperature_c, -20.0, 40.0, "degC"),
        ("pressure_kpa", facts.pressure_kpa, 50.0, 10_000.0, "kPa"),
        (
            "strength_percent_mass",
            facts.strength_percent_mass,
            0.0,
            100.0,
            "% mass",
        ),
        (
            "denaturant_percent",
            facts.denaturant_percent,
            0.0,
            100.0,
            "% volume",
        ),
        ("cutoff_percent", facts.cutoff_percent, 0.0, 100.0, "%"),
        ("margin_g_per_mj", facts.margin_g_per_mj, 0.0, 100.0, "g CO2e/MJ"),
        ("aircraft_kg_co2e", facts.aircraft_kg_co2e, 0.0, 1e6, "kg CO2e"),
    ];
    for figure in figures {
        range(figure, at, problems);
    }
    if let Some(plant) = &facts.plant {
        let place = at.field("plant");
        range(
            ("latitude", plant.latitude, -90.0, 90.0, "degrees"),
            &place,
            problems,
        );
        range(
            ("longitude", plant.longitude, -180.0, 180.0, "degrees"),
            &place,
            problems,
        );
    }
    if let Some(dq) = &facts.dq {
        let place = at.field("dq");
        for (name, rating) in [
            ("technology", dq.technology),
            ("place", dq.place),
            ("time", dq.time),
        ] {
            range((name, rating, 1.0, 5.0, "on the scale"), &place, problems);
        }
    }
    for (name, rows) in [
        (
            "energy_sources",
            facts
                .energy_sources
                .iter()
                .map(|row| row.share_percent)
                .collect::<Vec<_>>(),
        ),
        (
            "upstream_statements",
            facts
                .upstream_statements
                .iter()
                .map(|row| row.share_percent)
                .collect(),
        ),
    ] {
        for (index, share) in rows.into_iter().enumerate() {
            let list = at.field(name);
            range(
                ("share_percent", share, 0.0, 100.0, "%"),
                &list.item(index),
                problems,
            );
        }
    }
    countries(facts, at, problems);
    days(facts, at, problems);
    quantity(facts, at, problems);
}

fn range((name, value, least, most, unit): Ranged, at: &Place, problems: &mut Problems) {
    let Some(value) = value.filter(|value| !(least..=most).contains(value)) else {
        return;
    };
    let detail = format!(
        "{} {unit} is outside {} to {}.",
        plain(value),
        plain(least),
        plain(most)
    );
    problems.add(at.field(name), detail, "Check the figure and its unit.");
}

fn countries(facts: &StatementFacts, at: &Place, problems: &mut Problems) {
    let mut see = |code: Option<&String>, place: &Place| {
        let fits = |code: &&String| code.len() == 2 && code.bytes().all(|b| b.is_ascii_uppercase());
        if let Some(code) = code.filter(|code| !fits(code)) {
            let detail = format!("\"{code}\" is no country code.");
            problems.add(
                place,
                detail,
                "Give two capital letters (ISO 3166-1 alpha-2), such as IE.",
            );
        }
    };
    see(facts.feedstock_country.as_ref(), &at.field("feedstock_country"));
    see(facts.production_country.as_ref(), &at.field("production_country"));
    for (name, party) in [("issuer", &facts.issuer), ("recipient", &facts.recipient)] {
        let country = party.as_ref().and_then(|party| party.country.as_ref());
        see(country, &at.field(name).field("country"));
    }
    let country = facts.plant.as_ref().and_then(|plant| plant.country.as_ref());
    see(country, &at.field("plant").field("country"));
    for (index, code) in facts.use_regions.iter().enumerate() {
        see(Some(code), &at.field("use_regions").item(index));
    }
}

/// Two days in order: the object they stand in, the field of the later one, both.
type Span<'f> = (&'f str, &'f str, (Option<Date>, Option<Date>));

fn days(facts: &StatementFacts, at: &Place, problems: &mut Problems) {
    let span = |days: &Option<Days>| days.as_ref().map_or((None, None), |days| (days.from, days.to));
    let spans: [Span; 5] = [
        ("", "valid_to", (facts.valid_from, facts.valid_to)),
        (
            "",
            "certificate_valid_to",
            (facts.certificate_valid_from, facts.certificate_valid_to),
        ),
        ("", "delivered_on", (facts.loaded_on, facts.delivered_on)),
        ("production_period", "to", span(&facts.production_period)),
        ("balance_period", "to", span(&facts.balance_period)),
    ];
    for (parent, field, days) in spans {
        let (Some(from), Some(to)) = days else { continue };
        if to < from {
            let (parent, root) = (at.field(parent), parent.is_empty());
            let place = if root { at } else { &parent };
            let detail = format!("{to} comes before {from}.");
            problems.add(place.field(field), detail, "Swap or correct the days.");
        }
    }
}

fn quantity(facts: &StatementFacts, at: &Place, problems: &mut Problems) {
    if let Some(quantity) = facts.quantity.filter(|quantity| *quantity <= 0.0) {
        let detail = format!("A quantity of {} is no consignment.", plain(quantity));
        problems.add(at.field("quantity"), detail, "Give what was delivered.");
    }
    let Some(unit) = &facts.quantity_unit else { return };
    let wanted = [Dimension::VOLUME, Dimension::MASS, Dimension::ENERGY];
    let found = Quantity::read(1.0, unit);
    if !found.is_ok_and(|quantity| wanted.contains(&quantity.dimension)) {
        let detail = format!("\"{unit}\" is no volume, mass or energy.");
        problems.add(
            at.field("quantity_unit"),
            detail,
            "Give it in m3, L, t, kg or MJ.",
        );
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    fn pointers(document: &Value) -> Vec<String> {
        let problems = StatementFacts::from_value(document).expect_err("refused");
        problems
            .list()
            .iter()
            .map(|problem| problem.pointer.clone())
            .collect()
    }

    #[test]
    fn facts_go_out_as_they_came_in() {
        let document = json!({
            "laws": ["DE"], "issuer": { "name": "Made-up Fuels", "address": ["4 Weir Lane"], "country": "IE" },
            "quantity": 3200, "quantity_unit": "m3", "temperature_c": 20, "loaded_on": "2026-08-28",
            "feedstock_class": "crop", "low_iluc": false, "support": { "given": false },
            "land_declarations": [ { "number": "LD-1", "criterion": "all", "met": true } ],
            "audit_findings": [ { "grade": "minor", "text": "a date was missing" } ] });
        let facts = StatementFacts::from_value(&document).expect("facts");
        let again = serde_json::to_value(&facts).expect("json");
        assert_eq!(StatementFacts::from_value(&again).expect("facts"), facts);
        assert_eq!(again["land_declarations"][0]["met"], true);
        assert!(again.get("recipient").is_none());
    }

    #[test]
    fn what_is_wrong_is_named_with_its_place() {
        assert_eq!(pointers(&json!({ "isuer": {} })), ["/isuer"]);
        assert_eq!(
            pointers(&json!({ "issuer": { "country": "Ireland" } })),
            ["/issuer/country"]
        );
        assert_eq!(
            pointers(&json!({ "quantity": -1, "quantity_unit": "g/MJ" })),
            ["/quantity", "/quantity_unit"]
        );
        assert_eq!(
            pointers(&json!({ "plant": { "latitude": 91 } })),
            ["/plant/latitude"]
        );
        assert_eq!(
            pointers(&json!({ "balance_period": { "from": "2026-09-30", "to": "2026-07-01" } })),
            ["/balance_period/to"]
        );
        assert_eq!(
            pointers(&json!({ "valid_from": "2027-01-01", "valid_to": "2026-01-01" })),
            ["/valid_to"]
        );
        assert_eq!(
            pointers(&json!({ "land_declarations": [ { "met": "yes" } ] })),
            ["/land_declarations/0/met"]
        );
        assert_eq!(pointers(&json!({ "scheme_name": " " })), ["/scheme_name"]);
    }
}
