//! Alcoholic strength as documents: one strength and one quantity in, all the others out.

use super::problems;
use crate::core::documents::Problems;
use crate::core::documents::reader::whole;
use crate::core::models::alcoholometry::{Much, REFERENCE_C, Strength, convert};
use serde::Serialize;
use serde_json::Value;
use utoipa::ToSchema;

/// A mixture of ethanol and water: exactly one strength and exactly one quantity.
#[derive(Clone, Debug, Default, PartialEq, Serialize, ToSchema)]
pub struct AlcoholometryRequest {
    /// Ethanol, % by mass, 0 to 100.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub strength_percent_mass: Option<f64>,
    /// Ethanol, % by volume at 20 degC, 0 to 100.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub strength_percent_vol: Option<f64>,
    /// The mixture, kg.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub kg: Option<f64>,
    /// The mixture, litres at `temperature_c`.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub litres: Option<f64>,
    /// The pure ethanol in it, kg.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub pure_kg: Option<f64>,
    /// The pure ethanol in it, litres at 20 degC.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub pure_litres_at_20: Option<f64>,
    /// Temperature of the volume, degC, -20 to 40 and liquid; 20 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub temperature_c: Option<f64>,
}

/// The mixture with everything that follows.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct AlcoholometryAnswer {
    /// Ethanol, % by mass.
    pub strength_percent_mass: f64,
    /// Ethanol, % by volume at 20 degC.
    pub strength_percent_vol: f64,
    /// Temperature of `litres` and `kg_per_m3`, degC.
    pub temperature_c: f64,
    /// Density at that temperature.
    pub kg_per_m3: f64,
    /// Density at 20 degC.
    pub kg_per_m3_at_20: f64,
    /// The mixture, kg.
    pub kg: f64,
    /// The mixture, litres at that temperature.
    pub litres: f64,
    /// The mixture, litres at 20 degC.
    pub litres_at_20: f64,
    /// Pure ethanol in it, kg.
    pub pure_kg: f64,
    /// Pure ethanol in it, litres at 20 degC.
    pub pure_litres_at_20: f64,
    /// Water in it, kg.
    pub water_kg: f64,
    /// Where the formula stands.
    pub source: String,
}

/// Where the formula stands.
const SOURCE: &str = "OIML R 22 (1975), general formula; Council Directive 76/766/EEC, Annex, point 4";

/// Reads a question and answers it.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn alcoholometry(body: &Value) -> Result<AlcoholometryAnswer, Problems> {
    let (strength, much, celsius) = whole(body, |fields, at, problems| {
        let strengths = ["strength_percent_mass", "strength_percent_vol"];
        let strength = fields.one_number(&strengths, "strength", at, problems);
        let quantities = ["kg", "litres", "pure_kg", "pure_litres_at_20"];
        let quantity = fields.one_number(&quantities, "quantity", at, problems);
        let celsius = fields.number("temperature_c", at, problems);
        let strength = match strength? {
            (0, figure) => Strength::PercentMass(figure),
            (_, figure) => Strength::PercentVol(figure),
        };
        let much = match quantity? {
            (0, figure) => Much::Kg(figure),
            (1, figure) => Much::Litres(figure),
            (2, figure) => Much::PureKg(figure),
            (_, figure) => Much::PureLitres(figure),
        };
        Some((strength, much, celsius.unwrap_or(REFERENCE_C)))
    })?;
    let mixture = convert(strength, much, celsius).map_err(problems)?;
    Ok(AlcoholometryAnswer {
        strength_percent_mass: mixture.percent_mass,
        strength_percent_vol: mixture.percent_vol,
        temperature_c: mixture.celsius,
        kg_per_m3: mixture.kg_per_m3,
        kg_per_m3_at_20: mixture.kg_per_m3_at_20,
        kg: mixture.kg,
        litres: mixture.litres,
        litres_at_20: mixture.litres_at_20,
        pure_kg: mixture.pure_kg,
        pure_litres_at_20: mixture.pure_litres_at_20,
        water_kg: mixture.water_kg,
        source: SOURCE.to_owned(),
    })
}
