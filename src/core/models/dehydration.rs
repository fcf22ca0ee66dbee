//! `dehydration`: heat that takes the last water out of strong ethanol, by molecular sieve or with an entrainer.
//! The sieve's arithmetic is in `still`.

use super::distillation::{ETHANOL, HEAT, derived, outcome, output_strength, refused, row, strength_in};
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::still::{SieveRequest, dry, ranges};
use super::{Model, Outcome};

const PERCENT: Takes = Takes::Number("percent");
const VAPOUR: &str = "feed_is_vapour";
const STEAM: &str = "steam_per_kg";

/// The model.
pub const MODEL: Model = Model {
    kind: "dehydration",
    title: "Dehydration",
    what: "Heat that takes the last water out of strong ethanol, and the fuel for it.",
    source: "sieve: (1 + g)/w x 1.7e-3 MJ/(kg K) x superheat + g x heat to distil the purge again + latent heat of a liquid feed \
             x (1 + g); entrainer: steam as stated",
    term: None,
    parameters: &[
        Parameter::required(
            "method",
            Takes::Word(&["sieve", "entrainer"]),
            "how the water is taken out.",
        ),
        row(
            ranges::SIEVE_FEED,
            PERCENT,
            "the intake's strength",
            "sieve: ethanol in what enters, % mass, w.",
        ),
        row(
            ranges::SIEVE_PRODUCT,
            PERCENT,
            "the output's strength",
            "sieve: ethanol in what leaves, % mass.",
        ),
        Parameter::optional(
            VAPOUR,
            Takes::Flag,
            "true",
            "sieve: vapour straight from the rectifier; false adds the latent heat.",
        ),
        row(
            ranges::SUPERHEAT,
            Takes::Number("K"),
            "30",
            "sieve: superheat before the bed.",
        ),
        row(
            ranges::PURGE,
            PERCENT,
            "15",
            "sieve: ethanol in the purge, kg per 100 kg of dry product, g.",
        ),
        row(
            ranges::PURGE_STRENGTH,
            PERCENT,
            "72",
            "sieve: ethanol in the purge, % mass; weaker than what enters.",
        ),
        Parameter::optional(
            STEAM,
            Takes::Amount("MJ/kg"),
            "none; needed with entrainer",
            "entrainer: heat per kg of pure ethanol.",
        )
        .hard(Span::positive())
        .usual(Span::of(1.0, 4.0)),
        ETHANOL,
        HEAT,
    ],
    compute,
};

const OF_SIEVE: [&str; 6] = [
    ranges::SIEVE_FEED.name,
    ranges::SIEVE_PRODUCT.name,
    VAPOUR,
    ranges::SUPERHEAT.name,
    ranges::PURGE.name,
    ranges::PURGE_STRENGTH.name,
];

fn compute(given: &mut Given) -> Option<Outcome> {
    let per_kg = match given.word("method") {
        Some("sieve") => sieve(given),
        Some(_) => entrainer(given),
        None => None,
    };
    outcome(given, per_kg)
}

fn sieve(given: &mut Given) -> Option<f64> {
    foreign(given, &[STEAM], "entrainer");
    let feed = strength_in(given, ranges::SIEVE_FEED, |mass| 100.0 * mass);
    let product = product(given);
    let feed_is_vapour = !given.has(VAPOUR) || given.flag(VAPOUR);
    let superheat = given.number_or(ranges::SUPERHEAT.name, 30.0);
    let purge = given.number_or(ranges::PURGE.name, 15.0);
    let purge_strength = given.number_or(ranges::PURGE_STRENGTH.name, 72.0);
    let request = SieveRequest {
        feed_is_vapour,
        superheat_k: superheat?,
        purge_percent: purge?,
        purge_percent_mass: purge_strength?,
        ..SieveRequest::new(feed?, product?)
    };
    match dry(&request) {
        Ok(drying) => {
            given.record.steps.extend(drying.steps);
            Some(drying.total_mj_per_kg)
        }
        Err(refusals) => refused(given, refusals),
    }
}

fn product(given: &mut Given) -> Option<f64> {
    let name = ranges::SIEVE_PRODUCT.name;
    if given.has(name) {
        return given.number(name);
    }
    let strength = output_strength(given, name)?;
    derived(given, ranges::SIEVE_PRODUCT, strength, "output")
}

