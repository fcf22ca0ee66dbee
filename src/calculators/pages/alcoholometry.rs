//! Strength, mass and volume of ethanol and water, on a page.

use crate::core::models::alcoholometry::{Much, REFERENCE_C, Strength, convert};
use crate::core::units::rounding::show;
use crate::web::calculator::{Answer, Asked, Calculator, Field, Group, Sheet, Wrong};

const STRENGTHS: [(&str, &str); 2] = [("percent_vol", "% vol at 20 °C"), ("percent_mass", "% mass")];

const QUANTITIES: [(&str, &str); 4] = [
    ("litres", "litres of the mixture, as read"),
    ("kg", "kg of the mixture"),
    ("pure_litres_at_20", "litres of pure ethanol at 20 °C"),
    ("pure_kg", "kg of pure ethanol"),
];

/// The page.
pub fn page(asked: &Asked) -> Calculator {
    let known = Group {
        title: "What is known",
        words: "One strength and one quantity.",
        fields: vec![
            Field::number("strength", "Strength").required().begins("96"),
            Field::choice("strength_is", "The strength is in", &STRENGTHS)
                .required()
                .begins("percent_vol"),
            Field::number("quantity", "Quantity").required().begins("1000"),
            Field::choice("quantity_is", "The quantity is in", &QUANTITIES)
                .required()
                .begins("litres"),
            Field::number("temperature_c", "Temperature of the volume, °C")
                .begins("20")
                .hint("\u{2212}20 to 40 °C, the mixture liquid. Left empty: 20 °C."),
        ],
    };
    let page = Calculator::of(
        "Alcoholic strength",
        "One strength and one quantity of a mixture of ethanol and water in, all the others out: general formula of OIML R 22 (1975).",
        "/calculators/alcoholometry",
        vec![known],
        asked,
    );
    if asked.is_empty() {
        page
    } else {
        page.with(answer(asked))
    }
}

fn answer(asked: &Asked) -> Result<Answer, Vec<Wrong>> {
    let mut wrong = Vec::new();
    let strength = asked.need("strength", &mut wrong);
    let quantity = asked.need("quantity", &mut wrong);
    let celsius = asked.figure("temperature_c", &mut wrong);
    let strength = strength.and_then(|figure| match asked.text("strength_is") {
        "percent_mass" => Some(Strength::PercentMass(figure)),
        "" | "percent_vol" => Some(Strength::PercentVol(figure)),
        other => unknown("strength_is", other, &mut wrong),
    });
    let much = quantity.and_then(|figure| match asked.text("quantity_is") {
        "kg" => Some(Much::Kg(figure)),
        "" | "litres" => Some(Much::Litres(figure)),
        "pure_kg" => Some(Much::PureKg(figure)),
        "pure_litres_at_20" => Some(Much::PureLitres(figure)),
        other => unknown("quantity_is", other, &mut wrong),
    });
    let (Some(strength), Some(much), true) = (strength, much, wrong.is_empty()) else {
        return Err(wrong);
    };
    let mixture = convert(strength, much, celsius.unwrap_or(REFERENCE_C)).map_err(|refusals| {
        let at = |name: &str| match name {
            "strength_percent_mass" | "strength_percent_vol" => "strength",
            "temperature_c" => "temperature_c",
            _ => "quantity",
        };
        refusals
            .into_iter()
            .map(|one| Wrong::new(at(one.field), one.detail, one.remedy))
            .collect::<Vec<_>>()
    })?;
    let here = format!(
        "at {} °C",
        crate::core::units::rounding::show_all(mixture.celsius)
    );
    Ok(Answer {
        headline: vec![
            (show(mixture.pure_litres_at_20, 2), "L of pure ethanol at 20 °C".to_owned()),
            (show(mixture.kg, 2), "kg of mixture".to_owned()),
        ],
        sheets: vec![Sheet::plain(
            "The mixture",
            &[
                ("strength", mixture.percent_mass, "% mass"),
                ("strength at 20 °C", mixture.percent_vol, "% vol"),
                (&format!("density {here}"), mixture.kg_per_m3, "kg/m3"),
                ("density at 20 °C", mixture.kg_per_m3_at_20, "kg/m3"),
                ("mass of the mixture", mixture.kg, "kg"),
                (&format!("volume of the mixture {here}"), mixture.litres, "L"),
                ("volume of the mixture at 20 °C", mixture.litres_at_20, "L"),
                ("pure ethanol in it", mixture.pure_kg, "kg"),
                ("pure ethanol in it at 20 °C", mixture.pure_litres_at_20, "L"),
                ("water in it", mixture.water_kg, "kg"),
            ],
        )],
        notes: vec![
            "Source: OIML R 22 (1975), general formula; the same in Council Directive 76/766/EEC, Annex, point 4."
                .to_owned(),
        ],
        ..Answer::default()
    })
}

fn unknown<T>(field: &str, word: &str, wrong: &mut Vec<Wrong>) -> Option<T> {
    let shown: String = word.chars().take(40).collect();
    wrong.push(Wrong::new(
        field,
        format!("\"{shown}\" is none of the choices."),
        "Choose one of the list.",
    ));
    None
}
