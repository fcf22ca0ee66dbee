//! Blends and kilometres: the worked points of `tests/cases/blends.csv`, laws, and what is refused.

use proptest::prelude::*;
use serde_json::{Value, json};
use std::path::Path;
use wheelwort::core::documents::Problems;
use wheelwort::core::documents::blend::{Blend, BlendRequest, Intensity, PerKm, PerKmRequest};
use wheelwort::core::engine::{blend, per_km};
use wheelwort::library;

fn mix(request: &Value) -> Result<Blend, Problems> {
    let book = library::book();
    let request = BlendRequest::from_value(request)?;
    blend::blend(&request, &book.rule_sets["eu-2018-2001"], book)
}

fn good(request: &Value) -> Blend {
    mix(request).unwrap_or_else(|problems| panic!("{:#?}", problems.list()))
}

fn drive(request: &Value, blend: &Blend) -> Result<PerKm, Problems> {
    per_km::per_km(&PerKmRequest::from_value(request)?, blend)
}

/// Ethanol of 30 g/MJ in petrol of 94 g/MJ, as in the cases.
fn request(percent: f64, basis: &str) -> Value {
    json!({
        "ethanol_percent_vol": percent, "temperature_c": 20, "heating_values": basis,
        "ethanol": { "g_co2e_per_mj": 30, "source": "invented" },
        "petrol": { "g_co2e_per_mj": 94, "source": "invented" } })
}

fn own(percent: f64, ethanol: f64, petrol: f64, density: f64) -> Value {
    let mut request = request(percent, "own");
    request["own_heating_values"] = json!({
        "ethanol_mj_per_l": ethanol, "petrol_mj_per_l": petrol,
        "ethanol_kg_per_m3": density, "petrol_kg_per_m3": 745, "source": "tests/cases/blends.csv" });
    request
}

/// Near to what a table prints with so many decimals.
fn printed(found: f64, wanted: f64, decimals: i32) -> bool {
    (found - wanted).abs() <= 0.5001 * 10f64.powi(-decimals) + 1e-6 * wanted.abs()
}

#[test]
fn worked_points_come_out() {
    // Worked from the legal densities of energy (Directive (EU) 2018/2001 Annex III), the physical ones at 20 degC and
    // those of SOR/2022-140 Schedule 2 (higher heating value); `source` and `status` stand in each row of the file.
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cases/blends.csv");
    let mut rows = 0;
    for row in csv::Reader::from_path(path).unwrap().records() {
        let row = row.unwrap();
        let figure = |column: usize| row[column].parse::<f64>().unwrap();
        let percent = 100.0 * figure(1);
        // The mass share was worked with 789 kg/m3 on the legal basis, with 789.24 (OIML R 22, 20 degC) on the others.
        let density = if &row[2] == "law" { 789.0 } else { 789.2391 };
        let mut found = vec![good(&own(percent, figure(3), figure(4), density))];
        if &row[2] == "law" {
            found.push(good(&request(percent, "consignment_energy")));
        }
        for blend in found {
            let what = format!("{} {}: {blend:#?}", &row[0], &row[2]);
            assert!(printed(blend.mj_per_l, figure(5), 5), "{what}");
            assert!(
                printed(blend.ethanol.percent_energy / 100.0, figure(6), 6),
                "{what}"
            );
            if let Some(mass) = blend.ethanol.percent_mass {
                assert!(printed(mass / 100.0, figure(7), 6), "{what}");
            }
            assert!(printed(blend.g_co2e_per_mj, figure(8), 4), "{what}");
            assert!(
                printed(blend.saving_against_petrol_percent / 100.0, figure(9), 6),
                "{what}"
            );
            assert!(printed(blend.litres_per_litre_of_petrol, figure(10), 5), "{what}");
        }
        rows += 1;
    }
    assert_eq!(rows, 33);
}

#[test]
fn energy_shares_name_their_volume_shares() {
    // blends.md: 10 % by energy needs 14.48 % by volume, 5.75 % needs 8.51 %, with 21 and 32 MJ/L.
    for (volume, energy) in [(14.48, 10.0), (8.51, 5.75)] {
        let blend = good(&request(volume, "consignment_energy"));
        assert!(
            (blend.ethanol.percent_energy - energy).abs() < 0.005,
            "{blend:#?}"
        );
    }
}

