//! The tables of the paper: stages, carbon, land, factors, findings.

use super::super::sheet::{Column, ColumnKind, Table};
use super::say::{Sources, capital, day, grams, published, spaced};
use crate::core::documents::assessment::{Finding, Severity, StageResult};
use crate::core::documents::statement::Statement;
use crate::core::documents::statement::facts::LandCriterion;
use crate::core::domain::{Gas, GasVector, GwpSet};
use crate::core::units::rounding::{show_change, significant};
use std::collections::BTreeMap;

fn column(head: &str, kind: ColumnKind) -> Column {
    Column {
        head: head.to_owned(),
        kind,
    }
}

/// The name of a stage as printed.
pub(super) fn name(stage: &StageResult) -> String {
    let named = if stage.name.is_empty() {
        &stage.key
    } else {
        &stage.name
    };
    named.clone()
}

/// CO2e by group of gases, g/MJ: fossil CO2, N2O, CH4, land, not split.
fn groups(gases: &GasVector, weights: &GwpSet) -> [f64; 5] {
    [
        gases[Gas::Co2Fossil],
        gases[Gas::N2o] * weights.n2o,
        gases[Gas::Ch4Fossil] * weights.ch4_fossil + gases[Gas::Ch4Biogenic] * weights.ch4_biogenic,
        gases[Gas::Co2Land],
        gases[Gas::Co2eUnsplit],
    ]
}

/// The result by stage, wheel first. A group of gases that is empty everywhere has no column.
pub(super) fn stages(statement: &Statement) -> Table {
    const HEADS: [&str; 5] = ["Fossil CO2", "N2O", "CH4", "Land", "Not split"];
    let (assessment, weights) = (&statement.assessment.document, statement.data.gwp_set.set());
    let split: Vec<[f64; 5]> = assessment
        .stages
        .iter()
        .map(|stage| groups(&stage.gases_g_per_mj, &weights))
        .collect();
    let total = groups(&assessment.net.gases_g_per_mj, &weights);
    let shown: Vec<usize> = (0..HEADS.len())
        .filter(|&at| split.iter().any(|parts| parts.get(at).is_some_and(|g| *g != 0.0)))
        .collect();
    let figures = |parts: &[f64; 5], sum: f64, running: f64| -> Vec<String> {
        let parts = shown.iter().filter_map(|&at| parts.get(at)).map(|&g| grams(g));
        parts.chain([grams(sum), grams(running)]).collect()
    };
    let mut running = 0.0;
    let mut rows: Vec<Vec<String>> = assessment
        .stages
        .iter()
        .zip(&split)
        .map(|(stage, parts)| {
            running += stage.g_co2e_per_mj;
            let mut terms: Vec<&str> = stage.inputs.iter().map(|input| input.term.name()).collect();
            terms.sort_unstable();
            terms.dedup();
            let mut row = vec![name(stage), terms.join(", ")];
            row.extend(figures(parts, stage.g_co2e_per_mj, running));
            row
        })
        .collect();
    rows.reverse();
    let mut columns = vec![
        column("Stage, wheel to field", ColumnKind::Words),
        column("Term", ColumnKind::Short),
    ];
    let heads = shown.iter().filter_map(|&at| HEADS.get(at));
    columns.extend(heads.map(|head| column(head, ColumnKind::Figure)));
    columns.push(column("g CO2e/MJ", ColumnKind::Figure));
    columns.push(column("Running", ColumnKind::Figure));
    let mut foot = vec!["Net".to_owned(), String::new()];
    let net = assessment.net.g_co2e_per_mj;
    foot.extend(figures(&total, net, net));
    Table {
        columns,
        rows,
        foot,
        notes: Vec::new(),
    }
}

/// Uptake and releases of the crop's own CO2.
pub(super) fn carbon(statement: &Statement) -> Table {
    let carbon = &statement.assessment.document.carbon;
    let stages = &statement.assessment.document.stages;
    let place = |key: &str| {
        stages
            .iter()
            .find(|stage| stage.key == key)
            .map(name)
            .unwrap_or_default()
    };
    let mut rows = Vec::new();
    let mut left = 0.0;
    for row in &carbon.rows {
        left += row.g_co2_per_mj;
        rows.push(vec![
            capital(&row.what),
            place(&row.stage),
            show_change(row.g_co2_per_mj, 2),
        ]);
    }
    let foot = if rows.is_empty() {
        Vec::new()
    } else {
        vec!["Left open".to_owned(), String::new(), grams(left)]
    };
    Table {
        columns: vec![
            column("What", ColumnKind::Words),
            column("Where", ColumnKind::Words),
            column("g CO2/MJ", ColumnKind::Figure),
        ],
        rows,
        foot,
        notes: vec![statement.words.uptake_note.clone()],
    }
}

