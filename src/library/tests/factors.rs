//! Factors of Implementing Regulation (EU) 2022/996 against the columns of its table.

use crate::core::domain::factor::Use;
use crate::core::domain::{Counts, Factor, Gas};
use crate::core::units::Dimension;
use crate::library::book;
use csv::StringRecord;
use std::collections::BTreeMap;

const TABLE: &str = include_str!("../editions/eu-2022-996/emission_factors.csv");

fn rows(text: &str) -> Vec<BTreeMap<String, String>> {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    reader
        .deserialize()
        .map(|row| row.expect("a line of the table"))
        .collect()
}

fn factor(row: &str) -> &'static Factor {
    book()
        .factor(&format!("eu-2022-996/{row}"))
        .unwrap_or_else(|| panic!("{row} is missing"))
}

fn figure(text: &str) -> Option<f64> {
    (!text.is_empty()).then(|| text.parse().expect("a figure"))
}

#[test]
fn every_row_is_there_with_its_gases() {
    let rows = rows(TABLE);
    for row in &rows {
        let factor = factor(&row["factor_id"]);
        let grams = |column: &str| {
            figure(&row[column]).and_then(|_| format!("{}e-3", row[column]).parse::<f64>().ok())
        };
        let (co2, ch4, n2o) = (grams("co2_g"), grams("ch4_g"), grams("n2o_g"));
        let methane = factor
            .gases
            .get(Gas::Ch4Fossil)
            .or(factor.gases.get(Gas::Ch4Biogenic));
        assert_eq!(
            (
                factor.gases.get(Gas::Co2Fossil),
                methane,
                factor.gases.get(Gas::N2o)
            ),
            (co2, ch4, n2o),
            "{}",
            factor.id
        );
        let split = co2.or(ch4).or(n2o).is_some();
        let total = if split { None } else { grams("co2e_g_printed") };
        assert_eq!(factor.gases.get(Gas::Co2eUnsplit), total, "{}", factor.id);
        assert_eq!(factor.printed_co2e_g, figure(&row["co2e_g_printed"]));
        assert_eq!(factor.lhv_mj_per_kg, figure(&row["lhv_mj_per_kg_dry"]));
        assert_eq!(factor.density_kg_per_m3, figure(&row["density_kg_per_m3"]));
        assert_eq!(factor.citation.source, row["source"]);
    }
    // Three of the 129 electricity rows stand in the factor table too.
    assert_eq!(
        book().editions["eu-2022-996"].factors.len(),
        rows.len() + 43 * 3 - 3
    );
}

/// Annex IX as printed.
#[test]
fn spot_values() {
    let an = factor("fert_n_an");
    assert_eq!(an.gases.get(Gas::Co2Fossil), Some(2.671));
    assert_eq!(an.gases.get(Gas::Ch4Fossil), Some(0.0069));
    assert_eq!(an.gases.get(Gas::N2o), Some(0.0021));
    assert_eq!(an.printed["co2e_g_printed"], "3469");
    assert_eq!((an.counts, an.per.as_str()), (Counts::Other, "kg N"));

    let gas = factor("fuel_natural_gas");
    assert_eq!(gas.gases.get(Gas::Co2Fossil), Some(0.066));
    assert_eq!(gas.gases.get(Gas::N2o), None, "a blank is not a zero");
    assert_eq!((gas.lhv_mj_per_kg, gas.counts), (Some(49.2), Counts::Fuel));
    assert_eq!(gas.unit.dimension, Dimension::ENERGY);

    assert_eq!(factor("fuel_diesel").density_kg_per_m3, Some(832.0));
    assert_eq!(
        factor("digest_open_manure_digestate_storage")
            .gases
            .get(Gas::Ch4Biogenic),
        Some(0.0019917)
    );
    assert_eq!(
        factor("lime_acid_soil").unit.dimension,
        factor("lime_nonacid_soil").unit.dimension
    );
    assert_eq!(factor("conv_mgso4").gases.get(Gas::N2o), Some(-0.000002));
}

#[test]
fn methane_of_burning_follows_the_fuel() {
    let biogenic = |row: &str| factor(row).gases.get(Gas::Ch4Biogenic).is_some();
    for row in [
        "comb_bagasse_boiler",
        "comb_biogas_chp_gas_engine",
        "comb_straw_pellet_chp",
        "comb_wood_chip_chp",
        "comb_agricultural_residue_chp",
        "comb_palm_shells_and_fibres_boiler",
        "comb_pkm_chp",
        "comb_sawdust_boiler",
    ] {
        assert!(biogenic(row), "{row}");
    }
    for row in [
        "comb_ng_boiler",
        "comb_ng_gas_engine",
        "comb_hard_coal_chp",
        "comb_lignite_chp",
        "comb_liquid_fuel_boiler",
        "mach_diesel_agriculture",
        "fuel_hard_coal",
    ] {
        assert!(!biogenic(row), "{row}");
    }
}

#[test]
fn rows_are_used_as_they_can_be() {
    assert_eq!(factor("fuel_ethanol").usage, Use::HeatingValueOnly);
    assert_eq!(factor("lhv_wheat").usage, Use::HeatingValueOnly);
    assert!(
        matches!(&factor("fert_npk_15_15_15").usage, Use::Refused(reason) if reason.contains("nitrogen"))
    );
    assert_eq!(
        factor("seed_soy_bean").usage,
        Use::Amount,
        "printed zeros are figures"
    );
    assert_eq!(factor("elec_eu27_2019_mv").counts, Counts::Power);
    assert_eq!(factor("mach_diesel_agriculture").counts, Counts::Fuel);
    assert_eq!(factor("conv_n_hexane").counts, Counts::Fuel);
    assert_eq!(factor("conv_naoh").counts, Counts::Other);
    for factor in book().editions["eu-2022-996"].factors.values() {
        assert_eq!(
            factor.counts == Counts::Fuel,
            factor.unit.dimension.is_energy() && factor.group != "electricity"
        );
        let computes = matches!(factor.usage, Use::Amount | Use::Refused(_));
        assert!(!(computes && factor.gases.is_blank()), "{}", factor.id);
    }
}

