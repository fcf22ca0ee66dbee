//! Which published pathways belong to a chain: by the feedstock that enters the works, and by its process heat.

use super::heat::{Fuel, HeatSource, Works};
use super::{Answer, PublishedRow};
use crate::core::documents::pathway::{Pathway, Stage};
use crate::core::domain::{PathwayDefault, ProcessHeat, Term};
use std::collections::BTreeSet;

/// Judges one published pathway.
pub fn judge(row: &PathwayDefault, pathway: &Pathway, works: &Works) -> PublishedRow {
    let mut reasons = Vec::new();
    let feedstock = feedstock(row, pathway, &mut reasons);
    let process = match feedstock {
        Answer::No => Answer::No,
        _ => process(row, works, &mut reasons),
    };
    PublishedRow {
        id: row.id.clone(),
        feedstock: row.feedstock.clone(),
        description: row.description.clone(),
        feedstock_fits: feedstock,
        process_fits: process,
        reasons,
        default_total_g_co2e_per_mj: row.default.total,
        default_saving_percent: row.default.saving_percent,
        typical_total_g_co2e_per_mj: row.typical.total,
        typical_saving_percent: row.typical.saving_percent,
        source: row.citation.source.clone(),
        status: row.citation.status,
    }
}

fn feedstock(row: &PathwayDefault, pathway: &Pathway, reasons: &mut Vec<String>) -> Answer {
    let fits = |material: &str| row.feedstock_materials.iter().any(|m| m == material);
    if !fits(&pathway.feedstock) {
        reasons.push(format!(
            "It is for {}, not for {}.",
            row.feedstock, pathway.feedstock
        ));
        return Answer::No;
    }
    let others: Vec<&str> = entering(pathway).into_iter().filter(|m| !fits(m)).collect();
    if others.is_empty() {
        return Answer::Yes;
    }
    reasons.push(format!(
        "The works also takes {}; a published pathway is for one feedstock.",
        others.join(", ")
    ));
    Answer::CannotBeTold
}

/// Materials that cross from field, store or haul into the works.
fn entering(pathway: &Pathway) -> BTreeSet<&str> {
    let find = |key: &str| pathway.stages.iter().find(|stage| stage.key == key);
    let product = |stage: &'_ Stage, key: Option<&str>| -> Option<usize> {
        key.and_then(|key| stage.co_products.iter().position(|p| p.key == key))
    };
    let mut found = BTreeSet::new();
    for taker in pathway
        .stages
        .iter()
        .filter(|stage| stage.kind.term() == Term::Ep)
    {
        for intake in &taker.intakes {
            let Some(from) = find(&intake.from).filter(|stage| stage.kind.is_before_works()) else {
                continue;
            };
            found.insert(match product(from, intake.product.as_deref()) {
                Some(index) => from.co_products[index].material.as_str(),
                None => from.output.material.as_str(),
            });
        }
    }
    found
}

fn process(row: &PathwayDefault, works: &Works, reasons: &mut Vec<String>) -> Answer {
    let mut answer = digestion(row, works, reasons);
    let Some(wanted) = row.process_heat else {
        reasons.push("The row names no process fuel.".to_owned());
        return answer;
    };
    if works.sources.is_empty() {
        reasons.push("No input tells where the process heat comes from.".to_owned());
        return answer.and(Answer::CannotBeTold);
    }
    let before = reasons.len();
    let has_boiler = works
        .sources
        .iter()
        .any(|source| source.heat == Some(ProcessHeat::Boiler));
    for source in &works.sources {
        let said = heat(wanted, source, has_boiler, reasons);
        answer = answer.and(said).and(fuel(row, source, reasons));
    }
    if reasons.len() == before {
        let all = works.sources.iter().map(|source| source.place.as_str());
        reasons.push(format!(
            "All process heat that the document names is as in the row: {}.",
            all.collect::<Vec<_>>().join(", ")
        ));
    }
    answer
}

fn heat(wanted: ProcessHeat, source: &HeatSource, has_boiler: bool, reasons: &mut Vec<String>) -> Answer {
    let place = &source.place;
    let (answer, reason) = match (wanted, source.heat) {
        (_, None) => (
            Answer::CannotBeTold,
            format!("{} {}.", capital(place), source.untold),
        ),
        (ProcessHeat::Chp, Some(ProcessHeat::Boiler)) => (
            Answer::No,
            format!(
                "{} is a boiler: a row of combined heat and power holds only where that makes all process heat (footnote to Annex V Parts A and D).",
                capital(place)
            ),
        ),
        (ProcessHeat::Boiler, Some(ProcessHeat::Chp)) if has_boiler => (
            Answer::CannotBeTold,
            format!(
                "{} is combined heat and power beside a boiler; the Directive does not say whether the boiler's row holds.",
                capital(place)
            ),
        ),
        (ProcessHeat::Boiler, Some(ProcessHeat::Chp)) => (
            Answer::No,
            format!(
                "{} is combined heat and power; the row is for an ordinary boiler.",
                capital(place)
            ),
        ),
        (ProcessHeat::Chp, Some(ProcessHeat::Chp)) | (ProcessHeat::Boiler, Some(ProcessHeat::Boiler)) => {
            return Answer::Yes;
        }
    };
    reasons.push(reason);
    answer
}

fn fuel(row: &PathwayDefault, source: &HeatSource, reasons: &mut Vec<String>) -> Answer {
    let place = capital(&source.place);
    let printed = row.process_fuel.as_str();
    let (answer, reason) = match (source.fuel, printed) {
        (Fuel::NaturalGas, "natural gas") | (Fuel::Lignite, "lignite") => return Answer::Yes,
        (Fuel::Biogas, _) if row.stillage_digested == Some(true) => return Answer::Yes,
        (Fuel::Untold, _) if source.heat.is_none() => return Answer::CannotBeTold,
        (Fuel::Untold, _) => (
            Answer::CannotBeTold,
            format!("{place} burns a fuel of its own; the row is for {printed}."),
        ),
        (Fuel::Wood, "forest residues") => (
            Answer::CannotBeTold,
            format!("{place} burns wood; whether it is forest residue the document does not tell."),
        ),
        (Fuel::Biogas, _) if row.stillage_digested.is_none() => (
            Answer::CannotBeTold,
            format!("{place} burns biogas; the row is for {printed} and says nothing of biogas."),
        ),
        _ => (Answer::No, format!("{place} burns another fuel than {printed}.")),
    };
    reasons.push(reason);
    answer
}

fn digestion(row: &PathwayDefault, works: &Works, reasons: &mut Vec<String>) -> Answer {
    match (row.stillage_digested, works.digestion) {
        (Some(true), false) => {
            reasons.push("Nothing shows that the stillage is digested to biogas.".to_owned());
            Answer::No
        }
        (Some(false), true) => {
            reasons.push("Biogas is made or burnt; the row is for stillage that is not digested.".to_owned());
            Answer::No
        }
        _ => Answer::Yes,
    }
}

fn capital(text: &str) -> String {
    let mut letters = text.chars();
    match letters.next() {
        Some(first) => first.to_uppercase().chain(letters).collect(),
        None => String::new(),
    }
}
