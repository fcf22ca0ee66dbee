//! Soil N2O, acidity and lime of Implementing Regulation (EU) 2022/996, Annex VII points 1.4 and 1.5.

use super::reading::{Reading, Row};
use crate::core::domain::Cited;
use crate::core::domain::book::{ResidueRow, SoilTables};
use std::collections::BTreeMap;

/// Crops of Table 1 by the names that documents use. Fixed-N and oil crops that make no ethanol are left out.
const CROPS: [(&str, &str); 12] = [
    ("barley", "barley"),
    ("cassava", "cassava"),
    ("maize", "maize"),
    ("rapeseed", "rapeseed"),
    ("rye", "rye"),
    ("sorghum grain", "sorghum"),
    ("soybeans", "soya"),
    ("sugar beet", "sugar_beet"),
    ("sugar cane", "sugar_cane"),
    ("sunflower seed", "sunflower"),
    ("triticale", "triticale"),
    ("wheat", "wheat"),
];

/// Columns of Table 1 and the figures they give.
const FIGURES: [(&str, &str); 8] = [
    ("dry_fraction", "dry"),
    ("n_above_ground", "n_ag"),
    ("slope", "slope"),
    ("intercept", "intercept"),
    ("r_bg_bio", "r_bg_bio"),
    ("n_below_ground", "n_bg"),
    ("cf", "cf"),
    ("r_ag", "r_ag"),
];

/// Drivers of Table 2 and what documents call them; an empty name is a constant of its own.
const DRIVERS: [(&str, &str); 8] = [
    ("constant", "constant"),
    ("fertiliser_n", "n_rate"),
    ("experiment_length", "experiment"),
    ("soil_organic_c", "soil_organic_carbon"),
    ("soil_ph", "soil_ph_class"),
    ("texture", "soil_texture"),
    ("climate", "climate_class"),
    ("vegetation", "vegetation"),
];

/// The soil tables of the Regulation.
pub(super) fn read(reading: &mut Reading) -> SoilTables {
    let mut tables = SoilTables::default();
    constants(reading, &mut tables);
    effects(reading, &mut tables);
    acidity_and_lime(reading, &mut tables);
    residues(reading, &mut tables);
    tables
}

fn constants(reading: &mut Reading, tables: &mut SoilTables) {
    let text = include_str!("editions/eu-2022-996/n2o_constants.csv");
    let columns = ["symbol", "value", "unit", "source", "status"];
    for row in reading.rows("eu-2022-996/n2o_constants.csv", text, &columns) {
        // The Regulation's subscript only says that the share holds where leaching occurs.
        let symbol = match row.text("symbol") {
            "frac_leach_h" => "frac_leach",
            other => other,
        };
        let figure = reading.cited(&row, "value", &format!("eu-2022-996 soil constant {symbol}"));
        reading.constant(tables, symbol.to_owned(), figure);
    }
}

fn effects(reading: &mut Reading, tables: &mut SoilTables) {
    let text = include_str!("editions/eu-2022-996/n2o_effect_values.csv");
    let columns = ["driver", "class", "effect_value", "source", "status"];
    for row in reading.lines("eu-2022-996/n2o_effect_values.csv", text, &columns) {
        let Some((_, driver)) = DRIVERS.iter().find(|(printed, _)| *printed == row.text("driver")) else {
            reading.problem(&row.place(), "the driver is unknown");
            continue;
        };
        let class = row.text("class").replace(" %", "_percent").replace(' ', "_");
        let (symbol, unit) = match *driver {
            "constant" => ("effect.constant".to_owned(), "1"),
            "n_rate" => ("effect.n_rate".to_owned(), "1/(kg N/ha)"),
            "experiment" => (format!("effect.experiment_{class}"), "1"),
            driver => (format!("effect.{driver}.{class}"), "1"),
        };
        let mut figure = reading.cited(&row, "effect_value", &format!("eu-2022-996 {symbol}"));
        figure.unit = unit.to_owned();
        reading.constant(tables, symbol, figure);
    }
}

/// The four soil rows of the factor table, in kg, and the pH that parts the two lime rows.
fn acidity_and_lime(reading: &mut Reading, tables: &mut SoilTables) {
    let text = include_str!("editions/eu-2022-996/emission_factors.csv");
    for row in reading.rows(
        "eu-2022-996/emission_factors.csv",
        text,
        &["factor_id", "co2_g", "source", "status"],
    ) {
        let symbol = match row.text("factor_id") {
            "soil_acid_nitrate" => "acidity.nitrate",
            "soil_acid_urea" => "acidity.urea",
            "lime_acid_soil" => "lime.acid",
            "lime_nonacid_soil" => "lime.nonacid",
            _ => continue,
        };
        let unit = format!("kg CO2/{}", row.text("per_unit"));
        let figure = in_kg(reading, &row, unit);
        if symbol == "lime.acid" {
            let limit = Cited {
                value: 6.4,
                unit: "pH".to_owned(),
                note: None,
                ..figure.clone()
            };
            reading.constant(tables, "lime.ph_limit".to_owned(), limit);
        }
        reading.constant(tables, symbol.to_owned(), figure);
    }
}

/// The citation is noted where the factor table itself is read.
fn in_kg(reading: &mut Reading, row: &Row, unit: String) -> Cited {
    let named = format!("eu-2022-996/{}", row.text("factor_id"));
    let mut figure = reading.cited(row, "co2_g", &named);
    figure.value = reading.scaled(row, "co2_g", -3).unwrap_or(0.0);
    figure.unit = unit;
    figure
}

fn residues(reading: &mut Reading, tables: &mut SoilTables) {
    let text = include_str!("editions/eu-2022-996/n2o_crop_residue.csv");
    let mut columns = vec!["crop", "source", "status"];
    columns.extend(FIGURES.iter().map(|(column, _)| *column));
    for row in reading.rows("eu-2022-996/n2o_crop_residue.csv", text, &columns) {
        let crop = row.text("crop").to_owned();
        let Some((_, name)) = CROPS.iter().find(|(printed, _)| *printed == crop) else {
            continue;
        };
        let mut figures = BTreeMap::new();
        for (column, figure) in FIGURES {
            if let Some(value) = reading.figure(&row, column) {
                figures.insert(figure.to_owned(), value);
            }
        }
        let citation = reading.citation(&row, &format!("eu-2022-996 crop residue {crop}"));
        tables.residues.insert(
            (*name).to_owned(),
            ResidueRow {
                crop,
                figures,
                citation,
            },
        );
    }
    if tables.residues.len() != CROPS.len() {
        reading.problem("eu-2022-996/n2o_crop_residue.csv", "a crop is missing");
    }
}
