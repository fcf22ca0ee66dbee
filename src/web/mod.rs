//! What all pages have in common: the frame, the filters, tables as CSV.

pub mod csv;
pub mod filters;
pub mod frame;
