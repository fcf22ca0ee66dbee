//! `fermentation_co2`: the biogenic CO2 of the sugar split. Weight 0 in the result; it feeds the carbon balance.

use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::documents::assessment::Severity;
use crate::core::domain::{Gas, GasVector};
use crate::core::units::rounding::{plain, plain_fixed};

/// Molar masses, g/mol.
const CO2: f64 = 44.0095;
const ETHANOL: f64 = 46.06844;
const GLUCOSE: f64 = 180.15588;
const SOURCE: &str = "molar masses: one mole of CO2 per mole of ethanol";

/// The most ethanol that a sugar can give, kg/kg, from molar masses.
const SUGARS: [(&str, f64); 5] = [
    ("glucose", 0.51143),
    ("sucrose", 0.53835),
    ("starch", 0.56825),
    ("xylose", 0.51143),
    ("xylan", 0.58117),
];

/// The model.
pub const MODEL: Model = Model {
    kind: "fermentation_co2",
    title: "CO2 of fermentation",
    what: "Biogenic CO2 of the sugar split, for the carbon balance.",
    source: "e x 44.0095/46.06844 + r (s - e/y) x 6 x 44.0095/180.15588",
    term: None,
    parameters: &[
        Parameter::optional(
            "ethanol",
            Takes::Amount("kg"),
            "pure ethanol of the stage's output",
            "pure ethanol made, e.",
        )
        .hard(Span::positive()),
        Parameter::required(
            "sugar",
            Takes::Word(&["glucose", "sucrose", "starch", "xylose", "xylan"]),
            "picks the most ethanol per sugar, y.",
        ),
        Parameter::required(
            "sugar_used",
            Takes::Amount("kg"),
            "sugar, dry, s: e / (y s) is at most 1 and usually 0.60 to 0.96.",
        )
        .hard(Span::positive()),
        Parameter::optional(
            "respired_percent",
            Takes::Number("percent"),
            "0",
            "part of the sugar without ethanol that became CO2, r.",
        )
        .hard(Span::of(0.0, 100.0))
        .usual(Span::of(0.0, 15.0)),
        Parameter::optional(
            "measured_co2",
            Takes::Amount("kg"),
            "none",
            "CO2 vented and captured, by meter: stands in for the result in the carbon balance.",
        )
        .hard(Span::positive()),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let ethanol = ethanol(given);
    let sugar = given.word("sugar");
    let used = given.number("sugar_used");
    let respired = given.number_or("respired_percent", 0.0);
    let measured = if given.has("measured_co2") {
        Some(given.number("measured_co2")?)
    } else {
        None
    };
    let (ethanol, sugar, used, respired) = (ethanol?, sugar?, used?, respired? / 100.0);
    let most = SUGARS.iter().find(|(name, _)| *name == sugar)?.1;
    yields(given, ethanol, sugar, used, most);
    let split = ethanol * CO2 / ETHANOL;
    let text = format!(
        "{} kg of ethanol x {} / {}",
        plain(ethanol),
        plain(CO2),
        plain(ETHANOL)
    );
    given.step(text, split, "kg co2_biogenic", SOURCE);
    let spare = (used - ethanol / most).max(0.0);
    let mut made = split;
    if respired > 0.0 {
        let breath = respired * spare * 6.0 * CO2 / GLUCOSE;
        let text = format!(
            "respired {} x ({} - {} / {}) kg of {sugar} x 6 x {} / {}",
            plain(respired),
            plain(used),
            plain(ethanol),
            plain(most),
            plain(CO2),
            plain(GLUCOSE)
        );
        given.step(
            text,
            breath,
            "kg co2_biogenic",
            "molar masses: six moles of CO2 per mole of glucose",
        );
        made += breath;
        let text = format!("{} + {}", plain(split), plain(breath));
        given.step(text, made, "kg co2_biogenic", "");
    }
    if let Some(measured) = measured {
        fits(given, measured, split, ethanol);
        given.step(
            "measured, in the carbon balance".to_owned(),
            measured,
            "kg co2_biogenic",
            "",
        );
    }
    Some(Outcome {
        gases: GasVector::of(Gas::Co2Biogenic, made),
        fermentation_kg: Some(measured.unwrap_or(made)),
        biogenic_kg: Some(0.0),
        ..Outcome::default()
    })
}

fn ethanol(given: &mut Given) -> Option<f64> {
    if given.has("ethanol") {
        return given.number("ethanol");
    }
    let pure = given.setting.output.and_then(|output| output.pure_kg);
    if pure.is_none() {
        given.problem(
            "ethanol",
            "The stage's output is no ethanol, so it cannot stand in.",
            "Add \"ethanol\", the pure ethanol made.",
        );
    }
    pure
}

/// The yield against the chemical ceiling (C-01) and against what is usual (K-01).
fn yields(given: &mut Given, ethanol: f64, sugar: &str, used: f64, most: f64) {
    let part = ethanol / (most * used);
    if part > 1.0 {
        let message = format!(
            "{} kg of ethanol from {} kg of {sugar} is more than chemistry allows ({} kg).",
            plain(ethanol),
            plain(used),
            plain_fixed(most * used, 1)
        );
        let remedy = "Check strength, moisture and sugar analysis.";
        given.note("C-01", Severity::Block, "sugar_used", message, remedy);
    } else if !(0.60..=0.96).contains(&part) {
        let message = format!(
            "The ethanol is {} % of what {sugar} can give; usual is 60 to 96 %.",
            plain_fixed(100.0 * part, 1)
        );
        let remedy = "Check figure and unit, or give the reason.";
        given.note("K-01", Severity::Warn, "sugar_used", message, remedy);
    }
}

/// The meter against the ethanol (C-02).
fn fits(given: &mut Given, measured: f64, expected: f64, ethanol: f64) {
    if (0.85..=1.05).contains(&(measured / expected)) {
        return;
    }
    let message = format!(
        "{} kg of fermentation CO2 do not fit {} kg of ethanol; {} kg would.",
        plain(measured),
        plain(ethanol),
        plain_fixed(expected, 1)
    );
    let remedy = "Check the CO2 meter and the strength, or give the reason.";
    given.note("C-02", Severity::Warn, "measured_co2", message, remedy);
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::core::models::testing::{Bench, close};
    use serde_json::json;

    #[test]
    fn the_sugar_split_follows_from_molar_masses() {
        // Molar masses, g/mol: C 12.0107, H 1.00794, O 15.9994. Each unit of sugar against the ethanol it can give.
        let (c, h, o) = (12.0107, 1.00794, 15.9994);
        let molar = |carbons: f64, hydrogens: f64, oxygens: f64| carbons * c + hydrogens * h + oxygens * o;
        let ethanol = molar(2.0, 6.0, 1.0);
        for (name, unit, moles) in [
            ("glucose", molar(6.0, 12.0, 6.0), 2.0),
            ("sucrose", molar(12.0, 22.0, 11.0), 4.0),
            ("starch", molar(6.0, 10.0, 5.0), 2.0),
            ("xylose", molar(5.0, 10.0, 5.0), 5.0 / 3.0),
            ("xylan", molar(5.0, 8.0, 4.0), 5.0 / 3.0),
        ] {
            let most = SUGARS.iter().find(|(sugar, _)| *sugar == name).unwrap().1;
            close(most, moles * ethanol / unit, 1e-5);
        }
        close(CO2, molar(1.0, 0.0, 2.0), 1e-5);
        close(ETHANOL, ethanol, 1e-5);
        close(GLUCOSE, molar(6.0, 12.0, 6.0), 1e-5);
    }

    #[test]
    fn glucose_at_full_yield_gives_the_other_half_as_co2() {
        let parameters = json!({ "ethanol": { "value": 511.43, "unit": "kg" }, "sugar": "glucose",
                                 "sugar_used": { "value": 1, "unit": "t" }, "respired_percent": 10 });
        let run = Bench::default().run("fermentation_co2", &parameters);
        close(run.gases()[Gas::Co2Biogenic], 488.57, 1e-4);
        let outcome = run.outcome.unwrap();
        assert_eq!(outcome.fermentation_kg, Some(outcome.gases[Gas::Co2Biogenic]));
    }

    #[test]
    fn more_than_chemistry_allows_blocks() {
        let parameters = |kg: f64| {
            json!({ "ethanol": { "value": kg, "unit": "kg" }, "sugar": "starch",
                    "sugar_used": { "value": 1000, "unit": "kg" } })
        };
        let bench = Bench::default();
        assert_eq!(
            bench.run("fermentation_co2", &parameters(568.26)).findings(),
            ["C-01"]
        );
        assert_eq!(
            bench.run("fermentation_co2", &parameters(568.24)).findings(),
            ["K-01"]
        );
        assert!(
            bench
                .run("fermentation_co2", &parameters(500.0))
                .findings()
                .is_empty()
        );
    }

    #[test]
    fn a_meter_stands_in_for_the_balance_and_is_checked() {
        let parameters = |co2: f64| {
            json!({ "ethanol": { "value": 1000, "unit": "kg" }, "sugar": "sucrose",
                    "sugar_used": { "value": 2100, "unit": "kg" }, "measured_co2": { "value": co2, "unit": "kg" } })
        };
        let bench = Bench::default();
        let run = bench.run("fermentation_co2", &parameters(900.0));
        assert!(run.findings().is_empty());
        assert_eq!(
            run.outcome.as_ref().and_then(|outcome| outcome.fermentation_kg),
            Some(900.0)
        );
        close(run.gases()[Gas::Co2Biogenic], 955.3, 1e-4);
        for far in [811.9, 1003.1] {
            assert_eq!(
                bench.run("fermentation_co2", &parameters(far)).findings(),
                ["C-02"]
            );
        }
        for near in [812.1, 1003.0] {
            assert!(
                bench
                    .run("fermentation_co2", &parameters(near))
                    .findings()
                    .is_empty()
            );
        }
    }

    #[test]
    fn respired_sugar_adds_six_moles_a_mole() {
        let parameters = |percent: f64| {
            json!({ "ethanol": { "value": 409.144, "unit": "kg" }, "sugar": "glucose", "respired_percent": percent,
                    "sugar_used": { "value": 1000, "unit": "kg" } })
        };
        let made =
            |percent| Bench::default().gases("fermentation_co2", &parameters(percent))[Gas::Co2Biogenic];
        close(made(10.0) - made(0.0), 0.1 * 200.0 * 1.4657, 1e-5);
    }
}
