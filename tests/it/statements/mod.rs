//! Statements: what the file holds, and what checking it finds.

mod file;
pub mod made;
mod preflight;
mod series;
mod tampering;
