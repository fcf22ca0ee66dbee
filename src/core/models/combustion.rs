//! `combustion`: CH4 and N2O of burning the fuel in an engine, per its energy (2006 IPCC Guidelines Vol. 2 Ch. 3 Equation
//! 3.2.3). Its CO2 is biogenic and stands in the carbon balance only.

use super::factors::sourced;
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::documents::assessment::Severity;
use crate::core::domain::factor::{EngineVehicle, Use};
use crate::core::domain::{Gas, GasVector, Term};
use crate::core::units::rounding::plain;

/// The model.
pub const MODEL: Model = Model {
    kind: "combustion",
    title: "Use in the engine",
    what: "CH4 and N2O of burning the fuel, by vehicle.",
    source: "2006 IPCC Guidelines Vol. 2 Ch. 3 Equation 3.2.3 and Table 3.2.2",
    term: Some(Term::Eu),
    parameters: &[
        Parameter::optional(
            "vehicle",
            Takes::Factor,
            "none; or own figures",
            "a vehicle of an edition, such as ipcc-2006/road_ethanol_truck_us.",
        ),
        Parameter::optional(
            "ch4_kg_per_tj",
            Takes::Number(""),
            "not published: nothing counted",
            "own figure: methane, kg per TJ of fuel.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "n2o_kg_per_tj",
            Takes::Number(""),
            "not published: nothing counted",
            "own figure: nitrous oxide, kg per TJ of fuel.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "citation",
            Takes::Text,
            "none; needed with own figures",
            "where own figures come from.",
        ),
        Parameter::optional(
            "blend_percent_vol",
            Takes::Number("percent"),
            "100",
            "ethanol in the blend as sold; shown, not computed with.",
        )
        .hard(Span::of(0.0, 100.0)),
    ],
    compute,
};

const OWN: [&str; 2] = ["ch4_kg_per_tj", "n2o_kg_per_tj"];

/// An engine with its name and source.
struct Engine {
    name: String,
    row: EngineVehicle,
    source: String,
}

fn compute(given: &mut Given) -> Option<Outcome> {
    given.number_or("blend_percent_vol", 100.0);
    let engine = if given.has("vehicle") {
        published(given)
    } else {
        own(given)
    };
    let energy_tj = energy(given);
    let (engine, energy_tj) = (engine?, energy_tj?);
    let mut gases = GasVector::ZERO;
    for (gas, word, per_tj) in [
        (Gas::Ch4Biogenic, "CH4", engine.row.ch4_kg_per_tj),
        (Gas::N2o, "N2O", engine.row.n2o_kg_per_tj),
    ] {
        let Some(per_tj) = per_tj else {
            let message = format!(
                "{} has no published {word}; nothing is counted for it.",
                engine.name
            );
            let field = if given.has("vehicle") { "vehicle" } else { "" };
            let remedy = "Choose a vehicle that has one, or give the reason.";
            given.note("K-02", Severity::Warn, field, message, remedy);
            continue;
        };
        gases[gas] = energy_tj * per_tj;
        let text = format!(
            "{} TJ x {} kg {} per TJ of {}",
            plain(energy_tj),
            plain(per_tj),
            gas.name(),
            engine.name
        );
        given.step(text, gases[gas], &format!("kg {}", gas.name()), &engine.source);
    }
    Some(Outcome {
        gases,
        ..Outcome::default()
    })
}

fn published(given: &mut Given) -> Option<Engine> {
    for name in OWN.into_iter().filter(|name| given.has(name)).collect::<Vec<_>>() {
        let detail = format!("\"{name}\" stands beside a vehicle that has its own figures.");
        given.problem(name, detail, "Keep one of the two.");
    }
    let priced = given.any_factor("vehicle")?;
    let Use::Engine(row) = &priced.usage else {
        let detail = format!("\"{}\" is no engine.", priced.id);
        let remedy = "Choose a vehicle such as ipcc-2006/road_ethanol_truck_us, or give own figures.";
        given.problem("vehicle", detail, remedy);
        return None;
    };
    Some(Engine {
        name: priced.id.clone(),
        row: row.clone(),
        source: sourced(&priced),
    })
}

