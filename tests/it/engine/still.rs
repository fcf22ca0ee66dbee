//! The still against an independent program, measured equilibria and the laws of distilling (`tests/cases/process/`).

use proptest::prelude::*;
use serde::Deserialize;
use serde::de::DeserializeOwned;
use wheelwort::core::models::refusal::Refusal;
use wheelwort::core::models::still::{
    Activity, CAUTION, Design, FeedHeat, Request, SieveRequest, design, dry, mole_fraction,
};

fn rows<T: DeserializeOwned>(name: &str) -> Vec<T> {
    let path = format!("{}/tests/cases/process/{name}", env!("CARGO_MANIFEST_DIR"));
    let mut reader = csv::Reader::from_path(path).expect("the table");
    reader.deserialize().map(|row| row.expect("a row")).collect()
}

fn made(request: &Request) -> Design {
    design(request).unwrap_or_else(|refusals| panic!("{request:?}: {refusals:?}"))
}

// ---- the column against the independent program -----------------------------------------------------------------------

#[derive(Deserialize)]
struct Case {
    case: String,
    feed_vol_pct: f64,
    feed_mass_frac: f64,
    feed_mol_frac: f64,
    distillate_mass_frac: f64,
    distillate_mol_frac: f64,
    stillage_mass_frac: f64,
    feed_temp_c: f64,
    feed_bubble_c: f64,
    q_feed: f64,
    rmin_feed_pinch: f64,
    rmin_tangent_pinch: f64,
    rmin: f64,
    controlling: String,
    reflux_multiple: f64,
    reflux: f64,
    condenser_mj_per_kg: f64,
    reboiler_mj_per_kg: f64,
    reboiler_mj_per_l: f64,
    steam_kg_per_l: f64,
    beer_kg_per_kg: f64,
    stillage_kg_per_kg: f64,
    rmin_enthalpy: f64,
    reboiler_enthalpy_mj_per_kg: f64,
    tolerance_rel: f64,
}

impl Case {
    fn request(&self) -> Request {
        let base = Request::new(self.feed_vol_pct, 100.0 * self.distillate_mass_frac);
        Request {
            stillage_percent_mass: 100.0 * self.stillage_mass_frac,
            reflux_multiple: self.reflux_multiple,
            feed_heat: match self.case.as_str() {
                "cold_feed_35C" => FeedHeat::At(35.0),
                "saturated_feed" => FeedHeat::BelowStillage(0.0),
                _ => base.feed_heat,
            },
            activity: if self.case == "van_laar" {
                Activity::VanLaar
            } else {
                Activity::Nrtl
            },
            ..base
        }
    }
}

#[test]
fn the_column_agrees_with_the_independent_program() {
    let cases: Vec<Case> = rows("distillation.csv");
    assert_eq!(cases.len(), 40);
    for case in &cases {
        let found = made(&case.request());
        let column = &found.column;
        for (what, found, wanted) in [
            ("mass fraction", found.wash_mass_fraction, case.feed_mass_frac),
            ("mole fraction", column.feed_x, case.feed_mol_frac),
            ("product", column.product_x, case.distillate_mol_frac),
            ("feed temperature", column.feed_celsius, case.feed_temp_c),
            ("bubble point", column.bubble_celsius, case.feed_bubble_c),
            ("q", column.q, case.q_feed),
            ("feed pinch", column.minimum.feed, case.rmin_feed_pinch),
            ("tangent pinch", column.minimum.tangent, case.rmin_tangent_pinch),
            ("minimum reflux", column.minimum.reflux, case.rmin),
            ("reflux", column.reflux, case.reflux),
            ("condenser", column.condenser_mj, case.condenser_mj_per_kg),
            ("reboiler", found.reboiler_mj_per_kg, case.reboiler_mj_per_kg),
            ("per litre", found.reboiler_mj_per_l, case.reboiler_mj_per_l),
            ("steam", found.steam_kg_per_l, case.steam_kg_per_l),
            ("wash", column.feed_kg, case.beer_kg_per_kg),
            ("stillage", column.stillage_kg, case.stillage_kg_per_kg),
            ("enthalpy reflux", column.enthalpy_minimum, case.rmin_enthalpy),
            (
                "enthalpy reboiler",
                found.enthalpy_mj_per_kg,
                case.reboiler_enthalpy_mj_per_kg,
            ),
        ] {
            assert!(
                (found - wanted).abs() <= case.tolerance_rel * wanted.abs(),
                "{} at {} % vol, {what}: {found} instead of {wanted}",
                case.case,
                case.feed_vol_pct
            );
        }
        assert_eq!(
            column.minimum.ruling.name(),
            case.controlling,
            "{} {}",
            case.case,
            case.feed_vol_pct
        );
    }
}

