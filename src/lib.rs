//! Wheelwort: well-to-wheel greenhouse-gas accounting of fuel ethanol.

pub mod app;
pub mod audit_trail;
pub mod calculators;
pub mod charts;
pub mod cli;
pub mod clock;
pub mod config;
pub mod core;
pub mod demo;
pub mod evidence;
pub mod exchange;
pub mod factors;
pub mod library;
pub mod pathways;
pub mod people;
pub mod rules;
pub mod store;
pub mod telemetry;
pub mod web;

/// Every SQL text of the program; a test prepares them all on a fresh database.
pub fn all_statements() -> Vec<&'static str> {
    [
        store::statements(),
        audit_trail::statements(),
        evidence::statements(),
        pathways::statements(),
        people::statements(),
        rules::statements(),
    ]
    .concat()
}
