//! `lime`: CO2 of soil acidity and of liming. Implementing Regulation (EU) 2022/996 Annex VII point 1.4 (acidity counts
//! without lime too), or 2006 IPCC Guidelines Vol. 4 Ch. 11 Equation 11.12. Gas `co2_fossil`, kg.

use super::constants::{constants, sources};
use super::given::Given;
use super::parameter::{Parameter, Span, Takes};
use super::{Model, Outcome};
use crate::core::domain::{Gas, GasVector};
use crate::core::units::rounding::plain;

/// Method and edition of Annex VII.
pub(super) const EU: &str = "eu-2022-996";
/// Method and edition of the Guidelines.
pub(super) const IPCC: &str = "ipcc-2006";

const OF_EU: [&str; 5] = [
    "caco3_equivalent_kg",
    "soil_ph",
    "nitrate_n_kg",
    "urea_n_kg",
    "lime_is",
];
const OF_IPCC: [&str; 2] = ["limestone_kg", "dolomite_kg"];

/// The model.
pub const MODEL: Model = Model {
    kind: "lime",
    title: "Soil acidity and lime",
    what: "CO2 that acid from fertiliser and lime set free from carbonates in the soil.",
    source: "Implementing Regulation (EU) 2022/996 Annex VII point 1.4 (as corrected in 2025); 2006 IPCC Guidelines Vol. 4 \
             Ch. 11 Equation 11.12",
    term: None,
    parameters: &[
        Parameter::required("method", Takes::Word(&[EU, IPCC]), "which equation."),
        Parameter::optional(
            "caco3_equivalent_kg",
            Takes::Number("kg CaCO3"),
            "none; needed with eu-2022-996, 0 without liming",
            "lime as calcium carbonate, L; several years' liming is divided by its years first.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "soil_ph",
            Takes::Number(""),
            "none; needed with eu-2022-996",
            "picks the CO2 of lime, f: one figure below pH 6.4, one from there on.",
        )
        .hard(Span::of(3.0, 10.0))
        .usual(Span::of(4.5, 8.5)),
        Parameter::optional(
            "nitrate_n_kg",
            Takes::Number("kg N"),
            "0",
            "nitrogen given as nitrate: acidity a.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "urea_n_kg",
            Takes::Number("kg N"),
            "0",
            "nitrogen given as urea: acidity a.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "lime_is",
            Takes::Word(&["actual", "recommended"]),
            "actual",
            "actual: a + max(0, f L - a); recommended: a + f L.",
        ),
        Parameter::optional(
            "limestone_kg",
            Takes::Number("kg"),
            "0; ipcc-2006 only",
            "limestone, kg of material.",
        )
        .hard(Span::not_negative()),
        Parameter::optional(
            "dolomite_kg",
            Takes::Number("kg"),
            "0; ipcc-2006 only",
            "dolomite, kg of material.",
        )
        .hard(Span::not_negative()),
    ],
    compute,
};

fn compute(given: &mut Given) -> Option<Outcome> {
    let method = given.word("method")?;
    let co2 = if method == EU {
        strangers(given, &OF_IPCC, EU);
        annex_vii(given)
    } else {
        strangers(given, &OF_EU, IPCC);
        guidelines(given)
    }?;
    Some(Outcome {
        gases: GasVector::of(Gas::Co2Fossil, co2),
        ..Outcome::default()
    })
}

/// Amounts of the other method would be left out without a word: refused instead.
fn strangers(given: &mut Given, names: &[&str], method: &str) {
    for name in names.iter().filter(|name| given.has(name)).collect::<Vec<_>>() {
        let detail = format!("Method {method} does not use \"{name}\".");
        given.problem(name, detail, "Take it out, or choose the other method.");
    }
}

fn annex_vii(given: &mut Given) -> Option<f64> {
    for name in ["caco3_equivalent_kg", "soil_ph"]
        .into_iter()
        .filter(|name| !given.has(name))
        .collect::<Vec<_>>()
    {
        let remedy = format!(
            "Add \"{name}\"{}.",
            if name == "soil_ph" {
                ""
            } else {
                ", 0 without liming"
            }
        );
        given.problem(name, format!("Method {EU} needs \"{name}\"."), remedy);
    }
    let lime = given.number("caco3_equivalent_kg");
    let ph = given.number("soil_ph");
    let nitrate = given.number_or("nitrate_n_kg", 0.0);
    let urea = given.number_or("urea_n_kg", 0.0);
    let recommended = match given.word("lime_is") {
        None if given.has("lime_is") => None,
        word => Some(word == Some("recommended")),
    };
    let symbols = [
        "acidity.nitrate",
        "acidity.urea",
        "lime.acid",
        "lime.nonacid",
        "lime.ph_limit",
    ];
    let [of_nitrate, of_urea, acid, nonacid, limit] = constants(given, EU, symbols)?;
    let (lime, ph, nitrate, urea, recommended) = (lime?, ph?, nitrate?, urea?, recommended?);
    let acidity = of_nitrate.value * nitrate + of_urea.value * urea;
    let text = format!(
        "acidity a = {} x {} kg N of nitrate + {} x {} kg N of urea",
        plain(of_nitrate.value),
        plain(nitrate),
        plain(of_urea.value),
        plain(urea)
    );
    given.step(text, acidity, "kg co2_fossil", &sources(&[&of_nitrate, &of_urea]));
    let (factor, side) = if ph < limit.value {
        (acid, "below")
    } else {
        (nonacid, "at or above")
    };
    let limed = factor.value * lime;
    let text = format!(
        "lime f L = {} x {} kg CaCO3, pH {} {side} {}",
        plain(factor.value),
        plain(lime),
        plain(ph),
        plain(limit.value)
    );
    given.step(text, limed, "kg co2_fossil", &sources(&[&factor, &limit]));
    let (co2, text) = if recommended {
        (
            acidity + limed,
            format!("recommended lime: {} + {}", plain(acidity), plain(limed)),
        )
    } else {
        let text = format!(
            "actual lime: {a} + max(0, {} - {a})",
            plain(limed),
            a = plain(acidity)
        );
        (acidity + (limed - acidity).max(0.0), text)
    };
    given.step(text, co2, "kg co2_fossil", &of_nitrate.source);
    Some(co2)
}

