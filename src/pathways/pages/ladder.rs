//! An assessment as the ladder and as the table whose rows sit on its rungs. One order for both, so they cannot differ.

use crate::charts::ladder::{self, Baseline, Counted, Form, Ladder, Rung};
use crate::core::documents::assessment::{Assessment, StageResult};
use crate::core::domain::{Gas, GasVector, GwpSet, RuleSet};
use crate::core::levers::compare::StageRow;
use crate::web::csv::{Cell, Table};
use crate::web::filters::Markup;

/// The picture in its forms and the table beside it.
#[derive(Clone, Debug, PartialEq)]
pub struct LadderView {
    /// SVG for screens from 48 rem.
    pub wide: Markup,
    /// SVG for paper.
    pub print: Markup,
    /// SVG for narrow screens.
    pub narrow: Markup,
    /// Why there is no picture, where there is none.
    pub absent: Option<String>,
    /// True if the crop's carbon stands in line.
    pub in_line: bool,
    /// The rows, wheel first.
    pub rows: Vec<LadderRow>,
    /// The foot of the table.
    pub foot: LadderRow,
    /// True if any stage has CO2 of land.
    pub land: bool,
}

/// One row: a stage.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LadderRow {
    /// Key of the stage, empty where it has none.
    pub key: String,
    /// Name as shown.
    pub name: String,
    /// Address of the stage, where it has a page.
    pub href: Option<String>,
    /// Counted, g CO2e/MJ; none where nothing can count (the uptake).
    pub counted: Option<CountedRow>,
    /// Crop CO2, signed.
    pub crop: Option<f64>,
}

/// Counted emissions of a row by gas.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct CountedRow {
    /// Their sum.
    pub sum: f64,
    /// Fossil CO2.
    pub co2: f64,
    /// Nitrous oxide.
    pub n2o: f64,
    /// Methane.
    pub ch4: f64,
    /// CO2 of land.
    pub land: f64,
    /// Not split by gas.
    pub unsplit: f64,
    /// Running sum from the field.
    pub running: f64,
}

/// The patterns that the pictures of a page refer to, once in a page.
pub fn defs() -> Markup {
    Markup(format!(
        "{}{}",
        ladder::defs(),
        crate::charts::carbon_split::defs()
    ))
}

/// CO2e by gas group of a vector in g per MJ.
pub fn counted(gases: &GasVector, weights: &GwpSet) -> Counted {
    Counted {
        co2_fossil: gases[Gas::Co2Fossil],
        n2o: gases[Gas::N2o] * weights.n2o,
        ch4: gases[Gas::Ch4Fossil] * weights.ch4_fossil + gases[Gas::Ch4Biogenic] * weights.ch4_biogenic,
        co2_land: gases[Gas::Co2Land],
        co2e_unsplit: gases[Gas::Co2eUnsplit],
        co2_biogenic: 0.0,
    }
}

/// The name of a stage on the ladder and in tables.
pub fn stage_name(stage: &StageResult) -> String {
    if stage.name.is_empty() {
        stage.key.clone()
    } else {
        stage.name.clone()
    }
}

/// The rungs of an assessment, field first: its stages, and what takes up or gives back crop CO2 beside them.
fn rungs(assessment: &Assessment, weights: &GwpSet) -> Vec<(String, Rung)> {
    let carbon = &assessment.carbon;
    let back = |key: &str| {
        let at = carbon.releases.iter().filter(|release| release.stage == key);
        let sum: f64 = at.clone().map(|release| release.g_co2_per_mj).sum();
        at.count().checked_sub(1).map(|_| sum)
    };
    let mut out = Vec::with_capacity(assessment.stages.len() + 2);
    if carbon.uptake_g_co2_per_mj != 0.0 {
        out.push((
            String::new(),
            Rung {
                name: "Uptake by the crop".to_owned(),
                counted: Counted::default(),
                crop: Some(carbon.uptake_g_co2_per_mj),
                uptake: true,
                absent: false,
            },
        ));
    }
    for stage in &assessment.stages {
        out.push((
            stage.key.clone(),
            Rung {
                name: stage_name(stage),
                counted: counted(&stage.gases_g_per_mj, weights),
                crop: back(&stage.key),
                uptake: false,
                absent: false,
            },
        ));
    }
    let known = |key: &str| assessment.stages.iter().any(|stage| stage.key == key);
    for release in carbon.releases.iter().filter(|release| !known(&release.stage)) {
        out.push((
            String::new(),
            Rung {
                name: crate::web::filters::capital(&release.what),
                counted: Counted::default(),
                crop: Some(release.g_co2_per_mj),
                uptake: false,
                absent: false,
            },
        ));
    }
    out
}

/// The ladder of an assessment, ready to draw.
pub fn model(assessment: &Assessment, weights: &GwpSet, rules: Option<&RuleSet>, id: &str) -> Ladder {
    let comparator = assessment.comparator_g_co2e_per_mj;
    let strictest = assessment
        .thresholds
        .iter()
        .map(|t| t.percent)
        .fold(None, |most: Option<f64>, percent| {
            Some(most.map_or(percent, |most| most.max(percent)))
        });
    Ladder {
        title: format!("Field-to-wheel ladder of {}", assessment.pathway_name),
        id: id.to_owned(),
        heading: None,
        baseline: Baseline {
            word: baseline_word(rules),
            g: comparator,
        },
        required: strictest.map(|percent| ladder::Required {
            percent,
            g: comparator * (100.0 - percent) / 100.0,
        }),
        stages: rungs(assessment, weights)
            .into_iter()
            .map(|(_, rung)| rung)
            .collect(),
        scale: None,
    }
}

