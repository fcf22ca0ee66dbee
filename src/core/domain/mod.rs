//! The nouns of the trade: gases, factors, materials, rule sets, stage kinds and terms. Pure data with its source.

pub mod book;
pub mod citation;
pub mod factor;
pub mod gases;
pub mod material;
pub mod rule_set;
pub mod stage_kind;

pub use book::Book;
pub use citation::{Citation, Cited, Status};
pub use factor::{Counts, Edition, Factor, PathwayDefault, ProcessHeat};
pub use gases::{Gas, GasVector, GwpSet, PublishedGases};
pub use material::{CarbonClass, Material};
pub use rule_set::RuleSet;
pub use stage_kind::{StageKind, Term};
