//! `chp`: fuel to heat and power, shared by exergy; the stage carries what it uses of both.
//! Directive (EU) 2018/2001 Annex V Part C points 1(b) and 16, with a Carnot factor of 1 for power.

use super::given::Given;
use super::heat_from::{FUEL, FUELS, STACK, burn, fuels};
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::documents::assessment::Severity;
use crate::core::domain::Gas;
use crate::core::units::rounding::{plain, plain_fixed};

const METERED: [&str; 3] = ["fuel_used", "heat_made", "power_made"];
const DESIGN: [&str; 2] = ["efficiency_heat_percent", "efficiency_power_percent"];
/// Heat for buildings may use the fixed Carnot factor below this temperature, degC.
const BUILDING_LIMIT_C: f64 = 150.0;

/// The model.
pub const MODEL: Model = Model {
    kind: "chp",
    title: "Combined heat and power",
    what: "Fuel and exhaust of the heat and power that a stage takes from a plant that makes both.",
    source: "Directive (EU) 2018/2001 Annex V Part C points 1(b) and 16",
    term: None,
    parameters: &[
        FUEL,
        STACK,
        FUELS,
        Parameter::optional(
            "fuel_used",
            Takes::Amount("MJ"),
            "from heat_used and the efficiencies",
            "fuel energy, net, F.",
        )
        .hard(Span::positive()),
        Parameter::optional(
            "heat_made",
            Takes::Amount("MJ"),
            "from heat_used",
            "useful heat delivered, net of condensate: n_h = heat_made / F, usual 0.15 to 0.75.",
        )
        .hard(Span::positive()),
        Parameter::optional(
            "power_made",
            Takes::Amount("MJ"),
            "from the efficiencies",
            "power at the terminals, less the plant's own use: n_e = power_made / F, usual 0.05 to 0.50.",
        )
        .hard(Span::positive()),
        Parameter::required(
            "heat_temperature_c",
            Takes::Number("degC"),
            "of the heat where it is delivered.",
        )
        .hard(Span::of(30.0, 600.0)),
        Parameter::optional(
            "building_heat",
            Takes::Flag,
            "false",
            "heat for buildings below 150 degC: the rule set's fixed Carnot factor.",
        ),
        Parameter::optional(
            "heat_used",
            Takes::Amount("MJ"),
            "all that is made",
            "heat that this stage takes.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "power_used",
            Takes::Amount("MJ"),
            "all that is made",
            "power that this stage takes.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "efficiency_heat_percent",
            Takes::Number("percent"),
            "from the meters",
            "design figure instead of meters: F = heat_used / n_h.",
        )
        .hard(Span::above(0.0, 100.0)),
        Parameter::optional(
            "efficiency_power_percent",
            Takes::Number("percent"),
            "from the meters",
            "design figure instead of meters.",
        )
        .hard(Span::above(0.0, 100.0)),
    ],
    compute,
};

/// Energy through the plant, MJ per recipe.
struct Plant {
    fuel: f64,
    n_heat: f64,
    n_power: f64,
    heat_made: f64,
    power_made: f64,
}

/// Shares of the burden by exergy; they sum to 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shares {
    /// Carried by the heat.
    pub heat: f64,
    /// Carried by the power.
    pub power: f64,
}

/// Shares of heat and power: `carnot` 0 to 1, efficiencies above 0 (Annex V Part C point 1(b)).
pub fn shares(carnot: f64, n_heat: f64, n_power: f64) -> Shares {
    let whole = n_power + carnot * n_heat;
    Shares {
        heat: carnot * n_heat / whole,
        power: n_power / whole,
    }
}

