//! Reads figures of models back from a document that the engine has already taken: what is not there or does not fit is
//! no figure here, never a problem.

use crate::core::documents::input::{Input, ModelUse, OneOrMany};
use crate::core::units::{Dimension, Quantity};
use serde_json::Value;

/// The models of an input.
pub fn models(input: &Input) -> &[ModelUse] {
    input.model.as_ref().map(OneOrMany::list).unwrap_or_default()
}

/// A figure in the unit its name says, given plainly or with a unit of its own.
pub fn figure(model: &ModelUse, name: &str, unit: &str) -> Option<f64> {
    match model.parameters.get(name)? {
        Value::Number(number) => number.as_f64(),
        Value::Object(amount) => {
            let (value, given) = (amount.get("value")?.as_f64()?, amount.get("unit")?.as_str()?);
            match given == unit {
                true => Some(value),
                false => Quantity::read(value, given).ok()?.in_unit(unit).ok(),
            }
        }
        _ => None,
    }
}

/// An energy in MJ, whatever it counts.
pub fn energy_mj(model: &ModelUse, name: &str) -> Option<f64> {
    let amount = model.parameters.get(name)?.as_object()?;
    let read = Quantity::read(amount.get("value")?.as_f64()?, amount.get("unit")?.as_str()?).ok()?;
    Dimension::ENERGIES
        .contains(&read.dimension)
        .then_some(read.value / 1e6)
}

/// A mass in kg.
pub fn mass_kg(model: &ModelUse, name: &str) -> Option<f64> {
    let amount = model.parameters.get(name)?.as_object()?;
    Quantity::read_as(
        amount.get("value")?.as_f64()?,
        amount.get("unit")?.as_str()?,
        Dimension::MASS,
    )
    .ok()
}

/// A word.
pub fn word<'m>(model: &'m ModelUse, name: &str) -> Option<&'m str> {
    model.parameters.get(name).and_then(Value::as_str)
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn figures_come_in_the_unit_asked_for() {
        let model = ModelUse {
            kind: "soil_n2o".to_owned(),
            note: None,
            parameters: json!({ "area_ha": 2, "n": { "value": 1, "unit": "t N" }, "heat": { "value": 3.6, "unit": "GJ heat" },
                                "co2": { "value": 2, "unit": "t" }, "crop": "wheat" })
            .as_object()
            .cloned()
            .unwrap(),
        };
        assert_eq!(figure(&model, "area_ha", "ha"), Some(2.0));
        assert_eq!(figure(&model, "n", "kg N"), Some(1000.0));
        assert_eq!(figure(&model, "n", "ha"), None);
        assert_eq!(energy_mj(&model, "heat"), Some(3600.0));
        assert_eq!(energy_mj(&model, "co2"), None);
        assert_eq!(mass_kg(&model, "co2"), Some(2000.0));
        assert_eq!(word(&model, "crop"), Some("wheat"));
        assert_eq!(figure(&model, "absent", "ha"), None);
    }
}
