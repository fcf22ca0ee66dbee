//! `distillation`: heat of the reboiler from wash strength to product strength, priced where it comes from.
//! The physics is in `still`: equilibrium, feed and tangent pinch, reflux, energy balance.

use super::given::Given;
use super::heat_from::{HEAT_FROM, HeatFrom};
use super::parameter::{Parameter, Span, Takes};
use super::refusal::{Figure, Refusal};
use super::still::{FeedHeat, Request, design, ranges};
use super::{Model, Outcome, alcoholometry};
use crate::core::domain::GasVector;
use crate::core::units::rounding::{plain, round_half_away};

const PERCENT: Takes = Takes::Number("percent");

/// The parameter `ethanol`.
pub(super) const ETHANOL: Parameter = Parameter::optional(
    "ethanol",
    Takes::Amount("kg"),
    "pure ethanol of the stage's output",
    "pure ethanol that takes the heat, m.",
)
.hard(Span::positive());

/// The parameter `heat_from`.
pub(super) const HEAT: Parameter = Parameter::required(
    "heat_from",
    Takes::Object(HEAT_FROM),
    "where the heat comes from.",
);

/// A parameter with the name and the ranges of a figure of the calculators.
pub(super) const fn row(
    figure: Figure,
    takes: Takes,
    default: &'static str,
    meaning: &'static str,
) -> Parameter {
    Parameter::optional(figure.name, takes, default, meaning)
        .hard(Some(figure.hard))
        .usual(figure.usual)
}

