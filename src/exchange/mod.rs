//! Bytes to documents and back: files for other programs, made from what the core worked out.

pub mod pact;
/// The statement on paper.
#[cfg(feature = "pdf")]
pub mod pdf;
pub mod workbook;
