//! Bytes to documents and back: files for other programs, made from what the core worked out.

pub mod pact;
pub mod workbook;
