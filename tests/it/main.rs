//! The integration program: every test that looks at the crate from outside, in one binary so that it links once.
#![recursion_limit = "256"]
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    clippy::string_slice,
    reason = "a test fails by panicking"
)]

mod api;
mod audit_trail;
mod cli;
mod engine;
mod evidence;
mod exchange;
mod faults;
mod levers;
mod people;
mod statements;
mod store;
mod support;
mod tidy;
mod web;
