//! `land_use_change`: carbon stocks of soil and vegetation before and after, spread over years. Directive (EU) 2018/2001
//! Annex V Part C points 7 to 10; stocks by Decision 2010/335/EU. Gas `co2_land`, kg per recipe; may be negative.

use super::given::Given;
use super::land_stock::{self, Stock};
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome, PerFuel};
use crate::core::domain::{Gas, GasVector, Term};
use crate::core::units::rounding::plain;

/// The model.
pub const MODEL: Model = Model {
    kind: "land_use_change",
    title: "Land-use change",
    what: "CO2 of carbon stocks that converted land lost or gained, spread over years.",
    source: "Directive (EU) 2018/2001 Annex V Part C points 7 to 10; Decision 2010/335/EU (recalled, not read at its source): \
             (CS before - CS after) x 1000 x 3.664 / years x area, CS = SOC_ST F_LU F_MG F_I + C_VEG",
    term: Some(Term::El),
    parameters: &[
        Parameter::optional(
            "area_ha",
            Takes::Number("ha"),
            "the stage's output, where it is an area",
            "area of one recipe, A.",
        )
        .hard(Span::positive()),
        Parameter::required(
            "converted_in",
            Takes::Year,
            "year the land was converted; long ago counts nothing.",
        )
        .hard(Span::of(1900.0, 9999.0)),
        Parameter::optional(
            "climate_region",
            Takes::Word(land_stock::REGIONS),
            "none; needed unless both stocks are measured",
            "climate, for SOC_ST and the coarser regions of the factors.",
        ),
        Parameter::optional(
            "soil",
            Takes::Word(land_stock::SOILS),
            "none; needed unless both stocks are measured",
            "soil type, for SOC_ST.",
        ),
        Parameter::required(
            "before",
            Takes::Object(land_stock::STOCK),
            "the land before, CS_R.",
        ),
        Parameter::required("after", Takes::Object(land_stock::STOCK), "the land after, CS_A."),
        Parameter::optional(
            "spread_years",
            Takes::Number(""),
            "as the rule set says (20)",
            "years over which the change is spread.",
        )
        .hard(Span::of(1.0, 100.0)),
        Parameter::optional(
            "degraded_land_bonus",
            Takes::Flag,
            "false",
            "the land was unused in January 2008 and severely degraded, and evidence says so.",
        ),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let area = area(given);
    let converted = converted_in(given);
    let region = word(given, "climate_region");
    let soil = word(given, "soil");
    let ground = region.zip(soil).and_then(|(region, soil)| region.zip(soil));
    let before = given.nested("before", |stock| Stock::read(stock, "before", ground));
    let after = given.nested("after", |stock| Stock::read(stock, "after", ground));
    let years = spread_years(given);
    let bonus = bonus(given, converted);
    let (before, after) = (before?, after?);
    if before.is_published() || after.is_published() {
        needed(given, "climate_region", region.flatten());
        needed(given, "soil", soil.flatten());
    }
    let (area, converted, years, bonus) = (area?, converted?, years?, bonus?);
    ground.or((!before.is_published() && !after.is_published()).then_some(("", "")))?;
    if let Some(why) = nothing_counts(given, converted, &before, &after) {
        let besides = if bonus.is_some() { "; no bonus either" } else { "" };
        given.step(
            format!("{why}{besides}"),
            0.0,
            "kg co2_land",
            &given.setting.rules.source,
        );
        return Some(Outcome::default());
    }
    let per_carbon = given.setting.rules.co2_per_carbon.value;
    let co2 = (before.carbon - after.carbon) * 1000.0 * per_carbon / years * area;
    let text = format!(
        "({} - {}) t C/ha x 1000 x {} / {} years x {} ha",
        plain(before.carbon),
        plain(after.carbon),
        plain(per_carbon),
        plain(years),
        plain(area)
    );
    given.step(
        text,
        co2,
        "kg co2_land",
        &given.setting.rules.co2_per_carbon.source,
    );
    Some(Outcome {
        gases: GasVector::of(Gas::Co2Land, co2),
        per_fuel: bonus.map(|(g_per_mj, source)| PerFuel {
            area_ha: area,
            claim_kg: 0.0,
            cap_g_per_mj: None,
            add_g_per_mj: -g_per_mj,
            source,
        }),
        ..Outcome::default()
    })
}

/// The area named, or that of the output.
fn area(given: &mut Given) -> Option<f64> {
    if given.has("area_ha") {
        return given.number("area_ha");
    }
    let output = given.setting.output.and_then(super::flow::Measured::area_m2);
    if output.is_none() {
        given.problem(
            "area_ha",
            "\"area_ha\" is missing, and the stage's output is no area.",
            "Add \"area_ha\", the area of the stage's recipe.",
        );
    }
    output.map(|m2| m2 / 1e4)
}

/// A word that may be left out: none where it is wrong, which is noted.
fn word(given: &mut Given, name: &str) -> Option<Option<&'static str>> {
    if given.has(name) {
        given.word(name).map(Some)
    } else {
        Some(None)
    }
}