/// Reference table: tangent pinch against product strength; and 1.159 + 23.24/v MJ/L, within 0.6 % from 5 to 15 % vol.
#[test]
fn the_tangent_pinch_climbs_towards_the_azeotrope_and_the_closed_form_holds() {
    let table = [
        (90.0, 0.77),
        (92.0, 1.19),
        (92.5, 1.36),
        (93.0, 1.56),
        (94.0, 2.16),
        (94.5, 2.64),
        (95.0, 3.41),
        (95.5, 4.99),
    ];
    for (strength, reflux) in table {
        let found = made(&Request::new(12.0, strength)).column.minimum.tangent;
        assert!(
            (found - reflux).abs() <= 0.005,
            "{strength}: {found} instead of {reflux}"
        );
    }
    for v in [5.0, 6.5, 8.0, 10.0, 12.5, 15.0] {
        let duty = made(&Request::new(v, 92.5)).reboiler_mj_per_l;
        let short = 1.159 + 23.24 / v;
        assert!((duty / short - 1.0).abs() <= 0.006, "{v}: {duty} against {short}");
    }
}

/// NREL/TP-5100-47764: 0.49 MJ/kg, as quoted; the independent program: 0.4686, with a liquid feed 1.6415.
#[test]
fn the_sieve_agrees_with_the_independent_program() {
    let vapour = dry(&SieveRequest::new(92.5, 99.7)).expect("a sieve");
    for (found, wanted) in [
        (vapour.water_kg_per_kg, 0.0781),
        (vapour.superheat_mj_per_kg, 0.0634),
        (vapour.redistil_mj_per_kg, 0.4052),
        (vapour.total_mj_per_kg, 0.4686),
    ] {
        assert!((found - wanted).abs() <= 0.000_05, "{found} instead of {wanted}");
    }
    assert!((vapour.total_mj_per_kg / 0.49 - 1.0).abs() < 0.05);
    let liquid = SieveRequest {
        feed_is_vapour: false,
        ..SieveRequest::new(92.5, 99.7)
    };
    let liquid = dry(&liquid).expect("a sieve");
    assert!((liquid.total_mj_per_kg - 1.6415).abs() <= 0.000_05);
}

// ---- the equilibrium --------------------------------------------------------------------------------------------------

#[derive(Deserialize)]
struct Point {
    kind: String,
    pressure_kpa: f64,
    x_ethanol: f64,
    y_ethanol: f64,
    celsius: f64,
    nrtl_dy: Option<f64>,
    van_laar_dy: Option<f64>,
    nrtl_dt: Option<f64>,
    van_laar_dt: Option<f64>,
    nrtl_dp_percent: Option<f64>,
}

/// `dy`, `dt`: how far above the measured point the equation is known to lie; half a last digit either way.
fn lies(activity: Activity, point: &Point, dy: Option<f64>, dt: Option<f64>, within: (f64, f64)) {
    let boiling = activity.boiling(point.x_ethanol);
    let off_y = boiling.vapour - point.y_ethanol - dy.unwrap_or(0.0);
    let off_t = boiling.celsius - point.celsius - dt.unwrap_or(0.0);
    assert!(
        off_y.abs() <= within.0 && off_t.abs() <= within.1,
        "{activity:?} at {}: y off {off_y}, t off {off_t}",
        point.x_ethanol
    );
}

#[test]
fn the_equilibrium_agrees_with_the_table_and_the_measured_points() {
    let points: Vec<Point> = rows("equilibrium.csv");
    let of = |kind: &str| {
        points
            .iter()
            .filter(|point| point.kind == kind)
            .collect::<Vec<_>>()
    };
    for (kind, activity) in [
        ("model_nrtl", Activity::Nrtl),
        ("model_van_laar", Activity::VanLaar),
    ] {
        let table = of(kind);
        assert_eq!(table.len(), 38);
        for point in table {
            lies(activity, point, None, None, (0.000_01, 0.001));
        }
    }
    let measured = of("experimental");
    assert_eq!(measured.len(), 15);
    let (mut sum_y, mut sum_t) = (0.0, 0.0);
    for point in measured {
        lies(
            Activity::Nrtl,
            point,
            point.nrtl_dy,
            point.nrtl_dt,
            (0.000_06, 0.006),
        );
        lies(
            Activity::VanLaar,
            point,
            point.van_laar_dy,
            point.van_laar_dt,
            (0.000_06, 0.006),
        );
        let boiling = Activity::Nrtl.boiling(point.x_ethanol);
        let (dy, dt) = (
            (boiling.vapour - point.y_ethanol).abs(),
            (boiling.celsius - point.celsius).abs(),
        );
        assert!(dy <= 0.014 && dt <= 0.85, "{}: {dy} {dt}", point.x_ethanol);
        (sum_y, sum_t) = (sum_y + dy / 15.0, sum_t + dt / 15.0);
    }
    assert!(
        (sum_y - 0.0069).abs() < 0.0001 && (sum_t - 0.24).abs() < 0.01,
        "{sum_y} {sum_t}"
    );
}

