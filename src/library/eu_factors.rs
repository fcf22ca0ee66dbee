//! Standard factors of Implementing Regulation (EU) 2022/996, Annex IX, and the supply split of its fossil fuels.

use super::reading::{Reading, Row};
use crate::core::domain::factor::{FuelSplit, HaulVehicle, Use};
use crate::core::domain::{Counts, Edition, Factor, Gas, PublishedGases};
use std::collections::BTreeMap;

const COLUMNS: [&str; 16] = [
    "factor_id",
    "group",
    "item",
    "per_unit",
    "co2_g",
    "ch4_g",
    "n2o_g",
    "co2e_g_printed",
    "fossil_energy_mj_per_kg",
    "fossil_energy_mj_per_mj",
    "lhv_mj_per_kg_dry",
    "density_kg_per_m3",
    "fuel_mj_per_tkm",
    "note",
    "source",
    "status",
];

/// Figures that the Regulation prints; the other columns of the table are checks on them.
const PRINTED: [&str; 9] = [
    "co2_g",
    "ch4_g",
    "n2o_g",
    "co2e_g_printed",
    "fossil_energy_mj_per_kg",
    "fossil_energy_mj_per_mj",
    "lhv_mj_per_kg_dry",
    "density_kg_per_m3",
    "fuel_mj_per_tkm",
];

/// Boilers and engines on fossil fuel; every other `comb_` row burns biomass, whose methane is biogenic.
const FOSSIL_BURNERS: [&str; 4] = [
    "comb_hard_coal_",
    "comb_lignite_",
    "comb_ng_",
    "comb_liquid_fuel_",
];

/// Fuels of the split and the rows they belong to.
const SPLIT_FUELS: [(&str, &str); 7] = [
    ("natural gas", "fuel_natural_gas"),
    ("diesel", "fuel_diesel"),
    ("petrol", "fuel_gasoline"),
    ("heavy fuel oil", "fuel_heavy_fuel_oil"),
    ("methanol (fossil)", "fuel_methanol"),
    ("hard coal", "fuel_hard_coal"),
    ("lignite", "fuel_lignite"),
];

/// Reads every row of the factor table, then the split.
pub(super) fn fill(reading: &mut Reading, edition: &mut Edition) {
    let text = include_str!("editions/eu-2022-996/emission_factors.csv");
    for row in reading.rows("eu-2022-996/emission_factors.csv", text, &COLUMNS) {
        let factor = factor(reading, &edition.id, &row);
        edition.factors.insert(row.text("factor_id").to_owned(), factor);
    }
    splits(reading, edition);
}

fn factor(reading: &mut Reading, edition: &str, row: &Row) -> Factor {
    let id = row.text("factor_id");
    let group = row.text("group");
    let per = row.text("per_unit");
    // Two rows of print are not units: what the figure is per is settled here, in the note, or not at all.
    let unit = match per {
        "LHV, dry basis" | "kg (printed without basis; see note)" => "kg",
        other => other,
    };
    let unit = reading.unit(&row.place(), unit);
    let gases = gases(reading, row);
    let printed_co2e_g = reading.figure(row, "co2e_g_printed");
    let lhv_mj_per_kg = reading.figure(row, "lhv_mj_per_kg_dry");
    let density_kg_per_m3 = reading.figure(row, "density_kg_per_m3");
    let usage = if group == "transport" {
        Use::Haul(vehicle(reading, edition, row, gases))
    } else if id == "fert_npk_15_15_15" {
        Use::Refused(
            "The table does not print whether the figure is per kg of nitrogen or per kg of product. \
             Enter nitrogen, phosphate and potash apart."
                .to_owned(),
        )
    } else if gases.is_blank() {
        if lhv_mj_per_kg.is_none() && density_kg_per_m3.is_none() {
            reading.problem(&row.place(), "the row holds no figure");
        }
        Use::HeatingValueOnly
    } else {
        Use::Amount
    };
    let counts = if group == "electricity" {
        Counts::Power
    } else if unit.dimension.is_energy() {
        Counts::Fuel
    } else {
        Counts::Other
    };
    Factor {
        id: format!("{edition}/{id}"),
        name: row.text("item").to_owned(),
        group: group.to_owned(),
        counts,
        per: per.to_owned(),
        unit,
        gases,
        usage,
        printed_co2e_g,
        printed: printed(row, &PRINTED),
        lhv_mj_per_kg,
        density_kg_per_m3,
        note: row.some("note"),
        citation: reading.citation(row, &format!("{edition}/{id}")),
    }
}

