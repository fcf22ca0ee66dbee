//! A product carbon footprint as one record of the open PACT data model, version 3.0.3: cradle to gate, per kilogram. The
//! field list is that of the PACT Technical Specifications 3.0.3 of 18 November 2025 (spec/v3/openapi.yaml, schemas
//! ProductFootprint and CarbonFootprint); no text of it is carried over.

pub mod checks;
pub mod decimal;
mod facts;
mod gate;
mod record;

pub use facts::{Denaturant, Geography, PactFacts, Verification};
pub use gate::RULE_SET;
pub use record::{Footprint, Record};

use crate::core::documents::assessment::Finding;
use crate::core::documents::{Assessment, Pathway, Problems};
use crate::core::domain::Book;
use crate::core::engine::carbon::CO2_PER_ETHANOL;
use crate::core::units::rounding::plain;
use decimal::Decimal;
use gate::{Gate, Parts};
use jiff::Timestamp;
use jiff::civil::Date;
use record::{FactorSource, Ratings, Verified};
use serde_json::Value;
use std::collections::BTreeSet;

/// Version of the exchange rules.
pub const VERSION: &str = "3.0.3";

/// What must be said wherever the file is offered.
pub const NOTICE: &str = "The export of product carbon footprints is derived from the PACT Technical Specifications 3.0.3. The rights in \
    that specification belong to the World Business Council for Sustainable Development, which neither made nor endorses this \
    program; its licence with disclaimer and liability (Section 5 of LICENSE.md in the repository of the specification) applies.";

/// What the record is not: stands in every record.
pub const NOT: &str = "This record is no proof under a fuel law: its boundary ends at the gate, its gas weights and sharing differ, and it \
    holds no comparator, no saving and no threshold. It was made by a program that took no conformance test of PACT. The total with \
    uptake is below zero because carbon that the crop took up is still in the fuel; it leaves when the fuel burns, outside the boundary.";

/// kg of CO2 per kg of carbon: Implementing Regulation (EU) 2022/996 Annex V (read).
const CO2_PER_CARBON: f64 = 3.664;

