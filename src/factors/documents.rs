//! Editions, factors and rule sets as documents. They are made from the published data, never read.

use crate::core::domain::factor::{FuelSplit, ProcessHeat, TermValues, Use};
use crate::core::domain::{Book, Citation, Counts, Edition, Factor, Gas, PathwayDefault};
use jiff::civil::Date;
use serde::Serialize;
use std::collections::BTreeMap;
use utoipa::ToSchema;

/// An edition in the list of editions.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct EditionLine {
    /// The part of a factor's id before `/`.
    pub id: String,
    /// Title.
    pub title: String,
    /// The document it was taken from.
    pub citation: Citation,
    /// First day it may be used; null where its document fixes none.
    #[schema(value_type = Option<String>, format = Date)]
    pub valid_from: Option<Date>,
    /// Last day it may be used; null where it is open.
    #[schema(value_type = Option<String>, format = Date)]
    pub valid_to: Option<Date>,
    /// Where the days stand.
    pub validity_source: Option<Citation>,
    /// Rows that are factors.
    pub factors: usize,
    /// Rows that are published pathways with default values.
    pub pathways: usize,
}

/// An edition.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct EditionDocument {
    /// Id, title, source and counts.
    #[serde(flatten)]
    pub line: EditionLine,
    /// What a reader should know.
    pub note: Option<String>,
    /// The groups of its factors, in order of name.
    pub groups: Vec<GroupLine>,
    /// Its published pathways with their default values.
    pub default_values: Vec<PathwayDefaultDocument>,
}

/// A group of factors.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct GroupLine {
    /// Name, as `?group=` takes it.
    pub group: String,
    /// Factors in it.
    pub factors: usize,
}

/// The values of a published pathway.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct PathwayDefaultDocument {
    /// `edition/row`, as `defaults` of a pathway takes it.
    pub id: String,
    /// Feedstock as printed.
    pub feedstock: String,
    /// Materials whose pathways may use the row.
    pub feedstock_materials: Vec<String>,
    /// What the pathway is.
    pub description: String,
    /// Process fuel as printed.
    pub process_fuel: String,
    /// Where the process heat comes from; null where the row does not say.
    pub process_heat: Option<ProcessHeat>,
    /// Whether the stillage is digested to biogas; null where the row does not say.
    pub stillage_digested: Option<bool>,
    /// Default values: the only ones that serve compliance.
    pub default: TermValues,
    /// Typical values: shown, never usable for compliance.
    pub typical: TermValues,
    /// Source and status.
    pub citation: Citation,
}

/// A factor.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct FactorDocument {
    /// `edition/row`, as documents name it.
    pub id: String,
    /// Id of the edition.
    pub edition: String,
    /// Id of the row inside the edition.
    pub row: String,
    /// Name.
    pub name: String,
    /// Group inside the edition.
    pub group: String,
    /// What one unit counts: `fuel` (net heating value), `power`, `heat` or `other`.
    pub counts: String,
    /// The unit, such as `kg N`.
    pub per: String,
    /// kg of each gas per unit, as published; a gas that is absent is not published, which is not the same as zero.
    pub gases: BTreeMap<String, f64>,
    /// How the row may be used.
    pub usage: Usage,
    /// CO2e that the source prints beside the gases, g per unit: shown, never used.
    pub printed_co2e_g: Option<f64>,
    /// The figures as printed, digits kept, by column.
    pub printed: BTreeMap<String, String>,
    /// Lower heating value of the dry substance, MJ/kg, as printed.
    pub lhv_mj_per_kg: Option<f64>,
    /// Density, kg/m3, as printed.
    pub density_kg_per_m3: Option<f64>,
    /// Supply and burning of a fuel apart: shown, never used.
    pub split: Option<Split>,
    /// What a reader should know before using it.
    pub note: Option<String>,
    /// Source and status.
    pub citation: Citation,
}

/// How a row may be used.
#[derive(Clone, Debug, Serialize, ToSchema)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Usage {
    /// Multiplies an amount.
    Amount,
    /// Drives a `haul`.
    Haul {
        /// Fuel energy per tonne-kilometre, MJ/(t km), at the published load.
        energy_mj_per_tkm: f64,
        /// The fuel that the row is driven by, `edition/row`.
        fuel: Option<String>,
        /// Electric: the grid must be named.
        electric: bool,
    },
    /// Drives a `combustion`.
    Engine {
        /// Methane, kg/TJ; null when not published.
        ch4_kg_per_tj: Option<f64>,
        /// Nitrous oxide, kg/TJ; null when not published.
        n2o_kg_per_tj: Option<f64>,
    },
    /// Prints no emission, only a heating value or a density.
    HeatingValueOnly,
    /// Refused as a factor.
    Refused {
        /// Why.
        reason: String,
    },
}