#[test]
fn emission_arithmetic_multiplies_the_printed_figures() {
    // Implementing Regulation (EU) 2022/996 Annex IX: ethanol 26.81 MJ/kg and 794 kg/m3, petrol 43.2 and 745; 21.29 and 32.18 MJ/L.
    let mut asked = request(10.0, "emission_arithmetic");
    asked.as_object_mut().unwrap().remove("petrol");
    let blend = good(&asked);
    assert!((blend.ethanol.mj_per_l - 21.287_14).abs() < 1e-9);
    assert!((blend.petrol.mj_per_l - 32.184).abs() < 1e-9);
    // The rule set's petrol, 93.3 (same Annex).
    assert_eq!(blend.petrol.intensity.g_co2e_per_mj, 93.3);
    let share = 2.128_714 / (2.128_714 + 0.9 * 32.184);
    assert!((blend.ethanol.percent_energy - 100.0 * share).abs() < 1e-9);
    assert!((blend.g_co2e_per_mj - (share * 30.0 + (1.0 - share) * 93.3)).abs() < 1e-9);
    assert!(blend.heating_values_words.contains("Annex IX"));
    assert!(blend.workings.iter().any(|step| step.source.contains("2022/996")));
    // Another temperature moves no figure, and the note says by how much ethanol would change.
    asked["temperature_c"] = json!(35);
    let warm = good(&asked);
    assert_eq!(warm.g_co2e_per_l, blend.g_co2e_per_l);
    assert!(warm.notes.iter().any(|note| note.contains("35 degC")));
}

#[test]
fn names_stand_for_their_shares() {
    for named in &blend::NAMED {
        let mut asked = request(0.0, "consignment_energy");
        asked.as_object_mut().unwrap().remove("ethanol_percent_vol");
        asked["blend"] = json!(named.name);
        let by_name = good(&asked);
        let by_share = good(&request(named.percent_vol, "consignment_energy"));
        assert_eq!(by_name.g_co2e_per_mj, by_share.g_co2e_per_mj);
        assert_eq!(by_name.name, named.name);
        assert!(by_name.notes.iter().any(|note| note == named.meaning));
    }
}

#[test]
fn the_net_of_an_assessment_goes_in() {
    let assessment = super::shapes::good(&super::shapes::chain(&super::shapes::Figures::usual()));
    let book = library::book();
    let mut asked = BlendRequest::from_value(&request(10.0, "emission_arithmetic")).unwrap();
    asked.ethanol = Intensity::of_assessment(&assessment);
    let blend = blend::blend(&asked, &book.rule_sets["eu-2018-2001"], book).unwrap();
    let share = blend.ethanol.percent_energy / 100.0;
    let wanted = share * assessment.net.g_co2e_per_mj + (1.0 - share) * 94.0;
    assert!((blend.g_co2e_per_mj - wanted).abs() < 1e-9);
    assert!(blend.ethanol.intensity.source.contains(&assessment.pathway_hash));
}

