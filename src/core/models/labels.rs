//! What parameters are called in forms: words of the trade without the unit, which stands beside the field. A test asks that
//! every parameter of every model has its words.

/// The words of a parameter; none for one that nobody named.
pub fn words(name: &str) -> Option<&'static str> {
    Some(match name {
        "after" => "Land after",
        "area_ha" => "Area",
        "before" => "Land before",
        "biogas_made" => "Biogas made",
        "blend_percent_vol" => "Ethanol in the blend",
        "broken" => "The commitment was left",
        "building_heat" => "Heats buildings",
        "burnt_t" => "Residues burnt, dry",
        "caco3_equivalent_kg" => "Lime, as CaCO3",
        "carbon_after" => "Soil carbon after",
        "carbon_before" => "Soil carbon before",
        "carbon_t_per_ha" => "Carbon on the land",
        "ch4_g_per_kg" => "CH4 of burning",
        "ch4_kg_per_tj" => "CH4 per energy",
        "citation" => "Where the figures come from",
        "climate" => "Climate",
        "climate_class" => "Climate class",
        "climate_region" => "Climate region",
        "co2_captured" => "CO2 captured",
        "co2_delivered" => "CO2 delivered",
        "combustion_factor_percent" => "Part that burns",
        "committed_until" => "Committed until",
        "converted_in" => "Converted in the year",
        "crop" => "Crop",
        "degraded_land_bonus" => "Bonus for restored degraded land",
        "distance" => "Distance",
        "dolomite_kg" => "Dolomite",
        "dry_t" => "Matter dried, as dry matter",
        "efficiency_heat_percent" => "Efficiency, heat",
        "efficiency_percent" => "Efficiency",
        "efficiency_power_percent" => "Efficiency, power",
        "empty_energy_percent" => "Energy of the empty trip",
        "empty_return" => "Comes back empty",
        "energy" => "Energy",
        "ethanol" => "Ethanol made",
        "extra_emissions" => "Extra emissions of the practice",
        "factor" => "Factor",
        "fuel" => "Fuel",
        "fuel_load" => "Residues on the field",
        "fuel_used" => "Fuel used",
        "fuels" => "Fuels",
        "gases" => "Gases",
        "heat" => "Heat",
        "heat_from" => "Heat comes from",
        "heat_made" => "Heat made",
        "heat_per_water" => "Heat per water evaporated",
        "heat_temperature_c" => "Temperature of the heat",
        "heat_used" => "Heat used",
        "input" => "Manure and residues left",
        "last_use_on" => "Last day of use",
        "lime_is" => "The lime is",
        "limestone_kg" => "Limestone",
        "management" => "Tillage and management",
        "mass" => "Mass carried",
        "measured_co2" => "CO2 as measured",
        "methane_percent" => "Methane in the biogas",
        "method" => "Method",
        "moisture_in_percent" => "Moisture going in",
        "moisture_out_percent" => "Moisture coming out",
        "moisture_percent" => "Moisture of the harvest",
        "n2o_g_per_kg" => "N2O of burning",
        "n2o_kg_per_tj" => "N2O per energy",
        "nitrate_n_kg" => "Nitrogen as nitrate",
        "organic_n_kg" => "Organic nitrogen",
        "organic_soil_climate" => "Climate of the organic soil",
        "organic_soil_ha" => "Drained organic soil",
        "power_factor" => "Factor of the power",
        "power_made" => "Power made",
        "power_per_co2" => "Power per CO2",
        "power_used" => "Power used",
        "practice" => "Practice",
        "practice_since" => "Practised since",
        "purpose" => "What the CO2 is for",
        "replaces" => "What it replaces",
        "residue_n_kg" => "Nitrogen in residues",
        "residues_burnt_percent" => "Residues burnt",
        "residues_removed_percent" => "Residues removed",
        "respired_percent" => "Sugar respired",
        "share_percent" => "Share",
        "slip_percent" => "Methane that slips",
        "soc_cause" => "Why soil carbon is lost",
        "soc_loss_t_c" => "Soil carbon lost",
        "soil" => "Soil",
        "soil_organic_carbon" => "Organic carbon of the soil",
        "soil_ph" => "Soil pH",
        "soil_ph_class" => "Soil pH class",
        "soil_texture" => "Soil texture",
        "spread_years" => "Spread over",
        "stack" => "What the stack emits",
        "storage" => "Stored or used",
        "storage_permit" => "Permit of the storage",
        "storage_site" => "Storage site",
        "sugar" => "Kind of sugar",
        "sugar_used" => "Sugar used",
        "synthetic_n_by_type_kg" => "Synthetic nitrogen by type",
        "synthetic_n_kg" => "Synthetic nitrogen",
        "urea_kg" => "Urea",
        "urea_n_kg" => "Nitrogen as urea",
        "use" => "Use of the land",
        "vegetation" => "Vegetation",
        "vehicle" => "Vehicle",
        "water_t" => "Water evaporated",
        "years" => "Years between the two",
        "yield_t" => "Harvest, as it left the field",
        _ => return still(name),
    })
}

/// Parameters of distillation and dehydration, many of which stand in a table of their own.
fn still(name: &str) -> Option<&'static str> {
    Some(match name {
        "coupling_factor" => "Thermal coupling, part of the duty still needed",
        "feed_approach_k" => "Feed below its boiling point",
        "feed_is_vapour" => "The feed comes as vapour",
        "feed_strength_percent_mass" => "Strength of the feed",
        "product_strength_percent_mass" => "Strength of the product",
        "purge_percent" => "Product used to purge the beds",
        "purge_strength_percent_mass" => "Strength of the purge",
        "reflux_multiple" => "Reflux over its minimum",
        "steam_per_kg" => "Heat of a kilogram of steam",
        "stillage_strength_percent_mass" => "Ethanol left in the stillage",
        "superheat_k" => "Superheat of the vapour",
        "wash_strength_percent_vol" => "Strength of the wash",
        _ => return None,
    })
}

#[cfg(test)]
mod tests {
    use super::words;
    use crate::core::models::ALL;
    use crate::core::models::parameter::{Parameter, Takes};

    fn without(table: &[Parameter], found: &mut Vec<String>) {
        for row in table {
            if words(row.name).is_none() {
                found.push(row.name.to_owned());
            }
            if let Takes::Object(inner) | Takes::Vehicle(inner) = row.takes {
                without(inner, found);
            }
        }
    }

    #[test]
    fn every_parameter_has_its_words() {
        let mut found = Vec::new();
        for model in ALL {
            without(model.parameters, &mut found);
        }
        found.sort();
        found.dedup();
        assert!(found.is_empty(), "{found:?}");
    }
}