fn compute(given: &mut Given) -> Option<Outcome> {
    let carnot = carnot(given);
    let fuels = fuels(given);
    let plant = plant(given)?;
    let heat_used = used(given, "heat_used", plant.heat_made);
    let power_used = used(given, "power_used", plant.power_made);
    plausible(given, &plant)?;
    let (carnot, fuels, heat_used, power_used) = (carnot?, fuels?, heat_used?, power_used?);
    let shares = shares(carnot, plant.n_heat, plant.n_power);
    for (text, value) in [
        (
            format!(
                "share of power {e} / ({e} + {} x {})",
                plain(carnot),
                plain(plant.n_heat),
                e = plain(plant.n_power)
            ),
            shares.power,
        ),
        (
            format!(
                "share of heat {c} x {h} / ({} + {c} x {h})",
                plain(plant.n_power),
                c = plain(carnot),
                h = plain(plant.n_heat)
            ),
            shares.heat,
        ),
    ] {
        given.step(text, value, "", MODEL.source);
    }
    let carried = heat_used * shares.heat + power_used * shares.power;
    let text = format!(
        "carried here: {} of the heat x {} + {} of the power x {}",
        plain(heat_used),
        plain(shares.heat),
        plain(power_used),
        plain(shares.power)
    );
    given.step(text, carried, "", MODEL.source);
    let whole = burn(plant.fuel, &fuels, given);
    let gases = whole * carried;
    for (gas, kg) in whole.entries().filter(|(_, kg)| *kg != 0.0) {
        let text = format!(
            "{} kg {} of the whole fuel x {}",
            plain(kg),
            gas.name(),
            plain(carried)
        );
        given.step(text, gases[gas], &format!("kg {}", gas.name()), "");
    }
    Some(Outcome {
        gases,
        // The whole fuel's carbon leaves the works, whoever takes the power.
        biogenic_kg: Some(whole[Gas::Co2Biogenic]),
        ..Outcome::default()
    })
}

/// C_h = (T - T_0) / T, or the rule set's figure for heat of buildings.
fn carnot(given: &mut Given) -> Option<f64> {
    let building = given.flag("building_heat");
    let celsius = given.number("heat_temperature_c")?;
    let rules = given.setting.rules;
    if building {
        if celsius >= BUILDING_LIMIT_C {
            let detail = format!("Heat of {} degC is no heat for buildings.", plain(celsius));
            let remedy = "Leave building_heat out: it is for heat below 150 degC.";
            given.problem("building_heat", detail, remedy);
            return None;
        }
        let fixed = &rules.building_heat_carnot;
        let source = super::factors::source_words(&fixed.source, fixed.status);
        given.step(
            "Carnot factor of heat for buildings".to_owned(),
            fixed.value,
            "",
            &source,
        );
        return Some(fixed.value);
    }
    let hot = celsius + 273.15;
    let factor = (hot - rules.ambient.value) / hot;
    if factor <= 0.0 {
        let detail = format!(
            "Heat of {} degC is not warmer than its surroundings.",
            plain(celsius)
        );
        given.problem(
            "heat_temperature_c",
            detail,
            "Give the temperature where the heat is delivered.",
        );
        return None;
    }
    let text = format!(
        "Carnot factor ({t} K - {} K) / {t} K",
        plain(rules.ambient.value),
        t = plain(hot)
    );
    let source = super::factors::source_words(&rules.ambient.source, rules.ambient.status);
    given.step(text, factor, "", &source);
    Some(factor)
}

fn plant(given: &mut Given) -> Option<Plant> {
    if DESIGN.iter().any(|name| given.has(name)) {
        return design(given);
    }
    given.need(&METERED, "heat_used with both efficiencies for a design");
    let [fuel, heat_made, power_made] = METERED.map(|name| given.number(name));
    let (fuel, heat_made, power_made) = (fuel?, heat_made?, power_made?);
    let plant = Plant {
        fuel,
        n_heat: heat_made / fuel,
        n_power: power_made / fuel,
        heat_made,
        power_made,
    };
    for (name, made, efficiency) in [
        ("heat", heat_made, plant.n_heat),
        ("power", power_made, plant.n_power),
    ] {
        let text = format!("{name} {} MJ / fuel {} MJ", plain(made), plain(fuel));
        given.step(text, efficiency, "", "");
    }
    Some(plant)
}

fn design(given: &mut Given) -> Option<Plant> {
    for name in METERED
        .into_iter()
        .filter(|name| given.has(name))
        .collect::<Vec<_>>()
    {
        let detail = format!("\"{name}\" is metered, but efficiencies of a design are given too.");
        given.problem(name, detail, "Keep one of the two.");
    }
    for name in ["heat_used", DESIGN[0], DESIGN[1]]
        .into_iter()
        .filter(|name| !given.has(name))
        .collect::<Vec<_>>()
    {
        let detail = format!("\"{name}\" is missing: a design gives heat_used and both efficiencies.");
        given.problem(name, detail, format!("Add \"{name}\"."));
    }
    let [n_heat, n_power] = DESIGN.map(|name| given.number(name));
    let heat_made = given.number("heat_used")?;
    let (n_heat, n_power) = (n_heat? / 100.0, n_power? / 100.0);
    if heat_made == 0.0 {
        given.problem(
            "heat_used",
            "A design without heat makes nothing.",
            "Give the heat that is used.",
        );
        return None;
    }
    let fuel = heat_made / n_heat;
    let text = format!("heat {} MJ / {}", plain(heat_made), plain(n_heat));
    given.step(text, fuel, "MJ of fuel", "");
    let power_made = fuel * n_power;
    let text = format!("{} MJ of fuel x {}", plain(fuel), plain(n_power));
    given.step(text, power_made, "MJ of power", "");
    Some(Plant {
        fuel,
        n_heat,
        n_power,
        heat_made,
        power_made,
    })
}

