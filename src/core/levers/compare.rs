//! Puts assessments side by side: the difference by stage, by kind of stage and by term, and every setting in which they
//! are unlike, so that nobody takes a difference of rules for a difference of pathways.

use crate::core::documents::Assessment;
use crate::core::documents::assessment::{StageResult, ThresholdResult};
use crate::core::documents::pathway::{Pathway, PeriodKind};
use crate::core::domain::{RuleSet, StageKind, Term};
use crate::core::units::rounding::plain;
use serde::Serialize;
use std::collections::BTreeSet;
use utoipa::ToSchema;

/// The format name that every comparison carries.
pub const FORMAT: &str = "wheelwort.comparison/1";
/// At least this many pathways can be compared.
pub const LEAST: usize = 2;
/// At most this many pathways stand side by side.
pub const MOST: usize = 6;

/// One of the pathways to compare.
#[derive(Clone, Copy, Debug)]
pub struct Subject<'a> {
    /// The document.
    pub pathway: &'a Pathway,
    /// Its assessment.
    pub assessment: &'a Assessment,
    /// The rule set of the assessment.
    pub rules: &'a RuleSet,
}

/// Pathways side by side. Every list of figures is in the order of `pathways`; every difference is against the first.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Comparison {
    /// Always `wheelwort.comparison/1`.
    pub format: String,
    /// True if any of the pathways is demonstration data.
    pub example: bool,
    /// The pathways.
    pub pathways: Vec<Compared>,
    /// By term; differences add up to the difference of the net.
    pub terms: Vec<TermRow>,
    /// By kind of stage; differences add up to the difference of the net.
    pub kinds: Vec<KindRow>,
    /// By stage, matched by kind and key; differences add up to the difference of the net.
    pub stages: Vec<StageRow>,
    /// Settings in which the pathways are unlike: a difference of figures is then not one of the pathways alone.
    pub unlike: Vec<Unlike>,
}

/// One pathway of a comparison.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Compared {
    /// Name of the pathway.
    pub name: String,
    /// SHA-256 of its canonical bytes.
    pub pathway_hash: String,
    /// Rule set of the assessment.
    pub rule_set: String,
    /// How far the figure reaches.
    pub basis: String,
    /// g CO2e per MJ of fuel.
    pub net_g_co2e_per_mj: f64,
    /// Against the first pathway, g CO2e/MJ.
    pub difference_g_co2e_per_mj: f64,
    /// Saving against the baseline, %; null where none is printed.
    pub saving_percent: Option<f64>,
    /// Saving against that of the first pathway, percentage points; null where either prints none or the rule sets differ.
    pub saving_difference_points: Option<f64>,
    /// Minimum savings that apply.
    pub thresholds: Vec<ThresholdResult>,
    /// The kind of stage that makes most of the difference; null where there is none.
    pub largest: Option<Largest>,
}

/// The kind of stage that makes most of a difference.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Largest {
    /// Kind of the stages.
    pub kind: String,
    /// Its part of the difference, g CO2e/MJ.
    pub difference_g_co2e_per_mj: f64,
}

/// A term side by side.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct TermRow {
    /// The term.
    pub term: Term,
    /// g CO2e/MJ.
    pub g_co2e_per_mj: Vec<f64>,
    /// Against the first pathway.
    pub difference_g_co2e_per_mj: Vec<f64>,
}

/// All stages of a kind side by side.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct KindRow {
    /// The kind; `default` for published default values.
    pub kind: String,
    /// g CO2e/MJ.
    pub g_co2e_per_mj: Vec<f64>,
    /// Against the first pathway.
    pub difference_g_co2e_per_mj: Vec<f64>,
}

/// A stage side by side.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct StageRow {
    /// Kind of the stage; `default` for a published default value.
    pub kind: String,
    /// Key of the stage.
    pub key: String,
    /// Its name in each pathway; null where a pathway has no such stage.
    pub names: Vec<Option<String>>,
    /// g CO2e/MJ; null where a pathway has no such stage.
    pub g_co2e_per_mj: Vec<Option<f64>>,
    /// Against the first pathway; a stage that is not there counts as nothing.
    pub difference_g_co2e_per_mj: Vec<f64>,
}

/// A setting in which the pathways are unlike.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
pub struct Unlike {
    /// Which setting, such as `rule_set`.
    pub setting: String,
    /// What it means for the comparison.
    pub meaning: String,
    /// What each pathway says.
    pub values: Vec<String>,
}

