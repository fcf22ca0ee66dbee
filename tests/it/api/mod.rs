//! The API as programs meet it.

mod bad_documents;
mod batch;
mod blend;
mod calculators;
mod compare;
mod defaults;
mod description;
mod evaluate;
mod idempotency;
mod pathways;
mod published;
mod reasons;
mod rule_sets;
mod settings;
mod shell;
mod stages;
mod wire;