/// The digits of the print, by column; blanks are left out.
pub(super) fn printed(row: &Row, columns: &[&str]) -> BTreeMap<String, String> {
    columns
        .iter()
        .filter_map(|column| Some(((*column).to_owned(), row.some(column)?)))
        .collect()
}

/// Gases as printed, g turned into kg. A total alone stays a total.
fn gases(reading: &mut Reading, row: &Row) -> PublishedGases {
    let mut kg = |column: &str| reading.scaled(row, column, -3);
    let (co2, ch4, n2o) = (kg("co2_g"), kg("ch4_g"), kg("n2o_g"));
    let mut gases = PublishedGases::default();
    if co2.is_none() && ch4.is_none() && n2o.is_none() {
        gases.set(Gas::Co2eUnsplit, kg("co2e_g_printed"));
        return gases;
    }
    let methane = if is_biogenic(row.text("factor_id")) {
        Gas::Ch4Biogenic
    } else {
        Gas::Ch4Fossil
    };
    gases.set(Gas::Co2Fossil, co2);
    gases.set(methane, ch4);
    gases.set(Gas::N2o, n2o);
    gases
}

fn is_biogenic(id: &str) -> bool {
    let burner = id.starts_with("comb_") && !FOSSIL_BURNERS.iter().any(|fossil| id.starts_with(fossil));
    burner || id.starts_with("digest_")
}

/// A vehicle and what drives it: the print names fuel oil in the rows of sea vessels, electric rail and the pipeline;
/// trucks (also those of sugar cane), inland ships and the United States freight train run on diesel.
fn vehicle(reading: &mut Reading, edition: &str, row: &Row, exhaust: PublishedGases) -> HaulVehicle {
    let id = row.text("factor_id");
    let electric = id.contains("_electric");
    let fuel = if electric || id.contains("pipeline") {
        None
    } else if id.contains("_fuel_oil") {
        Some(format!("{edition}/fuel_heavy_fuel_oil"))
    } else {
        Some(format!("{edition}/fuel_diesel"))
    };
    HaulVehicle {
        energy_mj_per_tkm: reading.need(row, "fuel_mj_per_tkm"),
        exhaust,
        fuel,
        electric,
    }
}

fn splits(reading: &mut Reading, edition: &mut Edition) {
    let text = include_str!("editions/eu-2022-996/fuel_upstream_split.csv");
    let columns = [
        "fuel",
        "total_g_per_mj",
        "upstream_g_per_mj",
        "combustion_g_per_mj",
        "note",
        "source",
        "status",
    ];
    for row in reading.rows("eu-2022-996/fuel_upstream_split.csv", text, &columns) {
        let named = SPLIT_FUELS.iter().find(|(fuel, _)| *fuel == row.text("fuel"));
        let printed = named
            .and_then(|(_, id)| edition.factors.get(*id))
            .and_then(|factor| factor.printed_co2e_g);
        let (Some((_, id)), Some(printed)) = (named, printed) else {
            reading.problem(&row.place(), "the split belongs to no fuel of the factor table");
            continue;
        };
        let split = FuelSplit {
            total_g_per_mj: reading.need(&row, "total_g_per_mj"),
            upstream_g_per_mj: reading.need(&row, "upstream_g_per_mj"),
            combustion_g_per_mj: reading.need(&row, "combustion_g_per_mj"),
            note: row.some("note"),
            citation: reading.citation(&row, &format!("supply and burning of {id}")),
        };
        // One decimal is printed, so the sum may be off by one in the last place.
        let parts = split.upstream_g_per_mj + split.combustion_g_per_mj;
        if (parts - split.total_g_per_mj).abs() > 0.11 || (printed - split.total_g_per_mj).abs() > 0.051 {
            reading.problem(&row.place(), "supply and burning do not add up to the factor");
        }
        edition.fuel_splits.insert((*id).to_owned(), split);
    }
}
