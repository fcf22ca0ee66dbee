//! Carbon of land and limits of deductions.

use crate::core::domain::Status;
use crate::library::book;

/// Decision 2010/335/EU, Annex, Tables 1, 2, 4, 5, 13 (recalled).
#[test]
fn land_carbon() {
    for (symbol, value) in [
        ("soc.cold_temperate_moist.sandy", 71.0),
        ("soc.boreal.spodic", 117.0),
        ("f_lu.cropland_annual.temperate_dry", 0.8),
        ("f_mg.cropland_annual.tropical_moist.no_tillage", 1.22),
        ("f_i.cropland_annual.tropical_montane.high_with_manure", 1.41),
        ("f_lu.cropland_perennial.all", 1.0),
        ("f_mg.grassland.temperate.severely_degraded", 0.7),
        ("f_i.grassland.all.improved_high", 1.11),
        ("f_lu.forest.all", 1.0),
        ("c_veg.annual_cropland", 0.0),
        ("c_veg.grassland_cool_temperate_wet", 6.8),
    ] {
        let figure = &book().land[symbol];
        assert_eq!((figure.value, figure.status), (value, Status::Memory), "{symbol}");
    }
    assert_eq!(book().land.len(), 154);
    assert!(
        !book().land.contains_key("soc.warm_temperate_dry.spodic"),
        "no row of its own"
    );
}

/// Directive (EU) 2018/2001 Annex V Part C points 7, 8 and 15; Implementing Regulation (EU) 2022/996 Annex V.
#[test]
fn limits_of_the_directive() {
    for (symbol, value) in [
        ("land_use_since", 2008.0),
        ("degraded_land_bonus", 29.0),
        ("degraded_land_years", 20.0),
        ("soil_carbon_cap", 25.0),
        ("soil_carbon_cap_biochar", 45.0),
        ("soil_carbon_practice_years", 3.0),
        ("soil_carbon_commitment_years", 10.0),
        ("soil_carbon_ban_years", 5.0),
        ("replacement_last_year", 2035.0),
    ] {
        let figure = book().rule_sets["eu-2018-2001"].limit(symbol);
        let found = figure.map(|figure| (figure.value, figure.status));
        assert_eq!(found, Some((value, Status::Read)), "{symbol}");
    }
    assert!(book().rule_sets["inventory-ar6"].limits.is_empty());
}