#[test]
fn every_figure_is_refused_where_it_stands() {
    let refused = |change: &dyn Fn(&mut Value), pointer: &str| {
        let mut asked = own(10.0, 21.0, 32.0, 789.0);
        change(&mut asked);
        let problems = mix(&asked).unwrap_err();
        let found: Vec<&str> = problems.list().iter().map(|p| p.pointer.as_str()).collect();
        assert_eq!(found, [pointer], "{:#?}", problems.list());
    };
    refused(
        &|r| r["ethanol_percent_vol"] = json!(100.1),
        "/ethanol_percent_vol",
    );
    refused(&|r| r["ethanol_percent_vol"] = json!(-1), "/ethanol_percent_vol");
    refused(
        &|r| r["ethanol_percent_vol"] = json!(null),
        "/ethanol_percent_vol",
    );
    refused(&|r| r["blend"] = json!("E10"), "/ethanol_percent_vol");
    refused(
        &|r| {
            r["blend"] = json!("E11");
            r["ethanol_percent_vol"] = json!(null);
        },
        "/blend",
    );
    refused(&|r| r["temperature_c"] = json!(41), "/temperature_c");
    refused(&|r| r["temperature_c"] = json!("warm"), "/temperature_c");
    refused(&|r| r["heating_values"] = json!("gross"), "/heating_values");
    refused(
        &|r| r["heating_values"] = json!("consignment_energy"),
        "/own_heating_values",
    );
    refused(&|r| r["own_heating_values"] = json!(null), "/own_heating_values");
    refused(
        &|r| r["own_heating_values"]["ethanol_mj_per_l"] = json!(0),
        "/own_heating_values/ethanol_mj_per_l",
    );
    refused(
        &|r| r["own_heating_values"]["petrol_kg_per_m3"] = json!(1e9),
        "/own_heating_values/petrol_kg_per_m3",
    );
    refused(
        &|r| r["own_heating_values"]["petrol_kg_per_m3"] = json!(null),
        "/own_heating_values",
    );
    refused(
        &|r| r["own_heating_values"]["source"] = json!(" "),
        "/own_heating_values/source",
    );
    refused(
        &|r| r["ethanol"]["g_co2e_per_mj"] = json!(1e5),
        "/ethanol/g_co2e_per_mj",
    );
    refused(&|r| r["ethanol"]["source"] = json!(""), "/ethanol/source");
    refused(
        &|r| r["petrol"]["g_co2e_per_mj"] = json!(0),
        "/petrol/g_co2e_per_mj",
    );
    refused(
        &|r| r["petrol"]["g_co2e_per_Mj"] = json!(94),
        "/petrol/g_co2e_per_Mj",
    );
    refused(&|r| r["ethanol"] = json!(null), "/ethanol");
}

#[test]
fn all_problems_come_at_once() {
    let mut asked = request(200.0, "own");
    asked["temperature_c"] = json!(99);
    asked["petrol"]["g_co2e_per_mj"] = json!(-3);
    assert_eq!(mix(&asked).unwrap_err().len(), 4);
}

#[test]
fn a_kilometre_by_hand() {
    // 2 MJ/km on E10 of 21 and 32 MJ/L, 30 and 94 g/MJ: 30.9 MJ/L, 89.6505 g/MJ.
    let blend = good(&request(10.0, "consignment_energy"));
    let km = drive(
        &json!({ "vehicle": "small car", "mj_per_km": 2, "source": "invented" }),
        &blend,
    )
    .unwrap();
    assert!((km.g_co2e_per_km - 179.301).abs() < 1e-3, "{km:#?}");
    assert!((km.petrol_g_co2e_per_km - 188.0).abs() < 1e-9);
    assert!((km.l_per_100_km - 200.0 / 30.9).abs() < 1e-9);
    assert!((km.saved_g_co2e_per_km - 8.699).abs() < 1e-3);
    assert_eq!(km.blend, "10 % ethanol by volume");
}

#[test]
fn an_energy_use_is_refused_where_it_stands() {
    let blend = good(&request(10.0, "consignment_energy"));
    for (asked, pointer) in [
        (json!({ "source": "invented" }), "/mj_per_km"),
        (
            json!({ "mj_per_km": 2, "l_per_100_km": 6, "source": "invented" }),
            "/l_per_100_km",
        ),
        (json!({ "mj_per_km": 0, "source": "invented" }), "/mj_per_km"),
        (
            json!({ "l_per_100_km": 5001, "source": "invented" }),
            "/l_per_100_km",
        ),
        (json!({ "mj_per_km": 2, "source": " " }), "/source"),
        (json!({ "mj_per_km": 2 }), "/source"),
        (
            json!({ "mj_per_mile": 2, "mj_per_km": 1, "source": "invented" }),
            "/mj_per_mile",
        ),
    ] {
        let problems = drive(&asked, &blend).unwrap_err();
        let found: Vec<&str> = problems.list().iter().map(|p| p.pointer.as_str()).collect();
        assert_eq!(found, [pointer], "{asked}");
    }
}

