//! Minimum reflux: by equal molar overflow, at the feed pinch and at the tangent pinch, and by enthalpies beside it.

use super::equilibrium::Activity;
use super::mixture::{latent, liquid, vapour};
use super::root::{maximum, root};

/// The curve of ethanol and water has no tangent pinch below this mole fraction.
const TANGENT_FROM: f64 = 0.30;
/// So close to the product strength the ratio of the tangent pinch is 0/0.
const TANGENT_MARGIN: f64 = 1e-3;

/// Which pinch sets the minimum reflux.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Pinch {
    /// Where the feed enters.
    Feed,
    /// Inside the rectifying section, at the inflection of the equilibrium curve: strong products.
    Tangent,
}

impl Pinch {
    /// Name in words.
    pub fn name(self) -> &'static str {
        match self {
            Pinch::Feed => "feed",
            Pinch::Tangent => "tangent",
        }
    }
}

/// Minimum reflux, mol back per mol of product. Zero where the vapour over the feed is as strong as the product.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MinimumReflux {
    /// At the feed pinch.
    pub feed: f64,
    /// At the tangent pinch; 0 where the product is too weak to have one.
    pub tangent: f64,
    /// The larger of the two.
    pub reflux: f64,
    /// Which one that is.
    pub ruling: Pinch,
}

/// Minimum reflux by equal molar overflow.
///
/// `z` feed, `product` distillate (ethanol mole fractions, z < product < azeotrope), `q` thermal condition of the feed
/// (1 boiling liquid, above 1 colder). `None` where no pinch is found, which the bounds exclude.
pub(super) fn minimum_reflux(activity: Activity, z: f64, q: f64, product: f64) -> Option<MinimumReflux> {
    let at_feed = feed_pinch(activity, z, q)?;
    // Reflux of the line from the product through the equilibrium at x: s/(1 - s) with s = (xD - y)/(xD - x).
    let needed = |x: f64| {
        let y = activity.boiling(x).vapour;
        (product - y) / (y - x)
    };
    let feed = if at_feed < product {
        needed(at_feed).max(0.0)
    } else {
        0.0
    };
    let tangent = maximum(needed, at_feed.max(TANGENT_FROM), product - TANGENT_MARGIN)
        .map_or(0.0, |(_, reflux)| reflux.max(0.0));
    Some(MinimumReflux {
        feed,
        tangent,
        reflux: feed.max(tangent),
        ruling: if feed >= tangent {
            Pinch::Feed
        } else {
            Pinch::Tangent
        },
    })
}

/// Where the q-line meets the equilibrium curve.
fn feed_pinch(activity: Activity, z: f64, q: f64) -> Option<f64> {
    if q - 1.0 < 1e-9 {
        return Some(z);
    }
    // The line y = z + (x - z) q/(q - 1) starts under the curve at z and leaves the square at y = 1.
    let leaves = z + (1.0 - z) * (q - 1.0) / q;
    let gap = |x: f64| z + (x - z) * q / (q - 1.0) - activity.boiling(x).vapour;
    root(gap, z, leaves, 1e-14)
}

/// Minimum reflux without the assumption of equal overflow, by difference points in the enthalpy diagram.
///
/// `feed_celsius` at most the bubble point of the feed. `None` where no pinch is found, which the bounds exclude.
pub(super) fn minimum_reflux_by_enthalpy(
    activity: Activity,
    z: f64,
    feed_celsius: f64,
    product: f64,
) -> Option<f64> {
    let tie = |x: f64| {
        let boiling = activity.boiling(x);
        let y = boiling.vapour;
        (y, liquid(x, boiling.celsius), vapour(y, boiling.celsius))
    };
    let feed_enthalpy = liquid(z, feed_celsius);
    let bubble = activity.boiling(z).celsius;
    let at_feed = if bubble - feed_celsius < 1e-9 {
        z
    } else {
        // The tie line that points at the feed; towards the azeotrope tie lines turn vertical, so one always does.
        let misses = |x: f64| {
            let (y, low, high) = tie(x);
            low + (high - low) * (z - x) / (y - x) - feed_enthalpy
        };
        root(misses, z, activity.azeotrope() - 1e-6, 1e-13)?
    };
    // Height of the difference point over the product, kJ per mol of product.
    let height = |x: f64| {
        let (y, low, high) = tie(x);
        high + (high - low) * (product - y) / (y - x)
    };
    let inside = maximum(height, at_feed.max(TANGENT_FROM), product - TANGENT_MARGIN);
    let top = inside.map_or(f64::NEG_INFINITY, |(_, height)| height);
    let highest = height(at_feed).max(top);
    let product_enthalpy = liquid(product, activity.boiling(product).celsius);
    Some(((highest - product_enthalpy) / latent(product) - 1.0).max(0.0))
}
