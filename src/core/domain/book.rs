//! Everything published that an evaluation may look up, in one place. Built once by `library`, read by the engine.

use super::citation::{Citation, Cited};
use super::factor::{Edition, Factor, PathwayDefault};
use super::gases::GwpSet;
use super::material::Material;
use super::rule_set::RuleSet;
use std::collections::BTreeMap;

/// Published constants of one method, by symbol (`ef1`, `frac_gasf`, ...).
pub type Constants = BTreeMap<String, Cited>;

/// Crop-residue data of one crop in one method: figures by parameter (`dry`, `slope`, `n_ag`, ...).
#[derive(Clone, Debug, PartialEq)]
pub struct ResidueRow {
    /// Crop as printed.
    pub crop: String,
    /// Figures by parameter.
    pub figures: BTreeMap<String, f64>,
    /// Source; the weakest status of the row's figures.
    pub citation: Citation,
}

/// Data of the soil models of one edition (`eu-2022-996`, `ipcc-2006`, `ipcc-2019`).
#[derive(Clone, Debug, Default, PartialEq)]
pub struct SoilTables {
    /// Constants by symbol.
    pub constants: Constants,
    /// Residue rows by the crop name that documents use (`wheat`, `sugar_beet`, ...).
    pub residues: BTreeMap<String, ResidueRow>,
}

/// The published data of the program.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Book {
    /// Editions by id.
    pub editions: BTreeMap<String, Edition>,
    /// Built-in materials by id.
    pub materials: BTreeMap<String, Material>,
    /// Rule sets by id.
    pub rule_sets: BTreeMap<String, RuleSet>,
    /// Sets of gas weights by id.
    pub gwp_sets: BTreeMap<String, GwpSet>,
    /// Soil tables by edition.
    pub soils: BTreeMap<String, SoilTables>,
    /// Carbon of soil and vegetation under a use of land, by symbol (`soc.boreal.sandy`, `c_veg.annual_cropland`, ...).
    pub land: Constants,
}

impl Book {
    /// A factor by its full id, `edition/row`; aliases of a row are followed.
    pub fn factor(&self, id: &str) -> Option<&Factor> {
        let (edition, row) = id.split_once('/')?;
        self.editions.get(edition)?.factor(row)
    }

    /// The rule sets in the order in which lists offer them: those in force first, the repealed ones last. Versions of
    /// one's own stand here as `id@version` too: the newest is offered.
    pub fn offered_rule_sets(&self) -> Vec<&RuleSet> {
        let newest = self.rule_sets.iter().filter(|(id, _)| !id.contains('@'));
        let mut sets: Vec<&RuleSet> = newest.map(|(_, set)| set).collect();
        sets.sort_by_key(|set| set.standing);
        sets
    }

    /// A published pathway's default values by full id, `edition/row`.
    pub fn pathway_default(&self, id: &str) -> Option<&PathwayDefault> {
        let (edition, row) = id.split_once('/')?;
        self.editions.get(edition)?.pathways.get(row)
    }
}
