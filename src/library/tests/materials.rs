//! Built-in materials.

use crate::core::domain::{CarbonClass, Status};
use crate::library::book;

/// Regulation (EU) 2022/996 Annex IX for heating values; carbon as collected.
#[test]
fn spot_values() {
    let wheat = &book().materials["wheat"];
    assert_eq!(
        (wheat.lhv_dry(), wheat.carbon_percent_dry()),
        (Some(17.0), Some(45.0))
    );
    assert_eq!(wheat.carbon_class, CarbonClass::Typical);
    let carbon = &wheat.properties["carbon_percent_dry"];
    assert_eq!(
        (carbon.lower, carbon.upper, carbon.figure.status),
        (Some(44.7), Some(45.4), Status::Read)
    );
    assert_eq!(book().materials["ddgs_wheat"].lhv_dry(), Some(18.1));
    assert_eq!(book().materials["ethanol"].carbon_class, CarbonClass::Exact);
    assert_eq!(book().materials["straw"].carbon_class, CarbonClass::Side);
    assert_eq!(book().materials["vinasse"].carbon_class, CarbonClass::Measure);
}

#[test]
fn every_heating_value_of_the_law_has_a_material() {
    let edition = &book().editions["eu-2022-996"];
    let mut seen = 0;
    for (id, row) in &edition.factors {
        let Some(id) = id.strip_prefix("lhv_") else {
            continue;
        };
        assert_eq!(book().materials[id].lhv_dry(), row.lhv_mj_per_kg, "{id}");
        seen += 1;
    }
    assert_eq!(seen, 47);
    let bales = &book().materials["straw_bales"];
    assert_eq!(bales.value("bulk_density"), Some(125.0));
    assert_eq!(
        (bales.carbon_class, bales.carbon_percent_dry()),
        (CarbonClass::Measure, None)
    );
    assert_eq!(
        bales.properties["lhv_dry"].figure.source,
        edition.factors["lhv_straw_bales"].citation.source
    );
}

#[test]
fn residues_by_law() {
    let set = &book().rule_sets["eu-2018-2001"];
    let found: Vec<&str> = book()
        .materials
        .keys()
        .map(String::as_str)
        .filter(|id| set.is_residue_by_law(id))
        .collect();
    assert_eq!(
        found,
        [
            "agricultural_residue_bales",
            "bagasse",
            "bagasse_bales_dry",
            "bagasse_exit_mill_dry",
            "bagasse_pellets_dry",
            "straw",
            "straw_bales",
            "straw_chopped",
            "straw_pellets",
            "wheat_straw",
        ]
    );
}

#[test]
fn heat_and_power_are_energy_without_carbon() {
    for id in ["heat", "power"] {
        let material = &book().materials[id];
        assert_eq!(material.kind, "energy");
        assert_eq!((material.lhv_dry(), material.carbon_percent_dry()), (None, None));
    }
}
