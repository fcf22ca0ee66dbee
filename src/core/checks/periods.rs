//! Checks that look at days: a yield beside those of earlier periods (C-08), editions that are in force (E-06), enough months
//! of data (E-14).

use super::settings::Settings;
use super::{Subject, finding};
use crate::core::documents::assessment::{Finding, Severity};
use crate::core::documents::input::{FactorRef, Input, OneOrMany};
use crate::core::documents::pathway::{Period, Stage};
use crate::core::domain::factor::Edition;
use crate::core::domain::{Cited, Term};
use crate::core::units::rounding::{plain, significant};
use crate::core::units::{Quantity, parse_unit};
use serde_json::Value;
use std::collections::BTreeSet;

/// How many of the earlier periods count, the last ones.
const LAST: usize = 4;

/// Runs the checks.
pub fn run(subject: &Subject, findings: &mut Vec<Finding>) {
    let pathway = subject.resolved.pathway;
    for stage in &pathway.stages {
        findings.extend(stable_yield(stage, subject.settings));
    }
    for id in editions(&pathway.stages, pathway.defaults.values()) {
        if let Some(edition) = subject.book.editions.get(id) {
            findings.extend(in_force(edition, &pathway.period));
        }
    }
    let kinds = super::evidence::kinds(subject.resolved);
    let actual = |term: &Term| kinds.get(term).is_some_and(|kinds| kinds.contains("actual"));
    if let Some(needed) = &subject.resolved.rules.data_months
        && Term::ALL.iter().any(actual)
    {
        let rules = &subject.resolved.rules.title;
        findings.extend(long_enough(&pathway.name, &pathway.period, rules, needed));
    }
}