/// Measured at 30 degC: a check of the temperature in NRTL, which the boiling points hardly move.
#[test]
fn nrtl_holds_at_another_temperature() {
    let points: Vec<Point> = rows("equilibrium.csv");
    let cool: Vec<_> = points
        .iter()
        .filter(|point| point.kind == "experimental_30_degC")
        .collect();
    assert_eq!(cool.len(), 23);
    let (mut off_pressure, mut off_y) = (0.0, 0.0);
    for point in cool {
        let (ethanol, water) = Activity::Nrtl.partial_kpa(point.x_ethanol, point.celsius);
        let percent = 100.0 * ((ethanol + water) / point.pressure_kpa - 1.0);
        let dy = ethanol / (ethanol + water) - point.y_ethanol;
        assert!((percent - point.nrtl_dp_percent.expect("a figure")).abs() <= 0.006);
        assert!((dy - point.nrtl_dy.expect("a figure")).abs() <= 0.000_06);
        off_pressure += percent.abs() / 23.0;
        off_y += dy.abs() / 23.0;
    }
    assert!(off_pressure <= 0.65 && off_y <= 0.0055, "{off_pressure} {off_y}");
}

#[test]
fn the_azeotrope_lies_where_it_was_measured() {
    let points: Vec<Point> = rows("equilibrium.csv");
    let of = |kind: &str| points.iter().find(|point| point.kind == kind).expect("a row");
    let measured = of("experimental_azeotrope");
    for (activity, kind) in [
        (Activity::Nrtl, "azeotrope_nrtl"),
        (Activity::VanLaar, "azeotrope_van_laar"),
    ] {
        let (x, row) = (activity.azeotrope(), of(kind));
        assert!((x - row.x_ethanol).abs() <= 0.000_01, "{x}");
        assert!((activity.boiling(x).celsius - row.celsius).abs() <= 0.001);
        assert!((x - measured.x_ethanol).abs() <= 0.0065);
        assert!((activity.boiling(x).celsius - measured.celsius).abs() <= 0.05);
    }
    // 95.7 % mass is the last strength that the models take.
    assert!(mole_fraction(0.957) < Activity::Nrtl.azeotrope());
    assert!(mole_fraction(0.9573) > Activity::Nrtl.azeotrope());
}

// ---- laws and refusals ------------------------------------------------------------------------------------------------

fn fields(refusals: &[Refusal]) -> Vec<&'static str> {
    refusals.iter().map(|refusal| refusal.field).collect()
}

#[test]
fn what_is_out_of_range_or_out_of_order_is_refused_in_words() {
    let wild = Request {
        stillage_percent_mass: 2.0,
        reflux_multiple: 0.9,
        feed_heat: FeedHeat::BelowStillage(71.0),
        coupling_factor: 0.0,
        ..Request::new(40.0, 96.0)
    };
    let refusals = design(&wild).expect_err("out of range");
    assert_eq!(
        fields(&refusals),
        [
            "wash_strength_percent_vol",
            "product_strength_percent_mass",
            "stillage_strength_percent_mass",
            "reflux_multiple",
            "feed_approach_k",
            "coupling_factor"
        ]
    );
    assert_eq!(
        refusals[0].detail,
        "40 percent is outside the range of the model."
    );
    assert_eq!(refusals[0].remedy, "Give 0.5 to 30 percent.");
    let crossed = design(&Request::new(12.0, 9.0)).expect_err("weaker than the wash");
    assert_eq!(fields(&crossed), ["product_strength_percent_mass"]);
    let lost = Request {
        stillage_percent_mass: 0.9,
        ..Request::new(1.0, 92.5)
    };
    assert_eq!(
        fields(&design(&lost).expect_err("stillage")),
        ["stillage_strength_percent_mass"]
    );
    let boiling = Request {
        feed_heat: FeedHeat::At(95.0),
        ..Request::new(12.0, 92.5)
    };
    let refusals = design(&boiling).expect_err("boiling");
    assert_eq!(refusals[0].remedy, "Give at most 91.55 degC.");
    let purge = SieveRequest {
        purge_percent_mass: 90.0,
        ..SieveRequest::new(88.0, 99.7)
    };
    assert_eq!(
        fields(&dry(&purge).expect_err("purge")),
        ["purge_strength_percent_mass"]
    );
    assert!(design(&Request::new(f64::NAN, f64::INFINITY)).is_err());
}

