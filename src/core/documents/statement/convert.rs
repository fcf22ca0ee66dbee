//! The published data of a statement, from the book to the file and back.

use super::data::{
    ConstantUsed, CountsUsed, DefaultUsed, FactorUsed, GwpSetUsed, MaterialUsed, PropertyUsed, UsageUsed,
    ValuesUsed,
};
use crate::core::domain::factor::{EngineVehicle, HaulVehicle, TermValues, Use};
use crate::core::domain::material::Property;
use crate::core::domain::{
    Citation, Cited, Counts, Factor, Gas, GwpSet, Material, PathwayDefault, PublishedGases, Status,
};
use crate::core::units::parse_unit;
use std::collections::BTreeMap;

fn published(gases: &PublishedGases) -> BTreeMap<Gas, f64> {
    Gas::ALL
        .into_iter()
        .filter_map(|gas| Some((gas, gases.get(gas)?)))
        .collect()
}

fn gases(published: &BTreeMap<Gas, f64>) -> PublishedGases {
    let mut gases = PublishedGases::default();
    for (gas, amount) in published {
        gases.set(*gas, Some(*amount));
    }
    gases
}

fn cite(source: &str, status: Status) -> Citation {
    Citation {
        source: source.to_owned(),
        status,
    }
}

impl GwpSetUsed {
    /// As the file carries it.
    pub fn of(set: &GwpSet) -> GwpSetUsed {
        let GwpSet {
            id,
            title,
            ch4_fossil,
            ch4_biogenic,
            n2o,
            citation,
            note,
        } = set.clone();
        let Citation { source, status } = citation;
        GwpSetUsed {
            id,
            title,
            ch4_fossil,
            ch4_biogenic,
            n2o,
            source,
            status,
            note,
        }
    }

    /// As the arithmetic takes it.
    pub fn set(&self) -> GwpSet {
        let GwpSetUsed {
            id,
            title,
            ch4_fossil,
            ch4_biogenic,
            n2o,
            source,
            status,
            note,
        } = self.clone();
        GwpSet {
            id,
            title,
            ch4_fossil,
            ch4_biogenic,
            n2o,
            citation: cite(&source, status),
            note,
        }
    }
}

impl FactorUsed {
    /// As the file carries it.
    pub fn of(factor: &Factor) -> FactorUsed {
        let usage = match &factor.usage {
            Use::Amount => UsageUsed::Amount,
            Use::Haul(HaulVehicle {
                energy_mj_per_tkm,
                exhaust,
                fuel,
                electric,
            }) => UsageUsed::Haul {
                energy_mj_per_tkm: *energy_mj_per_tkm,
                exhaust: published(exhaust),
                fuel: fuel.clone(),
                electric: *electric,
            },
            Use::Engine(EngineVehicle {
                ch4_kg_per_tj,
                n2o_kg_per_tj,
            }) => UsageUsed::Engine {
                ch4_kg_per_tj: *ch4_kg_per_tj,
                n2o_kg_per_tj: *n2o_kg_per_tj,
            },
            Use::HeatingValueOnly => UsageUsed::HeatingValueOnly,
            Use::Refused(reason) => UsageUsed::Refused {
                reason: reason.clone(),
            },
        };
        let counts = match factor.counts {
            Counts::Fuel => CountsUsed::Fuel,
            Counts::Power => CountsUsed::Power,
            Counts::Heat => CountsUsed::Heat,
            Counts::Other => CountsUsed::Other,
        };
        FactorUsed {
            id: factor.id.clone(),
            also: Vec::new(),
            for_comparison: false,
            name: factor.name.clone(),
            group: factor.group.clone(),
            counts,
            per: factor.per.clone(),
            unit: factor.unit.symbol.clone(),
            gases: published(&factor.gases),
            usage,
            printed_co2e_g: factor.printed_co2e_g,
            lhv_mj_per_kg: factor.lhv_mj_per_kg,
            density_kg_per_m3: factor.density_kg_per_m3,
            note: factor.note.clone(),
            source: factor.citation.source.clone(),
            status: factor.citation.status,
        }
    }

    /// As the arithmetic takes it; without the digits of the print.
    ///
    /// # Errors
    /// When the unit is none.
    pub fn factor(&self) -> Result<Factor, String> {
        let usage = match &self.usage {
            UsageUsed::Amount => Use::Amount,
            UsageUsed::Haul {
                energy_mj_per_tkm,
                exhaust,
                fuel,
                electric,
            } => Use::Haul(HaulVehicle {
                energy_mj_per_tkm: *energy_mj_per_tkm,
                exhaust: gases(exhaust),
                fuel: fuel.clone(),
                electric: *electric,
            }),
            UsageUsed::Engine {
                ch4_kg_per_tj,
                n2o_kg_per_tj,
            } => Use::Engine(EngineVehicle {
                ch4_kg_per_tj: *ch4_kg_per_tj,
                n2o_kg_per_tj: *n2o_kg_per_tj,
            }),
            UsageUsed::HeatingValueOnly => Use::HeatingValueOnly,
            UsageUsed::Refused { reason } => Use::Refused(reason.clone()),
        };
        Ok(Factor {
            id: self.id.clone(),
            name: self.name.clone(),
            group: self.group.clone(),
            counts: match self.counts {
                CountsUsed::Fuel => Counts::Fuel,
                CountsUsed::Power => Counts::Power,
                CountsUsed::Heat => Counts::Heat,
                CountsUsed::Other => Counts::Other,
            },
            per: self.per.clone(),
            unit: parse_unit(&self.unit).map_err(|error| error.to_string())?,
            gases: gases(&self.gases),
            usage,
            printed_co2e_g: self.printed_co2e_g,
            printed: BTreeMap::new(),
            lhv_mj_per_kg: self.lhv_mj_per_kg,
            density_kg_per_m3: self.density_kg_per_m3,
            note: self.note.clone(),
            citation: cite(&self.source, self.status),
        })
    }
}

