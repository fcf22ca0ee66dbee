//! `residue_burning`: CH4 and N2O of burning straw or trash in the field. 2006 IPCC Guidelines Vol. 4 Ch. 2 Equation 2.27
//! (recalled) and Table 2.5. Its CO2 is biogenic and not counted on cropland.

use super::factors::source_words;
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::domain::{Cited, Gas, GasVector};
use crate::core::units::rounding::plain;

const EDITION: &str = "ipcc-2006";

/// The model.
pub const MODEL: Model = Model {
    kind: "residue_burning",
    title: "Burning of residues",
    what: "CH4 and N2O of burning trash or straw in the field.",
    source: "2006 IPCC Guidelines Vol. 4 Ch. 2 Equation 2.27 (recalled): A x M_B x C_f x G_ef",
    term: None,
    parameters: &[
        Parameter::optional(
            "area_ha",
            Takes::Number("ha"),
            "none; or burnt_t",
            "area burnt, A.",
        )
        .hard(Span::positive()),
        Parameter::optional(
            "fuel_load",
            Takes::Amount("t/ha"),
            "none; or burnt_t",
            "residue on the field, dry, M_B.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "combustion_factor_percent",
            Takes::Number("percent"),
            "none; or burnt_t",
            "how much of it burns, C_f; 90 for wheat, 80 for other crops (Table 2.6, recalled).",
        )
        .hard(Span::of(0.0, 100.0)),
        Parameter::optional(
            "burnt_t",
            Takes::Number("t"),
            "area x fuel load x combustion factor",
            "dry matter burnt, in place of the three above.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "ch4_g_per_kg",
            Takes::Number("g/kg"),
            "2.7",
            "methane per dry matter burnt, G_ef.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "n2o_g_per_kg",
            Takes::Number("g/kg"),
            "0.07",
            "nitrous oxide per dry matter burnt, G_ef.",
        )
        .hard(Span::not_negative()),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let burnt = burnt(given);
    let ch4 = emission(given, "ch4_g_per_kg", "fire.ch4");
    let n2o = emission(given, "n2o_g_per_kg", "fire.n2o");
    let burnt = burnt?;
    let mut gases = GasVector::ZERO;
    for (gas, (g_per_kg, source)) in [(Gas::Ch4Biogenic, ch4?), (Gas::N2o, n2o?)] {
        gases[gas] = burnt * g_per_kg;
        let unit = format!("kg {}", gas.name());
        let text = format!("{} t burnt x {} g per kg", plain(burnt), plain(g_per_kg));
        given.step(text, gases[gas], &unit, &source);
    }
    Some(Outcome {
        gases,
        ..Outcome::default()
    })
}

/// Dry matter burnt, t.
fn burnt(given: &mut Given) -> Option<f64> {
    let parts = ["fuel_load", "combustion_factor_percent"];
    if given.has("burnt_t") {
        let remedy = "Keep one of the two: burnt_t is area x fuel load x combustion factor.";
        let alone = given.stands_alone("burnt_t", &parts, remedy);
        if given.has("area_ha") {
            given.number("area_ha")?;
        }
        let burnt = given.number("burnt_t")?;
        return alone.then_some(burnt);
    }
    let names = ["area_ha", "fuel_load", "combustion_factor_percent"];
    given.need(&names, "give the dry matter burnt as \"burnt_t\"");
    let [area, load, factor] = names.map(|name| given.number(name));
    let (area, load, factor) = (area?, load?, factor?);
    let burnt = area * load * factor / 100.0;
    let text = format!(
        "{} ha x {} t/ha dry x {} %",
        plain(area),
        plain(load),
        plain(factor)
    );
    given.step(text, burnt, "t burnt", MODEL.source);
    Some(burnt)
}

/// g per kg of dry matter burnt, and where the figure comes from.
fn emission(given: &mut Given, name: &str, symbol: &str) -> Option<(f64, String)> {
    if given.has(name) {
        return Some((given.number(name)?, String::new()));
    }
    let published: Option<&Cited> = given
        .setting
        .book
        .soils
        .get(EDITION)
        .and_then(|soil| soil.constants.get(symbol));
    let Some(figure) = published else {
        given.problem(
            name,
            format!("\"{EDITION}\" has no figure \"{symbol}\" here."),
            format!("Give \"{name}\"."),
        );
        return None;
    };
    Some((figure.value, source_words(&figure.source, figure.status)))
}
