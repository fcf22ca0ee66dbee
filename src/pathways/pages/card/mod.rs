//! The recipe card of a stage: what fields it has, showing and reading them, and joining two people's changes.

pub mod build;
pub mod fields;
pub mod form;
pub mod merge;
pub mod search;
pub mod spec;

pub use build::Source;
pub use form::{Do, Form};