fn entrainer(given: &mut Given) -> Option<f64> {
    foreign(given, &OF_SIEVE, "sieve");
    if !given.has(STEAM) {
        let remedy = "Add \"steam_per_kg\", such as { \"value\": 2, \"unit\": \"MJ/kg\" }.";
        given.problem(STEAM, "An entrainer needs the heat it takes.", remedy);
        return None;
    }
    given.number(STEAM)
}

/// Refuses parameters of the other method.
fn foreign(given: &mut Given, names: &[&str], method: &str) {
    for name in names {
        if given.has(name) {
            let detail = format!("\"{name}\" belongs to method {method}.");
            given.problem(name, detail, "Take it out, or change the method.");
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::core::domain::Gas;
    use crate::core::models::distillation::tests::ethanol;
    use crate::core::models::testing::{Bench, close};
    use serde_json::{Value, json};

    fn sieve() -> Bench {
        Bench {
            intakes: vec![ethanol(1_100.0, 0.925)],
            output: Some(ethanol(1_000.0, 0.997)),
            ..Bench::default()
        }
    }

    fn heat() -> Value {
        json!({ "factor": { "gases": { "co2e_unsplit": 0.05 }, "per": "MJ heat", "citation": "made up" } })
    }

    #[test]
    fn the_sieve_takes_its_strengths_from_the_flows() {
        // Independent program: 0.4686 MJ per kg of pure ethanol, with a liquid feed 1.6415.
        let run = sieve().run("dehydration", &json!({ "method": "sieve", "heat_from": heat() }));
        close(run.gases()[Gas::Co2eUnsplit], 0.4686 * 997.0 * 0.05, 2e-4);
        let liquid = json!({ "method": "sieve", "feed_is_vapour": false, "heat_from": heat() });
        let gases = sieve().gases("dehydration", &liquid);
        close(gases[Gas::Co2eUnsplit], 1.6415 * 997.0 * 0.05, 5e-5);
        let still = json!({ "method": "sieve", "purge_percent": 0, "superheat_k": 0, "heat_from": heat() });
        assert_eq!(sieve().gases("dehydration", &still)[Gas::Co2eUnsplit], 0.0);
    }

    #[test]
    fn an_entrainer_takes_the_heat_that_is_stated() {
        let stated = json!({ "method": "entrainer", "steam_per_kg": { "value": 2.5, "unit": "GJ/t" }, "heat_from": heat() });
        let run = sieve().run("dehydration", &stated);
        close(run.gases()[Gas::Co2eUnsplit], 2.5 * 997.0 * 0.05, 1e-12);
        assert!(run.findings().is_empty());
        let none = json!({ "method": "entrainer", "heat_from": heat() });
        assert_eq!(sieve().run("dehydration", &none).pointers(), ["/steam_per_kg"]);
    }

    #[test]
    fn what_belongs_to_the_other_method_or_is_out_of_range_is_refused() {
        let steam = json!({ "value": 9, "unit": "MJ/kg" });
        let run = sieve().run(
            "dehydration",
            &json!({ "method": "sieve", "steam_per_kg": steam, "heat_from": heat() }),
        );
        assert_eq!(run.pointers(), ["/steam_per_kg"]);
        let run = sieve().run(
            "dehydration",
            &json!({ "method": "entrainer", "purge_percent": 10, "steam_per_kg": steam, "heat_from": heat() }),
        );
        assert_eq!(run.pointers(), ["/purge_percent"]);
        assert_eq!(run.findings(), ["K-01"]);
        let mut weak = sieve();
        weak.intakes = vec![ethanol(1.0, 0.6)];
        let run = weak.run(
            "dehydration",
            &json!({ "method": "sieve", "superheat_k": 90, "heat_from": heat() }),
        );
        assert_eq!(run.pointers(), ["/feed_strength_percent_mass", "/superheat_k"]);
        let crossed = json!({ "method": "sieve", "feed_strength_percent_mass": 86, "purge_strength_percent_mass": 90,
                              "heat_from": heat() });
        assert_eq!(
            sieve().run("dehydration", &crossed).pointers(),
            ["/purge_strength_percent_mass"]
        );
    }
}
