//! A molecular sieve as documents.

use super::problems;
use crate::core::documents::Problems;
use crate::core::documents::assessment::Step;
use crate::core::documents::reader::whole;
use crate::core::models::still::{CAUTION, SieveRequest, dry};
use serde::Serialize;
use serde_json::Value;
use utoipa::ToSchema;

/// What a sieve is to do.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct DehydrationRequest {
    /// Ethanol in what enters, % by mass, 85 to 95.7.
    pub feed_strength_percent_mass: f64,
    /// Ethanol in what leaves, % by mass, 98 to 99.99.
    pub product_strength_percent_mass: f64,
    /// True, also when left out, if it arrives as vapour; a liquid has to be vaporised first.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub feed_is_vapour: Option<bool>,
    /// Superheat before the bed, K, 0 to 80; 30 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub superheat_k: Option<f64>,
    /// Ethanol leaving with the purge, kg per 100 kg of dry product, 0 to 40; 15 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub purge_percent: Option<f64>,
    /// Ethanol in the purge, % by mass, 50 to 92 and below the feed; 72 when left out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub purge_strength_percent_mass: Option<f64>,
}

/// Heat of a sieve, MJ per kg of pure ethanol in the dry product.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct DehydrationAnswer {
    /// Water taken out, kg/kg.
    pub water_kg_per_kg: f64,
    /// Heat to vaporise a liquid feed, MJ/kg.
    pub vaporise_mj_per_kg: f64,
    /// Heat of the superheat, MJ/kg.
    pub superheat_mj_per_kg: f64,
    /// Heat to distil the purge again, MJ/kg.
    pub redistil_mj_per_kg: f64,
    /// All of it, MJ/kg.
    pub total_mj_per_kg: f64,
    /// Reboiler duty of the column that distils the purge, MJ per kg of the ethanol in it; null without a purge.
    pub purge_reboiler_mj_per_kg: Option<f64>,
    /// The arithmetic, step by step.
    pub workings: Vec<Step>,
    /// What these figures are not for.
    pub caution: String,
}

/// Reads a question and answers it.
///
/// # Errors
/// Everything that is wrong with it, each with its pointer.
pub fn dehydration(body: &Value) -> Result<DehydrationAnswer, Problems> {
    let request = whole(body, |fields, at, problems| {
        let feed = fields.required_number("feed_strength_percent_mass", at, problems);
        let product = fields.required_number("product_strength_percent_mass", at, problems);
        let vapour = fields.flag("feed_is_vapour", at, problems);
        let superheat = fields.number("superheat_k", at, problems);
        let purge = fields.number("purge_percent", at, problems);
        let purge_strength = fields.number("purge_strength_percent_mass", at, problems);
        let standard = SieveRequest::new(feed?, product?);
        Some(SieveRequest {
            feed_is_vapour: vapour.unwrap_or(standard.feed_is_vapour),
            superheat_k: superheat.unwrap_or(standard.superheat_k),
            purge_percent: purge.unwrap_or(standard.purge_percent),
            purge_percent_mass: purge_strength.unwrap_or(standard.purge_percent_mass),
            ..standard
        })
    })?;
    let drying = dry(&request).map_err(problems)?;
    Ok(DehydrationAnswer {
        water_kg_per_kg: drying.water_kg_per_kg,
        vaporise_mj_per_kg: drying.vaporise_mj_per_kg,
        superheat_mj_per_kg: drying.superheat_mj_per_kg,
        redistil_mj_per_kg: drying.redistil_mj_per_kg,
        total_mj_per_kg: drying.total_mj_per_kg,
        purge_reboiler_mj_per_kg: drying.purge_column.map(|column| column.reboiler_mj),
        workings: drying.steps,
        caution: CAUTION.to_owned(),
    })
}