/// C-08: output per intake, as both are entered, beside the median of the last four earlier periods.
pub fn stable_yield(stage: &Stage, settings: &Settings) -> Option<Finding> {
    let mut earlier: Vec<_> = stage.earlier_periods.iter().collect();
    earlier.sort_by_key(|period| period.to);
    let last = &earlier[earlier.len().saturating_sub(LAST)..];
    let mut yields: Vec<f64> = last
        .iter()
        .filter_map(|period| Quantity::read(period.r#yield.value, &period.r#yield.unit).ok())
        .map(|quantity| quantity.value)
        .collect();
    yields.sort_by(f64::total_cmp);
    let middle = yields.len() / 2;
    let median = match yields.len() {
        0 => return None,
        n if n % 2 == 1 => yields[middle],
        _ => f64::midpoint(yields[middle - 1], yields[middle]),
    };
    let now = yield_now(stage)?;
    let moved = (now / median - 1.0).abs();
    if moved <= settings.yield_shift_percent / 100.0 {
        return None;
    }
    let unit = &last.last()?.r#yield.unit;
    let shown = |figure: f64| {
        let figure = parse_unit(unit)
            .and_then(|unit| unit.from_base(figure))
            .unwrap_or(figure);
        significant(figure, 4, 6)
    };
    let message = format!(
        "The yield of {} moved from {} to {} {unit}.",
        stage.title(),
        shown(median),
        shown(now)
    );
    let remedy = "Check both periods and give the reason.";
    Some(finding(
        "C-08",
        Severity::Warn,
        &stage.key,
        "output",
        message,
        remedy,
    ))
}

/// Output per intake in base units, as entered; intakes that count something else than the first are left out.
fn yield_now(stage: &Stage) -> Option<f64> {
    let made = Quantity::read(stage.output.flow.amount?, stage.output.flow.unit.as_deref()?).ok()?;
    let mut taken = stage
        .intakes
        .iter()
        .filter_map(|intake| Quantity::read(intake.flow.amount?, intake.flow.unit.as_deref()?).ok());
    let first = taken.next()?;
    let rest = taken.filter(|other| other.dimension == first.dimension);
    let all: f64 = first.value + rest.map(|other| other.value).sum::<f64>();
    (all > 0.0).then_some(made.value / all)
}

/// Editions that factors, models and defaults of a pathway are taken from.
fn editions<'d>(stages: &'d [Stage], defaults: impl Iterator<Item = &'d String>) -> BTreeSet<&'d str> {
    let mut found: BTreeSet<&str> = defaults.filter_map(|row| edition_of(row)).collect();
    for input in stages.iter().flat_map(|stage| &stage.inputs) {
        found.extend(input_editions(input));
    }
    found
}

fn edition_of(id: &str) -> Option<&str> {
    id.split_once('/').map(|(edition, _)| edition)
}

fn input_editions(input: &Input) -> Vec<&str> {
    let mut found = Vec::new();
    for factor in input.factor.iter().flat_map(OneOrMany::list) {
        if let FactorRef::Id(id) = factor {
            found.extend(edition_of(id));
        }
    }
    for model in super::parameters::models(input) {
        for value in model.parameters.values() {
            match value {
                Value::String(text) => found.extend(edition_of(text)),
                Value::Array(items) => {
                    found.extend(items.iter().filter_map(Value::as_str).filter_map(edition_of));
                }
                _ => {}
            }
        }
    }
    found
}

/// E-06: an edition begins no later than the period ends, and had not ended when it began.
pub fn in_force(edition: &Edition, period: &Period) -> Option<Finding> {
    let message = match (edition.valid_from, edition.valid_to) {
        (Some(from), _) if from > period.to => {
            format!("Edition {} starts on {from}, after this period.", edition.id)
        }
        (_, Some(to)) if to < period.from => {
            format!("Edition {} ended on {to}, before this period.", edition.id)
        }
        _ => return None,
    };
    let remedy = "Choose an edition of the period or give the reason.";
    Some(finding("E-06", Severity::Warn, "", "period", message, remedy))
}

/// Whole months from the first day to the last, both inside.
fn months(period: &Period) -> Option<i32> {
    let after = period.to.tomorrow().ok()?;
    let span = period.from.until((jiff::Unit::Month, after)).ok()?;
    Some(i32::from(span.get_years()) * 12 + span.get_months())
}

/// E-14: the period holds as many months as the rule set asks for an actual value.
pub fn long_enough(pathway: &str, period: &Period, rules: &str, needed: &Cited) -> Option<Finding> {
    let months = months(period)?;
    if f64::from(months) >= needed.value {
        return None;
    }
    let message = format!(
        "{pathway} rests on {months} months of data; {rules} asks for {}.",
        plain(needed.value)
    );
    let remedy = "Add the missing months or give the reason.";
    Some(finding("E-14", Severity::Warn, "", "period", message, remedy))
}

#[cfg(test)]
mod tests {
    use super::super::tests::stage;
    use super::*;
    use crate::core::documents::Amount;
    use crate::core::documents::pathway::{Flow, Intake};
    use crate::core::documents::records::EarlierPeriod;
    use crate::core::domain::{Citation, Status};
    use jiff::civil::date;

    fn period() -> Period {
        Period {
            from: date(2026, 10, 1),
            to: date(2027, 9, 30),
            kind: None,
        }
    }

    #[test]
    fn a_yield_stays_near_its_median() {
        let mut works = stage();
        works.output.flow.amount = Some(380.0);
        works.output.flow.unit = Some("L".to_owned());
        works.intakes = vec![Intake {
            from: "field".to_owned(),
            product: None,
            flow: Flow {
                amount: Some(1.0),
                unit: Some("t".to_owned()),
                ..Flow::default()
            },
        }];
        let settings = Settings::default();
        assert_eq!(stable_yield(&works, &settings), None);
        let year = |year: i16, figure: f64| EarlierPeriod {
            from: date(year, 1, 1),
            to: date(year, 12, 31),
            r#yield: Amount {
                value: figure,
                unit: "L/t".to_owned(),
            },
            note: None,
        };
        // The first one is the fifth back and does not count.
        works.earlier_periods = [
            (2021, 100.0),
            (2022, 370.0),
            (2025, 390.0),
            (2023, 375.0),
            (2024, 380.0),
        ]
        .map(|(y, figure)| year(y, figure))
        .to_vec();
        assert_eq!(stable_yield(&works, &settings), None);
        works.output.flow.amount = Some(340.0);
        let found = stable_yield(&works, &settings).unwrap();
        assert_eq!(found.id, "C-08");
        assert!(
            found.message.contains("from 377.5 to 340.0 L/t"),
            "{}",
            found.message
        );
    }

    #[test]
    fn an_edition_is_in_force() {
        let mut edition = Edition {
            id: "own".to_owned(),
            title: "Own".to_owned(),
            citation: Citation {
                source: "own".to_owned(),
                status: Status::Own,
            },
            note: None,
            valid_from: Some(date(2027, 9, 30)),
            valid_to: None,
            validity_source: None,
            factors: Default::default(),
            aliases: Default::default(),
            fuel_splits: Default::default(),
            pathways: Default::default(),
        };
        assert_eq!(in_force(&edition, &period()), None);
        edition.valid_from = Some(date(2027, 10, 1));
        assert!(
            in_force(&edition, &period())
                .unwrap()
                .message
                .contains("starts on 2027-10-01")
        );
        edition.valid_from = None;
        edition.valid_to = Some(date(2026, 10, 1));
        assert_eq!(in_force(&edition, &period()), None);
        edition.valid_to = Some(date(2026, 9, 30));
        assert!(
            in_force(&edition, &period())
                .unwrap()
                .message
                .contains("ended on 2026-09-30")
        );
    }

    #[test]
    fn enough_months() {
        let needed = Cited {
            value: 12.0,
            unit: "months".to_owned(),
            source: "own".to_owned(),
            status: Status::Own,
            note: None,
        };
        assert_eq!(long_enough("Wheat", &period(), "Own", &needed), None);
        let short = Period {
            to: date(2027, 9, 29),
            ..period()
        };
        let found = long_enough("Wheat", &short, "Own", &needed).unwrap();
        assert!(found.message.contains("on 11 months"), "{}", found.message);
    }
}
