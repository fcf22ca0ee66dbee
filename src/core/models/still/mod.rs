//! The still: what it takes to bring a wash to strong and to dry ethanol. Pure physics and a calculator over it.
//!
//! A short-cut by equal molar overflow (McCabe and Thiele) with NRTL equilibrium, at feed and tangent pinch; the same by
//! enthalpies (Ponchon and Savarit), some 4 % higher, stands beside it and is never used. Honest band for a column of
//! one pressure: -5 to +15 %. The numbers of its checks are in `tests/cases/process/`.

mod antoine;
mod design;
mod duty;
mod equilibrium;
mod mixture;
mod nrtl;
mod pinch;
pub mod ranges;
mod root;
mod sieve;

pub use design::{Design, Request, design};
pub use duty::{Column, FeedHeat, Task, column};
pub use equilibrium::{Activity, Boiling, PRESSURE_KPA};
pub use mixture::{ETHANOL_G_PER_MOL, WATER_G_PER_MOL, g_per_mol, mole_fraction};
pub use pinch::{MinimumReflux, Pinch};
pub use sieve::{Drying, SieveRequest, dry};

/// What every page and answer with a result of these models says beside it.
pub const CAUTION: &str = "These figures serve greenhouse-gas accounting only. They are no basis for the design or the \
operation of a plant. Distilling ethanol and handling carbon dioxide are hazardous: fire, explosion, asphyxiation. \
Local codes and the judgement of licensed practitioners prevail.";

/// Latent heat of condensing steam at 3.5 bar absolute, MJ/kg (IAPWS-IF97).
pub const STEAM_MJ_PER_KG: f64 = 2.14765;
