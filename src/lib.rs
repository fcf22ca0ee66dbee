//! map

pub mod core;
