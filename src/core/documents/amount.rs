//! An amount as a person enters it: a figure with its unit, kept as entered.

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// A figure with its unit.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
pub struct Amount {
    /// The figure, in `unit`.
    pub value: f64,
    /// Unit, such as `t`, `kg N`, `MWh gross`, `EUR/t`.
    pub unit: String,
}

/// How sure an amount is (used by later analyses; checked and kept here).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize, ToSchema)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Uncertainty {
    /// The amount is the median.
    Lognormal {
        /// Geometric standard deviation, above 1.
        #[serde(skip_serializing_if = "Option::is_none")]
        gsd: Option<f64>,
        /// Plus/minus at 95 %, in %.
        #[serde(skip_serializing_if = "Option::is_none")]
        percent_95: Option<f64>,
    },
    /// The amount is the mean.
    Normal {
        /// Standard deviation, % of the amount.
        #[serde(skip_serializing_if = "Option::is_none")]
        sd_percent: Option<f64>,
        /// Plus/minus at 95 %, in %.
        #[serde(skip_serializing_if = "Option::is_none")]
        percent_95: Option<f64>,
    },
    /// In the amount's unit.
    Triangular {
        /// Least value.
        min: f64,
        /// Most likely value.
        mode: f64,
        /// Largest value.
        max: f64,
    },
    /// In the amount's unit.
    Uniform {
        /// Least value.
        min: f64,
        /// Largest value.
        max: f64,
    },
}

/// Where a figure comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum Origin {
    /// Read from a meter, scale or laboratory: wants evidence.
    Measured,
    /// Stated by a supplier: wants evidence.
    Supplier,
    /// Worked out from other figures.
    Calculated,
    /// Estimated: wants a note.
    Estimated,
    /// A published default.
    Default,
}

impl Origin {
    /// Every origin.
    pub const ALL: [Origin; 5] = [
        Origin::Measured,
        Origin::Supplier,
        Origin::Calculated,
        Origin::Estimated,
        Origin::Default,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            Origin::Measured => "measured",
            Origin::Supplier => "supplier",
            Origin::Calculated => "calculated",
            Origin::Estimated => "estimated",
            Origin::Default => "default",
        }
    }

    /// The origin of a document name, if there is one.
    pub fn from_name(name: &str) -> Option<Origin> {
        Origin::ALL.into_iter().find(|origin| origin.name() == name)
    }

    /// Measured and supplier figures count as primary data and want evidence.
    pub fn is_primary(self) -> bool {
        matches!(self, Origin::Measured | Origin::Supplier)
    }
}
