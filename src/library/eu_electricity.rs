//! Grid electricity used in 2019 by country and voltage, Implementing Regulation (EU) 2022/996, Annex IX.

use super::eu_factors::printed;
use super::reading::{Reading, Row};
use crate::core::domain::factor::Use;
use crate::core::domain::{Counts, Edition, Factor, Gas, PublishedGases};
use std::collections::BTreeMap;

const VOLTAGES: [(&str, &str, &str); 3] = [
    ("hv", "high voltage", "used_hv_gco2e_per_kwh"),
    ("mv", "medium voltage", "used_mv_gco2e_per_kwh"),
    ("lv", "low voltage", "used_lv_gco2e_per_kwh"),
];

/// Reads one row per country and voltage, with `elec_2019_<country code>_<voltage>` as a second name.
/// Rows that the factor table already holds (the average of the Union) must agree and stay.
pub(super) fn fill(reading: &mut Reading, edition: &mut Edition) {
    let codes = codes(reading);
    let text = include_str!("editions/eu-2022-996/electricity_2019.csv");
    let columns = [
        "country",
        "net_production_gco2e_per_kwh",
        VOLTAGES[0].2,
        VOLTAGES[1].2,
        VOLTAGES[2].2,
        "source",
        "status",
    ];
    for row in reading.rows("eu-2022-996/electricity_2019.csv", text, &columns) {
        let country = row.text("country").to_owned();
        let slug = country.to_lowercase().replace(' ', "_");
        for (voltage, words, column) in VOLTAGES {
            let id = format!("elec_{slug}_2019_{voltage}");
            let factor = factor(reading, &edition.id, &row, &id, words, column);
            match codes.get(&country) {
                Some(code) => {
                    edition
                        .aliases
                        .insert(format!("elec_2019_{code}_{voltage}"), id.clone());
                }
                None => reading.problem(&row.place(), "the country has no code"),
            }
            match edition.factors.get(&id) {
                Some(other) if other.gases == factor.gases && other.unit == factor.unit => {}
                Some(_) => reading.problem(&row.place(), format!("{id} differs from the factor table")),
                None => {
                    edition.factors.insert(id, factor);
                }
            }
        }
    }
}

fn codes(reading: &mut Reading) -> BTreeMap<String, String> {
    let text = include_str!("editions/eu-2022-996/country_codes.csv");
    let rows = reading.rows(
        "eu-2022-996/country_codes.csv",
        text,
        &["country", "code", "source", "status"],
    );
    let mut codes = BTreeMap::new();
    for row in rows {
        reading.citation(&row, row.text("country"));
        codes.insert(row.text("country").to_owned(), row.text("code").to_owned());
    }
    codes
}

fn factor(reading: &mut Reading, edition: &str, row: &Row, id: &str, words: &str, column: &str) -> Factor {
    let country = row.text("country");
    let g_per_kwh = reading.need(row, column);
    let mut gases = PublishedGases::default();
    gases.set(Gas::Co2eUnsplit, reading.scaled(row, column, -3));
    Factor {
        id: format!("{edition}/{id}"),
        name: format!("grid electricity used, {country} 2019, {words}"),
        group: "electricity".to_owned(),
        counts: Counts::Power,
        per: "kWh".to_owned(),
        unit: reading.unit(&row.place(), "kWh"),
        gases,
        usage: Use::Amount,
        printed_co2e_g: Some(g_per_kwh),
        printed: printed(row, &[column, "net_production_gco2e_per_kwh"]),
        lhv_mj_per_kg: None,
        density_kg_per_m3: None,
        note: Some("Includes upstream, excludes plant construction.".to_owned()),
        citation: reading.citation(row, &format!("{edition}/{id}")),
    }
}
