//! The sheet of terms: the net by the terms of the rule, as sums over the inputs.

use super::inputs;
use super::look::{Digits, Part};
use super::page::{Layout, Page, cell, span};
use super::plan::Plan;
use crate::core::domain::Term;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet.
pub const NAME: &str = "Terms";
const FIRST: u32 = 4;
const SUM: u16 = 2;

/// Row of the sum.
pub fn total_row() -> u32 {
    (FIRST..).zip(Term::ALL).last().map_or(FIRST, |(row, _)| row) + 1
}

/// Column of the sum.
pub const NET: u16 = SUM;

/// Writes the sheet.
pub fn write(mut page: Page, plan: &Plan) -> Result<(), XlsxError> {
    let layout = Layout {
        columns: &[
            ("Term", 10.0),
            ("What", 40.0),
            ("g CO2e/MJ", 14.0),
            ("The crop's own CO2 in line g CO2e/MJ", 18.0),
            ("Note", 60.0),
        ],
        head: FIRST - 1,
        fixed: 1,
        wide: false,
    };
    page.lay_out("Terms", &layout)?;
    page.text(
        1,
        0,
        "Every term is a signed contribution: deductions are negative. The column in line is a value; it adds to the same net.",
        Part::Text,
    )?;
    let (first, last) = plan.all_inputs();
    let column = |column| span(inputs::NAME, (first, column), (last, column));
    let carbon = &plan.assessment.carbon;
    for (row, term) in (FIRST..).zip(Term::ALL) {
        page.text(row, 0, term.name(), Part::Text)?;
        page.text(row, 1, term.words(), Part::Text)?;
        let formula = format!(
            "=SUMIF({},{},{})",
            column(inputs::TERM),
            cell(row, 0),
            column(inputs::NET)
        );
        let found = plan.assessment.terms_g_co2e_per_mj.get(term);
        page.formula(row, SUM, &formula, found, (Part::Formula, Digits::Four))?;
        let in_line = carbon.terms_in_line_g_co2e_per_mj.get(term);
        page.number(row, SUM + 1, in_line, Part::Value, Digits::Four)?;
        if plan.resolved.rules.leaves_out(term) {
            let words = format!(
                "zero under {}; what it would be stands on Totals as memo",
                plan.resolved.rules.id
            );
            page.text(row, SUM + 2, &words, Part::Text)?;
        }
    }
    let row = total_row();
    page.text(row, 1, "Net", Part::Sum)?;
    for (column, found) in [
        (SUM, plan.assessment.net.g_co2e_per_mj),
        (SUM + 1, carbon.net_in_line_g_co2e_per_mj),
    ] {
        let formula = format!("=SUM({}:{})", cell(FIRST, column), cell(row - 1, column));
        page.formula(row, column, &formula, found, (Part::Sum, Digits::Four))?;
    }
    Ok(())
}
