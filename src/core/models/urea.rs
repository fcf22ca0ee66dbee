//! `urea`: CO2 that urea sets free when it dissolves in the soil. 2006 IPCC Guidelines Vol. 4 Ch. 11 Equation 11.13.
//! Gas `co2_fossil`, kg. Under rules that count soil acidity (`lime`, eu-2022-996) the same CO2 is in there.

use super::constants::constants;
use super::given::Given;
use super::lime::{EU, IPCC};
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::domain::{Gas, GasVector};
use crate::core::units::rounding::plain;

/// Molar masses of urea and of its nitrogen, g/mol.
const UREA: (f64, f64) = (60.056, 28.014);

/// The model.
pub const MODEL: Model = Model {
    kind: "urea",
    title: "Urea",
    what: "CO2 of urea dissolving in the soil.",
    source: "2006 IPCC Guidelines Vol. 4 Ch. 11 Equation 11.13",
    term: None,
    parameters: &[
        Parameter::optional(
            "urea_kg",
            Takes::Number("kg"),
            "from urea_n_kg",
            "urea, kg of material; of urea ammonium nitrate the urea half only.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "urea_n_kg",
            Takes::Number("kg N"),
            "from urea_kg",
            "nitrogen given as urea; urea = N x 60.056/28.014.",
        )
        .hard(Span::not_negative()),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let named = if given.has("urea_n_kg") {
        "urea_n_kg"
    } else {
        "urea_kg"
    };
    let acidity = |(kind, method): &(String, String)| kind == "lime" && method == EU;
    if given.setting.neighbours.iter().any(acidity) {
        given.problem(
            named,
            "The stage has a lime model of method eu-2022-996 too: the CO2 of urea would count twice.",
            "Take this model out and give the nitrogen as \"urea_n_kg\" of the lime model.",
        );
        return None;
    }
    if given.setting.rules.soil_n2o_method == EU {
        let detail = format!(
            "{} counts urea as soil acidity, not by this model.",
            given.setting.rules.title
        );
        let remedy = "Use the model lime with method eu-2022-996 and \"urea_n_kg\"; 0 kg of lime will do.";
        given.problem(named, detail, remedy);
        return None;
    }
    let kg = match (given.has("urea_kg"), given.has("urea_n_kg")) {
        (true, false) => given.number("urea_kg")?,
        (false, true) => {
            let n = given.number("urea_n_kg")?;
            let kg = n * UREA.0 / UREA.1;
            let text = format!("{} kg N x {} / {}", plain(n), plain(UREA.0), plain(UREA.1));
            given.step(text, kg, "kg urea", "molar masses");
            kg
        }
        (both, _) => {
            let detail = if both {
                "The urea is given twice."
            } else {
                "The urea is missing."
            };
            given.problem("urea_kg", detail, "Give either \"urea_kg\" or \"urea_n_kg\".");
            return None;
        }
    };
    let [carbon, per_c] = constants(given, IPCC, ["urea", "co2_per_c"])?;
    let co2 = kg * carbon.value * per_c.value;
    let text = format!(
        "{} kg urea x {} kg C per kg x {}",
        plain(kg),
        plain(carbon.value),
        plain(per_c.value)
    );
    given.step(text, co2, "kg co2_fossil", &carbon.source);
    Some(Outcome {
        gases: GasVector::of(Gas::Co2Fossil, co2),
        ..Outcome::default()
    })
}

#[cfg(test)]
mod tests {
    use crate::core::domain::Gas;
    use crate::core::models::testing::{Bench, close};
    use serde_json::json;

    #[test]
    fn urea_by_its_nitrogen() {
        // 2006 IPCC Guidelines Vol. 4 Ch. 11 section 11.4: 100 kg N of urea are 214.379 kg and give 157.211 kg CO2.
        let gases = Bench::ipcc().gases("urea", &json!({ "urea_n_kg": 100 }));
        close(gases[Gas::Co2Fossil], 157.211, 1e-5);
        let gases = Bench::ipcc().gases("urea", &json!({ "urea_kg": { "value": 0.5, "unit": "t" } }));
        close(gases[Gas::Co2Fossil], 500.0 * 0.2 * 44.0 / 12.0, 1e-12);
    }

    #[test]
    fn acidity_rules_refuse_it_and_say_what_to_do() {
        let run = Bench::default().run("urea", &json!({ "urea_kg": 10 }));
        assert!(run.problems.list()[0].remedy.contains("lime"));
        let mut bench = Bench::ipcc();
        bench.neighbours = vec![("lime".to_owned(), "eu-2022-996".to_owned())];
        assert!(
            bench.run("urea", &json!({ "urea_kg": 10 })).problems.list()[0]
                .detail
                .contains("twice")
        );
        bench.neighbours = vec![("lime".to_owned(), "ipcc-2006".to_owned())];
        assert!(bench.run("urea", &json!({ "urea_kg": 10 })).problems.is_empty());
    }

    #[test]
    fn one_of_the_two_amounts_is_given() {
        assert_eq!(Bench::ipcc().run("urea", &json!({})).pointers(), ["/urea_kg"]);
        let both = json!({ "urea_kg": 1, "urea_n_kg": 1 });
        assert_eq!(Bench::ipcc().run("urea", &both).pointers(), ["/urea_kg"]);
        assert_eq!(
            Bench::ipcc().run("urea", &json!({ "urea_kg": -1 })).pointers(),
            ["/urea_kg"]
        );
    }
}
