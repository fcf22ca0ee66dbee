//! `soil_carbon`: carbon that better farming brought into the soil, as a deduction (e_sca). Implementing Regulation (EU)
//! 2022/996 Annex V; Directive (EU) 2018/2001 Annex V Part C point 6. Gas `co2_land`, kg per recipe; a claim is negative.

use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome, PerFuel};
use crate::core::documents::assessment::Severity;
use crate::core::domain::{Gas, GasVector, Term};
use crate::core::units::rounding::plain;
use jiff::ToSpan;

const BIOCHAR: &str = "biochar";

/// The model.
pub const MODEL: Model = Model {
    kind: "soil_carbon",
    title: "Soil carbon gained",
    what: "CO2 kept in the soil by better farming, as a deduction within the published cap.",
    source: "Implementing Regulation (EU) 2022/996 Annex V: (CS_A - CS_R) x 1000 x 3.664 / n x A - e_f, at most the cap \
             x fuel grown on A",
    term: Some(Term::Esca),
    parameters: &[
        Parameter::required(
            "area_ha",
            Takes::Number("ha"),
            "area of the practice per recipe, A.",
        )
        .hard(Span::positive()),
        Parameter::required(
            "carbon_before",
            Takes::Amount("t/ha"),
            "carbon in the top 30 cm before the practice, CS_R.",
        )
        .hard(Span::of(0.0, 500.0)),
        Parameter::required(
            "carbon_after",
            Takes::Amount("t/ha"),
            "carbon in the top 30 cm after n years, CS_A.",
        )
        .hard(Span::of(0.0, 500.0)),
        Parameter::required(
            "years",
            Takes::Number(""),
            "years of cultivation between the two, n.",
        )
        .hard(Span::of(1.0, 30.0)),
        Parameter::required(
            "practice",
            Takes::Word(&[
                "reduced_tillage",
                "no_tillage",
                "rotation",
                "cover_crop",
                "organic_improver",
                BIOCHAR,
            ]),
            "what is done; with biochar the cap is higher.",
        ),
        Parameter::required(
            "practice_since",
            Takes::Day,
            "first day of the practice; 3 years before a claim.",
        ),
        Parameter::required(
            "committed_until",
            Takes::Day,
            "last day of the commitment; 10 years in all.",
        ),
        Parameter::optional(
            "extra_emissions",
            Takes::Amount("kg"),
            "0",
            "CO2e of fertiliser and herbicide that the practice takes beside, e_f.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "broken",
            Takes::Flag,
            "false",
            "the commitment was left: the claim counts as an emission.",
        ),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let area = given.number("area_ha");
    let before = given.number("carbon_before");
    let after = given.number("carbon_after");
    let years = given.number("years");
    let practice = given.word("practice");
    let extra = match given.has("extra_emissions") {
        true => given.number("extra_emissions"),
        false => Some(0.0),
    };
    let broken = given.flag("broken");
    conditions(given);
    let (area, before, after, years) = (area?, before?, after?, years?);
    let (practice, extra) = (practice?, extra?);
    let per_carbon = given.setting.rules.co2_per_carbon.value;
    let gain = (after - before) * 1000.0 * per_carbon / years * area;
    let text = format!(
        "({} - {}) t C/ha x 1000 x {} / {} years x {} ha",
        plain(after),
        plain(before),
        plain(per_carbon),
        plain(years),
        plain(area)
    );
    given.step(
        text,
        gain,
        "kg CO2 gained",
        &given.setting.rules.co2_per_carbon.source,
    );
    let net = gain - extra;
    if extra > 0.0 {
        let text = format!("{} - {} kg CO2e of extra emissions", plain(gain), plain(extra));
        given.step(text, net, "kg CO2e", MODEL.source);
    }
    if broken {
        let ban = given.setting.rules.limit("soil_carbon_ban_years");
        let ban = ban.map_or(String::new(), |years| {
            format!(", and nothing can be claimed for {} years", plain(years.value))
        });
        let message = format!("the commitment was left: the year's claim counts as an emission{ban}.");
        let remedy = "Keep it so, and enter no new claim before.";
        given.note("F-10", Severity::Block, "broken", message, remedy);
    }
    // Of a practice that lost carbon there is no claim to cut or to turn round: the loss counts either way.
    let claim = if broken && net > 0.0 { net } else { -net };
    if broken && net > 0.0 {
        given.step(
            "commitment left: sign turned".to_owned(),
            claim,
            "kg co2_land",
            MODEL.source,
        );
    }
    let cap = cap(given, practice).filter(|_| net > 0.0);
    Some(Outcome {
        gases: GasVector::of(Gas::Co2Land, claim),
        per_fuel: cap.map(|(g_per_mj, source)| PerFuel {
            area_ha: area,
            claim_kg: claim,
            cap_g_per_mj: Some(g_per_mj),
            add_g_per_mj: 0.0,
            source,
        }),
        ..Outcome::default()
    })
}

/// The cap of a practice, g per MJ of fuel, and its source.
fn cap(given: &Given, practice: &str) -> Option<(f64, String)> {
    let symbol = match practice {
        BIOCHAR => "soil_carbon_cap_biochar",
        _ => "soil_carbon_cap",
    };
    let cap = given.setting.rules.limit(symbol)?;
    Some((cap.value, cap.source.clone()))
}

/// F-08: how long the practice has run and how long it is promised.
fn conditions(given: &mut Given) {
    let (since, until) = (given.day("practice_since"), given.day("committed_until"));
    let (Some(since), Some(until)) = (since, until) else {
        return;
    };
    let setting = given.setting;
    let limit = |symbol: &str| setting.rules.limit(symbol).map(|figure| figure.value);
    // Whole years of a small published figure.
    #[allow(clippy::cast_possible_truncation, reason = "a published count of years")]
    let after = |years: f64| since.saturating_add((years as i64).years());
    let mut reasons = Vec::new();
    if let Some(years) = limit("soil_carbon_practice_years")
        && after(years) > setting.period.from
    {
        let reason = format!(
            "the practice runs since {since}, and a claim needs {} years before {}",
            plain(years),
            setting.period.from
        );
        reasons.push(("practice_since", reason));
    }
    if let Some(years) = limit("soil_carbon_commitment_years")
        && after(years) > until
    {
        let reason = format!(
            "the commitment from {since} to {until} is shorter than {} years",
            plain(years)
        );
        reasons.push(("committed_until", reason));
    } else if until < setting.period.from {
        let reason = format!("the commitment ended on {until}, before the period");
        reasons.push(("committed_until", reason));
    }
    for (field, reason) in reasons {
        let message = format!("the soil-carbon credit breaks a condition: {reason}.");
        given.note(
            "F-08",
            Severity::Block,
            field,
            message,
            "Correct the day, or take the credit out.",
        );
    }
}
