//! Soil tables.

use crate::core::domain::Status;
use crate::library::book;

fn constant(edition: &str, symbol: &str) -> f64 {
    book().soils[edition]
        .constants
        .get(symbol)
        .unwrap_or_else(|| panic!("{edition} {symbol}"))
        .value
}

/// Site factor for 150 kg N/ha, 1 to 3 % carbon, pH 5.5 to 7.3, medium texture, temperate oceanic, cereals:
/// 0.00711071 kg N2O-N/kg N, worked out from Annex VII point 1.5.2 apart from this program.
#[test]
fn effect_values_give_the_site_factor() {
    let effect = |symbol: &str| constant("eu-2022-996", &format!("effect.{symbol}"));
    let classes = effect("constant")
        + effect("experiment_1_year")
        + effect("soil_organic_carbon.1_to_3_percent")
        + effect("soil_ph_class.5.5_to_7.3")
        + effect("soil_texture.medium")
        + effect("climate_class.temperate_oceanic")
        + effect("vegetation.cereals");
    let emitted = |n: f64| (classes + effect("n_rate") * n).exp();
    let factor = (emitted(150.0) - emitted(0.0)) / 150.0;
    assert!((factor - 0.00711071).abs() < 5e-9, "{factor}");
}

#[test]
fn every_class_has_its_effect() {
    let classes = [
        (
            "soil_organic_carbon",
            vec!["below_1_percent", "1_to_3_percent", "above_3_percent"],
        ),
        ("soil_ph_class", vec!["below_5.5", "5.5_to_7.3", "above_7.3"]),
        ("soil_texture", vec!["coarse", "medium", "fine"]),
        (
            "climate_class",
            vec![
                "subtropical",
                "temperate_continental",
                "temperate_oceanic",
                "tropical",
            ],
        ),
        (
            "vegetation",
            vec!["cereals", "grass", "legume", "none", "other", "wetland_rice"],
        ),
    ];
    let found = book().soils["eu-2022-996"]
        .constants
        .keys()
        .filter(|key| key.starts_with("effect."))
        .count();
    assert_eq!(
        found,
        3 + classes.iter().map(|(_, classes)| classes.len()).sum::<usize>()
    );
    for (driver, classes) in classes {
        for class in classes {
            assert!(constant("eu-2022-996", &format!("effect.{driver}.{class}")).is_finite());
        }
    }
    assert_eq!(constant("eu-2022-996", "effect.vegetation.wetland_rice"), -0.885);
}

/// Regulation (EU) 2022/996 Annex VII points 1.4 and 1.5.1.
#[test]
fn constants_of_the_regulation() {
    let expected = [
        ("ef1", 0.01),
        ("ef2_temperate", 8.0),
        ("ef2_tropical", 16.0),
        ("ef4", 0.01),
        ("ef5", 0.0075),
        ("frac_gasf", 0.1),
        ("frac_gasm", 0.2),
        ("frac_leach", 0.3),
        ("f_vf_per_kg_cane", 0.000508),
        ("n2o_per_n2o_n", 44.0 / 28.0),
        ("acidity.nitrate", 0.806),
        ("acidity.urea", 0.783),
        ("lime.acid", 0.44),
        ("lime.nonacid", 0.079),
        ("lime.ph_limit", 6.4),
    ];
    for (symbol, value) in expected {
        assert_eq!(constant("eu-2022-996", symbol), value, "{symbol}");
    }
}