/// The model.
pub const MODEL: Model = Model {
    kind: "distillation",
    title: "Distillation",
    what: "Heat of the reboiler that brings a wash to its product, and the fuel for it.",
    source: "Q = (R + 1) D lambda + D h(D) + B h(B) - F h(F), R = k x the larger of feed and tangent pinch; equal molar overflow, \
             NRTL, 101.325 kPa; -5 to +15 % for a column of one pressure",
    term: None,
    parameters: &[
        row(
            ranges::WASH,
            PERCENT,
            "the intake's strength",
            "ethanol in the wash, % vol at 20 degC, z.",
        ),
        row(
            ranges::PRODUCT,
            PERCENT,
            "the output's strength",
            "ethanol in the product of the column, % mass, x_D: above the wash, below the azeotrope.",
        ),
        row(
            ranges::STILLAGE,
            PERCENT,
            "0.05",
            "ethanol in the stillage, % mass, x_B.",
        ),
        row(
            ranges::REFLUX_MULTIPLE,
            Takes::Number(""),
            "1.2",
            "reflux over the minimum, k.",
        ),
        row(
            ranges::FEED_APPROACH,
            Takes::Number("K"),
            "10",
            "the stillage heats the wash to so far below itself, at most to its bubble point.",
        ),
        row(
            ranges::COUPLING,
            Takes::Number(""),
            "1",
            "heat from outside over the reboiler's: below 1 where columns of several pressures heat each other.",
        ),
        ETHANOL,
        HEAT,
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let wash = strength_in(given, ranges::WASH, |mass| {
        100.0 * alcoholometry::volume_fraction(mass)
    });
    let product = product(given);
    let stillage = given.number_or(ranges::STILLAGE.name, 0.05);
    let multiple = given.number_or(ranges::REFLUX_MULTIPLE.name, 1.2);
    let approach = given.number_or(ranges::FEED_APPROACH.name, 10.0);
    let coupling = given.number_or(ranges::COUPLING.name, 1.0);
    let request = || {
        Some(Request {
            stillage_percent_mass: stillage?,
            reflux_multiple: multiple?,
            feed_heat: FeedHeat::BelowStillage(approach?),
            coupling_factor: coupling?,
            ..Request::new(wash?, product?)
        })
    };
    let per_kg = request().and_then(|request| match design(&request) {
        Ok(design) => {
            given.record.steps.extend(design.steps);
            Some(design.external_mj_per_kg)
        }
        Err(refusals) => refused(given, refusals),
    });
    outcome(given, per_kg)
}

/// Strength of the product, % mass.
fn product(given: &mut Given) -> Option<f64> {
    let name = ranges::PRODUCT.name;
    if given.has(name) {
        return given.number(name);
    }
    let strength = output_strength(given, name)?;
    if strength > ranges::PRODUCT.hard.high {
        let detail = format!(
            "The stage's output, {} percent by mass, is beyond the azeotrope; a column cannot make it.",
            plain(strength)
        );
        let remedy = "Add the strength after the column here, and a model of kind dehydration for the rest.";
        given.problem(name, detail, remedy);
        return None;
    }
    derived(given, ranges::PRODUCT, strength, "output")
}

/// The strength of the ethanol that the stage takes, unless the parameter is given; `shown` turns a mass fraction into
/// the parameter's percentage.
pub(super) fn strength_in(given: &mut Given, figure: Figure, shown: impl Fn(f64) -> f64) -> Option<f64> {
    if given.has(figure.name) {
        return given.number(figure.name);
    }
    let ethanol: Vec<_> = given
        .setting
        .intakes
        .iter()
        .filter(|flow| flow.is_ethanol())
        .collect();
    let sum = |of: fn(&super::flow::Measured) -> Option<f64>| ethanol.iter().map(|flow| of(flow)).sum();
    let (pure, wet): (Option<f64>, Option<f64>) = (sum(|flow| flow.pure_kg), sum(|flow| flow.wet_kg));
    let known = !ethanol.is_empty() && ethanol.iter().all(|flow| flow.strength_given);
    match (pure, wet) {
        (Some(pure), Some(wet)) if known && wet > 0.0 => {
            derived(given, figure, tidy(shown(pure / wet)), "intake")
        }
        _ => {
            let detail = "The stage takes no ethanol of a stated strength that could stand in.";
            let remedy = format!("Add \"{}\", or the strength of the intake.", figure.name);
            given.problem(figure.name, detail, remedy);
            None
        }
    }
}

/// The strength of the stage's output, % mass; `None` with a problem where none is stated.
pub(super) fn output_strength(given: &mut Given, name: &'static str) -> Option<f64> {
    // An output that could not be measured has its own problem already.
    let output = given.setting.output?;
    match output.strength {
        Some(strength) if output.strength_given => Some(tidy(100.0 * strength)),
        _ => {
            let remedy = format!("Add \"{name}\", or the strength of the output.");
            given.problem(
                name,
                "The stage's output states no strength that could stand in.",
                remedy,
            );
            None
        }
    }
}

/// Checks a figure that a flow gave in place of the parameter.
pub(super) fn derived(given: &mut Given, figure: Figure, value: f64, of: &str) -> Option<f64> {
    if !figure.hard.holds(value) {
        let detail = format!(
            "The strength of the {of}, {} {}, is outside the range of the model.",
            plain(value),
            figure.unit
        );
        given.problem(
            figure.name,
            detail,
            format!("The model takes {}.", figure.hard.words(figure.unit)),
        );
        return None;
    }
    if let Some(usual) = figure.usual {
        given.usual(figure.name, value, figure.unit, usual);
    }
    Some(value)
}

/// Passes refusals of a calculator on as problems.
pub(super) fn refused<T>(given: &mut Given, refusals: Vec<Refusal>) -> Option<T> {
    for refusal in refusals {
        given.problem(refusal.field, refusal.detail, refusal.remedy);
    }
    None
}

/// Prices heat per kg of pure ethanol for the ethanol of the stage.
pub(super) fn outcome(given: &mut Given, mj_per_kg: Option<f64>) -> Option<Outcome> {
    let ethanol = ethanol(given);
    let heat = mj_per_kg.zip(ethanol).map(|(per_kg, kg)| {
        let heat = per_kg * kg;
        let text = format!(
            "{} MJ/kg x {} kg of pure ethanol",
            plain(round_half_away(per_kg, 4)),
            plain(kg)
        );
        given.step(text, heat, "MJ of heat", "");
        heat
    });
    let before = given.record.notes.len();
    let gases: Option<GasVector> = given.nested("heat_from", |inner| {
        let from = HeatFrom::read(inner);
        Some(from?.price(heat?, inner))
    });
    for note in given.record.notes.iter_mut().skip(before) {
        note.field = format!("heat_from.{}", note.field);
    }
    Some(Outcome {
        gases: gases?,
        ..Outcome::default()
    })
}

fn ethanol(given: &mut Given) -> Option<f64> {
    if given.has(ETHANOL.name) {
        return given.number(ETHANOL.name);
    }
    let output = given.setting.output?;
    if output.pure_kg.is_none() {
        given.problem(
            ETHANOL.name,
            "The stage's output is no ethanol, so it cannot stand in.",
            "Add \"ethanol\", the pure ethanol that takes the heat.",
        );
    }
    output.pure_kg
}

/// Takes off the last digits, which only the conversion between mass and volume made.
fn tidy(percent: f64) -> f64 {
    round_half_away(percent, 10)
}

#[cfg(test)]
pub(super) mod tests {
    use crate::core::domain::Gas;
    use crate::core::models::flow::Measured;
    use crate::core::models::testing::{Bench, close};
    use crate::core::units::Dimension;
    use serde_json::{Value, json};

    pub(in crate::core::models) fn ethanol(kg: f64, strength: f64) -> Measured {
        Measured {
            material: "ethanol".to_owned(),
            dimension: Dimension::MASS,
            base: kg,
            wet_kg: Some(kg),
            moisture: None,
            pure_kg: Some(kg * strength),
            strength: Some(strength),
            strength_given: true,
            celsius: None,
        }
    }

    fn still(output: f64) -> Bench {
        Bench {
            // 12 % vol is 9.64099 % mass.
            intakes: vec![ethanol(3_000.0, 0.096_409_9)],
            output: Some(ethanol(300.0, output)),
            ..Bench::default()
        }
    }

    fn heat() -> Value {
        json!({ "efficiency_percent": 80, "fuel": { "gases": { "co2_fossil": 0.06 }, "per": "MJ", "citation": "made up" } })
    }

    #[test]
    fn strengths_and_ethanol_come_from_the_flows() {
        // Independent program: 3.92207 MJ per kg of pure ethanol.
        let expected = 3.92207 * 300.0 * 0.925 / 0.8 * 0.06;
        let run = still(0.925).run("distillation", &json!({ "heat_from": heat() }));
        close(run.gases()[Gas::Co2Fossil], expected, 1e-5);
        assert!(run.findings().is_empty());
        let given = json!({ "wash_strength_percent_vol": 12, "product_strength_percent_mass": 92.5,
            "ethanol": { "value": 0.2775, "unit": "t" }, "coupling_factor": 0.67, "heat_from": heat() });
        let bare = Bench::default().gases("distillation", &given);
        close(bare[Gas::Co2Fossil], 0.67 * expected, 1e-5);
    }

    #[test]
    fn two_washes_are_mixed() {
        let mut bench = still(0.925);
        bench.intakes = vec![ethanol(1_000.0, 0.08), ethanol(3_000.0, 0.1)];
        let mixed = bench.gases("distillation", &json!({ "heat_from": heat() }));
        bench.intakes = vec![ethanol(1.0, 0.095)];
        let same = bench.gases("distillation", &json!({ "heat_from": heat() }));
        close(mixed[Gas::Co2Fossil], same[Gas::Co2Fossil], 1e-9);
    }

    #[test]
    fn what_is_missing_or_impossible_is_refused_where_it_stands() {
        let run = Bench::default().run("distillation", &json!({}));
        assert_eq!(
            run.pointers(),
            [
                "/heat_from",
                "/wash_strength_percent_vol",
                "/product_strength_percent_mass",
                "/ethanol"
            ]
        );
        let dry = still(0.997).run("distillation", &json!({ "heat_from": heat() }));
        assert_eq!(dry.pointers(), ["/product_strength_percent_mass"]);
        let weak = json!({ "product_strength_percent_mass": 9, "heat_from": { "efficiency_percent": 20 } });
        assert_eq!(
            still(0.925).run("distillation", &weak).pointers(),
            [
                "/product_strength_percent_mass",
                "/heat_from/efficiency_percent",
                "/heat_from/fuel"
            ]
        );
        let mut strong = still(0.925);
        strong.intakes = vec![ethanol(1.0, 0.5)];
        let run = strong.run(
            "distillation",
            &json!({ "reflux_multiple": 6, "heat_from": heat() }),
        );
        assert_eq!(run.pointers(), ["/wash_strength_percent_vol", "/reflux_multiple"]);
    }

    #[test]
    fn unusual_figures_are_pointed_out_where_they_stand() {
        let mut bench = still(0.7);
        bench.intakes = vec![ethanol(1.0, 0.02)];
        let from = json!({ "efficiency_percent": 60, "fuel": "test/fuel" });
        let run = bench.run(
            "distillation",
            &json!({ "coupling_factor": 0.2, "heat_from": from }),
        );
        let fields: Vec<_> = run
            .record
            .notes
            .iter()
            .map(|note| (note.id, note.field.as_str()))
            .collect();
        assert_eq!(
            fields,
            [
                ("K-01", "wash_strength_percent_vol"),
                ("K-01", "product_strength_percent_mass"),
                ("K-01", "coupling_factor"),
                ("K-01", "heat_from.efficiency_percent"),
                ("K-02", "heat_from.fuel"),
                ("K-02", "heat_from.fuel")
            ]
        );
    }
}
