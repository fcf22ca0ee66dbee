//! The heat of a dehydration by molecular sieve, on a page.

use super::{range, wrong};
use crate::core::models::alcoholometry::{REFERENCE_C, density};
use crate::core::models::still::{STEAM_MJ_PER_KG, SieveRequest, dry, ranges};
use crate::core::units::rounding::show;
use crate::web::calculator::{Answer, Asked, Calculator, Field, Group, Sheet, Wrong};

const FEEDS: [(&str, &str); 2] = [
    ("vapour", "vapour, from the rectifier"),
    ("liquid", "liquid: it has to be vaporised first"),
];

/// The page.
pub fn page(asked: &Asked) -> Calculator {
    let sieve = Group {
        title: "The sieve",
        words: "Assumptions of usual practice, from memory, stand in for what is left empty.",
        fields: vec![
            Field::number(ranges::SIEVE_FEED.name, "What enters, % mass")
                .required()
                .begins("94")
                .hint(range(&ranges::SIEVE_FEED, "")),
            Field::number(ranges::SIEVE_PRODUCT.name, "What leaves, % mass")
                .required()
                .begins("99.8")
                .hint(range(&ranges::SIEVE_PRODUCT, "")),
            Field::choice("feed", "It enters as", &FEEDS)
                .required()
                .begins("vapour"),
            Field::number(ranges::SUPERHEAT.name, "Superheat before the bed, K")
                .hint(range(&ranges::SUPERHEAT, "30 K")),
            Field::number(ranges::PURGE.name, "Ethanol in the purge, kg per 100 kg dry")
                .hint(range(&ranges::PURGE, "15")),
            Field::number(ranges::PURGE_STRENGTH.name, "Strength of the purge, % mass")
                .hint(range(&ranges::PURGE_STRENGTH, "72 %")),
        ],
    };
    let page = Calculator::of(
        "Dehydration",
        "The heat of a molecular sieve from strong to dry ethanol: superheat of the vapour, and the purge distilled again.",
        "/calculators/dehydration",
        vec![sieve],
        asked,
    );
    if asked.is_empty() {
        page
    } else {
        page.with(answer(asked))
    }
}

fn answer(asked: &Asked) -> Result<Answer, Vec<Wrong>> {
    let mut bad = Vec::new();
    let feed = asked.need(ranges::SIEVE_FEED.name, &mut bad);
    let product = asked.need(ranges::SIEVE_PRODUCT.name, &mut bad);
    let superheat = asked.figure(ranges::SUPERHEAT.name, &mut bad);
    let purge = asked.figure(ranges::PURGE.name, &mut bad);
    let strength = asked.figure(ranges::PURGE_STRENGTH.name, &mut bad);
    let vapour = match asked.text("feed") {
        "" | "vapour" => true,
        "liquid" => false,
        _ => {
            let detail = "It is neither of the two.";
            bad.push(Wrong::new("feed", detail, "Choose vapour or liquid."));
            true
        }
    };
    let (Some(feed), Some(product), true) = (feed, product, bad.is_empty()) else {
        return Err(bad);
    };
    let usual = SieveRequest::new(feed, product);
    let request = SieveRequest {
        feed_is_vapour: vapour,
        superheat_k: superheat.unwrap_or(usual.superheat_k),
        purge_percent: purge.unwrap_or(usual.purge_percent),
        purge_percent_mass: strength.unwrap_or(usual.purge_percent_mass),
        ..usual
    };
    let found = dry(&request).map_err(wrong)?;
    let kg_per_l = density(1.0, REFERENCE_C) / 1000.0;
    let per_l = found.total_mj_per_kg * kg_per_l;
    let steam = per_l / STEAM_MJ_PER_KG;
    let mut rows = vec![
        ("water taken out", found.water_kg_per_kg, "kg/kg pure ethanol"),
        (
            "vaporising a liquid feed",
            found.vaporise_mj_per_kg,
            "MJ/kg pure ethanol",
        ),
        ("superheat", found.superheat_mj_per_kg, "MJ/kg pure ethanol"),
        (
            "distilling the purge again",
            found.redistil_mj_per_kg,
            "MJ/kg pure ethanol",
        ),
    ];
    if let Some(column) = &found.purge_column {
        let beside = column.enthalpy_reboiler_mj;
        rows.extend([
            (
                "reboiler of the purge, by equal molar overflow",
                column.reboiler_mj,
                "MJ/kg ethanol in the purge",
            ),
            (
                "the same by enthalpies, beside it",
                beside,
                "MJ/kg ethanol in the purge",
            ),
        ]);
    }
    rows.extend([
        ("heat in all", found.total_mj_per_kg, "MJ/kg pure ethanol"),
        ("heat in all", per_l, "MJ/L pure ethanol at 20 degC"),
        (
            "the same as steam of 3.5 bar absolute",
            steam,
            "kg/L pure ethanol at 20 degC",
        ),
    ]);
    let answer = Answer {
        headline: vec![
            (show(per_l, 2), "MJ/L of heat".to_owned()),
            (show(steam, 2), "kg of steam per litre of pure ethanol".to_owned()),
        ],
        sheets: vec![Sheet::plain("Heat of the sieve", &rows)],
        notes: vec![
            "Published for comparison: 0.49 MJ/kg (NREL/TP-5100-47764) and about 1.07 MJ/kg (Kang et al. 2014)."
                .to_owned(),
            "The purge is distilled without coupling.".to_owned(),
        ],
        ..Answer::default()
    };
    Ok(answer.steps(&found.steps))
}
