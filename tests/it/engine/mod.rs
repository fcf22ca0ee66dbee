//! The engine against documents with independent results.

mod contract;
