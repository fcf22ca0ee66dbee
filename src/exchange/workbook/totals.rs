//! The sheet of totals: net, baseline, saving, the minimum savings, the gases behind the net, and the sum by stage.

use super::look::{Digits, Part};
use super::page::{Layout, Page, cell, figure, on, span};
use super::plan::{Plan, count};
use super::{chain, factors, inputs, terms};
use crate::core::domain::Gas;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet.
pub const NAME: &str = "Totals";
const NET: u32 = 4;
const COMPARATOR: u32 = 5;
const SAVING: u32 = 6;
const MEMO: u32 = 7;
const FIGURE: u16 = 1;

/// Names of cells of this sheet.
pub const NAMED: &[(&str, &str)] = &[
    ("net_g_co2e_per_mj", "$B$5"),
    ("comparator_g_co2e_per_mj", "$B$6"),
    ("saving_percent", "$B$7"),
];

/// Writes the sheet.
pub fn write(mut page: Page, plan: &Plan) -> Result<(), XlsxError> {
    let layout = Layout {
        columns: &[("Total", 46.0), ("Figure", 18.0), ("Unit", 16.0), ("Note", 70.0)],
        head: NET - 1,
        fixed: 1,
        wide: false,
    };
    page.lay_out("Totals", &layout)?;
    page.text(1, 0, &plan.assessment.pathway_name, Part::Text)?;
    let basis = format!("{}, {}", plan.assessment.rule_set, plan.assessment.basis);
    page.text(2, 0, &basis, Part::Text)?;
    head(&mut page, plan)?;
    let row = thresholds(&mut page, plan, MEMO + 2)?;
    let row = gases(&mut page, plan, row + 1)?;
    let row = by_stage(&mut page, plan, row + 1)?;
    trust(&mut page, plan, row + 1)
}

fn head(page: &mut Page, plan: &Plan) -> Result<(), XlsxError> {
    let assessment = plan.assessment;
    let four = |part| (part, Digits::Four);
    page.text(NET, 0, "Net", Part::Text)?;
    let net = format!("={}", on(terms::NAME, terms::total_row(), terms::NET));
    page.formula(
        NET,
        FIGURE,
        &net,
        assessment.net.g_co2e_per_mj,
        four(Part::Strong),
    )?;
    page.text(NET, 2, "g CO2e/MJ", Part::Text)?;
    page.link(
        NET,
        3,
        (terms::NAME, terms::total_row(), terms::NET),
        "sum of the terms; named net_g_co2e_per_mj",
    )?;
    let rules = plan.resolved.rules;
    page.text(COMPARATOR, 0, &rules.comparator_word, Part::Text)?;
    let formula = format!("={}", factors::constant(factors::Constant::Comparator));
    page.formula(
        COMPARATOR,
        FIGURE,
        &formula,
        assessment.comparator_g_co2e_per_mj,
        four(Part::Formula),
    )?;
    page.text(COMPARATOR, 2, "g CO2e/MJ", Part::Text)?;
    page.text(COMPARATOR, 3, &rules.comparator.source, Part::Text)?;
    page.text(SAVING, 0, "Saving", Part::Text)?;
    page.text(SAVING, 2, "%", Part::Text)?;
    match assessment.saving_percent {
        Some(saving) => {
            let (base, net) = (cell(COMPARATOR, FIGURE), cell(NET, FIGURE));
            let formula = format!("=100*({base}-{net})/{base}");
            page.formula(SAVING, FIGURE, &formula, saving, four(Part::Strong))?;
            page.text(
                SAVING,
                3,
                "compared with minimum savings unrounded; named saving_percent",
                Part::Text,
            )?;
        }
        None => {
            page.text(SAVING, FIGURE, "not printed", Part::Text)?;
            let words = "The pathway leaves a part of the chain out; see Findings.";
            page.text(SAVING, 3, words, Part::Text)?;
        }
    }
    page.text(MEMO, 0, "Memo: CH4 and N2O of use, in no total", Part::Text)?;
    let (first, last) = plan.all_inputs();
    let memo = format!(
        "=SUM({})",
        span(inputs::NAME, (first, inputs::MEMO), (last, inputs::MEMO))
    );
    let found = assessment.memo.e_u_not_counted_g_co2e_per_mj;
    page.formula(MEMO, FIGURE, &memo, found, four(Part::Formula))?;
    page.text(MEMO, 2, "g CO2e/MJ", Part::Text)
}

