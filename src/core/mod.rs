//! The pure core: documents in, assessments and findings out. No I/O, no clock, no SQL, no HTTP.

pub mod checks;
pub mod documents;
pub mod domain;
pub mod engine;
pub mod evaluate;
pub mod levers;
pub mod models;
pub mod statement;
pub mod units;
