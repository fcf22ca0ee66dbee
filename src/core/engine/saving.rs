//! The saving against the fossil baseline, and the minimum savings by the plant's start. Directive (EU) 2018/2001
//! Annex V Part C point 3(a) and Article 29(10): compared unrounded.

use super::resolved::Resolved;
use crate::core::documents::assessment::{Finding, Severity, ThresholdResult};
use crate::core::documents::pathway::DefaultKey;
use crate::core::domain::rule_set::Threshold;
use crate::core::domain::{StageKind, Term};
use jiff::civil::Date;

/// How far the figure reaches, and what keeps a saving from being printed.
pub struct Reach {
    /// `to the wheel`, or `to the gate of ...`.
    pub basis: String,
    /// What is left out; empty when nothing is.
    pub left_out: Vec<String>,
}

/// Works the reach out.
pub fn reach(resolved: &Resolved) -> Reach {
    let pathway = resolved.pathway;
    let mut left_out: Vec<String> = pathway
        .not_covered
        .iter()
        .map(|kind| kind.words().to_owned())
        .collect();
    let has = |kind: StageKind| resolved.stages.iter().any(|stage| stage.kind() == kind);
    let default = |key: DefaultKey| pathway.defaults.contains_key(&key);
    let growing = has(StageKind::Cultivation) || has(StageKind::Bought) || default(DefaultKey::EEc);
    if !growing && !pathway.not_covered.contains(&StageKind::Cultivation) {
        left_out.push(StageKind::Cultivation.words().to_owned());
    }
    let entered = resolved.stages.iter().any(|stage| !stage.inputs.is_empty());
    if !entered && pathway.defaults.is_empty() && !resolved.stages.is_empty() {
        left_out.push("every input".to_owned());
    }
    let Some(last) = resolved.last.map(|last| &resolved.stages[last]) else {
        return Reach {
            basis: "to the wheel".to_owned(),
            left_out,
        };
    };
    let use_is_zero = resolved.rules.leaves_out(Term::Eu);
    let transport_by_default = default(DefaultKey::ETd) || default(DefaultKey::ETdFinalFuel);
    let delivered = last.kind() == StageKind::FuelTransport || transport_by_default;
    let to_wheel = last.kind() == StageKind::Combustion || (use_is_zero && delivered);
    let basis = match to_wheel {
        true => "to the wheel".to_owned(),
        false => {
            left_out.push(format!("what comes after {}", last.document.title()));
            format!("to the gate of {}", last.document.title())
        }
    };
    Reach { basis, left_out }
}

/// The saving in %, unless part of the chain is left out.
pub fn saving_percent(net: f64, comparator: f64, reach: &Reach) -> Option<f64> {
    reach
        .left_out
        .is_empty()
        .then(|| 100.0 * (comparator - net) / comparator)
}

/// The minimum savings that apply.
pub fn thresholds(
    resolved: &Resolved,
    saving: Option<f64>,
    findings: &mut Vec<Finding>,
) -> Vec<ThresholdResult> {
    let Some(saving) = saving else { return Vec::new() };
    let starts = starts(resolved);
    let all = &resolved.rules.thresholds;
    if all.is_empty() {
        return Vec::new();
    }
    let known: Option<Vec<(Date, String)>> = starts
        .into_iter()
        .map(|(day, who)| day.map(|day| (day, who)))
        .collect();
    let period = &resolved.pathway.period;
    match known {
        Some(days) => days
            .into_iter()
            .filter_map(|(day, who)| {
                let threshold = resolved.rules.threshold(day, period.from, period.to)?;
                Some((threshold, format!("{who} started {day}{}", fuel_days(threshold))))
            })
            .max_by(|a, b| a.0.percent.total_cmp(&b.0.percent))
            .map(|(threshold, because)| ThresholdResult {
                percent: threshold.percent,
                because,
                met: saving >= threshold.percent,
            })
            .into_iter()
            .collect(),
        None => {
            let asked: Vec<&Threshold> = all
                .iter()
                .filter(|threshold| threshold.asked_within(period.from, period.to))
                .collect();
            let need = asked
                .iter()
                .map(|t| format!("{} %", t.percent))
                .collect::<Vec<_>>()
                .join(", ");
            findings.push(Finding {
                id: "H-01".to_owned(),
                severity: Severity::Block,
                stage: String::new(),
                field: "plant_started".to_owned(),
                message: format!(
                    "The start of the plant is missing: {} asks for {need} depending on it.",
                    resolved.rules.id
                ),
                remedy: "Enter the day of first production.".to_owned(),
                reason: None,
            });
            let unknown = |t: &Threshold| ThresholdResult {
                percent: t.percent,
                because: span(t.started_from, t.started_to),
                met: false,
            };
            asked.into_iter().map(unknown).collect()
        }
    }
}

/// The days of fuel that a threshold is asked of, where it is not asked of all.
fn fuel_days(threshold: &Threshold) -> String {
    match (threshold.applies_from, threshold.applies_to) {
        (Some(from), Some(to)) => format!("; fuel of {from} to {to}"),
        (Some(from), None) => format!("; fuel from {from} on"),
        (None, Some(to)) => format!("; fuel up to {to}"),
        (None, None) => String::new(),
    }
}

fn span(from: Option<Date>, to: Option<Date>) -> String {
    match (from, to) {
        (Some(from), Some(to)) => format!("for plants started {from} to {to}; the start is not given"),
        (Some(from), None) => format!("for plants started from {from}; the start is not given"),
        (None, Some(to)) => format!("for plants started up to {to}; the start is not given"),
        (None, None) => "for every plant".to_owned(),
    }
}

/// The starts that decide: of the stated works of bought fuel, and of the pathway's own works where it has one.
fn starts(resolved: &Resolved) -> Vec<(Option<Date>, String)> {
    let mut starts: Vec<(Option<Date>, String)> = resolved
        .stages
        .iter()
        .filter(|stage| stage.kind() == StageKind::Bought)
        .map(|stage| {
            let stated = stage.document.stated.as_ref();
            let who = stated
                .and_then(|s| s.issuer.clone())
                .unwrap_or_else(|| "the supplier".to_owned());
            (
                stated.and_then(|s| s.plant_started),
                format!("the stated works of {who}"),
            )
        })
        .collect();
    let makes = |stage: &super::resolved::Stage| {
        stage.kind() != StageKind::Bought
            && stage
                .products
                .first()
                .is_some_and(|output| output.flow.is_ethanol())
            && !stage.intakes.iter().any(|intake| intake.flow.is_ethanol())
    };
    if starts.is_empty() || resolved.stages.iter().any(makes) {
        starts.push((resolved.pathway.plant_started, "plant".to_owned()));
    }
    starts
}
