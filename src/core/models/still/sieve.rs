//! The calculator of a molecular sieve: superheat of the vapour, and the purge distilled again.
//!
//! Purge, its strength and the superheat are assumptions of usual practice (from memory). Published for comparison:
//! 0.49 MJ/kg (NREL/TP-5100-47764) and about 1.07 MJ/kg (Kang et al. 2014).

use super::design::short;
use super::duty::{Column, FeedHeat, Task, column, percent};
use super::equilibrium::Activity;
use super::mixture::{ETHANOL_G_PER_MOL, latent, mole_fraction};
use super::ranges;
use crate::core::documents::assessment::Step;
use crate::core::models::factors::step;
use crate::core::models::refusal::Refusal;
use crate::core::units::rounding::plain;

/// Mean heat capacity of the mixed vapour near 100 degC, MJ/(kg K).
const VAPOUR_HEAT: f64 = 1.7e-3;

/// What the sieve is to do; ranges in [`ranges`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SieveRequest {
    /// Ethanol in what enters, % mass.
    pub feed_percent_mass: f64,
    /// Ethanol in what leaves, % mass.
    pub product_percent_mass: f64,
    /// True if it arrives as vapour from the rectifier; a liquid has to be vaporised first.
    pub feed_is_vapour: bool,
    /// Superheat before the bed, K.
    pub superheat_k: f64,
    /// Ethanol leaving with the purge, kg per 100 kg of dry product.
    pub purge_percent: f64,
    /// Ethanol in the purge, % mass.
    pub purge_percent_mass: f64,
}

impl SieveRequest {
    /// Vapour of one strength dried to another, with 30 K of superheat and 15 % purge of 72 % mass.
    pub fn new(feed_percent_mass: f64, product_percent_mass: f64) -> SieveRequest {
        SieveRequest {
            feed_percent_mass,
            product_percent_mass,
            feed_is_vapour: true,
            superheat_k: 30.0,
            purge_percent: 15.0,
            purge_percent_mass: 72.0,
        }
    }
}

/// Heat of a sieve, MJ per kg of pure ethanol in the dry product.
#[derive(Clone, Debug, PartialEq)]
pub struct Drying {
    /// Water taken out, kg per kg of pure ethanol.
    pub water_kg_per_kg: f64,
    /// Heat to vaporise a liquid feed.
    pub vaporise_mj_per_kg: f64,
    /// Heat of the superheat.
    pub superheat_mj_per_kg: f64,
    /// Heat to distil the purge again; it is not coupled.
    pub redistil_mj_per_kg: f64,
    /// All of it.
    pub total_mj_per_kg: f64,
    /// The column that distils the purge; none without a purge.
    pub purge_column: Option<Column>,
    /// The reasoning, in order.
    pub steps: Vec<Step>,
}

/// Computes a sieve.
///
/// # Errors
/// Everything that is outside its range or out of order, each in words.
pub fn dry(request: &SieveRequest) -> Result<Drying, Vec<Refusal>> {
    let mut refusals = Vec::new();
    for (figure, value) in [
        (ranges::SIEVE_FEED, request.feed_percent_mass),
        (ranges::SIEVE_PRODUCT, request.product_percent_mass),
        (ranges::SUPERHEAT, request.superheat_k),
        (ranges::PURGE, request.purge_percent),
        (ranges::PURGE_STRENGTH, request.purge_percent_mass),
    ] {
        figure.check(value, &mut refusals);
    }
    if refusals.is_empty()
        && request.purge_percent > 0.0
        && request.purge_percent_mass >= request.feed_percent_mass
    {
        refusals.push(Refusal::new(
            ranges::PURGE_STRENGTH.name,
            format!(
                "The purge, {} percent by mass, is not weaker than what enters, {} percent.",
                plain(request.purge_percent_mass),
                plain(request.feed_percent_mass)
            ),
            "Give less: the purge carries the water that the bed took up.",
        ));
    }
    if !refusals.is_empty() {
        return Err(refusals);
    }
    let (w_in, w_out) = (
        request.feed_percent_mass / 100.0,
        request.product_percent_mass / 100.0,
    );
    let purge = request.purge_percent / 100.0;
    let purge_column = if purge > 0.0 {
        let task = Task {
            feed: request.purge_percent_mass / 100.0,
            product: w_in,
            stillage: 0.0005,
            reflux_multiple: 1.2,
            feed_heat: FeedHeat::BelowStillage(10.0),
            activity: Activity::Nrtl,
        };
        Some(column(&task).map_err(|refusal| vec![refusal])?)
    } else {
        None
    };
    let x = mole_fraction(w_in);
    // kJ/mol over g of ethanol per mol is MJ per kg of ethanol.
    let latent_per_kg = latent(x) / (x * ETHANOL_G_PER_MOL);
    let vaporise = if request.feed_is_vapour {
        0.0
    } else {
        latent_per_kg * (1.0 + purge)
    };
    let superheat = (1.0 + purge) / w_in * VAPOUR_HEAT * request.superheat_k;
    let redistil = purge_column.map_or(0.0, |column| purge * column.reboiler_mj);
    let mut drying = Drying {
        water_kg_per_kg: (1.0 - w_in) / w_in - (1.0 - w_out) / w_out,
        vaporise_mj_per_kg: vaporise,
        superheat_mj_per_kg: superheat,
        redistil_mj_per_kg: redistil,
        total_mj_per_kg: vaporise + superheat + redistil,
        purge_column,
        steps: Vec::new(),
    };
    drying.steps = steps(request, &drying, latent_per_kg);
    Ok(drying)
}

fn steps(request: &SieveRequest, drying: &Drying, latent_per_kg: f64) -> Vec<Step> {
    let through = plain(1.0 + request.purge_percent / 100.0);
    let mut steps = vec![step(
        format!(
            "water from {} to {} % by mass, per kg of pure ethanol",
            plain(request.feed_percent_mass),
            plain(request.product_percent_mass)
        ),
        drying.water_kg_per_kg,
        "kg/kg",
        "",
    )];
    if !request.feed_is_vapour {
        steps.push(step(
            format!(
                "vaporise the liquid feed: {through} x {} MJ/kg",
                short(latent_per_kg)
            ),
            drying.vaporise_mj_per_kg,
            "MJ/kg",
            "latent heats of the CRC Handbook",
        ));
    }
    steps.push(step(
        format!(
            "superheat: {through} / {} x {} MJ/(kg K) x {} K",
            plain(request.feed_percent_mass / 100.0),
            plain(VAPOUR_HEAT),
            plain(request.superheat_k)
        ),
        drying.superheat_mj_per_kg,
        "MJ/kg",
        "",
    ));
    if let Some(column) = &drying.purge_column {
        steps.push(step(
            format!(
                "purge of {} kg per 100 kg, {} % by mass, distilled again at {} MJ/kg to {} %",
                plain(request.purge_percent),
                plain(request.purge_percent_mass),
                short(column.reboiler_mj),
                percent(request.feed_percent_mass / 100.0)
            ),
            drying.redistil_mj_per_kg,
            "MJ/kg",
            "equal molar overflow (McCabe and Thiele)",
        ));
    }
    steps.push(step(
        "heat per kg of pure ethanol".to_owned(),
        drying.total_mj_per_kg,
        "MJ/kg",
        "",
    ));
    steps
}