impl DefaultUsed {
    /// As the file carries it.
    pub fn of(row: &PathwayDefault) -> DefaultUsed {
        let values = |values: TermValues| {
            let TermValues {
                e_ec,
                e_ec_soil_n2o,
                e_p,
                e_td,
                e_td_final_fuel,
                total,
                saving_percent,
            } = values;
            ValuesUsed {
                e_ec,
                e_ec_soil_n2o,
                e_p,
                e_td,
                e_td_final_fuel,
                total,
                saving_percent,
            }
        };
        DefaultUsed {
            id: row.id.clone(),
            for_comparison: false,
            feedstock: row.feedstock.clone(),
            feedstock_materials: row.feedstock_materials.clone(),
            description: row.description.clone(),
            process_fuel: row.process_fuel.clone(),
            process_heat: row.process_heat,
            stillage_digested: row.stillage_digested,
            default: values(row.default),
            typical: values(row.typical),
            source: row.citation.source.clone(),
            status: row.citation.status,
        }
    }

    /// As the arithmetic takes it.
    pub fn row(&self) -> PathwayDefault {
        let values = |values: ValuesUsed| {
            let ValuesUsed {
                e_ec,
                e_ec_soil_n2o,
                e_p,
                e_td,
                e_td_final_fuel,
                total,
                saving_percent,
            } = values;
            TermValues {
                e_ec,
                e_ec_soil_n2o,
                e_p,
                e_td,
                e_td_final_fuel,
                total,
                saving_percent,
            }
        };
        PathwayDefault {
            id: self.id.clone(),
            feedstock: self.feedstock.clone(),
            feedstock_materials: self.feedstock_materials.clone(),
            description: self.description.clone(),
            process_fuel: self.process_fuel.clone(),
            process_heat: self.process_heat,
            stillage_digested: self.stillage_digested,
            default: values(self.default),
            typical: values(self.typical),
            citation: cite(&self.source, self.status),
        }
    }
}

impl MaterialUsed {
    /// As the file carries it.
    pub fn of(material: &Material) -> MaterialUsed {
        let property = |property: &Property| {
            let Cited {
                value,
                unit,
                source,
                status,
                note,
            } = property.figure.clone();
            let (lower, upper, basis) = (property.lower, property.upper, property.basis.clone());
            PropertyUsed {
                value,
                unit,
                lower,
                upper,
                basis,
                source,
                status,
                note,
            }
        };
        let properties = material
            .properties
            .iter()
            .map(|(name, found)| (name.clone(), property(found)));
        MaterialUsed {
            id: material.id.clone(),
            name: material.name.clone(),
            kind: material.kind.clone(),
            carbon_class: material.carbon_class,
            carbon_reason: material.carbon_reason.clone(),
            properties: properties.collect(),
        }
    }

    /// As the arithmetic takes it.
    pub fn material(&self) -> Material {
        let property = |property: &PropertyUsed| {
            let PropertyUsed {
                value,
                unit,
                lower,
                upper,
                basis,
                source,
                status,
                note,
            } = property.clone();
            Property {
                figure: Cited {
                    value,
                    unit,
                    source,
                    status,
                    note,
                },
                lower,
                upper,
                basis,
            }
        };
        let properties = self
            .properties
            .iter()
            .map(|(name, found)| (name.clone(), property(found)));
        Material {
            id: self.id.clone(),
            name: self.name.clone(),
            kind: self.kind.clone(),
            carbon_class: self.carbon_class,
            carbon_reason: self.carbon_reason.clone(),
            properties: properties.collect(),
        }
    }
}

impl ConstantUsed {
    /// As the file carries it.
    pub fn of(table: &str, symbol: &str, figure: &Cited) -> ConstantUsed {
        let Cited {
            value,
            unit,
            source,
            status,
            note,
        } = figure.clone();
        let (table, symbol) = (table.to_owned(), symbol.to_owned());
        ConstantUsed {
            table,
            symbol,
            value,
            unit,
            source,
            status,
            note,
        }
    }

    /// As the arithmetic takes it.
    pub fn figure(&self) -> Cited {
        let ConstantUsed {
            table: _,
            symbol: _,
            value,
            unit,
            source,
            status,
            note,
        } = self.clone();
        Cited {
            value,
            unit,
            source,
            status,
            note,
        }
    }
}