fn thresholds(page: &mut Page, plan: &Plan, mut row: u32) -> Result<u32, XlsxError> {
    for threshold in &plan.assessment.thresholds {
        page.text(row, 0, "Minimum saving", Part::Text)?;
        page.number(row, FIGURE, threshold.percent, Part::Published, Digits::All)?;
        page.text(row, 2, "%", Part::Text)?;
        page.text(row, 3, &threshold.because, Part::Text)?;
        row += 1;
        page.text(row, 0, "Met", Part::Text)?;
        let formula = format!(
            "=IF({}>={},\"yes\",\"no\")",
            cell(SAVING, FIGURE),
            cell(row - 1, FIGURE)
        );
        // Without the start of the plant none of several is said to be met, whatever the saving.
        if plan.assessment.thresholds.len() == 1 {
            let found = if threshold.met { "yes" } else { "no" };
            page.says(row, FIGURE, &formula, found, (Part::Formula, Digits::All))?;
        } else {
            page.text(row, FIGURE, "not known", Part::Text)?;
        }
        row += 1;
    }
    Ok(row)
}

fn gases(page: &mut Page, plan: &Plan, mut row: u32) -> Result<u32, XlsxError> {
    let (first, last) = plan.all_inputs();
    let column = |column| span(inputs::NAME, (first, column), (last, column));
    page.text(row, 0, "Gases behind the net", Part::Band)?;
    row += 1;
    for (gas, grams) in plan.assessment.net.gases_g_per_mj.entries() {
        page.text(row, 0, gas.words(), Part::Text)?;
        let formula = format!(
            "=1000*SUMPRODUCT({},{},{})",
            column(inputs::COUNTS),
            column(inputs::SCALE),
            column(factors::gas_column(inputs::GASES, gas))
        );
        page.formula(row, FIGURE, &formula, grams, (Part::Formula, Digits::Six))?;
        page.text(row, 2, "g/MJ", Part::Text)?;
        if gas == Gas::Co2Biogenic {
            page.text(row, 3, "weighs nothing in the net; see Carbon", Part::Text)?;
        }
        row += 1;
    }
    Ok(row)
}

fn by_stage(page: &mut Page, plan: &Plan, mut row: u32) -> Result<u32, XlsxError> {
    page.text(row, 0, "By stage", Part::Band)?;
    row += 1;
    let first = row;
    for (index, result) in plan.results() {
        let at = match index {
            Some(j) => {
                let at = (chain::NAME, plan.chain[j].stage, chain::NET);
                page.link(row, 0, at, &result.name)?;
                on(at.0, at.1, at.2)
            }
            None => {
                page.text(row, 0, &result.name, Part::Text)?;
                let position = plan.rows.iter().position(|planned| {
                    planned.stage.is_none()
                        && result.inputs.iter().any(|input| input.key == planned.result.key)
                });
                let at = inputs::FIRST + position.map_or(0, count);
                on(inputs::NAME, at, inputs::NET)
            }
        };
        page.formula(
            row,
            FIGURE,
            &format!("={at}"),
            result.g_co2e_per_mj,
            (Part::Formula, Digits::Four),
        )?;
        page.text(row, 2, "g CO2e/MJ", Part::Text)?;
        row += 1;
    }
    if row > first {
        page.text(row, 0, "All stages", Part::Sum)?;
        let formula = format!("=SUM({}:{})", cell(first, FIGURE), cell(row - 1, FIGURE));
        page.formula(
            row,
            FIGURE,
            &formula,
            plan.assessment.net.g_co2e_per_mj,
            (Part::Sum, Digits::Four),
        )?;
        page.text(row, 2, "g CO2e/MJ", Part::Text)?;
        row += 1;
        page.text(row, 0, "Stages and terms agree", Part::Text)?;
        let formula = format!(
            "=IF(ABS({}-{})<={}*MAX(1,ABS({})),\"yes\",\"no\")",
            cell(row - 1, FIGURE),
            cell(NET, FIGURE),
            figure(1e-9),
            cell(NET, FIGURE)
        );
        page.says(row, FIGURE, &formula, "yes", (Part::Formula, Digits::All))?;
        row += 1;
    }
    Ok(row)
}

fn trust(page: &mut Page, plan: &Plan, row: u32) -> Result<(), XlsxError> {
    page.text(row, 0, "What the figures rest on", Part::Band)?;
    for (row, (words, percent)) in (row + 1..).zip([
        (
            "Primary data (measured or a supplier's)",
            plan.assessment.primary_data_percent,
        ),
        ("Estimates", plan.assessment.estimated_percent),
    ]) {
        page.text(row, 0, words, Part::Text)?;
        page.number(row, FIGURE, percent, Part::Value, Digits::Four)?;
        page.text(row, 2, "% of the sum of sizes", Part::Text)?;
        page.text(row, 3, "a value", Part::Text)?;
    }
    Ok(())
}