const BASES: [&str; 2] = ["emission_arithmetic", "consignment_energy"];

fn asked(percent: f64, basis: usize, ethanol: f64, petrol: f64) -> Blend {
    let mut asked = request(percent, BASES[basis]);
    asked["ethanol"]["g_co2e_per_mj"] = json!(ethanol);
    asked["petrol"]["g_co2e_per_mj"] = json!(petrol);
    good(&asked)
}

proptest! {
    #[test]
    fn nothing_is_petrol_and_everything_is_ethanol(basis in 0usize..2, e in -50.0f64..150.0, p in 60.0f64..120.0) {
        let none = asked(0.0, basis, e, p);
        prop_assert_eq!(none.g_co2e_per_mj, p);
        prop_assert_eq!(none.saving_against_petrol_percent, 0.0);
        prop_assert_eq!(none.litres_per_litre_of_petrol, 1.0);
        let all = asked(100.0, basis, e, p);
        prop_assert_eq!(all.g_co2e_per_mj, e);
        prop_assert!((all.saving_against_petrol_percent - 100.0 * (1.0 - e / p)).abs() < 1e-9);
        prop_assert_eq!(all.ethanol.percent_energy, 100.0);
    }

    #[test]
    fn more_of_the_better_fuel_is_better(basis in 0usize..2, v in 0.0f64..99.0, more in 0.01f64..1.0, e in -50.0f64..60.0, p in 60.1f64..120.0) {
        let (less, more) = (asked(v, basis, e, p), asked(v + more, basis, e, p));
        prop_assert!(more.g_co2e_per_mj < less.g_co2e_per_mj);
        prop_assert!(more.saving_against_petrol_percent > less.saving_against_petrol_percent);
        prop_assert!(more.ethanol.percent_energy > less.ethanol.percent_energy);
        prop_assert!(more.mj_per_l < less.mj_per_l);
    }

    #[test]
    fn shares_lie_between_and_close(basis in 0usize..2, v in 0.1f64..99.9, e in -50.0f64..150.0, p in 60.0f64..120.0) {
        let blend = asked(v, basis, e, p);
        // A litre of ethanol holds less energy and weighs more than one of petrol.
        prop_assert!(blend.ethanol.percent_energy > 0.0 && blend.ethanol.percent_energy < v);
        if let Some(mass) = blend.ethanol.percent_mass {
            prop_assert!(mass > v && mass < 100.0);
        }
        prop_assert!((blend.ethanol.percent_energy + blend.petrol.percent_energy - 100.0).abs() < 1e-9);
        prop_assert!(blend.g_co2e_per_mj >= e.min(p) - 1e-9 && blend.g_co2e_per_mj <= e.max(p) + 1e-9);
        // Both ways to say it: per litre, and by the saving.
        let per_l = v / 100.0 * blend.ethanol.mj_per_l * e + (1.0 - v / 100.0) * blend.petrol.mj_per_l * p;
        prop_assert!((blend.g_co2e_per_l - per_l).abs() < 1e-9 * per_l.abs().max(1.0));
        prop_assert!((blend.saving_against_petrol_percent - 100.0 * (1.0 - blend.g_co2e_per_mj / p)).abs() < 1e-9);
    }

    #[test]
    fn litres_and_megajoules_agree(v in 0.0f64..=100.0, mj in 0.1f64..50.0) {
        let blend = asked(v, 1, 30.0, 94.0);
        let by_mj = drive(&json!({ "mj_per_km": mj, "source": "invented" }), &blend).unwrap();
        let by_l = drive(&json!({ "l_per_100_km": by_mj.l_per_100_km, "source": "invented" }), &blend).unwrap();
        prop_assert!((by_mj.g_co2e_per_km - by_l.g_co2e_per_km).abs() < 1e-9 * by_mj.g_co2e_per_km);
        prop_assert!((by_mj.petrol_g_co2e_per_km - by_mj.saved_g_co2e_per_km - by_mj.g_co2e_per_km).abs() < 1e-9);
    }
}
