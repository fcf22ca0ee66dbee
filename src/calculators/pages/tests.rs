//! Renders the calculators: empty, worked out, refused, and with hostile texts.

use super::*;
use askama::Template;

const HOSTILE: &str = "<script>alert('1')</script>";

fn asked(pairs: &[(&str, &str)]) -> Asked {
    let pairs = pairs.iter().map(|(a, b)| ((*a).to_owned(), (*b).to_owned()));
    Asked::of(pairs.collect())
}

/// What the form of a page would send as it stands.
fn sent(page: &Calculator) -> Asked {
    let fields = page.groups.iter().flat_map(|group| &group.fields);
    Asked::of(
        fields
            .map(|field| (field.name.to_owned(), field.text.clone()))
            .collect(),
    )
}

type MakePage = fn(&Asked) -> Calculator;

const PAGES: [(&str, MakePage); 4] = [
    ("alcoholometry", alcoholometry::page),
    ("distillation", distillation::page),
    ("dehydration", dehydration::page),
    ("fermentation", fermentation::page),
];

#[test]
fn every_calculator_works_as_it_begins_and_refuses_what_is_hostile() {
    for (name, page) in PAGES {
        let empty = page(&Asked::default());
        assert!(empty.answer.is_none() && empty.refused.is_empty(), "{name}");
        let worked = page(&sent(&empty));
        assert!(worked.refused.is_empty(), "{name}: {:?}", worked.refused);
        let names: Vec<&str> = empty
            .groups
            .iter()
            .flat_map(|g| &g.fields)
            .map(|f| f.name)
            .collect();
        let hostile: Vec<(&str, &str)> = names.iter().map(|name| (*name, HOSTILE)).collect();
        let refused = page(&asked(&hostile));
        assert!(refused.answer.is_none() && !refused.refused.is_empty(), "{name}");
        for (state, shown) in [("empty", &empty), ("worked", &worked), ("refused", &refused)] {
            let html = shown.render().expect("renders");
            for banned in ["<script>", " style=\"", "-0.00", "NaN", "{{"] {
                assert!(!html.contains(banned), "{name} {state} holds {banned}");
            }
            assert!(
                html.contains("no basis for the design"),
                "{name} {state} cautions"
            );
            assert_eq!(html.matches("<h1").count(), 1, "{name} {state}");
        }
        assert!(worked.answer.expect("an answer").table().rows.len() > 5, "{name}");
    }
    assert!(
        Index::new()
            .render()
            .expect("renders")
            .contains("no basis for the design")
    );
}

#[test]
fn each_refusal_stands_at_its_field() {
    let page = alcoholometry::page(&asked(&[
        ("strength", "120"),
        ("strength_is", "percent_vol"),
        ("quantity", "\u{2212}1"),
        ("quantity_is", "litres"),
        ("temperature_c", "55"),
    ]));
    let at: Vec<&str> = page.refused.iter().map(|row| row.field).collect();
    assert_eq!(at, ["strength", "temperature_c", "quantity"]);
    let page = distillation::page(&asked(&[
        ("wash_strength_percent_vol", "40"),
        ("product_strength_percent_mass", ""),
        ("feed_approach_k", "10"),
        ("feed_temperature_c", "20"),
        ("activity", "nrtl"),
    ]));
    let at: Vec<&str> = page.refused.iter().map(|row| row.field).collect();
    assert_eq!(at, ["product_strength_percent_mass", "feed_temperature_c"]);
    let page = distillation::page(&asked(&[
        ("wash_strength_percent_vol", "12"),
        ("product_strength_percent_mass", "99"),
    ]));
    assert_eq!(page.refused[0].field, "product_strength_percent_mass");
}

#[test]
fn a_fermentation_refuses_at_the_fields_of_the_form() {
    let at = |pairs: &[(&str, &str)]| -> Vec<&'static str> {
        fermentation::page(&asked(pairs))
            .refused
            .iter()
            .map(|row| row.field)
            .collect()
    };
    assert_eq!(at(&[("efficiency_percent", "90")]), ["starch_kg"]);
    assert_eq!(
        at(&[
            ("starch_kg", "1"),
            ("efficiency_percent", "90"),
            ("ethanol_kg", "1")
        ]),
        ["ethanol_kg"]
    );
    assert_eq!(
        at(&[
            ("glucose_kg", "1"),
            ("xylan_released_percent", "50"),
            ("efficiency_percent", "90")
        ]),
        ["xylan_kg"]
    );
    assert_eq!(
        at(&[
            ("xylose_kg", "1"),
            ("xylan_kg", "1"),
            ("xylan_released_percent", "150"),
            ("efficiency_percent", "90")
        ]),
        ["xylan_released_percent"]
    );
    // Two moles of ethanol a mole of glucose: 1 kg gives 0.51143 kg at most.
    let page = fermentation::page(&asked(&[("glucose_kg", "1"), ("efficiency_percent", "100")]));
    let most = page.answer.expect("an answer").sheets[0].rows[1].1[0].expect("a figure");
    assert!((most - 0.51143).abs() < 1e-5, "{most}");
}

#[test]
fn both_methods_stand_side_by_side_and_coupling_prices_less() {
    let base = [
        ("wash_strength_percent_vol", "12"),
        ("product_strength_percent_mass", "94"),
    ];
    let plain = distillation::page(&asked(&base)).answer.expect("an answer");
    let duty = plain.sheets[0].rows[1].1.clone();
    let (counted, beside) = (duty[0].expect("counted"), duty[1].expect("beside it"));
    // The enthalpy method is some per cent higher, never the same figure.
    assert!(
        beside > counted && beside < 1.15 * counted,
        "{counted} and {beside}"
    );
    let coupled = distillation::page(&asked(&[base[0], base[1], ("coupling_factor", "0.5")]))
        .answer
        .expect("an answer");
    let rows = &coupled.sheets[0].rows;
    assert_eq!(
        rows[4].1[0],
        Some(counted * 0.5),
        "half the heat comes from outside"
    );
    assert_eq!(rows[1].1[0], Some(counted), "the duty itself stays");
}