/// A fuel's printed figure divided into supply and burning, g CO2e/MJ.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct Split {
    /// Both together, as the source of the split prints it.
    pub total_g_per_mj: f64,
    /// Extraction, refining, transport.
    pub upstream_g_per_mj: f64,
    /// Burning.
    pub combustion_g_per_mj: f64,
    /// What a reader should know.
    pub note: Option<String>,
    /// Source and status.
    pub citation: Citation,
}

impl EditionLine {
    /// The line of an edition.
    pub fn of(edition: &Edition) -> EditionLine {
        EditionLine {
            id: edition.id.clone(),
            title: edition.title.clone(),
            citation: edition.citation.clone(),
            valid_from: edition.valid_from,
            valid_to: edition.valid_to,
            validity_source: edition.validity_source.clone(),
            factors: edition.factors.len(),
            pathways: edition.pathways.len(),
        }
    }
}

impl EditionDocument {
    /// The document of an edition.
    pub fn of(edition: &Edition) -> EditionDocument {
        let mut groups: BTreeMap<&str, usize> = BTreeMap::new();
        for factor in edition.factors.values() {
            *groups.entry(&factor.group).or_default() += 1;
        }
        EditionDocument {
            line: EditionLine::of(edition),
            note: edition.note.clone(),
            groups: groups
                .into_iter()
                .map(|(group, factors)| GroupLine {
                    group: group.into(),
                    factors,
                })
                .collect(),
            default_values: edition
                .pathways
                .values()
                .map(PathwayDefaultDocument::of)
                .collect(),
        }
    }
}

impl PathwayDefaultDocument {
    /// The document of a published pathway.
    pub fn of(published: &PathwayDefault) -> PathwayDefaultDocument {
        let PathwayDefault {
            id,
            feedstock,
            feedstock_materials,
            description,
            process_fuel,
            process_heat,
            stillage_digested,
            default,
            typical,
            citation,
        } = published.clone();
        PathwayDefaultDocument {
            id,
            feedstock,
            feedstock_materials,
            description,
            process_fuel,
            process_heat,
            stillage_digested,
            default,
            typical,
            citation,
        }
    }
}

impl FactorDocument {
    /// The document of a factor.
    pub fn of(book: &Book, factor: &Factor) -> FactorDocument {
        let (edition, row) = factor.id.split_once('/').unwrap_or((&factor.id, ""));
        let split = book
            .editions
            .get(edition)
            .and_then(|edition| edition.fuel_splits.get(row));
        let counts = match factor.counts {
            Counts::Fuel => "fuel",
            Counts::Power => "power",
            Counts::Heat => "heat",
            Counts::Other => "other",
        };
        let published = |gas: Gas| {
            factor
                .gases
                .get(gas)
                .map(|amount| (gas.name().to_owned(), amount))
        };
        FactorDocument {
            id: factor.id.clone(),
            edition: edition.into(),
            row: row.into(),
            name: factor.name.clone(),
            group: factor.group.clone(),
            counts: counts.into(),
            per: factor.per.clone(),
            gases: Gas::ALL.into_iter().filter_map(published).collect(),
            usage: Usage::of(&factor.usage),
            printed_co2e_g: factor.printed_co2e_g,
            printed: factor.printed.clone(),
            lhv_mj_per_kg: factor.lhv_mj_per_kg,
            density_kg_per_m3: factor.density_kg_per_m3,
            split: split.map(Split::of),
            note: factor.note.clone(),
            citation: factor.citation.clone(),
        }
    }
}

impl Usage {
    fn of(usage: &Use) -> Usage {
        match usage {
            Use::Amount => Usage::Amount,
            Use::Haul(vehicle) => Usage::Haul {
                energy_mj_per_tkm: vehicle.energy_mj_per_tkm,
                fuel: vehicle.fuel.clone(),
                electric: vehicle.electric,
            },
            Use::Engine(vehicle) => Usage::Engine {
                ch4_kg_per_tj: vehicle.ch4_kg_per_tj,
                n2o_kg_per_tj: vehicle.n2o_kg_per_tj,
            },
            Use::HeatingValueOnly => Usage::HeatingValueOnly,
            Use::Refused(reason) => Usage::Refused {
                reason: reason.clone(),
            },
        }
    }
}

impl Split {
    fn of(split: &FuelSplit) -> Split {
        let FuelSplit {
            total_g_per_mj,
            upstream_g_per_mj,
            combustion_g_per_mj,
            note,
            citation,
        } = split.clone();
        Split {
            total_g_per_mj,
            upstream_g_per_mj,
            combustion_g_per_mj,
            note,
            citation,
        }
    }
}
