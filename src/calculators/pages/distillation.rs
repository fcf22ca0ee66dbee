//! The heat of a distillation, on a page: both methods side by side.

use super::{range, wrong};
use crate::core::models::still::{Activity, FeedHeat, Pinch, Request, STEAM_MJ_PER_KG, design, ranges};
use crate::core::units::rounding::{show, show_all};
use crate::web::calculator::{Answer, Asked, Calculator, Field, Group, Sheet, Wrong};

const EQUATIONS: [(&str, &str); 2] = [
    ("nrtl", "NRTL: what models count with"),
    ("van_laar", "van Laar: a second opinion"),
];

/// The page.
pub fn page(asked: &Asked) -> Calculator {
    let streams = Group {
        title: "Strengths",
        words: "What enters, what leaves.",
        fields: vec![
            Field::number(ranges::WASH.name, "Wash, % vol at 20 °C")
                .required()
                .begins("12")
                .hint(range(&ranges::WASH, "")),
            Field::number(ranges::PRODUCT.name, "Product, % mass")
                .required()
                .begins("94")
                .hint(range(&ranges::PRODUCT, "")),
            Field::number(ranges::STILLAGE.name, "Stillage, % mass").hint(range(&ranges::STILLAGE, "0.05 %")),
        ],
    };
    let column = Group {
        title: "The column",
        words: "Assumptions of usual practice stand in for what is left empty; none of them is a published figure.",
        fields: vec![
            Field::number(ranges::REFLUX_MULTIPLE.name, "Reflux over the minimum")
                .hint(range(&ranges::REFLUX_MULTIPLE, "1.2")),
            Field::number(ranges::FEED_APPROACH.name, "Wash enters below the stillage by, K")
                .hint(range(&ranges::FEED_APPROACH, "10 K, heated by the stillage")),
            Field::number(ranges::FEED_TEMPERATURE.name, "Or the wash enters at, °C")
                .hint("Where no stillage heats it; below its bubble point."),
            Field::number(ranges::COUPLING.name, "Coupling factor").hint(format!(
                "Heat from outside over reboiler duty. {}",
                range(&ranges::COUPLING, "1, one pressure")
            )),
            Field::choice("activity", "Activity coefficients by", &EQUATIONS)
                .required()
                .begins("nrtl"),
        ],
    };
    let page = Calculator::of(
        "Distillation",
        "Reflux, heat and steam of one column from wash to strong ethanol, by equal molar overflow and, beside it, by enthalpies.",
        "/calculators/distillation",
        vec![streams, column],
        asked,
    );
    if asked.is_empty() {
        page
    } else {
        page.with(answer(asked))
    }
}

fn read(asked: &Asked) -> Result<Request, Vec<Wrong>> {
    let mut wrong = Vec::new();
    let wash = asked.need(ranges::WASH.name, &mut wrong);
    let product = asked.need(ranges::PRODUCT.name, &mut wrong);
    let stillage = asked.figure(ranges::STILLAGE.name, &mut wrong);
    let reflux = asked.figure(ranges::REFLUX_MULTIPLE.name, &mut wrong);
    let approach = asked.figure(ranges::FEED_APPROACH.name, &mut wrong);
    let celsius = asked.figure(ranges::FEED_TEMPERATURE.name, &mut wrong);
    let coupling = asked.figure(ranges::COUPLING.name, &mut wrong);
    if approach.is_some() && celsius.is_some() {
        let detail = "The warmth of the wash is given twice.";
        wrong.push(Wrong::new(
            ranges::FEED_TEMPERATURE.name,
            detail,
            "Keep one of the two.",
        ));
    }
    let activity = match asked.text("activity") {
        "" | "nrtl" => Activity::Nrtl,
        "van_laar" => Activity::VanLaar,
        _ => {
            let detail = "There is no such equation here.";
            wrong.push(Wrong::new("activity", detail, "Choose NRTL or van Laar."));
            Activity::Nrtl
        }
    };
    let (Some(wash), Some(product), true) = (wash, product, wrong.is_empty()) else {
        return Err(wrong);
    };
    let usual = Request::new(wash, product);
    Ok(Request {
        stillage_percent_mass: stillage.unwrap_or(usual.stillage_percent_mass),
        reflux_multiple: reflux.unwrap_or(usual.reflux_multiple),
        feed_heat: match (celsius, approach) {
            (Some(celsius), _) => FeedHeat::At(celsius),
            (None, Some(kelvin)) => FeedHeat::BelowStillage(kelvin),
            (None, None) => usual.feed_heat,
        },
        coupling_factor: coupling.unwrap_or(usual.coupling_factor),
        activity,
        ..usual
    })
}