/// Compares assessments. Any number of them is put side by side; callers keep to [`LEAST`] and [`MOST`].
pub fn compare(subjects: &[Subject<'_>]) -> Comparison {
    let kinds = kind_rows(subjects);
    Comparison {
        format: FORMAT.into(),
        example: subjects.iter().any(|subject| subject.pathway.example),
        pathways: compared(subjects, &kinds),
        terms: Term::ALL
            .into_iter()
            .map(|term| term_row(subjects, term))
            .collect(),
        stages: stage_rows(subjects),
        unlike: unlike(subjects),
        kinds,
    }
}

fn compared(subjects: &[Subject<'_>], kinds: &[KindRow]) -> Vec<Compared> {
    let Some(first) = subjects.first() else {
        return Vec::new();
    };
    let one = |(index, subject): (usize, &Subject<'_>)| {
        let Subject {
            pathway,
            assessment,
            rules,
        } = *subject;
        let same_rules = rules.id == first.rules.id && rules.version == first.rules.version;
        let saving_difference = match (assessment.saving_percent, first.assessment.saving_percent) {
            (Some(mine), Some(theirs)) if same_rules => Some(mine - theirs),
            _ => None,
        };
        let parts = kinds
            .iter()
            .filter_map(|row| Some((row, *row.difference_g_co2e_per_mj.get(index)?)));
        let largest = parts
            .filter(|(_, difference)| *difference != 0.0)
            .max_by(|(_, a), (_, b)| a.abs().total_cmp(&b.abs()))
            .map(|(row, difference)| Largest {
                kind: row.kind.clone(),
                difference_g_co2e_per_mj: difference,
            });
        Compared {
            name: pathway.name.clone(),
            pathway_hash: assessment.pathway_hash.clone(),
            rule_set: assessment.rule_set.clone(),
            basis: assessment.basis.clone(),
            net_g_co2e_per_mj: assessment.net.g_co2e_per_mj,
            difference_g_co2e_per_mj: assessment.net.g_co2e_per_mj - first.assessment.net.g_co2e_per_mj,
            saving_percent: assessment.saving_percent,
            saving_difference_points: saving_difference,
            thresholds: assessment.thresholds.clone(),
            largest,
        }
    };
    subjects.iter().enumerate().map(one).collect()
}

fn term_row(subjects: &[Subject<'_>], term: Term) -> TermRow {
    let figures: Vec<f64> = subjects
        .iter()
        .map(|subject| subject.assessment.terms_g_co2e_per_mj.get(term))
        .collect();
    TermRow {
        term,
        difference_g_co2e_per_mj: against_first(&figures),
        g_co2e_per_mj: figures,
    }
}

fn against_first(figures: &[f64]) -> Vec<f64> {
    let first = figures.first().copied().unwrap_or(0.0);
    figures.iter().map(|figure| figure - first).collect()
}

/// Where a kind stands from field to wheel; default values come after the stages.
pub fn place(kind: &str) -> usize {
    StageKind::ALL
        .iter()
        .position(|known| known.name() == kind)
        .unwrap_or(StageKind::ALL.len())
}

fn kind_rows(subjects: &[Subject<'_>]) -> Vec<KindRow> {
    let kinds: BTreeSet<(usize, &str)> = stages(subjects)
        .map(|stage| (place(&stage.kind), stage.kind.as_str()))
        .collect();
    let row = |(_, kind): (usize, &str)| {
        let sum = |subject: &Subject<'_>| {
            let of_kind = subject
                .assessment
                .stages
                .iter()
                .filter(|stage| stage.kind == kind);
            of_kind.map(|stage| stage.g_co2e_per_mj).sum()
        };
        let figures: Vec<f64> = subjects.iter().map(sum).collect();
        KindRow {
            kind: kind.into(),
            difference_g_co2e_per_mj: against_first(&figures),
            g_co2e_per_mj: figures,
        }
    };
    kinds.into_iter().map(row).collect()
}

fn stages<'s>(subjects: &'s [Subject<'_>]) -> impl Iterator<Item = &'s StageResult> {
    subjects.iter().flat_map(|subject| &subject.assessment.stages)
}

fn stage_rows(subjects: &[Subject<'_>]) -> Vec<StageRow> {
    // From field to wheel, and within a kind in the order in which the pathways bring them.
    let mut found: Vec<(&str, &str)> = Vec::new();
    for stage in stages(subjects) {
        let name = (stage.kind.as_str(), stage.key.as_str());
        if !found.contains(&name) {
            found.push(name);
        }
    }
    found.sort_by_key(|(kind, _)| place(kind));
    let row = |(kind, key): (&str, &str)| {
        let cell = |subject: &Subject<'_>| {
            let stage = subject
                .assessment
                .stages
                .iter()
                .find(|stage| stage.kind == kind && stage.key == key);
            stage.map(|stage| (stage.name.clone(), stage.g_co2e_per_mj))
        };
        let cells: Vec<Option<(String, f64)>> = subjects.iter().map(cell).collect();
        let figures: Vec<Option<f64>> = cells
            .iter()
            .map(|cell| cell.as_ref().map(|(_, figure)| *figure))
            .collect();
        let counted: Vec<f64> = figures.iter().map(|figure| figure.unwrap_or(0.0)).collect();
        StageRow {
            kind: kind.into(),
            key: key.into(),
            names: cells.into_iter().map(|cell| cell.map(|(name, _)| name)).collect(),
            g_co2e_per_mj: figures,
            difference_g_co2e_per_mj: against_first(&counted),
        }
    };
    found.into_iter().map(row).collect()
}

type Says = fn(&Subject<'_>) -> String;

/// What makes figures unlike, and what that means.
const SETTINGS: &[(&str, &str, Says)] = &[
    (
        "rule_set",
        "The figures follow different rules; no difference of savings is printed.",
        |s| format!("{}, version {}", s.rules.id, s.rules.version),
    ),
    ("gwp_set", "The gases weigh differently.", |s| {
        s.assessment.gwp_set.clone()
    }),
    ("basis", "The figures do not reach equally far.", |s| {
        s.assessment.basis.clone()
    }),
    (
        "comparator_g_co2e_per_mj",
        "Savings are counted against different baselines.",
        |s| plain(s.assessment.comparator_g_co2e_per_mj),
    ),
    (
        "ethanol_lhv",
        "A megajoule of fuel is not the same mass of ethanol.",
        |s| {
            format!(
                "{} {}",
                plain(s.rules.ethanol_lhv.value),
                s.rules.ethanol_lhv.unit
            )
        },
    ),
    ("period", "The figures cover different days.", |s| {
        let kind = match s.pathway.period.kind {
            Some(PeriodKind::Campaign) => "campaign",
            Some(PeriodKind::Calendar) | None => "calendar",
        };
        format!("{} to {}, {kind}", s.pathway.period.from, s.pathway.period.to)
    }),
    ("plant_started", "Different minimum savings may apply.", |s| {
        s.pathway
            .plant_started
            .map_or_else(|| "not said".into(), |day| day.to_string())
    }),
    (
        "defaults",
        "Some terms are published default values and not the pathway's own.",
        |s| {
            let used = s
                .pathway
                .defaults
                .iter()
                .map(|(key, row)| format!("{} = {row}", key.name()));
            listed(used.collect())
        },
    ),
    ("not_covered", "Some of the chain is left out.", |s| {
        listed(
            s.pathway
                .not_covered
                .iter()
                .map(|kind| kind.name().to_owned())
                .collect(),
        )
    }),
    (
        "allocation",
        "Stages share their burden by a method of their own.",
        |s| {
            let own = s
                .pathway
                .stages
                .iter()
                .filter_map(|stage| Some((stage.allocation?, &stage.key)));
            listed(
                own.map(|(method, key)| format!("{key}: {}", method.name()))
                    .collect(),
            )
        },
    ),
    (
        "example",
        "Demonstration data stands beside data of your own.",
        |s| {
            if s.pathway.example {
                "demonstration".into()
            } else {
                "own".into()
            }
        },
    ),
];

fn listed(mut items: Vec<String>) -> String {
    items.sort();
    if items.is_empty() {
        "none".into()
    } else {
        items.join("; ")
    }
}

fn unlike(subjects: &[Subject<'_>]) -> Vec<Unlike> {
    let differs = |(setting, meaning, says): &(&str, &str, Says)| {
        let values: Vec<String> = subjects.iter().map(says).collect();
        let alike = values.windows(2).all(|pair| pair.first() == pair.last());
        (!alike).then(|| Unlike {
            setting: (*setting).into(),
            meaning: (*meaning).into(),
            values,
        })
    };
    SETTINGS.iter().filter_map(differs).collect()
}
