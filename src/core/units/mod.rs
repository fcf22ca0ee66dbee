//! Amounts with a dimension: units are read once at the edge, the core computes in SI base units.

mod describe;
mod dimension;
mod parse;
mod quantity;
pub mod rounding;
mod table;

pub use dimension::{Currency, Dimension, Substance};
pub use parse::{MAX_CHARS, Unit, parse_unit};
pub use quantity::Quantity;

/// Why a unit or an amount was refused. The text is for the person who typed it: what is so, then what to do.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum UnitError {
    /// The text is no unit.
    #[error("\"{unit}\" is not a known unit. {}", remedy(.suggestion.as_deref()))]
    Unknown {
        /// What was written, shortened.
        unit: String,
        /// What it most likely should be: a unit, or a choice in words.
        suggestion: Option<String>,
    },
    /// A good unit of the wrong dimension.
    #[error("{found} is {found_is}, but {expected} is wanted here. Give it in {examples}.")]
    Mismatch {
        /// The unit as written.
        found: String,
        /// What it counts, in words.
        found_is: String,
        /// What is wanted, in words.
        expected: String,
        /// Units that would do.
        examples: String,
    },
    /// The figure is not a finite number, or leaves the range of one when converted.
    #[error("the figure is not a finite number. Give it in digits, and in a unit of its size.")]
    NotFinite,
}

fn remedy(suggestion: Option<&str>) -> String {
    match suggestion {
        Some(text) => format!("Write {text}."),
        None => "Units look like kg, t, MJ, kWh power, m3, t km or kg N/ha.".to_owned(),
    }
}

#[cfg(test)]
mod tests;