/// Why there is no record.
#[derive(Debug, thiserror::Error)]
pub enum PactError {
    /// The pathway cannot be worked out under the rule set of the footprint.
    #[error("the pathway cannot be worked out under {RULE_SET}")]
    Refused(Problems),
    /// A published default of a fuel law stands for a part of the chain.
    #[error("a default value of a fuel law stands for {0}; a footprint needs own stages there")]
    LawDefault(&'static str),
    /// Part of the chain before the gate is missing.
    #[error("the pathway leaves out {0}; a footprint goes from cradle to gate")]
    NotFromCradle(&'static str),
    /// Fuel is bought with terms of a fuel law.
    #[error("bought fuel carries terms of a fuel law; ask its maker for a footprint of its own")]
    Bought,
    /// The fuel comes from several works.
    #[error("the fuel comes from several works; make a pathway and a record for each")]
    SeveralWorks,
    /// No works delivers ethanol.
    #[error("no works of the pathway delivers ethanol by mass or volume")]
    NoGate,
    /// A fact is missing or impossible: field and what to do.
    #[error("{field}: {remedy}")]
    Fact {
        /// The fact.
        field: &'static str,
        /// What to do.
        remedy: &'static str,
    },
    /// The record could not be written.
    #[error("the record could not be written")]
    Json(#[from] serde_json::Error),
}

/// A record with what its own checks say of it.
#[derive(Clone, Debug)]
pub struct Written {
    /// The record.
    pub record: Record,
    /// The file: JSON, indented, UTF-8.
    pub bytes: Vec<u8>,
    /// Findings of J-01 to J-06; a blocking one means that the file must not be sent.
    pub findings: Vec<Finding>,
}

/// Works out the footprint of a pathway's product at the gate and writes the record. `assessments` are those already made
/// under fuel laws: check J-06 holds the record against them.
///
/// # Errors
/// When the chain has no cradle-to-gate part of its own, or a fact is missing.
pub fn write(
    pathway: &Pathway,
    book: &Book,
    facts: &PactFacts,
    assessments: &[&Assessment],
) -> Result<Written, PactError> {
    possible(facts)?;
    let gate = gate::gate(pathway, book)?;
    let parts = gate.parts(book, facts)?;
    let record = record(&gate, &parts, book, facts)?;
    let value = serde_json::to_value(&record)?;
    let mut bytes = serde_json::to_vec_pretty(&record)?;
    bytes.push(b'\n');
    let findings = checks::all(&value, RULE_SET, assessments, book);
    Ok(Written {
        record,
        bytes,
        findings,
    })
}

fn possible(facts: &PactFacts) -> Result<(), PactError> {
    let named = |field, list: &[String], remedy| match list.iter().all(|one| one.starts_with("urn:")) {
        true if !list.is_empty() => Ok(()),
        _ => Err(PactError::Fact { field, remedy }),
    };
    named(
        "company_ids",
        &facts.company_ids,
        "Give at least one identifier of the company, each as a URN (urn:...).",
    )?;
    named(
        "product_ids",
        &facts.product_ids,
        "Give at least one identifier of the product, each as a URN (urn:...).",
    )?;
    let fact = |holds: bool, field, remedy| match holds {
        true => Ok(()),
        false => Err(PactError::Fact { field, remedy }),
    };
    fact(
        !facts.company.trim().is_empty(),
        "company",
        "Give the name of the company.",
    )?;
    fact(
        !facts.product.trim().is_empty(),
        "product",
        "Give the trade name of the product.",
    )?;
    fact(
        !facts.standards.is_empty(),
        "standards",
        "Name at least one standard that was followed.",
    )?;
    fact(uuid::Uuid::parse_str(&facts.id).is_ok(), "id", "Give a UUID.")?;
    let percent = |x: f64| (0.0..100.0).contains(&x);
    fact(
        percent(facts.left_out.0),
        "left_out",
        "Give the share left out in %, 0 to below 100.",
    )?;
    if let Some(denaturant) = facts.denaturant {
        let holds = percent(denaturant.percent)
            && (0.0..=100.0).contains(&denaturant.carbon_percent)
            && denaturant.kg_co2e_per_kg >= 0.0
            && denaturant.kg_co2e_per_kg.is_finite();
        fact(
            holds,
            "denaturant",
            "Give mass % below 100, carbon in % and emissions of at least zero.",
        )?;
    }
    let rated = |ratings: [f64; 3]| ratings.iter().all(|rating| (1.0..=5.0).contains(rating));
    fact(
        facts.ratings.is_none_or(rated),
        "ratings",
        "Give ratings from 1 to 5, or none.",
    )
}

fn decimal(x: f64) -> Result<Decimal, PactError> {
    Decimal::of(x).ok_or(PactError::NoGate)
}

fn record(gate: &Gate, parts: &Parts, book: &Book, facts: &PactFacts) -> Result<Record, PactError> {
    Ok(Record {
        id: facts.id.clone(),
        spec_version: VERSION,
        preceding_pf_ids: facts.replaces.clone(),
        created: instant(facts.made_at),
        status: if facts.active { "Active" } else { "Deprecated" },
        company_name: facts.company.clone(),
        company_ids: facts.company_ids.clone(),
        product_description: facts.description.clone(),
        product_ids: facts.product_ids.clone(),
        product_classifications: facts.classifications.clone(),
        product_name_company: facts.product.clone(),
        comment: comment(gate, parts, facts),
        pcf: footprint(gate, parts, book, facts)?,
    })
}

fn footprint(gate: &Gate, parts: &Parts, book: &Book, facts: &PactFacts) -> Result<Footprint, PactError> {
    let added = facts
        .denaturant
        .map_or(0.0, |denaturant| denaturant.percent / 100.0);
    let ethanol = 1.0 - added;
    let denaturant = facts.denaturant.map_or((0.0, 0.0), |denaturant| {
        (
            added * denaturant.kg_co2e_per_kg,
            added * denaturant.carbon_percent / 100.0,
        )
    });
    let part = |x: f64| decimal(x * ethanol);
    let fossil = decimal(parts.fossil * ethanol + denaturant.0)?;
    // Carbon of pure ethanol from the CO2 of burning it, so that uptake and content fit to the last digit.
    let uptake = -part(parts.pure * CO2_PER_ETHANOL)?;
    let content = part(parts.pure * CO2_PER_ETHANOL / CO2_PER_CARBON)?;
    let (luc, loss, gain) = (
        part(parts.land_use_change)?,
        part(parts.land_loss)?,
        part(parts.land_gain)?,
    );
    let (methane, stored) = (part(parts.biogenic_methane)?, part(parts.stored)?);
    let excluding = [fossil, luc, loss, gain, methane, stored].into_iter().sum();
    let stores = stored != Decimal::ZERO;
    let (region, country, subdivision) = match facts.geography.clone() {
        Some(Geography::Region(region)) => (Some(region), None, None),
        Some(Geography::Country(country)) => (None, Some(country), None),
        Some(Geography::Subdivision(part)) => (None, None, Some(part)),
        None => (None, None, None),
    };
    let period = &gate.pathway.period;
    let dqi = match facts.ratings {
        Some([technology, geography, time]) => Some(Ratings {
            technology: decimal(technology)?,
            geography: decimal(geography)?,
            time: decimal(time)?,
        }),
        None => None,
    };
    let outbound = match parts.outbound.filter(|_| facts.delivers) {
        Some(kg) => Some(part(kg)?),
        None => None,
    };
    Ok(Footprint {
        declared_unit_of_measurement: "kilogram",
        declared_unit_amount: Decimal::ONE,
        product_mass_per_declared_unit: Decimal::ONE,
        reference_period_start: day(period.from),
        reference_period_end: day(period.to.tomorrow().unwrap_or(period.to)),
        geography_region_or_subregion: region,
        geography_country: country,
        geography_country_subdivision: subdivision,
        boundary_processes_description: format!(
            "Cradle to gate: {}. Transport after the gate and burning the fuel are outside.",
            parts.inside.join("; ")
        ),
        excluding_uptake: excluding,
        including_uptake: excluding + uptake,
        fossil_carbon_content: decimal(denaturant.1)?,
        biogenic_carbon_content: content,
        fossil_ghg_emissions: fossil,
        land_use_change_ghg_emissions: luc,
        land_management_fossil_ghg_emissions: part(parts.land_fossil)?,
        land_management_emissions: loss,
        land_management_removals: gain,
        uptake,
        biogenic_methane: methane,
        aircraft_ghg_emissions: Decimal::ZERO,
        packaging_emissions_included: false,
        outbound_logistics_ghg_emissions: outbound,
        storage_included: stores,
        capture_origin: stores
            .then_some("CO2 of fermentation, captured at the works and stored in the ground"),
        stored: stores.then_some(stored),
        ipcc_characterization_factors: vec!["AR6"],
        cross_sectoral_standards: facts.standards.clone(),
        exempted_emissions_percent: decimal(facts.left_out.0)?,
        exempted_emissions_description: facts.left_out.1.clone(),
        allocation_rules_description: match parts.sharing.is_empty() {
            true => "No stage shares its burden.".to_owned(),
            false => format!(
                "After sharing with co-products, by stage: {}. Residues and wastes carry nothing.",
                parts.sharing.join("; ")
            ),
        },
        secondary_emission_factor_sources: sources(&gate.pathway, book)?,
        primary_data_share: decimal(parts.primary_percent)?,
        dqi,
        verification: facts.verification.as_ref().map(|verification| Verified {
            coverage: "product level",
            provider_name: verification.by.clone(),
            completed_at: instant(verification.at),
            standard_name: verification.standard.clone(),
            comments: verification.remarks.clone(),
        }),
    })
}

fn comment(gate: &Gate, parts: &Parts, facts: &PactFacts) -> String {
    let mut lines = Vec::new();
    if gate.pathway.example {
        lines.push("EXAMPLE: invented demonstration data.".to_owned());
    }
    lines.push(NOT.to_owned());
    lines.push(format!(
        "Worked out from cradle to gate under {RULE_SET} (weights of the IPCC Sixth Assessment Report), apart from any assessment under a \
         fuel law. One kilogram as it leaves the works holds {} kg of pure ethanol before denaturing.",
        plain(crate::core::units::rounding::round_half_away(parts.pure, 6))
    ));
    if !parts.left_out.is_empty() {
        lines.push(format!("Left out: {}.", parts.left_out.join("; ")));
    }
    lines.extend(facts.remarks.iter().cloned());
    lines.join(" ")
}

/// Editions whose rows the document names.
fn sources(pathway: &Pathway, book: &Book) -> Result<Vec<FactorSource>, PactError> {
    let mut used = BTreeSet::new();
    names(&serde_json::to_value(&pathway.stages)?, book, &mut used);
    let known = used.iter().filter_map(|id| book.editions.get(id));
    Ok(known
        .map(|edition| FactorSource {
            name: edition.title.clone(),
            version: edition.id.clone(),
        })
        .collect())
}

fn names(value: &Value, book: &Book, used: &mut BTreeSet<String>) {
    match value {
        Value::String(text) if book.factor(text).is_some() => {
            used.extend(text.split_once('/').map(|(edition, _)| edition.to_owned()));
        }
        Value::Array(list) => list.iter().for_each(|value| names(value, book, used)),
        Value::Object(map) => map.values().for_each(|value| names(value, book, used)),
        _ => {}
    }
}

fn instant(at: Timestamp) -> String {
    at.strftime("%Y-%m-%dT%H:%M:%SZ").to_string()
}

fn day(day: Date) -> String {
    format!("{day}T00:00:00Z")
}
