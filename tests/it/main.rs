//! The integration program: every test that looks at the crate from outside, in one binary so that it links once.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    clippy::string_slice,
    reason = "a test fails by panicking"
)]

mod api;
mod cli;
mod engine;
mod evidence;
mod levers;
mod store;
mod support;
mod tidy;
mod web;
