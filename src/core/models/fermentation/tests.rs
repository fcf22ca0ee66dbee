//! Yields against their equations and published works; carbon is kept.

use super::*;
use proptest::prelude::*;

fn given(substrate: Substrate, kg: f64) -> Given {
    Given {
        substrate,
        kg,
        released_percent: 100.0,
    }
}

fn request(substrates: &[Given], came: Came) -> Request {
    Request {
        substrates: substrates.to_vec(),
        feedstock_kg: None,
        came,
        respired_percent: 0.0,
        yeast_percent: 0.0,
        yeast_carbon_percent: 47.3,
        yeast_source: "composition".to_owned(),
    }
}

/// Moles of ethanol and sugar from a mole of substrate, and its molar mass: the equations behind the printed yields.
#[test]
fn printed_yields_are_those_of_the_equations() {
    for (substrate, moles, mass) in [
        (Substrate::Glucose, 2.0, 180.15588),
        (Substrate::Sucrose, 4.0, 342.29648),
        (Substrate::Starch, 2.0, 162.14060),
        (Substrate::Cellulose, 2.0, 162.14060),
        (Substrate::Xylose, 5.0 / 3.0, 150.12990),
        (Substrate::Xylan, 5.0 / 3.0, 132.11462),
    ] {
        assert!(
            (substrate.most() - moles * ETHANOL_G_PER_MOL / mass).abs() < 5.1e-6,
            "{substrate:?}"
        );
    }
    // Hydrolysis gains, computed from molar masses.
    for (substrate, gain) in [
        (Substrate::Starch, 1.11111),
        (Substrate::Sucrose, 1.05263),
        (Substrate::Xylan, 1.13636),
    ] {
        assert!((substrate.gain() - gain).abs() < 5e-6, "{substrate:?}");
    }
}

#[test]
fn agrees_with_published_works() {
    // Wheat: 69 % starch and 3 % sugar of dry matter, 435 L/t dry (AHDB/HGCA Research Review 61): 0.841 of the most.
    let kg = 435.0 * 0.78924;
    let mut wheat = request(
        &[given(Substrate::Starch, 690.0), given(Substrate::Sucrose, 30.0)],
        Came::EthanolKg(kg),
    );
    wheat.feedstock_kg = Some(1000.0);
    let found = ferment(&wheat).unwrap();
    assert!(
        (found.efficiency_percent - 84.1).abs() < 0.05,
        "{}",
        found.efficiency_percent
    );
    assert!((found.litres_per_tonne.unwrap() - 435.0).abs() < 0.01);
    // Wheat straw: 35.0 % glucan and 18.15 % xylan of dry matter (Biomass & Bioenergy 123 (2019) 59-69): 386 L/t at most.
    let straw = [given(Substrate::Cellulose, 350.0), given(Substrate::Xylan, 181.5)];
    let found = ferment(&request(&straw, Came::Percent(100.0))).unwrap();
    assert!(
        (found.ethanol_litres - 386.0).abs() < 0.5,
        "{}",
        found.ethanol_litres
    );
    // CO2 per kg of ethanol, whatever the efficiency.
    let found = ferment(&request(&straw, Came::Percent(68.0))).unwrap();
    assert!((found.split_co2_kg / found.ethanol_kg - 0.95531).abs() < 5e-6);
    // 720 L from a tonne of starch, 648 from one of glucose.
    for (substrate, litres) in [
        (Substrate::Starch, 720.0),
        (Substrate::Glucose, 648.0),
        (Substrate::Sucrose, 682.11),
    ] {
        let found = ferment(&request(&[given(substrate, 1000.0)], Came::Percent(100.0))).unwrap();
        assert!(
            (found.ethanol_litres - litres).abs() < 0.02,
            "{substrate:?} {}",
            found.ethanol_litres
        );
    }
}

