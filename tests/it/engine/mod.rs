//! The engine: documents with independent results, laws, published values, and what it refuses.

mod blend;
mod contract;
mod deductions;
mod defaults_table;
mod land;
mod laws;
mod models;
mod published;
mod refusals;
mod shapes;
mod still;
mod strengths;
