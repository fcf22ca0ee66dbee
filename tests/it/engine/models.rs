//! The models against published check values (`tests/cases/models/`), with the data that the program ships.

use serde::Deserialize;
use serde_json::{Map, Value};
use std::path::PathBuf;
use wheelwort::core::documents::pathway::Period;
use wheelwort::core::documents::problem::Problems;
use wheelwort::core::documents::reader::Place;
use wheelwort::core::domain::{Gas, StageKind};
use wheelwort::core::models::alcoholometry::{REFERENCE_C, density, mass_fraction, volume_fraction};
use wheelwort::core::models::flow::Measured;
use wheelwort::core::models::given::{Given, Record};
use wheelwort::core::models::{self, Setting};
use wheelwort::core::units::Dimension;

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Cases {
    case: Vec<Case>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Case {
    id: String,
    model: String,
    standard: Option<String>,
    parameters: Map<String, Value>,
    step: Option<String>,
    gas: Option<String>,
    times: Option<f64>,
    expected: f64,
    tolerance: f64,
    #[serde(rename = "source")]
    _source: String,
    #[serde(rename = "status")]
    _status: String,
    #[serde(rename = "note")]
    _note: Option<String>,
}

fn file(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
        .join("tests/cases/models")
        .join(name)
}

/// The figure that the case asks for.
fn found(case: &Case) -> Result<f64, String> {
    let book = wheelwort::library::book();
    let model = models::find(&case.model).ok_or("no such model")?;
    let mut rules = book.rule_sets["eu-2018-2001"].clone();
    if let Some(standard) = &case.standard {
        rules.soil_n2o_method.clone_from(standard);
    }
    let day = |text: &str| text.parse().expect("a day");
    // 1 TJ of fuel: what a vehicle's figures count per.
    let output = Measured {
        material: "ethanol".to_owned(),
        dimension: Dimension::ENERGY,
        base: 1e12,
        wet_kg: None,
        moisture: None,
        pure_kg: None,
        strength: None,
        strength_given: false,
        celsius: None,
    };
    let setting = Setting {
        book,
        rules: &rules,
        stage_kind: StageKind::Processing,
        output: Some(&output),
        intakes: &[],
        neighbours: &[],
        period: &Period {
            from: day("2026-01-01"),
            to: day("2026-12-31"),
            kind: None,
        },
        harvest_year: 2026,
        workings: true,
    };
    let (mut problems, mut record) = (Problems::default(), Record::default());
    let outcome = {
        let mut given = Given::open(
            &case.parameters,
            model.parameters,
            Place::ROOT,
            &setting,
            &mut problems,
            &mut record,
        );
        (model.compute)(&mut given)
    };
    if !problems.is_empty() {
        return Err(format!("{:?}", problems.list()));
    }
    let outcome = outcome.ok_or("nothing came out")?;
    let figure = match (&case.step, &case.gas) {
        (Some(begins), None) => record
            .steps
            .iter()
            .find(|step| step.text.starts_with(begins))
            .map(|step| step.value)
            .ok_or(format!("no step {begins:?} in {:?}", record.steps))?,
        (None, Some(gas)) => outcome.gases[Gas::from_name(gas).ok_or("no such gas")?],
        _ => return Err("one of step and gas is wanted".to_owned()),
    };
    Ok(figure * case.times.unwrap_or(1.0))
}

#[test]
fn published_values_agree() {
    let text = std::fs::read_to_string(file("published.toml")).expect("case file");
    let cases: Cases = toml::from_str(&text).expect("cases");
    assert!(cases.case.len() > 40);
    let mut wrong = Vec::new();
    for case in &cases.case {
        match found(case) {
            Ok(figure) if (figure - case.expected).abs() <= case.tolerance * case.expected.abs() => {}
            Ok(figure) => wrong.push(format!("{}: {figure} instead of {}", case.id, case.expected)),
            Err(why) => wrong.push(format!("{}: {why}", case.id)),
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

/// Strength by volume at another temperature than the legal 20 degC: the basis of older tables.
fn volume_fraction_at(p: f64, celsius: f64) -> f64 {
    p * density(p, celsius) / density(1.0, celsius)
}

fn mass_fraction_at(q: f64, celsius: f64) -> f64 {
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let middle: f64 = 0.5 * (low + high);
        if volume_fraction_at(middle, celsius) < q {
            low = middle;
        } else {
            high = middle;
        }
    }
    low
}

#[test]
fn alcoholometry_agrees_with_tables() {
    let mut reader = csv::Reader::from_path(file("alcoholometry.csv")).expect("case file");
    let mut wrong = Vec::new();
    let mut count = 0;
    for row in reader.deserialize::<std::collections::BTreeMap<String, String>>() {
        let row = row.expect("a row");
        let number = |name: &str| {
            row[name]
                .parse::<f64>()
                .unwrap_or_else(|_| panic!("{name} of {row:?}"))
        };
        let figure = match row["kind"].as_str() {
            "density_20C" => density(number("p_mass_fraction"), REFERENCE_C),
            "density_t"
            | "external_density_pure_ethanol"
            | "external_density_pure_ethanol_eos"
            | "external_density_water_eos" => density(number("p_mass_fraction"), number("t_celsius")),
            "density_of_vol_strength" => {
                density(mass_fraction(number("q_vol_fraction")), number("t_celsius"))
            }
            "vol_to_mass" => mass_fraction(number("q_vol_fraction")),
            "mass_to_vol" => volume_fraction(number("p_mass_fraction")),
            "pure_ethanol_litres_at_20C_per_litre_measured_at_t" => {
                let p = mass_fraction(number("q_vol_fraction"));
                p * density(p, number("t_celsius")) / density(1.0, REFERENCE_C)
            }
            "external_vol_from_mass_15.56C" => {
                volume_fraction_at(number("p_mass_fraction"), number("t_celsius"))
            }
            "external_mass_from_vol_15.56C" => {
                mass_fraction_at(number("q_vol_fraction"), number("t_celsius"))
            }
            other => panic!("no such kind {other}"),
        };
        count += 1;
        if (figure - number("value")).abs() > number("tolerance") {
            wrong.push(format!("{figure} instead of {row:?}"));
        }
    }
    assert!(count > 200);
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
