//! Files for other programs: workbooks and footprint records, read back; the statement as a sheet of paper.

mod pact;
mod pact_checks;
#[cfg(feature = "pdf")]
mod pdf;
mod workbook;