fn own(given: &mut Given) -> Option<Engine> {
    if !OWN.iter().any(|name| given.has(name)) {
        let remedy = "Add \"vehicle\", or \"ch4_kg_per_tj\" and \"n2o_kg_per_tj\" with their \"citation\".";
        given.problem("vehicle", "The vehicle is missing.", remedy);
        return None;
    }
    if !given.has("citation") {
        given.problem("citation", "Own figures need their source.", "Add \"citation\".");
    }
    let source = given.text("citation");
    let [ch4, n2o] = OWN.map(|name| {
        if given.has(name) {
            given.number(name).map(Some)
        } else {
            Some(None)
        }
    });
    Some(Engine {
        name: "the own figures".to_owned(),
        row: EngineVehicle {
            ch4_kg_per_tj: ch4?,
            n2o_kg_per_tj: n2o?,
        },
        source: source?,
    })
}

/// Energy of the fuel burnt, TJ: as entered, or pure ethanol times the rule set's heating value.
fn energy(given: &mut Given) -> Option<f64> {
    let output = given.setting.output?;
    if let Some(joules) = output.energy_j() {
        return Some(joules / 1e12);
    }
    let rules = given.setting.rules;
    let strength = output.strength.unwrap_or(1.0);
    let Some(pure) = output.pure_kg else {
        let detail = "The stage's output has no ethanol whose energy could be burnt.";
        given.problem("vehicle", detail, "Use this model in a stage that gives ethanol.");
        return None;
    };
    let energy = rules.ethanol_mj(pure, strength) / 1e6;
    let words = rules.ethanol_words(strength);
    let text = format!("{} kg of ethanol x {words} / 1000000", plain(pure));
    given.step(text, energy, "TJ", &rules.ethanol_lhv.source);
    Some(energy)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::core::models::testing::{Bench, close};
    use serde_json::json;

    #[test]
    fn energy_times_published_figures() {
        // 2006 IPCC Guidelines Vol. 2 Ch. 3 Table 3.2.2: ethanol trucks, 260 kg CH4 and 41 kg N2O per TJ.
        let own = json!({ "ch4_kg_per_tj": 260, "n2o_kg_per_tj": 41, "citation": "Table 3.2.2" });
        let run = Bench::burning_mj(2.0).run("combustion", &own);
        close(run.gases()[Gas::Ch4Biogenic], 520e-6, 1e-12);
        close(run.gases()[Gas::N2o], 82e-6, 1e-12);
        assert_eq!(run.gases()[Gas::Co2Biogenic], 0.0);
        assert!(run.findings().is_empty());
    }

    #[test]
    fn a_mass_counts_by_the_heating_value_of_the_rules() {
        let own = json!({ "ch4_kg_per_tj": 100, "n2o_kg_per_tj": 0, "citation": "made up" });
        let gases = Bench::giving_ethanol(1000.0).gases("combustion", &own);
        close(gases[Gas::Ch4Biogenic], 2.681, 1e-12);
    }

    #[test]
    fn what_is_not_published_is_pointed_out() {
        let run = Bench::burning_mj(1.0).run(
            "combustion",
            &json!({ "vehicle": "test/car", "blend_percent_vol": 10 }),
        );
        close(run.gases()[Gas::Ch4Biogenic], 18e-6, 1e-12);
        assert_eq!(run.findings(), ["K-02"]);
        assert!(run.record.notes[0].message.contains("N2O"));
    }

    #[test]
    fn what_is_no_engine_is_refused() {
        let bench = Bench::burning_mj(1.0);
        assert_eq!(
            bench
                .run("combustion", &json!({ "vehicle": "test/fuel" }))
                .pointers(),
            ["/vehicle"]
        );
        assert_eq!(bench.run("combustion", &json!({})).pointers(), ["/vehicle"]);
        assert_eq!(
            bench.run("combustion", &json!({ "n2o_kg_per_tj": 1 })).pointers(),
            ["/citation"]
        );
        let both = json!({ "vehicle": "test/car", "n2o_kg_per_tj": 1 });
        assert_eq!(bench.run("combustion", &both).pointers(), ["/n2o_kg_per_tj"]);
    }
}
