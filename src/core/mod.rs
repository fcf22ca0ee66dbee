//! The pure core: documents in, assessments and findings out. No I/O, no clock, no SQL, no HTTP.

pub mod documents;
pub mod domain;
pub mod engine;
pub mod models;
pub mod units;
