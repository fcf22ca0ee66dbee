//! The editions: one folder each, with an `edition.toml` that says what it is and tables that fill it.

use super::reading::Reading;
use crate::core::domain::Edition;
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
    Some(Edition {
        id: about.id,
        title: about.title,
        citation,
        note: about.note,
        factors: BTreeMap::new(),
        aliases: BTreeMap::new(),
        fuel_splits: BTreeMap::new(),
        pathways: BTreeMap::new(),
    })
}
