//! The engine: documents with independent results, laws, published values, and what it refuses.

mod contract;
mod laws;
mod models;
mod published;
mod refusals;
mod shapes;
mod still;
mod strengths;
