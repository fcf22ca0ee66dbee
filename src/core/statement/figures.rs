//! The figures that a statement states, worked out from the assessment, the plan behind it and the declared facts.

use super::energy::energy;
use crate::core::checks::evidence::kinds;
use crate::core::documents::statement::facts::IlucGroup;
use crate::core::documents::statement::figures::{
    Biogenic, ConversionFactor, DataQuality, Derived, Figures, HeatingValueBasis, SharedProduct,
    SharingStage, TermLine, Uncertainty, UncertaintyRange, WithMargin,
};
use crate::core::documents::{Assessment, StatementFacts};
use crate::core::domain::{Cited, RuleSet, StageKind, Term};
use crate::core::engine::Resolved;
use crate::core::units::rounding::{plain, plain_fixed};
use std::collections::{BTreeMap, BTreeSet};

/// Carbon of pure ethanol, kg/kg: two of 12.011 in 46.069 g/mol (standard atomic weights, abridged).
const CARBON_OF_ETHANOL: f64 = 2.0 * 12.011 / 46.069;

/// Works the figures out.
pub fn figures(
    facts: &StatementFacts,
    assessment: &Assessment,
    plan: &Resolved,
    range: Option<UncertaintyRange>,
) -> Figures {
    let rules = plan.rules;
    let net = assessment.net.g_co2e_per_mj;
    let energy = energy(facts, rules);
    let derived = Derived {
        kg_co2e_per_kg: net * rules.ethanol_lhv.value / 1000.0,
        kg_co2e_per_l: rules
            .consignment_lhv_volume
            .as_ref()
            .map(|fixed| net * fixed.value / 1000.0),
        consignment_t_co2e: energy.as_ref().map(|energy| net * energy.energy_mj / 1e6),
    };
    Figures {
        declared_unit: declared_unit(assessment),
        net_g_co2e_per_mj: net,
        gases_g_per_mj: assessment.net.gases_g_per_mj,
        comparator_g_co2e_per_mj: assessment.comparator_g_co2e_per_mj,
        comparator_word: rules.comparator_word.clone(),
        saving_percent: assessment.saving_percent,
        thresholds: assessment.thresholds.clone(),
        terms: terms(assessment, rules, &kinds(plan)),
        iluc_g_per_mj: facts.iluc_group.and_then(|group| iluc(group, rules)),
        with_margin: facts.margin_g_per_mj.map(|margin| WithMargin {
            margin_g_per_mj: margin,
            g_co2e_per_mj: net + margin,
        }),
        heating_value: HeatingValueBasis {
            heating_value_basis: "LHV".to_owned(),
            arithmetic: rules.ethanol_lhv.clone(),
            water: rules.ethanol_water.words().to_owned(),
            consignment_mass: rules.consignment_lhv_mass.clone(),
            consignment_volume: rules.consignment_lhv_volume.clone(),
        },
        energy,
        derived,
        allocation: allocation(assessment, plan),
        conversion_factor: conversion(assessment, plan),
        biogenic: Biogenic {
            uptake_g_co2_per_mj: assessment.carbon.uptake_g_co2_per_mj,
            fermentation_g_co2_per_mj: assessment.carbon.fermentation_g_co2_per_mj,
            combustion_g_co2_per_mj: assessment.carbon.combustion_g_co2_per_mj,
            other_g_co2_per_mj: assessment.carbon.other_biogenic_g_co2_per_mj,
            content_kg_c_per_kg: CARBON_OF_ETHANOL,
        },
        data_quality: DataQuality {
            primary_data_percent: assessment.primary_data_percent,
            estimated_percent: assessment.estimated_percent,
        },
        uncertainty: Uncertainty {
            text: uncertainty(facts, range),
            range,
        },
        e_u_not_counted_g_co2e_per_mj: assessment.memo.e_u_not_counted_g_co2e_per_mj,
    }
}

fn declared_unit(assessment: &Assessment) -> String {
    match assessment.basis.as_str() {
        "to the wheel" => "1 MJ of ethanol, lower heating value, from the field to the wheel".to_owned(),
        basis => format!("1 MJ of ethanol, lower heating value, {basis}"),
    }
}

