//! Blends of ethanol and petrol, and a kilometre driven on one: what is asked, and what comes out.

use super::assessment::{Assessment, Step};
use super::problem::Problems;
use super::reader::{Place, object, whole};
use crate::core::units::rounding::plain;
use serde::{Deserialize, Serialize};
use serde_json::Value;
use utoipa::ToSchema;

/// Which heating values a blend is worked out with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum EnergyBasis {
    /// Those the emission arithmetic counts with: MJ/kg and density of the rule set's standard factors.
    EmissionArithmetic,
    /// Those of energy on consignment records and in targets: MJ/L, rounded by law.
    ConsignmentEnergy,
    /// Own figures with their source.
    Own,
}

impl EnergyBasis {
    /// The words of documents.
    pub const WORDS: [(&'static str, EnergyBasis); 3] = [
        ("emission_arithmetic", EnergyBasis::EmissionArithmetic),
        ("consignment_energy", EnergyBasis::ConsignmentEnergy),
        ("own", EnergyBasis::Own),
    ];
}

/// A blend as asked for.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct BlendRequest {
    /// Name at the pump: `E5`, `E10`, `E27` or `E85`. Its figure then counts as the volume share. Instead of
    /// `ethanol_percent_vol`.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub blend: Option<String>,
    /// Pure ethanol, % of the volumes of both before mixing, 0 to 100.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub ethanol_percent_vol: Option<f64>,
    /// Temperature at which both volumes are read, degC.
    pub temperature_c: f64,
    /// Which heating values count.
    pub heating_values: EnergyBasis,
    /// Own heating values per litre, with `heating_values: own` only.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub own_heating_values: Option<OwnHeatingValues>,
    /// Intensity of the ethanol: the net of an assessment.
    pub ethanol: Intensity,
    /// Intensity of the petrol; the rule set's own figure for petrol when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub petrol: Option<Intensity>,
}

/// Heating values per litre at the temperature of the volumes.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct OwnHeatingValues {
    /// Ethanol, MJ/L, above 0.
    pub ethanol_mj_per_l: f64,
    /// Petrol, MJ/L, above 0, on the same heating value (lower or higher) as the ethanol.
    pub petrol_mj_per_l: f64,
    /// Density of ethanol, kg/m3: only for the mass share.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub ethanol_kg_per_m3: Option<f64>,
    /// Density of petrol, kg/m3: only for the mass share.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub petrol_kg_per_m3: Option<f64>,
    /// Where the figures come from.
    pub source: String,
}

/// An intensity with its source.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Intensity {
    /// g CO2e per MJ.
    pub g_co2e_per_mj: f64,
    /// Where it comes from.
    pub source: String,
}

impl Intensity {
    /// The net of an assessment, named so that it can be found again.
    pub fn of_assessment(assessment: &Assessment) -> Intensity {
        Intensity {
            g_co2e_per_mj: assessment.net.g_co2e_per_mj,
            source: format!(
                "net of \"{}\" {} under {}, pathway {}",
                assessment.pathway_name, assessment.basis, assessment.rule_set, assessment.pathway_hash
            ),
        }
    }
}

/// A blend worked out.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Blend {
    /// Name at the pump, or the volume share in words.
    pub name: String,
    /// Rule set whose figures were used.
    pub rule_set: String,
    /// Which heating values count.
    pub heating_values: EnergyBasis,
    /// The same in words, with the source.
    pub heating_values_words: String,
    /// Temperature of the volumes, degC.
    pub temperature_c: f64,
    /// The ethanol in it.
    pub ethanol: BlendPart,
    /// The petrol in it.
    pub petrol: BlendPart,
    /// Energy of a litre, MJ: the volumes of both parts before mixing.
    pub mj_per_l: f64,
    /// g CO2e per MJ of the blend.
    pub g_co2e_per_mj: f64,
    /// g CO2e per litre of the blend.
    pub g_co2e_per_l: f64,
    /// Saving against the same energy of petrol alone, %.
    pub saving_against_petrol_percent: f64,
    /// Litres of the blend that hold the energy of one litre of petrol.
    pub litres_per_litre_of_petrol: f64,
    /// The arithmetic, step by step.
    pub workings: Vec<Step>,
    /// What a reader should know.
    pub notes: Vec<String>,
}

/// One of the two fuels of a blend.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct BlendPart {
    /// Share of the volume, %.
    pub percent_vol: f64,
    /// Share of the energy, %.
    pub percent_energy: f64,
    /// Share of the mass, %; none where no densities belong to the heating values.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub percent_mass: Option<f64>,
    /// Heating value, MJ/L.
    pub mj_per_l: f64,
    /// Intensity, g CO2e/MJ, and where it comes from.
    pub intensity: Intensity,
}

