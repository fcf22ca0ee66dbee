//! The calculator of alcoholic strength on the points of OIML R 22 (`tests/cases/models/alcoholometry.csv`).

use serde::Deserialize;
use wheelwort::core::models::alcoholometry::{Much, Strength, convert};

#[derive(Deserialize)]
struct Point {
    kind: String,
    p_mass_fraction: Option<f64>,
    q_vol_fraction: Option<f64>,
    t_celsius: f64,
    value: f64,
    tolerance: f64,
}

fn points() -> Vec<Point> {
    let path = concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/tests/cases/models/alcoholometry.csv"
    );
    let mut reader = csv::Reader::from_path(path).expect("the table");
    reader.deserialize().map(|row| row.expect("a row")).collect()
}

/// What the calculator answers at a point; `None` for a kind that it does not give.
fn answer(point: &Point) -> Option<f64> {
    let strength = match (point.p_mass_fraction, point.q_vol_fraction) {
        (Some(p), _) => Strength::PercentMass(100.0 * p),
        (None, Some(q)) => Strength::PercentVol(100.0 * q),
        (None, None) => return None,
    };
    let litre = convert(strength, Much::Litres(1.0), point.t_celsius).expect("a mixture");
    match point.kind.as_str() {
        "vol_to_mass" => Some(litre.percent_mass / 100.0),
        "mass_to_vol" => Some(litre.percent_vol / 100.0),
        "density_20C" | "density_t" | "density_of_vol_strength" => Some(litre.kg * 1000.0),
        "pure_ethanol_litres_at_20C_per_litre_measured_at_t" => Some(litre.pure_litres_at_20),
        _ => None,
    }
}

#[test]
fn every_point_of_the_table_is_answered() {
    let mut seen = 0;
    for point in points() {
        let Some(found) = answer(&point) else { continue };
        seen += 1;
        assert!(
            (found - point.value).abs() <= point.tolerance,
            "{} {:?} {:?} at {}: {found} instead of {}",
            point.kind,
            point.p_mass_fraction,
            point.q_vol_fraction,
            point.t_celsius,
            point.value
        );
    }
    assert_eq!(seen, 38 + 38 + 14 + 11 + 59 + 16);
}
