//! The record as it is written. Names and types follow PACT Technical Specifications 3.0.3, objects ProductFootprint and
//! CarbonFootprint; words are ours.

use super::decimal::Decimal;
use serde::Serialize;

/// One footprint record.
#[derive(Clone, Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub struct Record {
    /// Key of the record.
    pub id: String,
    /// Version of the exchange rules.
    pub spec_version: &'static str,
    /// Records this one replaces.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub preceding_pf_ids: Vec<String>,
    /// When it was made, UTC.
    pub created: String,
    /// `Active` or `Deprecated`.
    pub status: &'static str,
    /// Who answers for it.
    pub company_name: String,
    /// Identifiers of the company.
    pub company_ids: Vec<String>,
    /// The product in words.
    pub product_description: String,
    /// Identifiers of the product.
    pub product_ids: Vec<String>,
    /// Class codes of the product.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub product_classifications: Vec<String>,
    /// Trade name.
    pub product_name_company: String,
    /// What a reader must know, and what the record is not.
    pub comment: String,
    /// The footprint.
    pub pcf: Footprint,
}

/// The footprint of one declared unit.
#[derive(Clone, Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub struct Footprint {
    /// Always `kilogram` here.
    pub declared_unit_of_measurement: &'static str,
    /// One.
    pub declared_unit_amount: Decimal,
    /// One.
    pub product_mass_per_declared_unit: Decimal,
    /// First instant of the data.
    pub reference_period_start: String,
    /// First instant after the data.
    pub reference_period_end: String,
    /// Region of the United Nations.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub geography_region_or_subregion: Option<String>,
    /// Country.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub geography_country: Option<String>,
    /// Part of a country.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub geography_country_subdivision: Option<String>,
    /// What is inside the boundary.
    pub boundary_processes_description: String,
    /// Everything but the carbon held in the product, kg CO2e.
    #[serde(rename = "pcfExcludingBiogenicUptake")]
    pub excluding_uptake: Decimal,
    /// With it, kg CO2e.
    #[serde(rename = "pcfIncludingBiogenicUptake")]
    pub including_uptake: Decimal,
    /// kg C.
    pub fossil_carbon_content: Decimal,
    /// kg C.
    pub biogenic_carbon_content: Decimal,
    /// kg CO2e; holds the part from managing land.
    pub fossil_ghg_emissions: Decimal,
    /// kg CO2e.
    pub land_use_change_ghg_emissions: Decimal,
    /// The part of the fossil emissions that comes from managing land, kg CO2e: for information.
    pub land_management_fossil_ghg_emissions: Decimal,
    /// kg CO2e.
    #[serde(rename = "landManagementBiogenicCO2Emissions")]
    pub land_management_emissions: Decimal,
    /// kg CO2e, at most zero.
    #[serde(rename = "landManagementBiogenicCO2Removals")]
    pub land_management_removals: Decimal,
    /// CO2 held in the product, kg, at most zero.
    #[serde(rename = "biogenicCO2Uptake")]
    pub uptake: Decimal,
    /// Methane of biological origin, kg CO2e.
    #[serde(rename = "biogenicNonCO2Emissions")]
    pub biogenic_methane: Decimal,
    /// kg CO2e.
    pub aircraft_ghg_emissions: Decimal,
    /// Bulk ethanol has none.
    pub packaging_emissions_included: bool,
    /// Transport to the customer that the issuer pays, kg CO2e: in no total.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub outbound_logistics_ghg_emissions: Option<Decimal>,
    /// True where stored CO2 counts.
    #[serde(rename = "ccsTechnologicalCO2CaptureIncluded")]
    pub storage_included: bool,
    /// Where captured CO2 comes from and goes.
    #[serde(
        rename = "technologicalCO2CaptureOrigin",
        skip_serializing_if = "Option::is_none"
    )]
    pub capture_origin: Option<&'static str>,
    /// Fermentation CO2 stored, kg, at most zero.
    #[serde(rename = "technologicalCO2Removals", skip_serializing_if = "Option::is_none")]
    pub stored: Option<Decimal>,
    /// Reports that the gas weights come from.
    pub ipcc_characterization_factors: Vec<&'static str>,
    /// Standards followed.
    pub cross_sectoral_standards: Vec<String>,
    /// %.
    pub exempted_emissions_percent: Decimal,
    /// Why.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub exempted_emissions_description: Option<String>,
    /// How burdens were shared.
    pub allocation_rules_description: String,
    /// Sources of published factors.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub secondary_emission_factor_sources: Vec<FactorSource>,
    /// %.
    pub primary_data_share: Decimal,
    /// Ratings of the data.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub dqi: Option<Ratings>,
    /// There only where it was verified.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub verification: Option<Verified>,
}

/// A source of published factors.
#[derive(Clone, Debug, Serialize)]
pub struct FactorSource {
    /// Its title.
    pub name: String,
    /// Its edition.
    pub version: String,
}

/// Ratings of the data, 1 to 5.
#[derive(Clone, Debug, Serialize)]
pub struct Ratings {
    /// Fit of technology.
    #[serde(rename = "technologicalDQR")]
    pub technology: Decimal,
    /// Fit of place.
    #[serde(rename = "geographicalDQR")]
    pub geography: Decimal,
    /// Fit of time.
    #[serde(rename = "temporalDQR")]
    pub time: Decimal,
}

/// A verification.
#[derive(Clone, Debug, Serialize)]
#[serde(rename_all = "camelCase")]
pub struct Verified {
    /// What was verified.
    pub coverage: &'static str,
    /// By whom.
    pub provider_name: String,
    /// When, UTC.
    pub completed_at: String,
    /// By which standard.
    pub standard_name: String,
    /// Level and materiality.
    pub comments: String,
}