fn terms(assessment: &Assessment, rules: &RuleSet, kinds: &BTreeMap<Term, BTreeSet<&str>>) -> Vec<TermLine> {
    let line = |term: Term| {
        let value = assessment.terms_g_co2e_per_mj.get(term);
        let found: Vec<String> = kinds
            .get(&term)
            .into_iter()
            .flatten()
            .map(|kind| (*kind).to_owned())
            .collect();
        let value_kind = match found.is_empty() {
            _ if rules.leaves_out(term) => "zero by the rule".to_owned(),
            false => found.join(" and "),
            true if matches!(term, Term::Esca | Term::Eccs | Term::Eccr) => "not claimed".to_owned(),
            true => "nothing counted".to_owned(),
        };
        TermLine {
            term,
            what: term.words().to_owned(),
            g_co2e_per_mj: value,
            value_kinds: if rules.leaves_out(term) { Vec::new() } else { found },
            value_kind,
        }
    };
    Term::ALL.into_iter().map(line).collect()
}

/// The published estimate of a group; none where the rule set has none.
pub fn iluc(group: IlucGroup, rules: &RuleSet) -> Option<Cited> {
    rules.limit(&format!("iluc_{}", group.name())).cloned()
}

fn allocation(assessment: &Assessment, plan: &Resolved) -> Vec<SharingStage> {
    let shared = assessment
        .stages
        .iter()
        .filter(|stage| !stage.products.is_empty());
    let found = shared.filter_map(|stage| {
        let planned = plan
            .stages
            .iter()
            .find(|planned| planned.document.key == stage.key)?;
        let product = |product: &crate::core::documents::assessment::ProductShare| SharedProduct {
            product: product.product.clone(),
            name: product.name.clone(),
            share: product.share,
        };
        Some(SharingStage {
            stage: stage.key.clone(),
            name: stage.name.clone(),
            method: planned.allocation.unwrap_or(plan.rules.allocation),
            products: stage.products.iter().map(product).collect(),
        })
    });
    found.collect()
}

/// Fuel per feedstock, by what leaves the fields for a MJ of fuel; none where the fields tell no mass.
fn conversion(assessment: &Assessment, plan: &Resolved) -> Option<ConversionFactor> {
    let mut kg_per_mj = 0.0;
    for (index, stage) in plan.stages.iter().enumerate() {
        if stage.kind() != StageKind::Cultivation || !plan.order.contains(&index) {
            continue;
        }
        let output = stage.products.first()?;
        let document = stage.document.output.flow.amount.filter(|amount| *amount > 0.0)?;
        let demand = assessment
            .stages
            .iter()
            .find(|found| found.key == stage.document.key)?
            .demand
            .amount;
        kg_per_mj += output.flow.wet_kg? * demand / document;
    }
    let fuel_kg_per_mj = 1.0 / plan.rules.ethanol_lhv.value;
    let factor = fuel_kg_per_mj / kg_per_mj;
    (kg_per_mj > 0.0 && factor.is_finite()).then(|| ConversionFactor {
        kg_fuel_per_kg_feedstock: factor,
        feedstock: plan.pathway.feedstock.clone(),
        feedstock_kg_per_mj: kg_per_mj,
    })
}

fn uncertainty(facts: &StatementFacts, range: Option<UncertaintyRange>) -> String {
    let note = facts.uncertainty_note.as_deref();
    match range {
        Some(range) => format!(
            "{} to {} g CO2e/MJ in {} of 100 draws, seed {}.{}",
            plain_fixed(range.low_g_co2e_per_mj, 1),
            plain_fixed(range.high_g_co2e_per_mj, 1),
            plain(range.coverage_percent),
            range.seed,
            note.map_or(String::new(), |note| format!(" {note}"))
        ),
        None => match note {
            Some(note) => format!("No range was worked out. {note}"),
            None => "No range was worked out.".to_owned(),
        },
    }
}
