//! The accounting: a pathway and the published book in, an assessment out.
//! `resolve` makes a plan of numbers; `demand`, shares and inventory are sums over it.

mod allocation;
pub mod assess;
pub mod blend;
pub mod carbon;
mod defaults;
pub mod demand;
mod graph;
mod inputs;
mod inventory;
mod linking;
pub mod materials;
mod measuring;
mod meters;
pub mod per_km;
mod resolve;
pub mod resolved;
mod saving;
mod substitution;
mod workings;

pub use assess::{Assessed, assess};
pub use inventory::{Totals, totals};
pub use resolve::resolve;
pub use resolved::Resolved;