#[test]
fn unusual_figures_are_named_and_the_reasoning_ends_in_the_result() {
    let usual = made(&Request::new(12.0, 92.5));
    assert!(usual.unusual.is_empty());
    let thin = made(&Request::new(3.0, 70.0));
    assert_eq!(thin.unusual.len(), 2);
    assert_eq!(
        thin.unusual[0],
        "wash_strength_percent_vol is 3 percent; usual is 5 to 15 percent."
    );
    let step = |begins: &str| {
        usual
            .steps
            .iter()
            .find(|step| step.text.starts_with(begins))
            .expect("a step")
    };
    assert_eq!(step("reboiler per kg").value, usual.reboiler_mj_per_kg);
    assert_eq!(step("beside it, not used").value, usual.enthalpy_mj_per_kg);
    assert!(step("reflux 1.2 x 2.0802").text.ends_with("the feed pinch rules"));
    assert!(CAUTION.contains("accounting only") && CAUTION.contains("Local codes"));
}

#[test]
fn coupling_scales_what_comes_from_outside_and_nothing_else() {
    let alone = made(&Request::new(12.0, 92.5));
    let coupled = made(&Request {
        coupling_factor: 0.67,
        ..Request::new(12.0, 92.5)
    });
    assert_eq!(coupled.reboiler_mj_per_kg, alone.reboiler_mj_per_kg);
    assert!((coupled.external_mj_per_kg / alone.reboiler_mj_per_kg - 0.67).abs() < 1e-12);
    // Kang et al. 2014: about 1.3 kg of steam per kg at 10 to 12 % vol, 0.94 at 19 % vol, one plant family. The factor
    // of 0.67 is fitted to the first; that it gives the second too is the check.
    let steam = |v: f64| 0.67 * made(&Request::new(v, 92.5)).reboiler_mj_per_kg / 2.147_65;
    assert!((steam(11.0) - 1.3).abs() < 0.02, "{}", steam(11.0));
    assert!((steam(19.0) - 0.94).abs() < 0.02, "{}", steam(19.0));
}

/// Any request that the hard ranges let through.
fn allowed() -> impl Strategy<Value = Request> {
    (
        0.5f64..=30.0,
        0.1f64..=95.7,
        0.001f64..=1.0,
        1.0f64..=5.0,
        0.0f64..=70.0,
        0.05f64..=1.0,
        any::<bool>(),
    )
        .prop_map(
            |(wash, product, stillage, multiple, approach, coupling, van_laar)| Request {
                stillage_percent_mass: stillage,
                reflux_multiple: multiple,
                feed_heat: FeedHeat::BelowStillage(approach),
                coupling_factor: coupling,
                activity: if van_laar {
                    Activity::VanLaar
                } else {
                    Activity::Nrtl
                },
                ..Request::new(wash, product)
            },
        )
}

