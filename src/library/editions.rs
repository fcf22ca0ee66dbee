//! The editions: one folder each, with an `edition.toml` that says what it is and tables that fill it.

use super::reading::Reading;
use crate::core::domain::Edition;
use jiff::civil::Date;
use serde::Deserialize;
use std::collections::BTreeMap;

/// `edition.toml`.
#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct About {
    id: String,
    title: String,
    source: String,
    status: String,
    note: Option<String>,
    /// First and last day it may be used, with where they stand.
    valid_from: Option<Date>,
    valid_to: Option<Date>,
    validity_source: Option<String>,
    validity_status: Option<String>,
}

/// Every edition, filled.
pub(super) fn read(reading: &mut Reading) -> BTreeMap<String, Edition> {
    let mut editions = BTreeMap::new();
    for about in [
        include_str!("editions/eu-2022-996/edition.toml"),
        include_str!("editions/eu-2018-2001/edition.toml"),
        include_str!("editions/eu-2009-28/edition.toml"),
        include_str!("editions/ipcc-2006/edition.toml"),
        include_str!("editions/ipcc-2019/edition.toml"),
    ] {
        let Some(mut edition) = empty(reading, about) else {
            continue;
        };
        match edition.id.as_str() {
            "eu-2022-996" => {
                super::eu_factors::fill(reading, &mut edition);
                super::eu_electricity::fill(reading, &mut edition);
            }
            "eu-2009-28" => super::eu_defaults::fill_2009(reading, &mut edition),
            "eu-2018-2001" => super::eu_defaults::fill(reading, &mut edition),
            "ipcc-2006" => super::ipcc_fuels::fill(reading, &mut edition),
            // Soil tables only, kept beside the editions.
            _ => {}
        }
        if editions.insert(edition.id.clone(), edition).is_some() {
            reading.problem("editions", "two editions have the same id");
        }
    }
    editions
}

fn empty(reading: &mut Reading, about: &str) -> Option<Edition> {
    let about: About = match toml::from_str(about) {
        Ok(about) => about,
        Err(error) => {
            reading.problem("edition.toml", error.to_string());
            return None;
        }
    };
    let place = format!("{}/edition.toml", about.id);
    let citation = reading.cite(&place, &about.id, &about.source, &about.status);
    let validity_source = about.validity_source.map(|source| {
        let status = about.validity_status.as_deref().unwrap_or_default();
        reading.cite(&place, &format!("{} validity", about.id), &source, status)
    });
    if validity_source.is_none() && (about.valid_from.is_some() || about.valid_to.is_some()) {
        reading.problem(&place, "days of validity without a source");
    }
    Some(Edition {
        id: about.id,
        title: about.title,
        citation,
        note: about.note,
        valid_from: about.valid_from,
        valid_to: about.valid_to,
        validity_source,
        factors: BTreeMap::new(),
        aliases: BTreeMap::new(),
        fuel_splits: BTreeMap::new(),
        pathways: BTreeMap::new(),
    })
}
