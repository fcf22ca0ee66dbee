//! Files for other programs: workbooks and footprint records, read back.

mod pact;
mod pact_checks;
mod workbook;