proptest! {
    /// Over the whole allowed space: a result of sound figures, or words about the order of the strengths.
    #[test]
    fn every_allowed_column_is_answered(request in allowed()) {
        match design(&request) {
            Ok(found) => {
                let column = &found.column;
                for figure in [found.reboiler_mj_per_kg, found.steam_kg_per_l, found.enthalpy_mj_per_kg,
                               column.feed_kg, column.stillage_kg, column.condenser_mj] {
                    prop_assert!(figure.is_finite() && figure > 0.0, "{found:?}");
                }
                prop_assert!(column.minimum.reflux >= 0.0 && column.q >= 1.0 - 1e-12);
                prop_assert!(found.external_mj_per_kg <= found.reboiler_mj_per_kg);
                // Ethanol in is ethanol out, water in is water out.
                let ethanol = column.feed_kg * found.wash_mass_fraction
                    - column.stillage_kg * request.stillage_percent_mass / 100.0;
                prop_assert!((ethanol - 1.0).abs() < 1e-9 * column.feed_kg, "{ethanol}");
                let product = 100.0 / request.product_percent_mass;
                prop_assert!((column.feed_kg - column.stillage_kg - product).abs() < 1e-9 * column.feed_kg);
            }
            Err(refusals) => {
                let wash = 100.0 * wheelwort::core::models::alcoholometry::mass_fraction(request.wash_percent_vol / 100.0);
                let order = request.product_percent_mass <= wash || request.stillage_percent_mass >= wash;
                prop_assert!(order, "{request:?}: {refusals:?}");
            }
        }
    }

    /// Any figures at all are answered, by a result or by words.
    #[test]
    fn wild_figures_never_panic(wash: f64, product: f64, stillage: f64, multiple: f64, heat: f64, coupling: f64) {
        for feed_heat in [FeedHeat::BelowStillage(heat), FeedHeat::At(heat)] {
            let request = Request { wash_percent_vol: wash, product_percent_mass: product, stillage_percent_mass: stillage,
                reflux_multiple: multiple, feed_heat, coupling_factor: coupling, activity: Activity::Nrtl };
            if let Err(refusals) = design(&request) {
                prop_assert!(refusals.iter().all(|r| !r.detail.is_empty() && !r.remedy.is_empty()));
            }
        }
    }

    /// A more dilute wash never lowers the duty, over the whole allowed space.
    #[test]
    fn a_more_dilute_wash_never_lowers_the_duty(request in allowed(), part in 0.3f64..0.999) {
        let dilute = Request { wash_percent_vol: (part * request.wash_percent_vol).max(0.5), ..request };
        if let (Ok(strong), Ok(dilute)) = (design(&request), design(&dilute)) {
            prop_assert!(dilute.reboiler_mj_per_kg >= strong.reboiler_mj_per_kg * (1.0 - 1e-9));
        }
    }

    /// A stronger product never lowers the vapour to be made, over the whole allowed space.
    #[test]
    fn a_stronger_product_never_lowers_the_vapour(request in allowed(), more in 0.01f64..20.0) {
        let strong = Request { product_percent_mass: (request.product_percent_mass + more).min(95.7), ..request };
        if let (Ok(weak), Ok(strong)) = (design(&request), design(&strong)) {
            let (weak, strong) = (weak.column, strong.column);
            if weak.minimum.reflux > 0.0 {
                prop_assert!(strong.vapour_mol >= weak.vapour_mol * (1.0 - 1e-6), "{weak:?} {strong:?}");
            }
        }
    }

    /// A stronger product never lowers the duty at the defaults, for a usual wash and a usual product. (For a very dilute
    /// wash it may, by some 0.1 % for each % mass: strong vapour holds less latent heat per mole.)
    #[test]
    fn a_stronger_product_never_lowers_the_duty(wash in 5.0f64..=15.0, product in 80.0f64..95.0, more in 0.01f64..5.0) {
        let weak = made(&Request::new(wash, product));
        let strong = made(&Request::new(wash, (product + more).min(95.7)));
        prop_assert!(strong.reboiler_mj_per_kg >= weak.reboiler_mj_per_kg * (1.0 - 1e-9));
    }

    /// More reflux takes more heat. So does a colder wash at the minimum reflux; at a multiple of it the smaller reflux
    /// of a cold wash, multiplied, can outweigh that.
    #[test]
    fn more_reflux_and_a_colder_wash_take_more_heat(
        wash in 1.0f64..=30.0, product in 80.0f64..95.7, k in 1.0f64..4.9, approach in 10.0f64..69.0,
    ) {
        let at = |k: f64, approach: f64| {
            let feed_heat = FeedHeat::BelowStillage(approach);
            made(&Request { reflux_multiple: k, feed_heat, ..Request::new(wash, product) }).reboiler_mj_per_kg
        };
        prop_assert!(at(k + 0.1, approach) > at(k, approach));
        prop_assert!(at(1.0, approach + 1.0) >= at(1.0, approach) * (1.0 - 1e-12));
    }

    /// Every allowed sieve is answered; only the order of purge and feed can be wrong.
    #[test]
    fn every_allowed_sieve_is_answered(feed in 85.0f64..=95.7, product in 98.0f64..=99.99, vapour: bool,
                                       superheat in 0.0f64..=80.0, purge in 0.0f64..=40.0, strength in 50.0f64..=92.0) {
        let request = SieveRequest { feed_is_vapour: vapour, superheat_k: superheat, purge_percent: purge,
            purge_percent_mass: strength, ..SieveRequest::new(feed, product) };
        match dry(&request) {
            Ok(drying) => {
                let parts = drying.vaporise_mj_per_kg + drying.superheat_mj_per_kg + drying.redistil_mj_per_kg;
                prop_assert!((parts - drying.total_mj_per_kg).abs() < 1e-12);
                prop_assert!(drying.total_mj_per_kg.is_finite() && drying.total_mj_per_kg >= 0.0);
                prop_assert!(drying.water_kg_per_kg > 0.0);
            }
            Err(refusals) => prop_assert!(strength >= feed && fields(&refusals) == ["purge_strength_percent_mass"]),
        }
    }
}
