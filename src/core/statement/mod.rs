//! The statement: what it must hold, how it is built and sealed, and how whoever has the file checks it.

pub mod build;
pub mod checks;
pub mod energy;
pub mod figures;
pub mod items;
pub mod pick;
pub mod preflight;
mod present;
pub mod seal;
#[cfg(test)]
pub(crate) mod testing;
pub mod verify;
mod words;

pub use build::{Inputs, Refused, build};
pub use preflight::{Missing, Preflight, preflight};
pub use seal::{PublicKey, seal};
pub use verify::{Verdict, verify};
