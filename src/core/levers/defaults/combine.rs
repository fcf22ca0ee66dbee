//! Every way to put defaults and own figures together, judged. A whole default has the printed figures; every other
//! combination is assessed with its defaults in the document.

use super::{Answer, Combination, PublishedRow, Route, Subject, attempt};
use crate::core::documents::Assessment;
use crate::core::documents::assessment::ThresholdResult;
use crate::core::documents::pathway::{DefaultKey, ValueKind};
use crate::core::domain::{PathwayDefault, StageKind, Term};
use crate::core::units::rounding::plain;
use std::collections::BTreeMap;

type Defaults = BTreeMap<DefaultKey, String>;

/// The three terms that Parts D and E print.
const WHOLE: [DefaultKey; 3] = [DefaultKey::EEc, DefaultKey::EP, DefaultKey::ETd];

/// Every combination, lawful ones first, best first.
pub fn all(subject: &Subject, rows: &[PublishedRow]) -> Vec<Combination> {
    let fitting: Vec<&PublishedRow> = rows
        .iter()
        .filter(|row| row.feedstock_fits != Answer::No)
        .collect();
    let mut out: Vec<Combination> = fitting.iter().filter_map(|row| whole(subject, row)).collect();
    let processes = fitting.iter().filter(|row| row.process_fits != Answer::No);
    let choices: Vec<Option<&PublishedRow>> = std::iter::once(None)
        .chain(processes.map(|row| Some(*row)))
        .collect();
    for process in choices {
        // e_ec and e_td are alike in all rows of a feedstock; the row of the process names them where there is one.
        let Some(row) = process.or(fitting.first().copied()) else {
            out.push(mixed(subject, None, Defaults::new()));
            continue;
        };
        for growing in [false, true] {
            for transport in [None, Some(DefaultKey::ETd), Some(DefaultKey::ETdFinalFuel)] {
                let mut defaults = Defaults::new();
                let mut put = |key: DefaultKey| defaults.insert(key, row.id.clone());
                if growing {
                    put(DefaultKey::EEc);
                }
                if process.is_some() {
                    put(DefaultKey::EP);
                }
                if let Some(key) = transport {
                    put(key);
                }
                if is_new(subject, &defaults) {
                    out.push(mixed(subject, Some(row), defaults));
                }
            }
        }
    }
    out.sort_by(|a, b| {
        let saving = |c: &Combination| c.saving_percent.unwrap_or(f64::NEG_INFINITY);
        a.lawful
            .cmp(&b.lawful)
            .then(saving(b).total_cmp(&saving(a)))
            .then(a.defaults.len().cmp(&b.defaults.len()))
    });
    out
}

/// The best lawful combination, and a better one that hinges on what cannot be told.
pub fn best(sorted: &[Combination]) -> (Option<String>, Option<String>) {
    let first = |answer: Answer| {
        sorted
            .iter()
            .find(|c| c.lawful == answer && c.saving_percent.is_some())
    };
    let lawful = first(Answer::Yes);
    let hinging = first(Answer::CannotBeTold).filter(|c| match lawful {
        Some(lawful) => c.saving_percent > lawful.saving_percent,
        None => true,
    });
    (lawful.map(|c| c.id.clone()), hinging.map(|c| c.id.clone()))
}

/// Three defaults are the whole default again, unless another term stands beside them: then (c) is another sum than (a).
fn is_new(subject: &Subject, defaults: &Defaults) -> bool {
    if !WHOLE.iter().all(|key| defaults.contains_key(key)) {
        return true;
    }
    let beside = [Term::El, Term::Esca, Term::Eccs, Term::Eccr];
    subject.actual.as_ref().is_some_and(|actual| {
        beside
            .iter()
            .any(|term| actual.terms_g_co2e_per_mj.get(*term) != 0.0)
    })
}

/// (a): the printed default saving of a whole pathway.
fn whole(subject: &Subject, row: &PublishedRow) -> Option<Combination> {
    let published = subject.published(&row.id)?;
    let mut lawful = row.feedstock_fits.and(row.process_fits);
    let mut reasons = match lawful {
        Answer::Yes => Vec::new(),
        _ => row.reasons.clone(),
    };
    let land = subject
        .actual
        .as_ref()
        .map_or(0.0, |actual| actual.terms_g_co2e_per_mj.e_l);
    if land > 0.0 {
        lawful = Answer::No;
        reasons.push(format!(
            "e_l is {} g CO2e/MJ: the whole default holds only where it is zero or less (Article 31(1)(a)).",
            plain(land)
        ));
    } else if subject.pathway.not_covered.contains(&StageKind::Land) {
        lawful = lawful.and(Answer::CannotBeTold);
        reasons
            .push("Land-use change is left out, so nobody can tell whether e_l is zero or less.".to_owned());
    }
    if subject.has_stage(StageKind::Bought) {
        lawful = lawful.and(Answer::CannotBeTold);
        reasons.push(
            "The fuel is bought with stated terms; whether a default may stand in is for its supplier."
                .to_owned(),
        );
    }
    let defaults: Defaults = WHOLE.into_iter().map(|key| (key, row.id.clone())).collect();
    Some(Combination {
        id: format!("whole_default:{}", row.id),
        route: Route::WholeDefault,
        words: format!("the printed default of the whole pathway {}", row.id),
        lawful,
        reasons,
        net_g_co2e_per_mj: Some(published.default.total),
        saving_percent: Some(published.default.saving_percent),
        as_printed: true,
        terms_g_co2e_per_mj: None,
        thresholds: printed_thresholds(subject, published, &defaults),
        defaults,
    })
}

