//! `boiler`: the fuel that gives an amount of useful heat, or heat bought ready.

use super::given::Given;
use super::heat_from::{EFFICIENCY, FACTOR, FUEL, FUELS, HeatFrom, STACK};
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};

/// The model.
pub const MODEL: Model = Model {
    kind: "boiler",
    title: "Boiler",
    what: "Fuel and exhaust of an amount of useful heat.",
    source: "heat / efficiency x (fuel + stack), net heating value",
    term: None,
    parameters: &[
        Parameter::required("heat", Takes::Amount("MJ"), "useful heat to the section.")
            .hard(Span::positive()),
        EFFICIENCY,
        FUEL,
        STACK,
        FUELS,
        FACTOR,
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let heat = given.number("heat");
    let from = HeatFrom::read(given);
    let gases = from?.price(heat?, given);
    Some(Outcome {
        gases,
        ..Outcome::default()
    })
}

#[cfg(test)]
mod tests {
    use crate::core::domain::Gas;
    use crate::core::models::testing::{Bench, close};
    use serde_json::json;

    fn fuel(gas: &str, per_mj: f64) -> serde_json::Value {
        json!({ "gases": { gas: per_mj }, "per": "MJ", "citation": "made up" })
    }

    #[test]
    fn heat_over_efficiency_times_fuel_and_stack() {
        let parameters = json!({ "heat": { "value": 2, "unit": "GJ heat" }, "efficiency_percent": 80,
                                 "fuel": fuel("co2_fossil", 0.06), "stack": fuel("n2o", 1e-6) });
        let gases = Bench::default().gases("boiler", &parameters);
        close(gases[Gas::Co2Fossil], 150.0, 1e-12);
        close(gases[Gas::N2o], 2.5e-3, 1e-12);
    }

    #[test]
    fn fuels_split_by_their_shares_of_energy() {
        let per_kwh = json!({ "gases": { "co2_biogenic": 0.36 }, "per": "kWh", "citation": "made up" });
        let parameters = json!({ "heat": { "value": 91, "unit": "MJ" }, "efficiency_percent": 91,
            "fuels": [{ "factor": fuel("co2_fossil", 0.06), "share_percent": 45 },
                      { "factor": per_kwh, "share_percent": 55 }] });
        let gases = Bench::default().gases("boiler", &parameters);
        close(gases[Gas::Co2Fossil], 2.7, 1e-12);
        close(gases[Gas::Co2Biogenic], 5.5, 1e-12);
        let mut wrong = parameters.clone();
        wrong["fuels"][0]["share_percent"] = json!(45.000_001);
        assert_eq!(Bench::default().run("boiler", &wrong).pointers(), ["/fuels"]);
    }

    #[test]
    fn bought_heat_stands_alone() {
        let heat = json!({ "gases": { "co2e_unsplit": 0.05 }, "per": "MJ heat", "citation": "made up" });
        let alone = json!({ "heat": { "value": 100, "unit": "MJ" }, "factor": heat });
        close(
            Bench::default().gases("boiler", &alone)[Gas::Co2eUnsplit],
            5.0,
            1e-12,
        );
        let mut beside = alone.clone();
        beside["efficiency_percent"] = json!(90);
        assert_eq!(
            Bench::default().run("boiler", &beside).pointers(),
            ["/efficiency_percent"]
        );
        let power = json!({ "gases": { "co2e_unsplit": 0.05 }, "per": "kWh power", "citation": "made up" });
        let run = Bench::default().run(
            "boiler",
            &json!({ "heat": { "value": 100, "unit": "MJ" }, "factor": power }),
        );
        assert_eq!(run.pointers(), ["/factor"]);
    }

    #[test]
    fn a_plain_number_gross_energy_and_an_impossible_efficiency_are_refused() {
        let run = Bench::default().run("boiler", &json!({ "heat": 5, "efficiency_percent": 20 }));
        assert_eq!(run.pointers(), ["/heat", "/efficiency_percent", "/fuel"]);
        let gross = json!({ "heat": { "value": 5, "unit": "MJ gross" }, "efficiency_percent": 60,
                            "fuel": fuel("co2_fossil", 0.06) });
        let run = Bench::default().run("boiler", &gross);
        assert_eq!(run.pointers(), ["/heat/unit"]);
        assert_eq!(run.findings(), ["K-01"]);
    }

    #[test]
    fn a_fuel_without_published_gases_and_without_stack_is_pointed_out() {
        let mut bench = Bench::default();
        let heat = json!({ "value": 10, "unit": "MJ" });
        let bare = json!({ "heat": heat, "efficiency_percent": 90, "fuel": "test/fuel" });
        let run = bench.run("boiler", &bare);
        assert_eq!(run.findings(), ["K-02"]);
        assert!(run.record.notes[0].message.contains("CH4 and N2O"));
        let stacked =
            json!({ "heat": heat, "efficiency_percent": 90, "fuel": "test/fuel", "stack": "test/stack" });
        assert!(bench.run("boiler", &stacked).findings().is_empty());
        bench.forget("ipcc-2006", "ef1");
        assert_eq!(
            bench.run("boiler", &stacked).record.factors,
            ["test/fuel", "test/stack"]
        );
    }
}
