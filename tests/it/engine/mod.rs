//! The engine: documents with independent results, laws, published values, and what it refuses.

mod blend;
mod checks;
mod contract;
mod deductions;
mod defaults_table;
mod inventory;
mod land;
mod laws;
mod models;
mod own_rules;
mod published;
mod records;
mod refusals;
mod shapes;
mod sharing;
mod still;
mod strengths;
