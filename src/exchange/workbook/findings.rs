//! The sheets of the crop's carbon and of what the checks have to say.

use super::look::{Digits, Part};
use super::page::{Layout, Page, cell};
use super::plan::Plan;
use crate::core::documents::assessment::Severity;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet of findings.
pub const NAME: &str = "Findings";
/// Name of the sheet of the crop's carbon.
pub const CARBON: &str = "Carbon";
const FIRST: u32 = 4;

/// Writes the sheet of the crop's carbon.
pub fn carbon(mut page: Page, plan: &Plan) -> Result<(), XlsxError> {
    let layout = Layout {
        columns: &[
            ("What", 52.0),
            ("g CO2/MJ", 14.0),
            ("Term", 8.0),
            ("Stage", 24.0),
            ("Note", 50.0),
        ],
        head: FIRST - 1,
        fixed: 1,
        wide: false,
    };
    page.lay_out("The crop's carbon", &layout)?;
    page.text(
        1,
        0,
        "Physical carbon of the crop, apart from sharing. The figures of this sheet are values of the program; only sums are formulas.",
        Part::Text,
    )?;
    let carbon = &plan.assessment.carbon;
    let rows: [(&str, Option<f64>); 10] = [
        (
            "Carbon of the crop that enters the works, as CO2",
            carbon.feedstock_g_co2_per_mj,
        ),
        ("Carbon of the fuel, as CO2", Some(carbon.fuel_g_co2_per_mj)),
        (
            "Fermentation CO2, vented or captured",
            Some(carbon.fermentation_g_co2_per_mj),
        ),
        (
            "Carbon of co-products that leave, as CO2",
            carbon.co_products_g_co2_per_mj,
        ),
        (
            "Carbon of residues, wastes and other inputs, as CO2",
            carbon.other_g_co2_per_mj,
        ),
        ("Uptake attributed to the fuel", Some(carbon.uptake_g_co2_per_mj)),
        ("CO2 of burning the fuel", Some(carbon.combustion_g_co2_per_mj)),
        (
            "Biogenic CO2 of inputs other than fermentation",
            Some(carbon.other_biogenic_g_co2_per_mj),
        ),
        ("Closure: carbon out over carbon in, %", carbon.closure_percent),
        (
            "Half-range of typical contents, percentage points",
            carbon.closure_half_range_points,
        ),
    ];
    let mut row = FIRST;
    for (words, figure) in rows {
        page.text(row, 0, words, Part::Text)?;
        match figure {
            Some(figure) => page.number(row, 1, figure, Part::Value, Digits::Four)?,
            None => page.text(row, 1, "not known", Part::Text)?,
        }
        row += 1;
    }
    for missing in &carbon.missing {
        page.text(row, 0, missing, Part::Text)?;
        row += 1;
    }
    row += 1;
    page.text(
        row,
        0,
        "The crop's own CO2 in line, from field to wheel",
        Part::Band,
    )?;
    row += 1;
    let first = row;
    for line in &carbon.rows {
        page.text(row, 0, &line.what, Part::Text)?;
        page.number(row, 1, line.g_co2_per_mj, Part::Value, Digits::Four)?;
        page.text(row, 2, line.term.name(), Part::Text)?;
        page.text(row, 3, &line.stage, Part::Text)?;
        row += 1;
    }
    if row > first {
        page.text(row, 0, "Sum: what the crop took up it gives back", Part::Sum)?;
        let formula = format!("=SUM({}:{})", cell(first, 1), cell(row - 1, 1));
        let found = carbon.rows.iter().map(|line| line.g_co2_per_mj).sum();
        page.formula(row, 1, &formula, found, (Part::Sum, Digits::Four))?;
    }
    Ok(())
}

/// Writes the sheet of findings.
pub fn write(mut page: Page, plan: &Plan) -> Result<(), XlsxError> {
    let layout = Layout {
        columns: &[
            ("Check", 8.0),
            ("Weight", 9.0),
            ("Stage", 18.0),
            ("Field", 22.0),
            ("What is so", 60.0),
            ("What to do", 46.0),
            ("Reason given", 36.0),
        ],
        head: FIRST - 1,
        fixed: 1,
        wide: false,
    };
    page.lay_out("Findings", &layout)?;
    let findings = &plan.assessment.findings;
    let words = if findings.is_empty() {
        "The checks have nothing to say."
    } else {
        "What the checks have to say of the figures as assessed; a change in this workbook does not change them."
    };
    page.text(1, 0, words, Part::Text)?;
    for (row, finding) in (FIRST..).zip(findings) {
        let (weight, part) = match finding.severity {
            Severity::Block => ("blocks", Part::Loud),
            Severity::Warn => ("warns", Part::Text),
            Severity::Info => ("informs", Part::Text),
        };
        page.text(row, 0, &finding.id, Part::Text)?;
        page.text(row, 1, weight, part)?;
        page.text(row, 2, &finding.stage, Part::Text)?;
        page.text(row, 3, &finding.field, Part::Text)?;
        page.text(row, 4, &finding.message, Part::Long)?;
        page.text(row, 5, &finding.remedy, Part::Long)?;
        page.text(row, 6, finding.reason.as_deref().unwrap_or(""), Part::Long)?;
    }
    Ok(())
}
