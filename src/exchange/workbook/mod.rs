//! An assessment as a workbook (XLSX) whose formulas lead from the amounts to the net. Every formula carries the figure of
//! the engine, so that a reader that does not calculate shows the same; a spreadsheet program that does comes to the same.

mod about;
mod chain;
mod factors;
mod findings;
mod flows;
mod inputs;
mod look;
mod page;
mod plan;
mod rows;
mod sharing;
mod terms;
mod totals;
mod workings;

use crate::core::documents::{Assessment, Pathway, Problems};
use crate::core::domain::Book;
use crate::core::engine::{demand::demand, resolve};
use jiff::Timestamp;
use plan::Plan;
use rust_xlsxwriter::{DocProperties, ExcelDateTime, Workbook, XlsxError};

/// What the workbook says of itself beside the assessment.
#[derive(Clone, Copy, Debug)]
pub struct About<'a> {
    /// When it was made: the date of the file, and the only one in it, so that the same call gives the same bytes.
    pub made_at: Timestamp,
    /// Who answers for the figures; none for a draft of nobody's.
    pub issuer: Option<&'a str>,
    /// Number and hash of the statement that it belongs to.
    pub statement: Option<(&'a str, &'a str)>,
    /// What a reader should be warned of, one a line.
    pub cautions: &'a [String],
}

/// Why there is no workbook.
#[derive(Debug, thiserror::Error)]
pub enum WorkbookError {
    /// The pathway cannot be worked out under the rule set of the assessment.
    #[error("the pathway of this assessment cannot be worked out any more")]
    Refused(Problems),
    /// The assessment is of another document.
    #[error("the assessment belongs to another pathway document: {0} instead of {1}")]
    OtherDocument(String, String),
    /// The assessment was made with other published data or another program.
    #[error("the assessment says {stored} g CO2e/MJ, its pathway gives {found} now: assess it again")]
    Outdated {
        /// Net of the assessment.
        stored: f64,
        /// Net of the pathway now.
        found: f64,
    },
    /// A sheet holds at most 1 048 576 rows.
    #[error("the pathway has more rows than a sheet holds")]
    TooLarge,
    /// The file could not be written.
    #[error("the workbook could not be written")]
    File(#[from] XlsxError),
}

/// Writes a workbook of an assessment: the bytes of an XLSX file, the same for the same arguments.
///
/// Sheets: About, Inputs, Factors, Chain, Terms, Totals, Carbon, Findings, Workings. Named cells:
/// `net_g_co2e_per_mj`, `comparator_g_co2e_per_mj`, `saving_percent`.
///
/// # Errors
/// When the assessment is not what the pathway gives with `book`, or the file cannot hold it.
pub fn write(
    pathway: &Pathway,
    assessment: &Assessment,
    book: &Book,
    about: &About,
) -> Result<Vec<u8>, WorkbookError> {
    let resolved =
        resolve(pathway, Some(&assessment.rule_set), book, true).map_err(WorkbookError::Refused)?;
    if resolved.hash != assessment.pathway_hash {
        return Err(WorkbookError::OtherDocument(
            assessment.pathway_hash.clone(),
            resolved.hash,
        ));
    }
    let demand = demand(&resolved);
    let found = crate::core::engine::totals(&resolved, &demand).terms.sum();
    let stored = assessment.net.g_co2e_per_mj;
    if (found - stored).abs() > 1e-9 * stored.abs().max(1e-6) {
        return Err(WorkbookError::Outdated { stored, found });
    }
    let plan = Plan::new(&resolved, &demand, assessment, book)?;
    let mut workbook = Workbook::new();
    let sheets = [
        about::NAME,
        inputs::NAME,
        factors::NAME,
        chain::NAME,
        terms::NAME,
        totals::NAME,
        findings::CARBON,
        findings::NAME,
        workings::NAME,
    ];
    for name in sheets {
        workbook.add_worksheet().set_name(name)?;
    }
    let links = workings::write(
        page::open(&mut workbook, workings::NAME, assessment.example)?,
        &plan,
    )?;
    about::write(
        page::open(&mut workbook, about::NAME, assessment.example)?,
        &plan,
        about,
    )?;
    inputs::write(
        page::open(&mut workbook, inputs::NAME, assessment.example)?,
        &plan,
        &links,
    )?;
    factors::write(
        page::open(&mut workbook, factors::NAME, assessment.example)?,
        &plan,
    )?;
    chain::write(page::open(&mut workbook, chain::NAME, assessment.example)?, &plan)?;
    terms::write(page::open(&mut workbook, terms::NAME, assessment.example)?, &plan)?;
    totals::write(
        page::open(&mut workbook, totals::NAME, assessment.example)?,
        &plan,
    )?;
    findings::carbon(
        page::open(&mut workbook, findings::CARBON, assessment.example)?,
        &plan,
    )?;
    findings::write(
        page::open(&mut workbook, findings::NAME, assessment.example)?,
        &plan,
    )?;
    for (name, cell) in totals::NAMED {
        workbook.define_name(*name, &format!("={}!{cell}", totals::NAME))?;
    }
    let made = ExcelDateTime::from_timestamp(about.made_at.as_second())?;
    let properties = DocProperties::new()
        .set_title(page::cut(&assessment.pathway_name, 200))
        .set_subject(if assessment.example {
            "EXAMPLE: invented data"
        } else {
            ""
        })
        .set_author(page::cut(about.issuer.unwrap_or(""), 200))
        .set_creation_datetime(&made);
    workbook.set_properties(&properties);
    Ok(workbook.save_to_buffer()?)
}
