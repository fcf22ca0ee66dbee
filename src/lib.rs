//! Wheelwort: well-to-wheel greenhouse-gas accounting of fuel ethanol.

pub mod charts;
pub mod core;
pub mod library;
pub mod pathways;
pub mod web;