fn guidelines(given: &mut Given) -> Option<f64> {
    if !given.has("limestone_kg") && !given.has("dolomite_kg") {
        let detail = format!("Method {IPCC} needs limestone, dolomite or both.");
        given.problem("limestone_kg", detail, "Add \"limestone_kg\" or \"dolomite_kg\".");
        return None;
    }
    let limestone = given.number_or("limestone_kg", 0.0);
    let dolomite = given.number_or("dolomite_kg", 0.0);
    let symbols = ["lime.limestone", "lime.dolomite", "co2_per_c"];
    let [of_limestone, of_dolomite, per_c] = constants(given, IPCC, symbols)?;
    let (limestone, dolomite) = (limestone?, dolomite?);
    let carbon = of_limestone.value * limestone + of_dolomite.value * dolomite;
    let text = format!(
        "{} x {} kg limestone + {} x {} kg dolomite",
        plain(of_limestone.value),
        plain(limestone),
        plain(of_dolomite.value),
        plain(dolomite)
    );
    given.step(text, carbon, "kg C", &sources(&[&of_limestone, &of_dolomite]));
    let co2 = carbon * per_c.value;
    let text = format!("{} kg C x {}", plain(carbon), plain(per_c.value));
    given.step(text, co2, "kg co2_fossil", &per_c.source);
    Some(co2)
}

#[cfg(test)]
mod tests {
    use crate::core::models::testing::{Bench, close};
    use proptest::prelude::*;
    use serde_json::json;

    fn eu(lime: f64, ph: f64, nitrate: f64, urea: f64, lime_is: &str) -> f64 {
        let parameters = json!({ "method": "eu-2022-996", "caco3_equivalent_kg": lime, "soil_ph": ph,
                                 "nitrate_n_kg": nitrate, "urea_n_kg": urea, "lime_is": lime_is });
        Bench::default()
            .gases("lime", &parameters)
            .co2e(&Bench::plain_weights())
    }

    #[test]
    fn lime_that_only_neutralises_the_acid_counts_once() {
        // Implementing Regulation (EU) 2022/996 Annex VII point 1.4.2(3): 44 kg of lime less 48.36 kg of acid, not below 0.
        close(eu(100.0, 5.9, 60.0, 0.0, "actual"), 48.36, 1e-12);
        close(eu(100.0, 5.9, 60.0, 0.0, "recommended"), 48.36 + 44.0, 1e-12);
        close(eu(300.0, 5.9, 60.0, 0.0, "actual"), 132.0, 1e-12);
    }

    #[test]
    fn the_limit_itself_is_not_acid() {
        close(eu(100.0, 6.399_999, 0.0, 0.0, "actual"), 44.0, 1e-12);
        close(eu(100.0, 6.4, 0.0, 0.0, "actual"), 7.9, 1e-12);
    }

    #[test]
    fn stone_by_the_guidelines() {
        // 2006 IPCC Guidelines Vol. 4 Ch. 11 section 11.3: 0.44 t and 0.476667 t CO2 per t.
        let stone = json!({ "method": "ipcc-2006", "limestone_kg": { "value": 1, "unit": "t" } });
        let gases = Bench::default().gases("lime", &stone);
        close(gases.co2e(&Bench::plain_weights()), 440.0, 1e-5);
        let dolomite = json!({ "method": "ipcc-2006", "dolomite_kg": 1000 });
        let run = Bench::default().run("lime", &dolomite);
        close(run.gases().co2e(&Bench::plain_weights()), 476.667, 1e-5);
        assert!(
            run.record
                .steps
                .iter()
                .any(|step| step.source.contains("recalled, not read"))
        );
    }

    #[test]
    fn what_a_method_does_not_use_is_refused() {
        let run = Bench::default().run(
            "lime",
            &json!({ "method": "ipcc-2006", "caco3_equivalent_kg": 5 }),
        );
        assert_eq!(run.pointers(), ["/caco3_equivalent_kg", "/limestone_kg"]);
        let run = Bench::default().run("lime", &json!({ "method": "eu-2022-996", "dolomite_kg": 5 }));
        assert_eq!(
            run.pointers(),
            ["/dolomite_kg", "/caco3_equivalent_kg", "/soil_ph"]
        );
    }

    #[test]
    fn a_lacking_constant_is_a_problem_in_words() {
        let mut bench = Bench::default();
        bench.forget("eu-2022-996", "acidity.urea");
        let run = bench.run(
            "lime",
            &json!({ "method": "eu-2022-996", "caco3_equivalent_kg": 0, "soil_ph": 7 }),
        );
        assert_eq!(run.pointers(), ["/method"]);
        assert!(run.problems.list()[0].detail.contains("acidity.urea"));
    }

    proptest! {
        #[test]
        fn acid_and_lime_never_give_less_than_the_acid(l in 0.0f64..2e3, n in 0.0f64..400.0, u in 0.0f64..400.0) {
            let acid = eu(0.0, 5.0, n, u, "actual");
            let actual = eu(l, 5.0, n, u, "actual");
            prop_assert!(actual >= acid);
            prop_assert!(actual <= eu(l, 5.0, n, u, "recommended"));
        }
    }
}
