//! The audit trail: a chain that shows every change made behind its back, and how it is read and taken along.

mod chain;
mod export;
mod reading;
