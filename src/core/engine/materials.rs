//! The materials of a pathway: its own, and the built-in ones.

use crate::core::documents::pathway::{OwnMaterial, Pathway};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::{Book, CarbonClass};
use crate::core::models::flow::{ETHANOL, HEAT, POWER, note_unit_error};
use crate::core::units::{Dimension, Quantity};
use std::collections::BTreeMap;

/// Looks materials up.
pub struct Materials<'m> {
    own: BTreeMap<&'m str, (&'m OwnMaterial, Option<f64>)>,
    book: &'m Book,
}

/// A carbon content and where it comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CarbonContent {
    /// Mass % of the dry matter.
    pub percent: f64,
    /// Half the span between its limits, percentage points.
    pub half_range: f64,
    /// The class of a library content; none where the pathway gives it.
    pub class: Option<CarbonClass>,
}

impl<'m> Materials<'m> {
    /// Reads the pathway's own materials; a built-in id is refused.
    pub fn new(pathway: &'m Pathway, book: &'m Book, problems: &mut Problems) -> Materials<'m> {
        let at = Place::ROOT.field("materials");
        let mut own = BTreeMap::new();
        for (index, material) in pathway.materials.iter().enumerate() {
            let place = at.item(index);
            if book.materials.contains_key(&material.id)
                || [ETHANOL, HEAT, POWER].contains(&material.id.as_str())
            {
                let detail = format!("\"{}\" is a built-in material.", material.id);
                problems.add(place.field("id"), detail, "Choose an id of your own.");
            }
            let lhv = material.lhv_dry.as_ref().and_then(|amount| {
                let lhv_at = place.field("lhv_dry");
                match Quantity::read_as(amount.value, &amount.unit, Dimension::ENERGY.per(Dimension::MASS)) {
                    Ok(joules) if joules >= 0.0 => Some(joules / 1e6),
                    Ok(_) => {
                        problems.add(
                            lhv_at.field("value"),
                            "A heating value is not negative.",
                            "Check the figure.",
                        );
                        None
                    }
                    Err(error) => {
                        note_unit_error(&error, &lhv_at, problems);
                        None
                    }
                }
            });
            own.insert(material.id.as_str(), (material, lhv));
        }
        Materials { own, book }
    }

    /// True if the id is known; otherwise a problem is noted.
    pub fn check(&self, id: &str, at: &Place, problems: &mut Problems) -> bool {
        if id == "co2" {
            problems.add(
                at,
                "CO2 is never a product here.",
                "Book it in a stage of kind capture with a model of kind capture.",
            );
            return false;
        }
        let known = self.own.contains_key(id) || self.book.materials.contains_key(id);
        if !known {
            let names = self
                .own
                .keys()
                .copied()
                .chain(self.book.materials.keys().map(String::as_str));
            let remedy = match nearest(id, names) {
                Some(near) => format!("Perhaps \"{near}\" was meant; or add it under \"materials\"."),
                None => "Choose a built-in material, or add it under \"materials\".".to_owned(),
            };
            problems.add(at, format!("There is no material \"{id}\"."), remedy);
        }
        known
    }

    /// Lower heating value of the dry matter, MJ/kg, and its source.
    pub fn lhv_dry(&self, id: &str) -> Option<(f64, String)> {
        if let Some((material, lhv)) = self.own.get(id) {
            let source = material
                .citation
                .clone()
                .unwrap_or_else(|| "the pathway's own material".to_owned());
            return lhv.map(|lhv| (lhv, source));
        }
        let property = self.book.materials.get(id)?.properties.get("lhv_dry")?;
        Some((property.figure.value, property.figure.source.clone()))
    }

    /// Carbon content of a material where a flow gives none.
    pub fn carbon(&self, id: &str) -> Option<CarbonContent> {
        if let Some((material, _)) = self.own.get(id) {
            let percent = material.carbon_percent_dry?;
            return Some(CarbonContent {
                percent,
                half_range: 0.0,
                class: None,
            });
        }
        let material = self.book.materials.get(id)?;
        let property = material.properties.get("carbon_percent_dry")?;
        let half_range = match (property.lower, property.upper) {
            (Some(low), Some(high)) => (high - low) / 2.0,
            _ => 0.0,
        };
        Some(CarbonContent {
            percent: property.figure.value,
            half_range,
            class: Some(material.carbon_class),
        })
    }

    /// Name for people.
    pub fn name<'n>(&'n self, id: &'n str) -> &'n str {
        match (self.own.get(id), self.book.materials.get(id)) {
            (Some((material, _)), _) => &material.name,
            (None, Some(material)) => &material.name,
            (None, None) => id,
        }
    }
}
