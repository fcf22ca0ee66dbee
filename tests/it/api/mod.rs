//! The API as programs meet it.

mod bad_documents;
mod batch;
mod compare;
mod description;
mod evaluate;
mod pathways;
mod published;
mod shell;
mod stages;
mod wire;
