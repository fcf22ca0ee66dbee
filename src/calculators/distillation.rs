//! A distillation column as documents.

use super::problems;
use crate::core::documents::Problems;
use crate::core::documents::assessment::Step;
use crate::core::documents::reader::{Fields, Place, whole};
use crate::core::models::still::{Activity, CAUTION, FeedHeat, Pinch, Request, design};
use serde::Serialize;
use serde_json::Value;
use utoipa::ToSchema;

/// What a column is to do. At most one of `feed_approach_k` and `feed_temperature_c`.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct DistillationRequest {
    /// Ethanol in the wash, % by volume at 20 degC, 0.5 to 30.
    pub wash_strength_percent_vol: f64,
    /// Ethanol in the product, % by mass, above the wash and at most 95.7.
    pub product_strength_percent_mass: f64,
    /// Ethanol in the stillage, % by mass, 0.001 to 1; 0.05 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stillage_strength_percent_mass: Option<f64>,
    /// Reflux over the minimum, 1 to 5; 1.2 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reflux_multiple: Option<f64>,
    /// How far below the stillage the wash enters, K, 0 to 70; 10 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub feed_approach_k: Option<f64>,
    /// Temperature of a wash that no stillage heats, degC, 0 to 100 and below its bubble point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub feed_temperature_c: Option<f64>,
    /// Heat from outside over reboiler duty, 0.05 to 1; 1, one pressure, when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub coupling_factor: Option<f64>,
    /// Equation of the activity coefficients; `nrtl` when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub activity: Option<ActivityWord>,
}

/// Equation of the activity coefficients.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum ActivityWord {
    /// NRTL with temperature: what results count with.
    Nrtl,
    /// Van Laar, at 101.325 kPa only: a second opinion.
    VanLaar,
}

/// A column with its heat. Litres are of pure ethanol at 20 degC; masses and heats are per kg of pure ethanol in the product
/// where nothing else is said.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct DistillationAnswer {
    /// The wash, % by mass.
    pub wash_percent_mass: f64,
    /// Temperature of the wash as it enters, degC.
    pub feed_temperature_c: f64,
    /// Bubble point of the wash, degC.
    pub feed_bubble_point_c: f64,
    /// Temperature of the stillage, degC.
    pub stillage_temperature_c: f64,
    /// Thermal condition of the feed, q.
    pub feed_q: f64,
    /// Minimum reflux.
    pub minimum_reflux: MinimumRefluxAnswer,
    /// Reflux, mol per mol of product.
    pub reflux: f64,
    /// Wash, kg/kg.
    pub wash_kg_per_kg: f64,
    /// Stillage, kg/kg.
    pub stillage_kg_per_kg: f64,
    /// Heat of the condenser, MJ/kg.
    pub condenser_mj_per_kg: f64,
    /// Reboiler duty by equal molar overflow, MJ/kg: the figure that models use.
    pub reboiler_mj_per_kg: f64,
    /// The same per litre, MJ/L.
    pub reboiler_mj_per_l: f64,
    /// Steam of 3.5 bar absolute, kg/L.
    pub steam_kg_per_l: f64,
    /// Heat from outside after coupling, MJ/kg.
    pub external_mj_per_kg: f64,
    /// The same per litre, MJ/L.
    pub external_mj_per_l: f64,
    /// Minimum reflux by the enthalpy method: shown beside, never used.
    pub enthalpy_minimum_reflux: f64,
    /// Reboiler duty by the enthalpy method, MJ/kg: shown beside, never used.
    pub enthalpy_reboiler_mj_per_kg: f64,
    /// The arithmetic, step by step.
    pub workings: Vec<Step>,
    /// Figures outside their usual range.
    pub notes: Vec<String>,
    /// What these figures are not for.
    pub caution: String,
}

/// Minimum reflux with its two pinches, mol per mol of product.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct MinimumRefluxAnswer {
    /// Where the feed enters.
    pub feed_pinch: f64,
    /// Inside the rectifying section; 0 where the product is too weak to have one.
    pub tangent_pinch: f64,
    /// The larger of the two.
    pub reflux: f64,
    /// Which one rules: `feed` or `tangent`.
    #[schema(pattern = "^(feed|tangent)$")]
    pub ruling: String,
}

/// Reads a question and answers it.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn distillation(body: &Value) -> Result<DistillationAnswer, Problems> {
    let request = whole(body, read)?;
    let design = design(&request).map_err(problems)?;
    let column = &design.column;
    let ruling = match column.minimum.ruling {
        Pinch::Feed => "feed",
        Pinch::Tangent => "tangent",
    };
    Ok(DistillationAnswer {
        wash_percent_mass: 100.0 * design.wash_mass_fraction,
        feed_temperature_c: column.feed_celsius,
        feed_bubble_point_c: column.bubble_celsius,
        stillage_temperature_c: column.stillage_celsius,
        feed_q: column.q,
        minimum_reflux: MinimumRefluxAnswer {
            feed_pinch: column.minimum.feed,
            tangent_pinch: column.minimum.tangent,
            reflux: column.minimum.reflux,
            ruling: ruling.to_owned(),
        },
        reflux: column.reflux,
        wash_kg_per_kg: column.feed_kg,
        stillage_kg_per_kg: column.stillage_kg,
        condenser_mj_per_kg: column.condenser_mj,
        reboiler_mj_per_kg: design.reboiler_mj_per_kg,
        reboiler_mj_per_l: design.reboiler_mj_per_l,
        steam_kg_per_l: design.steam_kg_per_l,
        external_mj_per_kg: design.external_mj_per_kg,
        external_mj_per_l: design.external_mj_per_l,
        enthalpy_minimum_reflux: column.enthalpy_minimum,
        enthalpy_reboiler_mj_per_kg: design.enthalpy_mj_per_kg,
        workings: design.steps,
        notes: design.unusual,
        caution: CAUTION.to_owned(),
    })
}

fn read(fields: &mut Fields, at: &Place, problems: &mut Problems) -> Option<Request> {
    let wash = fields.required_number("wash_strength_percent_vol", at, problems);
    let product = fields.required_number("product_strength_percent_mass", at, problems);
    let stillage = fields.number("stillage_strength_percent_mass", at, problems);
    let reflux = fields.number("reflux_multiple", at, problems);
    let warmths = ["feed_approach_k", "feed_temperature_c"];
    let feed_heat = if warmths.iter().any(|name| fields.has(name)) {
        fields.one_number(&warmths, "warmth of the wash", at, problems)
    } else {
        // Read all the same, so that both names are known here; `null` counts as absent.
        for name in warmths {
            fields.take(name);
        }
        None
    };
    let coupling = fields.number("coupling_factor", at, problems);
    let words = [("nrtl", Activity::Nrtl), ("van_laar", Activity::VanLaar)];
    let activity = fields.word("activity", &words, at, problems);
    let standard = Request::new(wash?, product?);
    Some(Request {
        stillage_percent_mass: stillage.unwrap_or(standard.stillage_percent_mass),
        reflux_multiple: reflux.unwrap_or(standard.reflux_multiple),
        feed_heat: match feed_heat {
            Some((0, kelvin)) => FeedHeat::BelowStillage(kelvin),
            Some((_, celsius)) => FeedHeat::At(celsius),
            None => standard.feed_heat,
        },
        coupling_factor: coupling.unwrap_or(standard.coupling_factor),
        activity: activity.unwrap_or(standard.activity),
        ..standard
    })
}