fn needed(given: &mut Given, name: &str, found: Option<&str>) {
    if found.is_none() && !given.has(name) {
        let detail = format!("\"{name}\" is missing: the published stock depends on it.");
        given.problem(
            name,
            detail,
            format!("Add \"{name}\", or give both stocks as \"carbon_t_per_ha\"."),
        );
    }
}

fn converted_in(given: &mut Given) -> Option<i32> {
    let year = given.number("converted_in")?;
    let last = given.setting.period.to.year();
    if year.fract() != 0.0 || year > f64::from(last) {
        given.problem(
            "converted_in",
            format!(
                "{} is no calendar year up to the period of the pathway.",
                plain(year)
            ),
            format!("Give a year from 1900 to {last}."),
        );
        return None;
    }
    #[allow(clippy::cast_possible_truncation, reason = "a whole number from 1900 to 9999")]
    let year = year as i32;
    Some(year)
}

/// Years of spreading: the rule set's, and no other.
fn spread_years(given: &mut Given) -> Option<f64> {
    let rules = given.setting.rules;
    let fixed = rules.land_use_years.value;
    if given.has("spread_years") && given.number("spread_years")? != fixed {
        given.problem(
            "spread_years",
            format!("{} spreads a change over {} years.", rules.title, plain(fixed)),
            "Take it out.",
        );
        return None;
    }
    Some(fixed)
}

/// The bonus in g per MJ with its source, where it is asked for; the outer value is none where there is no such thing.
fn bonus(given: &mut Given, converted: Option<i32>) -> Option<Option<(f64, String)>> {
    if !given.flag("degraded_land_bonus") {
        return Some(None);
    }
    let rules = given.setting.rules;
    let Some(bonus) = rules.limit("degraded_land_bonus") else {
        given.problem(
            "degraded_land_bonus",
            format!("{} knows no bonus for degraded land.", rules.title),
            "Take it out.",
        );
        return None;
    };
    let found = (bonus.value, bonus.source.clone());
    let years = rules.limit("degraded_land_years");
    let age = converted.map(|year| f64::from(i32::from(given.setting.harvest_year) - year));
    if let (Some(years), Some(age)) = (years, age)
        && age > years.value
    {
        let detail = format!(
            "The land was converted {} years before the harvest; the bonus lasts {} years.",
            plain(age),
            plain(years.value)
        );
        given.problem("degraded_land_bonus", detail, "Take it out.");
        return None;
    }
    Some(Some(found))
}

/// Why a conversion counts nothing, in words.
fn nothing_counts(given: &Given, converted: i32, before: &Stock, after: &Stock) -> Option<String> {
    let setting = given.setting;
    let since = setting.rules.limit("land_use_since");
    if let Some(since) = since.filter(|since| f64::from(converted) < since.value) {
        return Some(format!(
            "converted in {converted}, before January {}: nothing counts",
            plain(since.value)
        ));
    }
    let age = f64::from(i32::from(setting.harvest_year) - converted);
    if age >= setting.rules.land_use_years.value {
        return Some(format!(
            "converted in {converted}, {} years before the harvest of {}: nothing counts",
            plain(age),
            setting.harvest_year
        ));
    }
    (before.is_cropland() && after.is_cropland()).then(|| {
        "cropland before and after, annual and perennial are one use: no change of use, nothing counts"
            .to_owned()
    })
}
