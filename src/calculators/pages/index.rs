//! The list of calculators, one sentence each.

use crate::core::models::still::CAUTION;
use crate::web::filters;
use crate::web::frame::{Frame, Section};
use askama::Template;

/// The list of calculators.
#[derive(Clone, Debug, PartialEq, Template)]
#[template(path = "calculators.html")]
pub struct Index {
    /// Round the page.
    pub frame: Frame,
    /// Address, name, sentence.
    pub rows: Vec<(&'static str, &'static str, &'static str)>,
    /// What the figures are not for.
    pub caution: &'static str,
}

impl Index {
    /// The list.
    pub fn new() -> Index {
        Index {
            frame: Frame::bare("Calculators", Section::Calculators),
            rows: vec![
                (
                    "/calculators/alcoholometry",
                    "Alcoholic strength",
                    "Turns mass, volume, temperature and strength of ethanol and water into each other (OIML R 22).",
                ),
                (
                    "/calculators/fermentation",
                    "Fermentation",
                    "Works out ethanol, CO2 and yeast from sugars, starch, or the cellulose and xylan of straw and wood.",
                ),
                (
                    "/calculators/distillation",
                    "Distillation",
                    "Works out reflux, heat and steam of a column from wash to strong ethanol, by two methods side by side.",
                ),
                (
                    "/calculators/dehydration",
                    "Dehydration",
                    "Works out the heat of a molecular sieve from strong to dry ethanol.",
                ),
                (
                    "/calculators/blend",
                    "Blend and kilometre",
                    "Mixes ethanol with petrol by energy: g CO2e per MJ, per litre, and per kilometre driven; the ethanol is a figure or a stored pathway.",
                ),
            ],
            caution: CAUTION,
        }
    }
}

impl Default for Index {
    fn default() -> Index {
        Index::new()
    }
}
