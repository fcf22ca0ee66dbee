//! Default and typical values of ethanol pathways: Directive (EU) 2018/2001 and the repealed Directive 2009/28/EC, each in
//! its Annex V Parts A, B, D and E.

use super::reading::{Reading, Row};
use crate::core::domain::factor::TermValues;
use crate::core::domain::{Edition, PathwayDefault, ProcessHeat};

/// Feedstocks as printed, and the built-in materials that may use their rows.
const FEEDSTOCKS: [(&str, &[&str]); 5] = [
    ("sugar beet", &["sugar_beet"]),
    ("maize grain", &["maize_grain_only"]),
    (
        "other cereals (not maize)",
        &["wheat", "rye", "barley", "triticale"],
    ),
    ("sugar cane", &["sugar_cane"]),
    ("wheat straw", &["wheat_straw"]),
];

/// Reads the 16 pathways. The two ether rows print no numbers ("as the ethanol") and are no pathways.
pub(super) fn fill(reading: &mut Reading, edition: &mut Edition) {
    let text = include_str!("editions/eu-2018-2001/default_values_ethanol.csv");
    let columns = [
        "pathway_id",
        "feedstock",
        "description",
        "process_fuel",
        "process_config",
        "stillage_biogas",
        "total_default",
        "source",
        "status",
    ];
    for row in reading.rows("eu-2018-2001/default_values_ethanol.csv", text, &columns) {
        if row.text("total_default").is_empty() {
            continue;
        }
        let (id, feedstock) = (row.text("pathway_id"), row.text("feedstock"));
        let materials = FEEDSTOCKS.iter().find(|(printed, _)| *printed == feedstock);
        if materials.is_none() {
            reading.problem(&row.place(), format!("no material belongs to \"{feedstock}\""));
        }
        let pathway = PathwayDefault {
            id: format!("{}/{id}", edition.id),
            feedstock: feedstock.to_owned(),
            feedstock_materials: materials.map_or_else(Vec::new, |(_, ids)| {
                ids.iter().map(|id| (*id).to_owned()).collect()
            }),
            description: row.text("description").to_owned(),
            process_fuel: row.text("process_fuel").to_owned(),
            process_heat: match row.text("process_config") {
                "boiler" => Some(ProcessHeat::Boiler),
                "chp" => Some(ProcessHeat::Chp),
                "not specified" => None,
                other => {
                    reading.problem(&row.place(), format!("\"{other}\" is no way to make heat"));
                    None
                }
            },
            stillage_digested: match row.text("stillage_biogas") {
                "yes" => Some(true),
                "no" => Some(false),
                "n/a" => None,
                other => {
                    reading.problem(&row.place(), format!("\"{other}\" is neither yes, no nor n/a"));
                    None
                }
            },
            default: values(reading, &row, "default"),
            typical: values(reading, &row, "typical"),
            citation: reading.citation(&row, &format!("{}/{id}", edition.id)),
        };
        edition.pathways.insert(id.to_owned(), pathway);
    }
}

/// Feedstocks of the 2009 print, by the beginning of the description, and the built-in materials that may use their rows.
/// Wood has none: nothing says which.
const FEEDSTOCKS_2009: [(&str, &[&str]); 7] = [
    ("Sugar beet", &["sugar_beet"]),
    ("Wheat grain", &["wheat"]),
    ("EU-grown maize grain", &["maize_grain_only"]),
    ("Sugar cane", &["sugar_cane"]),
    ("Wheat straw", &["wheat_straw"]),
    ("Waste wood", &[]),
    ("Farmed wood", &[]),
];

/// Reads the 11 pathways of the repealed Directive. It prints neither soil N2O nor the final fuel apart; processing is net of
/// the credit for surplus power (e_ee).
pub(super) fn fill_2009(reading: &mut Reading, edition: &mut Edition) {
    let text = include_str!("editions/eu-2009-28/default_values_ethanol.csv");
    let columns = ["pathway_id", "description", "total_default", "source", "status"];
    for row in reading.rows("eu-2009-28/default_values_ethanol.csv", text, &columns) {
        let (id, description) = (row.text("pathway_id"), row.text("description"));
        let feedstock = FEEDSTOCKS_2009
            .iter()
            .find(|(printed, _)| description.starts_with(printed));
        let Some((feedstock, materials)) = feedstock else {
            reading.problem(&row.place(), format!("no feedstock belongs to \"{description}\""));
            continue;
        };
        let fuel = description.split_once(", ").map_or("", |(_, fuel)| fuel);
        let mut values = |kind: &str| {
            let mut need = |column: &str| reading.need(&row, &format!("{column}_{kind}"));
            TermValues {
                e_ec: need("eec"),
                e_ec_soil_n2o: None,
                e_p: need("ep_less_eee"),
                e_td: need("etd"),
                e_td_final_fuel: None,
                total: need("total"),
                saving_percent: reading.need(&row, &format!("saving_{kind}_pct")),
            }
        };
        let pathway = PathwayDefault {
            id: format!("{}/{id}", edition.id),
            feedstock: (*feedstock).to_owned(),
            feedstock_materials: materials.iter().map(|id| (*id).to_owned()).collect(),
            description: description.to_owned(),
            process_fuel: fuel.to_owned(),
            process_heat: match fuel {
                fuel if fuel.ends_with("boiler") => Some(ProcessHeat::Boiler),
                fuel if fuel.ends_with("CHP") => Some(ProcessHeat::Chp),
                _ => None,
            },
            stillage_digested: None,
            default: values("default"),
            typical: values("typical"),
            citation: reading.citation(&row, &format!("{}/{id}", edition.id)),
        };
        edition.pathways.insert(id.to_owned(), pathway);
    }
}

fn values(reading: &mut Reading, row: &Row, kind: &str) -> TermValues {
    let mut need = |column: &str| reading.need(row, &format!("{column}_{kind}"));
    TermValues {
        e_ec: need("eec"),
        e_ec_soil_n2o: Some(need("eec_soil_n2o")),
        e_p: need("ep"),
        e_td: need("etd"),
        e_td_final_fuel: Some(need("etd_final_fuel")),
        total: need("total"),
        saving_percent: reading.need(row, &format!("saving_{kind}_pct")),
    }
}