/// The part of what is made that the stage takes, 0 to 1.
fn used(given: &mut Given, name: &'static str, made: f64) -> Option<f64> {
    if !given.has(name) {
        return Some(1.0);
    }
    let taken = given.number(name)?;
    // Units of the two may differ: the last digit of a conversion is no error of the person.
    if taken > made * (1.0 + 1e-9) {
        let detail = format!(
            "{name} is {} MJ, but only {} MJ are made.",
            plain(taken),
            plain(made)
        );
        given.problem(
            name,
            detail,
            "Give at most what is made; buy the rest as an input of its own.",
        );
        return None;
    }
    Some((taken / made).min(1.0))
}

fn plausible(given: &mut Given, plant: &Plant) -> Option<()> {
    let sum = plant.n_heat + plant.n_power;
    let designed = given.has(DESIGN[0]);
    let (whole, heat, power) = if designed {
        (DESIGN[0], DESIGN[0], DESIGN[1])
    } else {
        (METERED[0], METERED[1], METERED[2])
    };
    let percent = plain_fixed(100.0 * sum, 1);
    // The sum of two shares may pass 1 by rounding alone.
    if sum > 1.0 + 1e-12 {
        let detail = format!("Heat and power are {percent} % of the fuel: more than goes in.");
        given.problem(
            whole,
            detail,
            "Check units, and that the fuel is net and the heat without condensate.",
        );
        return None;
    }
    if !(0.45..=0.92).contains(&sum) {
        let message =
            format!("The plant turns {percent} % of its fuel into heat and power; usual is 45 to 92 %.");
        let remedy = "Check units and gross or net fuel, or give the reason.";
        given.note("C-18", Severity::Warn, whole, message, remedy);
    }
    for (name, part, low, high) in [
        (heat, plant.n_heat, 15.0, 75.0),
        (power, plant.n_power, 5.0, 50.0),
    ] {
        let part = 100.0 * part;
        if !(low - 1e-9..=high + 1e-9).contains(&part) {
            let message = format!(
                "{name} is {} % of the fuel; usual is {} to {} %.",
                plain_fixed(part, 1),
                plain(low),
                plain(high)
            );
            let remedy = "Check figure and unit, or give the reason.";
            given.note("K-01", Severity::Warn, name, message, remedy);
        }
    }
    Some(())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::core::models::testing::{Bench, close};
    use proptest::prelude::*;
    use serde_json::{Value, json};

    fn metered(fuel: f64, heat: f64, power: f64, celsius: f64) -> Value {
        json!({ "fuel": { "gases": { "co2_fossil": 0.02, "co2_biogenic": 0.1 }, "per": "MJ", "citation": "made up" },
                "fuel_used": { "value": fuel, "unit": "MJ" }, "heat_made": { "value": heat, "unit": "MJ" },
                "power_made": { "value": power, "unit": "MJ" }, "heat_temperature_c": celsius })
    }

    #[test]
    fn carnot_factors_of_the_directive() {
        // Directive (EU) 2018/2001 Annex V Part C point 16; the formula gives 0.354484 at 150 degC, 0.3546 is printed.
        for (celsius, expected) in [(120.0, 0.305_227), (150.0, 0.354_484)] {
            let run = Bench::default().run("chp", &metered(100.0, 50.0, 30.0, celsius));
            close(run.step("Carnot factor"), expected, 2e-6);
        }
        let mut building = metered(100.0, 50.0, 30.0, 120.0);
        building["building_heat"] = json!(true);
        let run = Bench::default().run("chp", &building);
        close(run.step("Carnot factor"), 0.3546, 1e-15);
        building["heat_temperature_c"] = json!(150);
        assert_eq!(
            Bench::default().run("chp", &building).pointers(),
            ["/building_heat"]
        );
    }

    #[test]
    fn burden_of_power_and_of_heat() {
        // Annex V Part C points 1(b) and 16: n_e 0.30, n_h 0.50, C_h 0.3546, 20 g per MJ of fuel.
        let mut parameters = metered(100.0, 50.0, 30.0, 120.0);
        parameters["building_heat"] = json!(true);
        parameters["heat_used"] = json!({ "value": 0, "unit": "MJ" });
        let power = Bench::default().gases("chp", &parameters);
        close(1e3 * power[Gas::Co2Fossil] / 30.0, 41.9024, 2e-6);
        close(power[Gas::Co2Fossil] / 2.0, 0.628_536, 2e-6);
        parameters["heat_used"] = json!({ "value": 50, "unit": "MJ" });
        parameters["power_used"] = json!({ "value": 0, "unit": "MJ" });
        let run = Bench::default().run("chp", &parameters);
        close(1e3 * run.gases()[Gas::Co2Fossil] / 50.0, 14.8586, 2e-6);
        // The whole fuel's carbon leaves the works.
        assert_eq!(run.outcome.and_then(|outcome| outcome.biogenic_kg), Some(10.0));
    }

    #[test]
    fn a_design_agrees_with_its_meters() {
        let mut design = metered(0.0, 0.0, 0.0, 160.0);
        let object = design.as_object_mut().unwrap();
        for name in METERED {
            object.remove(name);
        }
        design["heat_used"] = json!({ "value": 50, "unit": "MJ" });
        design["power_used"] = json!({ "value": 10, "unit": "MJ" });
        design["efficiency_heat_percent"] = json!(50);
        design["efficiency_power_percent"] = json!(30);
        let mut meters = metered(100.0, 50.0, 30.0, 160.0);
        meters["power_used"] = json!({ "value": 10, "unit": "MJ" });
        let (a, b) = (
            Bench::default().gases("chp", &design),
            Bench::default().gases("chp", &meters),
        );
        close(a[Gas::Co2Fossil], b[Gas::Co2Fossil], 1e-14);
        design["fuel_used"] = json!({ "value": 100, "unit": "MJ" });
        assert_eq!(Bench::default().run("chp", &design).pointers(), ["/fuel_used"]);
    }

    #[test]
    fn efficiencies_are_checked() {
        // A gas bill in MWh read as GJ: 13 % comes out.
        let run = Bench::default().run("chp", &metered(1000.0, 100.0, 30.0, 150.0));
        assert_eq!(run.findings(), ["C-18", "K-01", "K-01"]);
        assert!(run.record.notes[0].message.contains("13.0 %"));
        assert_eq!(
            Bench::default()
                .run("chp", &metered(100.0, 80.0, 30.0, 150.0))
                .pointers(),
            ["/fuel_used"]
        );
        let mut greedy = metered(100.0, 50.0, 30.0, 150.0);
        greedy["power_used"] = json!({ "value": 30.1, "unit": "MJ" });
        assert_eq!(Bench::default().run("chp", &greedy).pointers(), ["/power_used"]);
        let run = Bench::default().run("chp", &json!({ "heat_temperature_c": 20 }));
        assert_eq!(
            run.pointers(),
            [
                "/heat_temperature_c",
                "/fuel",
                "/fuel_used",
                "/heat_made",
                "/power_made"
            ]
        );
    }

    proptest! {
        #[test]
        fn shares_lie_between_nothing_and_all(c in 0.05f64..0.7, h in 0.01f64..0.9, e in 0.01f64..0.9) {
            let s = shares(c, h, e);
            prop_assert!((0.0..=1.0).contains(&s.heat) && (0.0..=1.0).contains(&s.power));
            prop_assert!((s.heat + s.power - 1.0).abs() < 1e-15);
        }

        #[test]
        fn heat_and_power_taken_whole_carry_the_whole_fuel(
            fuel in 1.0f64..1e9, h in 0.15f64..0.6, e in 0.05f64..0.4, celsius in 30.0f64..600.0,
        ) {
            let gases = Bench::default().gases("chp", &metered(fuel, fuel * h, fuel * e, celsius));
            close(gases[Gas::Co2Fossil], fuel * 0.02, 1e-12);
        }

        #[test]
        fn taking_heat_and_taking_power_add_up(u_h in 0.0f64..=1.0, u_e in 0.0f64..=1.0) {
            let take = |h: f64, e: f64| {
                let mut p = metered(100.0, 50.0, 30.0, 160.0);
                p["heat_used"] = json!({ "value": 50.0 * h, "unit": "MJ" });
                p["power_used"] = json!({ "value": 30.0 * e, "unit": "MJ" });
                Bench::default().gases("chp", &p)[Gas::Co2Fossil]
            };
            prop_assert!((take(u_h, u_e) - take(u_h, 0.0) - take(0.0, u_e)).abs() < 1e-12);
        }
    }
}