/// The minimum savings by the start of the works, against the printed saving.
fn printed_thresholds(
    subject: &Subject,
    published: &PathwayDefault,
    defaults: &Defaults,
) -> Vec<ThresholdResult> {
    let mut alone = subject.pathway.clone();
    if !subject.has_stage(StageKind::Bought) {
        alone.stages.clear();
    }
    alone.not_covered.clear();
    let Ok(assessment) = attempt(&alone, defaults, subject.rules, subject.book) else {
        return Vec::new();
    };
    let start_known = start_known(&assessment);
    let met = |threshold: ThresholdResult| ThresholdResult {
        met: start_known && published.default.saving_percent >= threshold.percent,
        ..threshold
    };
    assessment.thresholds.into_iter().map(met).collect()
}

/// Without a start every threshold is listed and none is met (finding H-01).
fn start_known(assessment: &Assessment) -> bool {
    assessment.findings.iter().all(|finding| finding.id != "H-01")
}

/// (b) without defaults, (c) with some.
fn mixed(subject: &Subject, row: Option<&PublishedRow>, defaults: Defaults) -> Combination {
    let mut lawful = Answer::Yes;
    let mut reasons = Vec::new();
    if let Some(row) = row.filter(|_| !defaults.is_empty()) {
        let fits = match defaults.contains_key(&DefaultKey::EP) {
            true => row.feedstock_fits.and(row.process_fits),
            false => row.feedstock_fits,
        };
        if fits != Answer::Yes {
            lawful = fits;
            reasons.extend(row.reasons.iter().cloned());
        }
    }
    let stated: Vec<(Term, ValueKind)> = stated(subject);
    let replaces_stated = |key: &DefaultKey| stated.iter().any(|(term, _)| *term == term_of(*key));
    if defaults.keys().any(replaces_stated) {
        lawful = lawful.and(Answer::CannotBeTold);
        reasons.push("It replaces a term that the supplier of bought fuel states; whether a default may stand in is for the supplier.".to_owned());
    }
    let kept_default = stated
        .iter()
        .any(|(term, kind)| *kind != ValueKind::Actual && !defaults.keys().any(|key| term_of(*key) == *term));
    let assessed = attempt(subject.pathway, &defaults, subject.rules, subject.book);
    let assessed = match assessed {
        Ok(assessed) => Some(assessed),
        Err(problems) => {
            lawful = Answer::No;
            reasons.extend(problems.list().iter().map(|problem| problem.detail.clone()));
            None
        }
    };
    if let Some(assessed) = assessed.as_ref().filter(|a| a.saving_percent.is_none()) {
        lawful = Answer::No;
        let partial = assessed.findings.iter().filter(|finding| finding.id == "K-06");
        reasons.extend(partial.map(|finding| finding.message.clone()));
    }
    Combination {
        id: id(&defaults),
        route: match defaults.is_empty() && !kept_default {
            true => Route::AllActual,
            false => Route::Mixed,
        },
        words: words(&defaults, kept_default),
        lawful,
        reasons,
        net_g_co2e_per_mj: assessed.as_ref().map(|a| a.net.g_co2e_per_mj),
        saving_percent: assessed.as_ref().and_then(|a| a.saving_percent),
        as_printed: false,
        terms_g_co2e_per_mj: assessed.as_ref().map(|a| a.terms_g_co2e_per_mj),
        thresholds: assessed.map_or_else(Vec::new, |a| a.thresholds),
        defaults,
    }
}

/// Terms that suppliers of bought fuel state, with the kind of each.
fn stated(subject: &Subject) -> Vec<(Term, ValueKind)> {
    let statements = subject
        .pathway
        .stages
        .iter()
        .filter_map(|stage| stage.stated.as_ref());
    statements
        .flat_map(|statement| &statement.terms)
        .filter_map(|(name, stated)| Some((Term::from_name(name)?, stated.value_kind)))
        .collect()
}

/// The term that a default replaces, or replaces part of.
pub fn term_of(key: DefaultKey) -> Term {
    match key {
        DefaultKey::EEc | DefaultKey::EEcSoilN2o => Term::Eec,
        DefaultKey::EP => Term::Ep,
        DefaultKey::ETd | DefaultKey::ETdFinalFuel => Term::Etd,
    }
}

fn id(defaults: &Defaults) -> String {
    if defaults.is_empty() {
        return "all_actual".to_owned();
    }
    let parts: Vec<String> = defaults
        .iter()
        .map(|(key, row)| format!("{}={row}", key.name()))
        .collect();
    format!("mixed:{}", parts.join(","))
}

fn words(defaults: &Defaults, kept_default: bool) -> String {
    let own = match kept_default {
        true => "figures as entered, with the supplier's defaults among them",
        false => "own figures",
    };
    if defaults.is_empty() {
        return format!("{own} for every term");
    }
    let parts: Vec<String> = defaults
        .iter()
        .map(|(key, row)| format!("the default {} of {row}", key.name()))
        .collect();
    format!("{}, {own} for the rest", parts.join(", "))
}
