//! One column, stripping and rectifying section with a reboiler and a total condenser: its reflux and its heat.
//!
//! A beer column with a rectifier whose bottoms go back to it is the same thing at these flows. Saturated liquid
//! product, 101.325 kPa; dissolved solids and CO2 are left out.

use super::equilibrium::Activity;
use super::mixture::{g_per_mol, heat_capacity, latent, liquid, mole_fraction};
use super::pinch::{MinimumReflux, minimum_reflux, minimum_reflux_by_enthalpy};
use super::ranges;
use crate::core::models::refusal::Refusal;
use crate::core::units::rounding::{plain, round_half_away};

/// How warm the wash enters.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum FeedHeat {
    /// The leaving stillage heats it to so many K below the stillage, at most to its bubble point.
    BelowStillage(f64),
    /// At this temperature, degC, at most its bubble point.
    At(f64),
}

/// What one column is to do.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Task {
    /// Ethanol mass fraction of the feed.
    pub feed: f64,
    /// Ethanol mass fraction of the product: above the feed, below the azeotrope.
    pub product: f64,
    /// Ethanol mass fraction of the stillage: below the feed.
    pub stillage: f64,
    /// Reflux over the minimum, 1 or more.
    pub reflux_multiple: f64,
    /// How warm the feed enters.
    pub feed_heat: FeedHeat,
    /// Equation of the activity coefficients.
    pub activity: Activity,
}

/// A column as computed. Masses and heats are per kg of pure ethanol in the product.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Column {
    /// Ethanol mole fraction of the feed.
    pub feed_x: f64,
    /// Ethanol mole fraction of the product.
    pub product_x: f64,
    /// Ethanol mole fraction of the stillage.
    pub stillage_x: f64,
    /// Temperature of the feed as it enters, degC.
    pub feed_celsius: f64,
    /// Bubble point of the feed, degC.
    pub bubble_celsius: f64,
    /// Temperature of the stillage, degC.
    pub stillage_celsius: f64,
    /// Thermal condition of the feed, q: 1 for a boiling liquid, above 1 for a colder one.
    pub q: f64,
    /// Minimum reflux with its two pinches.
    pub minimum: MinimumReflux,
    /// Reflux, mol per mol of product.
    pub reflux: f64,
    /// Vapour made at the top, mol.
    pub vapour_mol: f64,
    /// Feed, kg.
    pub feed_kg: f64,
    /// Stillage, kg.
    pub stillage_kg: f64,
    /// Heat taken away by the condenser, MJ.
    pub condenser_mj: f64,
    /// Heat of the reboiler, MJ: the result.
    pub reboiler_mj: f64,
    /// Minimum reflux by the enthalpy method. Shown, never used.
    pub enthalpy_minimum: f64,
    /// Heat of the reboiler by the enthalpy method, MJ. Shown, never used.
    pub enthalpy_reboiler_mj: f64,
}

/// Computes one column.
///
/// # Errors
/// In words, where the strengths are not in order (stillage < feed < product < azeotrope) or the feed is above its
/// bubble point.
pub fn column(task: &Task) -> Result<Column, Refusal> {
    let Task {
        feed,
        product,
        stillage,
        reflux_multiple,
        feed_heat,
        activity,
    } = *task;
    in_order(feed, product, stillage)?;
    let (z, xd, xb) = (
        mole_fraction(feed),
        mole_fraction(product),
        mole_fraction(stillage),
    );
    if xd >= activity.azeotrope() {
        return Err(Refusal::new(
            ranges::PRODUCT.name,
            format!(
                "{} percent is at or beyond the azeotrope; a column cannot reach it.",
                percent(product)
            ),
            "Give a product of at most 95.7 percent by mass; what is stronger is the work of a dehydration.",
        ));
    }
    let stillage_celsius = activity.boiling(xb).celsius;
    let bubble = activity.boiling(z).celsius;
    let product_celsius = activity.boiling(xd).celsius;
    let feed_celsius = match feed_heat {
        FeedHeat::BelowStillage(kelvin) => bubble.min(stillage_celsius - kelvin),
        FeedHeat::At(celsius) if celsius <= bubble => celsius,
        FeedHeat::At(celsius) => {
            let shown = plain(round_half_away(bubble, 2));
            return Err(Refusal::new(
                ranges::FEED_TEMPERATURE.name,
                format!(
                    "The wash boils at {shown} degC and cannot be liquid at {}.",
                    plain(celsius)
                ),
                format!("Give at most {shown} degC."),
            ));
        }
    };
    let q = 1.0 + heat_capacity(z) * (bubble - feed_celsius) / latent(z);
    let no_pinch = || {
        Refusal::new(
            ranges::PRODUCT.name,
            "No pinch was found for these strengths.",
            "Give strengths that lie further apart.",
        )
    };
    let minimum = minimum_reflux(activity, z, q, xd).ok_or_else(no_pinch)?;
    let enthalpy_minimum = minimum_reflux_by_enthalpy(activity, z, feed_celsius, xd).ok_or_else(no_pinch)?;
    // mol per kg of pure ethanol in the product; balances of all and of ethanol.
    let distillate = 1000.0 / (xd * super::mixture::ETHANOL_G_PER_MOL);
    let fed = distillate * (xd - xb) / (z - xb);
    let left = fed - distillate;
    let condenser = |reflux: f64| (reflux + 1.0) * distillate * latent(xd);
    let streams = distillate * liquid(xd, product_celsius) + left * liquid(xb, stillage_celsius)
        - fed * liquid(z, feed_celsius);
    let reflux = reflux_multiple * minimum.reflux;
    Ok(Column {
        feed_x: z,
        product_x: xd,
        stillage_x: xb,
        feed_celsius,
        bubble_celsius: bubble,
        stillage_celsius,
        q,
        minimum,
        reflux,
        vapour_mol: (reflux + 1.0) * distillate,
        feed_kg: fed * g_per_mol(z) / 1000.0,
        stillage_kg: left * g_per_mol(xb) / 1000.0,
        condenser_mj: condenser(reflux) / 1000.0,
        reboiler_mj: (condenser(reflux) + streams) / 1000.0,
        enthalpy_minimum,
        enthalpy_reboiler_mj: (condenser(reflux_multiple * enthalpy_minimum) + streams) / 1000.0,
    })
}

fn in_order(feed: f64, product: f64, stillage: f64) -> Result<(), Refusal> {
    let rises = |low: f64, high: f64| low.partial_cmp(&high) == Some(std::cmp::Ordering::Less);
    if !rises(feed, product) {
        return Err(Refusal::new(
            ranges::PRODUCT.name,
            format!(
                "The product, {} percent by mass, is not stronger than what enters, {} percent by mass.",
                percent(product),
                percent(feed)
            ),
            "Check both strengths and whether each is by mass or by volume.",
        ));
    }
    if !rises(stillage, feed) {
        return Err(Refusal::new(
            ranges::STILLAGE.name,
            format!(
                "The stillage, {} percent by mass, is not weaker than what enters, {} percent by mass.",
                percent(stillage),
                percent(feed)
            ),
            "Give less; usual is at most 0.1 percent.",
        ));
    }
    Ok(())
}

/// A fraction as a percentage to read.
pub(super) fn percent(fraction: f64) -> String {
    plain(round_half_away(100.0 * fraction, 4))
}
