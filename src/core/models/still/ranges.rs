//! What a still may be told, each figure once: the models, the calculator and the forms share these.
//!
//! Ranges without a source are our own; 95.7 % mass is the azeotrope of the model, rounded down.

use crate::core::models::parameter::Span;
use crate::core::models::refusal::{Figure, span};

const PERCENT: &str = "percent";

/// Ethanol in the wash, % vol at 20 degC.
pub const WASH: Figure = Figure {
    name: "wash_strength_percent_vol",
    unit: PERCENT,
    hard: span(0.5, 30.0),
    usual: Some(span(5.0, 15.0)),
};

/// Ethanol in the product, % mass.
pub const PRODUCT: Figure = Figure {
    name: "product_strength_percent_mass",
    unit: PERCENT,
    hard: Span {
        low: 0.0,
        high: 95.7,
        above: true,
    },
    usual: Some(span(80.0, 95.0)),
};

/// Ethanol in the stillage, % mass.
pub const STILLAGE: Figure = Figure {
    name: "stillage_strength_percent_mass",
    unit: PERCENT,
    hard: span(0.001, 1.0),
    usual: Some(span(0.001, 0.1)),
};

/// Reflux over the minimum reflux.
pub const REFLUX_MULTIPLE: Figure = Figure {
    name: "reflux_multiple",
    unit: "",
    hard: span(1.0, 5.0),
    usual: Some(span(1.1, 1.5)),
};

/// How far below the stillage the wash enters, K.
pub const FEED_APPROACH: Figure = Figure {
    name: "feed_approach_k",
    unit: "K",
    hard: span(0.0, 70.0),
    usual: Some(span(5.0, 20.0)),
};

/// Temperature of a wash that no stillage heats, degC.
pub const FEED_TEMPERATURE: Figure = Figure {
    name: "feed_temperature_c",
    unit: "degC",
    hard: span(0.0, 100.0),
    usual: None,
};

/// External heat over reboiler duty.
pub const COUPLING: Figure = Figure {
    name: "coupling_factor",
    unit: "",
    hard: span(0.05, 1.0),
    usual: Some(span(0.35, 1.0)),
};

/// Ethanol in what enters the sieve, % mass.
pub const SIEVE_FEED: Figure = Figure {
    name: "feed_strength_percent_mass",
    unit: PERCENT,
    hard: span(85.0, 95.7),
    usual: None,
};

/// Ethanol in what leaves the sieve, % mass.
pub const SIEVE_PRODUCT: Figure = Figure {
    name: "product_strength_percent_mass",
    unit: PERCENT,
    hard: span(98.0, 99.99),
    usual: None,
};

/// Superheat of the vapour before the sieve, K.
pub const SUPERHEAT: Figure = Figure {
    name: "superheat_k",
    unit: "K",
    hard: span(0.0, 80.0),
    usual: None,
};

/// Ethanol in the purge that regenerates the bed, kg per 100 kg of dry product.
pub const PURGE: Figure = Figure {
    name: "purge_percent",
    unit: PERCENT,
    hard: span(0.0, 40.0),
    usual: None,
};

/// Ethanol in the purge, % mass.
pub const PURGE_STRENGTH: Figure = Figure {
    name: "purge_strength_percent_mass",
    unit: PERCENT,
    hard: span(50.0, 92.0),
    usual: None,
};