fn answer(asked: &Asked) -> Result<Answer, Vec<Wrong>> {
    let request = read(asked)?;
    let found = design(&request).map_err(wrong)?;
    let column = &found.column;
    let kg_per_l = found.reboiler_mj_per_l / found.reboiler_mj_per_kg;
    let steam = |mj_per_kg: f64| mj_per_kg * kg_per_l / STEAM_MJ_PER_KG;
    let enthalpy = found.enthalpy_mj_per_kg;
    let coupling = request.coupling_factor;
    let two = |name: &str, counted: f64, beside: f64, unit: &'static str| {
        (name.to_owned(), vec![Some(counted), Some(beside)], unit)
    };
    let mut duties = vec![
        two(
            "minimum reflux",
            column.minimum.reflux,
            column.enthalpy_minimum,
            "mol/mol product",
        ),
        two(
            "reboiler duty",
            found.reboiler_mj_per_kg,
            enthalpy,
            "MJ/kg pure ethanol",
        ),
        two(
            "reboiler duty",
            found.reboiler_mj_per_l,
            enthalpy * kg_per_l,
            "MJ/L pure ethanol at 20 degC",
        ),
        two(
            "steam of 3.5 bar absolute",
            found.steam_kg_per_l,
            steam(enthalpy),
            "kg/L pure ethanol at 20 degC",
        ),
    ];
    if coupling != 1.0 {
        let words = format!("heat from outside, coupling factor {}", show_all(coupling));
        duties.push(two(
            &words,
            found.external_mj_per_kg,
            enthalpy * coupling,
            "MJ/kg pure ethanol",
        ));
        duties.push(two(
            &words,
            found.external_mj_per_l,
            enthalpy * coupling * kg_per_l,
            "MJ/L pure ethanol at 20 degC",
        ));
        duties.push(two(
            "the same as steam of 3.5 bar absolute",
            found.external_mj_per_l / STEAM_MJ_PER_KG,
            steam(enthalpy) * coupling,
            "kg/L pure ethanol at 20 degC",
        ));
    }
    let ruling = match column.minimum.ruling {
        Pinch::Feed => "The feed pinch rules the minimum reflux.",
        Pinch::Tangent => "The tangent pinch rules the minimum reflux.",
    };
    let mut notes = vec![
        ruling.to_owned(),
        "Models count with equal molar overflow; the enthalpy method stands beside it and is never used."
            .to_owned(),
    ];
    notes.extend(found.unusual.iter().cloned());
    let answer = Answer {
        headline: vec![
            (
                show(found.external_mj_per_l, 2),
                "MJ/L of heat from outside".to_owned(),
            ),
            (
                show(found.external_mj_per_l / STEAM_MJ_PER_KG, 2),
                "kg of steam per litre of pure ethanol".to_owned(),
            ),
        ],
        sheets: vec![
            Sheet {
                title: "Heat by two methods".to_owned(),
                head: vec![
                    "Equal molar overflow".to_owned(),
                    "Enthalpies, beside it".to_owned(),
                ],
                rows: duties,
            },
            Sheet::plain(
                "The column",
                &[
                    ("wash", 100.0 * found.wash_mass_fraction, "% mass"),
                    ("wash as it enters", column.feed_celsius, "degC"),
                    ("bubble point of the wash", column.bubble_celsius, "degC"),
                    ("stillage", column.stillage_celsius, "degC"),
                    ("thermal condition of the wash, q", column.q, "mol/mol"),
                    ("reflux", column.reflux, "mol/mol product"),
                    ("wash", column.feed_kg, "kg/kg pure ethanol"),
                    ("stillage", column.stillage_kg, "kg/kg pure ethanol"),
                    ("condenser", column.condenser_mj, "MJ/kg pure ethanol"),
                ],
            ),
        ],
        notes,
        ..Answer::default()
    };
    Ok(answer.steps(&found.steps))
}
