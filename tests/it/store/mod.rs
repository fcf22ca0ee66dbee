//! The database and the use cases of pathways, with the real engine and the real library.

mod backup;
mod changes;
mod faults;
mod history;
mod identity;
mod listing;
mod records;
mod rules;
pub mod support;
mod writing;
