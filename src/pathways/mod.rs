//! Pathways: their pages.

pub mod pages;