/// 2006 Guidelines and 2019 Refinement, Volume 4 Chapter 11, Tables 11.1 and 11.3, Equations 11.12 and 11.13.
#[test]
fn constants_of_the_guidelines() {
    let expected = [
        ("ef1", 0.01),
        ("ef4", 0.01),
        ("ef5", 0.0075),
        ("frac_gasf", 0.1),
        ("frac_gasm", 0.2),
        ("frac_leach", 0.3),
        ("ef2_temperate", 8.0),
        ("ef2_tropical", 16.0),
        ("lime.limestone", 0.12),
        ("lime.dolomite", 0.13),
        ("urea", 0.2),
    ];
    for (symbol, value) in expected {
        assert_eq!(constant("ipcc-2006", symbol), value, "{symbol}");
    }
    let expected = [
        ("ef1.aggregated", 0.01),
        ("ef1.wet.synthetic", 0.016),
        ("ef1.wet.other", 0.006),
        ("ef1.dry", 0.005),
        ("ef4.aggregated", 0.01),
        ("ef4.wet", 0.014),
        ("ef4.dry", 0.005),
        ("ef5", 0.011),
        ("frac_gasf", 0.11),
        ("frac_gasm", 0.21),
        ("frac_leach.aggregated", 0.24),
        ("frac_leach.wet", 0.24),
        ("frac_leach.dry", 0.0),
        ("frac_gasf.urea", 0.15),
        ("frac_gasf.ammonium_sulphate", 0.08),
        ("frac_gasf.monoammonium_phosphate", 0.08),
        ("frac_gasf.diammonium_phosphate", 0.08),
        ("frac_gasf.calcium_nitrate", 0.01),
        ("frac_gasf.ammonium_nitrate", 0.05),
        ("frac_gasf.calcium_ammonium_nitrate", 0.05),
        ("frac_gasf.urea_ammonium_nitrate", 0.11),
        ("frac_gasf.npk", 0.11),
        ("frac_gasf.anhydrous_ammonia", 0.11),
        ("frac_gasf.other", 0.11),
    ];
    for (symbol, value) in expected {
        assert_eq!(constant("ipcc-2019", symbol), value, "{symbol}");
    }
}

fn residue(edition: &str, crop: &str, figure: &str) -> Option<f64> {
    book().soils[edition]
        .residues
        .get(crop)?
        .figures
        .get(figure)
        .copied()
}

/// Annex VII Table 1; Tables 11.2 (2006) and 11.1A (2019).
#[test]
fn crop_residues() {
    assert_eq!(residue("eu-2022-996", "wheat", "slope"), Some(1.51));
    assert_eq!(residue("eu-2022-996", "wheat", "cf"), Some(0.9));
    assert_eq!(residue("eu-2022-996", "sugar_cane", "r_ag"), Some(0.43));
    assert_eq!(residue("eu-2022-996", "sugar_beet", "slope"), None);
    assert_eq!(residue("ipcc-2006", "wheat", "r_bg_bio"), Some(0.24));
    assert_eq!(residue("ipcc-2006", "maize", "intercept"), Some(0.61));
    assert_eq!(residue("ipcc-2006", "winter_wheat", "cf"), Some(0.9));
    assert_eq!(residue("ipcc-2006", "barley", "cf"), Some(0.8));
    assert_eq!(residue("ipcc-2019", "maize", "rs"), Some(0.22));
    assert_eq!(
        residue("ipcc-2019", "wheat", "r_ag"),
        residue("ipcc-2019", "winter_wheat", "r_ag")
    );
    assert_eq!(residue("ipcc-2019", "other_grain", "r_ag"), Some(1.3));
    // Printed as NA: no figure, never a zero.
    assert_eq!(residue("ipcc-2006", "rye", "r_bg_bio"), None);
    assert_eq!(residue("ipcc-2019", "rice", "n_bg"), None);
    let status = |edition: &str, crop: &str| book().soils[edition].residues[crop].citation.status;
    assert_eq!(status("ipcc-2006", "wheat"), Status::Memory);
    assert_eq!(status("ipcc-2006", "maize"), Status::Read);
    assert_eq!(book().soils["eu-2022-996"].residues.len(), 12);
    assert!(
        !book().soils["ipcc-2006"].residues.contains_key("sugar_beet"),
        "no row of its own"
    );
}
