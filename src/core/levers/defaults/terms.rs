//! The table by term: the own figure, the published values beside it, and the difference.

use super::combine::term_of;
use super::{Answer, Combination, PublishedRow, PublishedValue, Subject, TermRow, attempt};
use crate::core::documents::Assessment;
use crate::core::documents::input::OneOrMany;
use crate::core::documents::pathway::DefaultKey;
use crate::core::domain::factor::TermValues;
use crate::core::domain::{PathwayDefault, Term};
use std::collections::{BTreeMap, BTreeSet};

/// The published terms and their parts, then the terms that are always own figures.
pub fn rows(subject: &Subject, rows: &[PublishedRow], best: Option<&Combination>) -> Vec<TermRow> {
    let keys = [
        DefaultKey::EEc,
        DefaultKey::EEcSoilN2o,
        DefaultKey::EP,
        DefaultKey::ETd,
        DefaultKey::ETdFinalFuel,
    ];
    let own_only = [Term::El, Term::Eu, Term::Esca, Term::Eccs, Term::Eccr];
    let mut out: Vec<TermRow> = keys
        .into_iter()
        .map(|key| published(subject, rows, key, best))
        .collect();
    out.extend(own_only.into_iter().map(|term| TermRow {
        term: term.name().to_owned(),
        part_of: None,
        words: term.words().to_owned(),
        actual_g_co2e_per_mj: subject.actual.as_ref().map(|a| a.terms_g_co2e_per_mj.get(term)),
        actual_note: without_stages(subject),
        published: Vec::new(),
        difference_g_co2e_per_mj: None,
    }));
    out
}

fn published(
    subject: &Subject,
    rows: &[PublishedRow],
    key: DefaultKey,
    best: Option<&Combination>,
) -> TermRow {
    let values: Vec<PublishedValue> = rows
        .iter()
        .filter(|row| row.feedstock_fits != Answer::No)
        .filter_map(|row| {
            let published = subject.published(&row.id)?;
            Some(PublishedValue {
                row: row.id.clone(),
                default_g_co2e_per_mj: value(&published.default, key)?,
                typical_g_co2e_per_mj: value(&published.typical, key)?,
                may_serve: match key {
                    DefaultKey::EP => row.feedstock_fits.and(row.process_fits),
                    DefaultKey::EEcSoilN2o => Answer::No,
                    DefaultKey::EEc | DefaultKey::ETd | DefaultKey::ETdFinalFuel => row.feedstock_fits,
                },
            })
        })
        .collect();
    let (actual, note) = actual(subject, key, values.first());
    let named = best.and_then(|best| best.defaults.get(&key));
    let beside = values
        .iter()
        .find(|value| Some(&value.row) == named)
        .or(values.first());
    let term = term_of(key);
    let is_part = key.name() != term.name();
    TermRow {
        term: key.name().to_owned(),
        part_of: is_part.then(|| term.name().to_owned()),
        words: match key {
            DefaultKey::EEcSoilN2o => "of it, nitrous oxide of the soil".to_owned(),
            DefaultKey::ETdFinalFuel => "of it, the finished fuel alone".to_owned(),
            DefaultKey::EEc | DefaultKey::EP | DefaultKey::ETd => term.words().to_owned(),
        },
        actual_g_co2e_per_mj: actual,
        actual_note: note,
        difference_g_co2e_per_mj: actual
            .zip(beside)
            .map(|(own, beside)| own - beside.default_g_co2e_per_mj),
        published: values,
    }
}

/// A value of a published pathway by key, g CO2e/MJ; none where it is not printed apart.
fn value(values: &TermValues, key: DefaultKey) -> Option<f64> {
    match key {
        DefaultKey::EEc => Some(values.e_ec),
        DefaultKey::EEcSoilN2o => values.e_ec_soil_n2o,
        DefaultKey::EP => Some(values.e_p),
        DefaultKey::ETd => Some(values.e_td),
        DefaultKey::ETdFinalFuel => values.e_td_final_fuel,
    }
}

fn actual(subject: &Subject, key: DefaultKey, first: Option<&PublishedValue>) -> (Option<f64>, String) {
    let Some(assessment) = &subject.actual else {
        return (None, without_stages(subject));
    };
    let own = assessment.terms_g_co2e_per_mj.get(term_of(key));
    match key {
        DefaultKey::EEcSoilN2o => match soil_n2o(subject, assessment) {
            Some(soil) => (Some(soil), String::new()),
            None => (
                None,
                "no input uses a soil N2O model, so the part is not known apart".to_owned(),
            ),
        },
        DefaultKey::ETdFinalFuel => {
            let published: Option<&PathwayDefault> = first.and_then(|v| subject.published(&v.row));
            match published.and_then(|published| final_fuel(subject, published, own)) {
                Some(part) => (Some(part), String::new()),
                None => (
                    None,
                    "no published row for this feedstock divides the term".to_owned(),
                ),
            }
        }
        DefaultKey::EEc | DefaultKey::EP | DefaultKey::ETd => (Some(own), left_out(subject, term_of(key))),
    }
}

/// What the engine replaces when the default of the finished fuel stands in: the own figure of that part.
fn final_fuel(subject: &Subject, published: &PathwayDefault, own: f64) -> Option<f64> {
    let defaults = BTreeMap::from([(DefaultKey::ETdFinalFuel, published.id.clone())]);
    let changed = attempt(subject.pathway, &defaults, subject.rules, subject.book).ok()?;
    let rest = changed.terms_g_co2e_per_mj.e_td - published.default.e_td_final_fuel?;
    Some(own - rest)
}

fn soil_n2o(subject: &Subject, assessment: &Assessment) -> Option<f64> {
    let models: BTreeSet<(&str, &str)> = subject
        .pathway
        .stages
        .iter()
        .flat_map(|stage| stage.inputs.iter().map(move |input| (stage.key.as_str(), input)))
        .filter(|(_, input)| {
            let models = input.model.iter().flat_map(OneOrMany::list);
            models.into_iter().any(|model| model.kind == "soil_n2o")
        })
        .map(|(stage, input)| (stage, input.key.as_str()))
        .collect();
    (!models.is_empty()).then(|| {
        let rows = assessment
            .stages
            .iter()
            .flat_map(|stage| stage.inputs.iter().map(move |row| (stage.key.as_str(), row)));
        rows.filter(|(stage, row)| models.contains(&(*stage, row.key.as_str())))
            .map(|(_, row)| row.g_co2e_per_mj)
            .sum()
    })
}

/// Says so where part of a term is left out of the own figures.
fn left_out(subject: &Subject, term: Term) -> String {
    let kinds: Vec<&str> = subject
        .pathway
        .not_covered
        .iter()
        .filter(|kind| kind.term() == term)
        .map(|kind| kind.words())
        .collect();
    match kinds.is_empty() {
        true => String::new(),
        false => format!("leaves out {}", kinds.join(", ")),
    }
}

fn without_stages(subject: &Subject) -> String {
    match subject.actual {
        Some(_) => String::new(),
        None => "the pathway has no stages, so it has no own figures".to_owned(),
    }
}
