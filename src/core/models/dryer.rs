//! `dryer`: heat of drying co-products, by the water that leaves.

use super::given::Given;
use super::heat_from::{HEAT_FROM, HeatFrom};
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::units::rounding::plain;

/// Heat per water evaporated where none is given, MJ/kg.
const HEAT_PER_WATER: f64 = 3.0;
const HEAT_PER_WATER_SOURCE: &str = "own default, recalled, in no source read";

/// The model.
pub const MODEL: Model = Model {
    kind: "dryer",
    title: "Dryer",
    what: "Heat of drying co-products and where it comes from.",
    source: "water evaporated x heat per water, priced by fuel and efficiency; water = dry x (w_in/(1 - w_in) - w_out/(1 - w_out))",
    term: None,
    parameters: &[
        Parameter::optional(
            "water_t",
            Takes::Number("t"),
            "from dry matter and moistures",
            "water evaporated.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "dry_t",
            Takes::Number("t"),
            "none; or water_t",
            "dry matter that passes the dryer.",
        )
        .hard(Span::positive()),
        Parameter::optional(
            "moisture_in_percent",
            Takes::Number("percent"),
            "none; or water_t",
            "water on entering, % of the wet mass.",
        )
        .hard(Span::of(0.0, 99.0)),
        Parameter::optional(
            "moisture_out_percent",
            Takes::Number("percent"),
            "none; or water_t",
            "water on leaving, % of the wet mass.",
        )
        .hard(Span::of(0.0, 99.0)),
        Parameter::optional(
            "heat_per_water",
            Takes::Amount("MJ/kg"),
            "3.0 (own, recalled)",
            "heat per water evaporated, losses of the dryer in it.",
        )
        .hard(Span::positive())
        .usual(Span::of(2.4, 5.0)),
        Parameter::required(
            "heat_from",
            Takes::Object(HEAT_FROM),
            "where the heat comes from.",
        ),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let water = water(given);
    let (per_water, source) = match given.has("heat_per_water") {
        true => (given.number("heat_per_water"), ""),
        false => (Some(HEAT_PER_WATER), HEAT_PER_WATER_SOURCE),
    };
    let from = given.nested("heat_from", HeatFrom::read);
    let (water, per_water) = (water?, per_water?);
    let heat = water * 1000.0 * per_water;
    given.step(
        format!("{} t water x 1000 x {} MJ/kg", plain(water), plain(per_water)),
        heat,
        "MJ heat",
        source,
    );
    let gases = from?.price(heat, given);
    Some(Outcome {
        gases,
        ..Outcome::default()
    })
}

/// Water evaporated, t.
fn water(given: &mut Given) -> Option<f64> {
    let names = ["dry_t", "moisture_in_percent", "moisture_out_percent"];
    if given.has("water_t") {
        let alone = given.stands_alone("water_t", &names, "Keep one of the two.");
        let water = given.number("water_t")?;
        return alone.then_some(water);
    }
    given.need(&names, "give the water evaporated as \"water_t\"");
    let [dry, wet_in, wet_out] = names.map(|name| given.number(name));
    let (dry, wet_in, wet_out) = (dry?, wet_in?, wet_out?);
    if wet_out > wet_in {
        given.problem(
            "moisture_out_percent",
            format!(
                "{} % leaves a dryer that {} % enters.",
                plain(wet_out),
                plain(wet_in)
            ),
            "Give a moisture below that on entering.",
        );
        return None;
    }
    let per_dry = |percent: f64| percent / (100.0 - percent);
    let water = dry * (per_dry(wet_in) - per_dry(wet_out));
    let text = format!(
        "{} t dry x ({1} / (100 - {1}) - {2} / (100 - {2}))",
        plain(dry),
        plain(wet_in),
        plain(wet_out)
    );
    given.step(text, water, "t water", "");
    Some(water)
}