/// The same ladder with a rung for every stage of a comparison, field first: those of other pathways are absent.
pub fn aligned(ladder: Ladder, assessment: &Assessment, rows: &[StageRow]) -> Ladder {
    // The rungs of the stages stand in the order of the stages; before them the uptake, after them what has no stage.
    let before = ladder.stages.iter().take_while(|rung| rung.uptake).count();
    let count = assessment.stages.len();
    let own = assessment.stages.iter().zip(ladder.stages.iter().skip(before));
    let mut stages: Vec<Rung> = ladder.stages.iter().take(before).cloned().collect();
    for row in rows {
        let mine = own
            .clone()
            .find(|(stage, _)| stage.kind == row.kind && stage.key == row.key);
        stages.push(match mine {
            Some((_, rung)) => rung.clone(),
            None => Rung {
                name: row.names.iter().flatten().next().unwrap_or(&row.key).clone(),
                absent: true,
                ..Rung::default()
            },
        });
    }
    stages.extend(ladder.stages.iter().skip(before + count).cloned());
    Ladder { stages, ..ladder }
}

/// One word for the baseline in pictures: the last of the rule set's.
pub fn baseline_word(rules: Option<&RuleSet>) -> String {
    let word = rules.map_or("baseline", |rules| rules.comparator_word.as_str());
    word.split_whitespace().last().unwrap_or("baseline").to_owned()
}

impl LadderView {
    /// Picture and table of an assessment; `page` gives the address of a stage by its key.
    pub fn of(
        assessment: &Assessment,
        weights: &GwpSet,
        rules: Option<&RuleSet>,
        in_line: bool,
        page: impl Fn(&str) -> Option<String>,
    ) -> LadderView {
        let mut apart = model(assessment, weights, rules, "lw");
        if in_line {
            apart = ladder::in_line(&apart);
        }
        let draw = |id: &str, form: Form| {
            let mut named = apart.clone();
            named.id = id.to_owned();
            ladder::draw(&named, form)
        };
        let (wide, print, narrow) = (
            draw("lw", Form::Wide),
            draw("lp", Form::Print),
            draw("ln", Form::Narrow),
        );
        let absent = wide.as_ref().err().map(ToString::to_string);
        let mut running = 0.0;
        let mut rows: Vec<LadderRow> = rungs(assessment, weights)
            .into_iter()
            .map(|(key, rung)| {
                let counted = rung.counted;
                let sum = counted.sum();
                running += sum;
                LadderRow {
                    href: page(&key),
                    name: rung.name,
                    counted: (!rung.uptake).then_some(row(&counted, running)),
                    crop: rung.crop,
                    key,
                }
            })
            .collect();
        rows.reverse();
        let total = counted(&assessment.net.gases_g_per_mj, weights);
        let crop: f64 = rows.iter().filter_map(|row| row.crop).sum();
        LadderView {
            wide: Markup(wide.unwrap_or_default()),
            print: Markup(print.unwrap_or_default()),
            narrow: Markup(narrow.unwrap_or_default()),
            absent,
            in_line,
            land: rows
                .iter()
                .any(|row| row.counted.is_some_and(|counted| counted.land != 0.0)),
            rows,
            foot: LadderRow {
                name: "Net".to_owned(),
                counted: Some(row(&total, running)),
                crop: Some(crop),
                ..LadderRow::default()
            },
        }
    }

    /// The table as CSV, field first, figures in full.
    pub fn table(&self) -> Table {
        let mut table = Table::new(&[
            "stage",
            "name",
            "counted_g_co2e_per_mj",
            "co2_fossil_g_co2e_per_mj",
            "n2o_g_co2e_per_mj",
            "ch4_g_co2e_per_mj",
            "co2_land_g_co2e_per_mj",
            "co2e_unsplit_g_co2e_per_mj",
            "running_g_co2e_per_mj",
            "crop_co2_g_per_mj",
        ]);
        for row in self.rows.iter().rev().chain(std::iter::once(&self.foot)) {
            let mut cells: Vec<Cell> = vec![row.key.clone().into(), row.name.clone().into()];
            match row.counted {
                Some(c) => {
                    cells
                        .extend([c.sum, c.co2, c.n2o, c.ch4, c.land, c.unsplit, c.running].map(Cell::Figure));
                }
                None => cells.extend(std::iter::repeat_n(Cell::Empty, 7)),
            }
            cells.push(row.crop.into());
            table.rows.push(cells);
        }
        table
    }
}

fn row(counted: &Counted, running: f64) -> CountedRow {
    CountedRow {
        sum: counted.sum(),
        co2: counted.co2_fossil,
        n2o: counted.n2o,
        ch4: counted.ch4,
        land: counted.co2_land,
        unsplit: counted.co2e_unsplit,
        running,
    }
}