/// The table's own column of g CO2e per t km was worked out with diesel 95.1 or heavy fuel oil 94.2.
#[test]
fn vehicles_have_their_fuel() {
    let mut checked = 0;
    for row in rows(TABLE).iter().filter(|row| row["group"] == "transport") {
        let Use::Haul(vehicle) = &factor(&row["factor_id"]).usage else {
            panic!("{}", row["factor_id"])
        };
        assert_eq!(Some(vehicle.energy_mj_per_tkm), figure(&row["fuel_mj_per_tkm"]));
        let Some(derived) = figure(&row["derived_co2e_g_per_tkm_gwp_25_298"]) else {
            assert!(vehicle.fuel.is_none());
            continue;
        };
        let fuel = vehicle
            .fuel
            .as_deref()
            .and_then(|id| book().factor(id))
            .expect("a fuel");
        let gwp = &book().gwp_sets["eu-2018-2001"];
        let g =
            vehicle.energy_mj_per_tkm * fuel.gases.vector().co2e(gwp) + vehicle.exhaust.vector().co2e(gwp);
        assert!(
            (g * 1000.0 - derived).abs() < 0.006,
            "{}: {g} {derived}",
            row["factor_id"]
        );
        checked += 1;
    }
    assert_eq!(checked, 29);
    let fuel = |row: &str| match &factor(row).usage {
        Use::Haul(vehicle) => (vehicle.fuel.clone(), vehicle.electric),
        other => panic!("{other:?}"),
    };
    assert_eq!(fuel("tr_rail_electric_mv"), (None, true));
    assert_eq!(fuel("tr_local_10_km_pipeline"), (None, false));
    assert_eq!(
        fuel("tr_truck_40_tonne_for_sugar_cane_transport"),
        (Some("eu-2022-996/fuel_diesel".to_owned()), false)
    );
}

/// CO2e worked out from the gases with 25 and 298 meets the print within the rounding of both.
#[test]
fn printed_co2e_follows_from_the_gases() {
    let half_digit = |text: &str| {
        text.split_once('.').map_or(0.5, |(_, d)| {
            0.5 * 0.1f64.powi(i32::try_from(d.len()).expect("a few decimals"))
        })
    };
    let mut reader = csv::Reader::from_reader(TABLE.as_bytes());
    let head: StringRecord = reader.headers().expect("a head").clone();
    let mut apart = Vec::new();
    let mut checked = 0;
    for row in reader.records() {
        let row = row.expect("a line");
        let cell = |column: &str| {
            row.get(head.iter().position(|name| name == column).expect("a column"))
                .unwrap_or("")
        };
        let printed = cell("co2e_g_printed");
        let weights = [("co2_g", 1.0), ("ch4_g", 25.0), ("n2o_g", 298.0)];
        if printed.is_empty() || weights.iter().all(|(column, _)| cell(column).is_empty()) {
            continue;
        }
        checked += 1;
        let gwp = &book().gwp_sets["eu-2018-2001"];
        let found = factor(cell("factor_id")).gases.vector().co2e(gwp) * 1000.0;
        let given = weights.iter().filter(|(column, _)| !cell(column).is_empty());
        let room: f64 = given
            .map(|(column, weight)| weight * half_digit(cell(column)))
            .sum();
        if (found - printed.parse::<f64>().expect("a figure")).abs() > room + half_digit(printed) {
            apart.push(cell("factor_id").to_owned());
        }
    }
    assert_eq!(apart, Vec::<String>::new());
    assert_eq!(checked, 99);
}

#[test]
fn electricity_by_country_and_voltage() {
    let germany = factor("elec_germany_2019_mv");
    assert_eq!(germany.gases.get(Gas::Co2eUnsplit), Some(0.388));
    assert_eq!(
        germany.name,
        "grid electricity used, Germany 2019, medium voltage"
    );
    assert_eq!(factor("elec_2019_de_mv"), germany);
    assert_eq!(factor("elec_2019_eu_lv"), factor("elec_eu27_2019_lv"));
    assert_eq!(factor("elec_2019_gr_hv"), factor("elec_greece_2019_hv"));
    assert_eq!(factor("elec_2019_gb_hv"), factor("elec_united_kingdom_2019_hv"));
    assert_eq!(factor("elec_2019_xk_hv"), factor("elec_kosovo_2019_hv"));
    assert_eq!(
        factor("elec_2019_ba_lv"),
        factor("elec_bosnia_herzegovina_2019_lv")
    );
    assert_eq!(book().editions["eu-2022-996"].aliases.len(), 43 * 3);
    assert!(book().factor("eu-2022-996/elec_2019_uk_mv").is_none());
}

/// Delegated Regulation (EU) 2023/1185, Annex Part B.
#[test]
fn fuels_show_their_supply_apart() {
    let splits = &book().editions["eu-2022-996"].fuel_splits;
    assert_eq!(splits.len(), 7);
    let diesel = &splits["fuel_diesel"];
    assert_eq!(
        (
            diesel.upstream_g_per_mj,
            diesel.combustion_g_per_mj,
            diesel.total_g_per_mj
        ),
        (21.9, 73.2, 95.1)
    );
}
