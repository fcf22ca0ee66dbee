//! Stage kinds and the terms of Directive (EU) 2018/2001 Annex V Part C point 1 that they feed.

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// What a stage is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum StageKind {
    /// Carbon-stock change of converted land.
    Land,
    /// Growing or collecting the feedstock.
    Cultivation,
    /// Hauls from field to store to plant.
    FeedstockTransport,
    /// Drying, storage, crushing, milling, cooking, hydrolysis.
    Preparation,
    /// Yeast, nutrients, cooling; the sugar split.
    Fermentation,
    /// Stripping and rectifying.
    Distillation,
    /// Molecular sieve or entrainer.
    Dehydration,
    /// Separating and drying stillage, digesting vinasse.
    CoProductHandling,
    /// A whole plant metered as one.
    Processing,
    /// CO2 captured and stored, or replacing fossil CO2.
    Capture,
    /// Tank farm, ship, rail, truck, depot, filling station.
    FuelTransport,
    /// A boiler house or combined heat and power plant that serves several sections.
    Utility,
    /// Fuel bought in with a supplier's statement.
    Bought,
    /// Use of the fuel.
    Combustion,
}

impl StageKind {
    /// Every kind, from field to wheel.
    pub const ALL: [StageKind; 14] = [
        StageKind::Land,
        StageKind::Cultivation,
        StageKind::FeedstockTransport,
        StageKind::Preparation,
        StageKind::Fermentation,
        StageKind::Distillation,
        StageKind::Dehydration,
        StageKind::CoProductHandling,
        StageKind::Processing,
        StageKind::Capture,
        StageKind::FuelTransport,
        StageKind::Utility,
        StageKind::Bought,
        StageKind::Combustion,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            StageKind::Land => "land",
            StageKind::Cultivation => "cultivation",
            StageKind::FeedstockTransport => "feedstock_transport",
            StageKind::Preparation => "preparation",
            StageKind::Fermentation => "fermentation",
            StageKind::Distillation => "distillation",
            StageKind::Dehydration => "dehydration",
            StageKind::CoProductHandling => "co_product_handling",
            StageKind::Processing => "processing",
            StageKind::Capture => "capture",
            StageKind::FuelTransport => "fuel_transport",
            StageKind::Utility => "utility",
            StageKind::Bought => "bought",
            StageKind::Combustion => "combustion",
        }
    }

    /// The kind of a document name, if there is one.
    pub fn from_name(name: &str) -> Option<StageKind> {
        StageKind::ALL.into_iter().find(|kind| kind.name() == name)
    }

    /// Words for a page.
    pub fn words(self) -> &'static str {
        match self {
            StageKind::Land => "land",
            StageKind::Cultivation => "growing",
            StageKind::FeedstockTransport => "feedstock transport",
            StageKind::Preparation => "preparation",
            StageKind::Fermentation => "fermentation",
            StageKind::Distillation => "distillation",
            StageKind::Dehydration => "dehydration",
            StageKind::CoProductHandling => "co-product handling",
            StageKind::Processing => "processing",
            StageKind::Capture => "CO2 capture",
            StageKind::FuelTransport => "fuel transport",
            StageKind::Utility => "boiler house",
            StageKind::Bought => "bought fuel",
            StageKind::Combustion => "use in the engine",
        }
    }

    /// The term that an input of this kind feeds when its model does not say otherwise.
    /// An input of a `capture` stage follows the use of its capture model instead.
    pub fn term(self) -> Term {
        match self {
            StageKind::Land => Term::El,
            StageKind::Cultivation => Term::Eec,
            StageKind::FeedstockTransport | StageKind::FuelTransport => Term::Etd,
            StageKind::Capture => Term::Eccr,
            StageKind::Combustion => Term::Eu,
            StageKind::Preparation
            | StageKind::Fermentation
            | StageKind::Distillation
            | StageKind::Dehydration
            | StageKind::CoProductHandling
            | StageKind::Processing
            | StageKind::Utility
            | StageKind::Bought => Term::Ep,
        }
    }

    /// True for the stages whose outgoing flows are the crop's carbon before it enters a works.
    pub fn is_before_works(self) -> bool {
        matches!(
            self,
            StageKind::Land | StageKind::Cultivation | StageKind::FeedstockTransport
        )
    }
}

/// A term of the sum in Directive (EU) 2018/2001 Annex V Part C point 1(a). Every term is a signed
/// contribution to the net here: deductions are negative.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, ToSchema)]
pub enum Term {
    /// Extraction or cultivation of raw materials.
    #[serde(rename = "e_ec")]
    Eec,
    /// Carbon-stock change of land-use change.
    #[serde(rename = "e_l")]
    El,
    /// Processing.
    #[serde(rename = "e_p")]
    Ep,
    /// Transport and distribution.
    #[serde(rename = "e_td")]
    Etd,
    /// The fuel in use.
    #[serde(rename = "e_u")]
    Eu,
    /// Soil carbon accumulation.
    #[serde(rename = "e_sca")]
    Esca,
    /// CO2 capture and geological storage.
    #[serde(rename = "e_ccs")]
    Eccs,
    /// CO2 capture and replacement.
    #[serde(rename = "e_ccr")]
    Eccr,
}

impl Term {
    /// Every term in the order of the Directive's sum.
    pub const ALL: [Term; 8] = [
        Term::Eec,
        Term::El,
        Term::Ep,
        Term::Etd,
        Term::Eu,
        Term::Esca,
        Term::Eccs,
        Term::Eccr,
    ];

    /// The name used in documents.
    pub fn name(self) -> &'static str {
        match self {
            Term::Eec => "e_ec",
            Term::El => "e_l",
            Term::Ep => "e_p",
            Term::Etd => "e_td",
            Term::Eu => "e_u",
            Term::Esca => "e_sca",
            Term::Eccs => "e_ccs",
            Term::Eccr => "e_ccr",
        }
    }

    /// The term of a document name, if there is one.
    pub fn from_name(name: &str) -> Option<Term> {
        Term::ALL.into_iter().find(|term| term.name() == name)
    }

    /// Words for a page.
    pub fn words(self) -> &'static str {
        match self {
            Term::Eec => "growing or collecting the feedstock",
            Term::El => "land-use change",
            Term::Ep => "processing",
            Term::Etd => "transport and distribution",
            Term::Eu => "use of the fuel",
            Term::Esca => "soil carbon gained",
            Term::Eccs => "CO2 captured and stored",
            Term::Eccr => "CO2 captured in place of fossil CO2",
        }
    }
}
