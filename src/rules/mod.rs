//! What an organisation adds to the published rules: rule sets of its own, in versions that never change; settings of the
//! checks; and the basis that every evaluation for it rests on.

pub mod api;
mod basis;
mod own;
pub mod pages;
mod settings;
mod sql;

pub use basis::basis;
pub use own::{OwnVersion, RuleError, RuleSetVersion, add_version, unpinned, versions};
pub use settings::{InForce, put_settings, settings};

/// Every SQL text of rules.
pub(crate) fn statements() -> Vec<&'static str> {
    sql::STATEMENTS.to_vec()
}