/// A vehicle's energy use; exactly one of `mj_per_km` and `l_per_100_km`.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct PerKmRequest {
    /// What drives, for people.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub vehicle: Option<String>,
    /// Fuel energy, MJ/km, above 0 to 1000.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub mj_per_km: Option<f64>,
    /// Litres of the blend itself, L/100 km, above 0 to 5000.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub l_per_100_km: Option<f64>,
    /// Where the figure comes from.
    pub source: String,
}

/// A kilometre on a blend.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct PerKm {
    /// What drives, for people.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub vehicle: Option<String>,
    /// The blend.
    pub blend: String,
    /// Fuel energy, MJ/km.
    pub mj_per_km: f64,
    /// Litres of the blend, L/100 km.
    pub l_per_100_km: f64,
    /// g CO2e per kilometre on the blend.
    pub g_co2e_per_km: f64,
    /// g CO2e per kilometre on petrol alone, at the same MJ/km.
    pub petrol_g_co2e_per_km: f64,
    /// Saved against petrol, g CO2e per kilometre; below zero where the blend is worse.
    pub saved_g_co2e_per_km: f64,
    /// The arithmetic, step by step.
    pub workings: Vec<Step>,
    /// What a reader should know.
    pub notes: Vec<String>,
}

impl BlendRequest {
    /// Reads a JSON value; sizes of figures are checked where the blend is worked out.
    ///
    /// # Errors
    /// Everything that is wrong with its shape, each with its pointer.
    pub fn from_value(value: &Value) -> Result<BlendRequest, Problems> {
        whole(value, |fields, at, problems| {
            let blend = fields.text("blend", at, problems);
            let share = fields.number("ethanol_percent_vol", at, problems);
            let temperature = fields.required_number("temperature_c", at, problems);
            fields.need("heating_values", at, problems);
            let basis = fields.word("heating_values", &EnergyBasis::WORDS, at, problems);
            let own = fields.part("own_heating_values", at, problems, own_heating_values);
            fields.need("ethanol", at, problems);
            let ethanol = fields.part("ethanol", at, problems, intensity);
            let petrol = fields.part("petrol", at, problems, intensity);
            Some(BlendRequest {
                blend,
                ethanol_percent_vol: share,
                temperature_c: temperature?,
                heating_values: basis?,
                own_heating_values: own,
                ethanol: ethanol?,
                petrol,
            })
        })
    }
}

impl PerKmRequest {
    /// Reads a JSON value; sizes of figures are checked where the kilometre is worked out.
    ///
    /// # Errors
    /// Everything that is wrong with its shape, each with its pointer.
    pub fn from_value(value: &Value) -> Result<PerKmRequest, Problems> {
        whole(value, |fields, at, problems| {
            Some(PerKmRequest {
                vehicle: fields.text("vehicle", at, problems),
                mj_per_km: fields.number("mj_per_km", at, problems),
                l_per_100_km: fields.number("l_per_100_km", at, problems),
                source: fields.required_text("source", at, problems)?,
            })
        })
    }
}

fn own_heating_values(value: &Value, at: &Place, problems: &mut Problems) -> Option<OwnHeatingValues> {
    object(value, at, problems, |fields, at, problems| {
        let ethanol = fields.required_number("ethanol_mj_per_l", at, problems);
        let petrol = fields.required_number("petrol_mj_per_l", at, problems);
        let ethanol_density = fields.number("ethanol_kg_per_m3", at, problems);
        let petrol_density = fields.number("petrol_kg_per_m3", at, problems);
        let source = fields.required_text("source", at, problems);
        Some(OwnHeatingValues {
            ethanol_mj_per_l: ethanol?,
            petrol_mj_per_l: petrol?,
            ethanol_kg_per_m3: ethanol_density,
            petrol_kg_per_m3: petrol_density,
            source: source?,
        })
    })
}

fn intensity(value: &Value, at: &Place, problems: &mut Problems) -> Option<Intensity> {
    object(value, at, problems, |fields, at, problems| {
        let figure = fields.required_number("g_co2e_per_mj", at, problems);
        let source = fields.required_text("source", at, problems);
        Some(Intensity {
            g_co2e_per_mj: figure?,
            source: source?,
        })
    })
}

/// The volume share in words: `10 % ethanol by volume`.
pub fn share_words(percent: f64) -> String {
    format!("{} % ethanol by volume", plain(percent))
}