#[test]
fn refuses_all_at_once_and_in_words() {
    let mut wrong = request(
        &[
            given(Substrate::Starch, -1.0),
            Given {
                released_percent: 50.0,
                ..given(Substrate::Glucose, 1.0)
            },
        ],
        Came::Percent(120.0),
    );
    wrong.respired_percent = 60.0;
    wrong.yeast_percent = 50.0;
    let refused = ferment(&wrong).unwrap_err();
    let places: Vec<(Option<usize>, &str)> = refused
        .iter()
        .map(|one| (one.substrate, one.refusal.field))
        .collect();
    assert_eq!(
        places,
        [
            (Some(0), "kg"),
            (Some(1), "released_percent"),
            (None, "efficiency_percent"),
            (None, "yeast_percent")
        ]
    );
    let much = ferment(&request(
        &[given(Substrate::Glucose, 100.0)],
        Came::EthanolKg(52.0),
    ))
    .unwrap_err();
    assert_eq!(much[0].refusal.field, "ethanol_kg");
    assert_eq!(
        ferment(&request(&[], Came::Percent(90.0))).unwrap_err()[0]
            .refusal
            .field,
        "substrates"
    );
    let mut small = request(&[given(Substrate::Starch, 600.0)], Came::Percent(90.0));
    small.feedstock_kg = Some(500.0);
    assert_eq!(ferment(&small).unwrap_err()[0].refusal.field, "feedstock_kg");
}

proptest! {
    /// No carbon is lost: what the sugar brings leaves as ethanol, CO2, yeast and the rest.
    #[test]
    fn carbon_is_kept(
        kinds in proptest::collection::vec((0_usize..6, 0.1f64..1e5), 1..5),
        efficiency in 1.0f64..=100.0, respired in 0.0f64..=60.0, yeast in 0.0f64..=40.0,
    ) {
        let given: Vec<Given> = kinds.iter().map(|(kind, kg)| given(Substrate::WORDS[*kind].1, *kg)).collect();
        let mut request = request(&given, Came::Percent(efficiency));
        request.respired_percent = respired;
        request.yeast_percent = yeast;
        let found = ferment(&request).unwrap();
        let sugar_carbon = 6.0 * CARBON / HEXOSE;
        let inside = found.sugar_kg * sugar_carbon;
        let outside = found.ethanol_kg * 2.0 * CARBON / ETHANOL_G_PER_MOL + found.co2_kg * CARBON / CO2
            + found.yeast_kg * 0.473 + found.other_kg * sugar_carbon;
        // Yields are printed with five figures.
        prop_assert!((inside - outside).abs() <= 3e-5 * inside, "{inside} {outside}");
        prop_assert!(found.ethanol_kg <= found.most_kg && found.overall_percent <= efficiency + 1e-9);
    }

    /// The ethanol measured gives the efficiency that gives the ethanol.
    #[test]
    fn both_ways_meet(kg in 1.0f64..1e6, released in 1.0f64..=100.0, efficiency in 1.0f64..=100.0) {
        let given = [Given { released_percent: released, ..given(Substrate::Xylan, kg) }];
        let there = ferment(&request(&given, Came::Percent(efficiency))).unwrap();
        let back = ferment(&request(&given, Came::EthanolKg(there.ethanol_kg))).unwrap();
        prop_assert!((back.efficiency_percent - efficiency).abs() < 1e-9);
        prop_assert!((back.other_kg - there.other_kg).abs() <= 1e-9 * there.sugar_kg);
    }

    /// Any figures at all are answered, by a result or by words.
    #[test]
    fn never_panics(kg: f64, released: f64, came: f64, respired: f64, yeast: f64) {
        for came in [Came::Percent(came), Came::EthanolKg(came)] {
            let given = Given { released_percent: released, ..given(Substrate::Starch, kg) };
            let mut request = request(&[given], came);
            request.respired_percent = respired;
            request.yeast_percent = yeast;
            match ferment(&request) {
                Ok(found) => prop_assert!(found.co2_kg.is_finite() && found.other_kg.is_finite()),
                Err(refused) => prop_assert!(!refused.is_empty()),
            }
        }
    }
}
