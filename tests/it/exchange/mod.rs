//! Files for other programs.

#[cfg(feature = "pdf")]
mod pdf;
