//! Published default values in place of a term or a part of one. Directive (EU) 2018/2001 Article 31(1)(c): the
//! *default* values of Annex V Parts D and E, never the typical ones.

use super::resolved::{DefaultTerm, Resolved};
use crate::core::documents::pathway::{DefaultKey, Pathway};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::{Place, nearest};
use crate::core::domain::{Book, RuleSet, StageKind, Term};

/// Finds the default values a pathway asks for.
pub fn find(pathway: &Pathway, rules: &RuleSet, book: &Book, problems: &mut Problems) -> Vec<DefaultTerm> {
    let root = Place::ROOT;
    let at = root.field("defaults");
    for (whole, part) in [
        (DefaultKey::EEc, DefaultKey::EEcSoilN2o),
        (DefaultKey::ETd, DefaultKey::ETdFinalFuel),
    ] {
        if pathway.defaults.contains_key(&whole) && pathway.defaults.contains_key(&part) {
            let detail = format!("{} is already inside {}.", part.name(), whole.name());
            problems.add(at.field(part.name()), detail, "Keep one of the two.");
        }
    }
    if pathway.stages.is_empty() {
        for key in [DefaultKey::EEc, DefaultKey::EP, DefaultKey::ETd] {
            if !pathway.defaults.contains_key(&key) {
                let detail = format!(
                    "A pathway without stages needs the default value of {}.",
                    key.name()
                );
                problems.add(at.field(key.name()), detail, "Add it, or add stages.");
            }
        }
    }
    let mut out = Vec::new();
    for (key, row) in &pathway.defaults {
        let place = at.field(key.name());
        let Some(edition) = &rules.default_values else {
            let detail = format!("{} takes no published default values.", rules.id);
            problems.add(place, detail, "Enter the stages, or choose another rule set.");
            continue;
        };
        let Some(published) = book.pathway_default(row) else {
            let known = book
                .editions
                .get(edition)
                .into_iter()
                .flat_map(|edition| edition.pathways.values().map(|pathway| pathway.id.as_str()))
                .collect::<Vec<_>>();
            let remedy = match nearest(row, known.iter().copied()) {
                Some(near) => format!("Perhaps \"{near}\" was meant."),
                None => format!("Choose one of: {}.", known.join(", ")),
            };
            problems.add(place, format!("There is no published pathway \"{row}\"."), remedy);
            continue;
        };
        if row.split_once('/').is_none_or(|(found, _)| found != edition) {
            let detail = format!("\"{row}\" is no default value under {}.", rules.id);
            problems.add(place, detail, format!("Choose a row of {edition}."));
            continue;
        }
        if !published.feedstock_materials.contains(&pathway.feedstock) {
            let detail = format!(
                "\"{row}\" is for {}, not for {}.",
                published.feedstock, pathway.feedstock
            );
            let remedy = format!("Choose a row for {}, or use own figures.", pathway.feedstock);
            problems.add(place, detail, remedy);
            continue;
        }
        let value = published.default;
        let (term, g_per_mj) = match key {
            DefaultKey::EEc => (Term::Eec, Some(value.e_ec)),
            DefaultKey::EEcSoilN2o => (Term::Eec, value.e_ec_soil_n2o),
            DefaultKey::EP => (Term::Ep, Some(value.e_p)),
            DefaultKey::ETd => (Term::Etd, Some(value.e_td)),
            DefaultKey::ETdFinalFuel => (Term::Etd, value.e_td_final_fuel),
        };
        let Some(g_per_mj) = g_per_mj else {
            let detail = format!("\"{row}\" prints no {} apart from its term.", key.name());
            problems.add(place, detail, "Use the whole term, or own figures.");
            continue;
        };
        let source = published.citation.source.clone();
        out.push(DefaultTerm {
            key: key.name(),
            term,
            g_per_mj,
            row: row.clone(),
            source,
        });
    }
    out
}

/// Marks every input that a default value replaces.
pub fn replace(resolved: &mut Resolved) {
    let keys: Vec<(&'static str, Term)> = resolved
        .defaults
        .iter()
        .map(|default| (default.key, default.term))
        .collect();
    for (key, term) in keys {
        let final_fuel = key == DefaultKey::ETdFinalFuel.name();
        let soil_only = key == DefaultKey::EEcSoilN2o.name();
        let after_works = if final_fuel {
            after_last_works(resolved)
        } else {
            Vec::new()
        };
        for (j, stage) in resolved.stages.iter_mut().enumerate() {
            if final_fuel && !after_works[j] {
                continue;
            }
            for input in stage.inputs.iter_mut().filter(|input| input.term == Some(term)) {
                if !soil_only || input.is_soil_n2o {
                    input.replaced = Some(format!("replaced by default {key}"));
                }
            }
        }
    }
}

/// Fuel transport that no processing or capture stage follows.
fn after_last_works(resolved: &Resolved) -> Vec<bool> {
    let mut works_follow = vec![false; resolved.stages.len()];
    for &j in resolved.order.iter().rev() {
        let stage = &resolved.stages[j];
        let is_works = stage.kind().term() == Term::Ep || stage.kind() == StageKind::Capture;
        for intake in &stage.intakes {
            works_follow[intake.from] |= is_works || works_follow[j];
        }
    }
    let fuel_transport = |j: usize| resolved.stages[j].kind() == StageKind::FuelTransport;
    (0..works_follow.len())
        .map(|j| fuel_transport(j) && !works_follow[j])
        .collect()
}