/// What a declaration on land says: criterion, whether it is met, the day whose status counts.
type Said = (Option<LandCriterion>, Option<bool>, Option<String>);

/// Declarations on land, counted by what they say.
pub(super) fn land(statement: &Statement) -> Table {
    let mut counted: BTreeMap<Said, usize> = BTreeMap::new();
    for one in &statement.facts.land_declarations {
        let on = one.reference_date.map(day);
        *counted.entry((one.criterion, one.met, on)).or_default() += 1;
    }
    let rows = counted.into_iter().map(|((criterion, met, on), count)| {
        let what = match criterion {
            Some(LandCriterion::All) => "All criteria of the rule set".to_owned(),
            Some(LandCriterion::CarbonStock) => "Land of high carbon stock".to_owned(),
            Some(LandCriterion::Biodiversity) => "Land of high biodiversity value".to_owned(),
            Some(LandCriterion::Peatland) => "Peatland".to_owned(),
            None => String::new(),
        };
        let met = match met {
            Some(true) => "met",
            Some(false) => "not met",
            None => "not said",
        };
        vec![what, met.to_owned(), on.unwrap_or_default(), count.to_string()]
    });
    Table {
        columns: vec![
            column("Criterion", ColumnKind::Words),
            column("Declared", ColumnKind::Short),
            column("Status of the land on", ColumnKind::Words),
            column("Declarations", ColumnKind::Figure),
        ],
        rows: rows.collect(),
        foot: Vec::new(),
        notes: Vec::new(),
    }
}

/// Factors and published values that figures rest on; what is there for comparison only is left to the file.
pub(super) fn factors(statement: &Statement, sources: &mut Sources) -> Table {
    let (data, weights) = (&statement.data, statement.data.gwp_set.set());
    let used = data.factors.iter().filter(|factor| !factor.for_comparison);
    let mut rows: Vec<Vec<String>> = used
        .map(|factor| {
            let kg: f64 = factor
                .gases
                .iter()
                .map(|(gas, kg)| GasVector::of(*gas, *kg).co2e(&weights))
                .sum();
            vec![
                capital(&factor.name),
                factor.id.clone(),
                significant(kg, 4, 9),
                format!("kg CO2e per {}", factor.per),
                sources.number(&factor.source),
            ]
        })
        .collect();
    rows.extend(
        data.default_values
            .iter()
            .filter(|row| !row.for_comparison)
            .map(|row| {
                vec![
                    format!("Default value: {}", row.description),
                    row.id.clone(),
                    published(row.default.total),
                    "g CO2e/MJ".to_owned(),
                    sources.number(&row.source),
                ]
            }),
    );
    rows.extend(data.constants.iter().map(|constant| {
        vec![
            format!("Constant {}", constant.symbol),
            constant.table.clone(),
            published(constant.value),
            constant.unit.clone(),
            sources.number(&constant.source),
        ]
    }));
    Table {
        columns: vec![
            column("Factor or constant", ColumnKind::Words),
            column("Id or table", ColumnKind::Words),
            column("Value", ColumnKind::Figure),
            column("Unit", ColumnKind::Words),
            column("Source", ColumnKind::Figure),
        ],
        rows,
        foot: Vec::new(),
        notes: vec![
            "Factors are weighted with the gas weights above and shown in four significant figures; the file has their gases as \
             published."
                .to_owned(),
        ],
    }
}

/// Findings, with the written reasons of those that needed one.
pub(super) fn findings(statement: &Statement) -> Table {
    let stages = &statement.assessment.document.stages;
    let reason = |finding: &Finding| {
        let found = statement.reasons.iter().find(|reason| {
            reason.id == finding.id && reason.stage == finding.stage && reason.field == finding.field
        });
        found.map(|reason| match &reason.who {
            Some(who) => format!("{} ({who})", reason.text),
            None => reason.text.clone(),
        })
    };
    let rows = statement.assessment.document.findings.iter().map(|finding| {
        let place = stages.iter().find(|stage| stage.key == finding.stage).map(name);
        let nothing = match finding.severity {
            Severity::Info => "for information",
            Severity::Warn | Severity::Block => "no reason given",
        };
        vec![
            finding.id.clone(),
            place.unwrap_or_else(|| spaced(&finding.stage)),
            finding.message.clone(),
            reason(finding).unwrap_or_else(|| nothing.to_owned()),
        ]
    });
    Table {
        columns: vec![
            column("Check", ColumnKind::Short),
            column("Where", ColumnKind::Words),
            column("What it says", ColumnKind::Prose),
            column("Reason given", ColumnKind::Words),
        ],
        rows: rows.collect(),
        foot: Vec::new(),
        notes: Vec::new(),
    }
}
